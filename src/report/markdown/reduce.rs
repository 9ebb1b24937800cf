//! `reduce` in Markdown.

use crate::analysis::reduce::{ReducedEquation, ReducedTerm, Reduction};
use crate::report::latex::equation;
use crate::report::layout::percent;
use crate::report::markdown::equation_head;
use crate::report::markdown::table::{Align, backticked, code, table, text};
use crate::report::{conditions, words};

/// Writes a reduced system.
pub(super) fn reduce(reduction: &Reduction, out: &mut String) {
    for equation in &reduction.equations {
        reduced(equation, out);
    }
    if !reduction.undetermined.is_empty() {
        let message = words::undetermined(&reduction.undetermined);
        out.push_str(&format!("**Warning:** {}.\n\n", text(&message)));
    }
}

fn reduced(equation: &ReducedEquation, out: &mut String) {
    out.push_str(&equation_head(&equation.name, equation.title.as_ref()));
    out.push_str(&format!(
        "Leading order: **{}**. Tolerance {}.\n\n",
        text(&words::leading_order(equation)),
        percent(equation.tolerance)
    ));
    out.push_str(&format!("$$\n{}\n$$\n\n", equation::one_line(equation)));
    let head = [
        ("term", Align::Left),
        ("process", Align::Left),
        ("share", Align::Right),
        ("over the ranges", Align::Right),
        ("verdict", Align::Left),
    ];
    let terms = equation.kept.iter().chain(words::dropped(equation));
    let rows: Vec<Vec<String>> = terms.map(term_row).collect();
    out.push_str(&table(&head, &rows));
    out.push_str(&remarks(equation));
}

fn term_row(term: &ReducedTerm) -> Vec<String> {
    vec![
        code(&term.text),
        text(term.process.as_deref().unwrap_or("")),
        percent(term.share.nominal),
        words::share(&term.share),
        term.verdict.word().to_owned(),
    ]
}

fn remarks(equation: &ReducedEquation) -> String {
    let mut out = String::new();
    for found in conditions::depends(equation) {
        let texts: Vec<String> = found.terms.iter().map(|term| code(&term.text)).collect();
        out.push_str(&format!(
            "- **Depends:** {} {}.\n",
            texts.join(", "),
            text(&conditions::fate(&found).replace("<=", "≤"))
        ));
    }
    if let Some(first) = &equation.first_neglected {
        out.push_str(&format!(
            "- **Error:** at most {} of the largest term, from {}, the first neglected term; {} in all.\n",
            percent(equation.error),
            code(first),
            percent(equation.error_sum)
        ));
    }
    if equation.is_base_state {
        out.push_str(&format!("- **Base:** {}.\n", backticked(words::BASE_STATE)));
    }
    let kinds = words::kinds(equation);
    if !kinds.is_empty() {
        out.push_str(&format!("- **Fields:** {}.\n", text(&kinds)));
    }
    for warning in words::warnings(equation) {
        let word = words::capital(warning.severity.word());
        out.push_str(&format!(
            "- **{word}:** {}.\n",
            backticked(&warning.message)
        ));
    }
    out.push('\n');
    out
}
