//! What was given, for the audit tables of all forms: which rows they show, and each row
//! in words. Every number has its unit, its range and its source; where a script gave
//! none, the table says so.

use std::collections::BTreeSet;

use crate::audit::AuditRow;
use crate::diagnostic::Severity;
use crate::report::{layout, text, words};
use crate::session::Outcome;

/// The values of one phenomenon, or those common to all.
pub struct Given<'o> {
    /// The phenomenon.
    pub phenomenon: Option<&'o str>,
    /// The scales and constants with a value that something rests on, in order of
    /// declaration; in a phenomenon what follows from others comes behind.
    pub rows: Vec<&'o AuditRow>,
}

/// The scales and constants, phenomenon by phenomenon.
pub fn values(rows: &[AuditRow]) -> Vec<Given<'_>> {
    let shown = rows.iter().filter(|row| {
        matches!(row.kind, "scale" | "constant") && row.value.is_some() && row.is_used
    });
    let mut given: Vec<Given<'_>> = Vec::new();
    for row in shown {
        let phenomenon = row.phenomenon.as_deref();
        match given
            .iter_mut()
            .find(|found| found.phenomenon == phenomenon)
        {
            Some(found) => found.rows.push(row),
            None => given.push(Given {
                phenomenon,
                rows: vec![row],
            }),
        }
    }
    for found in &mut given {
        let is_own = found.phenomenon.is_some();
        found
            .rows
            .sort_by_key(|row| (row.formula.is_some() && is_own, row.place));
    }
    given
}

/// The rows of one kind (`field`, `coordinate`, `group`) that the answers speak of.
pub fn mentioned<'o>(outcome: &'o Outcome, kind: &str) -> Vec<&'o AuditRow> {
    let body = text::answers(&outcome.answers, &outcome.claims, false);
    let words: BTreeSet<&str> = body
        .split(|c: char| !(c.is_alphanumeric() || c == '_' || c == '\''))
        .flat_map(|word| [word, word.strip_prefix("d_").unwrap_or(word)])
        .collect();
    let of_kind = outcome.symbols.iter().filter(|row| row.kind == kind);
    of_kind
        .filter(|row| words.contains(row.name.as_str()) || is_partial(&body, &row.name))
        .collect()
}

/// Whether a name stands behind `∂` or `∂²`, which are no letters.
fn is_partial(body: &str, name: &str) -> bool {
    body.match_indices('∂').any(|(at, sign)| {
        body[at + sign.len()..]
            .trim_start_matches(['²', '³', '⁴', '('])
            .strip_prefix(name)
            .is_some_and(|rest| !rest.starts_with(|c: char| c.is_alphanumeric() || c == '_'))
    })
}

/// The nominal value in the unit in which it was written.
pub fn nominal(row: &AuditRow) -> String {
    row.shown_value()
        .0
        .map(|value| layout::number(value.nominal))
        .unwrap_or_default()
}

/// The range, low to high.
pub fn range(row: &AuditRow) -> Option<String> {
    let value = row.shown_value().0?;
    (!value.is_exact()).then(|| {
        format!(
            "{} .. {}",
            layout::number(value.low),
            layout::number(value.high)
        )
    })
}

/// The unit in which it is shown; `1` of a plain number.
pub fn unit(row: &AuditRow) -> String {
    layout::named_unit(&row.shown_value().1).to_owned()
}

/// What is worth saying about the script and stands nowhere else in a report.
pub fn notes(outcome: &Outcome) -> Vec<&str> {
    let mut messages: Vec<&str> = Vec::new();
    for found in &outcome.diagnostics {
        let is_new = !messages.contains(&found.message.as_str());
        if found.severity == Severity::Note && !words::is_in_report(found.code) && is_new {
            messages.push(&found.message);
        }
    }
    messages
}
