//! Small circuits: the exact answer by hand, and the floating and modular ones must equal it.

use num_complex::Complex;
use num_traits::ToPrimitive;

use crate::circuit::{Class, Drive, Law, Number, Probe, Quantity, Transfer, Value};
use crate::numeric::testing::{Builder, constant, number, transfer};
use crate::numeric::{
    Additive, Field, PRIMES, PrimeField, Sweep, exact, grounded_nodes, modular_value, response,
};

fn whole(coefficients: &[i64]) -> Vec<Number> {
    coefficients.iter().map(|a| number(*a, 1)).collect()
}

/// All three witnesses give numerator/denominator (ascending in s, integers, any scale).
fn check(builder: &Builder, transfer: &Transfer, numerator: &[i64], denominator: &[i64]) {
    let numbers = builder.numbers();
    let found = exact(&builder.circuit, transfer, &numbers).expect("an exact answer");
    let lowest = *denominator.iter().find(|a| **a != 0).expect("a denominator");
    let scaled =
        |list: &[i64]| -> Vec<Number> { list.iter().map(|a| number(*a, lowest)).collect() };
    assert_eq!(found.numerator, scaled(numerator));
    assert_eq!(found.denominator, scaled(denominator));
    agree(builder, transfer, &whole(numerator), &whole(denominator));
}

/// Floating and modular witnesses equal a fraction.
pub(super) fn agree(
    builder: &Builder,
    transfer: &Transfer,
    numerator: &[Number],
    denominator: &[Number],
) {
    let numbers = builder.numbers();
    let floats: Vec<f64> = numbers.iter().filter_map(ToPrimitive::to_f64).collect();
    let mut sweep = Sweep::new(&builder.circuit, transfer, &floats).expect("a sweep");
    for omega in [0.013, 0.37, 1.9, 71.0] {
        let s = Complex::new(0.0, omega);
        let at = |list: &[Number]| {
            list.iter()
                .rev()
                .fold(Complex::<f64>::ZERO, |sum, a| sum * s + a.to_f64().unwrap_or(f64::NAN))
        };
        let expected: Complex<f64> = at(numerator) / at(denominator);
        let answer = sweep.examine(s).expect("a floating answer");
        let allowed = answer.error_bound + 1e-12 * expected.norm();
        assert!(
            (answer.value - expected).norm() <= allowed,
            "{} is not {expected}, bound {}",
            answer.value,
            answer.error_bound
        );
    }
    for prime in PRIMES {
        let field = PrimeField::new(prime);
        let image = |list: &[Number]| -> Vec<u64> {
            list.iter().map(|a| field.number(a).expect("a residue")).collect()
        };
        let s = 123_456_789;
        let at = |list: &[Number]| {
            image(list).iter().rev().fold(0, |sum, a| field.add(&field.multiply(&sum, &s), a))
        };
        let inverse = field.inverse(&at(denominator)).expect("not a pole");
        let expected = field.multiply(&at(numerator), &inverse);
        let found = modular_value(&builder.circuit, transfer, prime, s, &image(&numbers));
        assert_eq!(found, Ok(expected));
    }
}

fn n(value: i64) -> Number {
    number(value, 1)
}

#[test]
fn voltage_divider() {
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    b.passive("R1", "in", "out", n(3));
    let lower = b.passive("R2", "out", "0", n(2));
    let gain = b.gain(source, "out");
    check(&b, &gain, &[2], &[5]);
    let current = transfer(Drive::Source(source), Probe::Current(lower), Probe::Drive);
    check(&b, &current, &[1], &[5]);
    // The source's own current flows from + to − through it: against the load's.
    let own = transfer(Drive::Source(source), Probe::Current(source), Probe::Drive);
    check(&b, &own, &[-1], &[5]);
    // A ratio of two answers: v(out)/i(R2) is R2.
    let ratio = transfer(Drive::Source(source), gain.numerator, Probe::Current(lower));
    check(&b, &ratio, &[2], &[1]);
}

#[test]
fn current_source_pushes_along_its_walk() {
    let mut b = Builder::new();
    let source = b.current("Iin", "0", "out");
    b.passive("R1", "out", "0", n(7));
    let gain = b.gain(source, "out");
    check(&b, &gain, &[7], &[1]);
    let own = transfer(Drive::Source(source), Probe::Current(source), Probe::Drive);
    check(&b, &own, &[1], &[1]);
}

