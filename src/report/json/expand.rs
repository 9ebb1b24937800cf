//! `expand` as JSON.

use serde_json::{Map, Value, json};

use crate::analysis::hierarchy::{Hierarchy, OrderEquation, OrderTerm, Solvability};
use crate::number::Exponent;
use crate::report::json::{exponents, list, number, side};

/// Its own fields.
pub(super) fn expand(hierarchy: &Hierarchy) -> Value {
    let (undetermined, conditions) = match &hierarchy.solvability {
        Solvability::NotLooked => (&[][..], &[][..]),
        Solvability::Looked {
            undetermined,
            conditions,
        } => (undetermined.as_slice(), conditions.as_slice()),
    };
    let placed: Vec<(String, Exponent)> = hierarchy
        .placed
        .iter()
        .map(|group| (group.name.clone(), group.power))
        .collect();
    json!({
        "small": hierarchy.small,
        "value": hierarchy.value,
        "placed": exponents(&placed),
        "orders": list(&hierarchy.orders, |order| json!({
            "order": order.order.to_string(),
            "equations": list(&order.equations, equation),
        })),
        "looked": matches!(hierarchy.solvability, Solvability::Looked { .. }),
        "undetermined": undetermined,
        "solvability": list(conditions, |condition| {
            let mut found = equation(&condition.equation);
            found["simplified"] = condition.simplified.as_ref().map(equation).into();
            found
        }),
    })
}

fn equation(equation: &OrderEquation) -> Value {
    json!({
        "name": equation.name,
        "text": equation.text,
        "dimensional": equation.dimensional,
        "terms": list(&equation.terms, term),
    })
}

fn term(term: &OrderTerm) -> Value {
    json!({
        "number": number(&term.number),
        "side": side(term.side),
        "groups": term.groups.as_ref().map(exponents),
        "factors": list(&term.factors, |factor| {
            let derivatives = factor.derivatives.iter();
            let derivatives = derivatives.map(|(along, order)| (along.clone(), json!(order)));
            json!({
                "field": factor.field,
                "order": factor.order.to_string(),
                "derivatives": Value::Object(derivatives.collect::<Map<String, Value>>()),
                "power": power(factor.power),
            })
        }),
        "forcing": term.is_forcing,
    })
}

/// A whole power as a number, any other as text.
fn power(power: Exponent) -> Value {
    match power.is_whole() {
        true => json!(power.numer()),
        false => Value::String(power.to_string()),
    }
}
