//! Words that are nearly keywords, and keywords where a name is wanted.
//!
//! Both are mended in the tokens before the script is cut into statements, so that one
//! slip gives one error and the statement is still read.

use strsim::damerau_levenshtein;

use crate::syntax::errors::SyntaxError;
use crate::syntax::token::{Kind, RESERVED, Token};

/// Looks for reserved words near to what is written. Looking is slow, so it ends after
/// as many errors as anyone reads.
pub(super) struct Speller {
    looks_left: usize,
}

impl Speller {
    /// One that has not looked yet.
    pub(super) fn new() -> Speller {
        Speller { looks_left: LOOKS }
    }

    /// The reserved word nearest to a name among those that pass; none if it is far off.
    pub(super) fn nearest(
        &mut self,
        written: &str,
        passes: impl Fn(Kind) -> bool,
    ) -> Option<(Kind, &'static str)> {
        if self.looks_left == 0 || written.len() > LONGEST_LOOKED_AT {
            return None;
        }
        self.looks_left -= 1;
        RESERVED
            .iter()
            .filter(|(kind, word)| word.len() >= SHORTEST_SUGGESTED && passes(*kind))
            .map(|&(kind, word)| (damerau_levenshtein(written, word), kind, word))
            .filter(|(distance, _, word)| *distance <= (word.len() / 3).clamp(1, 2))
            .min_by_key(|(distance, _, _)| *distance)
            .map(|(_, kind, word)| (kind, word))
    }
}

/// The keyword for what is called otherwise elsewhere.
pub(super) fn keyword_for(word: &str) -> Option<&'static str> {
    Some(match word {
        "split" | "variable" => "field",
        "let" | "define" => "scale",
        "parameter" => "constant",
        "import" | "include" => "use",
        "print" => "show",
        _ => return None,
    })
}

/// How many words are looked at.
const LOOKS: usize = 200;

/// Shorter words are near to too much.
const SHORTEST_SUGGESTED: usize = 4;

const LONGEST_LOOKED_AT: usize = 24;

/// Mends the tokens of a script, and tells what was wrong.
pub(super) fn mend_words(
    tokens: &mut [Token<'_>],
    text: &str,
    speller: &mut Speller,
) -> Vec<SyntaxError> {
    let mut errors = Vec::new();
    for at in 0..tokens.len() {
        if is_reserved_name(tokens, at, text) {
            errors.push(SyntaxError::ReservedName {
                span: tokens[at].span,
                word: tokens[at].text.to_owned(),
                is_process: at > 0 && tokens[at - 1].kind == Kind::As,
            });
            tokens[at].kind = Kind::Name;
        } else if may_be_keyword(tokens, at, text)
            && let Some((kind, keyword)) = speller.nearest(tokens[at].text, Kind::begins_statement)
        {
            errors.push(SyntaxError::Misspelt {
                span: tokens[at].span,
                found: tokens[at].text.to_owned(),
                keyword,
            });
            tokens[at].kind = kind;
        }
    }
    errors
}

/// Whether a reserved word is used as a name: a sign stands behind it that follows names
/// and never a keyword, or `as` stands before it. At the beginning of a statement it is
/// a keyword all the same, whose name is missing.
fn is_reserved_name(tokens: &[Token<'_>], at: usize, text: &str) -> bool {
    if at == 0 || !tokens[at].kind.is_reserved() || begins_line(tokens, at, text) {
        return false;
    }
    let sign_behind = tokens.get(at + 1).is_some_and(|next| {
        matches!(
            next.kind,
            Kind::Equals
                | Kind::Tilde
                | Kind::Comma
                | Kind::Colon
                | Kind::RightBracket
                | Kind::Plus
                | Kind::Star
                | Kind::Slash
                | Kind::Caret
                | Kind::Superscript
        )
    });
    let before = tokens[at - 1].kind;
    before == Kind::As || sign_behind && !may_end_statement(before)
}

/// Whether a statement may end with a kind of token.
fn may_end_statement(kind: Kind) -> bool {
    matches!(
        kind,
        Kind::Name
            | Kind::Number
            | Kind::Unit
            | Kind::Text
            | Kind::Superscript
            | Kind::RightBracket
            | Kind::LeftBrace
            | Kind::RightBrace
    )
}

/// Whether a name may be a misspelt keyword: it begins a line (or a body) and a name or a
/// number follows, which no name has behind it.
fn may_be_keyword(tokens: &[Token<'_>], at: usize, text: &str) -> bool {
    let follows = |token: &Token<'_>| matches!(token.kind, Kind::Name | Kind::Number);
    tokens[at].kind == Kind::Name
        && tokens.get(at + 1).is_some_and(follows)
        && (begins_line(tokens, at, text)
            || matches!(tokens[at - 1].kind, Kind::LeftBrace | Kind::RightBrace))
}

/// Whether a token is the first of its line.
pub(super) fn begins_line(tokens: &[Token<'_>], at: usize, text: &str) -> bool {
    at == 0 || gap(&tokens[at - 1], &tokens[at], text).contains('\n')
}

/// The text between two tokens.
fn gap<'s>(before: &Token<'_>, behind: &Token<'_>, text: &'s str) -> &'s str {
    text.get(before.span.end as usize..behind.span.start as usize)
        .unwrap_or("")
}