#[test]
fn first_and_second_order_sections() {
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    b.passive("R1", "in", "out", n(2));
    b.passive("C1", "out", "0", n(3));
    let gain = b.gain(source, "out");
    check(&b, &gain, &[1], &[1, 6]);

    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    b.passive("R1", "in", "x", n(2));
    b.passive("L1", "x", "out", n(5));
    let capacitor = b.passive("C1", "out", "0", n(3));
    let gain = b.gain(source, "out");
    // 1/(1 + s R C + s² L C)
    check(&b, &gain, &[1], &[1, 6, 15]);
    let current = transfer(Drive::Source(source), Probe::Current(capacitor), Probe::Drive);
    check(&b, &current, &[0, 3], &[1, 6, 15]);
    let inductor = b.circuit.element("L1").expect("L1");
    let voltage = Probe::Voltage(b.node("x"), b.node("out"));
    let ratio = transfer(Drive::Source(source), voltage, Probe::Current(inductor));
    check(&b, &ratio, &[0, 5], &[1]);
}

#[test]
fn impedance_between_two_nodes() {
    let mut b = Builder::new();
    b.passive("R1", "a", "0", n(2));
    b.passive("R2", "a", "b", n(3));
    b.passive("R3", "b", "0", n(4));
    let port = b.impedance("a", "b");
    // 3 ∥ (2 + 4)
    check(&b, &port, &[2], &[1]);
}

#[test]
fn bridge_balanced_and_not() {
    let bridge = |last| {
        let mut b = Builder::new();
        let source = b.voltage("Vin", "in", "0");
        b.passive("R1", "in", "x", n(1));
        b.passive("R2", "x", "0", n(2));
        b.passive("R3", "in", "y", n(3));
        b.passive("R4", "y", "0", n(last));
        b.passive("R5", "x", "y", n(5));
        let detector = Probe::Voltage(b.node("x"), b.node("y"));
        (b, transfer(Drive::Source(source), detector, Probe::Drive))
    };
    let (b, detector) = bridge(6);
    check(&b, &detector, &[], &[1]);
    // Without R5 the difference is 2/3 − 4/7 = 2/21 behind 2/3 + 12/7 = 50/21: times 5/(5 + 50/21).
    let (b, detector) = bridge(4);
    check(&b, &detector, &[2], &[31]);
}

#[test]
fn sallen_key_low_pass() {
    // Sallen & Key 1955, unity gain: 1/(1 + s C2 (R1 + R2) + s² R1 R2 C1 C2).
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    b.passive("R1", "in", "x", n(2));
    b.passive("R2", "x", "y", n(3));
    b.passive("C2", "y", "0", n(5));
    b.passive("C1", "x", "out", n(7));
    let opamp = b.nullor("U1", "y", "out", "out");
    let gain = b.gain(source, "out");
    check(&b, &gain, &[1], &[1, 25, 210]);
    // The output must supply what C1 takes: i = s C1 (v(x) − v(out)) arrives through C1.
    let current = transfer(Drive::Source(source), Probe::Current(opamp), Probe::Drive);
    check(&b, &current, &[0, 0, 7 * 15], &[1, 25, 210]);
}

#[test]
fn nullor_away_from_ground() {
    // The norator between two nodes turns in · R2/R1 about: a transconductor with its load.
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    let law = Law::Nullor(b.node("in"), b.node("x"));
    b.element("N1", Class::Opamp, ("out", "x"), law);
    b.passive("R1", "x", "0", n(2));
    b.passive("R2", "out", "0", n(6));
    let gain = b.gain(source, "out");
    check(&b, &gain, &[-3], &[1]);
}

