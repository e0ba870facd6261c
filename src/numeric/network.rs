//! The modified nodal equations of one transfer (Ho, Ruehli & Brennan 1975).
//!
//! Unknowns are the node voltages and the currents of voltage-type branches and of elements whose
//! current is asked for or controls something. [`Network`] is what does not depend on the field;
//! [`Network::assemble`] writes the equations over any field.
//!
//! A part that no branch joins to ground has voltages only up to a common constant: its current
//! sums are dependent. Where nothing reads a voltage across its border, one of its nodes is
//! grounded, which changes no voltage inside and no current. Where something does, the equations
//! are singular for good.

use num_complex::Complex;

use super::{Additive, Field, NumericError};
use crate::circuit::{
    Circuit, Control, Drive, Element, ElementId, GROUND, Law, NodeId, Probe, Quantity, Transfer,
    Value,
};

/// How impedances are written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Form {
    /// As 1/Z in the current sums: fewest unknowns.
    Compact,
    /// As v − Z·i = 0 with a current of their own: no sum of numbers of very different size,
    /// so nothing is lost to rounding before the solve begins.
    Extended,
}

/// A circuit under a transfer, checked and with its floating parts grounded.
#[derive(Debug)]
pub(crate) struct Network<'a> {
    circuit: &'a Circuit,
    transfer: &'a Transfer,
    /// Index of the unknown of each node's voltage; none for grounded nodes.
    unknown: Vec<Option<usize>>,
    /// How many node voltages are unknown.
    voltages: usize,
    /// Elements whose current must be an unknown.
    needs_current: Vec<bool>,
    removed: Vec<bool>,
    /// First nodes of the parts that were grounded.
    pub(crate) grounded: Vec<NodeId>,
}

/// Linear equations: `rows[i]` · x = `right[i]`, and two probes, each `row` · x + `constant`.
///
/// Rows hold contributions that are not yet summed: a column may occur several times.
#[derive(Clone, Debug)]
pub(crate) struct System<E> {
    pub(crate) rows: Vec<Vec<(usize, E)>>,
    pub(crate) right: Vec<E>,
    /// Numerator and denominator.
    pub(crate) probes: [ProbeRow<E>; 2],
    /// The first unknowns are node voltages, this many; the others are currents.
    pub(crate) voltages: usize,
}

/// A linear form of the unknowns.
#[derive(Clone, Debug)]
pub(crate) struct ProbeRow<E> {
    pub(crate) row: Vec<(usize, E)>,
    pub(crate) constant: E,
}

/// A value at numbers, with what its element's law makes of it.
#[derive(Clone, Debug)]
pub(crate) enum Stamp<E> {
    Impedance(E),
    Admittance(E),
    Controls(Vec<E>),
    None,
}

impl<'a> Network<'a> {
    /// Checks the question and finds the parts without ground.
    pub(crate) fn new(circuit: &'a Circuit, transfer: &'a Transfer) -> Result<Self, NumericError> {
        check_ids(circuit, transfer)?;
        let elements = &circuit.elements;
        let mut removed = vec![false; elements.len()];
        for id in &transfer.removed {
            removed[id.0 as usize] = true;
        }
        if let Drive::Source(id) = transfer.drive
            && removed[id.0 as usize]
        {
            return Err(NumericError::Malformed("the drive is taken out"));
        }
        let mut needs_current = vec![false; elements.len()];
        let mut need = |id: ElementId| needs_current[id.0 as usize] = true;
        for probe in [transfer.numerator, transfer.denominator] {
            if let Probe::Current(id) = probe {
                need(id);
            }
        }
        for control in elements.iter().flat_map(|element| controls(&element.law)) {
            if let Quantity::Current(id) = control.quantity {
                need(id);
            }
        }
        let mut network = Self {
            circuit,
            transfer,
            unknown: Vec::new(),
            voltages: 0,
            needs_current,
            removed,
            grounded: Vec::new(),
        };
        network.ground_parts()?;
        Ok(network)
    }

    /// How many node voltages are unknown: a lower bound of the number of unknowns.
    pub(crate) fn voltages(&self) -> usize {
        self.voltages
    }

