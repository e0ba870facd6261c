//! Formulas and sentences about roots that text, LaTeX and JSON share.

use num_bigint::{BigInt, Sign};

use crate::algebra::{Fraction, Polynomial};
use crate::analysis::roots::{
    Against, Approximation, Condition, Conditions, Form, Quantity, RootReport, Verdict,
};
use crate::typeset::Formula;
use crate::typeset::shape::{Lettering, signed};

/// What a band edge is measured against.
pub(super) fn against(against: Against) -> &'static str {
    match against {
        Against::Dc => "dc",
        Against::Infinity => "high frequencies",
        Against::Peak => "the largest value",
    }
}

/// Which of two band edges this is; nothing for the only one.
pub(super) fn which_edge(report: &RootReport, index: usize) -> &'static str {
    match (report.band_edges.len(), index) {
        (1, _) => "",
        (_, 0) => "lower ",
        _ => "upper ",
    }
}

/// A fraction in lowest terms as a formula.
pub(crate) fn fraction(value: &Fraction, letters: Lettering<'_>) -> Formula {
    if value.is_zero() {
        return Formula::integer(0);
    }
    let (above, below) = signed(value);
    Formula::quotient(letters.polynomial(&above), letters.polynomial(&below))
}

/// 1 + s·b + s²·c: the quadratic that has a pair as roots.
pub(super) fn quadratic([b, c]: &[Fraction; 2], letters: Lettering<'_>) -> Formula {
    let s = Formula::s();
    Formula::sum([
        Formula::integer(1),
        Formula::product([s.clone(), fraction(b, letters)]),
        Formula::product([Formula::power(s, 2), fraction(c, letters)]),
    ])
}

/// A formula that any program can read: the root, or the quadratic of a pair.
pub(super) fn expression(approximation: &Approximation, letters: Lettering<'_>) -> Formula {
    match &approximation.form {
        Form::Real(value) => fraction(value, letters),
        Form::Pair(pair) => quadratic(&pair.quadratic, letters),
    }
}

/// The root of a single term whose powers are all even and whose number is a square.
pub(crate) fn exact_root(polynomial: &Polynomial) -> Option<Polynomial> {
    let mut terms = polynomial.terms();
    let ((powers, coefficient), None) = (terms.next()?, terms.next()) else { return None };
    let number = square_root(&coefficient)?;
    let halves = powers.map(|(variable, power)| (power % 2 == 0).then_some((variable, power / 2)));
    Some(Polynomial::monomial(halves.collect::<Option<Vec<_>>>()?, number))
}

fn square_root(number: &BigInt) -> Option<BigInt> {
    if number.sign() == Sign::Minus {
        return None;
    }
    let root = number.sqrt();
    (&root * &root == *number).then_some(root)
}

/// The two sides of `large ≫ small`.
pub(crate) fn sides(condition: &Condition, letters: Lettering<'_>) -> [Formula; 2] {
    [letters.polynomial(&condition.large), letters.polynomial(&condition.small)]
}

/// A polynomial that must be positive, as its positive terms above its negative ones.
pub(crate) fn inequality(polynomial: &Polynomial, letters: Lettering<'_>) -> [Formula; 2] {
    let side = |positive: bool| {
        let terms = polynomial
            .terms()
            .filter(|(_, coefficient)| (coefficient.sign() == Sign::Plus) == positive)
            .map(|(powers, coefficient)| {
                let size = if positive { coefficient } else { -coefficient };
                (powers.collect::<Vec<_>>(), size)
            });
        letters.polynomial(&Polynomial::from_terms(terms))
    };
    [side(true), side(false)]
}

/// Where the poles lie, in words.
pub(crate) fn verdict(verdict: Verdict, poles: usize) -> &'static str {
    match verdict {
        Verdict::Stable if poles == 0 => "stable: no poles",
        Verdict::Stable => "stable: every pole is in the left half plane",
        Verdict::Marginal => "at the limit: simple poles on the imaginary axis, none to its right",
        Verdict::Unstable => {
            "not stable: poles in the right half plane, or multiple ones on the imaginary axis"
        }
    }
}

/// The word for programs.
pub(super) fn verdict_word(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::Stable => "stable",
        Verdict::Marginal => "marginal",
        Verdict::Unstable => "unstable",
    }
}

/// Conditions in words, where no formula is needed.
pub(crate) fn plain_conditions(conditions: &Conditions) -> Option<&'static str> {
    match conditions {
        Conditions::Always => Some("whatever the values, as long as they are positive"),
        Conditions::Never => Some("no positive values change that"),
        Conditions::AllPositive(_) => None,
    }
}

/// A quantity as it is called on the command line.
pub(super) fn quantity(quantity: Quantity) -> String {
    match quantity {
        Quantity::Pole(number) => format!("p{number}"),
        Quantity::Zero(number) => format!("z{number}"),
        Quantity::NaturalFrequency(number) => format!("w0 of p{number}"),
        Quantity::Quality(number) => format!("Q of p{number}"),
        Quantity::DcGain => "gain".to_owned(),
    }
}

/// The unit of a quantity; that of the gain is the function's.
pub(super) fn unit(quantity: Quantity, function: &str) -> String {
    match quantity {
        Quantity::Pole(_) | Quantity::Zero(_) | Quantity::NaturalFrequency(_) => "Hz".to_owned(),
        Quantity::Quality(_) => String::new(),
        Quantity::DcGain => function.to_owned(),
    }
}
