//! `rank` in LaTeX: the terms on their ruler, and a table of sizes and shares.

use crate::analysis::rank::{RankedEquation, RankedTerm};
use crate::report::latex::escape::{breakable, text};
use crate::report::latex::table::table;
use crate::report::latex::{equation_head, math, ruler};
use crate::report::layout::{self, percent};
use crate::report::ruler::Ruler;
use crate::report::words;
use crate::units::Range;

/// Columns for which the decades of the ruler are chosen.
const RULER: usize = 50;

/// Writes an equation with its terms, largest first.
pub(super) fn ranked(equation: &RankedEquation, out: &mut String) {
    out.push_str(&equation_head(&equation.name, equation.title.as_ref()));
    let unit = match equation.unit.as_str() {
        "1" | "" => String::new(),
        unit => format!(" Sizes are in ${}$.", math::unit(unit).text),
    };
    out.push_str(&format!(
        "Tolerance {}.{unit}\n\n",
        text(&percent(equation.tolerance))
    ));
    let order = equation.largest_first();
    let terms: Vec<&RankedTerm> = order.iter().map(|idx| &equation.terms[*idx]).collect();
    out.push_str(&rulers(&terms));
    out.push_str(&sizes(equation, &terms));
}

fn rulers(terms: &[&RankedTerm]) -> String {
    let sizes: Vec<Range> = terms.iter().map(|term| term.size).collect();
    let scale = Ruler::over(&sizes, RULER);
    let labels = ruler::head(&scale);
    let head = [
        ("term", 0.2),
        ("process", 0.2),
        (labels.as_str(), 0.4),
        ("share", 0.1),
        ("verdict", 0.1),
    ];
    let rows: Vec<Vec<String>> = terms
        .iter()
        .map(|term| {
            vec![
                math::inline(&term.expr),
                breakable(term.process.as_deref().unwrap_or("")),
                ruler::line(&scale, &term.size),
                math::numbers(&percent(term.share.nominal)),
                term.verdict.word().to_owned(),
            ]
        })
        .collect();
    table(&head, &rows)
}

fn sizes(equation: &RankedEquation, terms: &[&RankedTerm]) -> String {
    let unit = match equation.unit.as_str() {
        "1" | "" => String::new(),
        unit => format!(", ${}$", math::unit(unit).text),
    };
    let size = format!("size{unit}");
    let head = [
        ("term", 0.2),
        ("scale", 0.2),
        (size.as_str(), 0.14),
        ("lowest", 0.14),
        ("highest", 0.14),
        ("share over the ranges", 0.18),
    ];
    let number = |value: f64| math::numbers(&layout::number(value));
    let rows: Vec<Vec<String>> = terms
        .iter()
        .map(|term| {
            let (low, high) = match term.size.is_exact() {
                true => (String::new(), String::new()),
                false => (number(term.size.low), number(term.size.high)),
            };
            vec![
                math::inline(&term.expr),
                math::inline(&term.scale_expr),
                number(term.size.nominal),
                low,
                high,
                math::numbers(&words::share(&term.share)),
            ]
        })
        .collect();
    table(&head, &rows)
}
