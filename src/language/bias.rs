//! Numbers that follow from others: of devices at a bias, and of coupled inductors.
//!
//! A bias fixes nominal values through the thermal voltage V_T = k·T/q, exactly, with k and q as the
//! SI defines them (9th brochure, 2019). A coupling factor fixes M = k·√(L1·L2): exactly
//! where that is rational, otherwise to thirty digits.

use super::build::{Builder, Draft, DraftLaw};
use super::definitions::{Definitions, Meaning};
use super::devices::{Formula, Kind, ShotRow};
use super::diagnostic::Diagnostic;
use super::expand::{Given, Terminals};
use super::quantity::power_of_ten;
use super::syntax::{Content, Name, Quantity};
use crate::circuit::{Circuit, Class, Number, Shot, SymbolRole, Unit, Value};
use num_bigint::BigInt;
use num_traits::{One, Pow, Signed, Zero};

/// Significant digits of a rounded root.
const DIGITS: usize = 30;

/// A number with more bits than this is of no use as a nominal value.
const MOST_BITS: u64 = 100_000;

/// A device at a bias, before the temperature and other numbers are known.
pub(crate) struct BiasDraft {
    pub(crate) owner: Name,
    pub(crate) kind: &'static Kind,
    /// By parameter.
    pub(crate) definitions: Vec<Option<usize>>,
    pub(crate) current: Quantity,
    /// The device's own numbers, as written.
    pub(crate) numbers: Vec<Given>,
    /// Shot noise and its nodes.
    pub(crate) shots: Vec<(&'static ShotRow, usize, usize)>,
}

/// A coupling whose number is still to be found or checked.
pub(crate) struct CouplingDraft {
    name: Name,
    /// The inductors.
    inductors: [Name; 2],
    definition: usize,
    /// None where the inductance itself is given.
    factor: Option<Number>,
}

/// Shot noise between two nodes of [`Nodes`](super::nodes::Nodes).
pub(crate) struct ShotDraft {
    name: String,
    plus: usize,
    minus: usize,
    current: Number,
}

impl Builder<'_> {
    /// `mutual M1: inductors L1 L2, …`; the inductors may stand later in the file.
    pub(crate) fn couple(&mut self, read: Terminals) {
        let Terminals { owner, inductors, given, .. } = read;
        let Ok([first, second]) = <[Name; 2]>::try_from(inductors) else { return };
        let (mut inductance, mut factor) = (None, None);
        for entry in given {
            if entry.word == "inductance" {
                inductance = entry.value;
                continue;
            }
            match entry.value {
                Some(Content::Quantity(quantity)) => {
                    self.check_unit(&quantity, Unit::ONE, "factor");
                    if quantity.value.abs() > Number::one() {
                        self.faults.push(
                            Diagnostic::error(
                                "coupling",
                                quantity.span,
                                "a coupling factor lies between -1 and 1",
                            )
                            .help("the factor is M/√(L1·L2)"),
                        );
                    }
                    factor = Some(quantity.value);
                }
                _ => self.faults.push(
                    Diagnostic::error("coupling", entry.name.span, "a coupling factor is a number")
                        .help("write `factor = 0.98`; the symbol is the coupling's own name"),
                ),
            }
        }
        let role = SymbolRole::Element(Class::Mutual);
        let definition = self.define(&owner, role, Unit::HENRY, inductance);
        self.couplings.push(CouplingDraft {
            name: owner.clone(),
            inductors: [first.clone(), second.clone()],
            definition,
            factor,
        });
        let law = DraftLaw::Mutual(first, second, definition);
        let class = Class::Mutual;
        self.push(Draft { name: owner, class, plus: 0, minus: 0, law, noiseless: false });
    }

    /// Finds the numbers that follow from others, once all definitions are settled.
    pub(crate) fn settle_numbers(&mut self) {
        for draft in std::mem::take(&mut self.biases) {
            self.settle_bias(draft);
        }
        for draft in std::mem::take(&mut self.couplings) {
            self.settle_coupling(&draft);
        }
    }

