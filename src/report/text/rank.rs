//! `rank` for a terminal: the ruler of decades; the sizes in numbers stand in `sizes`.

use std::fmt::Write as _;

use crate::analysis::rank::RankedEquation;
use crate::report::layout::{WIDTH, cut, padded, percent, right, width};
use crate::report::ruler::Ruler;
use crate::report::text::sizes::size_table;
use crate::report::text::{Pen, equation_head};
use crate::units::Range;

const VERDICT_WIDTH: usize = 7;
const SHARE_WIDTH: usize = 9;
const LONGEST_TERM: usize = 17;
const LONGEST_PROCESS: usize = 24;

/// Writes an equation with its terms, largest first.
pub(super) fn ranked(equation: &RankedEquation, pen: &Pen, out: &mut String) {
    equation_head(
        &equation.name,
        equation.title.as_ref(),
        &equation.unit,
        equation.tolerance,
        pen,
        out,
    );
    let order = equation.largest_first();
    let widest =
        |texts: Vec<&str>, most: usize| texts.into_iter().map(width).max().unwrap_or(0).min(most);
    let processes = widest(
        equation
            .terms
            .iter()
            .map(|term| term.process.as_deref().unwrap_or(""))
            .collect(),
        LONGEST_PROCESS,
    );
    let texts = widest(
        equation
            .terms
            .iter()
            .map(|term| term.text.as_str())
            .collect(),
        // A long process takes room from the terms, which stand whole in the table below.
        LONGEST_TERM.min(2 * LONGEST_TERM - processes),
    );
    let left = 2 + processes + usize::from(processes > 0) + texts + 1;
    let room = WIDTH - left - SHARE_WIDTH - 2 - VERDICT_WIDTH;
    let sizes: Vec<Range> = equation.terms.iter().map(|term| term.size).collect();
    let ruler = Ruler::over(&sizes, room);
    let head = format!("{}{}", " ".repeat(left), ruler.head());
    let share_end = left + ruler.width() + SHARE_WIDTH;
    let share = right("share", share_end.saturating_sub(width(&head)));
    let _ = writeln!(out, "{head}{share}");
    for idx in &order {
        let term = &equation.terms[*idx];
        let process = if processes > 0 {
            padded(
                &cut(term.process.as_deref().unwrap_or(""), processes),
                processes,
            ) + " "
        } else {
            String::new()
        };
        let line = format!(
            "  {process}{} {}{}  {}",
            padded(&cut(&term.text, texts), texts),
            ruler.line(&term.size),
            right(&percent(term.share.nominal), SHARE_WIDTH),
            term.verdict.word()
        );
        let _ = writeln!(out, "{}", pen.verdict(term.verdict, &line));
    }
    out.push('\n');
    size_table(equation, &order, processes, out);
    out.push('\n');
}
