//! What the program makes, as syntax trees: products and sizes in the same form as what
//! the user wrote, so that a report need not tell the two apart. The texts of the same
//! things are made by `algebra::product::Speller`.

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::One;

use crate::algebra::monomial::{Monomial, Symbol};
use crate::algebra::product::{
    Base, Derivative, Factor, Product, Speller, factors_size, symbol_factors,
};
use crate::number::{Exponent, Number, TooLarge};
use crate::source::Span;
use crate::syntax::ast::{self, Expr, ExprKind, Operator};
use crate::syntax::{parser, token};

/// A product without its sign: `2*u*∂u/∂x/rho`.
pub fn product(product: &Product, speller: &Speller<'_>) -> Expr {
    quotient(&product.number.abs(), &product.factors, speller)
}

/// The size of a product in the user's own scales, in the order of its factors.
///
/// # Errors
/// [`TooLarge`] beyond the limits.
pub fn scale(product: &Product, speller: &Speller<'_>) -> Result<Expr, TooLarge> {
    let mut scales = Product::number(product.number.abs());
    for factor in &product.factors {
        let size = factors_size(std::slice::from_ref(factor), speller.quantities)?.written;
        scales = scales.times(&Product {
            number: size.number.abs(),
            factors: symbol_factors(&size),
        })?;
    }
    Ok(quotient(&scales.number, &scales.factors, speller))
}

/// A monomial of scales and constants.
pub fn monomial(monomial: &Monomial, speller: &Speller<'_>) -> Expr {
    quotient(&monomial.number, &symbol_factors(monomial), speller)
}

/// A product whose number has a unit: behind its number where that is a short decimal,
/// else behind a 1 before it.
pub fn with_unit(expr: Expr, unit: &str) -> Expr {
    let mut factors = match expr.kind {
        ExprKind::Product(factors) => factors,
        _ => vec![(Operator::Times, expr)],
    };
    let literals = factors.iter().enumerate().map_while(|(place, part)| {
        let (operator, factor) = part;
        let belongs = (*operator == Operator::Times) == (place == 0);
        match &factor.kind {
            ExprKind::Number(number) if belongs => Some(number.value.clone()),
            _ => None,
        }
    });
    let literals: Vec<BigRational> = literals.collect();
    // Denominators that the program writes are not 0.
    let value = literals.iter().cloned().reduce(|value, next| value / next);
    let short = value.and_then(|value| Some((decimal(&value)?, value)));
    let n_literals = if short.is_some() { literals.len() } else { 0 };
    let (text, value) = short.unwrap_or_else(|| ("1".to_owned(), BigRational::one()));
    let literal = made(ExprKind::Number(ast::Number {
        value,
        text,
        unit: Some(ast::UnitText {
            text: unit.to_owned(),
            span: Span::default(),
        }),
    }));
    factors.splice(..n_literals, [(Operator::Times, literal)]);
    match factors.as_slice() {
        [(_, single)] => single.clone(),
        _ => made(ExprKind::Product(factors)),
    }
}

/// An expression under the name of a process.
pub fn named(expr: &Expr, process: Option<&str>) -> Expr {
    let Some(process) = process else {
        return expr.clone();
    };
    made(ExprKind::As {
        expr: Box::new(expr.clone()),
        process: ast::ProcessName {
            text: process.to_owned(),
            is_quoted: !is_plain_name(process),
            span: Span::default(),
        },
    })
}

/// Whether a process can surely be named without quotes.
fn is_plain_name(text: &str) -> bool {
    text.starts_with(|c: char| c.is_ascii_alphabetic())
        && text.chars().all(|c| c.is_ascii_alphanumeric() || c == '_')
        && !token::is_reserved(text)
}

/// A number times factors.
fn quotient(number: &Number, factors: &[Factor], speller: &Speller<'_>) -> Expr {
    let side = |is_below: bool| {
        factors
            .iter()
            .filter(move |factor| factor.power.is_negative() == is_below)
    };
    let mut parts: Vec<(Operator, Expr)> = Vec::new();
    if !number.is_one() || side(false).next().is_none() {
        parts.extend(number_parts(number));
    }
    parts.extend(side(false).map(|factor| {
        let base = base(&factor.base, speller);
        (Operator::Times, raised(base, factor.power))
    }));
    parts.extend(side(true).map(|factor| {
        let base = base(&factor.base, speller);
        (Operator::Over, raised(base, factor.power.negated()))
    }));
    made_product(parts)
}

fn made(kind: ExprKind) -> Expr {
    Expr {
        kind,
        span: Span::default(),
    }
}

fn made_product(mut parts: Vec<(Operator, Expr)>) -> Expr {
    match parts.as_slice() {
        [(Operator::Times, _)] => parts.remove(0).1,
        _ => made(ExprKind::Product(parts)),
    }
}

fn name(text: &str) -> ast::Name {
    ast::Name {
        text: text.to_owned(),
        span: Span::default(),
    }
}

