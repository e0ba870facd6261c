//! The comparison passes right results, refuses wrong ones and reports both.

use num_complex::Complex;
use num_traits::ToPrimitive;

use super::agreement::ladder;
use crate::circuit::{Band, Number};
use crate::numeric::testing::{Builder, number};
use crate::numeric::{
    Additive, Assignment, Candidate, ExactKind, Field, NumericError, Origin, PrimeField,
    crosscheck, frequencies,
};

/// (a + b·R1·C1·s)/(c + d·R1·C1·s), symbols in this order.
struct Section([i64; 4]);

impl Section {
    fn coefficients_over<F: Field>(
        &self,
        field: &F,
        symbols: &[F::Element],
    ) -> Option<Vec<F::Element>> {
        let time = field.multiply(&symbols[0], &symbols[1]);
        let [a, b, c, d] = self.0.map(|value| field.number(&number(value, 1)));
        Some(vec![a?, field.multiply(&b?, &time), c?, field.multiply(&d?, &time)])
    }
}

impl Candidate for Section {
    fn values_at(&self, frequencies: &[Complex<f64>], symbols: &[f64]) -> Vec<Complex<f64>> {
        let [a, b, c, d] = self.0.map(|value| value.to_f64().unwrap_or(f64::NAN));
        let value = |s: &Complex<f64>| {
            let time = s * symbols[0] * symbols[1];
            (time * b + a) / (time * d + c)
        };
        frequencies.iter().map(value).collect()
    }

    fn coefficients(&self, symbols: &[Number]) -> Option<(Vec<Number>, Vec<Number>)> {
        let list = self.coefficients_over(&crate::numeric::Rationals, symbols)?;
        Some((list[..2].to_vec(), list[2..].to_vec()))
    }

    fn value_modulo(&self, prime: u64, s: u64, symbols: &[u64]) -> Option<u64> {
        let field = PrimeField::new(prime);
        let list = self.coefficients_over(&field, symbols)?;
        let at = |low: &u64, high: &u64| field.add(low, &field.multiply(high, &s));
        Some(field.multiply(&at(&list[0], &list[1]), &field.inverse(&at(&list[2], &list[3]))?))
    }
}

fn low_pass() -> Builder {
    let mut b = Builder::new();
    b.passive("R1", "in", "out", number(10_000, 1));
    b.passive("C1", "out", "0", number(33, 1_000_000_000));
    b
}

#[test]
fn right_results_pass() {
    let mut b = low_pass();
    let source = b.voltage("Vin", "in", "0");
    b.circuit.band = Some(Band { from: number(10, 1), to: number(1_000_000, 1) });
    let gain = b.gain(source, "out");
    let report = crosscheck(&b.circuit, &gain, &Section([1, 0, 1, 1])).expect("a report");
    assert!(report.passed(), "{report:?}");
    assert_eq!(report.origin, Origin::Nominal);
    assert_eq!(report.floating.points, 41);
    assert_eq!((report.floating.from_hz, report.floating.to_hz), (10.0, 1e6));
    assert!(report.floating.worst_relative_error < 1e-14, "{report:?}");
    let kinds: Vec<_> = report.exact.iter().map(|evidence| evidence.kind).collect();
    assert_eq!(kinds, [ExactKind::Identical, ExactKind::EqualAt { points: 12, primes: 3 }]);
    // Without one of the nominal values: random ones.
    b.circuit.symbols[1].nominal = None;
    let report = crosscheck(&b.circuit, &gain, &Section([1, 0, 1, 1])).expect("a report");
    assert!(report.passed() && report.origin == Origin::Random, "{report:?}");
}

#[test]
fn wrong_results_fail_everywhere() {
    let mut b = low_pass();
    let source = b.voltage("Vin", "in", "0");
    let gain = b.gain(source, "out");
    for wrong in [[1, 0, 1, 2], [1, 0, 1, -1], [-1, 0, 1, 1], [0, 0, 1, 1], [1, 0, 0, 0]] {
        let report = crosscheck(&b.circuit, &gain, &Section(wrong)).expect("a report");
        assert!(!report.floating.passed, "{wrong:?} {report:?}");
        assert!(report.floating.failure.is_some(), "{wrong:?} {report:?}");
        assert!(report.exact.iter().all(|e| !e.passed && e.failure.is_some()), "{report:?}");
    }
    // A difference too small for the floating witness is left to the exact ones.
    let close = Section([1_000_000_000_000, 0, 1_000_000_000_001, 1_000_000_000_000]);
    let report = crosscheck(&b.circuit, &gain, &close).expect("a report");
    assert!(report.floating.passed && !report.passed());
}

