//! Why a question has no answer, in the words of the circuit.

use crate::circuit::graph::{current_cutset, voltage_loop};
use crate::circuit::{Circuit, Control, ElementId, Law, NodeId, Quantity, Transfer, Value};
use crate::elimination::{Elimination, EliminationError, Limits};
use crate::numeric::NumericError;

/// What stands against an answer.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum AnalysisError {
    /// The equations have no unique solution; the text names the elements that are to blame.
    #[error("the circuit has no unique solution: {reason}")]
    Singular {
        /// Which elements, and why.
        reason: String,
        /// What to do about it.
        remedy: String,
    },
    /// The answer is infinite.
    #[error("{quantity} is 0, so the ratio is infinite")]
    Infinite {
        /// What is below the fraction bar.
        quantity: String,
    },
    /// A voltage between parts that nothing connects, or a current that has no way back.
    #[error("nothing connects `{0}` and `{1}`: {2}")]
    NotConnected(String, String, &'static str),
    /// An element's value divides by 0.
    #[error("the value of `{0}` divides by 0")]
    DivisionByZero(String),
    /// The work would pass a bound.
    #[error("the elimination needs about {states:.1e} states, more than the {allowed} allowed")]
    TooLarge {
        /// Predicted or met.
        states: f64,
        /// The bound.
        allowed: usize,
    },
    /// A limit does not exist.
    #[error("the limit `{limit}` is infinite")]
    InfiniteLimit {
        /// As it is written.
        limit: String,
    },
    /// The circuit has no such two-port parameters.
    #[error("the {set} parameters of this circuit do not exist: {reason}")]
    NoParameters {
        /// The set.
        set: &'static str,
        /// What stands against them.
        reason: &'static str,
        /// The sets that exist.
        others: Vec<&'static str>,
    },
    /// An element that has no return ratio, or a ratio that does not depend on it.
    #[error("`{element}` {reason}")]
    NoLoop {
        /// The element.
        element: String,
        /// Why there is no loop around it.
        reason: &'static str,
    },
    /// The expanded formula would be too long, and it has no nested form.
    #[error("{what} would have more terms than the {allowed} that `--max-terms` allows")]
    TooLong {
        /// Which formula.
        what: &'static str,
        /// The bound.
        allowed: usize,
    },
    /// A witness could not be asked.
    #[error("the cross-check could not be made: {0}")]
    Witness(NumericError),
}

impl AnalysisError {
    /// A short name for programs and for the list of codes.
    pub fn code(&self) -> &'static str {
        match self {
            Self::Singular { .. } => "no-unique-solution",
            Self::Infinite { .. } => "infinite-ratio",
            Self::NotConnected(..) => "not-connected",
            Self::DivisionByZero(_) => "division-by-zero",
            Self::TooLarge { .. } => "too-large",
            Self::InfiniteLimit { .. } => "infinite-limit",
            Self::NoParameters { .. } => "no-parameters",
            Self::NoLoop { .. } => "no-loop",
            Self::TooLong { .. } => "terms",
            Self::Witness(_) => "no-witness",
        }
    }

    /// What to do about it.
    pub fn help(&self) -> Option<String> {
        match self {
            Self::Singular { remedy, .. } => Some(remedy.clone()),
            Self::Infinite { .. } => Some("ask for the reciprocal, which is 0".to_owned()),
            Self::NotConnected(..) => {
                Some("ask for a difference inside one part, or join the parts".to_owned())
            }
            Self::TooLarge { .. } => {
                Some("cut the circuit in parts, or put numbers in with `--keep`".to_owned())
            }
            Self::InfiniteLimit { .. } => {
                Some("ask for the reciprocal, whose limit is 0, or leave the limit out".to_owned())
            }
            Self::NoParameters { others, .. } => {
                Some(format!("these exist: {}", others.join(", ")))
            }
            Self::NoLoop { .. } => {
                Some("name a dependent source that lies in a feedback loop".to_owned())
            }
            Self::TooLong { .. } => {
                Some("allow more terms, or put numbers in with `--keep`".to_owned())
            }
            Self::DivisionByZero(_) | Self::Witness(_) => None,
        }
    }

    /// The process exit code: 3 no unique or no finite answer, 4 a work bound, 1 a failed witness.
    pub fn exit_code(&self) -> u8 {
        match self {
            Self::TooLarge { .. } | Self::TooLong { .. } => 4,
            Self::Witness(_) => 1,
            Self::DivisionByZero(_) => 2,
            Self::Singular { .. }
            | Self::Infinite { .. }
            | Self::NotConnected(..)
            | Self::InfiniteLimit { .. }
            | Self::NoParameters { .. }
            | Self::NoLoop { .. } => 3,
        }
    }

    /// An elimination's error, told with the circuit's names.
    pub(crate) fn explain(
        error: &EliminationError,
        circuit: &Circuit,
        transfer: &Transfer,
        limits: &Limits,
    ) -> Self {
        let node = |id: NodeId| circuit[id].name.clone();
        match *error {
            EliminationError::Singular => singular(circuit, transfer, limits),
            EliminationError::Infinite => Self::Infinite { quantity: below(circuit, transfer) },
            EliminationError::NoReturnPath(a, b) => {
                Self::NotConnected(node(a), node(b), "the driving current has no way back")
            }
            EliminationError::Undetermined(..) if current_cutset(circuit, transfer).is_some() => {
                singular(circuit, transfer, limits)
            }
            EliminationError::Undetermined(a, b) => {
                Self::NotConnected(node(a), node(b), "the voltage between them is not determined")
            }
            EliminationError::DivisionByZero(id) => Self::DivisionByZero(circuit[id].name.clone()),
            EliminationError::TooLarge { states } => {
                Self::TooLarge { states, allowed: limits.max_states }
            }
        }
    }
}

