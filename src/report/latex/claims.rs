//! Claims in LaTeX.

use crate::analysis::claims::Held;
use crate::report::latex::escape::{breakable, text};
use crate::report::latex::table::table;
use crate::report::words;

/// Writes all claims as a table, with a summary line.
pub(super) fn claims(claims: &[Held], out: &mut String) {
    if claims.is_empty() {
        return;
    }
    out.push_str(&format!(
        "\\subsection*{{Claims}}\n\n{}.\n\n",
        words::tally(claims)
    ));
    let head = [("claim", 0.5), ("outcome", 0.1), ("measured", 0.4)];
    let rows: Vec<Vec<String>> = claims
        .iter()
        .map(|claim| {
            let (outcome, measured) = match claim.met {
                true => ("met", words::measured(claim)),
                false => ("\\textbf{not met}", words::unmet(claim)),
            };
            vec![
                format!("\\texttt{{{}}}", breakable(&words::claim(claim))),
                outcome.to_owned(),
                text(&measured),
            ]
        })
        .collect();
    out.push_str(&table(&head, &rows));
}
