//! From a circuit and a question to choices on two graphs.
//!
//! Elements with the same pair of ports are lumped first (parallel R, C, g_m: about a third fewer
//! levels). A current that controls something, or that is asked for, belongs to a resistor or the
//! like either as the common factor of one choice (current-controlled current sources), or is
//! turned into the voltage of a node of its own by a short in series. One more choice holds the
//! question: its alternatives are the determinants that the answer is a ratio of.
//!
//! Elements and nodes are taken in the order of their names, so that the order of the lines of a
//! file cannot show in the result.

use std::collections::BTreeMap;
use std::collections::btree_map::Entry;

use super::choice::{Alternative, Choice, MultiPort, Pair};
use super::error::EliminationError;
use super::value::{DividesByZero, fraction_of};
use crate::algebra::{Fraction, Polynomial, Var, gcd};
use crate::circuit::{
    Circuit, Control, Drive, ElementId, GROUND, Law, NodeId, Probe, Quantity, Transfer, Value,
    compare_names,
};

/// The choices of a circuit under a question.
#[derive(Clone, Debug)]
pub(crate) struct System {
    /// One for each lump, element and sensed current; the question's stands last.
    pub(crate) choices: Vec<Choice>,
    /// For each choice the elements that it stands for.
    pub(crate) origins: Vec<Vec<ElementId>>,
    /// For each choice whether two of its alternatives can never lead to equal terms, whatever
    /// their weights (a sensed current: which alternative is taken follows from the others).
    pub(crate) forced: Vec<bool>,
    /// Nodes including the reference, which is 0.
    pub(crate) nodes: usize,
    /// Parts without a connection to the reference, one node of each grounded: (node, its part).
    pub(crate) grounded: Vec<(NodeId, Vec<NodeId>)>,
    /// Index of the question's alternative that is the ratio's numerator.
    pub(crate) numerator: usize,
    /// Likewise the denominator.
    pub(crate) denominator: usize,
    /// Likewise the determinant of the network itself.
    pub(crate) determinant: usize,
}

impl System {
    /// Index of the choice that holds the question.
    pub(crate) fn question(&self) -> usize {
        self.choices.len() - 1
    }

    /// For each choice the number of its first weight, through all choices.
    pub(crate) fn first_weights(&self) -> Vec<u32> {
        let mut next = 0;
        self.choices
            .iter()
            .map(|choice| {
                let first = next;
                next += choice.alternatives.len() as u32;
                first
            })
            .collect()
    }
}

/// Builds the choices of `circuit` for one transfer function.
pub(crate) fn build(circuit: &Circuit, transfer: &Transfer) -> Result<System, EliminationError> {
    let mut builder = Builder::new(circuit, transfer);
    builder.split_sensed();
    builder.stamp_elements()?;
    let mut system = builder.question()?;
    super::parts::ground_floating(circuit, transfer, &mut system)?;
    Ok(system)
}

struct Builder<'c> {
    circuit: &'c Circuit,
    transfer: &'c Transfer,
    /// Elements by name; sources that are taken out are left out.
    elements: Vec<ElementId>,
    /// Node of the choices for each node of the circuit.
    node_of: Vec<u32>,
    nodes: u32,
    /// The far end of an element's own branch, where a sensing short follows it.
    split: BTreeMap<ElementId, u32>,
    /// The node whose voltage is the element's current.
    sense: BTreeMap<ElementId, u32>,
    /// Couplings (first, second, M) that are not stamped yet.
    couplings: Vec<(ElementId, ElementId, Fraction, ElementId)>,
    /// Controlled current sources that hang on the current of a one-port: (output pair, gain).
    mirrors: BTreeMap<ElementId, Vec<(Pair, Fraction, ElementId)>>,
    /// Sums of (trans)admittances by (current pair, voltage pair), first node below the second.
    lumps: BTreeMap<(Pair, Pair), (Fraction, Vec<ElementId>)>,
    choices: Vec<Choice>,
    origins: Vec<Vec<ElementId>>,
    forced: Vec<bool>,
}

