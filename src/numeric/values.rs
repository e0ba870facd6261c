//! Numbers for the symbols, and values of elements at them.
//!
//! An [`Assignment`] gives every symbol an exact rational: the nominal values where the circuit
//! has them all, small seeded random ones otherwise. The generator is SplitMix64 (Steele, Lea &
//! Flood 2014), so that every run and every machine sees the same numbers.

use std::collections::BTreeSet;

use num_bigint::BigInt;
use num_traits::ToPrimitive;

use super::{Field, NumericError};
use crate::circuit::{Circuit, Number, SymbolId, SymbolRole, Transfer, Value};

/// The value at the given numbers; symbols are indexed by [`SymbolId`]. `None` where it divides
/// by zero or names a symbol that has no number.
pub fn evaluate<F: Field>(
    field: &F,
    value: &Value,
    symbols: &[F::Element],
    s: &F::Element,
) -> Option<F::Element> {
    let each = |value: &Value| evaluate(field, value, symbols, s);
    match value {
        Value::Number(number) => field.number(number),
        Value::Symbol(id) => symbols.get(id.0 as usize).cloned(),
        Value::S => Some(s.clone()),
        Value::Sum(parts) => {
            parts.iter().try_fold(field.zero(), |sum, part| Some(field.add(&sum, &each(part)?)))
        }
        Value::Product(parts) => parts
            .iter()
            .try_fold(field.one(), |product, part| Some(field.multiply(&product, &each(part)?))),
        Value::Power(base, exponent) => field.power(&each(base)?, *exponent),
        Value::Negative(inner) => Some(field.negative(&each(inner)?)),
        Value::Parallel(parts) => {
            // a ∥ 0 is 0, by a·b/(a + b).
            let parts = parts.iter().map(each).collect::<Option<Vec<_>>>()?;
            let zeros = parts.iter().filter(|part| field.is_zero(part)).count();
            match zeros {
                0 => parts
                    .iter()
                    .try_fold(field.zero(), |sum, part| {
                        Some(field.add(&sum, &field.inverse(part)?))
                    })
                    .and_then(|sum| field.inverse(&sum)),
                1 => Some(field.zero()),
                _ => None,
            }
        }
    }
}

/// Where the numbers of an [`Assignment`] come from.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Origin {
    /// The nominal values of the circuit.
    Nominal,
    /// A seeded generator.
    Random,
}

/// A number for every symbol of a circuit, indexed by [`SymbolId`].
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Assignment {
    /// The exact numbers.
    pub numbers: Vec<Number>,
    /// Where they come from.
    pub origin: Origin,
}

impl Assignment {
    /// Nominal values when every symbol that the transfer's elements use has one; symbols that
    /// are not used and have none get 1. Random values otherwise.
    pub fn for_transfer(circuit: &Circuit, transfer: &Transfer, seed: u64) -> Self {
        let used = used_symbols(circuit, transfer);
        let given = |index: usize| -> Option<Number> {
            let symbol = circuit.symbols.get(index)?;
            if symbol.role == SymbolRole::Pi { Some(pi()) } else { symbol.nominal.clone() }
        };
        if used.iter().all(|id| given(id.0 as usize).is_some()) {
            let one = Number::from_integer(BigInt::from(1));
            let numbers = (0..circuit.symbols.len())
                .map(|index| given(index).unwrap_or_else(|| one.clone()))
                .collect();
            return Self { numbers, origin: Origin::Nominal };
        }
        Self::random(circuit, seed)
    }

    /// Distinct random numbers k/16 (a finer step for many symbols) from 1/2 up to 4; π is π.
    pub fn random(circuit: &Circuit, seed: u64) -> Self {
        let mut generator = Generator::new(seed);
        // At least four times as many numbers as symbols, so that distinct ones are found at once.
        let mut step = 16u64;
        while step * 7 / 2 < 4 * circuit.symbols.len() as u64 {
            step *= 2;
        }
        let mut taken = BTreeSet::new();
        let numbers = circuit
            .symbols
            .iter()
            .map(|symbol| {
                if symbol.role == SymbolRole::Pi {
                    return pi();
                }
                loop {
                    let numerator = step / 2 + generator.below(step * 7 / 2 + 1);
                    if taken.insert(numerator) {
                        return Number::new(numerator.into(), step.into());
                    }
                }
            })
            .collect();
        Self { numbers, origin: Origin::Random }
    }