    /// Whether the upper quantity is a voltage.
    pub(crate) fn asks_voltage(&self) -> bool {
        matches!(self.transfer.numerator, Probe::Voltage(..))
    }

    /// What is wrong where an element's value divides by zero.
    pub(crate) fn divides_by_zero(&self, element: usize) -> NumericError {
        let element = self.circuit.elements[element].name.clone();
        NumericError::DivisionByZero { element }
    }

    /// The laws of the elements, in order; none for one that is taken out.
    pub(crate) fn laws(&self) -> impl Iterator<Item = Option<&'a Law>> {
        let elements = self.circuit.elements.iter().zip(&self.removed);
        elements.map(|(element, removed)| (!removed).then_some(&element.law))
    }

    /// Whether some impedance is 0 at these numbers and s = 1 + j (with that it is a short for good),
    /// or cannot be had there.
    pub(crate) fn has_short(&self, symbols: &[Complex<f64>]) -> bool {
        let is_short =
            |stamp: &Stamp<_>| matches!(stamp, Stamp::Impedance(z) if *z == Complex::ZERO);
        self.stamps(&super::Complexes, symbols, &Complex::new(1.0, 1.0))
            .map_or(true, |stamps| stamps.iter().any(is_short))
    }

    fn present(&self) -> impl Iterator<Item = &'a Element> {
        let elements = self.circuit.elements.iter().zip(&self.removed);
        elements.filter(|(_, removed)| !**removed).map(|(element, _)| element)
    }

    /// Gives every node an unknown, except one of each part.
    fn ground_parts(&mut self) -> Result<(), NumericError> {
        let nodes = self.circuit.nodes.len().max(1);
        let mut parts = Parts::new(nodes);
        let mut touched = vec![false; nodes];
        for element in self.present() {
            touched[element.plus.0 as usize] = true;
            touched[element.minus.0 as usize] = true;
            // A given current does not answer to a voltage: it joins nothing.
            let is_given = match &element.law {
                Law::CurrentSource => true,
                // A control from a node to itself is 0.
                Law::ControlledCurrent(controls) => controls
                    .iter()
                    .all(|control| matches!(control.quantity, Quantity::Voltage(a, b) if a == b)),
                _ => false,
            };
            if !is_given {
                parts.join(element.plus, element.minus);
            }
        }
        let mut same = |a: NodeId, b: NodeId| parts.of(a) == parts.of(b);
        for element in self.present() {
            let reads_across = match &element.law {
                Law::Nullor(a, b) => !same(*a, *b),
                law => controls(law).iter().any(|control| match control.quantity {
                    Quantity::Voltage(a, b) => !same(a, b),
                    Quantity::Current(_) => false,
                }),
            };
            if reads_across {
                return Err(NumericError::Singular);
            }
        }
        let driven = match self.transfer.drive {
            Drive::Port(a, b) => Some((a, b)),
            Drive::Source(id) => {
                let source = &self.circuit[id];
                matches!(source.law, Law::CurrentSource).then_some((source.plus, source.minus))
            }
        };
        if driven.is_some_and(|(a, b)| !same(a, b)) {
            return Err(NumericError::Singular);
        }
        for probe in [self.transfer.numerator, self.transfer.denominator] {
            if let Probe::Voltage(a, b) = probe
                && !same(a, b)
            {
                let name = |id: NodeId| self.circuit[id].name.clone();
                return Err(NumericError::Undetermined { plus: name(a), minus: name(b) });
            }
        }
        // Nodes are visited in order, so the first node of a part is the one that is grounded.
        let mut has_ground = vec![false; nodes];
        for (node, touched) in touched.iter().enumerate() {
            let part = parts.find(node);
            if has_ground[part] {
                self.unknown.push(Some(self.voltages));
                self.voltages += 1;
            } else {
                has_ground[part] = true;
                self.unknown.push(None);
                if node != GROUND.0 as usize && *touched {
                    self.grounded.push(NodeId(u32::try_from(node).unwrap_or(u32::MAX)));
                }
            }
        }
        Ok(())
    }

    /// The equations at these numbers.
    pub(crate) fn assemble<F: Field>(
        &self,
        field: &F,
        symbols: &[F::Element],
        s: &F::Element,
        form: Form,
    ) -> Result<System<F::Element>, NumericError> {
        let mut stamps = self.stamps(field, symbols, s)?;
        let zero = |index: usize| matches!(&stamps[index], Stamp::Impedance(z) if field.is_zero(z));
        let branches = self.branches(|index| form == Form::Extended || zero(index));
        for (stamp, branch) in stamps.iter_mut().zip(&branches.0) {
            if let (Stamp::Impedance(z), None) = (&stamp, branch)
                && let Some(admittance) = field.inverse(z)
            {
                *stamp = Stamp::Admittance(admittance);
            }
        }
        Ok(self.write(field, &stamps, branches))
    }

    /// What the values of all elements are at these numbers.
    pub(crate) fn stamps<F: Field>(
        &self,
        field: &F,
        symbols: &[F::Element],
        s: &F::Element,
    ) -> Result<Vec<Stamp<F::Element>>, NumericError> {
        let elements = self.circuit.elements.iter().zip(&self.removed);
        let stamp = |(element, removed): (&Element, &bool)| match removed {
            true => Ok(Stamp::None),
            false => stamp(field, element, symbols, s)
                .ok_or_else(|| NumericError::DivisionByZero { element: element.name.clone() }),
        };
        elements.map(stamp).collect()
    }

    /// The unknown of each element's current, where it has one, and how many unknowns there are.
    /// `impedance` says which impedances are written with their current.
    pub(crate) fn branches(
        &self,
        impedance: impl Fn(usize) -> bool,
    ) -> (Vec<Option<usize>>, usize) {
        let mut size = self.voltages;
        let branches = self.circuit.elements.iter().enumerate().map(|(index, element)| {
            let is_branch = self.needs_current[index]
                || !self.removed[index]
                    && match &element.law {
                        Law::VoltageSource | Law::ControlledVoltage(_) | Law::Nullor(..) => true,
                        Law::Impedance(_) => impedance(index),
                        _ => false,
                    };
            size += usize::from(is_branch);
            is_branch.then(|| size - 1)
        });
        (branches.collect(), size)
    }

    /// The equations with these stamps; impedances have a branch or have become admittances.
    pub(crate) fn write<A: Additive>(
        &self,
        group: &A,
        stamps: &[Stamp<A::Element>],
        (branches, size): (Vec<Option<usize>>, usize),
    ) -> System<A::Element> {
        let mut writer = Writer {
            group,
            network: self,
            branches,
            rows: vec![Vec::new(); size],
            right: vec![group.zero(); size],
        };
        for (index, stamp) in stamps.iter().enumerate() {
            writer.element(index, stamp);
        }
        if let Drive::Port(a, b) = self.transfer.drive {
            writer.inject(b, a);
        }
        let probes = [self.transfer.numerator, self.transfer.denominator];
        let probes = probes.map(|probe| writer.probe(probe));
        System { rows: writer.rows, right: writer.right, probes, voltages: self.voltages }
    }
}

