//! `compare` as a sheet: one column a phenomenon.

use crate::analysis::compare::{ComparedEquation, ComparedProcess, Comparison};
use crate::report::layout::{number, percent, quantity, unit};
use crate::report::sheets::{Block, Line, Piece, formula, labelled, numbers, words};
use crate::report::{standing, words};
use crate::units::Range;

/// Phenomena side by side.
pub(super) fn compare(comparison: &Comparison) -> Vec<Block> {
    let mut blocks = Vec::new();
    for (name, title) in comparison.phenomena.iter().zip(&comparison.titles) {
        if let Some(title) = title {
            blocks.push(labelled(name, format!("{title}.")));
        }
    }
    scales(comparison, &mut blocks);
    groups(comparison, &mut blocks);
    for equation in &comparison.equations {
        compared(comparison, equation, &mut blocks);
    }
    if let Some(matching) = &comparison.matching {
        let text = standing::matching(matching);
        blocks.push(labelled("Match", format!("{text}.")));
    }
    blocks
}

/// The head of a table with one column a phenomenon.
fn columns(first: &str, comparison: &Comparison, last: Option<&str>) -> Vec<(String, f64)> {
    let mut columns = vec![(first.to_owned(), 0.2)];
    let n_phenomena = comparison.phenomena.len().max(1) as f64;
    let names = comparison.phenomena.iter();
    columns.extend(names.map(|name| (name.clone(), 0.68 / n_phenomena)));
    columns.extend(last.map(|title| (title.to_owned(), 0.12)));
    columns
}

fn scales(comparison: &Comparison, blocks: &mut Vec<Block>) {
    if comparison.scales.is_empty() {
        return;
    }
    let cell = |value: &Option<Range>, unit: &str, written: &Option<String>| match value {
        Some(value) => numbers(words::in_unit(value, unit, written.as_ref())),
        None => words("open"),
    };
    let rows = comparison.scales.iter().map(|scale| {
        let values = scale.values.iter().zip(&scale.written_units);
        let cells = values.map(|(value, written)| cell(value, &scale.unit, written));
        std::iter::once(formula(scale.name.clone()))
            .chain(cells)
            .collect()
    });
    let head = columns("scale or constant", comparison, None);
    blocks.push(Block::Table(head, rows.collect()));
}

fn groups(comparison: &Comparison, blocks: &mut Vec<Block>) {
    if comparison.groups.is_empty() {
        return;
    }
    blocks.push(Block::Paragraph(words(format!(
        "Groups match within {}.",
        percent(comparison.tolerance)
    ))));
    let rows = comparison.groups.iter().map(|group| {
        let mut row: Vec<Line> = vec![formula(group.name.clone())];
        let values = group.values.iter();
        row.extend(values.map(|value| numbers(quantity(value, "1"))));
        row.push(words(if group.is_match { "match" } else { "differ" }));
        row
    });
    let head = columns("group", comparison, Some("verdict"));
    blocks.push(Block::Table(head, rows.collect()));
}

fn compared(comparison: &Comparison, equation: &ComparedEquation, blocks: &mut Vec<Block>) {
    blocks.push(Block::Heading(
        equation.name.clone(),
        equation.title.clone(),
    ));
    let mut rows: Vec<Vec<Line>> = equation
        .processes
        .iter()
        .map(|process| process_row(process, equation))
        .collect();
    let balance = |name: &Option<String>| words(name.clone().unwrap_or("unnamed".to_owned()));
    let mut last = vec![vec![Piece::Strong("balance".to_owned())]];
    last.extend(equation.balances.iter().map(balance));
    rows.push(last);
    blocks.push(Block::Table(columns("process", comparison, None), rows));
    let Some(first) = equation.reduced.first() else {
        return;
    };
    if equation.reduced.iter().all(|text| text == first) {
        blocks.push(Block::Paragraph(words("Reduced, for all:")));
        blocks.push(Block::Equation(first.clone()));
        return;
    }
    for (name, text) in comparison.phenomena.iter().zip(&equation.reduced) {
        blocks.push(Block::Paragraph(words(format!("Reduced for {name}:"))));
        blocks.push(Block::Equation(text.clone()));
    }
}

fn process_row(process: &ComparedProcess, equation: &ComparedEquation) -> Vec<Line> {
    let unit = unit(&equation.unit);
    let cells = (0..process.sizes.len()).map(|idx| {
        if process.sizes[idx].nominal == 0.0 {
            return words("not there");
        }
        numbers(
            format!(
                "{} {}, size {} {unit}",
                words::shares(&process.shares[idx]),
                process.verdicts[idx].word(),
                number(process.sizes[idx].nominal)
            )
            .trim_end(),
        )
    });
    std::iter::once(words(process.process.clone()))
        .chain(cells)
        .collect()
}
