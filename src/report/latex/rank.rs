//! `rank` in LaTeX: the terms on their ruler, and a table of sizes and shares.

use crate::analysis::rank::{RankedEquation, RankedTerm};
use crate::report::latex::escape::{breakable, text};
use crate::report::latex::table::table;
use crate::report::latex::{equation_head, math, ruler};
use crate::report::layout::percent;
use crate::report::layout::range;
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
    out.push_str(&sizes(&terms));
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

fn sizes(terms: &[&RankedTerm]) -> String {
    let head = [
        ("term", 0.22),
        ("scale", 0.22),
        ("size", 0.36),
        ("share over the ranges", 0.2),
    ];
    let rows: Vec<Vec<String>> = terms
        .iter()
        .map(|term| {
            vec![
                math::inline(&term.expr),
                math::inline(&term.scale_expr),
                math::numbers(&range(&term.size)),
                math::numbers(&words::share(&term.share)),
            ]
        })
        .collect();
    table(&head, &rows)
}
