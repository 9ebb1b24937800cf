//! Claims for a terminal.

use std::fmt::Write as _;

use crate::analysis::claims::Held;
use crate::report::layout::wrapped;
use crate::report::text::Pen;
use crate::report::words;

/// Writes all claims and a summary line.
pub(super) fn claims(claims: &[Held], pen: &Pen, out: &mut String) {
    if claims.is_empty() {
        return;
    }
    let _ = writeln!(out, "{}", pen.head("claims"));
    for claim in claims {
        let text = words::claim(claim);
        let label = if claim.met {
            "  met      "
        } else {
            "  not met  "
        };
        let block = wrapped(label, &text);
        out.push_str(&if claim.met {
            block
        } else {
            pen.alarm(block.trim_end()) + "\n"
        });
        if !claim.met {
            out.push_str(&wrapped("           ", &words::unmet(claim)));
        }
    }
    let _ = writeln!(out, "{}", words::tally(claims));
}