/// The factors of an exact number: `1`, `1/18`, `2^(1/2)*pi`.
fn number_parts(number: &Number) -> Vec<(Operator, Expr)> {
    let rational = number.rational_part();
    let mut parts = Vec::new();
    let is_rational = number.roots().next().is_none() && number.pi_power().is_zero();
    if is_rational || !rational.is_one() {
        parts.push((Operator::Times, whole(rational.numer())));
        if !rational.is_integer() {
            parts.push((Operator::Over, whole(rational.denom())));
        }
    }
    for (root, power) in number.roots() {
        parts.push((Operator::Times, raised(whole(root), power)));
    }
    if !number.pi_power().is_zero() {
        let pi = made(ExprKind::Name("pi".to_owned()));
        parts.push((Operator::Times, raised(pi, number.pi_power())));
    }
    parts
}

/// A positive number as a decimal of few digits, if it is one.
pub fn decimal(value: &BigRational) -> Option<String> {
    let ten = BigInt::from(10);
    let n_digits = (0..=6_u32).find(|n| (value * ten.pow(*n)).is_integer())?;
    let digits = (value * ten.pow(n_digits)).to_integer().to_string();
    if n_digits == 0 {
        return Some(digits);
    }
    let width = n_digits as usize + 1;
    let digits = format!("{digits:0>width$}");
    let (whole, behind) = digits.split_at(digits.len() - n_digits as usize);
    Some(format!("{whole}.{behind}"))
}

fn whole(value: &BigInt) -> Expr {
    made(ExprKind::Number(ast::Number {
        value: BigRational::from_integer(value.clone()),
        text: value.to_string(),
        unit: None,
    }))
}

fn raised(base: Expr, power: Exponent) -> Expr {
    if power == Exponent::ONE {
        return base;
    }
    let base = match base.kind {
        ExprKind::Derivative { .. } => made(ExprKind::Bracket(Box::new(base))),
        _ => base,
    };
    let numer = whole(&power.numer().abs().into());
    let numer = match power.is_negative() {
        true => made(ExprKind::Negate(Box::new(numer))),
        false => numer,
    };
    let exponent = match power.is_whole() {
        true => numer,
        false => made(ExprKind::Bracket(Box::new(made(ExprKind::Product(vec![
            (Operator::Times, numer),
            (Operator::Over, whole(&power.denom().into())),
        ]))))),
    };
    made(ExprKind::Power {
        base: Box::new(base),
        exponent: Box::new(exponent),
    })
}

fn base(base: &Base, speller: &Speller<'_>) -> Expr {
    let quantities = speller.quantities;
    match base {
        Base::Symbol(symbol) => symbol_expr(symbol, speller),
        Base::Coordinate(id) => made(ExprKind::Name(quantities.coordinate(*id).name.clone())),
        Base::Field(id) => made(ExprKind::Name(quantities.field(*id).name.clone())),
        Base::Derivative(derivative) => derivative_expr(derivative, speller),
        Base::Absolute(inside) => call("abs", None, quotient(&Number::one(), inside, speller)),
        Base::Sized(sized) => read(&sized.text),
        Base::Mean(inside) => call("mean", None, quotient(&Number::one(), inside, speller)),
        Base::Function(applied) => read(&applied.function.text(&speller.signed(&applied.argument))),
    }
}

fn symbol_expr(symbol: &Symbol, speller: &Speller<'_>) -> Expr {
    match symbol {
        Symbol::Declared(_) => made(ExprKind::Name(speller.symbol(symbol).to_owned())),
        Symbol::Function(function) => read(&function.text),
    }
}

/// A text that the printer made from a tree, read back.
fn read(text: &str) -> Expr {
    let (expr, errors) = parser::parse_expression(text, crate::source::FileId::default());
    if errors.is_empty() {
        expr
    } else {
        made(ExprKind::Name(text.to_owned()))
    }
}

fn call(function: &str, order: Option<u32>, argument: Expr) -> Expr {
    made(ExprKind::Call {
        function: name(function),
        order,
        arguments: vec![argument],
    })
}

fn derivative_expr(derivative: &Derivative, speller: &Speller<'_>) -> Expr {
    let inside = quotient(&Number::one(), &derivative.operand, speller);
    let coordinate = |id| speller.quantities.coordinate(id).name.as_str();
    if !speller.with_partials {
        return derivative.by.iter().fold(inside, |expr, (id, order)| {
            let order = (*order > 1).then_some(*order);
            call(&format!("d_{}", coordinate(*id)), order, expr)
        });
    }
    let operand = match &inside.kind {
        ExprKind::Name(_) => inside,
        _ => made(ExprKind::Bracket(Box::new(inside))),
    };
    let by = derivative.by.iter().rev();
    made(ExprKind::Derivative {
        operand: Box::new(operand),
        by: by
            .map(|(id, order)| (name(coordinate(*id)), *order))
            .collect(),
    })
}
