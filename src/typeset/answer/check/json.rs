//! Verdicts as the JSON of `check`.

use serde::Serialize;

use super::{Checked, UnitError, names, of_frequency, words};
use crate::analysis::check::{Difference, Judgement, Repair, Side, Verdict};
use crate::circuit::{Property, Relation};
use crate::typeset::json::Warning;
use crate::typeset::shape::Lettering;
use crate::typeset::{Dialect, SymbolTable, plain};

/// The value of [`Check::schema`].
pub const CHECK_SCHEMA: &str = "cofactor/check/1";

/// The whole output of `check`.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Check {
    /// Name and version of this format: [`CHECK_SCHEMA`].
    pub schema: &'static str,
    /// The circuit's title; null when it has none.
    pub circuit: Option<String>,
    /// One entry for each claim.
    pub claims: Vec<ClaimResult>,
    /// What the reader should know besides.
    pub warnings: Vec<Warning>,
}

/// A claim and its verdict.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ClaimResult {
    /// Its number, from 1.
    pub index: usize,
    /// As the claim names it: `H`, `P.z21`, `H.p1`.
    pub name: String,
    /// The result that it is about: `H`.
    pub result: String,
    /// `function`, `pole`, `zero`, `natural_frequency`, `natural_frequency_squared`,
    /// `natural_hertz`, `quality`, `dc_gain`, `high_frequency_gain`.
    pub property: &'static str,
    /// The line of the file, from 1; null for a claim of the command line.
    pub line: Option<u32>,
    /// The formula as written.
    pub claim: String,
    /// `=` or `~`.
    pub relation: &'static str,
    /// `equal`, `equal_in_limit`, `different`, `unit_error`.
    pub verdict: &'static str,
    /// How a claim was found equal: `exact` or `numbers`; null for other verdicts.
    pub proof: Option<&'static str>,
    /// One of the least sets of conditions, in their order.
    pub limits: Vec<String>,
    /// All least sets.
    pub alternatives: Vec<Vec<String>>,
    /// The exact value; null where it is no rational function of the symbols.
    pub exact: Option<String>,
    /// Coefficients that the claim has wrong.
    pub differences: Vec<DifferenceObject>,
    /// The nearest single change that makes the claim right.
    pub repair: Option<RepairObject>,
    /// What a wrong claim about a function gets right.
    pub right: Option<RightObject>,
    /// Claim over exact in dB where it is largest; null without nominal values.
    pub worst_magnitude_db: Option<f64>,
    /// The phase of claim over exact where it is largest.
    pub worst_phase_deg: Option<f64>,
    /// Where the magnitude is off most; null where nothing depends on the frequency.
    pub at_hz: Option<f64>,
    /// Where the phase is off most.
    pub phase_at_hz: Option<f64>,
    /// How near a claim with `~` is.
    pub nearness: Option<NearnessObject>,
    /// Which units do not fit, and where.
    pub unit_error: Option<UnitErrorObject>,
}

/// A coefficient that a claim has wrong; a value that is no function has one, of power 0.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct DifferenceObject {
    side: &'static str,
    power: u32,
    claimed: String,
    exact: String,
    missing: Option<String>,
    extra: Option<String>,
}

/// A single change that makes a claim right.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct RepairObject {
    kind: &'static str,
    description: String,
    /// The whole formula afterwards.
    formula: String,
    /// In which limit that is right; empty where it is right as it stands.
    limits: Vec<String>,
}

/// What a wrong claim gets right.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct RightObject {
    dc: bool,
    high_frequency: bool,
    poles: bool,
    zeros: bool,
}

/// How near a claim with `~` is.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct NearnessObject {
    within: f64,
    worst: Option<f64>,
    nominal: Option<f64>,
    at_hz: Option<f64>,
    value_sets: usize,
}

/// Units that do not fit.
#[derive(Clone, Debug, PartialEq, Eq, Serialize)]
pub struct UnitErrorObject {
    left: String,
    right: String,
    /// The part whose unit is `right`, as written.
    part: String,
    /// What it is added to, or null where the whole has the wrong unit.
    beside: Option<String>,
    /// Where the part begins.
    line: Option<u32>,
    column: u32,
}

/// Where a part of a claim stands: line and column from 1.
#[derive(Clone, Copy, Debug)]
pub struct Place {
    /// None on the command line.
    pub line: Option<u32>,
    /// In characters.
    pub column: u32,
}

/// A claim's entry; `place` is where a part whose unit does not fit begins.
pub fn result(checked: &Checked<'_>, place: Option<Place>) -> ClaimResult {
    let claim = checked.claim;
    let mut result = ClaimResult {
        index: checked.index,
        name: claim.name.clone(),
        result: claim.answer.clone(),
        property: property(claim.property),
        line: (claim.line > 0).then_some(claim.line),
        claim: claim.text.clone(),
        relation: if claim.relation == Relation::Equal { "=" } else { "~" },
        verdict: verdict(checked.judgement.verdict),
        proof: None,
        limits: Vec::new(),
        alternatives: Vec::new(),
        exact: None,
        differences: Vec::new(),
        repair: None,
        right: None,
        worst_magnitude_db: None,
        worst_phase_deg: None,
        at_hz: None,
        phase_at_hz: None,
        nearness: None,
        unit_error: None,
    };
    fill(&mut result, checked, &checked.judgement);
    result.unit_error = checked.units.as_ref().map(|error| unit_error(error, &claim.text, place));
    result
}

