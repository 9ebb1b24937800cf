//! Runs the published cases of each kind and counts what was compared.

use serde_json::Value;

use super::checks::{Case, compare};
use crate::harness::{Tally, answers, read, read_records, schema_faults, text};

/// Checks that the program has no answer for yet: a case that holds one waits.
const LATER: [&str; 6] = [
    "component",
    "largest",
    "area",
    "border",
    "meeting",
    "leads_at",
];

#[test]
fn rank() {
    run("rank", 13, 746);
}

#[test]
fn reduce() {
    run("reduce", 13, 134);
}

#[test]
fn balance() {
    run("balance", 17, 126);
}

#[test]
fn layer() {
    run("layer", 7, 49);
}

#[test]
fn values() {
    run("values", 10, 82);
}

#[test]
fn groups() {
    run("groups", 8, 30);
}

#[test]
fn validity() {
    run("validity", 11, 82);
}

#[test]
fn similarity() {
    run("similarity", 6, 91);
}

#[test]
fn hierarchy() {
    run("hierarchy", 10, 115);
}

#[test]
fn frames() {
    run("frames", 1, 8);
}

/// Answers every case of a kind that needs nothing of `LATER`, and compares it.
fn run(kind: &str, least_cases: usize, least_compared: usize) {
    let mut tally = Tally::default();
    for record in read_records(&format!("published/cases/{kind}.json")) {
        let checks = record["checks"]
            .as_array()
            .expect("a case lists its checks");
        if checks.iter().any(is_later) {
            continue;
        }
        let name = text(&record["case"]);
        tally.begin(&name);
        let output = answers(&read(&format!("published/cases/{kind}/{name}.scl")));
        if output["outcome"] != "ok" {
            tally.fault(format!("not answered: {}", output["diagnostics"]));
        }
        for fault in schema_faults(&output) {
            tally.fault(fault);
        }
        let output = &output;
        compare(&mut tally, &Case { checks, output });
    }
    tally.finish(&format!("published, {kind}"), least_cases, least_compared);
}

fn is_later(check: &Value) -> bool {
    LATER.iter().any(|later| check["check"] == *later)
}
