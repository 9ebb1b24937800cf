//! `find` and `layers` at the level of scripts: what they answer, and random systems held
//! against the definition of a balance.

mod candidates;
mod layers;
mod random;
mod searches;
mod text;

use serde_json::{Value, json};

use crate::harness::{answers, answers_to, list, schema_faults};

/// The answers to a script, which must be of the form that the schema wants.
fn answered(script: &str) -> Value {
    let output = answers(script);
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    output
}

/// The nth answer to a request.
fn answer<'a>(output: &'a Value, request: &str, n: usize) -> &'a Value {
    let found = answers_to(output, request).get(n).copied();
    found.unwrap_or_else(|| panic!("no answer: {}", output["diagnostics"]))
}

/// The candidates of the first `find` of a script.
fn candidates(output: &Value) -> Vec<Value> {
    list(&answer(output, "find", 0)["candidates"]).to_vec()
}

/// Codes of the diagnostics, in order.
fn codes(output: &Value) -> Vec<&str> {
    let diagnostics = list(&output["diagnostics"]).iter();
    diagnostics
        .filter_map(|found| found["code"].as_str())
        .collect()
}

/// Asserts a formula: its number and its exponents.
fn assert_formula(found: &Value, number: &str, exponents: &Value) {
    assert_eq!(
        (&found["number"], &found["exponents"]),
        (&json!(number), exponents)
    );
}

fn assert_close(found: &Value, expected: f64) {
    let found = found.as_f64().expect("a number");
    assert!(
        (found - expected).abs() <= 1e-9 * expected.abs(),
        "{found}, not {expected}"
    );
}