#[test]
fn voltage_controlled_sources() {
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    let across = b.across("in", "0");
    let gm = b.symbol("gm", Some(n(3)));
    let stage = b.controlled_current("Ig", ("out", "0"), gm, across);
    b.passive("R1", "out", "0", n(2));
    let gain = b.gain(source, "out");
    check(&b, &gain, &[-6], &[1]);
    let current = transfer(Drive::Source(source), Probe::Current(stage), Probe::Drive);
    check(&b, &current, &[3], &[1]);

    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    let across = b.across("in", "x");
    let gain = Value::Product(vec![
        b.symbol("A0", Some(n(9))),
        Value::Power(Box::new(Value::Sum(vec![constant(1), Value::S])), -1),
    ]);
    b.controlled_voltage("E1", ("x", "0"), gain, across);
    b.passive("R1", "x", "0", n(4));
    // A/(1 + A) with A = 9/(1 + s).
    let gain = b.gain(source, "x");
    check(&b, &gain, &[9], &[10, 1]);
}

/// A current-controlled source with gain 2 whose control is i through `element`, which lies from
/// `in` to ground across 1 V.
fn current_control(element: impl Fn(&mut Builder) -> Quantity, numerator: &[i64], lower: &[i64]) {
    for class in [Class::Current, Class::Voltage] {
        let mut b = Builder::new();
        let source = b.voltage("Vin", "in", "0");
        let control = element(&mut b);
        let gain = b.symbol("k", Some(n(2)));
        if class == Class::Current {
            b.controlled_current("F1", ("0", "out"), gain, control);
        } else {
            b.controlled_voltage("H1", ("out", "0"), gain, control);
        }
        b.passive("Rload", "out", "0", n(1));
        let gain = b.gain(source, "out");
        check(&b, &gain, numerator, lower);
    }
}

#[test]
fn current_controlled_sources() {
    let passive = |name: &'static str| {
        move |b: &mut Builder| Quantity::Current(b.passive(name, "in", "0", n(3)))
    };
    current_control(passive("R1"), &[2], &[3]);
    current_control(passive("G1"), &[6], &[1]);
    current_control(passive("C1"), &[0, 6], &[1]);
    current_control(passive("L1"), &[2], &[0, 3]);
    current_control(
        |b| {
            b.passive("R1", "in", "x", n(3));
            Quantity::Current(b.ammeter("Vsense", "x", "0"))
        },
        &[2],
        &[3],
    );
    current_control(
        |b| {
            b.passive("R1", "in", "0", n(3));
            Quantity::Current(b.circuit.element("Vin").expect("Vin"))
        },
        &[-2],
        &[3],
    );
    // Controlled by another controlled current: 2 · 5 · v(in).
    current_control(
        |b| {
            let across = b.across("in", "0");
            b.passive("R1", "y", "0", n(1));
            Quantity::Current(b.controlled_current("G2", ("y", "0"), constant(5), across))
        },
        &[10],
        &[1],
    );
}

#[test]
fn sums_of_controls_and_expressions() {
    use crate::circuit::Control;
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    let sense = b.passive("R1", "in", "x", n(3));
    b.passive("R2", "x", "0", n(1));
    let law = Law::ControlledVoltage(vec![
        Control { gain: constant(8), quantity: b.across("x", "0") },
        Control { gain: constant(4), quantity: Quantity::Current(sense) },
    ]);
    b.element("E1", Class::Voltage, ("out", "0"), law);
    // v(x) = 1/4, i = 1/4
    let gain = b.gain(source, "out");
    check(&b, &gain, &[3], &[1]);

    // A one-port R ∥ 1/(s C) with R = 2, C = 3 under a 1 A drive: 2/(1 + 6 s).
    let mut b = Builder::new();
    let capacitance = b.symbol("C", Some(n(3)));
    let reactance = Value::Power(Box::new(Value::Product(vec![Value::S, capacitance])), -1);
    let impedance = Value::Parallel(vec![constant(2), reactance]);
    b.element("Z1", Class::Impedance, ("a", "0"), Law::Impedance(impedance));
    let port = b.impedance("a", "0");
    check(&b, &port, &[2], &[1, 6]);
}

#[test]
fn inductor_loop_and_capacitor_cut_set() {
    // Three inductors in a loop: no inductor has a resistor in series.
    let mut b = Builder::new();
    b.passive("L1", "a", "0", n(1));
    b.passive("L2", "a", "b", n(2));
    b.passive("L3", "b", "0", n(3));
    let port = b.impedance("a", "0");
    check(&b, &port, &[0, 5], &[6]);
    // A node with capacitors only keeps its charge; the common factor s cancels.
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    b.passive("C1", "in", "out", n(1));
    b.passive("C2", "out", "0", n(3));
    let gain = b.gain(source, "out");
    check(&b, &gain, &[1], &[4]);
}