impl<'c> Builder<'c> {
    fn new(circuit: &'c Circuit, transfer: &'c Transfer) -> Self {
        let mut elements: Vec<ElementId> = (0..circuit.elements.len() as u32)
            .map(ElementId)
            .filter(|id| !transfer.removed.contains(id))
            .collect();
        elements.sort_by(|&a, &b| compare_names(&circuit[a].name, &circuit[b].name));
        let mut by_name: Vec<u32> = (1..circuit.nodes.len() as u32).collect();
        by_name.sort_by(|&a, &b| compare_names(&circuit[NodeId(a)].name, &circuit[NodeId(b)].name));
        let mut node_of = vec![0; circuit.nodes.len()];
        for (index, node) in by_name.into_iter().enumerate() {
            node_of[node as usize] = index as u32 + 1;
        }
        Self {
            circuit,
            transfer,
            elements,
            node_of,
            nodes: circuit.nodes.len() as u32,
            split: BTreeMap::new(),
            sense: BTreeMap::new(),
            couplings: Vec::new(),
            mirrors: BTreeMap::new(),
            lumps: BTreeMap::new(),
            choices: Vec::new(),
            origins: Vec::new(),
            forced: Vec::new(),
        }
    }

    fn pair(&self, plus: NodeId, minus: NodeId) -> Pair {
        Pair(self.node_of[plus.0 as usize], self.node_of[minus.0 as usize])
    }

    /// Where the element's own branch lies: up to its sensing short, if it has one.
    fn own_pair(&self, id: ElementId) -> Pair {
        let element = &self.circuit[id];
        let whole = self.pair(element.plus, element.minus);
        Pair(whole.0, self.split.get(&id).copied().unwrap_or(whole.1))
    }

    /// Decides for every current that is needed how it is had, and makes its nodes.
    fn split_sensed(&mut self) {
        let mut mirrored: BTreeMap<ElementId, ()> = BTreeMap::new();
        let mut sensed: BTreeMap<ElementId, ()> = BTreeMap::new();
        for &id in &self.elements {
            let (controls, is_current) = match &self.circuit[id].law {
                Law::ControlledVoltage(controls) => (controls, false),
                Law::ControlledCurrent(controls) => (controls, true),
                _ => continue,
            };
            for control in controls {
                let Quantity::Current(of) = control.quantity else { continue };
                let one_port =
                    matches!(self.circuit[of].law, Law::Impedance(_) | Law::Admittance(_));
                if is_current && one_port && !self.is_coupled(of) {
                    mirrored.insert(of, ());
                } else {
                    sensed.insert(of, ());
                }
            }
        }
        for probe in [self.transfer.numerator, self.transfer.denominator] {
            if let Probe::Current(of) = probe {
                sensed.insert(of, ());
            }
        }
        for &id in &self.elements {
            if sensed.contains_key(&id) {
                self.split.insert(id, self.nodes);
                self.sense.insert(id, self.nodes + 1);
                self.nodes += 2;
            } else if mirrored.contains_key(&id) {
                self.mirrors.insert(id, Vec::new());
            }
        }
    }

    fn is_coupled(&self, id: ElementId) -> bool {
        self.circuit.elements.iter().any(|element| {
            matches!(element.law, Law::Mutual { first, second, .. } if first == id || second == id)
        })
    }

    fn push(&mut self, choice: Choice, origin: Vec<ElementId>, forced: bool) {
        self.choices.push(choice);
        self.origins.push(origin);
        self.forced.push(forced);
    }

