//! Planted factors are found, whatever the order of the operands, and two methods agree.

use num_bigint::BigInt;
use proptest::prelude::*;

use super::super::polynomial::tests::nonzero;
use super::*;

/// A product of sums like those of network determinants: linear in all variables but the first.
fn linear_factor(variables: u32) -> BoxedStrategy<Polynomial> {
    let term = (0_u32..3, prop::collection::vec(0_u32..2, variables as usize), -3_i64..4);
    prop::collection::vec(term, 1..6)
        .prop_map(|terms| {
            Polynomial::from_terms(terms.into_iter().map(|(power, exponents, coefficient)| {
                let others = (1_u32..).map(Var).zip(exponents);
                (std::iter::once((Var::S, power)).chain(others), BigInt::from(coefficient))
            }))
        })
        .prop_map(|value| if value.is_zero() { Polynomial::one() } else { value })
        .boxed()
}

fn check(a: &Polynomial, b: &Polynomial, planted: &Polynomial) {
    let (common, left, right) = gcd_cofactors(a, b);
    common.assert_canonical();
    assert!(!common.is_negative());
    assert_eq!(common, gcd(b, a), "the order of operands matters: {a} and {b}");
    assert!(common.divide_exact(planted).is_some(), "{planted} is missing in {common}");
    assert_eq!((&(&common * &left), &(&common * &right)), (a, b));
    assert!(gcd(&left, &right).is_one(), "cofactors of {a} and {b} are not coprime");
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(96))]

    #[test]
    fn planted_factors(
        a in nonzero(3, 2, 5), b in nonzero(3, 2, 5), c in nonzero(3, 2, 5),
    ) {
        check(&(&a * &c), &(&b * &c), &c);
    }

    #[test]
    fn planted_linear_factors(
        a in linear_factor(6), b in linear_factor(6), c in linear_factor(6), d in linear_factor(3),
    ) {
        check(&(&(&a * &c) * &d), &(&(&b * &c) * &d), &(&c * &d));
    }

    #[test]
    fn methods_agree(
        a in nonzero(3, 2, 4), b in nonzero(3, 2, 4), c in nonzero(3, 2, 4),
    ) {
        let (a, b) = (&a * &c, &b * &c);
        prop_assert_eq!(gcd(&a, &b), subresultant_gcd(&a, &b));
    }

    #[test]
    fn homogeneous_operands(a in linear_factor(2), b in linear_factor(2), c in linear_factor(2)) {
        // Replacing s by s·T and x1 by x1·U makes both operands homogeneous in each pair.
        let graded = |value: &Polynomial| {
            let (degree, linear) = (value.degree(Var(0)), value.degree(Var(1)));
            Polynomial::from_terms(value.terms().map(|(powers, coefficient)| {
                let powers: Vec<(Var, u32)> = powers.collect();
                let power = |var| powers.iter().find(|entry| entry.0 == var).map_or(0, |e| e.1);
                let extra = [(Var(7), degree - power(Var(0))), (Var(8), linear - power(Var(1)))];
                (powers.clone().into_iter().chain(extra), coefficient)
            }))
        };
        let (a, b, c) = (graded(&a), graded(&b), graded(&c));
        check(&(&a * &c), &(&b * &c), &c);
    }
}

#[test]
fn trivial_cases() {
    let (x, y) = (Polynomial::variable(Var(1)), Polynomial::variable(Var(2)));
    let zero = Polynomial::zero();
    let check = |a: &Polynomial, b: &Polynomial, expected: &str| {
        assert_eq!(gcd(a, b).to_string(), expected);
        assert_eq!(gcd(b, a).to_string(), expected);
        assert_eq!(subresultant_gcd(a, b).to_string(), expected);
    };
    check(&zero, &zero, "0");
    check(&zero, &-&x, "x1");
    check(&Polynomial::from(-4), &x.scaled(&BigInt::from(6)), "2");
    check(&x.pow(3), &(&x.pow(2) * &y), "x1^2");
    check(&(&x + &y), &(&x - &y), "1");
    check(&(&x.pow(2) - &y.pow(2)), &(&y - &x), "x1 - x2");
    check(&(&x.pow(2) - &y), &(&x.pow(4) - &y.pow(2)), "x1^2 - x2");
}

/// Coefficients far beyond one prime.
#[test]
fn large_coefficients() {
    let (s, x) = (Polynomial::variable(Var(0)), Polynomial::variable(Var(1)));
    let huge = |shift: u32| Polynomial::from((BigInt::from(3) << shift) + 1);
    let common = &(&(&s * &x) * &huge(200)) + &(&(&s + &huge(150)) * &huge(90));
    let (a, b) = (&common * &(&s + &x), &common * &(&(&s * &huge(70)) - &Polynomial::one()));
    check(&a, &b, &common);
    assert_eq!(gcd(&a, &b), common.primitive_part());
}

/// The scaling brings in a factor, and a common factor is free of the main variable.
#[test]
fn contents_in_the_main_variable() {
    let [s, x, y, z] = [0, 1, 2, 3].map(|number| Polynomial::variable(Var(number)));
    let one = Polynomial::one();
    let lead = &(&x + &y) + &one;
    let common = &(&s.pow(3) * &x) + &(&y * &z);
    let free = &(&x * &z) - &y;
    let a = &(&(&common * &free) * &(&(&s * &lead) + &z)) * &one;
    let b = &(&common * &free) * &(&(&s * &lead) - &(&x * &y));
    check(&a, &b, &(&common * &free));
}
