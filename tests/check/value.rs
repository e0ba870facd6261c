//! What the tests do with formulas: printing, changing one part, values.

use cofactor::algebra::modular::Random;
use cofactor::circuit::{Circuit, Number, Value};
use num_traits::{One, Zero};

/// The formula in the language, with parentheses wherever there could be a doubt.
pub(crate) fn show(circuit: &Circuit, value: &Value) -> String {
    let list = |parts: &[Value], sign: &str| {
        let parts: Vec<String> = parts.iter().map(|part| show(circuit, part)).collect();
        format!("({})", parts.join(sign))
    };
    match value {
        Value::Number(number) if number.is_integer() && *number >= Number::zero() => {
            number.to_string()
        }
        Value::Number(number) => format!("({}/{})", number.numer(), number.denom()),
        Value::Symbol(symbol) if symbol.0 as usize >= circuit.symbols.len() => "pi".to_owned(),
        Value::Symbol(symbol) => circuit[*symbol].name.clone(),
        Value::S => "s".to_owned(),
        Value::Sum(parts) => list(parts, " + "),
        Value::Product(parts) => list(parts, "*"),
        Value::Parallel(parts) => list(parts, " || "),
        Value::Power(base, exponent) => format!("({}^{exponent})", show(circuit, base)),
        Value::Negative(inner) => format!("(-{})", show(circuit, inner)),
    }
}

/// All parts of a formula, the whole first, each with the way to it.
pub(crate) fn parts(value: &Value) -> Vec<(Vec<usize>, &Value)> {
    let mut found = vec![(Vec::new(), value)];
    for (place, operand) in operands(value).iter().enumerate() {
        for (mut path, part) in parts(operand) {
            path.insert(0, place);
            found.push((path, part));
        }
    }
    found
}

pub(crate) fn operands(value: &Value) -> &[Value] {
    match value {
        Value::Number(_) | Value::Symbol(_) | Value::S => &[],
        Value::Sum(parts) | Value::Product(parts) | Value::Parallel(parts) => parts,
        Value::Power(inner, _) | Value::Negative(inner) => std::slice::from_ref(inner),
    }
}

/// The formula with one part changed.
pub(crate) fn changed(value: &Value, path: &[usize], change: &dyn Fn(&Value) -> Value) -> Value {
    let Some((&place, rest)) = path.split_first() else { return change(value) };
    let list = |parts: &[Value]| {
        let mut parts = parts.to_vec();
        parts[place] = changed(&parts[place], rest, change);
        parts
    };
    let inside = |inner: &Value| Box::new(changed(inner, rest, change));
    match value {
        Value::Sum(parts) => Value::Sum(list(parts)),
        Value::Product(parts) => Value::Product(list(parts)),
        Value::Parallel(parts) => Value::Parallel(list(parts)),
        Value::Power(inner, exponent) => Value::Power(inside(inner), *exponent),
        Value::Negative(inner) => Value::Negative(inside(inner)),
        Value::Number(_) | Value::Symbol(_) | Value::S => value.clone(),
    }
}

pub(crate) fn integer(number: i64) -> Value {
    Value::Number(Number::from_integer(number.into()))
}

pub(crate) fn inverse(value: Value) -> Value {
    Value::Power(Box::new(value), -1)
}

/// Draws numbers below a bound, and members of lists.
pub(crate) struct Draw(Random);

impl Draw {
    pub(crate) fn new(seed: u64) -> Self {
        Self(Random::new(seed))
    }

    pub(crate) fn below(&mut self, bound: usize) -> usize {
        (self.0.word() % bound as u64) as usize
    }

    pub(crate) fn of<'a, T>(&mut self, list: &'a [T]) -> &'a T {
        &list[self.below(list.len())]
    }
}

/// The value with these numbers, worked out here and not by the library; none where something
/// divides by 0.
pub(crate) fn evaluate(value: &Value, symbols: &[Number], s: &Number) -> Option<Number> {
    let all = |parts: &[Value]| -> Option<Vec<Number>> {
        parts.iter().map(|part| evaluate(part, symbols, s)).collect()
    };
    let recip = |number: Number| (!number.is_zero()).then(|| number.recip());
    Some(match value {
        Value::Number(number) => number.clone(),
        Value::Symbol(symbol) => symbols[symbol.0 as usize].clone(),
        Value::S => s.clone(),
        Value::Sum(parts) => all(parts)?.into_iter().fold(Number::zero(), |a, b| a + b),
        Value::Product(parts) => all(parts)?.into_iter().fold(Number::one(), |a, b| a * b),
        Value::Negative(inner) => -evaluate(inner, symbols, s)?,
        Value::Power(base, exponent) => {
            let power = evaluate(base, symbols, s)?.pow(exponent.abs());
            if *exponent < 0 { recip(power)? } else { power }
        }
        Value::Parallel(parts) => {
            let mut sum = Number::zero();
            for part in all(parts)? {
                sum += recip(part)?;
            }
            recip(sum)?
        }
    })
}
