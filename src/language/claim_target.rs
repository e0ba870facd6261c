//! What a claim is about: a result, or something about it, from the name that the claim bears.
//!
//! `H`, `P.z21` and `Vbus.Vbat` (a source's share of a superposition) are functions; `p1`, `z1`, `w0`,
//! `f0`, `Q`, `dc`, `hf` behind a dot say what of them is meant (`H.p1`, `H.p3.Q`), also `H(0)` and
//! `H(infinity)`. Without a result before it, such a name belongs to the first question.

use super::diagnostic::Diagnostic;
use super::names::nearest;
use super::queries::{entries, entry_units};
use super::syntax::Name;
use crate::circuit::{Ask, Circuit, Drive, Property, Question, Unit};

/// What a claim is about.
pub(crate) struct Target {
    pub(crate) answer: String,
    pub(crate) property: Property,
    pub(crate) unit: Unit,
    /// Whether the result is a noise density, a function of the frequency.
    pub(crate) of_noise: bool,
}

/// One result that can be claimed.
struct Answer {
    name: String,
    unit: Unit,
    of_noise: bool,
}

/// Finds what a claim of that name is about.
///
/// # Errors
/// A name that fits nothing.
pub(crate) fn find(circuit: &Circuit, name: &Name) -> Result<Target, Diagnostic> {
    let answers: Vec<Answer> =
        circuit.asks.iter().flat_map(|ask| answers_of(circuit, ask)).collect();
    let exact = |wanted: &str| answers.iter().find(|answer| answer.name == wanted);
    let text = name.text.as_str();
    // `H(s)` is the function `H`.
    let text = ["(s)", "(f)"].iter().find_map(|end| text.strip_suffix(end)).unwrap_or(text);
    if let Some(answer) = exact(text) {
        return Ok(target(answer, Property::Function));
    }
    let (plain, ends) = [
        ("(0)", Some(Property::DcGain)),
        ("(infinity)", Some(Property::HighFrequencyGain)),
        ("(∞)", Some(Property::HighFrequencyGain)),
    ]
    .iter()
    .find_map(|(suffix, property)| Some((text.strip_suffix(suffix)?, *property)))
    .unwrap_or((text, None));
    if let Some(property) = ends {
        return match exact(plain) {
            Some(answer) => Ok(target(answer, property)),
            None => Err(unknown(circuit, name, plain, &answers)),
        };
    }
    // The longest result that begins the name; else the first question.
    let owner = answers
        .iter()
        .filter_map(|answer| {
            Some((answer, text.strip_prefix(answer.name.as_str())?.strip_prefix('.')?))
        })
        .max_by_key(|(answer, _)| answer.name.len())
        .or_else(|| Some((answers.first()?, text)));
    match owner.and_then(|(answer, rest)| Some((answer, property(rest)?))) {
        Some((answer, property)) => Ok(target(answer, property)),
        None => Err(unknown(circuit, name, text, &answers)),
    }
}

/// The names of all results that can be claimed.
pub(crate) fn names(circuit: &Circuit) -> Vec<String> {
    let answers = circuit.asks.iter().flat_map(|ask| answers_of(circuit, ask));
    answers.map(|answer| answer.name).collect()
}

fn target(answer: &Answer, property: Property) -> Target {
    let unit = match property {
        Property::Function | Property::DcGain | Property::HighFrequencyGain => answer.unit,
        Property::Pole(_)
        | Property::Zero(_)
        | Property::NaturalFrequency(_)
        | Property::NaturalHertz(_) => Unit::HERTZ,
        Property::NaturalFrequencySquared(_) => Unit::HERTZ.power(2),
        Property::Quality(_) => Unit::ONE,
    };
    Target { answer: answer.name.clone(), property, unit, of_noise: answer.of_noise }
}

