//! The parser: from the text of a script to its syntax tree and its errors.
//!
//! The tokens are cut into statements first (`split`), each statement is checked against
//! the limits (`nesting`) and parsed by itself with the rules of the grammar
//! (`declaration`, `request`, `expression`, `literal`; `rule` has their bricks), and its
//! faults are told in terms of the text (`explain`). Whatever is wrong, a whole tree
//! comes out; the tests are in `tests/language/`.

mod declaration;
mod explain;
mod expression;
mod literal;
mod nesting;
mod phenomenon;
mod request;
mod rule;
mod split;
mod words;

use std::ops::Range;

use chumsky::prelude::*;

use crate::limits;
use crate::source::{FileId, Span};
use crate::syntax::ast::{Expr, ExprKind, Name, Notes, Script, Statement, StatementKind};
use crate::syntax::errors::SyntaxError;
use crate::syntax::parser::explain::{Place, explain, mend_of_stray};
use crate::syntax::parser::phenomenon::{Assembly, Head};
use crate::syntax::parser::rule::{
    Extra, Fault, FaultKind, Input, end_of_statement, span_of_tokens,
};
use crate::syntax::parser::split::{Piece, split};
use crate::syntax::parser::words::{Speller, mend_words};
use crate::syntax::token::{self, Lexed, Token};

/// Parses a script. The errors stand in the order of the text.
pub fn parse(text: &str, file: FileId) -> (Script, Vec<SyntaxError>) {
    if text.len() > limits::SCRIPT_BYTES {
        return (Script::default(), vec![long_script(text, file)]);
    }
    let mut speller = Speller::new();
    let lexed = token::read(text, file);
    let (mut tokens, comments, mut errors) = (lexed.tokens, lexed.comments, lexed.errors);
    let misspelt = mend_words(&mut tokens, text, &mut speller);
    let mut parser = Parsing::new(text, &tokens, spans(&errors), speller);
    let mut assembly = Assembly::default();
    for piece in split(&tokens) {
        parser.piece(piece, &mut assembly);
    }
    let (statements, structure) = assembly.finish(tokens.last());
    errors.extend(misspelt.into_iter().chain(parser.errors).chain(structure));
    errors.sort_by_key(SyntaxError::span);
    let script = Script {
        statements,
        comments,
    };
    (script, errors)
}

/// Parses one expression, as a prompt takes it without `show`.
pub fn parse_expression(text: &str, file: FileId) -> (Expr, Vec<SyntaxError>) {
    let whole = Span::new(file, 0, text.len().min(limits::SCRIPT_BYTES));
    let error = Expr {
        kind: ExprKind::Error,
        span: whole,
    };
    if text.len() > limits::SCRIPT_BYTES {
        return (error, vec![long_script(text, file)]);
    }
    let Lexed { tokens, errors, .. } = token::read(text, file);
    let mut parser = Parsing::new(text, &tokens, spans(&errors), Speller::new());
    let expr = match nesting::broken_limit(&tokens) {
        Some(broken) => {
            parser.errors.push(broken);
            None
        }
        None => parser.expression(&tokens),
    };
    let mut found = parser.errors;
    found.extend(errors);
    found.sort_by_key(SyntaxError::span);
    (expr.unwrap_or(error), found)
}

fn spans(errors: &[SyntaxError]) -> Vec<Span> {
    errors.iter().map(SyntaxError::span).collect()
}

fn long_script(text: &str, file: FileId) -> SyntaxError {
    let end = text.len();
    let mut start = limits::SCRIPT_BYTES;
    while !text.is_char_boundary(start) {
        start -= 1;
    }
    let span = Span::new(file, start, end);
    SyntaxError::LongScript { span }
}

type Boxed1<'t, 's, O> = Boxed<'t, 't, Input<'t, 's>, O, Extra>;

/// One run over the tokens of a text.
struct Parsing<'t, 's> {
    text: &'s str,
    tokens: &'t [Token<'s>],
    /// What the lexer could not read, in order.
    unread: Vec<Span>,
    statement: Boxed1<'t, 's, StatementKind>,
    head: Boxed1<'t, 's, (Name, Notes)>,
    expression: Boxed1<'t, 's, Expr>,
    speller: Speller,
    errors: Vec<SyntaxError>,
}

