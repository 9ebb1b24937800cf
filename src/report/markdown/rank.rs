//! `rank` in Markdown: the ruler as text, and a table of sizes and shares.

use crate::analysis::rank::RankedEquation;
use crate::report::layout::{cut, padded, percent, range, right, unit, width};
use crate::report::markdown::equation_head;
use crate::report::markdown::table::{Align, block, code, table, text};
use crate::report::ruler::Ruler;
use crate::report::words;
use crate::units::Range;

/// Columns of the ruler.
const RULER: usize = 50;
/// Columns of a share.
const SHARE: usize = 10;
/// Columns of a term beside it.
const LABEL: usize = 20;

/// Writes an equation with its terms, largest first.
pub(super) fn ranked(equation: &RankedEquation, out: &mut String) {
    out.push_str(&equation_head(&equation.name, equation.title.as_ref()));
    let unit_text = unit(&equation.unit);
    let unit_words = match unit_text.as_str() {
        "" => String::new(),
        unit => format!(" Sizes are in {}.", text(unit)),
    };
    out.push_str(&format!(
        "Tolerance {}.{unit_words}\n\n",
        percent(equation.tolerance)
    ));
    let order = equation.largest_first();
    out.push_str(&block(&rulers(equation, &order)));
    let size = match unit_text.as_str() {
        "" => "size".to_owned(),
        unit => format!("size, {}", text(unit)),
    };
    let head = [
        ("term", Align::Left),
        ("process", Align::Left),
        ("scale", Align::Left),
        (size.as_str(), Align::Left),
        ("share", Align::Right),
        ("over the ranges", Align::Right),
        ("verdict", Align::Left),
    ];
    let rows: Vec<Vec<String>> = order
        .iter()
        .map(|idx| {
            let term = &equation.terms[*idx];
            vec![
                code(&term.text),
                text(term.process.as_deref().unwrap_or("")),
                code(&term.scale),
                range(&term.size),
                percent(term.share.nominal),
                words::share(&term.share),
                term.verdict.word().to_owned(),
            ]
        })
        .collect();
    out.push_str(&table(&head, &rows));
}

fn rulers(equation: &RankedEquation, order: &[usize]) -> String {
    let sizes: Vec<Range> = equation.terms.iter().map(|term| term.size).collect();
    let ruler = Ruler::over(&sizes, RULER);
    let labels = equation.terms.iter().map(|term| width(&term.text));
    let column = labels.max().unwrap_or(0).min(LABEL);
    let head = format!("{}  {}", " ".repeat(column), ruler.head());
    let end = column + 2 + ruler.width() + SHARE;
    let share = right("share", end.saturating_sub(width(&head)));
    let mut out = format!("{head}{share}\n");
    for idx in order {
        let term = &equation.terms[*idx];
        out.push_str(&format!(
            "{}  {}{}  {}\n",
            padded(&cut(&term.text, column), column),
            ruler.line(&term.size),
            right(&percent(term.share.nominal), SHARE),
            term.verdict.word()
        ));
    }
    out
}