fn below(circuit: &Circuit, transfer: &Transfer) -> String {
    use crate::circuit::Probe;
    match transfer.denominator {
        Probe::Voltage(a, b) => {
            format!("the voltage from `{}` to `{}`", circuit[a].name, circuit[b].name)
        }
        Probe::Current(id) => format!("the current through `{}`", circuit[id].name),
        Probe::Drive => "the current that can flow into the port".to_owned(),
    }
}

fn names(circuit: &Circuit, elements: &[ElementId]) -> String {
    let quoted: Vec<String> =
        elements.iter().map(|&id| format!("`{}`", circuit[id].name)).collect();
    match quoted.split_last() {
        Some((last, rest)) if !rest.is_empty() => format!("{} and {last}", rest.join(", ")),
        _ => quoted.join(""),
    }
}

fn singular(circuit: &Circuit, transfer: &Transfer, limits: &Limits) -> AnalysisError {
    if let Some(elements) = voltage_loop(circuit, transfer) {
        return AnalysisError::Singular {
            reason: match elements.as_slice() {
                [one] => format!("{} has both ends on one node", names(circuit, &[*one])),
                all => format!(
                    "{} form a loop in which every voltage is fixed, so its current is not",
                    names(circuit, all)
                ),
            },
            remedy: "put a resistance in series with one of them, or remove it".to_owned(),
        };
    }
    if let Some(elements) = current_cutset(circuit, transfer) {
        return AnalysisError::Singular {
            reason: format!(
                "only {} join two parts, and every current there is fixed, so the voltage between \
                 the parts is not",
                names(circuit, &elements)
            ),
            remedy: "give the current a way around, such as a resistance in parallel".to_owned(),
        };
    }
    let amplifiers = without_feedback(circuit, transfer, limits);
    if !amplifiers.is_empty() {
        return AnalysisError::Singular {
            reason: format!(
                "nothing makes the input voltage of {} zero: there is no feedback from the output \
                 to the inputs",
                names(circuit, &amplifiers)
            ),
            remedy: "connect the feedback, or give the op-amp a finite `gain`".to_owned(),
        };
    }
    AnalysisError::Singular {
        reason: "the network equations depend on each other whatever the element values are"
            .to_owned(),
        remedy: "look for a node whose voltage nothing fixes, or for dependent sources that \
                 fight each other"
            .to_owned(),
    }
}

/// The ideal amplifiers that, given a finite gain, would make the circuit solvable.
fn without_feedback(circuit: &Circuit, transfer: &Transfer, limits: &Limits) -> Vec<ElementId> {
    let ideal: Vec<(ElementId, NodeId, NodeId)> = circuit
        .elements
        .iter()
        .zip(0_u32..)
        .filter_map(|(element, id)| match element.law {
            Law::Nullor(plus, minus) => Some((ElementId(id), plus, minus)),
            _ => None,
        })
        .collect();
    let solvable = |finite: &[(ElementId, NodeId, NodeId)]| {
        let mut changed = circuit.clone();
        for (index, &(id, plus, minus)) in finite.iter().enumerate() {
            // Any finite number does; different ones, so that nothing cancels by chance.
            let gain = Value::Number(crate::circuit::Number::from_integer((997 + index).into()));
            let quantity = Quantity::Voltage(plus, minus);
            changed.elements[id.0 as usize].law =
                Law::ControlledVoltage(vec![Control { gain, quantity }]);
        }
        Elimination::new(&changed, transfer, limits).is_ok()
    };
    let alone: Vec<ElementId> =
        ideal.iter().filter(|one| solvable(&[**one])).map(|one| one.0).collect();
    if alone.is_empty() && solvable(&ideal) {
        return ideal.iter().map(|one| one.0).collect();
    }
    alone
}
