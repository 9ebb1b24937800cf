//! Puts statements together to a script: those of a phenomenon into its body.
//!
//! A phenomenon holds values, a tolerance and requests. Anything else in it is an error,
//! unless its brace is missing: then that is the one error, and what does not belong
//! into it stands behind it.

use crate::source::Span;
use crate::syntax::ast::{Name, Notes, PhenomenonDecl, Statement, StatementKind};
use crate::syntax::errors::SyntaxError;
use crate::syntax::parser::explain::end_of;
use crate::syntax::token::Token;

/// The head of a phenomenon.
pub(super) struct Head {
    /// Its name.
    pub(super) name: Name,
    /// Its title and source.
    pub(super) notes: Notes,
    /// The word `phenomenon`.
    pub(super) keyword: Span,
    /// The opening brace, or the last token where it is missing.
    pub(super) brace: Span,
    /// Whether it was read without a fault.
    pub(super) is_whole: bool,
}

/// A script under construction.
#[derive(Default)]
pub(super) struct Assembly {
    statements: Vec<Statement>,
    errors: Vec<SyntaxError>,
    open: Option<Open>,
}

/// The phenomenon whose statements are being gathered.
struct Open {
    head: Head,
    statements: Vec<Statement>,
    /// Where the first of them stands that does not belong into a phenomenon.
    first_misplaced: Option<usize>,
    /// What is wrong if the phenomenon is closed.
    errors: Vec<SyntaxError>,
}

impl Assembly {
    /// Takes the next statement, which begins with a keyword.
    pub(super) fn push(&mut self, statement: Statement, keyword: &Token<'_>) {
        let Some(open) = &mut self.open else {
            self.statements.push(statement);
            return;
        };
        if !belongs(&statement.kind) {
            open.first_misplaced.get_or_insert(open.statements.len());
            open.errors.push(SyntaxError::NotInPhenomenon {
                span: keyword.span,
                keyword: keyword.text.to_owned(),
                phenomenon: open.head.name.span,
            });
        } else if let Some(span) = phenomena_of(&statement) {
            open.errors.push(SyntaxError::ForInPhenomenon {
                span,
                phenomenon: open.head.name.span,
            });
        }
        open.statements.push(statement);
    }

    /// Opens a phenomenon; `last` is the token before it.
    pub(super) fn open(&mut self, head: Head, last: Option<&Token<'_>>) {
        self.leave_open(last, false);
        self.open = Some(Open {
            head,
            statements: Vec::new(),
            first_misplaced: None,
            errors: Vec::new(),
        });
    }

    /// Closes the phenomenon at its brace.
    pub(super) fn close(&mut self, brace: Span) {
        let Some(mut open) = self.open.take() else {
            return;
        };
        if open.head.is_whole {
            self.errors.extend(open.errors);
        }
        open.statements.retain(|statement| belongs(&statement.kind));
        self.statements
            .push(phenomenon(open.head, open.statements, brace));
    }

    /// The script behind its last token.
    pub(super) fn finish(mut self, last: Option<&Token<'_>>) -> (Vec<Statement>, Vec<SyntaxError>) {
        self.leave_open(last, true);
        (self.statements, self.errors)
    }

    /// Ends a phenomenon whose brace is missing: it is taken to end before the first
    /// statement that does not belong into it.
    fn leave_open(&mut self, last: Option<&Token<'_>>, is_last: bool) {
        let Some(mut open) = self.open.take() else {
            return;
        };
        let n_body = open.first_misplaced.unwrap_or(open.statements.len());
        let behind = open.statements.split_off(n_body);
        let end = match (open.statements.last(), behind.is_empty()) {
            (Some(statement), false) => end_of(statement.span),
            (None, false) => end_of(open.head.brace),
            (_, true) => end_of(last.map_or(open.head.brace, |token| token.span)),
        };
        if open.head.is_whole {
            self.errors.push(SyntaxError::OpenPhenomenon {
                span: end,
                opened: open.head.brace,
                is_last,
            });
        }
        self.statements
            .push(phenomenon(open.head, open.statements, end));
        self.statements.extend(behind);
    }
}

/// Whether a statement may stand in a phenomenon.
fn belongs(kind: &StatementKind) -> bool {
    match kind {
        StatementKind::Value(_)
        | StatementKind::Tolerance(_)
        | StatementKind::Request(_)
        | StatementKind::Error => true,
        StatementKind::Use(_)
        | StatementKind::Coordinate(_)
        | StatementKind::Frame(_)
        | StatementKind::Vector(_)
        | StatementKind::Field(_)
        | StatementKind::Split(_)
        | StatementKind::Velocity(_)
        | StatementKind::Equation(_)
        | StatementKind::Group(_)
        | StatementKind::Balance(_)
        | StatementKind::Phenomenon(_) => false,
    }
}

/// The names behind `for` of a request.
fn phenomena_of(statement: &Statement) -> Option<Span> {
    let StatementKind::Request(request) = &statement.kind else {
        return None;
    };
    let first = request.phenomena.first()?;
    let last = request.phenomena.last()?;
    Some(first.span.to(last.span))
}

fn phenomenon(head: Head, body: Vec<Statement>, close: Span) -> Statement {
    Statement {
        span: head.keyword.to(close),
        kind: StatementKind::Phenomenon(PhenomenonDecl {
            name: head.name,
            notes: head.notes,
            body,
            close,
        }),
    }
}
