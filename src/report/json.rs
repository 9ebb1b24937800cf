//! The answers as JSON, for other programs. It only serialises: what is said is settled
//! by the analysis and by `words`.

use serde_json::{Map, Value, json};

use crate::analysis::claims::Held;
use crate::analysis::rank::{RankedEquation, RankedTerm};
use crate::analysis::reduce::{Kind, ReducedEquation, ReducedTerm, Reduction};
use crate::analysis::show::Shown;
use crate::analysis::{Answer, Body, Exponents};
use crate::audit::AuditRow;
use crate::diagnostic::Diagnostic;
use crate::model::terms::Side;
use crate::number::Number;
use crate::report::words;
use crate::session::{Outcome, Status};
use crate::source::{Sources, Span};
use crate::units::Range;

/// The version of the contract.
const FORMAT: u32 = 1;

/// A script's outcome as one JSON object.
pub fn outcome(outcome: &Outcome) -> Value {
    let sources = &outcome.sources;
    json!({
        "format": FORMAT,
        "script": outcome.script,
        "outcome": match outcome.status() {
            Status::Ok => "ok",
            Status::Unmet => "unmet",
            Status::Invalid => "invalid",
        },
        "diagnostics": list(&outcome.diagnostics, |found| diagnostic(found, sources)),
        "symbols": list(&outcome.symbols, symbol),
        "answers": list(&outcome.answers, answer),
        "claims": list(&outcome.claims, |claim| held(claim, sources)),
    })
}

fn list<T>(items: &[T], one: impl Fn(&T) -> Value) -> Value {
    Value::Array(items.iter().map(one).collect())
}

fn range(range: &Range) -> Value {
    json!({ "low": range.low, "nominal": range.nominal, "high": range.high })
}

fn exponents(exponents: &Exponents) -> Value {
    let entries = exponents
        .iter()
        .map(|(name, power)| (name.clone(), Value::String(power.to_string())));
    Value::Object(entries.collect::<Map<String, Value>>())
}

/// Rational text where it is rational, else a JSON number.
fn number(number: &Number) -> Value {
    match number.as_rational() {
        Some(exact) => Value::String(exact.to_string()),
        None => json!(number.to_f64()),
    }
}

fn span(span: Span, sources: &Sources) -> Value {
    let start = sources.position(span.file, span.start);
    let end = sources.position(span.file, span.end);
    json!({
        "file": sources.get(span.file).name,
        "start": { "line": start.line, "column": start.column },
        "end": { "line": end.line, "column": end.column },
    })
}

fn diagnostic(found: &Diagnostic, sources: &Sources) -> Value {
    json!({
        "code": found.code,
        "severity": found.severity.word(),
        "message": found.message,
        "help": found.help,
        "span": found.span.map(|place| span(place, sources)),
        "related": list(&found.related, |related| json!({
            "message": related.message,
            "span": span(related.span, sources),
        })),
    })
}

fn symbol(row: &AuditRow) -> Value {
    json!({
        "name": row.name,
        "kind": row.kind,
        "title": row.title,
        "source": row.source,
        "unit": row.unit,
        "phenomenon": row.phenomenon,
        "value": row.value.as_ref().map(range),
        "formula": row.formula,
    })
}

fn answer(answer: &Answer) -> Value {
    let mut object = json!({
        "request": answer.request,
        "phenomenon": answer.phenomenon,
        "text": answer.text,
        "left_out": list(&answer.left_out, |left| json!({ "equation": left.equation, "open": left.open })),
    });
    let own = match &answer.body {
        Body::Show(shown) => show(shown),
        Body::Rank(equations) => json!({ "equations": list(equations, ranked) }),
        Body::Reduce(reduction) => reduce(reduction),
    };
    if let (Value::Object(object), Value::Object(own)) = (&mut object, own) {
        object.extend(own);
    }
    object
}

fn show(shown: &Shown) -> Value {
    let mut object = json!({
        "value": range(&shown.value),
        "unit": shown.unit,
        "order": shown.order,
        "number": shown.factors.as_ref().map(|factors| number(&factors.number)),
        "exponents": shown.factors.as_ref().map(|factors| exponents(&factors.exponents)),
        "group": shown.group,
    });
    if let (Some((unit, value)), Value::Object(object)) = (&shown.shown_in, &mut object) {
        object.insert("in".to_owned(), json!({ "unit": unit, "value": range(value) }));
    }
    object
}

fn side(side: Side) -> &'static str {
    match side {
        Side::Left => "left",
        Side::Right => "right",
    }
}

fn ranked(equation: &RankedEquation) -> Value {
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

fn reduce(reduction: &Reduction) -> Value {
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
        "condition": words::condition(term),
    })
}

fn mends(mends: &[(String, f64)]) -> Value {
    list(mends, |(scale, factor)| json!({ "scale": scale, "factor": factor }))
}

fn held(claim: &Held, sources: &Sources) -> Value {
    use crate::analysis::claims::Measured;
    let value = match &claim.measured {
        Measured::Ratio { value, .. } => value.high.is_finite().then(|| range(value)),
        Measured::Value { left, .. } => Some(range(left)),
        Measured::Processes { .. } => None,
    };
    json!({
        "text": claim.text,
        "phenomenon": claim.phenomenon,
        "met": claim.met,
        "measured": words::measured(claim),
        "value": value,
        "miss": if claim.met { None } else { claim.miss },
        "mends": mends(&claim.mends),
        "span": span(claim.span, sources),
    })
}
