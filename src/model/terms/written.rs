//! Expressions of equations as they are written: process names in them, the same without
//! them, and whether derivatives are spelled with `∂`.

use crate::model::names;
use crate::syntax::ast::{self, ExprKind, Operator};

/// Whether a derivative in it is spelled with `∂`, as vector operations are.
pub(super) fn has_partials(expr: &ast::Expr) -> bool {
    expr.any(|expr| match &expr.kind {
        ExprKind::Call { function, .. } => names::is_vector_operation(&function.text),
        kind => matches!(kind, ExprKind::Derivative { .. }),
    })
}

/// The process names written in an expression, and those that `D_t` gives.
pub(super) fn process_names(expr: &ast::Expr, found: &mut Vec<String>) {
    let mut add = |name: &str| {
        if !found.iter().any(|present| present == name) {
            found.push(name.to_owned());
        }
    };
    match &expr.kind {
        ExprKind::As { expr, process } => {
            add(&process.text);
            process_names(expr, found);
        }
        ExprKind::Call {
            function,
            arguments,
            ..
        } => {
            if function.text == "D_t" {
                add("tendency");
                add("advection");
            }
            arguments
                .iter()
                .for_each(|argument| process_names(argument, found));
        }
        ExprKind::Sum(terms) => terms
            .iter()
            .for_each(|(_, term)| process_names(term, found)),
        ExprKind::Product(factors) => factors
            .iter()
            .for_each(|(_, factor)| process_names(factor, found)),
        ExprKind::Negate(inside) | ExprKind::Bracket(inside) => process_names(inside, found),
        ExprKind::Power { base, .. } => process_names(base, found),
        ExprKind::Derivative { operand, .. } => process_names(operand, found),
        ExprKind::Tuple(parts) => parts.iter().for_each(|part| process_names(part, found)),
        ExprKind::Sized { .. }
        | ExprKind::Number(_)
        | ExprKind::Name(_)
        | ExprKind::Process { .. }
        | ExprKind::Error => {}
    }
}

/// The same expression without process names.
pub(super) fn unnamed(expr: &ast::Expr) -> ast::Expr {
    let inside = |inside: &ast::Expr| Box::new(unnamed(inside));
    let kind = match &expr.kind {
        ExprKind::As { expr, .. } => return unnamed(expr),
        ExprKind::Sum(terms) => ExprKind::Sum(
            terms
                .iter()
                .map(|(sign, term)| (*sign, unnamed(term)))
                .collect(),
        ),
        ExprKind::Product(factors) => ExprKind::Product(
            factors
                .iter()
                .map(|(operator, factor)| (*operator, unnamed(factor)))
                .collect(),
        ),
        ExprKind::Negate(operand) => ExprKind::Negate(inside(operand)),
        ExprKind::Bracket(operand) => ExprKind::Bracket(inside(operand)),
        ExprKind::Power { base, exponent } => ExprKind::Power {
            base: inside(base),
            exponent: exponent.clone(),
        },
        ExprKind::Call {
            function,
            order,
            arguments,
        } => ExprKind::Call {
            function: function.clone(),
            order: *order,
            arguments: arguments.iter().map(unnamed).collect(),
        },
        ExprKind::Derivative { operand, by } => ExprKind::Derivative {
            operand: inside(operand),
            by: by.clone(),
        },
        ExprKind::Tuple(parts) => ExprKind::Tuple(parts.iter().map(unnamed).collect()),
        ExprKind::Number(_)
        | ExprKind::Name(_)
        | ExprKind::Process { .. }
        | ExprKind::Sized { .. }
        | ExprKind::Error => expr.kind.clone(),
    };
    ast::Expr {
        kind,
        span: expr.span,
    }
}

/// The factors of a product without the minus before the first, if there is one.
pub(super) fn leading_minus(
    factors: &[(Operator, ast::Expr)],
) -> Option<Vec<(Operator, ast::Expr)>> {
    let (operator, first) = factors.first()?;
    let ExprKind::Negate(inside) = &first.kind else {
        return None;
    };
    let mut factors = factors.to_vec();
    factors[0] = (*operator, (**inside).clone());
    Some(factors)
}

/// Whether an expression holds a `D_t`.
pub(super) fn holds_material(expr: &ast::Expr) -> bool {
    expr.any(|expr| matches!(&expr.kind, ExprKind::Call { function, .. } if function.text == "D_t"))
}
