//! Certified roots of the uniform RC ladder, whose polynomial is badly conditioned: coefficients
//! C(N + k, 2k), roots −4·sin²((2k − 1)π/(4N + 2)).

use cofactor::algebra::Univariate;
use cofactor::analysis::roots::find;
use num_bigint::BigInt;

fn main() {
    divan::main();
}

fn ladder(sections: i64) -> Univariate {
    let mut coefficients = vec![BigInt::from(1)];
    for k in 1..=sections {
        let factor = (sections + k) * (sections - k + 1);
        let next = &coefficients[k as usize - 1] * factor / (2 * k * (2 * k - 1));
        coefficients.push(next);
    }
    Univariate::from_integers(coefficients)
}

#[divan::bench(args = [10, 20, 30, 40])]
fn uniform_ladder(bencher: divan::Bencher<'_, '_>, sections: i64) {
    let polynomial = ladder(sections);
    bencher.bench(|| find(divan::black_box(&polynomial)));
}
