//! What closes a note: warnings, cautions, and what it takes to make it again.

use super::Material;
use super::document::{Blocks, Inline, code, text};

pub(super) fn write(blocks: &mut Blocks, material: &Material<'_>) {
    warnings(blocks, material);
    cautions(blocks);
    origin(blocks, material);
}

fn warnings(blocks: &mut Blocks, material: &Material<'_>) {
    let mut items: Vec<Vec<Inline>> = Vec::new();
    for remark in material.remarks {
        items.push(vec![text(format!("{} (line {})", remark.message, remark.line))]);
    }
    for survey in material.answers.iter().flat_map(|(_, surveys)| surveys) {
        let entry = &survey.entry;
        let of_roots = survey.numbers.as_ref().ok().and_then(|numbers| numbers.roots.as_ref());
        let more = of_roots.map(|report| report.notices.as_slice()).unwrap_or_default();
        for notice in entry.notices.iter().chain(more) {
            let name = crate::typeset::answer::response::label(entry);
            items.push(vec![text(format!("{name}: {}", notice.message))]);
        }
    }
    let said = |item: &Vec<Inline>| match item.first() {
        Some(Inline::Text(words)) => words.clone(),
        _ => String::new(),
    };
    let mut seen = std::collections::BTreeSet::new();
    items.retain(|item| seen.insert(said(item)));
    if !items.is_empty() {
        blocks.heading(1, vec![text("Warnings and remarks")]);
        blocks.list(items);
    }
}

/// What a formula cannot know.
const CAUTIONS: [&str; 6] = [
    "The circuit is linear. Formulas of transistors and other devices are small-signal ones: they hold for \
     small deviations about the bias point whose parameters were given, and say nothing about clipping, \
     slewing or start-up.",
    "Parts are as ideal as they are drawn: stray capacitance, inductance of leads, leakage and the limits of \
     real amplifiers are in the answer only where they are in the circuit.",
    "Envelopes show circuits drawn by chance; they are no bound for the worst case.",
    "Ratings were not looked at: no voltage, current, power or temperature of a part, no ageing, and no margin \
     of safety.",
    "Where mains voltage, high voltage, stored energy or a protective function is concerned, the codes in force \
     at the place and the judgement of licensed practitioners decide, not this note.",
    "Check the model before the formula: the witnesses confirm that the formula follows from the circuit, not \
     that the circuit is the right one.",
];

fn cautions(blocks: &mut Blocks) {
    blocks.heading(1, vec![text("Cautions")]);
    blocks.list(CAUTIONS.iter().map(|caution| vec![text(*caution)]).collect());
}

fn origin(blocks: &mut Blocks, material: &Material<'_>) {
    let origin = &material.origin;
    blocks.heading(1, vec![text("To make this note again")]);
    let mut command = vec!["cofactor note".to_owned(), origin.file.to_owned()];
    command.extend(origin.options.iter().cloned());
    blocks.list(vec![
        vec![text("program: cofactor "), text(origin.version)],
        vec![text("command: "), code(command.join(" "))],
        vec![text("file: "), code(origin.file), text(", SHA-256 "), code(origin.hash)],
    ]);
    blocks.paragraph(vec![text(
        "The file; characters that do not show are written by their codes, as in ⟨U+200B⟩:",
    )]);
    blocks.listing(origin.text);
}
