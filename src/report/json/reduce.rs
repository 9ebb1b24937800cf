//! `reduce` as JSON.

use serde_json::{Value, json};

use crate::analysis::reduce::{Kind, ReducedEquation, ReducedTerm, Reduction};
use crate::report::json::{list, mends, range};
use crate::report::{conditions, words};

/// Its own fields.
pub(super) fn reduce(reduction: &Reduction) -> Value {
    let warnings = if reduction.undetermined.is_empty() {
        Vec::new()
    } else {
        vec![json!({
            "code": "undetermined-field",
            "message": words::undetermined(&reduction.undetermined),
            "mends": [],
        })]
    };
    json!({
        "equations": list(&reduction.equations, reduced),
        "warnings": warnings,
        "determined": { "fields": reduction.fields, "undetermined": reduction.undetermined },
    })
}

fn reduced(equation: &ReducedEquation) -> Value {
    let kinds = equation.kinds.iter().map(|(field, kind)| {
        let word = match kind {
            Kind::Prognostic => "prognostic",
            Kind::Diagnostic => "diagnostic",
        };
        (field.clone(), Value::String(word.to_owned()))
    });
    json!({
        "name": equation.name,
        "reduced": equation.reduced,
        "kept": list(&equation.kept, reduced_term),
        "dropped": list(&equation.dropped, reduced_term),
        "error": equation.error,
        "error_sum": equation.error_sum,
        "first_neglected": equation.first_neglected,
        "balance": equation.balance,
        "by_construction": equation.by_construction,
        "base_state": equation.is_base_state,
        "kind": Value::Object(kinds.collect()),
        "lost_derivatives": list(&equation.lost, |lost| json!({
            "coordinate": lost.coordinate,
            "field": lost.field,
            "order": lost.order,
        })),
        "warnings": list(&words::warnings(equation), |warning| json!({
            "code": warning.code,
            "message": warning.message,
            "mends": mends(&warning.mends),
        })),
    })
}

fn reduced_term(term: &ReducedTerm) -> Value {
    json!({
        "text": term.text,
        "process": term.process,
        "share": range(&term.share),
        "verdict": term.verdict.word(),
        "condition": conditions::all_in_groups(term),
    })
}
