//! Expressions. Each function is the production of that name in the grammar.
//!
//! Sums and products are flat and a run of minus signs is read in a loop, so that only
//! brackets and exponents nest; `split` has bounded those before.

use chumsky::prelude::*;
use num_rational::BigRational;

use crate::source::Span;
use crate::syntax::ast::{Expr, ExprKind, Name, Number, Operator, ProcessName, ProcessRef, Sign};
use crate::syntax::parser::literal::{number, order, plain_digits, superscript_order};
use crate::syntax::parser::rule::{
    Extra, Fault, FaultKind, Input, Rule, name, name_of, span_of, text, token,
};
use crate::syntax::token::{Kind, Token};

/// The productions of expressions that statements use.
#[derive(Clone)]
pub(super) struct Expressions<'t, 's> {
    /// A sum of named products.
    pub(super) expression: Boxed<'t, 't, Input<'t, 's>, Expr, Extra>,
    /// A product.
    pub(super) product: Boxed<'t, 't, Input<'t, 's>, Expr, Extra>,
    /// A process wherever one is named.
    pub(super) process: Boxed<'t, 't, Input<'t, 's>, ProcessRef, Extra>,
    /// A size: a product, and a sum is a fault of its own.
    pub(super) size: Boxed<'t, 't, Input<'t, 's>, Expr, Extra>,
}

/// Makes the productions.
pub(super) fn expressions<'t, 's: 't>() -> Expressions<'t, 's> {
    let expression = recursive(|expression| expression_of(product(power(expression)).boxed()));
    let product = product(power(expression.clone())).boxed();
    Expressions {
        expression: expression.boxed(),
        process: process(product.clone()).boxed(),
        size: size(product.clone()).boxed(),
        product,
    }
}

fn expression_of<'t, 's: 't>(product: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, Expr> {
    let named = named(product);
    named
        .clone()
        .then(sign().then(named).repeated().collect::<Vec<_>>())
        .map_with(|(first, rest), extra| match rest.is_empty() {
            true => first,
            false => {
                let terms = std::iter::once((Sign::Plus, first)).chain(rest);
                spanned(ExprKind::Sum(terms.collect()), span_of(extra))
            }
        })
}

pub(super) fn sign<'t, 's: 't>() -> impl Rule<'t, 's, Sign> {
    let plus = token(Kind::Plus).to(Sign::Plus);
    plus.or(token(Kind::Minus).to(Sign::Minus))
}

fn named<'t, 's: 't>(product: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, Expr> {
    product
        .then(token(Kind::As).ignore_then(process_name()).or_not())
        .map_with(|(expr, process), extra| match process {
            None => expr,
            Some(process) => {
                let expr = Box::new(expr);
                spanned(ExprKind::As { expr, process }, span_of(extra))
            }
        })
}

/// The name of a process: a name or a text.
fn process_name<'t, 's: 't>() -> impl Rule<'t, 's, ProcessName> {
    let by_name = name().map(|name| ProcessName {
        text: name.text,
        is_quoted: false,
        span: name.span,
    });
    let by_text = text().map(|text| ProcessName {
        text: text.text,
        is_quoted: true,
        span: text.span,
    });
    by_name.or(by_text)
}

fn process<'t, 's: 't>(product: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, ProcessRef> {
    text()
        .map(ProcessRef::Text)
        .or(product.map(ProcessRef::Term))
}

fn size<'t, 's: 't>(product: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, Expr> {
    let more = sign().then(product.clone()).repeated().count();
    product
        .then(more)
        .validate(|(expr, n_more), extra, emitter| {
            if n_more == 0 {
                return expr;
            }
            emitter.emit(Fault::over(extra.span(), FaultKind::SumAsSize));
            spanned(ExprKind::Error, expr.span)
        })
}

fn product<'t, 's: 't>(power: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, Expr> {
    let unary = unary(power);
    unary
        .clone()
        .then(operator().then(unary).repeated().collect::<Vec<_>>())
        .validate(|(first, rest), extra, emitter| {
            if rest.is_empty() {
                return first;
            }
            let factors = std::iter::once((Operator::Times, first)).chain(rest);
            let factors: Vec<_> = factors.collect();
            if has_unit_after_quotient(&factors) {
                emitter.emit(Fault::over(extra.span(), FaultKind::UnitAfterQuotient));
            }
            spanned(ExprKind::Product(factors), span_of(extra))
        })
}

