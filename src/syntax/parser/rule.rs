//! The bricks of the parser: what its rules read and give, its faults, single tokens.
//!
//! A rule reads a slice of tokens, one statement long, and places in it are token
//! indices; `explain` turns a [`Fault`] into an error with a place in the text. A fault
//! is a few plain words, since the parser makes many that it drops again.

use chumsky::error::LabelError;
use chumsky::input::{InputRef, MapExtra};
use chumsky::prelude::*;
use chumsky::util::MaybeRef;
use chumsky::{DefaultExpected, extra};

use crate::source::Span;
use crate::syntax::ast::{Name, Notes, Text};
use crate::syntax::names::normalised;
use crate::syntax::token::{Kind, Kinds, Token};

/// The tokens of one statement.
pub(super) type Input<'t, 's> = &'t [Token<'s>];
/// What travels with the parser: its faults, nothing else.
pub(super) type Extra = extra::Err<Fault>;

/// A rule of the grammar: a parser that can be used in several places.
pub(super) trait Rule<'t, 's: 't, O>:
    Parser<'t, Input<'t, 's>, O, Extra> + Clone + 't
{
}

impl<'t, 's: 't, O, P> Rule<'t, 's, O> for P where
    P: Parser<'t, Input<'t, 's>, O, Extra> + Clone + 't
{
}

/// Something that cannot be read.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) struct Fault {
    /// The first token of it; the number of tokens where the statement ends too early.
    pub(super) start: usize,
    /// One past its last token.
    pub(super) end: usize,
    /// What is wrong.
    pub(super) kind: FaultKind,
}

/// The kinds of fault.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum FaultKind {
    /// Another token stands there, or none.
    Expected(Kinds),
    /// A number too large or too small.
    TooLarge,
    /// `1/2 m`.
    UnitAfterQuotient,
    /// `∂²u/∂x`: the order above, and the sum of those below.
    UnlikeOrders(u32, u32),
    /// A sum where a product is wanted.
    SumAsSize,
    /// A number other than the only one allowed here.
    OnlyNumber(u8),
}

impl Fault {
    fn expected(at: usize, expected: Kinds) -> Fault {
        Fault {
            start: at,
            end: at + 1,
            kind: FaultKind::Expected(expected),
        }
    }

    /// A fault of the tokens of a span of the parser.
    pub(super) fn over(span: SimpleSpan, kind: FaultKind) -> Fault {
        Fault {
            start: span.start,
            end: span.end,
            kind,
        }
    }
}

impl<'t, 's> chumsky::error::Error<'t, Input<'t, 's>> for Fault {
    fn merge(self, other: Fault) -> Fault {
        let FaultKind::Expected(one) = self.kind else {
            return self;
        };
        let FaultKind::Expected(two) = other.kind else {
            return other;
        };
        Fault {
            kind: FaultKind::Expected(one.and(two)),
            ..self
        }
    }
}

impl<'t, 's> LabelError<'t, Input<'t, 's>, DefaultExpected<'t, Token<'s>>> for Fault {
    fn expected_found<E: IntoIterator<Item = DefaultExpected<'t, Token<'s>>>>(
        _expected: E,
        _found: Option<MaybeRef<'t, Token<'s>>>,
        span: SimpleSpan,
    ) -> Fault {
        // Every rule is made of the bricks below, which name what they expect.
        Fault::expected(span.start, Kinds::default())
    }
}

/// One token of a kind.
pub(super) fn token<'t, 's: 't>(kind: Kind) -> impl Rule<'t, 's, &'t Token<'s>> + Copy {
    custom(move |input: &mut InputRef<Input<'t, 's>, Extra>| {
        let at = *input.cursor().inner();
        match input.next_ref() {
            Some(found) if found.kind == kind => Ok(found),
            _ => Err(Fault::expected(at, Kinds::one(kind))),
        }
    })
}

/// A name that counts as a word here, though it is no reserved one.
pub(super) fn word<'t, 's: 't>(text: &'static str) -> impl Rule<'t, 's, &'t Token<'s>> + Copy {
    custom(move |input: &mut InputRef<Input<'t, 's>, Extra>| {
        let at = *input.cursor().inner();
        match input.next_ref() {
            Some(found) if found.kind == Kind::Name && found.text == text => Ok(found),
            _ => Err(Fault::expected(at, Kinds::one(Kind::Name))),
        }
    })
}

/// The end of the statement.
pub(super) fn end_of_statement<'t, 's: 't>() -> impl Rule<'t, 's, ()> + Copy {
    custom(|input: &mut InputRef<Input<'t, 's>, Extra>| {
        let at = *input.cursor().inner();
        match input.next_ref() {
            None => Ok(()),
            Some(_) => Err(Fault::expected(at, Kinds::END)),
        }
    })
}