#[test]
fn results_of_zero() {
    // A balanced bridge.
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    for (name, from, to) in [("R1", "in", "x"), ("R2", "x", "0")] {
        b.passive(name, from, to, number(10_001, 3));
    }
    let (upper, lower) = (b.symbol("R1", None), b.symbol("R2", None));
    for (name, from, to, value) in [("R3", "in", "y", upper), ("R4", "y", "0", lower)] {
        let law = crate::circuit::Law::Impedance(value);
        b.element(name, crate::circuit::Class::Resistor, (from, to), law);
    }
    let detector = crate::circuit::Probe::Voltage(b.node("x"), b.node("y"));
    let zero = crate::circuit::Transfer { numerator: detector, ..b.gain(source, "x") };
    let report = crosscheck(&b.circuit, &zero, &Section([0, 0, 1, 1])).expect("a report");
    assert!(report.passed(), "{report:?}");
    assert!(report.floating.worst_relative_error < 1e-14, "{report:?}");
    let report = crosscheck(&b.circuit, &zero, &Section([1, 0, 1_000_000, 0])).expect("a report");
    assert!(!report.floating.passed, "{report:?}");
}

#[test]
fn nominal_values_without_a_solution() {
    // R1 and −R1 in parallel: infinite at equal values only.
    let mut b = Builder::new();
    b.passive("R1", "a", "0", number(1, 1));
    let second = b.symbol("R2", Some(number(1, 1)));
    let law = crate::circuit::Law::Impedance(crate::circuit::Value::Negative(Box::new(second)));
    b.element("Z1", crate::circuit::Class::Impedance, ("a", "0"), law);
    let port = b.impedance("a", "0");
    struct Port;
    impl Candidate for Port {
        fn values_at(&self, frequencies: &[Complex<f64>], r: &[f64]) -> Vec<Complex<f64>> {
            vec![Complex::new(r[0] * r[1] / (r[1] - r[0]), 0.0); frequencies.len()]
        }
        fn coefficients(&self, _: &[Number]) -> Option<(Vec<Number>, Vec<Number>)> {
            None
        }
        fn value_modulo(&self, prime: u64, _: u64, r: &[u64]) -> Option<u64> {
            let field = PrimeField::new(prime);
            let inverse = field.inverse(&field.subtract(&r[1], &r[0]))?;
            Some(field.multiply(&field.multiply(&r[0], &r[1]), &inverse))
        }
    }
    let report = crosscheck(&b.circuit, &port, &Port).expect("a report");
    assert!(report.passed(), "{report:?}");
    assert_eq!(report.origin, Origin::Random);
    assert_eq!(report.nominal_fault, Some(NumericError::Singular));
}

#[test]
fn too_large_for_the_exact_solve() {
    let (b, gain) = ladder(300);
    let report = crosscheck(&b.circuit, &gain, &Section([1, 0, 1, 1])).expect("a report");
    assert!(!report.passed());
    assert_eq!(report.exact.len(), 1);
}

#[test]
fn random_numbers_are_distinct_and_repeatable() {
    let (b, _) = ladder(200);
    let first = Assignment::random(&b.circuit, 7);
    assert_eq!(first, Assignment::random(&b.circuit, 7));
    assert_ne!(first, Assignment::random(&b.circuit, 8));
    let distinct: std::collections::BTreeSet<_> = first.numbers.iter().collect();
    assert_eq!(distinct.len(), 400);
    assert!(first.numbers.iter().all(|v| *v >= number(1, 2) && *v <= number(4, 1)));
}

#[test]
fn frequencies_surround_the_corners() {
    let b = low_pass();
    let nominal = Assignment { numbers: b.numbers(), origin: Origin::Nominal };
    let list = frequencies(&b.circuit, &nominal, 41);
    // 1/(2π·10 kΩ·33 nF) is 482 Hz.
    assert_eq!(list.len(), 41);
    assert!((list[20] - 482.3).abs() < 0.1, "{}", list[20]);
    assert!((list[0] - 4.823).abs() < 0.001 && (list[40] - 48_230.0).abs() < 10.0);
    assert_eq!(frequencies(&b.circuit, &nominal, 0), Vec::<f64>::new());
}