/// The words for what can be claimed of a function.
fn property(text: &str) -> Option<Property> {
    let numbered = |word: &str, letter: char| {
        let digits = word.strip_prefix(letter)?;
        digits.parse::<u32>().ok().filter(|&number| number > 0 && !digits.starts_with('+'))
    };
    let (root, word) = match text.split_once('.') {
        Some((root, word)) => (Some(numbered(root, 'p')?), word),
        None => (None, text),
    };
    Some(match word {
        "w0" | "omega0" => Property::NaturalFrequency(root),
        "w0^2" | "omega0^2" => Property::NaturalFrequencySquared(root),
        "f0" => Property::NaturalHertz(root),
        "Q" | "q" => Property::Quality(root),
        _ if root.is_some() => return None,
        "dc" | "dc_gain" => Property::DcGain,
        "hf" | "hf_gain" | "high_frequency_gain" => Property::HighFrequencyGain,
        _ => match (numbered(word, 'p'), numbered(word, 'z')) {
            (Some(number), _) => Property::Pole(number),
            (_, Some(number)) => Property::Zero(number),
            _ => return None,
        },
    })
}

fn unknown(circuit: &Circuit, name: &Name, wanted: &str, answers: &[Answer]) -> Diagnostic {
    let fault = |message: String| Diagnostic::error("claim-name", name.span, message);
    match circuit.asks.iter().find(|ask| ask.name == wanted).map(|ask| &ask.question) {
        Some(Question::TwoPort(ports)) => {
            let entries = entries(ports.set).map(|entry| format!("`{wanted}.{entry}`"));
            return fault(format!("`{wanted}` is a set of four results"))
                .help(format!("claim one of them: {}", entries.join(", ")));
        }
        Some(Question::Superposition(_)) => {
            let shares =
                answers.iter().filter(|answer| answer.name.starts_with(&format!("{wanted}.")));
            let shares: Vec<String> = shares.map(|answer| format!("`{}`", answer.name)).collect();
            return fault(format!("`{wanted}` is a sum over several sources"))
                .help(format!("claim the share of one of them: {}", shares.join(", ")));
        }
        _ => {}
    }
    let known: Vec<&str> = answers.iter().map(|answer| answer.name.as_str()).collect();
    let fault = fault(format!("no `ask` is named `{wanted}`"));
    match nearest(wanted, known.iter().copied()) {
        Some(near) => fault.help(format!("is it `{near}`?")),
        None if known.is_empty() => {
            fault.help(format!("ask for it first: `ask {wanted} = V(out) / Vin`"))
        }
        None => fault.help(format!("there are: {}", known[..known.len().min(8)].join(", "))),
    }
}

/// The results of a question.
fn answers_of(circuit: &Circuit, ask: &Ask) -> Vec<Answer> {
    let one = |unit: Unit| vec![Answer { name: ask.name.clone(), unit, of_noise: false }];
    match &ask.question {
        Question::Ratio(transfer) => one(transfer.unit),
        Question::ReturnRatio(_) => one(Unit::ONE),
        Question::NoiseDensity(..) => {
            let unit = Unit::VOLT.power(2).over(Unit::HERTZ);
            vec![Answer { name: ask.name.clone(), unit, of_noise: true }]
        }
        Question::TwoPort(ports) => entries(ports.set)
            .into_iter()
            .zip(entry_units(ports.set))
            .map(|(entry, unit)| Answer {
                name: format!("{}.{entry}", ask.name),
                unit,
                of_noise: false,
            })
            .collect(),
        Question::Superposition(transfers) => match transfers.as_slice() {
            [transfer] => one(transfer.unit),
            several => several
                .iter()
                .filter_map(|transfer| match transfer.drive {
                    Drive::Source(id) => Some(Answer {
                        name: format!("{}.{}", ask.name, circuit[id].name),
                        unit: transfer.unit,
                        of_noise: false,
                    }),
                    Drive::Port(..) => None,
                })
                .collect(),
        },
    }
}
