//! A closed form over time as one line: `1 − 1.15·e^(−t/94 µs)·cos(2π·2.32 kHz·t − 0.52)`.

use std::f64::consts::TAU;

use num_rational::BigRational;

use crate::analysis::response::{Term, TimeFunction};
use crate::typeset::number::{self, Medium};

/// Significant digits of coefficients.
const DIGITS: u32 = 5;

/// The terms for t > 0; impulses at t = 0 are not among them.
pub fn closed_form(function: &TimeFunction, medium: Medium) -> String {
    let mut out = String::new();
    let minus = if medium == Medium::Ascii { "-" } else { "−" };
    for term in function.terms.iter().filter(|term| term.pole.im >= 0.0) {
        let Some((negative, text)) = written(term, medium) else { continue };
        match (out.is_empty(), negative) {
            (true, true) => out.push_str(minus),
            (true, false) => {}
            (false, true) => out.push_str(&format!(" {minus} ")),
            (false, false) => out.push_str(" + "),
        }
        out.push_str(&text);
    }
    if out.is_empty() { "0".to_owned() } else { out }
}

/// A term, or a pair of conjugate ones; and whether a minus stands before it.
fn written(term: &Term, medium: Medium) -> Option<(bool, String)> {
    let times = if medium == Medium::Ascii { "*" } else { "·" };
    let minus = if medium == Medium::Ascii { "-" } else { "−" };
    let quantity = |value: f64, unit: &str| {
        BigRational::from_float(value).map_or_else(
            || value.to_string(),
            |exact| number::quantity(&exact, unit, DIGITS, medium),
        )
    };
    let factorial = (1..term.power).map(f64::from).product::<f64>();
    let is_pair = term.pole.im > 0.0;
    let size = if is_pair { 2.0 * term.coefficient.norm() } else { term.coefficient.re.abs() };
    let size = size / factorial;
    if size == 0.0 {
        return None;
    }
    let mut factors = vec![quantity(size, "")];
    match term.power {
        1 => {}
        2 => factors.push("t".to_owned()),
        power => factors.push(format!("t^{}", power - 1)),
    }
    if term.pole.re != 0.0 {
        let sign = if term.pole.re < 0.0 { minus } else { "" };
        factors.push(format!("e^({sign}t/{})", quantity(1.0 / term.pole.re.abs(), "s")));
    }
    let mut negative = false;
    if is_pair {
        let angle = libm::atan2(term.coefficient.im, term.coefficient.re);
        let two_pi = if medium == Medium::Ascii { "2*pi*" } else { "2π·" };
        let sign = if angle < 0.0 { minus } else { "+" };
        let frequency = quantity(term.pole.im / TAU, "Hz");
        let size = quantity(angle.abs(), "");
        factors.push(format!("cos({two_pi}{frequency}{times}t {sign} {size})"));
    } else {
        negative = term.coefficient.re < 0.0;
    }
    if factors.len() > 1 && factors[0] == "1" {
        factors.remove(0);
    }
    Some((negative, factors.join(times)))
}

#[cfg(test)]
mod tests {
    use super::*;
    use num_complex::Complex;

    #[test]
    fn terms_are_written_as_by_hand() {
        let term = |re, im, power, a, b| Term {
            pole: Complex::new(re, im),
            power,
            coefficient: Complex::new(a, b),
        };
        let function = TimeFunction {
            terms: vec![
                term(0.0, 0.0, 1, 2.0, 0.0),
                term(-1000.0, 0.0, 1, -1.0, 0.0),
                term(-10.0, 0.0, 2, 3.0, 0.0),
                term(-4.0, TAU, 1, 0.5, 0.0),
                term(-4.0, -TAU, 1, 0.5, 0.0),
            ],
            ..TimeFunction::default()
        };
        assert_eq!(
            closed_form(&function, Medium::Unicode),
            "2 − e^(−t/1 ms) + 3·t·e^(−t/100 ms) + e^(−t/250 ms)·cos(2π·1 Hz·t + 0)"
        );
    }
}