    fn stamp_elements(&mut self) -> Result<(), EliminationError> {
        for id in self.elements.clone() {
            self.stamp_sense(id);
            let pair = self.own_pair(id);
            match &self.circuit[id].law {
                Law::ControlledCurrent(controls) => self.stamp_controlled_current(id, controls)?,
                Law::ControlledVoltage(controls) => self.stamp_controlled_voltage(id, controls)?,
                Law::Nullor(plus, minus) => {
                    let nullator = self.pair(*plus, *minus);
                    self.push(nullor(pair, nullator).choice(), vec![id], false);
                }
                Law::VoltageSource if self.transfer.drive != Drive::Source(id) => {
                    self.push(short(pair), vec![id], false);
                }
                Law::Transformer { ratio, secondary } => {
                    let ratio = self.fraction(id, ratio)?;
                    let second = self.pair(secondary.0, secondary.1);
                    self.push(transformer(pair, second, &ratio).choice(), vec![id], false);
                }
                Law::Gyrator { conductance, second } => {
                    let conductance = self.fraction(id, conductance)?;
                    let second = self.pair(second.0, second.1);
                    self.push(gyrator(pair, second, &conductance).choice(), vec![id], false);
                }
                Law::Mutual { first, second, inductance } => {
                    let inductance = self.fraction(id, inductance)?;
                    self.couplings.push((*first, *second, inductance, id));
                }
                Law::Impedance(_)
                | Law::Admittance(_)
                | Law::VoltageSource
                | Law::CurrentSource => {}
            }
        }
        let coupled = self.stamp_coupled()?;
        // One-ports last: the mirrors of their currents are all known now.
        for id in self.elements.clone() {
            let (Law::Impedance(value) | Law::Admittance(value)) = &self.circuit[id].law else {
                continue;
            };
            if coupled.contains(&id) {
                continue;
            }
            self.stamp_one_port(id, value)?;
        }
        for ((current, voltage), (sum, origin)) in std::mem::take(&mut self.lumps) {
            let choice = transadmittance(current, voltage, &sum).choice();
            self.push(choice, origin, false);
        }
        Ok(())
    }

    /// The short behind an element whose current is sensed: v(m) = 1 Ω · i.
    fn stamp_sense(&mut self, id: ElementId) {
        let (Some(&split), Some(&sense)) = (self.split.get(&id), self.sense.get(&id)) else {
            return;
        };
        let minus = self.node_of[self.circuit[id].minus.0 as usize];
        let port = MultiPort {
            ports: vec![Pair(split, minus), Pair(sense, 0)],
            a: matrix([[1, 0], [0, 1]]),
            b: matrix([[0, 0], [-1, 0]]),
        };
        self.push(port.choice(), vec![id], true);
    }

    fn stamp_one_port(&mut self, id: ElementId, value: &Value) -> Result<(), EliminationError> {
        let value = self.fraction(id, value)?;
        let pair = self.own_pair(id);
        let is_impedance = matches!(self.circuit[id].law, Law::Impedance(_));
        let mirrors = self.mirrors.remove(&id);
        let admittance = if is_impedance { value.recip() } else { Some(value) };
        let Some(admittance) = admittance else {
            // 0 Ω: a short; its current is no function of its voltage.
            let port = mirrors_of_short(pair, mirrors.as_deref().unwrap_or_default());
            let mut origin = vec![id];
            origin.extend(mirrors.into_iter().flatten().map(|(.., id)| id));
            if pair.0 != pair.1 {
                self.push(port.choice(), origin, false);
            }
            return Ok(());
        };
        match mirrors {
            Some(mirrors) => {
                let mut origin = vec![id];
                origin.extend(mirrors.iter().map(|&(.., id)| id));
                let port = mirrored_one_port(pair, &admittance, &mirrors);
                self.push(port.choice(), origin, false);
            }
            None => self.lump(pair, pair, &admittance, id),
        }
        Ok(())
    }

