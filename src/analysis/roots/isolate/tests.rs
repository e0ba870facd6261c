use super::*;

fn integers(values: &[i64]) -> Vec<BigInt> {
    values.iter().map(|&value| BigInt::from(value)).collect()
}

fn product(roots: impl Iterator<Item = BigInt>) -> Vec<BigInt> {
    let mut whole = vec![BigInt::from(1)];
    for root in roots {
        let mut next = vec![BigInt::zero(); whole.len() + 1];
        for (power, coefficient) in whole.iter().enumerate() {
            next[power] -= coefficient * &root;
            next[power + 1] += coefficient;
        }
        whole = next;
    }
    whole
}

/// Every disc holds one of the expected roots, and is as small as promised.
fn check(coefficients: &[BigInt], expected: &[Complex<f64>]) {
    let discs = isolate(coefficients).expect("the roots are simple");
    assert_eq!(discs.len(), expected.len());
    for root in expected {
        // The expected values are rounded too.
        let slack = 2e-15 * root.norm();
        let holding: Vec<&Disc> = discs
            .iter()
            .filter(|disc| (disc.middle - root).norm() <= disc.radius + slack)
            .collect();
        assert_eq!(holding.len(), 1, "{root} in {discs:?}");
        assert!(holding[0].radius <= 4e-16 * root.norm(), "{:?}", holding[0]);
        assert_eq!(holding[0].middle.im == 0.0, root.im == 0.0);
    }
    for (index, disc) in discs.iter().enumerate() {
        assert_eq!(discs[disc.conjugate].middle, disc.middle.conj());
        assert_eq!(disc.conjugate == index, disc.middle.im == 0.0);
    }
}

/// The uniform RC ladder with RC = 1: coefficients C(N + k, 2k) (Morgan-Voyce 1959), roots
/// −4·sin²((2k − 1)π/(4N + 2)) (closed form).
pub(super) fn ladder(sections: u32) -> (Vec<BigInt>, Vec<f64>) {
    let mut coefficients = vec![BigInt::from(1)];
    for k in 1..=sections {
        let last = coefficients[k as usize - 1].clone();
        // C(n + k, 2k) from C(n + k − 1, 2k − 2).
        let (n, k) = (i64::from(sections), i64::from(k));
        coefficients.push(last * (n + k) * (n - k + 1) / (2 * k * (2 * k - 1)));
    }
    let roots = (1..=sections).map(|k| {
        let angle = f64::from(2 * k - 1) * std::f64::consts::PI / f64::from(4 * sections + 2);
        -4.0 * libm::sin(angle) * libm::sin(angle)
    });
    (coefficients, roots.collect())
}

#[test]
fn ladders_of_up_to_forty_sections() {
    for sections in [1, 2, 3, 5, 10, 20, 30, 40] {
        let (coefficients, roots) = ladder(sections);
        let roots: Vec<_> = roots.iter().map(|&root| Complex::new(root, 0.0)).collect();
        check(&coefficients, &roots);
    }
}

#[test]
fn roots_far_apart_and_close_together() {
    check(&integers(&[6, 5, 1]), &[Complex::new(-2.0, 0.0), Complex::new(-3.0, 0.0)]);
    let twenty: Vec<_> = (1..=20).map(|k| Complex::new(f64::from(k), 0.0)).collect();
    check(&product((1..=20).map(BigInt::from)), &twenty);
    let decades: Vec<_> =
        (0..12).map(|k| Complex::new(libm::pow(10.0, f64::from(k)), 0.0)).collect();
    check(&product((0..12_u32).map(|k| BigInt::from(10).pow(k))), &decades);
    // Two roots a part in 10^40 apart, and one a part in 10^100 off the real axis.
    let close = [BigInt::from(10).pow(40), BigInt::from(10).pow(40) + 1, BigInt::from(-5)];
    let discs = isolate(&product(close.into_iter())).expect("simple");
    assert!(discs.iter().all(|disc| disc.middle.im == 0.0));
    let square = BigInt::from(10).pow(200);
    let discs =
        isolate(&[&square + 1, -2 * BigInt::from(10).pow(100), BigInt::from(1)]).expect("simple");
    assert!(discs.iter().all(|disc| disc.middle.im != 0.0), "{discs:?}");
}

#[test]
fn pairs_and_unit_roots() {
    check(&integers(&[1, 0, 1]), &[Complex::new(0.0, 1.0), Complex::new(0.0, -1.0)]);
    let unity: Vec<_> = (0..15)
        .map(|k| std::f64::consts::TAU * f64::from(k) / 15.0)
        .map(|angle| Complex::new(libm::cos(angle), libm::sin(angle)))
        .collect();
    let mut whole = vec![BigInt::zero(); 16];
    (whole[0], whole[15]) = (BigInt::from(-1), BigInt::from(1));
    check(&whole, &unity);
}

#[test]
fn roots_too_close_for_any_precision_are_refused() {
    let square: BigInt = BigInt::from(10).pow(800);
    let twice: BigInt = -2 * BigInt::from(10).pow(400);
    let whole = [square - 1, twice, BigInt::from(1)];
    assert_eq!(isolate(&whole), Err(Failure::TooClose));
}
