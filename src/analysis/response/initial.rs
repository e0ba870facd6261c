//! What energy stored at t = 0 does: an initial voltage is a charge C·v that enters at the capacitor, an
//! initial current a flux that enters in series with the inductor, both as impulses at t = 0.
//!
//! So voltages that a loop of capacitors forces to jump do so by conservation of charge, and currents in a
//! cutset of inductors by conservation of flux (Guillemin 1953).

use num_traits::{ToPrimitive, Zero};

use super::{Factored, ResponseError, TimeFunction};
use crate::algebra::{Univariate, Var};
use crate::analysis::Options;
use crate::analysis::posed::TestBench;
use crate::circuit::{Circuit, Class, Drive, ElementId, Law, Number, Probe, Transfer, Value};
use crate::elimination::{fraction_of, symbol_of};

/// A capacitor's voltage or an inductor's current at t = 0, along its walk.
#[derive(Clone, Debug, PartialEq)]
pub struct InitialCondition {
    /// The capacitor or inductor.
    pub element: ElementId,
    /// In volts or amperes.
    pub value: Number,
}

/// What the stored energy alone does to the upper quantity of a ratio.
///
/// # Errors
/// Elements that store nothing, a ratio that is not taken to its source, values that are missing.
pub fn from_state(
    circuit: &Circuit,
    transfer: &Transfer,
    conditions: &[InitialCondition],
    options: &Options,
) -> Result<TimeFunction, ResponseError> {
    if !is_to_source(circuit, transfer) {
        return Err(ResponseError::NotToSource);
    }
    let mut sum = TimeFunction::default();
    let mut fluxes: Vec<(ElementId, Number)> = Vec::new();
    for condition in conditions {
        let element = &circuit[condition.element];
        let storage = || storage(circuit, element.law.values()[0]);
        match element.class {
            Class::Capacitor => {
                let charge = storage()? * &condition.value;
                let share = injected(circuit, transfer, condition.element, options)?;
                sum = sum.plus(&share, charge.to_f64().unwrap_or(f64::NAN));
            }
            Class::Inductor => {
                add(&mut fluxes, condition.element, storage()? * &condition.value);
                for (other, mutual) in couplings(circuit, condition.element)? {
                    add(&mut fluxes, other, mutual * &condition.value);
                }
            }
            _ => return Err(ResponseError::NoState(element.name.clone())),
        }
    }
    for (inductor, flux) in fluxes {
        let share = injected(circuit, transfer, inductor, options)?;
        sum = sum.plus(&share, flux.to_f64().unwrap_or(f64::NAN));
    }
    Ok(sum)
}

fn add(fluxes: &mut Vec<(ElementId, Number)>, inductor: ElementId, flux: Number) {
    match fluxes.iter_mut().find(|(other, _)| *other == inductor) {
        Some((_, sum)) => *sum += flux,
        None => fluxes.push((inductor, flux)),
    }
}

/// Whether the lower quantity is the source's own, so that it is 1 by definition.
fn is_to_source(circuit: &Circuit, transfer: &Transfer) -> bool {
    match (transfer.drive, transfer.denominator) {
        (_, Probe::Drive) => true,
        (Drive::Source(id), Probe::Voltage(plus, minus)) => {
            let source = &circuit[id];
            matches!(source.law, Law::VoltageSource) && (source.plus, source.minus) == (plus, minus)
        }
        _ => false,
    }
}

/// What a unit of charge or flux at t = 0 does.
fn injected(
    circuit: &Circuit,
    transfer: &Transfer,
    id: ElementId,
    options: &Options,
) -> Result<TimeFunction, ResponseError> {
    let mut bench = TestBench::new(circuit);
    let (plus, minus) = (circuit[id].plus, circuit[id].minus);
    let source = if circuit[id].class == Class::Capacitor {
        // The current enters at the first node.
        bench.add(Class::Current, (minus, plus), Law::CurrentSource)
    } else {
        // The source's voltage drives the current along the walk.
        let middle = bench.node();
        bench.circuit_mut().elements[id.0 as usize].minus = middle;
        bench.source((minus, middle))
    };
    let question =
        Transfer { drive: Drive::Source(source), denominator: Probe::Drive, ..transfer.clone() };
    let derivation = bench.pose(question).derive(options)?;
    let numeric = derivation.numeric.ok_or(ResponseError::TooLarge)?;
    let of = |coefficients: &[Number]| Univariate::from_rationals(coefficients);
    Factored::new(&of(&numeric.numerator), &of(&numeric.denominator))?.impulse()
}

/// The mutual inductances of an inductor with others.
fn couplings(circuit: &Circuit, id: ElementId) -> Result<Vec<(ElementId, Number)>, ResponseError> {
    let mut all = Vec::new();
    for element in &circuit.elements {
        if let Law::Mutual { first, second, inductance } = &element.law {
            let other = match id {
                _ if *first == id => *second,
                _ if *second == id => *first,
                _ => continue,
            };
            all.push((other, storage(circuit, inductance)?));
        }
    }
    Ok(all)
}

/// C of a value s·C, L of s·L, M: the value at s = 1 and the nominal values.
fn storage(circuit: &Circuit, value: &Value) -> Result<Number, ResponseError> {
    let fraction = fraction_of(value).map_err(|_| ResponseError::NotFinite)?;
    let number = |variable: Var| match symbol_of(variable) {
        None => Number::from_integer(1.into()),
        Some(symbol) => circuit[symbol].nominal.clone().unwrap_or_else(Number::zero),
    };
    let below = fraction.denominator().evaluate(number);
    if below.is_zero() {
        return Err(ResponseError::NotFinite);
    }
    Ok(fraction.numerator().evaluate(number) / below)
}