    /// The numbers rounded to double precision.
    pub fn floats(&self) -> Vec<f64> {
        self.numbers.iter().map(|number| number.to_f64().unwrap_or(f64::NAN)).collect()
    }
}

/// π to 50 significant digits, a rational that stands for it in exact witnesses.
pub(crate) fn pi() -> Number {
    // 3.1415926535897932384626433832795028841971693993751 (published in every table of constants)
    let digits = b"31415926535897932384626433832795028841971693993751";
    let numerator = BigInt::parse_bytes(digits, 10).unwrap_or_default();
    Number::new(numerator, BigInt::from(10).pow(49))
}

/// The symbols in the values of the elements that take part in the transfer.
pub fn used_symbols(circuit: &Circuit, transfer: &Transfer) -> BTreeSet<SymbolId> {
    let mut used = BTreeSet::new();
    for (index, element) in circuit.elements.iter().enumerate() {
        if transfer.removed.iter().any(|id| id.0 as usize == index) {
            continue;
        }
        for value in element.law.values() {
            value.for_each_symbol(&mut |symbol| {
                used.insert(symbol);
            });
        }
    }
    used
}

/// Numbers of the circuit in another field; the error names no element, as none is at fault.
pub(crate) fn images<F: Field>(
    field: &F,
    numbers: &[Number],
) -> Result<Vec<F::Element>, NumericError> {
    numbers
        .iter()
        .map(|number| field.number(number))
        .collect::<Option<_>>()
        .ok_or(NumericError::Malformed("a symbol's number cannot be represented"))
}

/// SplitMix64.
#[derive(Clone, Debug)]
pub(crate) struct Generator(u64);

impl Generator {
    pub(crate) fn new(seed: u64) -> Self {
        Self(seed)
    }

    pub(crate) fn next(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9e37_79b9_7f4a_7c15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xbf58_476d_1ce4_e5b9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94d0_49bb_1331_11eb);
        z ^ (z >> 31)
    }

    /// A number below `bound`, which is above 0; the bias of the remainder does not matter here.
    pub(crate) fn below(&mut self, bound: u64) -> u64 {
        self.next() % bound.max(1)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numeric::Rationals;
    use crate::numeric::testing::{Builder, constant, number};

    fn symbol(index: u32) -> Value {
        Value::Symbol(SymbolId(index))
    }

    #[test]
    fn values_at_numbers() {
        // s = 2, a = 3, b = 6, zero = 0
        let numbers = [number(3, 1), number(6, 1), number(0, 1)];
        let check = |value: Value, expected: Option<Number>| {
            let found = evaluate(&Rationals, &value, &numbers, &number(2, 1));
            assert_eq!(found, expected, "{value:?}");
        };
        let (a, b, zero) = (symbol(0), symbol(1), symbol(2));
        check(Value::S, Some(number(2, 1)));
        check(Value::Sum(vec![a.clone(), b.clone(), constant(1)]), Some(number(10, 1)));
        check(Value::Product(vec![Value::S, a.clone()]), Some(number(6, 1)));
        check(Value::Negative(Box::new(a.clone())), Some(number(-3, 1)));
        check(Value::Power(Box::new(a.clone()), -2), Some(number(1, 9)));
        check(Value::Power(Box::new(zero.clone()), -1), None);
        check(Value::Parallel(vec![a.clone(), b.clone()]), Some(number(2, 1)));
        check(Value::Parallel(vec![a.clone(), zero.clone(), b]), Some(number(0, 1)));
        check(Value::Parallel(vec![zero.clone(), zero]), None);
        check(Value::Parallel(vec![a.clone(), Value::Negative(Box::new(a))]), None);
        check(symbol(9), None);
    }

    #[test]
    fn nominal_values_only_when_all_that_are_used_have_one() {
        let mut b = Builder::new();
        let source = b.voltage("Vin", "in", "0");
        b.passive("R1", "in", "0", number(5, 1));
        b.symbol("unused", None);
        let gain = b.gain(source, "in");
        let assignment = Assignment::for_transfer(&b.circuit, &gain, 1);
        assert_eq!(assignment.origin, Origin::Nominal);
        assert_eq!(assignment.numbers, [number(5, 1), number(1, 1)]);
        b.circuit.symbols[0].nominal = None;
        let assignment = Assignment::for_transfer(&b.circuit, &gain, 1);
        assert_eq!(assignment.origin, Origin::Random);
    }

    #[test]
    fn pi_is_pi() {
        let error = pi().to_f64().map(|value| value - std::f64::consts::PI);
        assert_eq!(error, Some(0.0));
    }
}