fn operator<'t, 's: 't>() -> impl Rule<'t, 's, Operator> {
    let times = token(Kind::Star).to(Operator::Times);
    times.or(token(Kind::Slash).to(Operator::Over))
}

/// Whether a bare number is divided by a number with a unit, as in `1/2 m`.
fn has_unit_after_quotient(factors: &[(Operator, Expr)]) -> bool {
    factors.windows(2).any(|pair| {
        pair[1].0 == Operator::Over && is_bare_number(&pair[0].1) && has_unit(&pair[1].1)
    })
}

fn is_bare_number(expr: &Expr) -> bool {
    match &expr.kind {
        ExprKind::Number(number) => number.unit.is_none(),
        ExprKind::Negate(inner) => is_bare_number(inner),
        _ => false,
    }
}

fn has_unit(expr: &Expr) -> bool {
    matches!(&expr.kind, ExprKind::Number(number) if number.unit.is_some())
}

fn unary<'t, 's: 't>(power: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, Expr> {
    token(Kind::Minus)
        .map(|minus| minus.span)
        .repeated()
        .collect::<Vec<_>>()
        .then(power)
        .map(|(signs, expr)| negated(signs, expr))
}

/// An expression behind minus signs.
fn negated(signs: Vec<Span>, expr: Expr) -> Expr {
    signs.into_iter().rev().fold(expr, |inner, sign| {
        let span = sign.to(inner.span);
        spanned(ExprKind::Negate(Box::new(inner)), span)
    })
}

fn power<'t, 's: 't>(expression: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, Expr> {
    let primary = primary(expression).boxed();
    recursive(|power| {
        let raised = token(Kind::Caret)
            .ignore_then(token(Kind::Plus).or_not())
            .ignore_then(unary(power));
        primary
            .then(raised.or(superscript()).or_not())
            .map_with(|(base, exponent), extra| match exponent {
                None => base,
                Some(exponent) => {
                    let (base, exponent) = (Box::new(base), Box::new(exponent));
                    spanned(ExprKind::Power { base, exponent }, span_of(extra))
                }
            })
    })
}

/// `⁻²` as the exponent `-2`.
fn superscript<'t, 's: 't>() -> impl Rule<'t, 's, Expr> {
    token(Kind::Superscript).validate(|token: &Token<'s>, extra, emitter| {
        let digits = plain_digits(token.text);
        let amount = digits.strip_prefix('-').unwrap_or(&digits);
        let value = amount.parse::<u32>().unwrap_or_else(|_| {
            emitter.emit(Fault::over(extra.span(), FaultKind::TooLarge));
            1
        });
        let number = Number {
            value: BigRational::from_integer(value.into()),
            text: value.to_string(),
            unit: None,
        };
        let signs = match amount.len() == digits.len() {
            true => vec![],
            false => vec![token.span],
        };
        negated(signs, spanned(ExprKind::Number(number), token.span))
    })
}

fn primary<'t, 's: 't>(expression: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, Expr> {
    let number =
        number().map_with(|number, extra| spanned(ExprKind::Number(number), span_of(extra)));
    choice((
        number,
        name_or_call(expression.clone()),
        bracket(expression.clone()),
        derivative(expression.clone()),
        nabla(expression),
    ))
}

/// What may follow a name in a primary.
enum Tail {
    Nothing,
    Process(ProcessName),
    Call(CallTail),
}

/// The order and the arguments of a call.
type CallTail = (Option<u32>, Vec<Expr>);

/// A name, a process of an equation, or a call.
fn name_or_call<'t, 's: 't>(expression: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, Expr> {
    let process = token(Kind::Dot).ignore_then(process_name());
    name()
        .then(choice((
            call_tail(expression).map(Tail::Call),
            process.map(Tail::Process),
            empty().map(|()| Tail::Nothing),
        )))
        .map_with(|(name, tail), extra| {
            let kind = match tail {
                Tail::Nothing => ExprKind::Name(name.text),
                Tail::Process(process) => ExprKind::Process {
                    equation: name,
                    process,
                },
                Tail::Call(tail) => call(name, tail),
            };
            spanned(kind, span_of(extra))
        })
}

