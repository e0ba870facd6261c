//! Random circuits and long ladders: the witnesses against each other and against a recurrence.

use num_complex::Complex;

use crate::circuit::{Drive, NodeId, Probe, Quantity, Transfer};
use crate::numeric::testing::{Builder, number, transfer};
use crate::numeric::values::Generator;
use crate::numeric::{NumericError, Sweep, exact, exact_is_affordable};

/// A circuit of 2 to 6 nodes with every kind of element; most have a unique solution.
fn random_circuit(seed: u64) -> (Builder, Transfer) {
    let mut generator = Generator::new(seed);
    let mut b = Builder::new();
    let count = 2 + generator.below(5);
    let source = if generator.below(2) == 0 {
        b.voltage("Vin", "1", "0")
    } else {
        b.current("Iin", "0", "1")
    };
    for k in 1..count {
        // A path through all nodes, so that few circuits fall apart.
        b.passive(&format!("R{k}"), &k.to_string(), &(k + 1).to_string(), number(1, 1));
    }
    b.passive("R0", &count.to_string(), "0", number(3, 2));
    for k in 0..2 + generator.below(7) {
        let mut pick = || generator.below(count + 1).to_string();
        let (a, c, p, q) = (pick(), pick(), pick(), pick());
        if a == c {
            continue;
        }
        let nominal = number(1 + i64::try_from(generator.below(40)).expect("small"), 8);
        let control = if generator.below(2) == 0 {
            b.across(&p, &q)
        } else {
            let elements = u64::try_from(b.circuit.elements.len()).expect("small");
            let id = u32::try_from(generator.below(elements)).expect("small");
            Quantity::Current(crate::circuit::ElementId(id))
        };
        let gain = |b: &mut Builder| b.symbol(&format!("k{k}"), Some(nominal.clone()));
        match generator.below(8) {
            0 | 1 => drop(b.passive(&format!("C{k}x"), &a, &c, nominal)),
            2 => drop(b.passive(&format!("L{k}x"), &a, &c, nominal)),
            3 => drop(b.passive(&format!("G{k}x"), &a, &c, nominal)),
            4 | 5 => {
                let gain = gain(&mut b);
                b.controlled_current(&format!("F{k}"), (&a, &c), gain, control);
            }
            6 => {
                let gain = gain(&mut b);
                b.controlled_voltage(&format!("E{k}"), (&a, &c), gain, control);
            }
            _ => drop(b.nullor(&format!("U{k}"), &p, &q, &a)),
        }
    }
    let output = NodeId(u32::try_from(1 + generator.below(count)).expect("small"));
    let last = u64::try_from(b.circuit.elements.len()).expect("small");
    let numerator = if generator.below(3) == 0 {
        let id = u32::try_from(generator.below(last)).expect("small");
        Probe::Current(crate::circuit::ElementId(id))
    } else {
        Probe::Voltage(output, NodeId(0))
    };
    (b, transfer(Drive::Source(source), numerator, Probe::Drive))
}

#[test]
fn random_circuits() {
    let (mut solved, mut singular) = (0, 0);
    for seed in 0..400 {
        let (b, transfer) = random_circuit(seed);
        match exact(&b.circuit, &transfer, &b.numbers()) {
            Ok(fraction) => {
                solved += 1;
                super::known::agree(&b, &transfer, &fraction.numerator, &fraction.denominator);
            }
            Err(NumericError::Singular) => singular += 1,
            Err(error) => panic!("seed {seed}: {error}"),
        }
    }
    assert!(solved > 200 && singular > 10, "{solved} solved, {singular} singular");
}

/// `sections` of series R and shunt C, all 1, and its input-to-output gain.
pub(super) fn ladder(sections: usize) -> (Builder, Transfer) {
    let mut b = Builder::new();
    let source = b.voltage("Vin", "n0", "0");
    for k in 1..=sections {
        let (from, to) = (format!("n{}", k - 1), format!("n{k}"));
        b.passive(&format!("R{k}"), &from, &to, number(1, 1));
        b.passive(&format!("C{k}"), &to, "0", number(1, 1));
    }
    let gain = b.gain(source, &format!("n{sections}"));
    (b, gain)
}

/// 1/gain of the ladder: from the output back, i ← i + s·v and v ← v + i. The pair is kept near 1
/// by a power of two that is returned.
fn recurrence(sections: usize, s: Complex<f64>) -> (Complex<f64>, i32) {
    let (mut v, mut i, mut exponent) = (Complex::ONE, Complex::ZERO, 0);
    for _ in 0..sections {
        i += s * v;
        v += i;
        if v.norm() > 1e100 {
            (v, i, exponent) = (v * 2f64.powi(-300), i * 2f64.powi(-300), exponent + 300);
        }
    }
    (v, exponent)
}

#[test]
fn ladder_of_a_thousand_sections() {
    let (b, gain) = ladder(1000);
    let mut sweep = Sweep::new(&b.circuit, &gain, &vec![1.0; 2000]).expect("a sweep");
    let mut compared = 0;
    for k in 0..41 {
        let omega = libm::pow(10.0, -6.0 + 0.15 * f64::from(k));
        let answer = sweep.examine(Complex::new(0.0, omega)).expect("an answer");
        let (inverse, exponent) = recurrence(1000, Complex::new(0.0, omega));
        if exponent > 900 {
            // Beyond the smallest double.
            continue;
        }
        let expected = inverse.inv() * 2f64.powi(-exponent);
        if expected.norm() < f64::MIN_POSITIVE {
            // A subnormal number has few bits, which the bound says.
            assert!(answer.error_bound > 1e-6 * expected.norm(), "{omega}");
            continue;
        }
        compared += 1;
        let error = (answer.value - expected).norm() / expected.norm();
        assert!(error < 1e-10, "{omega}: {error}");
        assert!(error * expected.norm() <= answer.error_bound, "{omega}: {error}");
    }
    assert!(compared > 30, "{compared}");
    let affordable = exact_is_affordable(&b.circuit, &gain, &b.numbers());
    assert_eq!(affordable, Ok(false));
}

#[test]
fn ladder_exactly() {
    let (b, gain) = ladder(12);
    let fraction = exact(&b.circuit, &gain, &b.numbers()).expect("an answer");
    // The denominator of n equal sections is Σ binomial(n + k, 2k) s^k (Morgan-Voyce polynomials).
    let expected: Vec<_> = (0..=12u64)
        .map(|k| {
            let value = num_integer::binomial(12 + k, 2 * k);
            number(i64::try_from(value).expect("small"), 1)
        })
        .collect();
    assert_eq!(fraction.denominator, expected);
    assert_eq!(fraction.numerator, vec![number(1, 1)]);
}