/// Writes equations over one kind of number.
struct Writer<'n, A: Additive> {
    group: &'n A,
    network: &'n Network<'n>,
    /// The unknown of each element's current.
    branches: Vec<Option<usize>>,
    rows: Vec<Vec<(usize, A::Element)>>,
    right: Vec<A::Element>,
}

impl<A: Additive> Writer<'_, A> {
    fn node(&self, node: NodeId) -> Option<usize> {
        self.network.unknown[node.0 as usize]
    }

    /// The voltage from `a` to `b`, times `factor`, as a linear form.
    fn voltage(&self, a: NodeId, b: NodeId, factor: &A::Element) -> Vec<(usize, A::Element)> {
        let plus = self.node(a).map(|column| (column, factor.clone()));
        let minus = self.node(b).map(|column| (column, self.group.negative(factor)));
        plus.into_iter().chain(minus).collect()
    }

    fn quantity(&self, quantity: Quantity, factor: &A::Element) -> Vec<(usize, A::Element)> {
        match quantity {
            Quantity::Voltage(a, b) => self.voltage(a, b, factor),
            Quantity::Current(id) => {
                let branch = self.branches[id.0 as usize];
                branch.map(|column| (column, factor.clone())).into_iter().collect()
            }
        }
    }

    /// A current, as a linear form, that leaves the node `plus` and enters the node `minus`.
    fn current(&mut self, plus: NodeId, minus: NodeId, form: Vec<(usize, A::Element)>) {
        if let Some(row) = self.node(minus) {
            let group = self.group;
            self.rows[row].extend(form.iter().map(|(c, factor)| (*c, group.negative(factor))));
        }
        if let Some(row) = self.node(plus) {
            self.rows[row].extend(form);
        }
    }

    /// A given current of 1 that leaves the node `plus` and enters the node `minus`.
    fn inject(&mut self, plus: NodeId, minus: NodeId) {
        let one = self.group.one();
        if let Some(row) = self.node(plus) {
            self.right[row] = self.group.subtract(&self.right[row], &one);
        }
        if let Some(row) = self.node(minus) {
            self.right[row] = self.group.add(&self.right[row], &one);
        }
    }

    fn controlled(
        &self,
        controls: &[Control],
        gains: &[A::Element],
        negative: bool,
    ) -> Vec<(usize, A::Element)> {
        let terms = controls.iter().zip(gains).flat_map(|(control, gain)| {
            let gain = if negative { self.group.negative(gain) } else { gain.clone() };
            self.quantity(control.quantity, &gain)
        });
        terms.collect()
    }

    fn element(&mut self, index: usize, stamp: &Stamp<A::Element>) {
        let network = self.network;
        let element = &network.circuit.elements[index];
        let (plus, minus) = (element.plus, element.minus);
        let one = self.group.one();
        let drives = matches!(network.transfer.drive, Drive::Source(id) if id.0 as usize == index);
        let Some(branch) = self.branches[index] else {
            if network.removed[index] {
                return;
            }
            let form = match (&element.law, stamp) {
                (Law::Impedance(_) | Law::Admittance(_), Stamp::Admittance(y)) => {
                    self.voltage(plus, minus, y)
                }
                (Law::ControlledCurrent(controls), Stamp::Controls(gains)) => {
                    self.controlled(controls, gains, false)
                }
                _ => {
                    if drives {
                        self.inject(plus, minus);
                    }
                    return;
                }
            };
            self.current(plus, minus, form);
            return;
        };
        let own = (branch, one.clone());
        if network.removed[index] {
            // Taken out: it carries no current.
            self.rows[branch] = vec![own];
            return;
        }
        self.current(plus, minus, vec![own.clone()]);
        let mut row = match (&element.law, stamp) {
            (Law::Impedance(_) | Law::VoltageSource | Law::ControlledVoltage(_), _) => {
                self.voltage(plus, minus, &one)
            }
            (Law::Nullor(a, b), _) => self.voltage(*a, *b, &one),
            (Law::Admittance(_), Stamp::Admittance(y)) => {
                self.voltage(plus, minus, &self.group.negative(y))
            }
            _ => Vec::new(),
        };
        match (&element.law, stamp) {
            (Law::Impedance(_), Stamp::Impedance(z)) => row.push((branch, self.group.negative(z))),
            (
                Law::ControlledVoltage(controls) | Law::ControlledCurrent(controls),
                Stamp::Controls(gains),
            ) => row.extend(self.controlled(controls, gains, true)),
            _ => {}
        }
        if matches!(
            element.law,
            Law::Admittance(_) | Law::CurrentSource | Law::ControlledCurrent(_)
        ) {
            row.push(own);
        }
        self.rows[branch] = row;
        if drives {
            self.right[branch] = one;
        }
    }

    fn probe(&self, probe: Probe) -> ProbeRow<A::Element> {
        let (zero, one) = (self.group.zero(), self.group.one());
        match probe {
            Probe::Voltage(a, b) => ProbeRow { row: self.voltage(a, b, &one), constant: zero },
            Probe::Current(id) => {
                ProbeRow { row: self.quantity(Quantity::Current(id), &one), constant: zero }
            }
            Probe::Drive => ProbeRow { row: Vec::new(), constant: one },
        }
    }
}