impl<'t, 's: 't> Parsing<'t, 's> {
    fn new(
        text: &'s str,
        tokens: &'t [Token<'s>],
        unread: Vec<Span>,
        speller: Speller,
    ) -> Parsing<'t, 's> {
        let parts = expression::expressions();
        let request = request::request(&parts).map(StatementKind::Request);
        Parsing {
            text,
            tokens,
            unread,
            statement: declaration::declaration(&parts).or(request).boxed(),
            head: declaration::phenomenon_head().boxed(),
            expression: parts.expression.then_ignore(end_of_statement()).boxed(),
            speller,
            errors: Vec::new(),
        }
    }

    fn piece(&mut self, piece: Piece, assembly: &mut Assembly) {
        match piece {
            Piece::Statement(range) => {
                let statement = self.statement(range.clone());
                assembly.push(statement, &self.tokens[range.start]);
            }
            Piece::Open(range) => {
                let head = self.head(range.clone());
                assembly.open(head, range.start.checked_sub(1).map(|at| &self.tokens[at]));
            }
            Piece::Close(at) => assembly.close(self.tokens[at].span),
            Piece::Stray(range) => self.stray(range),
        }
    }

    fn statement(&mut self, range: Range<usize>) -> Statement {
        let tokens = &self.tokens[range.clone()];
        let span = span_of_tokens(tokens);
        let kind = match nesting::broken_limit(tokens) {
            Some(broken) => {
                self.errors.push(broken);
                None
            }
            None => {
                let (kind, faults) = self.statement.parse(tokens).into_output_errors();
                self.tell(faults, range);
                kind
            }
        };
        Statement {
            kind: kind.unwrap_or(StatementKind::Error),
            span,
        }
    }

    fn head(&mut self, range: Range<usize>) -> Head {
        let tokens = &self.tokens[range.clone()];
        let (parsed, faults) = self.head.parse(tokens).into_output_errors();
        let is_whole = faults.is_empty();
        self.tell(faults, range);
        let last = tokens[tokens.len() - 1].span;
        let (name, notes) = parsed.unwrap_or_else(|| (nameless(last), Notes::default()));
        Head {
            name,
            notes,
            keyword: tokens[0].span,
            brace: last,
            is_whole,
        }
    }

    /// Tokens that belong to no statement are one error.
    fn stray(&mut self, range: Range<usize>) {
        if self.is_beside_unread(range.start) {
            return;
        }
        let tokens = &self.tokens[range];
        let is_expression =
            nesting::broken_limit(tokens).is_none() && !self.expression.check(tokens).has_errors();
        self.errors.push(SyntaxError::NoStatement {
            span: tokens[0].span,
            found: tokens[0].text.to_owned(),
            mend: mend_of_stray(&tokens[0], is_expression, &mut self.speller),
        });
    }

    fn expression(&mut self, tokens: &'t [Token<'s>]) -> Option<Expr> {
        let (expr, faults) = self.expression.parse(tokens).into_output_errors();
        self.tell(faults, 0..tokens.len());
        expr
    }

    /// Turns the faults of a statement into errors. A fault beside something that the
    /// lexer has reported is no second error.
    fn tell(&mut self, faults: Vec<Fault>, range: Range<usize>) {
        let place = Place {
            tokens: &self.tokens[range.clone()],
            is_last: range.end == self.tokens.len(),
            text: self.text,
        };
        for fault in faults {
            let is_expected = matches!(fault.kind, FaultKind::Expected(_));
            if is_expected && self.is_beside_unread(range.start + fault.start) {
                continue;
            }
            let error = explain(fault, &place, &mut self.speller);
            self.errors.push(error);
        }
    }

    /// Whether the lexer could not read something of a token or right before it.
    fn is_beside_unread(&self, at: usize) -> bool {
        let start = match at {
            0 => 0,
            at => self.tokens[at - 1].span.end,
        };
        let end = self
            .tokens
            .get(at)
            .map_or(self.text.len() as u32 + 1, |token| token.span.end);
        let first = self.unread.partition_point(|span| span.start < start);
        self.unread.get(first).is_some_and(|span| span.start < end)
    }
}

/// The name of a phenomenon that has none.
fn nameless(span: Span) -> Name {
    Name {
        text: String::new(),
        span,
    }
}
