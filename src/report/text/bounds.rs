//! `bounds` for a terminal.

use std::fmt::Write as _;

use crate::analysis::bounds::{Bound, Bounds, End};
use crate::analysis::sizes::SAME;
use crate::report::layout::{padded, width, wrapped};
use crate::report::standing;
use crate::report::text::Pen;

/// Writes where a reduced system stands.
pub(super) fn bounds(bounds: &Bounds, pen: &Pen, out: &mut String) {
    if let Some(nearest) = standing::nearest(bounds) {
        let _ = writeln!(out, "{}\n", pen.head(wrapped("  ", &nearest).trim_end()));
    } else if !bounds.scales.is_empty() {
        out.push_str("  no scale alone ends it\n\n");
    }
    table(bounds, out);
    conditions(bounds, out);
    for text in standing::left_out(&bounds.dropped) {
        out.push_str(&wrapped("  left out ", &text));
    }
    out.push_str(&wrapped("  ranges   ", &standing::box_words(bounds)));
    for place in &bounds.lone {
        out.push_str(&wrapped("  warning  ", &standing::left_out_lone(place)));
    }
    out.push('\n');
}

/// Each condition with what rests on it.
fn conditions(bounds: &Bounds, out: &mut String) {
    for (title, found) in [
        ("stands while", standing::needed(&bounds.conditions)),
        ("more may go where", standing::may_go(&bounds.conditions)),
    ] {
        if found.is_empty() {
            continue;
        }
        out.push_str(&format!("  {title}\n"));
        for (condition, rests) in found {
            out.push_str(&wrapped("    ", &condition));
            out.push_str(&wrapped("        ", &rests));
        }
        out.push('\n');
    }
}

/// Every scale with its ends, the near ones first told.
fn table(bounds: &Bounds, out: &mut String) {
    if bounds.scales.is_empty() {
        return;
    }
    let rows: Vec<Vec<[String; 4]>> = bounds.scales.iter().map(ends).collect();
    let column = |of: &dyn Fn(&[String; 4]) -> usize| {
        let widths = rows.iter().flatten().map(of);
        widths.max().unwrap_or(0)
    };
    let labels = column(&|row| width(&row[0]));
    let values = column(&|row| width(&row[1]));
    let factors = column(&|row| width(&row[2]));
    let heads: Vec<String> = bounds.scales.iter().map(head).collect();
    let names = heads.iter().map(|head| width(head)).max().unwrap_or(0);
    for (head, rows) in heads.iter().zip(&rows) {
        for (idx, row) in rows.iter().enumerate() {
            let head = if idx == 0 { head.as_str() } else { "" };
            let label = format!(
                "  {}  {}  {}  {}  ",
                padded(head, names),
                padded(&row[0], labels),
                padded(&row[1], values),
                padded(&row[2], factors)
            );
            out.push_str(&wrapped(&label, &row[3]));
        }
    }
    out.push('\n');
}

fn head(bound: &Bound) -> String {
    format!("{} = {}", bound.name, standing::value(bound, bound.nominal))
}

/// What happens below and above: where the system stands to, and, where that comes
/// earlier, where it changes.
fn ends(bound: &Bound) -> Vec<[String; 4]> {
    let mut rows = Vec::new();
    let mut add = |label: &str, end: Option<&End>| {
        let [value, factor, then] = standing::end(bound, end);
        rows.push([label.to_owned(), value, factor, then]);
    };
    let (stands, same) = (&bound.stands, &bound.unchanged);
    if is_elsewhere(same.low.as_ref(), stands.low.as_ref()) {
        add("changes below", same.low.as_ref());
    }
    add("stands down to", stands.low.as_ref());
    if is_elsewhere(same.high.as_ref(), stands.high.as_ref()) {
        add("changes above", same.high.as_ref());
    }
    add("stands up to", stands.high.as_ref());
    if let Some(balance) = &bound.balance {
        add("balanced down to", balance.low.as_ref());
        add("balanced up to", balance.high.as_ref());
    }
    rows
}

fn is_elsewhere(a: Option<&End>, b: Option<&End>) -> bool {
    match (a, b) {
        (Some(a), Some(b)) => (a.way - b.way).abs() > SAME,
        (None, None) => false,
        (Some(_), None) | (None, Some(_)) => true,
    }
}