fn stamp<F: Field>(
    field: &F,
    element: &Element,
    symbols: &[F::Element],
    s: &F::Element,
) -> Option<Stamp<F::Element>> {
    let at = |value: &Value| super::evaluate(field, value, symbols, s);
    Some(match &element.law {
        Law::Impedance(value) => Stamp::Impedance(at(value)?),
        Law::Admittance(value) => Stamp::Admittance(at(value)?),
        Law::ControlledVoltage(controls) | Law::ControlledCurrent(controls) => {
            Stamp::Controls(controls.iter().map(|c| at(&c.gain)).collect::<Option<_>>()?)
        }
        // Magnetic elements were lowered before.
        _ => Stamp::None,
    })
}

fn controls(law: &Law) -> &[Control] {
    match law {
        Law::ControlledVoltage(controls) | Law::ControlledCurrent(controls) => controls,
        _ => &[],
    }
}

/// Sums contributions to the same column; the result is sorted by column and keeps zeros.
pub(crate) fn summed<F: Field>(field: &F, row: &[(usize, F::Element)]) -> Vec<(usize, F::Element)> {
    let mut row = row.to_vec();
    row.sort_by_key(|(column, _)| *column);
    let mut sums: Vec<(usize, F::Element)> = Vec::with_capacity(row.len());
    for (column, part) in row {
        match sums.last_mut() {
            Some((last, sum)) if *last == column => *sum = field.add(sum, &part),
            _ => sums.push((column, part)),
        }
    }
    sums
}

