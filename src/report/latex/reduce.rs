//! `reduce` in LaTeX.

use crate::analysis::reduce::{Inequality, ReducedEquation, ReducedTerm, Reduction};
use crate::report::conditions::Depends;
use crate::report::latex::escape::{backticked, breakable, text};
use crate::report::latex::math::{self, Style};
use crate::report::latex::table::table;
use crate::report::latex::{equation, equation_head};
use crate::report::layout::{number, percent, range};
use crate::report::{conditions, words};

/// Writes a reduced system.
pub(super) fn reduce(reduction: &Reduction, out: &mut String) {
    for equation in &reduction.equations {
        reduced(equation, out);
    }
    if !reduction.undetermined.is_empty() {
        let message = words::undetermined(&reduction.undetermined);
        out.push_str(&format!("\\textbf{{Warning:}} {}.\n\n", text(&message)));
    }
}

fn reduced(equation: &ReducedEquation, out: &mut String) {
    out.push_str(&equation_head(&equation.name, equation.title.as_ref()));
    out.push_str(&format!(
        "Leading order: \\textbf{{{}}}. Tolerance {}.\n",
        text(&words::leading_order(equation)),
        text(&percent(equation.tolerance))
    ));
    out.push_str(&equation::display(equation));
    let head = [
        ("term", 0.28),
        ("process", 0.24),
        ("share", 0.13),
        ("over the ranges", 0.22),
        ("verdict", 0.15),
    ];
    let terms = equation.kept.iter().chain(words::dropped(equation));
    let rows: Vec<Vec<String>> = terms.map(term_row).collect();
    out.push_str(&table(&head, &rows));
    remarks(equation, out);
}

fn term_row(term: &ReducedTerm) -> Vec<String> {
    vec![
        math::inline(&term.expr),
        breakable(term.process.as_deref().unwrap_or("")),
        math::numbers(&percent(term.share.nominal)),
        math::numbers(&words::share(&term.share)),
        term.verdict.word().to_owned(),
    ]
}

/// `Ro <= 0.1 (now 0.03 .. 0.28)`.
fn inequality(condition: &Inequality) -> String {
    let (factor, exponents) = conditions::left(condition);
    let left = math::product(factor, exponents, Style::Inline);
    format!(
        "${} \\le {}$ (now {})",
        left.text,
        math::number(&number(condition.limit)).text,
        math::numbers(&range(&condition.value))
    )
}

fn remarks(equation: &ReducedEquation, out: &mut String) {
    let mut items: Vec<String> = conditions::depends(equation).iter().map(depends).collect();
    if let Some(first) = &equation.first_neglected {
        items.push(format!(
            "\\textbf{{Error:}} at most {} of the largest term, from {}, the first neglected \
             term; {} in all.",
            math::numbers(&percent(equation.error)),
            format_args!("${}$", math::read(first, Style::Inline).text),
            math::numbers(&percent(equation.error_sum))
        ));
    }
    if equation.is_base_state {
        items.push(format!(
            "\\textbf{{Base:}} {}.",
            backticked(words::BASE_STATE)
        ));
    }
    let kinds = words::kinds(equation);
    if !kinds.is_empty() {
        items.push(format!("\\textbf{{Fields:}} {}.", text(&kinds)));
    }
    for warning in words::warnings(equation) {
        let word = words::capital(warning.severity.word());
        items.push(format!(
            "\\textbf{{{word}:}} {}.",
            backticked(&warning.message)
        ));
    }
    for item in items {
        out.push_str(&format!("\\noindent {item}\n\n"));
    }
}

fn depends(found: &Depends<'_>) -> String {
    let terms = found.terms.iter().map(|term| math::inline(&term.expr));
    let texts: Vec<String> = terms.collect();
    let met = found.conditions.iter().copied().map(inequality);
    let conditions: Vec<String> = met.collect();
    let fate = match conditions.is_empty() {
        true => conditions::MATTERS_IN_PART.to_owned(),
        false => format!("may go where {}", conditions.join(" or ")),
    };
    format!("\\textbf{{Depends:}} {} {fate}.", texts.join(", "))
}
