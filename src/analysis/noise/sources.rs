//! Which elements are noisy, how much, and how they reach the voltage.

use super::super::limits::{self, fraction_limit};
use super::super::posed::{Posed, TestBench};
use super::super::{AnalysisError, ClosedForm, Derivation, Options};
use crate::algebra::{Fraction, Polynomial, Var};
use crate::circuit::{
    Circuit, Class, Drive, Element, ElementId, GROUND, Law, NodeId, Number, Probe, Quantity,
    Symbol, SymbolId, SymbolRole, Transfer, Unit, Value,
};
use crate::elimination::{fraction_of, variable_of};
use crate::numeric::exact_pi;

/// A noisy element: its share of the density is weight·|transfer|².
#[derive(Clone, Debug)]
pub(crate) struct Source {
    pub(crate) name: String,
    /// Of the current beside it in A²/Hz, or of the voltage in series with it in V²/Hz.
    pub(crate) weight: Fraction,
    /// From that current or voltage to the voltage that is asked for.
    pub(crate) question: Transfer,
    pub(crate) circuit: Circuit,
    pub(crate) derivation: Derivation,
}

impl Source {
    /// The transfer as one fraction; none where it is too long to expand.
    pub(crate) fn transfer(&self) -> Option<&Fraction> {
        match &self.derivation.form {
            ClosedForm::Expanded(fraction) => Some(fraction),
            ClosedForm::Nested(_) => None,
        }
    }
}

/// The constants of nature as symbols behind the circuit's own.
#[derive(Clone, Debug)]
pub(crate) struct Constants {
    /// The circuit's symbols and the constants.
    pub(crate) symbols: Vec<Symbol>,
    pi: Var,
    boltzmann: Var,
    temperature: Var,
    charge: Var,
}

impl Constants {
    pub(crate) fn new(circuit: &Circuit) -> Self {
        let mut symbols = circuit.symbols.clone();
        let mut constant = |name: &str, role: SymbolRole, unit: Unit, value: Number| {
            let pi = |symbol: &Symbol| symbol.role == SymbolRole::Pi && role == SymbolRole::Pi;
            let index = symbols.iter().position(pi).unwrap_or_else(|| {
                let mut name = name.to_owned();
                while symbols.iter().any(|symbol| symbol.name == name) {
                    name.push('_');
                }
                let nominal = Some(value);
                symbols.push(Symbol { name, role, unit, nominal, tolerance: None });
                symbols.len() - 1
            });
            variable_of(SymbolId(index as u32))
        };
        let joule = Unit::VOLT.times(Unit::AMPERE).times(Unit::SECOND);
        let kelvin = Unit { kelvin: 1, ..Unit::ONE };
        let temperature = circuit.temperature.clone();
        let temperature = temperature.unwrap_or_else(|| Number::from_integer(300.into()));
        let parameter = SymbolRole::Parameter;
        let pi = constant("pi", SymbolRole::Pi, Unit::ONE, exact_pi());
        // Exact by the definition of the SI units (2019).
        let boltzmann = constant("k_B", parameter, joule.over(kelvin), decimal(1_380_649, 29));
        let temperature = constant("T_0", parameter, kelvin, temperature);
        let coulomb = Unit::AMPERE.times(Unit::SECOND);
        let charge = match circuit.shots.is_empty() {
            true => boltzmann,
            false => constant("q_e", parameter, coulomb, decimal(1_602_176_634, 28)),
        };
        Self { symbols, pi, boltzmann, temperature, charge }
    }

    /// Values of all symbols, from those of the circuit's.
    pub(crate) fn values(&self, numbers: &[Number]) -> Vec<Number> {
        let mut values = numbers.to_vec();
        for symbol in &self.symbols[numbers.len().min(self.symbols.len())..] {
            values.push(symbol.nominal.clone().unwrap_or_default());
        }
        values
    }

    /// |p(j2πf)|² as a polynomial in f.
    pub(crate) fn square(&self, polynomial: &Polynomial) -> Polynomial {
        let (mut real, mut imaginary) = (Vec::new(), Vec::new());
        for (part, power) in polynomial.coefficients(Var::S).into_iter().zip(0_u32..) {
            let scale = num_bigint::BigInt::from(2).pow(power);
            let factor = Polynomial::monomial([(self.pi, power), (Var::S, power)], scale);
            let term = &part * &factor;
            let term = if power % 4 >= 2 { -&term } else { term };
            if power % 2 == 0 { real.push(term) } else { imaginary.push(term) }
        }
        &Polynomial::sum(real).squared() + &Polynomial::sum(imaginary).squared()
    }

    /// The share of one source.
    pub(crate) fn density(&self, source: &Source) -> Fraction {
        let Some(transfer) = source.transfer() else { return Fraction::zero() };
        let squares =
            Fraction::new(&self.square(transfer.numerator()), &self.square(transfer.denominator()));
        &source.weight * &squares.unwrap_or_else(Fraction::zero)
    }

