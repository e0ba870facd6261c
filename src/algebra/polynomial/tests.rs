//! Laws of the ring, of division and of the parts, on small random polynomials.

use num_bigint::BigInt;
use num_rational::BigRational;
use proptest::prelude::*;

use super::{Polynomial, Var};

/// Random polynomials in `variables` variables; about half are linear in all but the first.
pub(crate) fn polynomial(variables: u32, degree: u32, terms: usize) -> BoxedStrategy<Polynomial> {
    let coefficient = prop_oneof![
        8 => (-9_i64..10).prop_map(BigInt::from),
        1 => any::<i64>().prop_map(BigInt::from),
        1 => any::<i64>().prop_map(|value| BigInt::from(value) << 40),
    ];
    let exponents = prop::collection::vec(0..=degree, variables as usize);
    let term = (exponents, any::<bool>(), coefficient);
    prop::collection::vec(term, 0..=terms)
        .prop_map(|terms| {
            Polynomial::from_terms(terms.into_iter().map(|(exponents, linear, coefficient)| {
                let powers = exponents.into_iter().zip(0_u32..).map(move |(exponent, variable)| {
                    let linear = linear && variable > 0;
                    (Var(variable), if linear { exponent.min(1) } else { exponent })
                });
                (powers, coefficient)
            }))
        })
        .boxed()
}

/// The same without 0.
pub(crate) fn nonzero(variables: u32, degree: u32, terms: usize) -> BoxedStrategy<Polynomial> {
    let any = polynomial(variables, degree, terms);
    any.prop_map(|value| if value.is_zero() { Polynomial::one() } else { value }).boxed()
}

fn canonical(value: Polynomial) -> Polynomial {
    value.assert_canonical();
    value
}

/// A polynomial of `0..40` variables, to reach monomials of one, two and more words.
fn wide() -> BoxedStrategy<Polynomial> {
    let term = (prop::collection::vec((0_u32..40, 0_u32..9), 0..6), -3_i64..4);
    prop::collection::vec(term, 0..7)
        .prop_map(|terms| {
            Polynomial::from_terms(terms.into_iter().map(|(powers, coefficient)| {
                let powers = powers.into_iter().map(|(var, power)| (Var(var), power));
                (powers, BigInt::from(coefficient))
            }))
        })
        .boxed()
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(128))]

    #[test]
    fn ring_laws(
        a in polynomial(3, 3, 8), b in polynomial(3, 3, 8), c in polynomial(4, 2, 8),
    ) {
        prop_assert_eq!(canonical(&a + &b), canonical(&b + &a));
        prop_assert_eq!(canonical(&a * &b), canonical(&b * &a));
        prop_assert_eq!(canonical(&(&a + &b) * &c), canonical(&(&a * &c) + &(&b * &c)));
        prop_assert_eq!(canonical(&(&a * &b) * &c), canonical(&a * &(&b * &c)));
        prop_assert_eq!(canonical(&(&a - &b) + &b), a.clone());
        prop_assert!(canonical(&a - &a).is_zero());
        prop_assert_eq!(a.squared(), canonical(a.pow(2)));
        prop_assert_eq!(Polynomial::sum([a.clone(), b.clone(), c.clone()]), &(&a + &b) + &c);
    }

    #[test]
    fn division_undoes_multiplication(a in polynomial(3, 3, 8), b in polynomial(4, 3, 8)) {
        prop_assume!(!b.is_zero());
        let product = &a * &b;
        prop_assert_eq!(product.divide_exact(&b).map(canonical), Some(a.clone()));
        if !b.is_constant() {
            prop_assert_eq!((&product + &Polynomial::one()).divide_exact(&b), None);
        }
    }

    #[test]
    fn many_variables(a in wide(), b in wide(), c in wide()) {
        prop_assert_eq!(canonical(&(&a + &b) * &c), canonical(&(&a * &c) + &(&b * &c)));
        if !c.is_zero() {
            prop_assert_eq!((&a * &c).divide_exact(&c).map(canonical), Some(a.clone()));
        }
    }

    #[test]
    fn parts_rebuild_the_whole(a in polynomial(3, 4, 8), variable in 0_u32..4) {
        let variable = Var(variable);
        let parts = a.coefficients(variable);
        parts.iter().for_each(Polynomial::assert_canonical);
        prop_assert_eq!(canonical(Polynomial::from_coefficients(variable, &parts)), a.clone());
        for (part, power) in parts.iter().zip(0_u32..) {
            prop_assert_eq!(&a.coefficient(variable, power), part);
        }
        let primitive = canonical(a.primitive_part()).scaled(&a.content());
        prop_assert_eq!(if a.is_negative() { -primitive } else { primitive }, a.clone());
    }

    #[test]
    fn derivative_of_a_product(a in polynomial(3, 3, 6), b in polynomial(3, 3, 6)) {
        for variable in [Var(0), Var(2)] {
            let direct = canonical((&a * &b).derivative(variable));
            let by_rule = &(&a.derivative(variable) * &b) + &(&a * &b.derivative(variable));
            prop_assert_eq!(direct, by_rule);
        }
    }

    #[test]
    fn evaluation_commutes(a in polynomial(3, 3, 6), b in polynomial(3, 2, 4), x in -5_i64..6) {
        let at = |var: Var| BigRational::new(BigInt::from(x + i64::from(var.0)), BigInt::from(3));
        prop_assert_eq!((&a * &b).evaluate(at), a.evaluate(at) * b.evaluate(at));
        let put = canonical(a.substitute(Var(1), &b));
        let inner = b.evaluate(at);
        let direct = a.evaluate(|var| if var == Var(1) { inner.clone() } else { at(var) });
        prop_assert_eq!(put.evaluate(at), direct);
    }
}

