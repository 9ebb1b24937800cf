//! What was given as a sheet: every scale and constant with its range, text and source,
//! and what the other letters stand for.

use crate::audit::AuditRow;
use crate::report::given;
use crate::report::sheets::{Block, Line, Piece, formula, head, numbers, words};
use crate::session::Outcome;

/// The values, phenomenon by phenomenon; the other letters; the notes.
pub fn given(outcome: &Outcome) -> Vec<Block> {
    let mut blocks = Vec::new();
    for given in given::values(&outcome.symbols) {
        let whose = given.phenomenon.unwrap_or("all");
        blocks.push(Block::Caption(words(format!("For {whose}:"))));
        let columns = [
            ("name", 0.09),
            ("nominal", 0.13),
            ("range", 0.16),
            ("unit", 0.09),
            ("what it is", 0.24),
            ("source", 0.28),
        ];
        let rows = given.rows.iter().map(|row| value(row));
        blocks.push(Block::Table(head(&columns), rows.collect()));
    }
    letters(outcome, &mut blocks);
    groups(outcome, &mut blocks);
    let notes = given::notes(outcome).into_iter();
    blocks.extend(notes.map(|note| {
        Block::Paragraph(vec![
            Piece::Strong("Note:".to_owned()),
            Piece::Message(format!(" {note}.")),
        ])
    }));
    blocks
}

fn value(row: &AuditRow) -> Vec<Line> {
    vec![
        formula(&row.name),
        numbers(given::nominal(row)),
        range(row),
        vec![Piece::Unit(given::unit(row))],
        title(row),
        source(row),
    ]
}

fn range(row: &AuditRow) -> Line {
    given::range(row).map_or_else(|| words("none given"), numbers)
}

fn title(row: &AuditRow) -> Line {
    words(row.title.as_deref().unwrap_or(""))
}

fn size(row: &AuditRow) -> Line {
    row.formula.as_deref().map(formula).unwrap_or_default()
}

/// Where a value comes from: a formula, a source, or both.
fn source(row: &AuditRow) -> Line {
    let mut line = Line::new();
    if let Some(text) = &row.formula {
        line.push(Piece::Words("follows from ".to_owned()));
        line.push(Piece::Formula(text.clone()));
    }
    match (&row.source, line.is_empty()) {
        (Some(source), true) => line = words(source),
        (Some(source), false) => line.push(Piece::Words(format!("; {source}"))),
        (None, true) => line = words("no source given"),
        (None, false) => {}
    }
    line
}

fn letters(outcome: &Outcome, blocks: &mut Vec<Block>) {
    let fields = given::mentioned(outcome, "field");
    let coordinates = given::mentioned(outcome, "coordinate");
    if fields.is_empty() && coordinates.is_empty() {
        return;
    }
    blocks.push(Block::Caption(words("The other letters:")));
    let columns = [
        ("name", 0.1),
        ("kind", 0.13),
        ("size", 0.17),
        ("varies by", 0.2),
        ("what it is", 0.4),
    ];
    let rows = coordinates.iter().chain(&fields).map(|row| {
        vec![
            formula(&row.name),
            words(row.kind),
            size(row),
            words(row.varying.as_deref().unwrap_or("")),
            title(row),
        ]
    });
    blocks.push(Block::Table(head(&columns), rows.collect()));
}

fn groups(outcome: &Outcome, blocks: &mut Vec<Block>) {
    let groups = given::mentioned(outcome, "group");
    if groups.is_empty() {
        return;
    }
    blocks.push(Block::Caption(words("Groups:")));
    let columns = [
        ("name", 0.09),
        ("phenomenon", 0.15),
        ("formula", 0.2),
        ("nominal", 0.12),
        ("range", 0.18),
        ("what it is", 0.24),
    ];
    let rows = groups.iter().map(|row| {
        vec![
            formula(&row.name),
            words(row.phenomenon.as_deref().unwrap_or("")),
            size(row),
            numbers(given::nominal(row)),
            range(row),
            title(row),
        ]
    });
    blocks.push(Block::Table(head(&columns), rows.collect()));
}
