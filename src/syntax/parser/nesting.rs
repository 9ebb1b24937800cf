//! The limits on one statement, kept before it is parsed: its length, and how deep its
//! tree will be. The parser then recurses no deeper than what passes, and neither does
//! anything that walks the tree.

use crate::limits;
use crate::source::Span;
use crate::syntax::errors::SyntaxError;
use crate::syntax::token::{Kind, Token};

/// The limit that a statement breaks.
pub(super) fn broken_limit(tokens: &[Token<'_>]) -> Option<SyntaxError> {
    if let Some(span) = too_deep(tokens) {
        return Some(SyntaxError::TooDeep { span });
    }
    let span = tokens.first()?.span;
    (tokens.len() > limits::STATEMENT_TOKENS).then_some(SyntaxError::LongStatement { span })
}

/// What is known of the expression in one pair of brackets.
#[derive(Default)]
struct Level {
    /// Depth of the deepest factor so far.
    deepest: usize,
    /// Minus signs and powers in front of what comes next.
    chain: usize,
    has_sum: bool,
    has_product: bool,
    has_name: bool,
}

impl Level {
    /// The depth of its tree; never less than the true one.
    fn depth(&self) -> usize {
        let around = [self.has_sum, self.has_product, self.has_name];
        self.deepest + around.into_iter().filter(|has| *has).count()
    }

    /// Takes an operand of some depth.
    fn take(&mut self, depth: usize) {
        self.deepest = self.deepest.max(self.chain + depth);
    }
}

/// The first token at which the nesting passes the limit.
fn too_deep(tokens: &[Token<'_>]) -> Option<Span> {
    let mut levels: Vec<Level> = Vec::new();
    let mut level = Level::default();
    // The depth of the brackets that are open, with the chains before them.
    let mut open = 0_usize;
    let mut ends_operand = false;
    for token in tokens {
        match token.kind {
            Kind::LeftBracket => {
                open += level.chain + 1;
                levels.push(std::mem::take(&mut level));
            }
            Kind::RightBracket => {
                let inner = level.depth();
                level = levels.pop().unwrap_or_default();
                open = open.saturating_sub(level.chain + 1);
                level.take(inner + 1);
            }
            Kind::Minus if !ends_operand => level.chain += 1,
            Kind::Plus if !ends_operand => {}
            Kind::Caret | Kind::Superscript => {
                level.deepest += 1;
                level.chain += 1;
            }
            Kind::Partial => level.chain += 1,
            Kind::Plus | Kind::Minus => {
                level.has_sum = true;
                level.chain = 0;
            }
            Kind::Star | Kind::Slash => {
                level.has_product = true;
                level.chain = 0;
            }
            Kind::As => level.has_name = true,
            Kind::Name | Kind::Number => level.take(1),
            _ => level.chain = 0,
        }
        ends_operand = matches!(
            token.kind,
            Kind::Name | Kind::Number | Kind::Unit | Kind::RightBracket | Kind::Superscript
        );
        if open + level.chain.max(level.depth()) > limits::NESTING {
            return Some(token.span);
        }
    }
    None
}