#[test]
fn display_and_order() {
    let check = |terms: &[(&[(u32, u32)], i64)], expected: &str| {
        let terms = terms.iter().map(|(powers, coefficient)| {
            let powers = powers.iter().map(|&(var, power)| (Var(var), power));
            (powers, BigInt::from(*coefficient))
        });
        assert_eq!(canonical(Polynomial::from_terms(terms)).to_string(), expected);
    };
    check(&[], "0");
    check(&[(&[], -1)], "-1");
    check(&[(&[(1, 1)], 1), (&[(0, 2), (1, 1)], 2), (&[], 5)], "2*x0^2*x1 + x1 + 5");
    check(&[(&[(3, 1)], -1), (&[(1, 1)], 1), (&[(3, 1)], 1)], "x1");
    check(&[(&[(1, 7), (2, 1)], -3), (&[(0, 1)], -1)], "-x0 - 3*x1^7*x2");
}

#[test]
fn powers_and_edges() {
    let x = Polynomial::variable(Var(1));
    let sum = &x + &Polynomial::one();
    assert_eq!(Polynomial::zero().pow(0), Polynomial::one());
    assert_eq!(Polynomial::zero().pow(3), Polynomial::zero());
    assert_eq!(sum.pow(3).to_string(), "x1^3 + 3*x1^2 + 3*x1 + 1");
    assert_eq!(x.pow(1_000_000).degree(Var(1)), 1_000_000);
    assert_eq!(Polynomial::zero().divide_exact(&x), Some(Polynomial::zero()));
    assert_eq!(x.divide_exact(&Polynomial::zero()), None);
    assert_eq!(Polynomial::from(i64::MIN).primitive_part(), Polynomial::one());
}

/// Operands beyond the limits of the small methods: sparse, and filling their box.
#[test]
fn large_operands() {
    let sum = |numbers: &[u32]| {
        Polynomial::sum(numbers.iter().map(|&number| Polynomial::variable(Var(number))))
    };
    let sparse = |shift: u32| {
        (0..6).fold(Polynomial::one(), |all, place| {
            let factor = sum(&[shift + place, shift + 7 * place + 3]);
            &(&all * &factor) + &Polynomial::variable(Var(place))
        })
    };
    let (a, b) = (canonical(sparse(0)), canonical(sparse(11)));
    let product = canonical(&a * &b);
    assert!(product.len() > 4096);
    assert_eq!(product.divide_exact(&a).map(canonical), Some(b.clone()));
    assert_eq!((&product + &Polynomial::one()).divide_exact(&a), None);
    let at = |var: Var| BigRational::from(BigInt::from(var.0 % 5 + 2));
    assert_eq!(product.evaluate(at), a.evaluate(at) * b.evaluate(at));

    let dense = &sum(&[0, 1, 2]) + &Polynomial::from(3);
    let (a, b) = (dense.pow(9), &dense.pow(12) - &Polynomial::one());
    let product = canonical(&a * &b);
    assert_eq!(product.divide_exact(&b).map(canonical), Some(a.clone()));
    assert_eq!((&product - &Polynomial::one()).divide_exact(&b), None);
    assert_eq!(product.evaluate(at), a.evaluate(at) * b.evaluate(at));
}
