//! A transfer function together with the circuit that it is asked of: the user's, or a copy of it
//! with test sources, ammeters and terminations added.
//!
//! What must hold: added elements stand behind the circuit's own, so that ids stay what they were, and
//! no remark names them.

use std::borrow::Cow;

use super::closed_form::{Closed, ClosedForm, close};
use super::judged::Judged;
use super::{AnalysisError, Derivation, Options, limits, notice, numbers, port};
use crate::circuit::{
    Circuit, Class, Control, Element, ElementId, GROUND, Law, Node, NodeId, Quantity, Transfer,
    Value,
};
use crate::elimination::{Elimination, EliminationError};
use crate::numeric;

/// A transfer function to derive.
#[derive(Clone, Debug)]
pub(crate) struct Posed<'c> {
    /// The circuit, with what was added.
    pub(crate) circuit: Cow<'c, Circuit>,
    /// What is asked of it.
    pub(crate) transfer: Transfer,
    /// How many elements are the user's own.
    own: usize,
}

impl<'c> Posed<'c> {
    /// A question to the circuit as it is.
    pub(crate) fn new(circuit: &'c Circuit, transfer: Transfer) -> Self {
        Self { own: circuit.elements.len(), circuit: Cow::Borrowed(circuit), transfer }
    }

    /// The eliminated network with the limits of the circuit taken.
    pub(crate) fn eliminate(&self, options: &Options) -> Result<Elimination, AnalysisError> {
        limits::take(&self.circuit, &self.whole(options)?)
    }

    fn whole(&self, options: &Options) -> Result<Elimination, AnalysisError> {
        let (circuit, transfer) = (&*self.circuit, &self.transfer);
        Elimination::new(circuit, transfer, &options.limits)
            .map_err(|error| AnalysisError::explain(&error, circuit, transfer, &options.limits))
    }

    /// The same question in a form that has an answer, where no current can be forced into a port.
    fn restated(&self, options: &Options) -> Option<Posed<'static>> {
        let error = Elimination::new(&self.circuit, &self.transfer, &options.limits).err()?;
        let open = matches!(error, EliminationError::Singular | EliminationError::NoReturnPath(..));
        port::driven_by_voltage(self).filter(|_| open)
    }

    /// The answer and its evidence.
    pub(crate) fn derive(&self, options: &Options) -> Result<Derivation, AnalysisError> {
        let (circuit, transfer) = (&*self.circuit, &self.transfer);
        let whole = match self.whole(options) {
            Ok(whole) => whole,
            Err(error) => match self.restated(options) {
                Some(restated) => return restated.derive(options),
                None => return Err(error),
            },
        };
        let mut notices = notice::collect(circuit, self.own, transfer, &whole);
        let limited = limits::take(circuit, &whole)?;
        let Closed { form, length } = close(&limited, options.max_terms);
        let judged = Judged::new(&limited, &form);
        let (evidence, checks) = if circuit.limits.is_empty() {
            (numeric::crosscheck(circuit, transfer, &judged), Vec::new())
        } else {
            // The function before its limits is judged as it stands in the diagram.
            let before = ClosedForm::Nested(whole.nested());
            let before = Judged::new(&whole, &before);
            let checks = limits::judge(circuit, transfer, &judged)?;
            (numeric::crosscheck(circuit, transfer, &before), vec![checks])
        };
        let evidence = evidence.map_err(AnalysisError::Witness)?;
        if limited.is_zero() && !whole.is_zero() {
            notices.push(notice::vanished(circuit));
        }
        let without = limits::without_limited(circuit);
        let numeric = numbers::nominal(&without, transfer, &judged, &mut notices);
        Ok(Derivation { form, length, numeric, evidence, checks, notices, elimination: limited })
    }
}

/// A copy of a circuit that test elements are added to.
#[derive(Clone, Debug)]
pub(crate) struct TestBench {
    circuit: Circuit,
    own: usize,
}

impl TestBench {
    pub(crate) fn new(circuit: &Circuit) -> Self {
        Self { circuit: circuit.clone(), own: circuit.elements.len() }
    }

    pub(crate) fn circuit_mut(&mut self) -> &mut Circuit {
        &mut self.circuit
    }

    /// A node of its own.
    pub(crate) fn node(&mut self) -> NodeId {
        let name = format!("test node {}", self.circuit.nodes.len());
        self.circuit.nodes.push(Node { name, aliases: Vec::new() });
        NodeId(self.circuit.nodes.len() as u32 - 1)
    }

    /// An element that is not the user's.
    pub(crate) fn add(&mut self, class: Class, ends: (NodeId, NodeId), law: Law) -> ElementId {
        let name = format!("test element {}", self.circuit.elements.len());
        let (plus, minus) = ends;
        self.circuit.elements.push(Element { name, class, plus, minus, law, line: 0 });
        ElementId(self.circuit.elements.len() as u32 - 1)
    }

    /// An independent voltage source.
    pub(crate) fn source(&mut self, ends: (NodeId, NodeId)) -> ElementId {
        self.add(Class::Voltage, ends, Law::VoltageSource)
    }

    /// A source of 0 V.
    pub(crate) fn ammeter(&mut self, ends: (NodeId, NodeId)) -> ElementId {
        self.add(Class::Voltage, ends, Law::ControlledVoltage(Vec::new()))
    }

    /// A resistance.
    pub(crate) fn resistance(&mut self, ends: (NodeId, NodeId), value: Value) -> ElementId {
        self.add(Class::Resistor, ends, Law::Impedance(value))
    }

    /// A norator between `ends`, a nullator between `zero`.
    pub(crate) fn nullor(&mut self, ends: (NodeId, NodeId), zero: (NodeId, NodeId)) -> ElementId {
        self.add(Class::Nullor, ends, Law::Nullor(zero.0, zero.1))
    }

    /// A node whose voltage is a sum of gain × quantity.
    pub(crate) fn sum(&mut self, terms: Vec<(Value, Quantity)>) -> NodeId {
        let node = self.node();
        let controls = terms.into_iter().map(|(gain, quantity)| Control { gain, quantity });
        self.add(Class::Voltage, (node, GROUND), Law::ControlledVoltage(controls.collect()));
        node
    }

    /// The question to the circuit with everything that was added.
    pub(crate) fn pose(&self, transfer: Transfer) -> Posed<'static> {
        Posed { circuit: Cow::Owned(self.circuit.clone()), transfer, own: self.own }
    }
}
