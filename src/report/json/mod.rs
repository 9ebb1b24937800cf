//! The answers as JSON, for other programs. It only serialises: what is said is settled
//! by the analysis and by `words`.

mod bounds;
mod claims;
mod compare;
mod expand;
mod find;
mod groups;
mod layers;
mod nondimensional;
mod rank;
mod reduce;
mod show;

use serde_json::{Map, Value, json};

use crate::analysis::{Answer, Body, Exponents};
use crate::audit::AuditRow;
use crate::diagnostic::Diagnostic;
use crate::model::terms::Side;
use crate::number::Number;
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
        "claims": list(&outcome.claims, |claim| claims::held(claim, sources)),
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
        Body::Show(shown) => show::show(shown),
        Body::Groups(found) => groups::groups(found),
        Body::Nondimensionalize(equations) => {
            json!({ "equations": list(equations, nondimensional::equation) })
        }
        Body::Rank(equations) => json!({ "equations": list(equations, rank::ranked) }),
        Body::Reduce(reduction) => reduce::reduce(reduction),
        Body::Expand(hierarchy) => expand::expand(hierarchy),
        Body::Find(balances) => find::find(balances),
        Body::Layers(found) => layers::layers(found),
        Body::Bounds(found) => bounds::bounds(found),
        Body::Compare(comparison) => compare::compare(comparison),
    };
    if let (Value::Object(object), Value::Object(own)) = (&mut object, own) {
        object.extend(own);
    }
    object
}

fn side(side: Side) -> &'static str {
    match side {
        Side::Left => "left",
        Side::Right => "right",
    }
}

fn mends(mends: &[(String, f64)]) -> Value {
    list(
        mends,
        |(scale, factor)| json!({ "scale": scale, "factor": factor }),
    )
}
