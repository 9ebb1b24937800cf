//! The report as Markdown: tables, the ruler as text in code blocks, equations as
//! mathematics. It stands for itself: a reader who has not seen the script finds what was
//! given, with unit, range and source, and what the words mean. Each request has a file
//! of its own.

mod claims;
mod rank;
mod reduce;
mod sheet;
mod show;
mod table;

use crate::analysis::Answer;
use crate::report::markdown::table::{code, text};
use crate::report::sheets::View;
use crate::report::{CAUTION, sheets, words};
use crate::session::Outcome;

/// Writes the whole report.
pub fn report(outcome: &Outcome) -> String {
    let mut out = format!("# Scale analysis: {}\n\n", text(&outcome.script));
    if outcome.answers.is_empty() && outcome.claims.is_empty() {
        return out + "Nothing was answered.\n";
    }
    let given = sheets::given(outcome);
    if !given.is_empty() {
        out.push_str("## What was given\n\n");
    }
    sheet::sheet(&given, &mut out);
    if outcome.answers.iter().any(words::has_verdicts) {
        out.push_str(&format!(
            "## How to read the answers\n\n{}\n\n",
            words::LEGEND
        ));
    }
    for answer in &outcome.answers {
        write_answer(answer, &mut out);
    }
    claims::claims(&outcome.claims, &mut out);
    out.push_str(&format!("---\n\n{CAUTION}\n"));
    out
}

fn write_answer(answer: &Answer, out: &mut String) {
    out.push_str(&heading(answer));
    match sheets::view(&answer.body) {
        View::Show(shown) => show::show(shown, out),
        View::Rank(equations) => equations
            .iter()
            .for_each(|equation| rank::ranked(equation, out)),
        View::Reduce(reduction) => reduce::reduce(reduction, out),
        View::Sheet(blocks) => sheet::sheet(&blocks, out),
    }
    for left in &answer.left_out {
        out.push_str(&format!(
            "Left out: {}, which needs a value of {}.\n\n",
            code(&left.equation),
            codes(&left.open)
        ));
    }
}

fn heading(answer: &Answer) -> String {
    let heading = words::asked(answer);
    format!(
        "## {}{}\n\n",
        code(&heading.request),
        text(&heading.subject)
    )
}

/// Names set as code, in a row.
fn codes(names: &[String]) -> String {
    let names: Vec<String> = names.iter().map(|name| code(name)).collect();
    names.join(", ")
}

/// The heading of an equation: its name and its title.
fn equation_head(name: &str, title: Option<&String>) -> String {
    match title {
        Some(title) => format!("### {}: {}\n\n", code(name), text(title)),
        None => format!("### {}\n\n", code(name)),
    }
}