    /// Inductors that couplings join, each group as one element; the inductors that are done.
    fn stamp_coupled(&mut self) -> Result<Vec<ElementId>, EliminationError> {
        let mut done = Vec::new();
        let mut rest = std::mem::take(&mut self.couplings);
        while let Some(&(start, ..)) = rest.first() {
            let mut group = vec![start];
            let mut own = Vec::new();
            while let Some(at) = rest
                .iter()
                .position(|(first, second, ..)| group.contains(first) || group.contains(second))
            {
                let coupling = rest.remove(at);
                for inductor in [coupling.0, coupling.1] {
                    if !group.contains(&inductor) {
                        group.push(inductor);
                    }
                }
                own.push(coupling);
            }
            group.sort_by(|&a, &b| compare_names(&self.circuit[a].name, &self.circuit[b].name));
            let mut impedances = vec![vec![Fraction::zero(); group.len()]; group.len()];
            for (index, &inductor) in group.iter().enumerate() {
                if let Law::Impedance(value) = &self.circuit[inductor].law {
                    impedances[index][index] = self.fraction(inductor, value)?;
                }
            }
            let s = Fraction::from(Polynomial::variable(Var::S));
            let mut origin = group.clone();
            for (first, second, inductance, id) in own {
                let at = |inductor| group.iter().position(|&other| other == inductor);
                if let (Some(a), Some(b)) = (at(first), at(second)) {
                    let mutual = &s * &inductance;
                    impedances[a][b] = &impedances[a][b] + &mutual;
                    impedances[b][a] = &impedances[b][a] + &mutual;
                }
                origin.push(id);
            }
            let ports: Vec<Pair> = group.iter().map(|&inductor| self.own_pair(inductor)).collect();
            self.push(impedance_matrix(ports, &impedances).choice(), origin, false);
            done.extend(group);
        }
        Ok(done)
    }

    /// Adds a (trans)admittance: current through `current`, for the voltage of `voltage`.
    fn lump(&mut self, current: Pair, voltage: Pair, value: &Fraction, id: ElementId) {
        if current.0 == current.1 || voltage.0 == voltage.1 {
            return;
        }
        let (current, flipped_current) = ascending(current);
        let (voltage, flipped_voltage) = ascending(voltage);
        let value = if flipped_current ^ flipped_voltage { -value } else { value.clone() };
        match self.lumps.entry((current, voltage)) {
            Entry::Vacant(place) => {
                place.insert((value, vec![id]));
            }
            Entry::Occupied(mut place) => {
                let (sum, origin) = place.get_mut();
                *sum = &*sum + &value;
                origin.push(id);
            }
        }
    }

    fn fraction(&self, id: ElementId, value: &Value) -> Result<Fraction, EliminationError> {
        fraction_of(value).map_err(|DividesByZero| EliminationError::DivisionByZero(id))
    }

    /// The pair whose voltage a control is, where it is one.
    fn control_pair(&self, quantity: Quantity) -> Option<Pair> {
        match quantity {
            Quantity::Voltage(plus, minus) => Some(self.pair(plus, minus)),
            Quantity::Current(of) => self.sense.get(&of).map(|&sense| Pair(sense, 0)),
        }
    }

    fn stamp_controlled_current(
        &mut self,
        id: ElementId,
        controls: &[Control],
    ) -> Result<(), EliminationError> {
        let pair = self.own_pair(id);
        for control in controls {
            let gain = self.fraction(id, &control.gain)?;
            match (self.control_pair(control.quantity), control.quantity) {
                (Some(voltage), _) => self.lump(pair, voltage, &gain, id),
                (None, Quantity::Current(of)) => {
                    self.mirrors.entry(of).or_default().push((pair, gain, id));
                }
                (None, Quantity::Voltage(..)) => {}
            }
        }
        Ok(())
    }

    fn stamp_controlled_voltage(
        &mut self,
        id: ElementId,
        controls: &[Control],
    ) -> Result<(), EliminationError> {
        let pair = self.own_pair(id);
        let mut gains: BTreeMap<Pair, Fraction> = BTreeMap::new();
        for control in controls {
            let gain = self.fraction(id, &control.gain)?;
            let Some(voltage) = self.control_pair(control.quantity) else { continue };
            if voltage.0 == voltage.1 {
                continue;
            }
            let (voltage, flipped) = ascending(voltage);
            let gain = if flipped { -&gain } else { gain };
            let sum = gains.entry(voltage).or_insert_with(Fraction::zero);
            *sum = &*sum + &gain;
        }
        gains.retain(|_, gain| !gain.is_zero());
        self.push(controlled_voltage(pair, &gains).choice(), vec![id], false);
        Ok(())
    }

