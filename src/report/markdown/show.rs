//! `show` in Markdown.

use crate::analysis::show::Shown;
use crate::report::markdown::table::text;
use crate::report::words;

/// Writes a value under its request.
pub(super) fn show(shown: &Shown, out: &mut String) {
    out.push_str(&format!("{}\n\n", text(&words::shown(shown))));
}
