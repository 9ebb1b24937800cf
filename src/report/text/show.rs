//! `show` for a terminal.

use std::fmt::Write as _;

use crate::analysis::show::Shown;
use crate::report::layout::{WIDTH, cut, wrapped};
use crate::report::text::Pen;
use crate::report::words;

/// Writes a value under its request.
pub(super) fn show(title: &str, shown: &Shown, pen: &Pen, out: &mut String) {
    let _ = writeln!(out, "{}", pen.head(&cut(title, WIDTH)));
    out.push_str(&wrapped("  = ", &words::shown(shown)));
    out.push('\n');
}
