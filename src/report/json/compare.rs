//! `compare` as JSON.

use serde_json::{Value, json};

use crate::analysis::compare::{ComparedEquation, Comparison};
use crate::analysis::matching::Matching;
use crate::report::json::{list, mends, range};

/// Its own fields.
pub(super) fn compare(comparison: &Comparison) -> Value {
    json!({
        "phenomena": comparison.phenomena,
        "scales": list(&comparison.scales, |scale| json!({
            "name": scale.name,
            "unit": scale.unit,
            "values": list(&scale.values, |value| json!(value.as_ref().map(range))),
        })),
        "groups": list(&comparison.groups, |group| json!({
            "name": group.name,
            "values": list(&group.values, range),
            "match": group.is_match,
        })),
        "equations": list(&comparison.equations, equation),
        "matching": comparison.matching.as_ref().map(matching),
    })
}

fn equation(equation: &ComparedEquation) -> Value {
    json!({
        "name": equation.name,
        "unit": equation.unit,
        "terms": list(&equation.processes, |process| json!({
            "process": process.process,
            "sizes": list(&process.sizes, range),
            "shares": list(&process.shares, range),
            "verdicts": list(&process.verdicts, |verdict| json!(verdict.word())),
        })),
        "balances": equation.balances,
        "reduced": equation.reduced,
    })
}

fn matching(matching: &Matching) -> Value {
    json!({
        "possible": matching.is_possible(),
        "changes": mends(&matching.changes),
        "conflict": matching.conflict,
    })
}
