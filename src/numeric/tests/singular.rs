//! Circuits without a unique solution: every witness refuses, none panics.

use crate::circuit::{Class, Drive, ElementId, Law, NodeId, Probe, Transfer, Value};
use crate::numeric::testing::{Builder, constant, number, transfer};
use crate::numeric::{NumericError, PRIMES, exact, modular_value, response};

fn check(builder: &Builder, transfer: &Transfer, expected: &NumericError) {
    let numbers = builder.numbers();
    assert_eq!(exact(&builder.circuit, transfer, &numbers).as_ref(), Err(expected));
    let symbols: Vec<u64> = (0..numbers.len() as u64).map(|k| k * k + 12_345).collect();
    let modular = modular_value(&builder.circuit, transfer, PRIMES[0], 98_765, &symbols);
    assert_eq!(modular.as_ref(), Err(expected));
}

#[test]
fn loops_and_cut_sets_of_sources() {
    // Two voltage sources side by side, one of them zeroed: a loop.
    let mut b = Builder::new();
    let first = b.voltage("V1", "a", "0");
    b.voltage("V2", "a", "0");
    b.passive("R1", "a", "0", number(1, 1));
    let gain = b.gain(first, "a");
    check(&b, &gain, &NumericError::Singular);
    // Two zeroed sources in a loop leave their own currents open.
    let mut b = Builder::new();
    b.voltage("V1", "a", "0");
    b.voltage("V2", "a", "0");
    b.passive("R1", "a", "b", number(1, 1));
    let port = b.impedance("b", "0");
    check(&b, &port, &NumericError::Singular);
    // Two current sources in series: a cut-set.
    let mut b = Builder::new();
    let first = b.current("I1", "0", "a");
    b.current("I2", "a", "0");
    let gain = b.gain(first, "a");
    check(&b, &gain, &NumericError::Singular);
    // The same with a dangling resistor: the driven current cannot return.
    let mut b = Builder::new();
    let first = b.current("I1", "0", "a");
    let load = b.passive("R1", "a", "b", number(1, 1));
    let current = transfer(Drive::Source(first), Probe::Current(load), Probe::Drive);
    check(&b, &current, &NumericError::Singular);
}

#[test]
fn opamps_without_feedback() {
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    b.passive("R1", "out", "0", number(1, 1));
    b.nullor("U1", "in", "0", "out");
    let gain = b.gain(source, "out");
    check(&b, &gain, &NumericError::Singular);
    // An inverting input that nothing joins to the rest.
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    b.passive("R1", "out", "0", number(1, 1));
    b.nullor("U1", "in", "x", "out");
    let gain = b.gain(source, "out");
    check(&b, &gain, &NumericError::Singular);
}

#[test]
fn voltages_across_parts() {
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    b.passive("R1", "in", "0", number(1, 1));
    b.passive("R2", "c", "d", number(1, 1));
    let gain = b.gain(source, "d");
    let across = NumericError::Undetermined { plus: "d".into(), minus: "0".into() };
    check(&b, &gain, &across);
    assert_eq!(
        across.to_string(),
        "the voltage from `d` to `0` is not determined: nothing joins the two parts; connect \
         them, or ask for a voltage inside one of them"
    );
    let port = b.impedance("in", "c");
    check(&b, &port, &NumericError::Singular);
    // A source that reads from another part to ground fixes what Kirchhoff's law leaves open twice.
    let reading = b.across("c", "0");
    b.controlled_current("G1", ("in", "0"), constant(1), reading);
    let gain = b.gain(source, "in");
    check(&b, &gain, &NumericError::Singular);
}

#[test]
fn ratios_over_zero() {
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    let load = b.passive("R1", "in", "0", number(1, 1));
    b.passive("R2", "x", "0", number(1, 1));
    let below = Probe::Voltage(b.node("x"), NodeId(0));
    let ratio = transfer(Drive::Source(source), Probe::Current(load), below);
    check(&b, &ratio, &NumericError::ZeroDenominator);
    let floating = response(&b.circuit, &ratio, &[1.0], &[1.0, 1.0]);
    assert_eq!(floating, Err(NumericError::ZeroDenominator));
}

#[test]
fn division_by_zero_names_the_element() {
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    let zero = Value::Sum(vec![constant(1), Value::Negative(Box::new(constant(1)))]);
    let law = Law::Admittance(Value::Power(Box::new(zero), -1));
    b.element("Y1", Class::Admittance, ("in", "0"), law);
    let gain = b.gain(source, "in");
    check(&b, &gain, &NumericError::DivisionByZero { element: "Y1".into() });
}

#[test]
fn questions_that_do_not_fit() {
    let mut b = Builder::new();
    let source = b.voltage("Vin", "in", "0");
    let load = b.passive("R1", "in", "0", number(1, 1));
    let malformed = |transfer: &Transfer| {
        let found = exact(&b.circuit, transfer, &b.numbers());
        assert!(matches!(found, Err(NumericError::Malformed(_))), "{found:?}");
    };
    let drive = Drive::Source(source);
    malformed(&transfer(drive, Probe::Voltage(NodeId(99), NodeId(0)), Probe::Drive));
    malformed(&transfer(drive, Probe::Current(ElementId(99)), Probe::Drive));
    malformed(&transfer(Drive::Source(load), Probe::Drive, Probe::Drive));
    let ratio = transfer(drive, Probe::Drive, Probe::Drive);
    malformed(&Transfer { removed: vec![source], ..ratio });
}
