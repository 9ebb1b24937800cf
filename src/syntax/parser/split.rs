//! Cuts the tokens of a script into statements, before anything is parsed.
//!
//! A statement begins with its keyword and runs to the next one, so one fault never
//! reaches into the next statement, and reading stays linear.

use std::ops::Range;

use crate::syntax::token::{Kind, Token};

/// A piece of a script: tokens by their indices.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) enum Piece {
    /// A statement, from its keyword on.
    Statement(Range<usize>),
    /// The head of a phenomenon: up to its opening brace, or up to the next statement if
    /// there is none.
    Open(Range<usize>),
    /// The closing brace of a phenomenon.
    Close(usize),
    /// Tokens that belong to no statement.
    Stray(Range<usize>),
}

/// Cuts tokens into pieces.
pub(super) fn split(tokens: &[Token<'_>]) -> Vec<Piece> {
    let mut pieces = Vec::new();
    let mut is_inside = false;
    let mut at = 0;
    while at < tokens.len() {
        let kind = tokens[at].kind;
        let piece = if kind == Kind::Phenomenon {
            let end = head_end(tokens, at);
            is_inside = tokens[end - 1].kind == Kind::LeftBrace || begins_value(tokens.get(end));
            Piece::Open(at..end)
        } else if kind.begins_statement() {
            Piece::Statement(at..statement_end(tokens, at + 1, is_inside))
        } else if kind == Kind::RightBrace && is_inside {
            is_inside = false;
            Piece::Close(at)
        } else {
            Piece::Stray(at..statement_end(tokens, at + 1, is_inside))
        };
        at = match &piece {
            Piece::Statement(range) | Piece::Open(range) | Piece::Stray(range) => range.end,
            Piece::Close(at) => at + 1,
        };
        pieces.push(piece);
    }
    pieces
}

/// Whether a statement gives a value, as those in a phenomenon do.
fn begins_value(token: Option<&Token<'_>>) -> bool {
    token.is_some_and(|token| matches!(token.kind, Kind::Scale | Kind::Constant | Kind::Tolerance))
}

fn head_end(tokens: &[Token<'_>], start: usize) -> usize {
    let behind = tokens[start + 1..]
        .iter()
        .position(|token| token.kind == Kind::LeftBrace || token.kind.begins_statement());
    match behind.map(|offset| start + 1 + offset) {
        None => tokens.len(),
        Some(at) if tokens[at].kind == Kind::LeftBrace => at + 1,
        Some(at) => at,
    }
}

/// Where a statement ends: before the next keyword, or before the brace that closes the
/// phenomenon around it.
fn statement_end(tokens: &[Token<'_>], start: usize, is_inside: bool) -> usize {
    let mut n_open = 0_usize;
    for (offset, token) in tokens[start..].iter().enumerate() {
        match token.kind {
            Kind::LeftBrace => n_open += 1,
            Kind::RightBrace if n_open == 0 && is_inside => return start + offset,
            Kind::RightBrace => n_open = n_open.saturating_sub(1),
            kind if kind.begins_statement() => return start + offset,
            _ => {}
        }
    }
    tokens.len()
}
