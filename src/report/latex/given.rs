//! The audit in LaTeX: every scale and constant with its range, text and source, and what
//! the other letters stand for.

use crate::audit::AuditRow;
use crate::report::given;
use crate::report::latex::escape::{backticked, text};
use crate::report::latex::math::{self, Style};
use crate::report::latex::table::table;
use crate::session::Outcome;

/// Writes the audit.
pub(super) fn given(outcome: &Outcome, out: &mut String) {
    let values = given::values(&outcome.symbols);
    if !values.is_empty() {
        out.push_str("\\subsection*{What was given}\n\n");
    }
    let head = [
        ("name", 0.09),
        ("nominal", 0.13),
        ("range", 0.16),
        ("unit", 0.09),
        ("what it is", 0.24),
        ("source", 0.28),
    ];
    for given in values {
        out.push_str(&match given.phenomenon {
            Some(phenomenon) => format!("For {}:\\nopagebreak\n\n", text(phenomenon)),
            None => "For all:\\nopagebreak\n\n".to_owned(),
        });
        let rows: Vec<Vec<String>> = given.rows.iter().map(|row| value_row(row)).collect();
        out.push_str(&table(&head, &rows));
    }
    letters(outcome, out);
    groups(outcome, out);
    for note in given::notes(outcome) {
        out.push_str(&format!("\\textbf{{Note:}} {}.\n\n", backticked(note)));
    }
}

fn value_row(row: &AuditRow) -> Vec<String> {
    vec![
        name(row),
        math::numbers(&given::nominal(row)),
        range(row),
        unit(row),
        text(row.title.as_deref().unwrap_or("")),
        source(row),
    ]
}

fn name(row: &AuditRow) -> String {
    format!("${}$", math::name(&row.name).text)
}

fn range(row: &AuditRow) -> String {
    match given::range(row) {
        Some(range) => math::numbers(&range),
        None => "none given".to_owned(),
    }
}

fn unit(row: &AuditRow) -> String {
    format!("${}$", math::unit(&given::unit(row)).text)
}

/// Where a value comes from: a formula, a source, or both.
fn source(row: &AuditRow) -> String {
    let formula = row
        .formula
        .as_ref()
        .map(|formula| format!("follows from {}", formula_math(formula)));
    let source = row.source.as_ref().map(|source| text(source));
    match (formula, source) {
        (Some(formula), Some(source)) => format!("{formula}; {source}"),
        (Some(one), None) | (None, Some(one)) => one,
        (None, None) => "no source given".to_owned(),
    }
}

fn formula_math(formula: &str) -> String {
    format!("${}$", math::read(formula, Style::Inline).text)
}

fn letters(outcome: &Outcome, out: &mut String) {
    let fields = given::mentioned(outcome, "field");
    let coordinates = given::mentioned(outcome, "coordinate");
    if fields.is_empty() && coordinates.is_empty() {
        return;
    }
    out.push_str("The other letters:\\nopagebreak\n\n");
    let head = [
        ("name", 0.1),
        ("kind", 0.13),
        ("size", 0.17),
        ("varies by", 0.2),
        ("what it is", 0.4),
    ];
    let rows: Vec<Vec<String>> = coordinates
        .iter()
        .chain(&fields)
        .map(|row| {
            vec![
                name(row),
                row.kind.to_owned(),
                row.formula.as_deref().map(formula_math).unwrap_or_default(),
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
    out.push_str("Groups:\\nopagebreak\n\n");
    let head = [
        ("name", 0.09),
        ("phenomenon", 0.15),
        ("formula", 0.2),
        ("nominal", 0.12),
        ("range", 0.18),
        ("what it is", 0.24),
    ];
    let rows: Vec<Vec<String>> = groups
        .iter()
        .map(|row| {
            vec![
                name(row),
                text(row.phenomenon.as_deref().unwrap_or("")),
                row.formula.as_deref().map(formula_math).unwrap_or_default(),
                math::numbers(&given::nominal(row)),
                range(row),
                text(row.title.as_deref().unwrap_or("")),
            ]
        })
        .collect();
    out.push_str(&table(&head, &rows));
}
