//! `nondimensionalize` as JSON.

use serde_json::{Value, json};

use crate::analysis::nondimensional::{DimensionlessEquation, DimensionlessTerm};
use crate::report::dimensionless;
use crate::report::json::{exponents, list, number, range, side};

/// One equation.
pub(super) fn equation(equation: &DimensionlessEquation) -> Value {
    json!({
        "name": equation.name,
        "title": equation.title,
        "by": equation.by,
        "text": dimensionless::equation(equation),
        "terms": list(&equation.terms, term),
    })
}

fn term(term: &DimensionlessTerm) -> Value {
    json!({
        "text": term.text,
        "process": term.process,
        "side": side(term.side),
        "scale": term.scale,
        "number": number(&term.factors.number),
        "exponents": exponents(&term.factors.exponents),
        "size": range(&term.size),
        "order": term.order,
        "coefficient": {
            "number": number(&term.coefficient.number),
            "groups": term.coefficient.groups.as_ref().map(exponents),
            "exponents": exponents(&term.coefficient.exponents),
            "value": range(&term.coefficient.value),
        },
        "expression": term.expression,
    })
}
