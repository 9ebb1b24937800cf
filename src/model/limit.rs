//! What a `limit` says: products of named groups as powers of one small parameter.

use crate::model::errors::{Missing, ModelError, Product};
use crate::model::{Meaning, Model, names};
use crate::number::{Exponent, TooLarge};
use crate::source::Span;
use crate::syntax::ast::{self, ExprKind, LimitPlace, Operator};
use crate::syntax::print;

/// A product of powers of named groups, by their places; no group stands twice and no
/// power is 0.
pub type GroupPowers = Vec<(usize, Exponent)>;

/// A `limit` with its names looked up.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Limit {
    /// The small parameter as written.
    pub text: String,
    /// What it is.
    pub small: GroupPowers,
    /// What stands behind `with`, in order.
    pub places: Vec<Place>,
    /// Whether all other groups count as 1.
    pub others: bool,
}

/// One placement: `Ek ~ Ro^2`.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Place {
    /// As written.
    pub text: String,
    /// Left of `~` over right of it.
    pub ratio: GroupPowers,
    /// Where it stands.
    pub span: Span,
}

/// Reads a `limit`.
///
/// # Errors
/// Anything that is no product of powers of named groups.
pub fn read(
    model: &Model,
    small: &ast::Expr,
    places: &[LimitPlace],
) -> Result<Limit, Vec<ModelError>> {
    let mut errors = Vec::new();
    let mut limit = Limit {
        text: print::expression(small),
        small: Vec::new(),
        places: Vec::new(),
        others: false,
    };
    match powers(model, small) {
        // A pure number is small or not, whatever the groups do.
        Ok(found) if found.is_empty() => errors.push(no_limit(small.span)),
        Ok(found) => limit.small = found,
        Err(error) => errors.push(error),
    }
    for place in places {
        match place {
            LimitPlace::Others(_) => limit.others = true,
            LimitPlace::Group(left, right) => match quotient(model, left, right) {
                Ok(ratio) => limit.places.push(Place {
                    text: format!("{} ~ {}", print::expression(left), print::expression(right)),
                    ratio,
                    span: left.span.to(right.span),
                }),
                Err(error) => errors.push(error),
            },
        }
    }
    match errors.is_empty() {
        true => Ok(limit),
        false => Err(errors),
    }
}

fn no_limit(span: Span) -> ModelError {
    ModelError::NotAProduct {
        span,
        what: Product::Limit,
    }
}

fn quotient(model: &Model, left: &ast::Expr, right: &ast::Expr) -> Result<GroupPowers, ModelError> {
    let span = right.span;
    let over = raised(&powers(model, right)?, Exponent::ONE.negated(), span)?;
    multiplied(&powers(model, left)?, &over, span)
}

/// A product of powers of named groups; numbers in it count as 1.
fn powers(model: &Model, expr: &ast::Expr) -> Result<GroupPowers, ModelError> {
    let span = expr.span;
    match &expr.kind {
        ExprKind::Number(number) if number.unit.is_none() => Ok(Vec::new()),
        ExprKind::Name(name) => match model.meaning(name, None) {
            Some(Meaning::Group(id)) => Ok(vec![(id.0 as usize, Exponent::ONE)]),
            Some(_) => Err(no_limit(span)),
            None if names::is_pi(name) => Ok(Vec::new()),
            None => Err(ModelError::UnknownName {
                name: name.clone(),
                span,
                nearest: names::nearest(
                    name,
                    model.groups.iter().map(|group| group.name.text.as_str()),
                ),
                missing: Missing::Group,
                unit: None,
            }),
        },
        ExprKind::Bracket(inside) => powers(model, inside),
        ExprKind::Power { base, exponent } => {
            raised(&powers(model, base)?, names::exponent(exponent)?, span)
        }
        ExprKind::Product(factors) => {
            let mut product = Vec::new();
            for (operator, factor) in factors {
                let mut next = powers(model, factor)?;
                if *operator == Operator::Over {
                    next = raised(&next, Exponent::ONE.negated(), span)?;
                }
                product = multiplied(&product, &next, span)?;
            }
            Ok(product)
        }
        ExprKind::Call {
            function,
            order: None,
            arguments,
        } if function.text == "sqrt" && arguments.len() == 1 => {
            raised(&powers(model, &arguments[0])?, Exponent::ratio(1, 2), span)
        }
        ExprKind::Number(_)
        | ExprKind::Process { .. }
        | ExprKind::Sum(_)
        | ExprKind::Negate(_)
        | ExprKind::Call { .. }
        | ExprKind::Derivative { .. }
        | ExprKind::Tuple(_)
        | ExprKind::Sized { .. }
        | ExprKind::As { .. }
        | ExprKind::Error => Err(no_limit(span)),
    }
}

fn raised(
    product: &GroupPowers,
    exponent: Exponent,
    span: Span,
) -> Result<GroupPowers, ModelError> {
    let powers = product.iter().map(|(group, power)| {
        let power = power.times(exponent);
        Ok((
            *group,
            power.map_err(|TooLarge| ModelError::TooLarge { span })?,
        ))
    });
    let found: GroupPowers = powers.collect::<Result<_, ModelError>>()?;
    Ok(found
        .into_iter()
        .filter(|(_, power)| !power.is_zero())
        .collect())
}

fn multiplied(
    left: &GroupPowers,
    right: &GroupPowers,
    span: Span,
) -> Result<GroupPowers, ModelError> {
    let mut product = left.clone();
    for (group, power) in right {
        match product.iter_mut().find(|(found, _)| found == group) {
            Some((_, present)) => {
                let sum = present.plus(*power);
                *present = sum.map_err(|TooLarge| ModelError::TooLarge { span })?;
            }
            None => product.push((*group, *power)),
        }
    }
    product.retain(|(_, power)| !power.is_zero());
    product.sort_unstable();
    Ok(product)
}
