//! Ports that take no current.

use super::posed::{Posed, TestBench};
use crate::circuit::{Drive, Probe, Transfer};

/// The same admittance, driven by a test voltage across the port instead of a current into it: the
/// current into the port over its voltage. It exists where the port is open, too. `None` where this
/// is no admittance of a port.
pub(crate) fn driven_by_voltage(posed: &Posed<'_>) -> Option<Posed<'static>> {
    let Drive::Port(plus, minus) = posed.transfer.drive else { return None };
    if posed.transfer.numerator != Probe::Drive {
        return None;
    }
    let mut bench = TestBench::new(&posed.circuit);
    // The source's own current flows from its first node to its second through it; turned round, it
    // is the current into the port.
    let source = bench.source((minus, plus));
    Some(bench.pose(Transfer {
        drive: Drive::Source(source),
        numerator: Probe::Current(source),
        denominator: Probe::Voltage(plus, minus),
        ..posed.transfer.clone()
    }))
}