/// A part that runs to the end of the statement; after a fault the rest is passed over
/// and there is none.
pub(super) fn opt_rest<'t, 's: 't, O: 't>(
    part: impl Rule<'t, 's, O>,
) -> impl Rule<'t, 's, Option<O>> {
    part.then_ignore(end_of_statement())
        .map(Some)
        .recover_with(via_parser(any().repeated().map(|()| None)))
}

/// The span in the text of the tokens that a rule took.
pub(super) fn span_of<'t, 's: 't>(extra: &mut MapExtra<'t, '_, Input<'t, 's>, Extra>) -> Span {
    span_of_tokens(extra.slice())
}

/// The span in the text of some tokens.
pub(super) fn span_of_tokens(tokens: &[Token<'_>]) -> Span {
    match tokens {
        [] => Span::default(),
        [only] => only.span,
        [first, .., last] => first.span.to(last.span),
    }
}

/// A name.
pub(super) fn name<'t, 's: 't>() -> impl Rule<'t, 's, Name> {
    token(Kind::Name).map(name_of)
}

/// The name that a token writes.
pub(super) fn name_of(token: &Token<'_>) -> Name {
    Name {
        text: normalised(token.text),
        span: token.span,
    }
}

/// `a, b, c`.
pub(super) fn names<'t, 's: 't>() -> impl Rule<'t, 's, Vec<Name>> {
    name()
        .separated_by(token(Kind::Comma))
        .at_least(1)
        .collect()
}

/// Names, where none need be.
pub(super) fn opt_names<'t, 's: 't>() -> impl Rule<'t, 's, Vec<Name>> {
    names().or_not().map(Option::unwrap_or_default)
}

/// `"in quotes"`; a text that its line ended lacks the second quote.
pub(super) fn text<'t, 's: 't>() -> impl Rule<'t, 's, Text> {
    token(Kind::Text).map(|token| {
        let inside = token.text.strip_prefix('"').unwrap_or(token.text);
        Text {
            text: inside.strip_suffix('"').unwrap_or(inside).to_owned(),
            span: token.span,
        }
    })
}

/// `"title"`, where one is given.
pub(super) fn opt_title<'t, 's: 't>() -> impl Rule<'t, 's, Option<Text>> {
    text().or_not()
}

/// `from "source"`, where one is given.
pub(super) fn opt_source<'t, 's: 't>() -> impl Rule<'t, 's, Option<Text>> {
    token(Kind::From).ignore_then(text()).or_not()
}

/// `"title" from "source"`.
pub(super) fn notes<'t, 's: 't>() -> impl Rule<'t, 's, Notes> {
    opt_title()
        .then(opt_source())
        .map(|(title, source)| Notes { title, source })
}

/// Nothing, where one of some kinds of token comes next, or the end if that may be.
pub(super) fn followed_by<'t, 's: 't>(
    kinds: &'static [Kind],
    may_be_last: bool,
) -> impl Rule<'t, 's, ()> + Copy {
    custom(move |input: &mut InputRef<Input<'t, 's>, Extra>| {
        let at = *input.cursor().inner();
        let is_next = match input.peek_ref() {
            None => may_be_last,
            Some(found) => kinds.contains(&found.kind),
        };
        if is_next {
            return Ok(());
        }
        let end = if may_be_last {
            Kinds::END
        } else {
            Kinds::default()
        };
        let expected = kinds
            .iter()
            .fold(end, |all, kind| all.and(Kinds::one(*kind)));
        Err(Fault::expected(at, expected))
    })
}

/// Passes over tokens up to one of some kinds that stands outside brackets, or up to the
/// end if that may be.
pub(super) fn skip_to<'t, 's: 't>(
    kinds: &'static [Kind],
    may_be_last: bool,
) -> impl Rule<'t, 's, ()> + Copy {
    custom(move |input: &mut InputRef<Input<'t, 's>, Extra>| {
        let mut depth = 0_usize;
        loop {
            let at = *input.cursor().inner();
            match input.peek_ref().map(|token| token.kind) {
                None if may_be_last => return Ok(()),
                None => return Err(Fault::expected(at, Kinds::default())),
                Some(kind) if depth == 0 && kinds.contains(&kind) => return Ok(()),
                Some(Kind::LeftBracket) => depth += 1,
                Some(Kind::RightBracket) => depth = depth.saturating_sub(1),
                Some(_) => {}
            }
            input.skip();
        }
    })
}
