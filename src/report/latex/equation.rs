//! A reduced equation as mathematics: on one line, or broken between its terms so that no
//! line runs off the page.

use crate::analysis::reduce::{Part, ReducedEquation};
use crate::report::latex::math::{self, Math, Style};

/// Most digits that a line of an equation takes at the usual size and width of a page.
const LINE: f64 = 56.0;

/// What begins a new line and what follows it there.
const SIGN_WIDTH: f64 = 2.7;

/// The whole equation on one line.
pub fn one_line(equation: &ReducedEquation) -> String {
    let pieces = pieces(equation, Style::Display);
    pieces.iter().map(|piece| piece.text()).collect()
}

/// The equation as a display that fits the page.
pub fn display(equation: &ReducedEquation) -> String {
    let whole = pieces(equation, Style::Display);
    if whole.iter().any(|piece| piece.math.width > LINE) {
        return paragraph(&pieces(equation, Style::Inline));
    }
    let lines = lines(&whole);
    let [single] = lines.as_slice() else {
        let lines: Vec<String> = lines.iter().enumerate().map(aligned).collect();
        return format!(
            "\\begin{{align*}}\n{}\n\\end{{align*}}\n",
            lines.join(" \\\\\n")
        );
    };
    let text: String = single.iter().map(|piece| piece.text()).collect();
    format!("\\[\n  {text}\n\\]\n")
}

/// One term with what stands before it.
struct Piece {
    sign: &'static str,
    math: Math,
}

impl Piece {
    fn text(&self) -> String {
        format!("{}{}", self.sign, self.math.text)
    }
}

fn pieces(equation: &ReducedEquation, style: Style) -> Vec<Piece> {
    let [left, right] = &equation.sides;
    let mut pieces = side(left, "", "-", style);
    pieces.extend(side(right, " = ", " = -", style));
    pieces
}

fn side(
    parts: &[Part],
    first: &'static str,
    first_minus: &'static str,
    style: Style,
) -> Vec<Piece> {
    if parts.is_empty() {
        return vec![Piece {
            sign: first,
            math: math::number("0"),
        }];
    }
    let parts = parts.iter().enumerate();
    parts
        .map(|(idx, part)| Piece {
            sign: match (idx, part.is_negative) {
                (0, false) => first,
                (0, true) => first_minus,
                (_, false) => " + ",
                (_, true) => " - ",
            },
            math: math::expression(&part.expr, style),
        })
        .collect()
}

/// Fills lines from the left; one that begins with `=` begins a new line where the whole
/// does not fit one.
fn lines(pieces: &[Piece]) -> Vec<Vec<&Piece>> {
    let width = |piece: &Piece| piece.math.width + SIGN_WIDTH;
    if pieces.iter().map(width).sum::<f64>() <= LINE {
        return vec![pieces.iter().collect()];
    }
    let mut lines: Vec<Vec<&Piece>> = Vec::new();
    let mut room = 0.0;
    for piece in pieces {
        let begins = piece.sign.contains('=');
        match lines.last_mut() {
            Some(line) if !begins && width(piece) <= room => line.push(piece),
            _ => {
                lines.push(vec![piece]);
                room = LINE;
            }
        }
        room -= width(piece);
    }
    lines
}

/// A line of several: the first at the mark, the others a step behind it.
fn aligned((idx, line): (usize, &Vec<&Piece>)) -> String {
    let text: String = line.iter().map(|piece| piece.text()).collect();
    match (idx, text.starts_with(" =")) {
        (0, _) => format!("  & {text}"),
        (_, true) => format!("  & \\quad {{}}{}", text.trim_start()),
        (_, false) => format!("  & \\qquad {{}}{}", text.trim_start()),
    }
}

/// For terms that are wider than a line: a paragraph that TeX breaks anywhere between
/// factors.
fn paragraph(pieces: &[Piece]) -> String {
    let text: String = pieces.iter().map(|piece| piece.text()).collect();
    format!("\\begin{{flushleft}}\n${text}$\n\\end{{flushleft}}\n")
}
