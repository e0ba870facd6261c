//! Values of elements as formulas, and nominal quantities as text.

use crate::circuit::{
    Circuit, Class, Control, Element, Law, Quantity, Symbol, SymbolId, Unit, Value,
};
use crate::typeset::number::{self, Medium};
use crate::typeset::{Dialect, Formula, SymbolTable, plain};

/// Significant digits of nominal values; they are exact in the file and this is for reading.
const DIGITS: u32 = 6;

/// The value as written: sums, products with their denominators, parallel connections.
fn formula(value: &Value) -> Formula {
    match value {
        Value::Number(number) => Formula::number(number.clone()),
        Value::Symbol(symbol) => Formula::symbol(symbol.0),
        Value::S => Formula::s(),
        Value::Sum(terms) => Formula::sum(terms.iter().map(formula)),
        Value::Negative(inner) => formula(inner).negative(),
        Value::Parallel(parts) => Formula::parallel(parts.iter().map(formula)),
        Value::Power(base, exponent) if *exponent < 0 => Formula::quotient(
            Formula::integer(1),
            Formula::power(formula(base), exponent.saturating_neg()),
        ),
        Value::Power(base, exponent) => Formula::power(formula(base), *exponent),
        Value::Product(factors) => {
            let (mut above, mut below) = (Vec::new(), Vec::new());
            for factor in factors {
                match factor {
                    Value::Power(base, exponent) if *exponent < 0 => {
                        below.push(Formula::power(formula(base), exponent.saturating_neg()));
                    }
                    _ => above.push(formula(factor)),
                }
            }
            if below.is_empty() {
                Formula::product(above)
            } else {
                Formula::quotient(Formula::product(above), Formula::product(below))
            }
        }
    }
}

/// Names and notation of a circuit's values.
#[derive(Debug)]
pub struct Values<'a> {
    circuit: &'a Circuit,
    names: SymbolTable,
}

impl<'a> Values<'a> {
    /// The names of that circuit.
    pub fn new(circuit: &'a Circuit) -> Self {
        let names = SymbolTable::new(circuit.symbols.iter().map(|symbol| symbol.name.as_str()));
        Self { circuit, names }
    }

    /// A value in the words of the language.
    pub fn text(&self, value: &Value) -> String {
        plain::text(&formula(value), &self.names, Dialect::Language)
    }

    /// The element's own value: without the `s` of an inductor or a capacitor. `None` for an
    /// element without one, and for one that is a symbol by its own name.
    pub fn own(&self, element: &Element) -> Option<String> {
        let written = match &element.law {
            Law::Impedance(value) | Law::Admittance(value) => value,
            Law::Transformer { ratio: value, .. }
            | Law::Gyrator { conductance: value, .. }
            | Law::Mutual { inductance: value, .. } => value,
            Law::ControlledVoltage(controls) | Law::ControlledCurrent(controls) => {
                return (!controls.is_empty()).then(|| self.controls(controls));
            }
            Law::VoltageSource | Law::CurrentSource | Law::Nullor(..) => return None,
        };
        let reactive = matches!(element.class, Class::Capacitor | Class::Inductor);
        let value = if reactive { without_s(written) } else { written.clone() };
        match value {
            Value::Symbol(symbol) if self.circuit[symbol].name == element.name => None,
            value => Some(self.text(&value)),
        }
    }

    /// The symbol that an element is by its own name.
    pub fn symbol(&self, element: &Element) -> Option<&'a Symbol> {
        self.circuit.symbol(&element.name).map(|id: SymbolId| &self.circuit[id])
    }

    /// A factor: the nominal value where it is one symbol that has one, else as written.
    pub fn gain(&self, value: &Value, medium: Medium) -> String {
        let known = match value {
            Value::Symbol(symbol) => nominal(&self.circuit[*symbol], medium),
            _ => None,
        };
        known.unwrap_or_else(|| self.text(value))
    }

    /// `gm*V(b, e) + beta*I(R1)`
    pub fn controls(&self, controls: &[Control]) -> String {
        let terms: Vec<String> = controls.iter().map(|control| self.control(control)).collect();
        terms.join(" + ").replace("+ -", "- ")
    }

    fn control(&self, control: &Control) -> String {
        let quantity = self.quantity(control.quantity);
        match &control.gain {
            Value::Number(number) if num_traits::One::is_one(number) => quantity,
            gain => {
                let text = self.text(gain);
                let is_sum = matches!(gain, Value::Sum(_) | Value::Parallel(_));
                if is_sum { format!("({text})*{quantity}") } else { format!("{text}*{quantity}") }
            }
        }
    }

    /// `V(b, e)`, `I(R1)`.
    pub fn quantity(&self, quantity: Quantity) -> String {
        let name = |node: crate::circuit::NodeId| self.circuit[node].name.as_str();
        match quantity {
            Quantity::Voltage(plus, minus) if minus == crate::circuit::GROUND => {
                format!("V({})", name(plus))
            }
            Quantity::Voltage(plus, minus) => format!("V({}, {})", name(plus), name(minus)),
            Quantity::Current(element) => format!("I({})", self.circuit[element].name),
        }
    }
}

/// `s*C` as `C`.
fn without_s(value: &Value) -> Value {
    let Value::Product(factors) = value else { return value.clone() };
    let Some(at) = factors.iter().position(|factor| *factor == Value::S) else {
        return value.clone();
    };
    let mut rest = factors.clone();
    rest.remove(at);
    match rest.len() {
        1 => rest.remove(0),
        _ => Value::Product(rest),
    }
}

/// The nominal value with its unit: `10 kΩ`.
pub fn nominal(symbol: &Symbol, medium: Medium) -> Option<String> {
    let unit = if symbol.unit == Unit::ONE { String::new() } else { symbol.unit.to_string() };
    symbol.nominal.as_ref().map(|value| number::quantity(value, &unit, DIGITS, medium))
}
