//! How far answers hold: `bounds`, `compare` and claims, against figures worked out by hand
//! and against the answers to scripts with the figures put back.

mod bounds;
mod claims;
mod compare;
mod words;

use serde_json::Value;

use crate::harness::{answers, answers_to, list, schema_faults};

/// The one answer to a request of a script that is answered whole.
fn answer(script: &str, request: &str) -> Value {
    let output = answers(script);
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    assert_ne!(output["outcome"], "invalid", "{}", output["diagnostics"]);
    let found = answers_to(&output, request);
    assert_eq!(found.len(), 1, "{script}");
    found[0].clone()
}

/// The code and message of each error of a script, in order.
fn errors(script: &str) -> Vec<(String, String)> {
    let output = answers(script);
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    let text = |found: &Value, field: &str| found[field].as_str().unwrap_or("").to_owned();
    list(&output["diagnostics"])
        .iter()
        .filter(|found| found["severity"] == "error")
        .map(|found| {
            let message = format!("{}; {}", text(found, "message"), text(found, "help"));
            (text(found, "code"), message)
        })
        .collect()
}

/// The report of a script for a terminal, with no line too long.
fn report(script: &str) -> String {
    let outcome = scalewright::Session::new().run("case.scl", script, None);
    let text = scalewright::report::text::report(&outcome, false);
    for line in text.lines() {
        assert!(line.chars().count() <= 80, "too long: {line}");
    }
    text
}

fn near(found: &Value, expected: f64, within: f64) {
    let found = found.as_f64().unwrap_or(f64::NAN);
    assert!(
        (found - expected).abs() <= within * expected.abs(),
        "expected {expected}, found {found}"
    );
}
