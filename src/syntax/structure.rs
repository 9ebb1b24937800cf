//! Whether two expressions say the same, however they are spelt.

use num_rational::BigRational;

use crate::syntax::ast::{Expr, ExprKind, Operator, Sign};

/// Whether two expressions have the same structure, apart from their places, brackets and
/// spellings: `∂²u/∂z²` is `d_z^2(u)`, `sin^2(phi)` is `sin(phi)^2`, `a/(b*c)` is
/// `a/b/c`. The order of terms and factors counts.
pub fn same_structure(one: &Expr, other: &Expr) -> bool {
    shape(one) == shape(other)
}

/// An expression without what does not count.
#[derive(PartialEq)]
enum Shape<'a> {
    Number(BigRational, Option<&'a str>),
    Name(&'a str),
    Process(&'a str, &'a str),
    Sum(Vec<(bool, Shape<'a>)>),
    /// Whether it is negative, and its factors with whether they divide.
    Product(bool, Vec<(bool, Shape<'a>)>),
    Power(Box<Shape<'a>>, Box<Shape<'a>>),
    /// A material derivative, taken so many times.
    Material(Vec<Shape<'a>>, u32),
    Call(&'a str, Vec<Shape<'a>>),
    /// An operand with coordinates and orders, the outermost first.
    Derivative(Box<Shape<'a>>, Vec<(&'a str, u32)>),
    Tuple(Vec<Shape<'a>>),
    Sized(Box<Shape<'a>>, Box<Shape<'a>>),
    As(Box<Shape<'a>>, &'a str),
    Error,
}

fn shape(expr: &Expr) -> Shape<'_> {
    match &expr.kind {
        ExprKind::Number(number) => {
            let unit = number.unit.as_ref().map(|unit| unit.text.as_str());
            Shape::Number(number.value.clone(), unit)
        }
        ExprKind::Name(name) => Shape::Name(name),
        ExprKind::Process { equation, process } => Shape::Process(&equation.text, &process.text),
        ExprKind::Sum(_) => {
            let mut terms = Vec::new();
            add_terms(&mut terms, expr, false);
            Shape::Sum(terms)
        }
        ExprKind::Product(_) | ExprKind::Negate(_) => {
            let mut factors = Vec::new();
            let is_negative = add_factors(&mut factors, expr, false);
            product(is_negative, factors)
        }
        ExprKind::Power { base, exponent } => power(shape(base), exponent),
        ExprKind::Call {
            function,
            order,
            arguments,
        } => call(&function.text, *order, arguments),
        ExprKind::Derivative { operand, by } => {
            let by = by.iter().map(|(name, order)| (name.text.as_str(), *order));
            derivative(by.collect(), shape(operand))
        }
        ExprKind::Tuple(parts) => Shape::Tuple(parts.iter().map(shape).collect()),
        ExprKind::Bracket(inner) => shape(inner),
        ExprKind::Sized { expr, size } => {
            Shape::Sized(Box::new(shape(expr)), Box::new(shape(size)))
        }
        ExprKind::As { expr, process } => named(shape(expr), &process.text),
        ExprKind::Error => Shape::Error,
    }
}

/// The terms of a sum, those of sums in brackets among them.
fn add_terms<'a>(terms: &mut Vec<(bool, Shape<'a>)>, expr: &'a Expr, is_negative: bool) {
    if let ExprKind::Bracket(inner) = &expr.kind {
        add_terms(terms, inner, is_negative);
    } else if let ExprKind::Sum(parts) = &expr.kind {
        for (sign, part) in parts {
            add_terms(terms, part, is_negative ^ (*sign == Sign::Minus));
        }
    } else {
        let (sign, term) = unsigned(shape(expr));
        terms.push((is_negative ^ sign, term));
    }
}

/// The factors of a product, those of products in brackets among them; whether the whole
/// is negative.
fn add_factors<'a>(factors: &mut Vec<(bool, Shape<'a>)>, expr: &'a Expr, divides: bool) -> bool {
    if let ExprKind::Bracket(inner) = &expr.kind {
        return add_factors(factors, inner, divides);
    }
    if let ExprKind::Negate(inner) = &expr.kind {
        return !add_factors(factors, inner, divides);
    }
    if let ExprKind::Product(parts) = &expr.kind {
        return parts.iter().fold(false, |sign, (operator, part)| {
            sign ^ add_factors(factors, part, divides ^ (*operator == Operator::Over))
        });
    }
    factors.push((divides, shape(expr)));
    false
}

/// A shape without its sign; whether that is a minus.
fn unsigned(shape: Shape<'_>) -> (bool, Shape<'_>) {
    if let Shape::Product(sign, factors) = shape {
        return (sign, product(false, factors));
    }
    (false, shape)
}

/// A term with its process; its sign stands outside.
fn named<'a>(term: Shape<'a>, process: &'a str) -> Shape<'a> {
    let (sign, term) = unsigned(term);
    let named = Shape::As(Box::new(term), process);
    match sign {
        true => Shape::Product(true, vec![(false, named)]),
        false => named,
    }
}

fn product(is_negative: bool, mut factors: Vec<(bool, Shape<'_>)>) -> Shape<'_> {
    match factors.as_slice() {
        [(false, _)] if !is_negative => factors.remove(0).1,
        _ => Shape::Product(is_negative, factors),
    }
}

fn power<'a>(base: Shape<'a>, exponent: &'a Expr) -> Shape<'a> {
    Shape::Power(Box::new(base), Box::new(shape(exponent)))
}

/// `d_z^2(u)` as the derivative it may be: what `d_z` names is not known here, and it is
/// the same on both sides.
fn call<'a>(function: &'a str, order: Option<u32>, arguments: &'a [Expr]) -> Shape<'a> {
    if let (Some(coordinate), [operand]) = (function.strip_prefix("d_"), arguments)
        && !coordinate.is_empty()
    {
        return derivative(vec![(coordinate, order.unwrap_or(1))], shape(operand));
    }
    let arguments = arguments.iter().map(shape).collect();
    if function == "D_t" {
        return Shape::Material(arguments, order.unwrap_or(1));
    }
    let call = Shape::Call(function, arguments);
    match order {
        None => call,
        Some(order) => {
            let exponent = Shape::Number(BigRational::from_integer(order.into()), None);
            Shape::Power(Box::new(call), Box::new(exponent))
        }
    }
}

/// A derivative; one of a derivative is one with more coordinates.
fn derivative<'a>(mut by: Vec<(&'a str, u32)>, operand: Shape<'a>) -> Shape<'a> {
    let operand = match operand {
        Shape::Derivative(inner, more) => {
            by.extend(more);
            inner
        }
        other => Box::new(other),
    };
    by.dedup_by(|later, earlier| {
        let is_same = later.0 == earlier.0;
        if is_same {
            earlier.1 = earlier.1.saturating_add(later.1);
        }
        is_same
    });
    Shape::Derivative(operand, by)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::source::FileId;
    use crate::syntax::parser::parse_expression;

    fn same(one: &str, other: &str) -> bool {
        let read = |text| {
            let (expr, errors) = parse_expression(text, FileId::default());
            assert!(errors.is_empty(), "{text}: {errors:?}");
            expr
        };
        same_structure(&read(one), &read(other))
    }

    #[test]
    fn spellings_and_brackets_do_not_count() {
        for (one, other) in [
            ("∂u/∂x", "d_x(u)"),
            ("∂²u/∂z²", "d_z^2(u)"),
            ("∂²u/∂z∂z", "d_z²(u)"),
            ("∂²u/∂x∂z", "d_x(d_z(u))"),
            ("∂(rho*u)/∂x", "d_x((rho*u))"),
            ("∇(p)", "grad(p)"),
            ("sin^2(phi)", "sin(phi)^2"),
            ("U²", "U^2"),
            ("(a + b) - (c - d)", "a + b - c + d"),
            ("a*(b/c)", "a·b / c"),
            ("a/(b*c)", "a/b/c"),
            ("-f*v", "-(f*v)"),
            ("-f*v as c", "-(f*v as \"c\")"),
            ("10^-4 1/s", "1e-4 1/s"),
        ] {
            assert!(same(one, other), "{one} and {other}");
        }
    }

    #[test]
    fn what_says_something_else_differs() {
        for (one, other) in [
            ("∂u/∂x", "∂u/∂y"),
            ("∂²u/∂x∂z", "∂²u/∂z∂x"),
            ("d_x(u)^2", "d_x^2(u)"),
            ("a - b", "a + b"),
            ("a*b", "b*a"),
            ("a/b", "a*b"),
            ("-a", "a"),
            ("2 m", "2 s"),
            ("2 m", "2"),
            ("a as b", "a"),
            ("(a + b ~ D)", "a + b"),
            ("D_t(u)^2", "D_t^2(u)"),
            ("f(a, b)", "f(b, a)"),
        ] {
            assert!(!same(one, other), "{one} and {other}");
        }
    }
}
