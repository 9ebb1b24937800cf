//! `layers` as JSON.

use serde_json::{Value, json};

use crate::analysis::layers::{Layer, Layers};
use crate::report::json::{exponents, list, number, range};
use crate::report::{conditions, words};

/// Its own fields.
pub(super) fn layers(found: &Layers) -> Value {
    json!({ "layers": list(&found.layers, layer) })
}

fn layer(layer: &Layer) -> Value {
    json!({
        "equation": layer.equation,
        "coordinate": layer.coordinate,
        "formula": words::formula(&layer.formula),
        "number": number(&layer.formula.number),
        "exponents": exponents(&layer.formula.exponents),
        "value": range(&layer.value),
        "unit": layer.unit,
        "ratio": range(&layer.ratio),
        "outer": words::factors(&layer.outer),
        "balance": layer.balance,
        "outer_balance": layer.outer_balance,
        "name": layer.name,
        "inside": layer.inside,
        "whole_box": layer.whole_box,
        "conditions": list(&layer.conditions, |condition| json!({
            "text": conditions::in_groups(condition),
            "value": range(&condition.value),
        })),
    })
}