    /// The choice that holds the question, and the finished system.
    fn question(mut self) -> Result<System, EliminationError> {
        // The current through the drive from its first node, and whether the drive is a voltage.
        let (port, is_voltage, sign) = match self.transfer.drive {
            Drive::Source(id) => {
                (self.own_pair(id), matches!(self.circuit[id].law, Law::VoltageSource), -1)
            }
            // 1 A enters at the first node: the source's own current flows from second to first.
            Drive::Port(enters, leaves) => (self.pair(leaves, enters), false, -1),
        };
        let mut choice = Choice::default();
        let mut index_of = Vec::new();
        for probe in [self.transfer.numerator, self.transfer.denominator, Probe::Drive] {
            let alternative = match probe {
                Probe::Drive if is_voltage => alternative(1, vec![port], vec![port]),
                Probe::Drive => alternative(1, vec![], vec![]),
                Probe::Voltage(plus, minus) => self.response(port, is_voltage, sign, plus, minus),
                Probe::Current(of) => {
                    let sense = self.sense.get(&of).map_or(0, |&sense| sense);
                    let sign = if is_voltage { 1 } else { sign };
                    alternative(sign, vec![port], vec![Pair(sense, 0)])
                }
            };
            index_of.push(choice.alternatives.len());
            choice.alternatives.push(alternative);
        }
        let origin = match self.transfer.drive {
            Drive::Source(id) => vec![id],
            Drive::Port(..) => vec![],
        };
        self.push(choice, origin, false);
        Ok(System {
            choices: self.choices,
            origins: self.origins,
            forced: self.forced,
            nodes: self.nodes as usize,
            grounded: Vec::new(),
            numerator: index_of[0],
            denominator: index_of[1],
            determinant: index_of[2],
        })
    }

    fn response(
        &self,
        port: Pair,
        is_voltage: bool,
        sign: i64,
        plus: NodeId,
        minus: NodeId,
    ) -> Alternative {
        let sign = if is_voltage { 1 } else { sign };
        alternative(sign, vec![port], vec![self.pair(plus, minus)])
    }
}

fn alternative(weight: i64, current: Vec<Pair>, voltage: Vec<Pair>) -> Alternative {
    Alternative { weight: Polynomial::from(weight), current, voltage }
}

fn ascending(pair: Pair) -> (Pair, bool) {
    if pair.0 <= pair.1 { (pair, false) } else { (Pair(pair.1, pair.0), true) }
}

fn matrix<const K: usize>(entries: [[i64; K]; K]) -> Vec<Vec<Polynomial>> {
    entries.map(|row| row.map(Polynomial::from).to_vec()).to_vec()
}

/// k × k zeros.
fn zeros(k: usize) -> Vec<Vec<Polynomial>> {
    vec![vec![Polynomial::zero(); k]; k]
}

/// 0 V between the pair.
fn short(pair: Pair) -> Choice {
    Choice { alternatives: vec![alternative(1, vec![pair], vec![pair])] }
}

/// Ports (norator, nullator): v = 0 and i = 0 at the nullator, anything at the norator.
fn nullor(norator: Pair, nullator: Pair) -> MultiPort {
    MultiPort {
        ports: vec![norator, nullator],
        a: matrix([[0, 1], [0, 0]]),
        b: matrix([[0, 0], [0, 1]]),
    }
}

/// i(current) = y·v(voltage); a one-port where the pairs are one.
fn transadmittance(current: Pair, voltage: Pair, y: &Fraction) -> MultiPort {
    let (p, q) = (-y.numerator(), y.denominator().clone());
    if current == voltage {
        return MultiPort { ports: vec![current], a: vec![vec![p]], b: vec![vec![q]] };
    }
    let mut port = MultiPort { ports: vec![current, voltage], a: zeros(2), b: zeros(2) };
    port.a[0][1] = p;
    port.b[0][0] = q;
    port.b[1][1] = Polynomial::one();
    port
}

/// A one-port i = y·v and current sources that follow its current: i_j = β_j·i.
fn mirrored_one_port(
    pair: Pair,
    y: &Fraction,
    mirrors: &[(Pair, Fraction, ElementId)],
) -> MultiPort {
    let mut port = mirrors_of_short(pair, mirrors);
    port.a[0][0] = -y.numerator();
    port.b[0][0] = y.denominator().clone();
    port
}

