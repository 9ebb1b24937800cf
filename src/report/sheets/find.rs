//! `find` as a sheet.

use crate::analysis::balances::{Balances, Candidate, FoundScale};
use crate::report::layout::quantity_in;
use crate::report::sheets::{Block, Line, Piece, formula, head, labelled, numbers, words};
use crate::report::text;
use crate::report::{conditions, words};

/// All balances.
pub(super) fn find(balances: &Balances) -> Vec<Block> {
    if balances.candidates.is_empty() {
        let message = words::no_balance(balances);
        return vec![labelled(
            "Warning",
            format!("{}.", message.replace('`', "")),
        )];
    }
    let mut blocks = vec![Block::Paragraph(words(format!(
        "{}.",
        text::find::summary(balances)
    )))];
    if let Some(small) = &balances.small {
        blocks.push(Block::Paragraph(words(format!(
            "Sizes compare as powers of {small}."
        ))));
    }
    for (idx, candidate) in balances.candidates.iter().enumerate() {
        let name = match candidate.names.as_slice() {
            [] => "unnamed".to_owned(),
            names => names.join(", "),
        };
        blocks.push(Block::Heading(format!("{}", idx + 1), Some(name)));
        candidate_blocks(candidate, balances.small.as_deref(), &mut blocks);
    }
    blocks
}

fn candidate_blocks(candidate: &Candidate, small: Option<&str>, blocks: &mut Vec<Block>) {
    let columns = [("scale", 0.15), ("formula", 0.45), ("value", 0.4)];
    let rows = candidate.scales.iter();
    let rows = rows.map(|scale| scale_row(scale, candidate)).collect();
    blocks.push(Block::Table(head(&columns), rows));
    for free in &candidate.free {
        for end in text::find::all_ends(free) {
            blocks.push(labelled(&free.name, format!("{end}.")));
        }
    }
    let columns = [("equation", 0.4), ("balance", 0.6)];
    let rows = candidate
        .balances
        .iter()
        .map(|(equation, processes)| vec![words(equation.clone()), words(processes.join(" ~ "))]);
    blocks.push(Block::Table(head(&columns), rows.collect()));
    if let Some(neglected) = &candidate.neglected {
        let text = text::find::neglected_words(neglected, small);
        blocks.push(labelled("Neglects", format!("{text}.")));
    }
    if !candidate.whole_box {
        let conditions = candidate.conditions.iter();
        let texts: Vec<String> = conditions
            .map(|found| conditions::with_value(found).replace("<=", "≤"))
            .collect();
        let text = match texts.as_slice() {
            [] => "over part of the ranges only".to_owned(),
            texts => format!("where {}", texts.join(" and ")),
        };
        blocks.push(labelled("Stands", format!("{text}.")));
    }
}

fn scale_row(scale: &FoundScale, candidate: &Candidate) -> Vec<Line> {
    let found = scale.formula.as_ref().map(words::formula);
    let value = scale
        .value
        .map(|value| quantity_in(&value, scale.shown_in.as_deref(), &scale.unit));
    let free = candidate.free.iter().find(|free| free.name == scale.name);
    let free = free.map_or("free", |free| text::find::free_words(free));
    vec![
        formula(scale.name.clone()),
        found.map_or_else(|| words(free), formula),
        value.map_or_else(|| vec![Piece::Words(String::new())], numbers),
    ]
}