fn fill(result: &mut ClaimResult, checked: &Checked<'_>, judgement: &Judgement) {
    let (names, letters) = names(judgement, of_frequency(checked.claim));
    let finite = |value: f64| value.is_finite().then_some(value);
    if judgement.verdict == Verdict::Equal {
        result.proof = Some(if judgement.nearness.is_some() { "numbers" } else { "exact" });
    }
    if judgement.verdict == Verdict::Equal && judgement.nearness.is_none() {
        (result.worst_magnitude_db, result.worst_phase_deg) = (Some(0.0), Some(0.0));
    }
    result.alternatives = judgement
        .limits
        .iter()
        .map(|set| set.iter().map(|step| words::step_text(checked.circuit, step)).collect())
        .collect();
    result.limits = result.alternatives.first().cloned().unwrap_or_default();
    let text = |fraction: &_| {
        plain::text(&words::fraction(fraction, letters), &names, Dialect::Expression)
    };
    if !judgement.squared {
        result.exact = judgement.exact.as_ref().map(text);
    }
    result.differences =
        judgement.differences.iter().map(|one| difference(one, letters, &names)).collect();
    result.repair = judgement.repair.as_ref().map(|found| repair(found, checked, letters, &names));
    result.right = judgement.right.map(|right| RightObject {
        dc: right.dc,
        high_frequency: right.high_frequency,
        poles: right.poles.0 == right.poles.1,
        zeros: right.zeros.0 == right.zeros.1,
    });
    if let Some(deviation) = &judgement.deviation {
        result.worst_magnitude_db = finite(deviation.magnitude_db);
        result.worst_phase_deg = finite(deviation.phase_deg);
        result.at_hz = deviation.magnitude_at_hz;
        result.phase_at_hz = deviation.phase_at_hz;
    }
    result.nearness = judgement.nearness.as_ref().map(|near| NearnessObject {
        within: near.within,
        worst: finite(near.worst),
        nominal: finite(near.nominal),
        at_hz: near.at_hz,
        value_sets: near.corners,
    });
}

fn difference(of: &Difference, letters: Lettering<'_>, names: &SymbolTable) -> DifferenceObject {
    let text =
        |fraction: &_| plain::text(&words::fraction(fraction, letters), names, Dialect::Expression);
    DifferenceObject {
        side: side(of.side),
        power: of.power,
        claimed: text(&of.claimed),
        exact: text(&of.exact),
        missing: (!of.missing.is_zero()).then(|| text(&of.missing)),
        extra: (!of.extra.is_zero()).then(|| text(&of.extra)),
    }
}

fn repair(
    of: &Repair,
    checked: &Checked<'_>,
    letters: Lettering<'_>,
    names: &SymbolTable,
) -> RepairObject {
    let text = |value: &_| words::language(&words::formula(value, letters), names);
    let root = checked.claim.under_root.as_ref().map(text);
    let text = |value: &_| words::with_root(text(value), value, checked.claim, root.as_deref());
    let quoted = |value: &_| format!("`{}`", text(value));
    RepairObject {
        kind: of.change.kind(),
        description: words::change(&of.change, checked.circuit, &quoted),
        formula: words::times_root(text(&of.formula), root.as_deref()),
        limits: of.limits.iter().map(|step| words::step_text(checked.circuit, step)).collect(),
    }
}

fn unit_error(error: &UnitError, text: &str, place: Option<Place>) -> UnitErrorObject {
    let part = |(start, end): (usize, usize)| text.get(start..end).unwrap_or(text).to_owned();
    UnitErrorObject {
        left: error.left.to_string(),
        right: error.right.to_string(),
        part: part(error.part),
        beside: error.before.map(part),
        line: place.and_then(|place| place.line),
        column: place.map_or(1, |place| place.column),
    }
}

fn verdict(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::Equal => "equal",
        Verdict::EqualInLimit => "equal_in_limit",
        Verdict::Different => "different",
        Verdict::UnitError => "unit_error",
    }
}

fn side(side: Side) -> &'static str {
    match side {
        Side::Numerator => "numerator",
        Side::Denominator => "denominator",
    }
}

fn property(property: Property) -> &'static str {
    match property {
        Property::Function => "function",
        Property::Pole(_) => "pole",
        Property::Zero(_) => "zero",
        Property::NaturalFrequency(_) => "natural_frequency",
        Property::NaturalFrequencySquared(_) => "natural_frequency_squared",
        Property::NaturalHertz(_) => "natural_hertz",
        Property::Quality(_) => "quality",
        Property::DcGain => "dc_gain",
        Property::HighFrequencyGain => "high_frequency_gain",
    }
}