#[test]
fn coupled_inductors() {
    // L1 = 6, L2 = 3, M = 4 with the secondary shorted: s (L1 − M²/L2) = 2 s/3.
    let mut b = Builder::new();
    let mutual = || Value::Product(vec![Value::S, constant(4)]);
    let primary = b.passive("L1", "a", "x", n(6));
    let secondary = b.passive("L2", "0", "y", n(3));
    b.controlled_voltage("M1.primary", ("x", "0"), mutual(), Quantity::Current(secondary));
    b.controlled_voltage("M1.secondary", ("y", "0"), mutual(), Quantity::Current(primary));
    let port = b.impedance("a", "0");
    check(&b, &port, &[0, 2], &[3]);
}

#[test]
fn zeroed_and_removed_sources() {
    let mut b = Builder::new();
    b.voltage("V1", "a", "0");
    let second = b.current("I2", "0", "b");
    b.passive("R1", "a", "b", n(2));
    b.passive("R2", "b", "0", n(2));
    // V1 is a short.
    let gain = b.gain(second, "b");
    check(&b, &gain, &[1], &[1]);
    // V1 across the port: a short, unless it is taken out.
    let shorted = b.impedance("a", "0");
    check(&b, &shorted, &[], &[1]);
    let open = Transfer { removed: vec![b.circuit.element("V1").expect("V1")], ..shorted };
    check(&b, &open, &[4], &[1]);
}

#[test]
fn resistance_of_zero() {
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    b.passive("R1", "in", "out", n(0));
    b.passive("R2", "out", "0", n(2));
    let gain = b.gain(source, "out");
    check(&b, &gain, &[1], &[1]);
}

#[test]
fn parts_without_ground() {
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    b.passive("R1", "in", "0", n(1));
    // An ideal transformer, 2 to 1, with a load across its floating secondary.
    let (two, minus_two) = (constant(2), constant(-2));
    let secondary = b.across("c", "d");
    let primary = b.controlled_voltage("T1.primary", ("in", "0"), two, secondary);
    b.controlled_current("T1.secondary", ("c", "d"), minus_two, Quantity::Current(primary));
    b.passive("R2", "c", "d", n(3));
    let voltage = Probe::Voltage(b.node("c"), b.node("d"));
    let across = transfer(Drive::Source(source), voltage, Probe::Drive);
    check(&b, &across, &[1], &[2]);
    assert_eq!(grounded_nodes(&b.circuit, &across), Ok(vec![b.node("c")]));
    let current = transfer(Drive::Source(source), Probe::Current(source), Probe::Drive);
    // 1/1 and, through the transformer, 1/(4·3).
    check(&b, &current, &[-13], &[12]);

    // A source inside a floating part, and currents of 0 between the parts.
    let mut b = Builder::new();
    b.passive("R1", "in", "0", n(1));
    let source = b.current("I1", "c", "d");
    b.passive("R2", "c", "d", n(3));
    b.current("I2", "c", "0");
    b.element("I3", Class::Current, ("d", "in"), Law::ControlledCurrent(Vec::new()));
    let voltage = Probe::Voltage(b.node("c"), b.node("d"));
    let across = transfer(Drive::Source(source), voltage, Probe::Drive);
    check(&b, &across, &[-3], &[1]);

    // A circuit without ground at all.
    let mut b = Builder::new();
    b.passive("R1", "a", "b", n(5));
    b.passive("C1", "a", "b", n(1));
    let port = b.impedance("b", "a");
    check(&b, &port, &[5], &[1, 5]);
}

#[test]
fn response_takes_hertz() {
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    b.passive("R1", "in", "out", n(1));
    b.passive("C1", "out", "0", n(1));
    let gain = b.gain(source, "out");
    let corner = 1.0 / std::f64::consts::TAU;
    let answer = response(&b.circuit, &gain, &[corner], &[1.0, 1.0]).expect("a response");
    // 1/(1 + j)
    assert!((answer[0] - Complex::new(0.5, -0.5)).norm() < 1e-15);
}