/// A short and current sources that follow its current.
fn mirrors_of_short(pair: Pair, mirrors: &[(Pair, Fraction, ElementId)]) -> MultiPort {
    let k = mirrors.len() + 1;
    let mut port = MultiPort { ports: vec![pair], a: zeros(k), b: zeros(k) };
    port.a[0][0] = Polynomial::one();
    for (index, (output, gain, _)) in mirrors.iter().enumerate() {
        port.ports.push(*output);
        port.b[index + 1][0] = -gain.numerator();
        port.b[index + 1][index + 1] = gain.denominator().clone();
    }
    port
}

/// v1 = n·v2, i2 = −n·i1.
fn transformer(primary: Pair, secondary: Pair, ratio: &Fraction) -> MultiPort {
    let (n, d) = (ratio.numerator(), ratio.denominator());
    MultiPort {
        ports: vec![primary, secondary],
        a: vec![vec![d.clone(), -n], vec![Polynomial::zero(), Polynomial::zero()]],
        b: vec![vec![Polynomial::zero(), Polynomial::zero()], vec![n.clone(), d.clone()]],
    }
}

/// i1 = g·v2, i2 = −g·v1.
fn gyrator(first: Pair, second: Pair, conductance: &Fraction) -> MultiPort {
    let (n, d) = (conductance.numerator(), conductance.denominator());
    MultiPort {
        ports: vec![first, second],
        a: vec![vec![Polynomial::zero(), -n], vec![n.clone(), Polynomial::zero()]],
        b: vec![vec![d.clone(), Polynomial::zero()], vec![Polynomial::zero(), d.clone()]],
    }
}

/// v = Z·i, each row cleared of denominators.
fn impedance_matrix(ports: Vec<Pair>, impedances: &[Vec<Fraction>]) -> MultiPort {
    let k = ports.len();
    let mut port = MultiPort { ports, a: zeros(k), b: zeros(k) };
    for (row, entries) in impedances.iter().enumerate() {
        let common = common_denominator(entries);
        for (column, entry) in entries.iter().enumerate() {
            port.b[row][column] = -&cleared(entry, &common);
        }
        port.a[row][row] = common;
    }
    port
}

/// The least common multiple of the denominators.
fn common_denominator<'f>(fractions: impl IntoIterator<Item = &'f Fraction>) -> Polynomial {
    fractions.into_iter().fold(Polynomial::one(), |common, fraction| {
        let shared = gcd(&common, fraction.denominator());
        match fraction.denominator().divide_exact(&shared) {
            Some(rest) => &common * &rest,
            None => common,
        }
    })
}

/// The fraction times a multiple of its denominator.
fn cleared(fraction: &Fraction, common: &Polynomial) -> Polynomial {
    let cofactor = common.divide_exact(fraction.denominator()).unwrap_or_else(Polynomial::one);
    fraction.numerator() * &cofactor
}

/// v(output) = Σ gain·v(control).
fn controlled_voltage(output: Pair, gains: &BTreeMap<Pair, Fraction>) -> MultiPort {
    let k = gains.len() + 1;
    let mut port = MultiPort { ports: vec![output], a: zeros(k), b: zeros(k) };
    let common = common_denominator(gains.values());
    for (index, (&control, gain)) in gains.iter().enumerate() {
        port.ports.push(control);
        port.a[0][index + 1] = -&cleared(gain, &common);
        port.b[index + 1][index + 1] = Polynomial::one();
    }
    port.a[0][0] = common;
    port
}

/// The circuit's node behind a node of the choices; `None` for nodes made here.
pub(crate) fn circuit_nodes(circuit: &Circuit) -> Vec<NodeId> {
    let mut by_name: Vec<NodeId> = (1..circuit.nodes.len() as u32).map(NodeId).collect();
    by_name.sort_by(|&a, &b| compare_names(&circuit[a].name, &circuit[b].name));
    by_name.insert(0, GROUND);
    by_name
}
