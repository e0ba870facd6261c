//! Two-port parameters: each entry is a transfer function of the circuit with test elements at its
//! ports, so that it is eliminated, nested and judged like any other.
//!
//! Port currents are counted into the first node of a port. Conventions:
//!
//! - chain: (V1, I1) = a·(V2, −I2); inverse chain: (V2, I2) = b·(V1, −I1) (IEC 60050-131, 131-14);
//! - scattering: waves a = (V + R·I)/(2√R), b = (V − R·I)/(2√R) at a real reference R
//!   (K. Kurokawa, IEEE Trans. Microw. Theory Tech. 13, 1965);
//! - transfer scattering: (b1, a1) = t·(a2, b2), so that cascaded two-ports multiply.
//!
//! The chain sets fix both quantities of one port at once: a nullator with a source in series (or in
//! parallel) does that, and a norator at the other port lets its voltage and current be what they must
//! (B. D. H. Tellegen, 1954). So they exist exactly when this circuit has a unique solution.

use super::posed::{Posed, TestBench};
use super::{AnalysisError, Entry, Options};
use crate::circuit::{
    Ask, Circuit, Drive, GROUND, NodeId, Number, ParameterSet, Probe, Quantity, Transfer, TwoPort,
    Unit, Value,
};

type Port = (NodeId, NodeId);

/// The entries in the order 11, 12, 21, 22.
const PLACES: [(usize, usize); 4] = [(1, 1), (1, 2), (2, 1), (2, 2)];

/// The four entries of a set, named `P.z11` … `P.z22`.
///
/// # Errors
/// [`AnalysisError::NoParameters`] when the set does not exist; those of the derivations.
pub(crate) fn answer(
    circuit: &Circuit,
    ask: &Ask,
    ports: &TwoPort,
    options: &Options,
) -> Result<Vec<Entry>, AnalysisError> {
    let entry = |(row, column): (usize, usize)| {
        let posed = pose(circuit, ports, (row, column));
        let derivation =
            posed.derive(options).map_err(|error| absent(circuit, ports, error, options))?;
        let name = format!("{}.{}{row}{column}", ask.name, ports.set.letter());
        let unit = posed.transfer.unit;
        Ok(Entry::new(circuit, name, ask.text.clone(), unit, derivation))
    };
    PLACES.into_iter().map(entry).collect()
}

/// Tells which sets exist where this one does not.
fn absent(
    circuit: &Circuit,
    ports: &TwoPort,
    error: AnalysisError,
    options: &Options,
) -> AnalysisError {
    let is_absent = |error: &AnalysisError| {
        matches!(
            error,
            AnalysisError::Singular { .. }
                | AnalysisError::Infinite { .. }
                | AnalysisError::NotConnected(..)
        )
    };
    if !is_absent(&error) {
        return error;
    }
    let one = Value::Number(Number::from_integer(1.into()));
    let exists = |set: ParameterSet| {
        // Whether a scattering set exists does not hang on the reference.
        let reference = ports.reference.clone().or_else(|| Some(one.clone()));
        let other = TwoPort { set, reference, ..ports.clone() };
        PLACES.iter().all(|&place| pose(circuit, &other, place).eliminate(options).is_ok())
    };
    let others: Vec<&'static str> = [
        ParameterSet::Z,
        ParameterSet::Y,
        ParameterSet::H,
        ParameterSet::G,
        ParameterSet::Chain,
        ParameterSet::InverseChain,
        ParameterSet::Scattering,
        ParameterSet::TransferScattering,
    ]
    .into_iter()
    .filter(|&set| set != ports.set && exists(set))
    .map(word)
    .collect();
    if others.is_empty() {
        // Then it is not the set that is to blame.
        return error;
    }
    AnalysisError::NoParameters { set: word(ports.set), reason: reason(ports.set), others }
}

