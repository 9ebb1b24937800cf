//! The audit in Markdown: every scale and constant with its range, text and source, and
//! what the other letters stand for.

use crate::audit::AuditRow;
use crate::report::given;
use crate::report::layout;
use crate::report::markdown::table::{Align, backticked, code, table, text};
use crate::session::Outcome;

/// Writes the audit.
pub(super) fn given(outcome: &Outcome, out: &mut String) {
    let values = given::values(&outcome.symbols);
    if !values.is_empty() {
        out.push_str("## What was given\n\n");
    }
    for given in values {
        if let Some(phenomenon) = given.phenomenon {
            out.push_str(&format!("For {}:\n\n", code(phenomenon)));
        } else {
            out.push_str("For all:\n\n");
        }
        let head = [
            ("name", Align::Left),
            ("nominal", Align::Right),
            ("range", Align::Left),
            ("unit", Align::Left),
            ("what it is", Align::Left),
            ("source", Align::Left),
        ];
        let rows: Vec<Vec<String>> = given.rows.iter().map(|row| value_row(row)).collect();
        out.push_str(&table(&head, &rows));
    }
    letters(outcome, out);
    groups(outcome, out);
    for note in given::notes(outcome) {
        out.push_str(&format!("**Note:** {}.\n\n", backticked(note)));
    }
}

fn value_row(row: &AuditRow) -> Vec<String> {
    vec![
        code(&row.name),
        given::nominal(row),
        given::range(row).unwrap_or_else(|| "none given".to_owned()),
        text(&layout::unit(&given::unit(row))),
        text(row.title.as_deref().unwrap_or("")),
        source(row),
    ]
}

/// Where a value comes from: a formula, a source, or both.
fn source(row: &AuditRow) -> String {
    let formula = row
        .formula
        .as_ref()
        .map(|formula| format!("follows from {}", code(formula)));
    let source = row.source.as_ref().map(|source| text(source));
    match (formula, source) {
        (Some(formula), Some(source)) => format!("{formula}; {source}"),
        (Some(one), None) | (None, Some(one)) => one,
        (None, None) => "no source given".to_owned(),
    }
}

fn letters(outcome: &Outcome, out: &mut String) {
    let fields = given::mentioned(outcome, "field");
    let coordinates = given::mentioned(outcome, "coordinate");
    if fields.is_empty() && coordinates.is_empty() {
        return;
    }
    out.push_str("The other letters:\n\n");
    let head = [
        ("name", Align::Left),
        ("kind", Align::Left),
        ("size", Align::Left),
        ("varies by", Align::Left),
        ("what it is", Align::Left),
    ];
    let rows: Vec<Vec<String>> = coordinates
        .iter()
        .chain(&fields)
        .map(|row| {
            vec![
                code(&row.name),
                row.kind.to_owned(),
                code(row.formula.as_deref().unwrap_or("")),
                text(row.varying.as_deref().unwrap_or("")),
                text(row.title.as_deref().unwrap_or("")),
            ]
        })
        .collect();
    out.push_str(&table(&head, &rows));
}

fn groups(outcome: &Outcome, out: &mut String) {
    let groups = given::mentioned(outcome, "group");
    if groups.is_empty() {
        return;
    }
    out.push_str("Groups:\n\n");
    let head = [
        ("name", Align::Left),
        ("phenomenon", Align::Left),
        ("formula", Align::Left),
        ("nominal", Align::Right),
        ("range", Align::Left),
        ("what it is", Align::Left),
    ];
    let rows: Vec<Vec<String>> = groups
        .iter()
        .map(|row| {
            vec![
                code(&row.name),
                row.phenomenon.as_deref().map(code).unwrap_or_default(),
                code(row.formula.as_deref().unwrap_or("")),
                given::nominal(row),
                given::range(row).unwrap_or_else(|| "none given".to_owned()),
                text(row.title.as_deref().unwrap_or("")),
            ]
        })
        .collect();
    out.push_str(&table(&head, &rows));
}
