//! A function as sections of the first and the second order, where its roots stand apart.

use num_traits::ToPrimitive;

use super::polish::Context;
use crate::algebra::{Fraction, Polynomial, Var};
use crate::typeset::Formula;

/// c₁²/(c₀·c₂) above which a quadratic falls into two sections: its roots are about that far apart.
const APART: f64 = 4.0;

/// The product of sections that stands for the fraction: the root between two coefficients is their
/// ratio, which is near the truth where roots stand apart. None where there is nothing to split.
pub(crate) fn split(fraction: &Fraction, context: Context<'_>) -> Option<Formula> {
    let above = fraction.numerator().coefficients(Var::S);
    let below = fraction.denominator().coefficients(Var::S);
    let lowest = |of: &[Polynomial]| of.iter().position(|c| !c.is_zero());
    let (n, d) = (lowest(&above)?, lowest(&below)?);
    if below.len() - d < 3 && above.len() - n < 3 {
        return None;
    }
    let gain = context.compact(&Fraction::new(&above[n], &below[d])?);
    let power = n as i32 - d as i32;
    let above = sections(&above[n..], context)?;
    let below = sections(&below[d..], context)?;
    let s = Formula::power(Formula::s(), power);
    let whole = Formula::quotient(Formula::product(above), Formula::product(below));
    Some(Formula::product([gain, s, whole]))
}

fn sections(of: &[Polynomial], context: Context<'_>) -> Option<Vec<Formula>> {
    let value = |of: &Polynomial| {
        of.evaluate(|variable| context.value(variable)).to_f64().unwrap_or(f64::NAN)
    };
    let ratio = |high: usize, low: usize| -> Option<Formula> {
        Some(context.compact(&Fraction::new(&of[high], &of[low])?))
    };
    let mut sections = Vec::new();
    let mut at = 0;
    while at + 1 < of.len() {
        let first = Formula::product([Formula::s(), ratio(at + 1, at)?]);
        let alone = at + 2 >= of.len()
            || value(&of[at + 1]).powi(2) > APART * (value(&of[at]) * value(&of[at + 2])).abs();
        if alone {
            sections.push(Formula::sum([Formula::integer(1), first]));
            at += 1;
        } else {
            let second = Formula::product([Formula::power(Formula::s(), 2), ratio(at + 2, at)?]);
            sections.push(Formula::sum([Formula::integer(1), first, second]));
            at += 2;
        }
    }
    Some(sections)
}
