//! What the file claims about an answer, and the verdicts.

use super::document::{Blocks, Inline, code, text};
use super::{Material, Posed};
use crate::analysis::Entry;
use crate::analysis::check::Verdict;
use crate::typeset::answer::TextStyle;
use crate::typeset::answer::check;
use crate::typeset::answer::response::label;
use crate::typeset::screen::{Characters, Screen};

/// The deepest indent of a title in the text for a terminal.
const TITLE: usize = 4;

/// Each claim as it is written, its verdict and the reasons.
pub(super) fn write(blocks: &mut Blocks, material: &Material<'_>, entry: &Entry) {
    let about = |posed: &&Posed<'_>| posed.name == entry.name && posed.source == entry.source;
    let mut claims = material.claims.iter().filter(about).peekable();
    if claims.peek().is_none() {
        return;
    }
    blocks.heading(2, vec![text(format!("Claims about {}", label(entry)))]);
    for posed in claims {
        match &posed.outcome {
            Err(reason) => blocks.paragraph(vec![
                code(posed.text.clone()),
                text(format!(" was not judged: {reason}.")),
            ]),
            Ok(checked) => {
                let holds =
                    matches!(checked.judgement.verdict, Verdict::Equal | Verdict::EqualInLimit);
                let mut said = vec![code(check::heading(checked))];
                if !holds {
                    said.push(text(" "));
                    said.push(Inline::Strong("This claim is wrong.".to_owned()));
                }
                blocks.paragraph(said);
                blocks.list(facts(checked));
            }
        }
    }
}

/// The verdict, its limits, the repair and the worst deviation, one to a line.
fn facts(checked: &check::Checked<'_>) -> Vec<Vec<Inline>> {
    let screen = Screen { width: usize::MAX, characters: Characters::Unicode };
    let style = TextStyle { screen, quiet: false };
    let written = check::text(checked, style, &|_, piece| piece.to_owned());
    let mut facts: Vec<String> = Vec::new();
    for line in written.lines() {
        let line = line.trim_end();
        let fact = line.trim_start();
        match facts.last_mut() {
            // A line without a title goes on with the one before.
            Some(last) if line.len() - fact.len() > TITLE => last.push_str(&format!("; {fact}")),
            _ => facts.push(match fact.split_once("  ") {
                Some((title, words)) => format!("{title}: {}", words.trim_start()),
                None => fact.to_owned(),
            }),
        }
    }
    facts.into_iter().map(|fact| vec![text(fact)]).collect()
}