/// The nodes that the solve of this transfer grounds because their parts have no ground.
///
/// # Errors
/// [`NumericError::Singular`] where such a part cannot be solved by itself,
/// [`NumericError::Undetermined`] where a voltage between two parts is asked for.
pub fn grounded_nodes(circuit: &Circuit, transfer: &Transfer) -> Result<Vec<NodeId>, NumericError> {
    Ok(Network::new(&super::lowered(circuit), transfer)?.grounded)
}

fn check_ids(circuit: &Circuit, transfer: &Transfer) -> Result<(), NumericError> {
    let node = |id: NodeId| (id.0 as usize) < circuit.nodes.len();
    let element = |id: ElementId| (id.0 as usize) < circuit.elements.len();
    let quantity = |quantity: Quantity| match quantity {
        Quantity::Voltage(a, b) => node(a) && node(b),
        Quantity::Current(id) => element(id),
    };
    let probe = |probe: Probe| match probe {
        Probe::Voltage(a, b) => node(a) && node(b),
        Probe::Current(id) => element(id),
        Probe::Drive => true,
    };
    let law = |law: &Law| match law {
        Law::Nullor(a, b) => node(*a) && node(*b),
        law => controls(law).iter().all(|control| quantity(control.quantity)),
    };
    let fits = circuit.elements.iter().all(|e| node(e.plus) && node(e.minus) && law(&e.law))
        && probe(transfer.numerator)
        && probe(transfer.denominator)
        && transfer.removed.iter().all(|id| element(*id));
    if !fits {
        return Err(NumericError::Malformed("a node or an element is not in the circuit"));
    }
    let drive = match transfer.drive {
        Drive::Port(a, b) => node(a) && node(b),
        Drive::Source(id) => {
            element(id) && matches!(circuit[id].law, Law::VoltageSource | Law::CurrentSource)
        }
    };
    if drive { Ok(()) } else { Err(NumericError::Malformed("the drive is no independent source")) }
}

/// Disjoint sets of nodes, with path halving (Tarjan & van Leeuwen 1984).
struct Parts(Vec<usize>);

impl Parts {
    fn new(nodes: usize) -> Self {
        Self((0..nodes).collect())
    }

    fn find(&mut self, mut node: usize) -> usize {
        while self.0[node] != node {
            self.0[node] = self.0[self.0[node]];
            node = self.0[node];
        }
        node
    }

    fn of(&mut self, node: NodeId) -> usize {
        self.find(node.0 as usize)
    }

    fn join(&mut self, a: NodeId, b: NodeId) {
        let (a, b) = (self.of(a), self.of(b));
        // The lower index leads, so that node order decides and nothing else.
        self.0[a.max(b)] = a.min(b);
    }
}
