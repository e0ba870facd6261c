//! What the file claims about an answer, and the verdicts.

use super::document::{Blocks, Inline, code, text};
use super::{Material, Posed};
use crate::analysis::Entry;
use crate::analysis::check::Verdict;
use crate::typeset::answer::TextStyle;
use crate::typeset::answer::check;
use crate::typeset::answer::response::label;
use crate::typeset::screen::{Characters, Screen};

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
    // The columns of a terminal mean nothing here.
    let line = |line: &str| line.split_whitespace().collect::<Vec<_>>().join(" ");
    written.lines().map(|fact| vec![text(line(fact))]).collect()
}
