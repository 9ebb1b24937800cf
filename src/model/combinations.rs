//! Equations made of others, before their terms are: which equations each needs, in what
//! order they are worked out, and whether `from` and `using` name what they may.

use crate::model::errors::{ModelError, Product, Relation};
use crate::model::names::{self, Call};
use crate::model::{Model, dimensions, order};
use crate::source::Span;
use crate::syntax::ast::{self, EquationBody, ExprKind, Operator};

/// Whether all like terms of an equation are collected: it is made of others, or others
/// are put into it.
pub fn is_made(decl: &ast::EquationDecl) -> bool {
    matches!(decl.body, EquationBody::Made(_)) || !decl.using.is_empty()
}

/// The equations in an order in which each comes after those it needs.
pub fn order(model: &Model) -> Vec<usize> {
    // A ring was reported by the check.
    order::order(&needs(model)).unwrap_or_else(|_| (0..model.equations.len()).collect())
}

/// For each equation those it is made of or uses.
fn needs(model: &Model) -> Vec<Vec<usize>> {
    let of = |decl: &ast::EquationDecl| {
        let mut found = Vec::new();
        if let EquationBody::Made(expr) = &decl.body {
            names::visit_names(expr, &mut |name, _| found.extend(model.equation(name)));
        }
        let used = decl.using.iter();
        found.extend(used.filter_map(|name| model.equation(&name.text)));
        found
    };
    model.equations.iter().map(of).collect()
}

/// Checks what stands behind `from` and `using`.
pub fn check(model: &Model) -> Vec<ModelError> {
    let mut errors = Vec::new();
    for decl in &model.equations {
        if let EquationBody::Made(expr) = &decl.body {
            errors.extend(linear(expr, model).err());
        }
        for name in &decl.using {
            match dimensions::equation(model, name) {
                Ok(idx) => errors.extend(relation(&model.equations[idx], name.span).err()),
                Err(error) => errors.push(error),
            }
        }
    }
    if let Err(ring) = order::order(&needs(model)) {
        let name = |idx: &usize| &model.equations[*idx].name;
        errors.push(ModelError::Circular {
            names: ring.iter().map(|idx| name(idx).text.clone()).collect(),
            spans: ring.iter().map(|idx| name(idx).span).collect(),
            is_split: false,
        });
    }
    errors
}

fn linear(expr: &ast::Expr, model: &Model) -> Result<(), ModelError> {
    match holds_equation(expr, model)? {
        true => Ok(()),
        false => Err(no_combination(expr.span)),
    }
}

fn no_combination(span: Span) -> ModelError {
    ModelError::NotARelation {
        span,
        what: Relation::Combination,
    }
}

/// Whether an expression holds an equation.
///
/// # Errors
/// [`ModelError::NotARelation`] if it is not linear in it.
pub fn holds_equation(expr: &ast::Expr, model: &Model) -> Result<bool, ModelError> {
    match &expr.kind {
        ExprKind::Name(name) => Ok(model.equation(name).is_some()),
        ExprKind::Bracket(inside) | ExprKind::Negate(inside) => holds_equation(inside, model),
        ExprKind::As { expr, .. } => holds_equation(expr, model),
        ExprKind::Derivative { operand, .. } => holds_equation(operand, model),
        ExprKind::Sum(terms) => {
            let mut holds = Vec::with_capacity(terms.len());
            for (_, term) in terms {
                holds.push(holds_equation(term, model)?);
            }
            let any = holds.contains(&true);
            match holds.iter().position(|holds| *holds != any) {
                Some(odd) => Err(no_combination(terms[odd].1.span)),
                None => Ok(any),
            }
        }
        ExprKind::Product(factors) => {
            let mut found = false;
            for (operator, factor) in factors {
                if holds_equation(factor, model)? {
                    if found || *operator == Operator::Over {
                        return Err(no_combination(expr.span));
                    }
                    found = true;
                }
            }
            Ok(found)
        }
        ExprKind::Call {
            function,
            order,
            arguments,
        } => {
            let mut found = false;
            for argument in arguments {
                found |= holds_equation(argument, model)?;
            }
            let is_linear = match names::call(&function.text, model) {
                Call::Derivative(_) => true,
                Call::Material | Call::Mean => order.is_none(),
                Call::Vector | Call::Function(_) | Call::Unknown => false,
            };
            match found && (!is_linear || arguments.len() != 1) {
                true => Err(no_combination(expr.span)),
                false => Ok(found),
            }
        }
        ExprKind::Power { base, .. } => outside(base, expr.span, model),
        ExprKind::Sized { expr: inside, .. } => outside(inside, expr.span, model),
        ExprKind::Tuple(parts) => {
            for part in parts {
                outside(part, expr.span, model)?;
            }
            Ok(false)
        }
        ExprKind::Number(_) | ExprKind::Process { .. } | ExprKind::Error => Ok(false),
    }
}

/// For places where no equation may stand.
fn outside(expr: &ast::Expr, whole: Span, model: &Model) -> Result<bool, ModelError> {
    match holds_equation(expr, model)? {
        true => Err(no_combination(whole)),
        false => Ok(false),
    }
}

/// Checks that an equation can be put into others.
fn relation(decl: &ast::EquationDecl, used_at: Span) -> Result<(), ModelError> {
    match &decl.body {
        // Its left side is known once it is made.
        EquationBody::Made(_) => Ok(()),
        EquationBody::Written { left, .. } => match &bare(left).kind {
            ExprKind::Sum(_) => Err(ModelError::NotAProduct {
                span: left.span,
                what: Product::Using,
            }),
            ExprKind::Number(_) => Err(ModelError::NotARelation {
                span: used_at,
                what: Relation::Using,
            }),
            ExprKind::Name(_)
            | ExprKind::Process { .. }
            | ExprKind::Product(_)
            | ExprKind::Negate(_)
            | ExprKind::Power { .. }
            | ExprKind::Call { .. }
            | ExprKind::Derivative { .. }
            | ExprKind::Tuple(_)
            | ExprKind::Bracket(_)
            | ExprKind::Sized { .. }
            | ExprKind::As { .. }
            | ExprKind::Error => Ok(()),
        },
    }
}

/// An expression without brackets and process names around it.
fn bare(expr: &ast::Expr) -> &ast::Expr {
    let mut expr = expr;
    while let ExprKind::Bracket(inside) | ExprKind::As { expr: inside, .. } = &expr.kind {
        expr = inside;
    }
    expr
}
