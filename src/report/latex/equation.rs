//! A reduced equation as mathematics: on one line, or broken between its terms so that no
//! line runs off the page.

use crate::analysis::reduce::ReducedEquation;
use crate::report::latex::math::{self, Math, Style};
use crate::source::FileId;
use crate::syntax::ast::{Expr, ExprKind, Sign};
use crate::syntax::parser;

/// Most digits that a line of an equation takes at the usual size and width of a page.
const LINE: f64 = 56.0;

/// What begins a new line and what follows it there.
const SIGN_WIDTH: f64 = 2.7;

/// The whole equation on one line.
pub fn one_line(equation: &ReducedEquation) -> String {
    joined(&pieces(&reduced_sides(equation), Style::Display))
}

/// The equation as a display that fits the page.
pub fn display(equation: &ReducedEquation) -> String {
    display_sides(&reduced_sides(equation))
}

/// An equation given as text, `left = right`, on one line; `None` if it cannot be read.
pub fn read_one_line(text: &str) -> Option<String> {
    Some(joined(&pieces(&read_sides(text)?, Style::Display)))
}

/// The same as a display that fits the page.
pub fn read_display(text: &str) -> Option<String> {
    Some(display_sides(&read_sides(text)?))
}

/// Both sides: signed terms, `true` is a minus.
type Sides = [Vec<(bool, Expr)>; 2];

fn reduced_sides(equation: &ReducedEquation) -> Sides {
    equation.sides.each_ref().map(|parts| {
        let parts = parts.iter();
        parts
            .map(|part| (part.is_negative, part.expr.clone()))
            .collect()
    })
}

fn read_sides(text: &str) -> Option<Sides> {
    let (left, right) = text.split_once(" = ")?;
    Some([read_side(left)?, read_side(right)?])
}

fn read_side(text: &str) -> Option<Vec<(bool, Expr)>> {
    let (expr, errors) = parser::parse_expression(text, FileId::default());
    if !errors.is_empty() {
        return None;
    }
    let terms = match expr.kind {
        ExprKind::Sum(terms) => terms,
        _ => vec![(Sign::Plus, expr)],
    };
    Some(
        terms
            .into_iter()
            .map(|(sign, term)| signed(sign, term))
            .collect(),
    )
}

/// A minus before the first factor stands before the term.
fn signed(sign: Sign, mut term: Expr) -> (bool, Expr) {
    let mut is_negative = sign == Sign::Minus;
    if let ExprKind::Product(factors) = &mut term.kind
        && let Some((_, first)) = factors.first_mut()
        && let ExprKind::Negate(inner) = &first.kind
    {
        *first = (**inner).clone();
        is_negative = !is_negative;
    }
    if let ExprKind::Negate(inner) = term.kind {
        return (!is_negative, *inner);
    }
    (is_negative, term)
}

fn display_sides(sides: &Sides) -> String {
    let whole = pieces(sides, Style::Display);
    if whole.iter().any(|piece| piece.math.width > LINE) {
        return paragraph(&pieces(sides, Style::Inline));
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

fn joined(pieces: &[Piece]) -> String {
    pieces.iter().map(Piece::text).collect()
}

fn pieces([left, right]: &Sides, style: Style) -> Vec<Piece> {
    let mut pieces = side(left, "", "-", style);
    pieces.extend(side(right, " = ", " = -", style));
    pieces
}

fn side(
    terms: &[(bool, Expr)],
    first: &'static str,
    first_minus: &'static str,
    style: Style,
) -> Vec<Piece> {
    if terms.is_empty() {
        return vec![Piece {
            sign: first,
            math: math::number("0"),
        }];
    }
    let terms = terms.iter().enumerate();
    terms
        .map(|(idx, (is_negative, term))| Piece {
            sign: match (idx, is_negative) {
                (0, false) => first,
                (0, true) => first_minus,
                (_, false) => " + ",
                (_, true) => " - ",
            },
            math: math::expression(term, style),
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
    let text = joined(pieces);
    format!("\\begin{{flushleft}}\n${text}$\n\\end{{flushleft}}\n")
}
