//! `rank` as JSON.

use serde_json::{Value, json};

use crate::analysis::rank::{RankedEquation, RankedTerm};
use crate::report::json::{exponents, list, number, range, side};

/// One equation.
pub(super) fn ranked(equation: &RankedEquation) -> Value {
    json!({
        "name": equation.name,
        "title": equation.title,
        "unit": equation.unit,
        "tolerance": equation.tolerance,
        "terms": list(&equation.terms, ranked_term),
        "processes": list(&equation.processes, |process| json!({
            "process": process.process,
            "share": range(&process.share),
            "verdict": process.verdict.word(),
        })),
    })
}

fn ranked_term(term: &RankedTerm) -> Value {
    json!({
        "text": term.text,
        "process": term.process,
        "side": side(term.side),
        "scale": term.scale,
        "number": number(&term.factors.number),
        "exponents": exponents(&term.factors.exponents),
        "size": range(&term.size),
        "order": term.order,
        "share": range(&term.share),
        "groups": term.groups.as_ref().map(exponents),
        "verdict": term.verdict.word(),
    })
}
