//! `rank` for a terminal: the ruler of decades, and the sizes in numbers.

use std::fmt::Write as _;

use crate::analysis::rank::{RankedEquation, RankedTerm};
use crate::report::layout::{WIDTH, cut, padded, percent, range, right, unit, width};
use crate::report::ruler::Ruler;
use crate::report::text::{Pen, equation_head};
use crate::report::words;
use crate::units::Range;

const VERDICT_WIDTH: usize = 7;
const SHARE_WIDTH: usize = 9;

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
        17,
    );
    let texts = widest(
        equation
            .terms
            .iter()
            .map(|term| term.text.as_str())
            .collect(),
        17,
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
    size_table(equation, &order, out);
    out.push('\n');
}

/// Every term with its scale, its size and its share over the box.
fn size_table(equation: &RankedEquation, order: &[usize], out: &mut String) {
    let rows: Vec<[String; 4]> = order
        .iter()
        .map(|idx| {
            let term = &equation.terms[*idx];
            let share = words::share(&term.share);
            [
                term.text.clone(),
                term.scale.clone(),
                range(&term.size),
                share + &below(term),
            ]
        })
        .collect();
    let column = |idx: usize, title: &str, most: usize| {
        rows.iter()
            .map(|row| width(&row[idx]))
            .max()
            .unwrap_or(0)
            .max(width(title))
            .min(most)
    };
    let size_title = format!("size, {}", unit(&equation.unit))
        .trim_end_matches(", ")
        .to_owned();
    let (sizes, shares) = (column(2, &size_title, 32), column(3, "share", 24));
    let room = WIDTH.saturating_sub(2 + 2 + 2 + 2 + sizes + shares);
    let texts = column(0, "term", room.saturating_sub(8).max(8));
    let scales = column(1, "scale", room.saturating_sub(texts).max(8));
    let mut line = |row: [&str; 4]| {
        let text = format!(
            "  {}  {}  {}  {}",
            padded(&cut(row[0], texts), texts),
            padded(&cut(row[1], scales), scales),
            padded(row[2], sizes),
            row[3]
        );
        let _ = writeln!(out, "{}", text.trim_end());
    };
    line(["term", "scale", &size_title, "share"]);
    for row in &rows {
        line([&row[0], &row[1], &row[2], &row[3]]);
    }
}

fn below(term: &RankedTerm) -> String {
    match term.below_parts {
        Some(ratio) if ratio < 1.0 => format!(", {} of its parts", percent(ratio)),
        Some(_) | None => String::new(),
    }
}