    fn settle_bias(&mut self, draft: BiasDraft) {
        let current = draft.current.value;
        let thermal = thermal_voltage(self.kelvin());
        let mut numbers: Vec<(&str, Number)> = Vec::new();
        for given in &draft.numbers {
            let value = match &given.value {
                Some(Content::Quantity(quantity)) => {
                    let unit = draft.kind.numbers.iter().find(|(word, _)| *word == given.word);
                    self.check_unit(
                        quantity,
                        unit.map_or(Unit::ONE, |(_, unit)| *unit),
                        given.word,
                    );
                    Some(quantity.value.clone())
                }
                Some(Content::Expression(expression)) => self
                    .definitions
                    .value(expression, &mut Vec::new())
                    .and_then(|settled| number(&self.definitions, &settled.value)),
                None => None,
            };
            match value.filter(Signed::is_positive) {
                Some(value) => numbers.push((given.word, value)),
                None => self.faults.push(
                    Diagnostic::error(
                        "bias",
                        given.name.span,
                        format!(
                            "`{}` of `{}` needs a number above 0",
                            given.word, draft.owner.text
                        ),
                    )
                    .help(format!("write it like `{} = 100`", given.word)),
                ),
            }
        }
        let known =
            |word: &str| numbers.iter().find(|(own, _)| *own == word).map(|(_, value)| value);
        for row in draft.kind.nominals {
            let id = draft.kind.parameter(row.parameter).and_then(|place| draft.definitions[place]);
            let factor =
                row.factor.map_or_else(|| Some(Number::one()), |word| known(word).cloned());
            let (Some(id), Some(factor)) = (id, factor) else { continue };
            // A value that was written wins.
            if let Meaning::Symbol { nominal: nominal @ None, .. } =
                &mut self.definitions.list[id].meaning
            {
                *nominal = Some(match row.formula {
                    Formula::CurrentOverThermal => factor * &current / &thermal,
                    Formula::ThermalOverCurrent => factor * &thermal / &current,
                    Formula::OverCurrent => factor / &current,
                });
            }
        }
        for (row, plus, minus) in draft.shots {
            let divisor = row.over.map_or_else(|| Some(Number::one()), |word| known(word).cloned());
            if let Some(divisor) = divisor {
                let name = format!("{}.{}", draft.owner.text, row.terminal);
                self.shots.push(ShotDraft { name, plus, minus, current: &current / divisor });
            }
        }
    }

    /// The shot noise of the circuit.
    pub(crate) fn list_shots(&mut self, circuit: &mut Circuit) {
        for shot in std::mem::take(&mut self.shots) {
            circuit.shots.push(Shot {
                name: shot.name,
                plus: self.nodes.id(shot.plus),
                minus: self.nodes.id(shot.minus),
                current: shot.current,
            });
        }
    }

    fn settle_coupling(&mut self, draft: &CouplingDraft) {
        let mut product = Number::one();
        for inductor in &draft.inductors {
            let settled = self.definitions.find(&inductor.text);
            let settled = settled.and_then(|id| self.definitions.settled(id));
            match settled.and_then(|settled| number(&self.definitions, &settled.value)) {
                Some(number) => product *= number,
                None if draft.factor.is_some() => {
                    self.faults.push(
                        Diagnostic::notice(
                            "no-number",
                            draft.name.span,
                            format!("`{}` gets no number from its factor", draft.name.text),
                        )
                        .help(format!("`{}` has none", inductor.text)),
                    );
                    return;
                }
                None => return,
            }
        }
        if product.is_negative() {
            return;
        }
        let Some(factor) = &draft.factor else {
            self.check_inductance(draft, &product);
            return;
        };
        let (found, exact) = root(&(factor * factor * product));
        let signed = if factor.is_negative() { -found } else { found };
        if !exact {
            self.faults.push(Diagnostic::notice(
                "rounded",
                draft.name.span,
                format!(
                    "the number of `{}` is irrational and rounded to {DIGITS} digits",
                    draft.name.text
                ),
            ));
        }
        if let Meaning::Symbol { nominal, .. } =
            &mut self.definitions.list[draft.definition].meaning
        {
            *nominal = Some(signed);
        }
    }

    /// Inductors cannot be coupled by more than √(L1·L2).
    fn check_inductance(&mut self, draft: &CouplingDraft, product: &Number) {
        let definition = &self.definitions.list[draft.definition];
        if let Meaning::Symbol { nominal: Some(nominal), .. } = &definition.meaning
            && &(nominal * nominal) > product
        {
            let [first, second] = &draft.inductors;
            self.faults.push(
                Diagnostic::error(
                    "coupling",
                    draft.name.span,
                    format!("the inductance of `{}` is too large", draft.name.text),
                )
                .help(format!("it is at most √({}·{})", first.text, second.text)),
            );
        }
    }
}

/// k·T/q: the Boltzmann constant 1.380649e-23 J/K over the elementary charge 1.602176634e-19 C.
fn thermal_voltage(kelvin: Number) -> Number {
    let boltzmann = power_of_ten(Number::from(BigInt::from(1_380_649)), -29);
    let charge = power_of_ten(Number::from(BigInt::from(1_602_176_634)), -28);
    kelvin * boltzmann / charge
}

