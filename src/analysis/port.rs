//! Ports that take no current.

use crate::circuit::{Circuit, Class, Drive, Element, ElementId, Law, Probe, Transfer};

/// Whether this asks for the current into a port over its voltage, driven by a current.
pub(crate) fn is_admittance(transfer: &Transfer) -> bool {
    matches!(transfer.drive, Drive::Port(..)) && transfer.numerator == Probe::Drive
}

/// The same admittance, driven by a test voltage across the port instead of a current into it: the
/// current that leaves the source's first node over its voltage. It exists where the port is open.
pub(crate) fn with_test_voltage(circuit: &Circuit, transfer: &Transfer) -> (Circuit, Transfer) {
    let mut driven = circuit.clone();
    let Drive::Port(plus, minus) = transfer.drive else {
        return (driven, transfer.clone());
    };
    let source = ElementId(driven.elements.len() as u32);
    driven.elements.push(Element {
        name: "test voltage".to_owned(),
        class: Class::Voltage,
        // The source's own current flows from plus to minus through it; turned round, it is the
        // current into the port.
        plus: minus,
        minus: plus,
        law: Law::VoltageSource,
        line: 0,
    });
    let transfer = Transfer {
        drive: Drive::Source(source),
        numerator: Probe::Current(source),
        denominator: Probe::Voltage(plus, minus),
        ..transfer.clone()
    };
    (driven, transfer)
}
