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
    body: Vec<Statement>,
    misplaced: Vec<Statement>,
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
        let phenomenon = open.head.name.span;
        match &statement.kind {
            StatementKind::Value(_) | StatementKind::Tolerance(_) | StatementKind::Error => {
                open.body.push(statement);
            }
            StatementKind::Request(request) => {
                if let [first, .., last] | [first @ last] = request.phenomena.as_slice() {
                    open.errors.push(SyntaxError::ForInPhenomenon {
                        span: first.span.to(last.span),
                        phenomenon,
                    });
                }
                open.body.push(statement);
            }
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
            | StatementKind::Phenomenon(_) => {
                open.errors.push(SyntaxError::NotInPhenomenon {
                    span: keyword.span,
                    keyword: keyword.text.to_owned(),
                    phenomenon,
                });
                open.misplaced.push(statement);
            }
        }
    }

    /// Opens a phenomenon; `last` is the token before it.
    pub(super) fn open(&mut self, head: Head, last: Option<&Token<'_>>) {
        self.leave_open(last, false);
        self.open = Some(Open {
            head,
            body: Vec::new(),
            misplaced: Vec::new(),
            errors: Vec::new(),
        });
    }

    /// Closes the phenomenon at its brace.
    pub(super) fn close(&mut self, brace: Span) {
        if let Some(open) = self.open.take() {
            if open.head.is_whole {
                self.errors.extend(open.errors);
            }
            self.statements
                .push(phenomenon(open.head, open.body, brace));
        }
    }

    /// The script behind its last token.
    pub(super) fn finish(mut self, last: Option<&Token<'_>>) -> (Vec<Statement>, Vec<SyntaxError>) {
        self.leave_open(last, true);
        (self.statements, self.errors)
    }

    /// Ends a phenomenon whose brace is missing.
    fn leave_open(&mut self, last: Option<&Token<'_>>, is_last: bool) {
        let Some(open) = self.open.take() else {
            return;
        };
        let end = last.map_or(open.head.brace, end_of);
        if open.head.is_whole {
            self.errors.push(SyntaxError::OpenPhenomenon {
                span: end,
                opened: open.head.brace,
                is_last,
            });
        }
        self.statements.push(phenomenon(open.head, open.body, end));
        self.statements.extend(open.misplaced);
    }
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
