//! Claims for a terminal.

use std::fmt::Write as _;

use crate::analysis::claims::Held;
use crate::report::layout::{number, wrapped};
use crate::report::text::Pen;
use crate::report::words;

/// Writes all claims and a summary line.
pub(super) fn claims(claims: &[Held], pen: &Pen, out: &mut String) {
    if claims.is_empty() {
        return;
    }
    let _ = writeln!(out, "{}", pen.head("claims"));
    for claim in claims {
        let claim_text = claim.text.strip_prefix("claim ").unwrap_or(&claim.text);
        let text = match (&claim.phenomenon, claim_text.contains(" for ")) {
            (Some(name), false) => format!("{claim_text} for {name}"),
            _ => claim_text.to_owned(),
        };
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
            out.push_str(&wrapped("           ", &unmet_words(claim)));
        }
    }
    let n_met = claims.iter().filter(|claim| claim.met).count();
    let _ = writeln!(
        out,
        "{} {}: {n_met} met, {} not met",
        claims.len(),
        if claims.len() == 1 { "claim" } else { "claims" },
        claims.len() - n_met
    );
}

fn unmet_words(claim: &Held) -> String {
    let mut text = words::measured(claim);
    if let Some(miss) = claim.miss {
        let _ = write!(text, "; misses by a factor {}", number(miss));
    }
    if !claim.mends.is_empty() {
        let _ = write!(text, "; would hold with {}", words::mends(&claim.mends));
    }
    text
}