fn call(function: Name, (order, arguments): CallTail) -> ExprKind {
    ExprKind::Call {
        function,
        order,
        arguments,
    }
}

/// `^2(phi)`, `(a, b)`.
fn call_tail<'t, 's: 't>(expression: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, CallTail> {
    order()
        .or(superscript_order())
        .or_not()
        .then(arguments(expression))
}

fn arguments<'t, 's: 't>(expression: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, Vec<Expr>> {
    expression
        .separated_by(token(Kind::Comma))
        .at_least(1)
        .collect()
        .delimited_by(token(Kind::LeftBracket), token(Kind::RightBracket))
}

/// `∇(p)`, which is `grad(p)`.
fn nabla<'t, 's: 't>(expression: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, Expr> {
    token(Kind::Nabla)
        .then(arguments(expression))
        .map_with(|(nabla, arguments), extra| {
            let function = Name {
                text: "grad".to_owned(),
                span: nabla.span,
            };
            spanned(call(function, (None, arguments)), span_of(extra))
        })
}

/// What may follow the first expression in a bracket.
enum Inside {
    Nothing,
    Size(Expr),
    More(Vec<Expr>),
}

/// `(a)`, `(a ~ D)`, `(a, b)`.
fn bracket<'t, 's: 't>(expression: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, Expr> {
    let size = token(Kind::Tilde).ignore_then(expression.clone());
    let more = token(Kind::Comma).ignore_then(expression.clone());
    let inside = choice((
        token(Kind::RightBracket).map(|_| Inside::Nothing),
        size.then_ignore(token(Kind::RightBracket))
            .map(Inside::Size),
        more.repeated()
            .at_least(1)
            .collect()
            .then_ignore(token(Kind::RightBracket))
            .map(Inside::More),
    ));
    token(Kind::LeftBracket)
        .ignore_then(expression)
        .then(inside)
        .map_with(|(first, inside), extra| {
            let kind = match inside {
                Inside::Nothing => ExprKind::Bracket(Box::new(first)),
                Inside::Size(size) => ExprKind::Sized {
                    expr: Box::new(first),
                    size: Box::new(size),
                },
                Inside::More(more) => ExprKind::Tuple(std::iter::once(first).chain(more).collect()),
            };
            spanned(kind, span_of(extra))
        })
}

/// `∂²u/∂x∂z`.
fn derivative<'t, 's: 't>(expression: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, Expr> {
    let coordinate = token(Kind::Partial)
        .ignore_then(token(Kind::Name).map(name_of))
        .then(superscript_order().or_not())
        .map(|(name, order)| (name, order.unwrap_or(1)));
    token(Kind::Partial)
        .ignore_then(superscript_order().or_not())
        .then(operand(expression))
        .then_ignore(token(Kind::Slash))
        .then(coordinate.repeated().at_least(1).collect::<Vec<_>>())
        .validate(|((order, operand), by), extra, emitter| {
            let above = order.unwrap_or(1);
            let below = by
                .iter()
                .fold(0_u32, |sum, (_, order)| sum.saturating_add(*order));
            if above != below || by.iter().any(|(_, order)| *order == 0) {
                let kind = FaultKind::UnlikeOrders(above, below);
                emitter.emit(Fault::over(extra.span(), kind));
            }
            let operand = Box::new(operand);
            spanned(ExprKind::Derivative { operand, by }, span_of(extra))
        })
}

/// What stands behind `∂`: a name, a call, or an expression in brackets.
fn operand<'t, 's: 't>(expression: impl Rule<'t, 's, Expr>) -> impl Rule<'t, 's, Expr> {
    let bracket = expression
        .clone()
        .delimited_by(token(Kind::LeftBracket), token(Kind::RightBracket))
        .map_with(|inner, extra| spanned(ExprKind::Bracket(Box::new(inner)), span_of(extra)));
    let named = name()
        .then(call_tail(expression).or_not())
        .map_with(|(name, tail), extra| {
            let kind = match tail {
                None => ExprKind::Name(name.text),
                Some(tail) => call(name, tail),
            };
            spanned(kind, span_of(extra))
        });
    bracket.or(named)
}

/// An expression at a place.
pub(super) fn spanned(kind: ExprKind, span: Span) -> Expr {
    Expr { kind, span }
}
