//! Bricks for expressions that the program makes: sums and products without needless
//! signs, ones and brackets.

use num_traits::{One, Zero};

use crate::source::Span;
use crate::syntax::ast::{Expr, ExprKind, Number, Operator, Sign};

/// Whether an expression is the plain number 0.
pub(super) fn is_zero(expr: &Expr) -> bool {
    match &expr.kind {
        ExprKind::Number(number) => number.unit.is_none() && number.value.is_zero(),
        ExprKind::Bracket(inside) | ExprKind::Negate(inside) => is_zero(inside),
        _ => false,
    }
}

/// The number 0.
pub(super) fn zero(span: Span) -> Expr {
    whole(0, span)
}

/// A small whole number.
pub(super) fn whole(value: u32, span: Span) -> Expr {
    let number = Number {
        value: num_rational::BigRational::from_integer(value.into()),
        text: value.to_string(),
        unit: None,
    };
    Expr {
        kind: ExprKind::Number(number),
        span,
    }
}

/// The same with the other sign.
pub(super) fn negated(expr: Expr) -> Expr {
    let span = expr.span;
    match expr.kind {
        ExprKind::Negate(inside) => *inside,
        kind => Expr {
            kind: ExprKind::Negate(Box::new(Expr { kind, span })),
            span,
        },
    }
}

/// A sum; none if nothing is left of it. Sums in it lie flat, double signs are worked out.
pub(super) fn sum(terms: Vec<(Sign, Expr)>, span: Span) -> Option<Expr> {
    let mut flat: Vec<(Sign, Expr)> = Vec::with_capacity(terms.len());
    for (sign, term) in terms {
        match term.kind {
            ExprKind::Sum(inner) => {
                flat.extend(inner.into_iter().map(|(own, term)| signed(own, sign, term)));
            }
            kind => flat.push(signed(
                Sign::Plus,
                sign,
                Expr {
                    kind,
                    span: term.span,
                },
            )),
        }
    }
    if flat.is_empty() {
        return None;
    }
    // A leading minus belongs to the first term.
    let (sign, first) = flat.remove(0);
    let first = match sign {
        Sign::Plus => first,
        Sign::Minus => negated(first),
    };
    if flat.is_empty() {
        return Some(first);
    }
    flat.insert(0, (Sign::Plus, first));
    Some(Expr {
        kind: ExprKind::Sum(flat),
        span,
    })
}

fn signed(own: Sign, outer: Sign, term: Expr) -> (Sign, Expr) {
    let sign = if own == outer {
        Sign::Plus
    } else {
        Sign::Minus
    };
    match term.kind {
        ExprKind::Negate(inside) => (other(sign), *inside),
        kind => (
            sign,
            Expr {
                kind,
                span: term.span,
            },
        ),
    }
}

fn other(sign: Sign) -> Sign {
    match sign {
        Sign::Plus => Sign::Minus,
        Sign::Minus => Sign::Plus,
    }
}

/// A product: signs stand before it, products in it lie flat, ones go, two equal names
/// side by side are a square.
pub(super) fn product(factors: Vec<(Operator, Expr)>, span: Span) -> Expr {
    let mut flat = Flat::default();
    for (operator, factor) in factors {
        flat.take(operator, factor);
    }
    let mut factors = flat.factors;
    match factors.first() {
        None => factors.push((Operator::Times, whole(1, span))),
        Some((Operator::Over, _)) => factors.insert(0, (Operator::Times, whole(1, span))),
        Some((Operator::Times, _)) => {}
    }
    let product = match factors.as_slice() {
        [(Operator::Times, single)] => single.clone(),
        _ => Expr {
            kind: ExprKind::Product(factors),
            span,
        },
    };
    if flat.is_negative {
        negated(product)
    } else {
        product
    }
}

#[derive(Default)]
struct Flat {
    factors: Vec<(Operator, Expr)>,
    is_negative: bool,
}

impl Flat {
    fn take(&mut self, operator: Operator, factor: Expr) {
        let span = factor.span;
        match (operator, factor.kind) {
            (operator, ExprKind::Negate(inside)) => {
                self.is_negative = !self.is_negative;
                self.take(operator, *inside);
            }
            (Operator::Times, ExprKind::Product(inner)) => {
                for (operator, factor) in inner {
                    self.take(operator, factor);
                }
            }
            (Operator::Times, ExprKind::Number(number))
                if number.unit.is_none() && number.value.is_one() => {}
            (operator, kind) => self.push(operator, Expr { kind, span }),
        }
    }

    fn push(&mut self, operator: Operator, factor: Expr) {
        if let (Operator::Times, Some((Operator::Times, last))) =
            (operator, self.factors.last_mut())
            && let (ExprKind::Name(a), ExprKind::Name(b)) = (&last.kind, &factor.kind)
            && a == b
        {
            let span = last.span;
            let base = Box::new(factor);
            let exponent = Box::new(whole(2, span));
            last.kind = ExprKind::Power { base, exponent };
            return;
        }
        self.factors.push((operator, factor));
    }
}
