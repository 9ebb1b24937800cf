//! `show` for a terminal.

use std::fmt::Write as _;

use crate::analysis::show::Shown;
use crate::report::layout::{WIDTH, cut, quantity, unit, wrapped};
use crate::report::text::Pen;

/// Writes a value under its request.
pub(super) fn show(title: &str, shown: &Shown, pen: &Pen, out: &mut String) {
    let (value, unit_text) = match &shown.shown_in {
        Some((unit, value)) => (value, unit),
        None => (&shown.value, &shown.unit),
    };
    let bound = if shown.is_bound { "at most " } else { "" };
    let mut text = format!("{bound}{}", quantity(value, unit_text));
    if let Some(order) = shown.order {
        let _ = write!(text, ", order 1e{order}");
        if shown.shown_in.is_some() && shown.unit != "1" {
            let _ = write!(text, " {}", unit(&shown.unit));
        }
    }
    if let Some(group) = &shown.group {
        let title = shown.group_title.as_ref().map(|title| format!(", {title}"));
        let _ = write!(text, "; {group}{}", title.unwrap_or_default());
    }
    let _ = writeln!(out, "{}", pen.head(&cut(title, WIDTH)));
    out.push_str(&wrapped("  = ", &text));
    out.push('\n');
}