/// The set as it is written in a query.
fn word(set: ParameterSet) -> &'static str {
    match set {
        ParameterSet::Z => "z",
        ParameterSet::Y => "y",
        ParameterSet::H => "h",
        ParameterSet::G => "g",
        ParameterSet::Chain => "chain",
        ParameterSet::InverseChain => "inverse_chain",
        ParameterSet::Scattering => "scattering",
        ParameterSet::TransferScattering => "transfer_scattering",
    }
}

fn reason(set: ParameterSet) -> &'static str {
    match set {
        ParameterSet::Z => "the currents of the two ports cannot be chosen independently",
        ParameterSet::Y => "the voltages of the two ports cannot be chosen independently",
        ParameterSet::H => {
            "the current of port 1 and the voltage of port 2 cannot be chosen independently"
        }
        ParameterSet::G => {
            "the voltage of port 1 and the current of port 2 cannot be chosen independently"
        }
        ParameterSet::Chain => {
            "the voltage and the current of port 2 do not determine those of port 1"
        }
        ParameterSet::InverseChain => {
            "the voltage and the current of port 1 do not determine those of port 2"
        }
        ParameterSet::Scattering => {
            "with both ports terminated in the reference resistance there is no unique solution"
        }
        ParameterSet::TransferScattering => "the waves at port 2 do not determine those at port 1",
    }
}

/// One entry as a transfer function.
pub(crate) fn pose(
    circuit: &Circuit,
    ports: &TwoPort,
    (row, column): (usize, usize),
) -> Posed<'static> {
    let here = [ports.port1, ports.port2];
    let there = [ports.port2, ports.port1];
    // Counted from the other port: 1 for 2 and 2 for 1.
    let turned = (3 - row, 3 - column);
    let mut bench = TestBench::new(circuit);
    let (drive, numerator, denominator, unit) = match ports.set {
        ParameterSet::Z => impedance(here, (row, column)),
        ParameterSet::Y => admittance(&mut bench, here, (row, column)),
        ParameterSet::H => hybrid(&mut bench, here, (row, column)),
        ParameterSet::G => hybrid(&mut bench, there, turned),
        ParameterSet::Chain => chain(&mut bench, here, (row, column)),
        ParameterSet::InverseChain => chain(&mut bench, there, (row, column)),
        ParameterSet::Scattering => scattering(&mut bench, here, (row, column), &reference(ports)),
        ParameterSet::TransferScattering => {
            transfer_scattering(&mut bench, here, (row, column), &reference(ports))
        }
    };
    let removed = ports.removed.clone();
    bench.pose(Transfer { drive, numerator, denominator, removed, unit })
}

/// The resolver gives every scattering set its reference.
fn reference(ports: &TwoPort) -> Value {
    ports.reference.clone().unwrap_or_else(|| number(1, 1))
}

fn number(numerator: i64, denominator: i64) -> Value {
    Value::Number(Number::new(numerator.into(), denominator.into()))
}

/// The second node first: a current along this walk outside the circuit flows into the port.
fn outside(port: Port) -> Port {
    (port.1, port.0)
}

fn voltage(port: Port) -> Probe {
    Probe::Voltage(port.0, port.1)
}

/// Excitation, upper and lower quantity, unit.
type Question = (Drive, Probe, Probe, Unit);

fn impedance(ports: [Port; 2], (row, column): (usize, usize)) -> Question {
    let driven = ports[column - 1];
    (Drive::Port(driven.0, driven.1), voltage(ports[row - 1]), Probe::Drive, Unit::OHM)
}

/// One port driven by a voltage, the other shorted by an ammeter.
fn admittance(bench: &mut TestBench, ports: [Port; 2], (row, column): (usize, usize)) -> Question {
    let driven = ports[column - 1];
    let source = bench.source(outside(driven));
    let other = bench.ammeter(outside(ports[2 - column]));
    let current = if row == column { source } else { other };
    (Drive::Source(source), Probe::Current(current), voltage(driven), Unit::SIEMENS)
}

