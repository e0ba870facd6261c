//! Random trees for the tests of the printers, made by the constructors.

use num_rational::BigRational;
use proptest::prelude::*;

use super::Formula;

/// Trees of a few dozen nodes over five symbols, one definition, `s`, `f`, π and numbers.
pub(crate) fn tree() -> impl Strategy<Value = Formula> {
    let mut level = leaf().boxed();
    for _ in 0..3 {
        level = prop_oneof![1 => leaf(), 4 => operation(level)].boxed();
    }
    operation(level)
}

fn leaf() -> impl Strategy<Value = Formula> {
    let number =
        |(above, below): (i64, i64)| Formula::number(BigRational::new(above.into(), below.into()));
    prop_oneof![
        6 => (0_u32..5).prop_map(Formula::symbol),
        2 => Just(Formula::s()),
        1 => Just(Formula::pi()),
        1 => Just(Formula::frequency()),
        1 => Just(Formula::definition(0)),
        1 => (-3_i64..20, 1_i64..30).prop_map(number),
        1 => (1_i64..9, 1_u32..18).prop_map(move |(digit, places)| number((digit, 10_i64.pow(places)))),
    ]
}

fn operation(operand: BoxedStrategy<Formula>) -> impl Strategy<Value = Formula> {
    let several = proptest::collection::vec(operand.clone(), 2..5);
    prop_oneof![
        several.clone().prop_map(Formula::sum),
        several.clone().prop_map(Formula::product),
        several.prop_map(Formula::parallel),
        (operand.clone(), operand.clone()).prop_map(|(a, b)| Formula::quotient(a, b)),
        (operand.clone(), -3_i32..5).prop_map(|(base, exponent)| Formula::power(base, exponent)),
        operand.prop_map(Formula::negative),
    ]
}
