//! Products, exact quotients and greatest common divisors of polynomials as networks give them.

use cofactor::algebra::{Polynomial, Var, gcd};
use divan::{Bencher, black_box};

fn main() {
    divan::main();
}

fn var(number: u32) -> Polynomial {
    Polynomial::variable(Var(number))
}

/// Voltages of a ladder of series conductances and shunt capacitances, from the open end to the
/// source, each without denominators; `element(kind, section)` gives the elements.
fn ladder(sections: u32, element: impl Fn(u32, u32) -> Polynomial) -> Vec<Polynomial> {
    let capacitance = |section| &var(0) * &element(1, section);
    let mut voltages = vec![Polynomial::one()];
    let mut current = capacitance(sections);
    for section in (1..=sections).rev() {
        let conductance = element(0, section);
        let voltage = &(&conductance * &voltages[voltages.len() - 1]) + &current;
        current = &(&conductance * &current) + &(&capacitance(section - 1) * &voltage);
        voltages.push(voltage);
    }
    voltages
}

fn uniform(sections: u32) -> Vec<Polynomial> {
    ladder(sections, |kind, _| var(1 + kind))
}

fn distinct(sections: u32) -> Polynomial {
    ladder(sections, |kind, section| var(1 + 2 * section + kind)).pop().unwrap_or_default()
}

/// The sum 1 + x1 + … + xn.
fn simplex(variables: u32) -> Polynomial {
    Polynomial::sum((1..=variables).map(var).chain([Polynomial::one()]))
}

#[divan::bench(args = [4, 8, 12])]
fn multiply_dense(bencher: Bencher<'_, '_>, power: u32) {
    let a = simplex(4).pow(power);
    let b = &a + &Polynomial::one();
    bencher.bench(|| black_box(&a) * black_box(&b));
}

#[divan::bench(args = [4, 6, 8])]
fn multiply_linear(bencher: Bencher<'_, '_>, sections: u32) {
    let a = distinct(sections);
    let b = a.renamed(|variable| Var(variable.0 * 3 / 2));
    bencher.bench(|| black_box(&a) * black_box(&b));
}

#[divan::bench(args = [4, 8, 12])]
fn divide_dense(bencher: Bencher<'_, '_>, power: u32) {
    let a = simplex(4).pow(power);
    let product = &a * &(&a + &Polynomial::one());
    bencher.bench(|| black_box(&product).divide_exact(black_box(&a)));
}

#[divan::bench(args = [4, 6, 8])]
fn divide_linear(bencher: Bencher<'_, '_>, sections: u32) {
    let a = distinct(sections);
    let product = &a * &a.renamed(|variable| Var(variable.0 * 3 / 2));
    bencher.bench(|| black_box(&product).divide_exact(black_box(&a)));
}

/// Uniform ladder of 24 sections: the voltage at a node over that at the source. In the middle the
/// two are coprime; with 17 sections left they share a factor of degree 3.
#[divan::bench(args = [12, 17])]
fn gcd_uniform_ladder(bencher: Bencher<'_, '_>, left: usize) {
    let voltages = uniform(24);
    let (a, b) = (&voltages[left] * &var(1).pow(24 - left as u32), &voltages[24]);
    bencher.bench(|| gcd(black_box(&a), black_box(b)));
}

/// Determinants of ladders with all elements different and a third one in common.
#[divan::bench(args = [2, 3, 4, 5])]
fn gcd_planted_ladder(bencher: Bencher<'_, '_>, sections: u32) {
    let common = distinct(sections);
    let shifted = |by: u32| common.renamed(|v| if v == Var::S { v } else { Var(v.0 + by) });
    let (a, b) = (&common * &shifted(7), &common * &shifted(12));
    bencher.bench(|| gcd(black_box(&a), black_box(&b)));
}
