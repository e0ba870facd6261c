//! Products of random factors come apart again, and fixed cases.

use num_bigint::BigInt;
use proptest::prelude::*;

use super::super::polynomial::tests::nonzero;
use super::*;

/// The factorisation multiplies to the polynomial, its factors are normalised and coprime, and it
/// refines the given ones.
fn check(polynomial: &Polynomial, planted: &[Polynomial]) {
    let result = factor(polynomial);
    assert_eq!(result.product(), *polynomial);
    for (place, (part, multiplicity)) in result.factors.iter().enumerate() {
        part.assert_canonical();
        assert!(*multiplicity > 0 && !part.is_negative() && !part.is_constant());
        assert!(part.content() == BigInt::from(1));
        for (other, _) in &result.factors[..place] {
            assert!(gcd(part, other).is_one(), "{part} and {other} are not coprime");
        }
        if result.complete {
            for factor in planted {
                let common = gcd(part, factor);
                assert!(common.is_constant() || common == *part, "{part} splits by {factor}");
            }
        }
    }
    assert!(result.complete, "{polynomial} was given up");
}

fn linear(first: u32) -> BoxedStrategy<Polynomial> {
    let term = (prop::collection::vec(0_u32..2, 3), -3_i64..4);
    prop::collection::vec(term, 1..6)
        .prop_map(move |terms| {
            Polynomial::from_terms(terms.into_iter().map(|(exponents, coefficient)| {
                ((first..).map(Var).zip(exponents), BigInt::from(coefficient))
            }))
        })
        .prop_map(|value| if value.is_zero() { Polynomial::one() } else { value })
        .boxed()
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(64))]

    #[test]
    fn products_of_two(a in nonzero(2, 2, 4), b in nonzero(2, 2, 4)) {
        check(&(&a * &b), &[a, b]);
    }

    #[test]
    fn products_with_squares(a in nonzero(3, 1, 3), b in nonzero(3, 2, 3)) {
        check(&(&(&a * &a) * &b), &[a, b]);
    }

    #[test]
    fn products_in_one_variable(
        a in nonzero(1, 4, 4), b in nonzero(1, 5, 5), c in nonzero(1, 3, 3),
    ) {
        check(&(&(&a * &b) * &c), &[a, b, c]);
    }

    #[test]
    fn products_of_linear_polynomials(a in linear(0), b in linear(3), c in linear(6), d in linear(9)) {
        check(&(&(&a * &b) * &(&c * &d)), &[a, b, c, d]);
    }

    #[test]
    fn products_in_three_variables(a in nonzero(3, 2, 3), b in nonzero(3, 2, 3)) {
        check(&(&a * &b), &[a, b]);
    }
}

#[test]
fn fixed_cases() {
    let [x, y, z] = [1, 2, 3].map(|number| Polynomial::variable(Var(number)));
    let one = Polynomial::one();
    let check = |polynomial: &Polynomial, expected: &str| {
        let result = factor(polynomial);
        let factors = result.factors.iter().map(|(part, power)| format!(" ({part})^{power}"));
        assert_eq!(format!("{}{}", result.content, factors.collect::<String>()), expected);
    };
    check(&Polynomial::zero(), "0");
    check(&Polynomial::from(-6), "-6");
    check(&(&x.pow(2) * &y).scaled(&BigInt::from(-6)), "-6 (x1)^2 (x2)^1");
    check(&(&x.pow(2) - &y.pow(2)), "1 (x1 - x2)^1 (x1 + x2)^1");
    check(&(&x.pow(2) - &y), "1 (x1^2 - x2)^1");
    check(&(&x.pow(4) - &y.pow(2)), "1 (x1^2 - x2)^1 (x1^2 + x2)^1");
    check(&(&x.pow(4) + &one), "1 (x1^4 + 1)^1");
    check(
        &(&x.pow(4) + &y.pow(4).scaled(&BigInt::from(4))),
        concat!("1 (x1^2 - 2*x1*x2 + 2*x2^2)^1", " (x1^2 + 2*x1*x2 + 2*x2^2)^1",),
    );
    let square = &(&(&x * &y) + &z).pow(2) - &one;
    check(&square, "1 (x1*x2 + x3 - 1)^1 (x1*x2 + x3 + 1)^1");
}
