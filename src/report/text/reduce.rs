//! `reduce` for a terminal.

use crate::analysis::reduce::{ReducedEquation, ReducedTerm, Reduction};
use crate::analysis::sizes::Verdict;
use crate::report::layout::{padded, percent, wrapped};
use crate::report::text::{Pen, equation_head};
use crate::report::words;

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
    out.push_str(&wrapped("      ", &equation.reduced));
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
    let mut conditions: Vec<(String, Vec<&str>)> = Vec::new();
    for term in equation
        .kept
        .iter()
        .filter(|term| term.verdict == Verdict::Depends)
    {
        let condition = words::condition_with_values(term);
        match conditions.iter_mut().find(|(found, _)| *found == condition) {
            Some((_, texts)) => texts.push(&term.text),
            None => conditions.push((condition, vec![&term.text])),
        }
    }
    for (condition, texts) in conditions {
        let text = match condition.as_str() {
            "" => texts.join(", "),
            condition => format!("{}: may go where {condition}", texts.join(", ")),
        };
        out.push_str(&wrapped("  depends  ", &text));
    }
}

fn dropped(equation: &ReducedEquation, out: &mut String) {
    let mut terms: Vec<&ReducedTerm> = equation.dropped.iter().collect();
    terms.sort_by(|a, b| b.share.high.total_cmp(&a.share.high));
    let texts: Vec<String> = terms
        .iter()
        .map(|term| format!("{} {}", term.text, percent(term.share.high)))
        .collect();
    let text = if texts.is_empty() {
        "nothing".to_owned()
    } else {
        texts.join(", ")
    };
    out.push_str(&wrapped("  dropped  ", &text));
}
