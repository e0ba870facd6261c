//! The table of docs/root-times.md: `cargo bench --bench root_times > docs/root-times.md`.
//!
//! The least of several runs for each size, from the exact coefficients of the uniform RC ladder, C(N + k, 2k),
//! to all roots with their bounds.

use std::time::{Duration, Instant};

use cofactor::algebra::Univariate;
use cofactor::analysis::roots::find;
use num_bigint::BigInt;

const RUNS: usize = 15;

fn ladder(sections: i64) -> Univariate {
    let mut coefficients = vec![BigInt::from(1)];
    for k in 1..=sections {
        let factor = (sections + k) * (sections - k + 1);
        coefficients.push(&coefficients[k as usize - 1] * factor / (2 * k * (2 * k - 1)));
    }
    Univariate::from_integers(coefficients)
}

fn least(polynomial: &Univariate) -> (Duration, f64) {
    let mut time = Duration::MAX;
    let mut bound = 0.0_f64;
    for _ in 0..RUNS {
        let start = Instant::now();
        let roots = find(std::hint::black_box(polynomial)).expect("roots");
        time = time.min(start.elapsed());
        let relative = roots.iter().map(|root| root.error_bound / root.value.norm());
        bound = relative.fold(0.0, f64::max);
    }
    (time, bound)
}

#[expect(clippy::print_stdout, reason = "the table is its output")]
fn main() {
    println!("# Times of the root finder\n");
    println!(
        "All poles of the uniform RC ladder of N sections, p = −(4/RC)·sin²((2k − 1)π/(4N + 2)),"
    );
    println!(
        "with certain bounds, from the exact coefficients; each the least of {RUNS} runs. Made by"
    );
    println!(
        "`cargo bench --bench root_times > docs/root-times.md`; the machine that made it was shared.\n"
    );
    println!("| N | time | largest relative bound | growth: time ~ N^x since the line above |");
    println!("| ---: | ---: | ---: | ---: |");
    let mut before: Option<(f64, f64)> = None;
    for sections in (5..=40).step_by(5) {
        let (time, bound) = least(&ladder(sections));
        let (n, seconds) = (sections as f64, time.as_secs_f64());
        let growth = before.map(|(m, earlier)| libm::log(seconds / earlier) / libm::log(n / m));
        let growth = growth.map_or(String::new(), |x| format!("{x:.1}"));
        println!("| {sections} | {:.2} ms | {bound:.0e} | {growth} |", 1e3 * seconds);
        before = Some((n, seconds));
    }
}
