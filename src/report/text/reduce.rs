//! `reduce` for a terminal.

use crate::analysis::reduce::{ReducedEquation, Reduction};
use crate::report::layout::{padded, percent, wrapped, wrapped_words};
use crate::report::text::{Pen, equation_head};
use crate::report::{conditions, words};

/// Writes a reduced system.
pub(super) fn reduce(reduction: &Reduction, pen: &Pen, out: &mut String) {
    for equation in &reduction.equations {
        reduced(equation, pen, out);
    }
    if !reduction.undetermined.is_empty() {
        let text = words::undetermined(&reduction.undetermined);
        out.push_str(&wrapped("warning   ", &text));
        out.push('\n');
    }
}

fn reduced(equation: &ReducedEquation, pen: &Pen, out: &mut String) {
    equation_head(
        &equation.name,
        equation.title.as_ref(),
        "",
        equation.tolerance,
        pen,
        out,
    );
    let order = words::leading_order(equation);
    out.push_str(&wrapped("  leading order  ", &order));
    let [left, mut right] = equation
        .sides
        .each_ref()
        .map(|parts| words::signed(parts, |part| part.text.clone()));
    right[0].insert_str(0, "= ");
    out.push_str(&wrapped_words("      ", &[left, right].concat()));
    if equation.is_base_state {
        out.push_str(&wrapped("  base     ", words::BASE_STATE));
    }
    depends(equation, out);
    dropped(equation, out);
    if let Some(text) = &equation.first_neglected {
        let sum = format!(
            "at most {} of the largest term ({text}, the first neglected term), {} in all",
            percent(equation.error),
            percent(equation.error_sum)
        );
        out.push_str(&wrapped("  error    ", &sum));
    }
    let kinds = words::kinds(equation);
    if !kinds.is_empty() {
        out.push_str(&wrapped("  fields   ", &kinds));
    }
    for warning in words::warnings(equation) {
        let label = padded(&format!("  {}", warning.severity.word()), 11);
        out.push_str(&wrapped(&label, &warning.message));
    }
    out.push('\n');
}

fn depends(equation: &ReducedEquation, out: &mut String) {
    for found in conditions::depends(equation) {
        let texts: Vec<&str> = found.terms.iter().map(|term| term.text.as_str()).collect();
        let text = format!("{}: {}", texts.join(", "), conditions::fate(&found));
        out.push_str(&wrapped("  depends  ", &text));
    }
}

fn dropped(equation: &ReducedEquation, out: &mut String) {
    let texts = words::dropped_listed(equation);
    let text = if texts.is_empty() {
        "nothing".to_owned()
    } else {
        texts.join(", ")
    };
    out.push_str(&wrapped("  dropped  ", &text));
}
