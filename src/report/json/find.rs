//! `find` as JSON.

use serde_json::{Map, Value, json};

use crate::analysis::balances::{Balances, Candidate, FamilyEnd, FoundScale, FreeScale};
use crate::report::json::{exponents, list, number, range};
use crate::report::{conditions, words};

/// Its own fields.
pub(super) fn find(balances: &Balances) -> Value {
    let mut object = json!({
        "unknowns": balances.unknowns,
        "candidates": list(&balances.candidates, candidate),
        "nominal_only": balances.is_nominal,
    });
    if let (true, Value::Object(object)) = (balances.candidates.is_empty(), &mut object) {
        object.insert("contradiction".to_owned(), json!(balances.contradiction));
    }
    object
}

fn candidate(candidate: &Candidate) -> Value {
    let scales = candidate
        .scales
        .iter()
        .map(|found| (found.name.clone(), scale(found)));
    let balances = candidate
        .balances
        .iter()
        .map(|(name, processes)| (name.clone(), json!(processes)));
    let neglected = candidate.neglected.as_ref();
    let term = neglected.and_then(|found| found.term.as_ref());
    let name = (!candidate.names.is_empty()).then(|| candidate.names.join(", "));
    json!({
        "name": name,
        "names": candidate.names,
        "scales": Value::Object(scales.collect::<Map<String, Value>>()),
        "free": list(&candidate.free, free),
        "balances": Value::Object(balances.collect::<Map<String, Value>>()),
        "largest_neglected": neglected.and_then(|found| found.share),
        "neglected_term": term.map(|(term, _)| term),
        "neglected_equation": term.map(|(_, equation)| equation),
        "neglected_power": neglected.and_then(|found| found.power),
        "whole_box": candidate.whole_box,
        "conditions": list(&candidate.conditions, |condition| json!({
            "text": conditions::in_groups(condition),
            "value": range(&condition.value),
        })),
        "adopted": candidate.is_adopted,
    })
}

fn scale(found: &FoundScale) -> Value {
    match &found.formula {
        None => Value::Null,
        Some(formula) => json!({
            "formula": words::formula(formula),
            "number": number(&formula.number),
            "exponents": exponents(&formula.exponents),
            "value": found.value.as_ref().map(range),
            "unit": found.unit,
        }),
    }
}

fn free(scale: &FreeScale) -> Value {
    json!({
        "scale": scale.name,
        "unit": scale.unit,
        "low": scale.low.first().map(end),
        "high": scale.high.first().map(end),
        "ends": {
            "low": list(&scale.low, end),
            "high": list(&scale.high, end),
        },
    })
}

fn end(end: &FamilyEnd) -> Value {
    json!({
        "formula": words::formula(&end.formula),
        "number": number(&end.formula.number),
        "exponents": exponents(&end.formula.exponents),
        "value": end.value.as_ref().map(range),
        "equation": end.equation,
        "joins": end.joins,
    })
}
