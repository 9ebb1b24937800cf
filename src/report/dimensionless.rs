//! Dimensionless equations as text: `Ro*(∂u/∂t + u*∂u/∂x) - v = -∂p/∂x`.

use crate::analysis::nondimensional::{Coefficient, DimensionlessEquation, DimensionlessTerm};
use crate::analysis::reduce::joined;
use crate::model::terms::Side;
use crate::number::Number;
use crate::report::words;

/// The whole equation; terms of one side with one coefficient stand together in a bracket.
pub fn equation(equation: &DimensionlessEquation) -> String {
    let side = |side: Side| {
        let terms = equation.terms.iter().filter(|term| term.side == side);
        side_text(&terms.collect::<Vec<_>>())
    };
    format!("{} = {}", side(Side::Left), side(Side::Right))
}

/// The amount of a coefficient, as groups where they give it: `2*Ro`, `U/(f*L)`.
pub fn amount(coefficient: &Coefficient) -> String {
    let exponents = coefficient
        .groups
        .as_ref()
        .unwrap_or(&coefficient.exponents);
    words::product(&coefficient.number.abs(), exponents)
}

/// The same in scales and constants; `None` where it is so already, or a number.
pub fn in_scales(coefficient: &Coefficient) -> Option<String> {
    let groups = coefficient.groups.as_ref()?;
    (!groups.is_empty()).then(|| words::product(&Number::one(), &coefficient.exponents))
}

fn side_text(terms: &[&DimensionlessTerm]) -> String {
    let mut sets: Vec<(String, Vec<&DimensionlessTerm>)> = Vec::new();
    for term in terms {
        let amount = amount(&term.coefficient);
        match sets.iter_mut().find(|(found, _)| *found == amount) {
            // A coefficient of 1 needs no bracket, so its terms stay where they are.
            Some((_, set)) if amount != "1" => set.push(term),
            Some(_) | None => sets.push((amount, vec![term])),
        }
    }
    let parts: Vec<(bool, String)> = sets
        .iter()
        .map(|(amount, set)| (is_negative(set[0]), multiplied(amount, &inside(set))))
        .collect();
    let parts: Vec<(bool, &str)> = parts
        .iter()
        .map(|(is_negative, text)| (*is_negative, text.as_str()))
        .collect();
    joined(&parts)
}

fn is_negative(term: &DimensionlessTerm) -> bool {
    term.coefficient.number.is_negative()
}

/// What stands behind a coefficient, with the sign of its first term taken out.
fn inside(set: &[&DimensionlessTerm]) -> String {
    let [single] = set else {
        let parts: Vec<(bool, &str)> = set
            .iter()
            .map(|term| {
                (
                    is_negative(term) != is_negative(set[0]),
                    term.expression.as_str(),
                )
            })
            .collect();
        return format!("({})", joined(&parts));
    };
    single.expression.clone()
}

fn multiplied(amount: &str, expression: &str) -> String {
    match (amount, expression) {
        ("1", expression) => expression.to_owned(),
        (amount, "1") => amount.to_owned(),
        (amount, expression) => match expression.strip_prefix("1/") {
            Some(below) => format!("{amount}/{below}"),
            None => format!("{amount}*{expression}"),
        },
    }
}