/// (V1, I2) = h·(I1, V2)
fn hybrid(bench: &mut TestBench, ports: [Port; 2], (row, column): (usize, usize)) -> Question {
    let [first, second] = ports;
    if column == 1 {
        let meter = bench.ammeter(outside(second));
        let (probe, unit) = match row {
            1 => (voltage(first), Unit::OHM),
            _ => (Probe::Current(meter), Unit::ONE),
        };
        return (Drive::Port(first.0, first.1), probe, Probe::Drive, unit);
    }
    let source = bench.source(outside(second));
    let (probe, unit) = match row {
        1 => (voltage(first), Unit::ONE),
        _ => (Probe::Current(source), Unit::SIEMENS),
    };
    (Drive::Source(source), probe, voltage(second), unit)
}

/// (V1, I1) = a·(V2, −I2)
fn chain(bench: &mut TestBench, ports: [Port; 2], (row, column): (usize, usize)) -> Question {
    let [first, second] = ports;
    let (drive, free) = if column == 1 {
        let (source, free) = fixed_voltage(bench, ports);
        (Drive::Source(source), free)
    } else {
        // V2 = 0 by the nullator, and 1 A leaves port 2.
        let free = bench.nullor(outside(first), second);
        (Drive::Port(second.1, second.0), free)
    };
    let probe = if row == 1 { voltage(first) } else { Probe::Current(free) };
    let unit = match (row, column) {
        (1, 2) => Unit::OHM,
        (2, 1) => Unit::SIEMENS,
        _ => Unit::ONE,
    };
    (drive, probe, Probe::Drive, unit)
}

/// V2 = 1 V without any current from the source, whatever that takes at port 1; the source and the
/// norator, whose current is I1.
fn fixed_voltage(
    bench: &mut TestBench,
    [first, second]: [Port; 2],
) -> (crate::circuit::ElementId, crate::circuit::ElementId) {
    let node = bench.node();
    let source = bench.source((second.0, node));
    let free = bench.nullor(outside(first), (node, second.1));
    (source, free)
}

/// b = s·a: the source behind R makes a1 = Vs/(2√R), and b = (2·V − Vs)/(2√R), at the other port
/// 2·V/(2√R).
fn scattering(
    bench: &mut TestBench,
    ports: [Port; 2],
    (row, column): (usize, usize),
    reference: &Value,
) -> Question {
    let (driven, other) = (ports[column - 1], ports[2 - column]);
    let node = bench.node();
    let source = bench.source((node, driven.1));
    bench.resistance((node, driven.0), reference.clone());
    bench.resistance(other, reference.clone());
    let probed = ports[row - 1];
    let mut terms = vec![(number(2, 1), Quantity::Voltage(probed.0, probed.1))];
    if row == column {
        terms.push((number(-1, 1), Quantity::Voltage(node, driven.1)));
    }
    let wave = bench.sum(terms);
    (Drive::Source(source), Probe::Voltage(wave, GROUND), Probe::Drive, Unit::ONE)
}

/// (b1, a1) = t·(a2, b2): with V2 = 1 V and R or −R across port 2, one of its waves is 0 and the
/// other is 2·V2/(2√R).
fn transfer_scattering(
    bench: &mut TestBench,
    ports: [Port; 2],
    (row, column): (usize, usize),
    reference: &Value,
) -> Question {
    let [first, second] = ports;
    let (source, free) = fixed_voltage(bench, ports);
    let load = match column {
        1 => Value::Negative(Box::new(reference.clone())),
        _ => reference.clone(),
    };
    bench.resistance(second, load);
    let sign = if row == 1 { -1 } else { 1 };
    let half = Value::Product(vec![number(sign, 2), reference.clone()]);
    let wave = bench.sum(vec![
        (number(1, 2), Quantity::Voltage(first.0, first.1)),
        (half, Quantity::Current(free)),
    ]);
    (Drive::Source(source), Probe::Voltage(wave, GROUND), Probe::Drive, Unit::ONE)
}