/// The nominal value of a settled value; `None` where a symbol has none, at poles and where the
/// number would be huge.
fn number(definitions: &Definitions, value: &Value) -> Option<Number> {
    let found = match value {
        Value::Number(number) => number.clone(),
        Value::Symbol(id) => match &definitions.list.get(id.0 as usize)?.meaning {
            Meaning::Symbol { nominal, .. } => nominal.clone()?,
            Meaning::Expression(_) => return None,
        },
        Value::S => return None,
        Value::Sum(parts) => parts
            .iter()
            .try_fold(Number::zero(), |sum, part| Some(sum + number(definitions, part)?))?,
        Value::Product(parts) => parts.iter().try_fold(Number::one(), |product, part| {
            bounded(product * number(definitions, part)?)
        })?,
        Value::Negative(inner) => -number(definitions, inner)?,
        Value::Parallel(parts) => {
            let admittances = parts.iter().try_fold(Number::zero(), |sum, part| {
                bounded(sum + reciprocal(number(definitions, part)?)?)
            })?;
            reciprocal(admittances)?
        }
        Value::Power(base, exponent) => {
            let base = number(definitions, base)?;
            let bits = base.numer().bits().max(base.denom().bits());
            if bits.saturating_mul(u64::from(exponent.unsigned_abs())) > MOST_BITS {
                return None;
            }
            let power: Number = base.pow(exponent.unsigned_abs());
            if *exponent < 0 { reciprocal(power)? } else { power }
        }
    };
    bounded(found)
}

fn bounded(number: Number) -> Option<Number> {
    (number.numer().bits().max(number.denom().bits()) <= MOST_BITS).then_some(number)
}

fn reciprocal(number: Number) -> Option<Number> {
    (!number.is_zero()).then(|| number.recip())
}

/// The square root of a number that is not negative, and whether it is exact; otherwise it is
/// rounded to [`DIGITS`] significant digits.
fn root(square: &Number) -> (Number, bool) {
    let (numerator, denominator) = (square.numer(), square.denom());
    let (upper, lower) = (numerator.sqrt(), denominator.sqrt());
    if &(&upper * &upper) == numerator && &(&lower * &lower) == denominator {
        return (Number::new(upper, lower), true);
    }
    let digits = |number: &BigInt| number.to_string().len() as i64;
    // Even, so that the root is shifted by whole digits; the root has DIGITS and some more.
    let shift = 2 * (DIGITS as i64 + 2 - (digits(numerator) - digits(denominator)) / 2);
    let whole = power_of_ten(square.clone(), shift).to_integer().sqrt();
    let spare = digits(&whole) - DIGITS as i64;
    let unit: BigInt = BigInt::from(10).pow(spare.unsigned_abs());
    let rounded = (whole + &unit / 2) / &unit;
    (power_of_ten(Number::from(rounded), spare - shift / 2), false)
}

#[cfg(test)]
mod tests {
    use super::{number, power_of_ten, root, thermal_voltage};
    use crate::circuit::Number;
    use crate::language::definitions::Definitions;
    use num_bigint::BigInt;
    use pretty_assertions::assert_eq;

    fn integer(value: i64) -> Number {
        Number::from(BigInt::from(value))
    }

    #[test]
    fn roots_are_exact_or_thirty_digits_long() {
        assert_eq!(root(&(integer(4) / integer(9))), (integer(2) / integer(3), true));
        assert_eq!(root(&integer(0)), (integer(0), true));
        // √2 and √20, from memory.
        let digits: BigInt = "141421356237309504880168872421".parse().unwrap_or_default();
        let two = power_of_ten(Number::from(digits), -29);
        assert_eq!(root(&integer(2)), (two.clone(), false));
        assert_eq!(root(&power_of_ten(integer(2), 40)), (power_of_ten(two.clone(), 20), false));
        assert_eq!(root(&power_of_ten(integer(2), -40)), (power_of_ten(two, -20), false));
        let digits: BigInt = "447213595499957939281834733746".parse().unwrap_or_default();
        assert_eq!(root(&integer(20)), (power_of_ten(Number::from(digits), -29), false));
    }

    #[test]
    fn the_thermal_voltage_is_exact() {
        // 25.852 mV at 300 K (common practice).
        let volts = thermal_voltage(integer(300));
        assert_eq!(volts, integer(3 * 1_380_649 * 100) / (integer(1_602_176_634) * integer(10)));
        assert!(
            volts > power_of_ten(integer(25_851), -6) && volts < power_of_ten(integer(25_853), -6)
        );
    }

    #[test]
    fn huge_numbers_are_none() {
        use crate::circuit::Value;
        let huge =
            (0..4).fold(Value::Number(integer(3)), |base, _| Value::Power(Box::new(base), 1000));
        assert_eq!(number(&Definitions::default(), &huge), None);
        let pole = Value::Power(Box::new(Value::Number(integer(0))), -1);
        assert_eq!(number(&Definitions::default(), &pole), None);
    }
}
