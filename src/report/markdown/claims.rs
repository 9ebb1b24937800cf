//! Claims in Markdown.

use crate::analysis::claims::Held;
use crate::report::markdown::table::{Align, code, table, text};
use crate::report::words;

/// Writes all claims as a table, with a summary line.
pub(super) fn claims(claims: &[Held], out: &mut String) {
    if claims.is_empty() {
        return;
    }
    out.push_str(&format!("## Claims\n\n{}.\n\n", words::tally(claims)));
    let head = [
        ("claim", Align::Left),
        ("outcome", Align::Left),
        ("measured", Align::Left),
    ];
    let rows: Vec<Vec<String>> = claims
        .iter()
        .map(|claim| {
            let (outcome, measured) = match claim.met {
                true => ("met", words::measured(claim)),
                false => ("**not met**", words::unmet(claim)),
            };
            vec![
                code(&words::claim(claim)),
                outcome.to_owned(),
                text(&measured),
            ]
        })
        .collect();
    out.push_str(&table(&head, &rows));
}
