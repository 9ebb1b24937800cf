//! The canonical form of an expression, on one line.

use crate::syntax::ast::{Expr, ExprKind, Name, Number, Operator, ProcessName, Sign};

/// The text of an expression: `a + b`, `a*b/c`, `x^(1/2)`, `10 m/s`. Derivatives keep
/// their spelling. Brackets stand where they were written, and where a tree that was not
/// parsed needs them.
pub fn expression(expr: &Expr) -> String {
    let mut out = String::new();
    write(&mut out, expr);
    out
}

/// `x_momentum`, `"a name of several words"`.
pub(crate) fn process_name(process: &ProcessName) -> String {
    match process.is_quoted {
        true => format!("\"{}\"", process.text),
        false => process.text.clone(),
    }
}

/// `10 m/s`.
pub(crate) fn number(number: &Number) -> String {
    match &number.unit {
        Some(unit) => format!("{} {}", number.text, unit.text),
        None => number.text.clone(),
    }
}

/// How tightly the parts of an expression hold together.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Tightness {
    Sum,
    Named,
    Product,
    Unary,
    Power,
    Primary,
}

fn tightness(expr: &Expr) -> Tightness {
    match &expr.kind {
        ExprKind::Sum(_) => Tightness::Sum,
        ExprKind::As { .. } => Tightness::Named,
        ExprKind::Product(_) => Tightness::Product,
        ExprKind::Negate(_) => Tightness::Unary,
        ExprKind::Power { .. } => Tightness::Power,
        ExprKind::Number(_)
        | ExprKind::Name(_)
        | ExprKind::Process { .. }
        | ExprKind::Call { .. }
        | ExprKind::Derivative { .. }
        | ExprKind::Tuple(_)
        | ExprKind::Bracket(_)
        | ExprKind::Sized { .. }
        | ExprKind::Error => Tightness::Primary,
    }
}

fn write(out: &mut String, expr: &Expr) {
    match &expr.kind {
        ExprKind::Number(literal) => out.push_str(&number(literal)),
        ExprKind::Name(name) => out.push_str(name),
        ExprKind::Process { equation, process } => {
            out.push_str(&format!("{}.{}", equation.text, process_name(process)));
        }
        ExprKind::Sum(terms) => write_sum(out, terms),
        ExprKind::Product(factors) => write_product(out, factors),
        ExprKind::Negate(inner) => {
            out.push('-');
            write_at_least(out, inner, Tightness::Unary);
        }
        ExprKind::Power { base, exponent } => write_power(out, base, exponent),
        ExprKind::Call {
            function,
            order,
            arguments,
        } => {
            out.push_str(&function.text);
            if let Some(order) = order {
                out.push_str(&format!("^{order}"));
            }
            write_list(out, arguments);
        }
        ExprKind::Derivative { operand, by } => write_derivative(out, operand, by),
        ExprKind::Tuple(parts) => write_list(out, parts),
        ExprKind::Bracket(inner) => write_list(out, std::slice::from_ref(inner)),
        ExprKind::Sized { expr, size } => {
            out.push('(');
            write(out, expr);
            out.push_str(" ~ ");
            write(out, size);
            out.push(')');
        }
        ExprKind::As { expr, process } => {
            write_at_least(out, expr, Tightness::Product);
            out.push_str(&format!(" as {}", process_name(process)));
        }
        ExprKind::Error => out.push('?'),
    }
}

/// An expression, in brackets if it holds together less tightly than wanted.
fn write_at_least(out: &mut String, expr: &Expr, wanted: Tightness) {
    if tightness(expr) < wanted {
        write_list(out, std::slice::from_ref(expr));
    } else {
        write(out, expr);
    }
}

/// `(a, b)`.
fn write_list(out: &mut String, parts: &[Expr]) {
    out.push('(');
    for (idx, part) in parts.iter().enumerate() {
        if idx > 0 {
            out.push_str(", ");
        }
        write(out, part);
    }
    out.push(')');
}

fn write_sum(out: &mut String, terms: &[(Sign, Expr)]) {
    for (idx, (sign, term)) in terms.iter().enumerate() {
        out.push_str(match (idx, sign) {
            (0, Sign::Plus) => "",
            (0, Sign::Minus) => "-",
            (_, Sign::Plus) => " + ",
            (_, Sign::Minus) => " - ",
        });
        write_at_least(out, term, Tightness::Named);
    }
}

/// `a*b/c`; blanks stand around a sign behind a unit, which would go on otherwise:
/// `10 m / U` is no `10 m/U`.
fn write_product(out: &mut String, factors: &[(Operator, Expr)]) {
    let mut behind_unit = false;
    for (idx, (operator, factor)) in factors.iter().enumerate() {
        let sign = match operator {
            Operator::Times => "*",
            Operator::Over => "/",
        };
        match (idx, operator, behind_unit) {
            (0, Operator::Times, _) => {}
            (0, Operator::Over, _) => out.push_str("1/"),
            (_, _, true) => out.push_str(&format!(" {sign} ")),
            (_, _, false) => out.push_str(sign),
        }
        write_at_least(out, factor, Tightness::Unary);
        behind_unit = ends_with_unit(factor);
    }
}

fn ends_with_unit(expr: &Expr) -> bool {
    match &expr.kind {
        ExprKind::Number(number) => number.unit.is_some(),
        ExprKind::Negate(inner) => ends_with_unit(inner),
        ExprKind::Power { exponent, .. } => ends_with_unit(exponent),
        ExprKind::Name(_)
        | ExprKind::Process { .. }
        | ExprKind::Sum(_)
        | ExprKind::Product(_)
        | ExprKind::Call { .. }
        | ExprKind::Derivative { .. }
        | ExprKind::Tuple(_)
        | ExprKind::Bracket(_)
        | ExprKind::Sized { .. }
        | ExprKind::As { .. }
        | ExprKind::Error => false,
    }
}

/// `x^2`; blanks stand around the sign where it would be read as part of the number
/// before it, as in `10^2` or `10 m^2`.
fn write_power(out: &mut String, base: &Expr, exponent: &Expr) {
    write_at_least(out, base, Tightness::Primary);
    let is_apart = match &base.kind {
        ExprKind::Number(number) => number.unit.is_some() || number.text == "10",
        _ => false,
    };
    out.push_str(if is_apart { " ^ " } else { "^" });
    write_at_least(out, exponent, Tightness::Unary);
}

/// `∂²u/∂x∂z`.
fn write_derivative(out: &mut String, operand: &Expr, by: &[(Name, u32)]) {
    let total = by
        .iter()
        .fold(0_u32, |sum, (_, order)| sum.saturating_add(*order));
    out.push_str(&format!("∂{}", superscript(total)));
    if let ExprKind::Name(_) | ExprKind::Call { .. } | ExprKind::Bracket(_) = &operand.kind {
        write(out, operand);
    } else {
        write_list(out, std::slice::from_ref(operand));
    }
    out.push('/');
    for (coordinate, order) in by {
        out.push_str(&format!("∂{}{}", coordinate.text, superscript(*order)));
    }
}

/// An order in superscripts; nothing for 1.
fn superscript(order: u32) -> String {
    if order == 1 {
        return String::new();
    }
    order
        .to_string()
        .chars()
        .map(|digit| match digit {
            '1' => '\u{B9}',
            '2' => '\u{B2}',
            '3' => '\u{B3}',
            digit => char::from_u32(0x2070 + (digit as u32 - '0' as u32)).unwrap_or(digit),
        })
        .collect()
}
