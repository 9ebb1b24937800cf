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
    // One phenomenon for all is named once.
    let first = claims[0].phenomenon.as_ref();
    let common = first.filter(|_| {
        claims
            .iter()
            .all(|claim| claim.phenomenon.as_ref() == first)
    });
    let head = match common {
        Some(name) => format!("claims for {name}"),
        None => "claims".to_owned(),
    };
    let _ = writeln!(out, "{}", pen.head(&head));
    for claim in claims {
        let text = words::claim(claim);
        let text = match common {
            Some(name) => text.trim_end_matches(&format!(" for {name}")),
            None => &text,
        };
        let label = if claim.met {
            "  met      "
        } else {
            "  not met  "
        };
        let block = wrapped(label, text);
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
