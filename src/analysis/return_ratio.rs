//! Return ratios by Bode's definition (H. W. Bode, Network Analysis and Feedback Amplifier Design,
//! 1945; R. B. Blackman, Bell Syst. Tech. J. 22, 1943).
//!
//! All independent sources are zeroed, the dependent source is replaced by an independent one of
//! the same kind and of size 1, and the return ratio is the negative of what its controls would then make
//! it: T = −Σ gain × returned quantity. It is positive for negative feedback.

use super::AnalysisError;
use super::posed::{Posed, TestBench};
use crate::circuit::{
    Circuit, Control, Drive, ElementId, GROUND, Law, Probe, Transfer, Unit, Value,
};

/// The return ratio of a dependent source as a transfer function.
///
/// # Errors
/// The element is no dependent source.
pub(crate) fn pose(circuit: &Circuit, id: ElementId) -> Result<Posed<'static>, AnalysisError> {
    let (independent, controls) = controls(circuit, id)?;
    let mut bench = TestBench::new(circuit);
    bench.circuit_mut().elements[id.0 as usize].law = independent;
    let negative =
        |control: &Control| (Value::Negative(Box::new(control.gain.clone())), control.quantity);
    let returned = bench.sum(controls.iter().map(negative).collect());
    Ok(bench.pose(Transfer {
        drive: Drive::Source(id),
        numerator: Probe::Voltage(returned, GROUND),
        denominator: Probe::Drive,
        removed: Vec::new(),
        unit: Unit::ONE,
    }))
}

/// The independent source of the same kind, and the controls.
pub(crate) fn controls(
    circuit: &Circuit,
    id: ElementId,
) -> Result<(Law, &[Control]), AnalysisError> {
    let reason = match &circuit[id].law {
        Law::ControlledVoltage(controls) => return Ok((Law::VoltageSource, controls)),
        Law::ControlledCurrent(controls) => return Ok((Law::CurrentSource, controls)),
        Law::Nullor(..) => "is ideal: its return ratio is infinite",
        _ => "is no dependent source, so it has no return ratio",
    };
    Err(AnalysisError::NoLoop { element: circuit[id].name.clone(), reason })
}
