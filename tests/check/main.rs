//! `check` at scale: equal claims in unfamiliar forms, single mistakes and their repairs, idealisations,
//! LaTeX, and claims about poles, zeros and gains.

mod idealisations;
mod latex;
mod mutations;
mod properties;
mod rewriting;
#[path = "../support/mod.rs"]
mod support;
mod value;

use std::collections::BTreeMap;

use cofactor::analysis::check::{self, Judgement};
use cofactor::analysis::{self, Entry, Options};
use cofactor::circuit::Circuit;
use cofactor::language;
use support::{beside_tests, table_lines};

/// A circuit with the results that claims are about.
pub(crate) struct Bench {
    pub(crate) circuit: Circuit,
    entries: BTreeMap<String, Entry>,
}

impl Bench {
    pub(crate) fn new(text: &str) -> Self {
        let reading = language::read(text);
        let circuit =
            reading.circuit.unwrap_or_else(|| panic!("{:?}\n{text}", reading.diagnostics));
        let mut bench = Self { circuit, entries: BTreeMap::new() };
        bench.derive();
        bench
    }

    /// Answers the questions that have no answer yet.
    fn derive(&mut self) {
        for ask in &self.circuit.asks {
            if self.entries.keys().any(|name| name.split('.').next() == Some(&ask.name)) {
                continue;
            }
            let answer = analysis::answer(&self.circuit, ask, &Options::default());
            let answer = answer.unwrap_or_else(|error| panic!("{}: {error}", ask.name));
            let several = answer.len() > 1;
            for entry in answer {
                let name = match &entry.source {
                    Some(source) if several => format!("{}.{source}", entry.name),
                    _ => entry.name.clone(),
                };
                self.entries.insert(name, entry);
            }
        }
    }

    /// The judgement of a claim; its errors as text.
    pub(crate) fn judge(&mut self, claim: &str) -> Result<Judgement, String> {
        let claim = language::claim(&mut self.circuit, claim)
            .map_err(|faults| format!("{claim}: {faults:?}"))?;
        let unit = language::claim_units(&self.circuit, &claim).ok();
        self.derive();
        let entry = self.entries.get(&claim.answer).ok_or("no such result")?;
        check::judge(&self.circuit, &claim, entry, unit).map_err(|error| error.to_string())
    }

    /// All results of a question.
    pub(crate) fn entries_of(&self, ask: &str) -> Vec<Entry> {
        let of_ask = |name: &str| name.split('.').next() == Some(ask);
        let found = self.entries.iter().filter(|(name, _)| of_ask(name));
        found.map(|(_, entry)| entry.clone()).collect()
    }

    pub(crate) fn entry(&self, name: &str) -> &Entry {
        &self.entries[name]
    }

    /// The verdict in the words of the JSON.
    #[track_caller]
    pub(crate) fn verdict(&mut self, claim: &str) -> &'static str {
        match self.judge(claim) {
            Ok(judgement) => word(judgement.verdict),
            Err(error) => panic!("{claim}: {error}"),
        }
    }
}

pub(crate) fn word(verdict: check::Verdict) -> &'static str {
    match verdict {
        check::Verdict::Equal => "equal",
        check::Verdict::EqualInLimit => "equal_in_limit",
        check::Verdict::Different => "different",
        check::Verdict::UnitError => "unit_error",
    }
}

/// A textbook circuit and the formula that its textbook has (`tests/textbook`).
pub(crate) struct Form {
    pub(crate) circuit: String,
    pub(crate) text: String,
    pub(crate) result: String,
    pub(crate) formula: String,
}

pub(crate) fn forms() -> Vec<Form> {
    let read = |name: &str| {
        std::fs::read_to_string(beside_tests(&format!("textbook/{name}"))).expect(name)
    };
    table_lines(&read("forms.txt"))
        .map(|(_, line)| {
            let fields: Vec<&str> = line.split(" | ").map(str::trim).collect();
            Form {
                circuit: fields[0].to_owned(),
                text: read(&format!("{}.circuit", fields[0])),
                result: fields[1].to_owned(),
                formula: fields[2].to_owned(),
            }
        })
        .collect()
}