    /// 4·k_B·T_0
    fn thermal(&self) -> Fraction {
        Polynomial::monomial([(self.boltzmann, 1), (self.temperature, 1)], 4).into()
    }

    /// 2·q_e·I
    fn shot(&self, current: &Number) -> Fraction {
        let size = if current < &Number::default() { -current } else { current.clone() };
        let twice = Fraction::ratio(size.numer() * 2, size.denom().clone());
        let charge = Fraction::from(Polynomial::variable(self.charge));
        &twice.unwrap_or_else(Fraction::zero) * &charge
    }
}

/// digits·10^−places
fn decimal(digits: i64, places: u32) -> Number {
    Number::new(digits.into(), num_bigint::BigInt::from(10).pow(places))
}

/// Every noisy element and its transfer.
pub(crate) fn find(
    circuit: &Circuit,
    constants: &Constants,
    voltage: (NodeId, NodeId),
    options: &Options,
) -> Result<Vec<Source>, AnalysisError> {
    let mut sources = Vec::new();
    for (element, id) in circuit.elements.iter().zip((0_u32..).map(ElementId)) {
        if !circuit.is_noisy(id) {
            continue;
        }
        let Some(resistance) = noisy_resistance(element) else { continue };
        let Some(conductance) = resistance.recip() else { continue };
        let current = &constants.thermal() * &conductance;
        let source = match limited(circuit, &current) {
            Some(weight) => {
                let ends = (element.plus, element.minus);
                source(&element.name, weight, beside(circuit, ends, voltage), options)?
            }
            None => {
                // The resistance goes to 0: its voltage has a limit, its current has none.
                let weight = &constants.thermal() * &resistance;
                let weight = limited(circuit, &weight).ok_or_else(|| infinite(circuit))?;
                let posed = in_series(circuit, element, voltage);
                source(&element.name, weight, posed, options)?
            }
        };
        sources.push(source);
    }
    for shot in &circuit.shots {
        let posed = beside(circuit, (shot.plus, shot.minus), voltage);
        sources.push(source(&shot.name, constants.shot(&shot.current), posed, options)?);
    }
    Ok(sources)
}

fn source(
    name: &str,
    weight: Fraction,
    posed: Posed<'_>,
    options: &Options,
) -> Result<Source, AnalysisError> {
    let derivation = posed.derive(options)?;
    Ok(Source {
        name: name.to_owned(),
        weight,
        question: posed.transfer,
        circuit: posed.circuit.into_owned(),
        derivation,
    })
}

/// The resistance of an element that makes thermal noise.
fn noisy_resistance(element: &Element) -> Option<Fraction> {
    if element.plus == element.minus {
        return None;
    }
    let resistance = match (element.class, &element.law) {
        (Class::Resistor, Law::Impedance(value)) => fraction_of(value).ok()?,
        (Class::Conductance, Law::Admittance(value)) => fraction_of(value).ok()?.recip()?,
        _ => return None,
    };
    let is_real =
        !resistance.numerator().contains(Var::S) && !resistance.denominator().contains(Var::S);
    is_real.then_some(resistance)
}

fn limited(circuit: &Circuit, fraction: &Fraction) -> Option<Fraction> {
    circuit.limits.iter().try_fold(fraction.clone(), |fraction, limit| {
        fraction_limit(&fraction, limit.symbol.map_or(Var::S, variable_of), limit.to)
    })
}

fn infinite(circuit: &Circuit) -> AnalysisError {
    let texts: Vec<String> =
        circuit.limits.iter().map(|limit| limits::limit_text(circuit, limit)).collect();
    AnalysisError::InfiniteLimit { limit: texts.join(", ") }
}

/// A current beside the element, from its second node to its first.
fn beside(circuit: &Circuit, ends: (NodeId, NodeId), voltage: (NodeId, NodeId)) -> Posed<'_> {
    Posed::new(
        circuit,
        Transfer {
            drive: Drive::Port(ends.0, ends.1),
            numerator: Probe::Voltage(voltage.0, voltage.1),
            denominator: Probe::Drive,
            removed: Vec::new(),
            unit: Unit::OHM,
        },
    )
}

/// A voltage in series with the element: the same as its current beside it, divided by its value.
fn in_series<'c>(circuit: &Circuit, element: &Element, voltage: (NodeId, NodeId)) -> Posed<'c> {
    let mut bench = TestBench::new(circuit);
    let gain = match &element.law {
        Law::Admittance(value) => value.clone(),
        Law::Impedance(value) => Value::Power(Box::new(value.clone()), -1),
        _ => Value::Number(Number::default()),
    };
    let scaled = bench.sum(vec![(gain, Quantity::Voltage(voltage.0, voltage.1))]);
    bench.pose(Transfer {
        drive: Drive::Port(element.plus, element.minus),
        numerator: Probe::Voltage(scaled, GROUND),
        denominator: Probe::Drive,
        removed: Vec::new(),
        unit: Unit::ONE,
    })
}
