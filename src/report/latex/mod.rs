//! The report as LaTeX: a fragment to put into a paper, or a whole document that compiles
//! with a plain TeX installation. Equations are typeset, each size stands on a ruler of
//! decades, and every number has its unit, its range and its source. Each request has a
//! file of its own.

mod claims;
pub mod equation;
pub mod escape;
pub mod math;
mod rank;
mod reduce;
mod ruler;
mod sheet;
mod show;
mod table;
mod unit;

use crate::analysis::Answer;
use crate::report::latex::escape::{breakable, text};
use crate::report::sheets::View;
use crate::report::{CAUTION, sheets, words};
use crate::session::Outcome;

/// What a fragment needs.
const NEEDS: &str = "% Needs \\usepackage{amsmath,longtable}\n";

/// The beginning of a whole document.
const PREAMBLE: &str = r"\documentclass[a4paper]{article}
\usepackage[utf8]{inputenc}
\usepackage{amsmath,longtable}
\setlength{\textwidth}{160mm}
\setlength{\textheight}{240mm}
\setlength{\oddsidemargin}{0mm}
\setlength{\topmargin}{-12mm}
\setlength{\parindent}{0pt}
\setlength{\parskip}{1ex}
\begin{document}
";

/// Writes the report of one script as a fragment.
pub fn fragment(outcome: &Outcome) -> String {
    let mut out = String::from(NEEDS);
    write_report(outcome, &mut out);
    out
}

/// Writes the reports of some scripts as one document.
pub fn document(outcomes: &[Outcome]) -> String {
    let mut out = String::from(PREAMBLE);
    for outcome in outcomes {
        write_report(outcome, &mut out);
    }
    out.push_str("\\end{document}\n");
    out
}

fn write_report(outcome: &Outcome, out: &mut String) {
    out.push_str(&format!(
        "\\section*{{\\raggedright Scale analysis: {}}}\n\n",
        breakable(&outcome.script)
    ));
    if outcome.answers.is_empty() && outcome.claims.is_empty() {
        out.push_str("Nothing was answered.\n\n");
        return;
    }
    let given = sheets::given(outcome);
    if !given.is_empty() {
        out.push_str("\\subsection*{What was given}\n\n");
    }
    sheet::sheet(&given, out);
    if outcome.answers.iter().any(words::has_verdicts) {
        let legend = text(words::LEGEND);
        out.push_str(&format!(
            "\\subsection*{{How to read the answers}}\n\n{legend}\n\n"
        ));
    }
    for answer in &outcome.answers {
        write_answer(answer, out);
    }
    claims::claims(&outcome.claims, out);
    out.push_str(&format!(
        "\\bigskip\\noindent\\emph{{{}}}\n\n",
        text(CAUTION)
    ));
}

fn write_answer(answer: &Answer, out: &mut String) {
    let heading = words::asked(answer);
    out.push_str(&format!(
        "\\subsection*{{\\raggedright \\texttt{{{}}}{}}}\n\n",
        breakable(&heading.request),
        text(&heading.subject)
    ));
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
            text(&left.equation),
            names(&left.open)
        ));
    }
}

/// Names as mathematics, in a row.
fn names(names: &[String]) -> String {
    let names: Vec<String> = names
        .iter()
        .map(|name| format!("${}$", math::name(name).text))
        .collect();
    names.join(", ")
}

/// The heading of an equation: its name and its title.
fn equation_head(name: &str, title: Option<&String>) -> String {
    let title = title
        .map(|title| format!(": {}", text(title)))
        .unwrap_or_default();
    format!(
        "\\subsubsection*{{\\raggedright \\texttt{{{}}}{title}}}\n\n",
        breakable(name)
    )
}
