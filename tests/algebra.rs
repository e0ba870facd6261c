//! Factorisations and greatest common divisors made by SymPy 1.14.0, a general-purpose library;
//! `tests/scripts/algebra_goldens.py` says how.

use cofactor::algebra::{Polynomial, Var, factor, gcd, subresultant_gcd};
use num_bigint::BigInt;

/// Reads `2*x0^2*x1 - x3 + 5`.
fn read(text: &str) -> Polynomial {
    let text = text.replace(" - ", " + -");
    Polynomial::from_terms(text.split(" + ").map(|term| {
        let (sign, term) = term.strip_prefix('-').map_or((1, term), |rest| (-1, rest));
        let mut coefficient = BigInt::from(sign);
        let mut powers: Vec<(Var, u32)> = Vec::new();
        for part in term.split('*') {
            match part.strip_prefix('x') {
                Some(power) => {
                    let (name, exponent) = power.split_once('^').unwrap_or((power, "1"));
                    let number = |text: &str| text.parse().expect("a number");
                    powers.push((Var(number(name)), number(exponent)));
                }
                None => coefficient *= part.parse::<BigInt>().expect("an integer"),
            }
        }
        (powers, coefficient)
    }))
}

/// With leading coefficient positive.
fn unit_normal(value: Polynomial) -> Polynomial {
    value.abs()
}

#[test]
fn factorisations() {
    for line in include_str!("data/factorisations.txt").lines() {
        let mut parts = line.split(" | ");
        let whole = read(parts.next().unwrap_or_default());
        parts.next();
        let expected = parts.map(|part| {
            let (text, power) = part.split_once(" ^^ ").expect("a factor and its multiplicity");
            (unit_normal(read(text)), power.parse::<u32>().expect("a multiplicity"))
        });
        let found = factor(&whole);
        assert!(found.complete, "given up: {whole}");
        assert_eq!(found.product(), whole);
        let key = |entry: &(Polynomial, u32)| format!("{} {}", entry.0, entry.1);
        let (mut expected, mut factors) = (expected.collect::<Vec<_>>(), found.factors);
        expected.sort_by_key(key);
        factors.sort_by_key(key);
        assert_eq!(factors, expected, "{whole}");
    }
}

#[test]
fn greatest_common_divisors() {
    for line in include_str!("data/gcds.txt").lines() {
        let parts: Vec<Polynomial> = line.split(" | ").map(read).collect();
        let [a, b, expected] = &parts[..] else { panic!("three fields: {line}") };
        let expected = unit_normal(expected.clone());
        assert_eq!(gcd(a, b), expected);
        if a.variables().len() <= 3 {
            assert_eq!(subresultant_gcd(a, b), expected);
        }
    }
}
