//! Intervals of single scales over which reduced systems stand and stay the same.

use serde_json::Value;

use crate::harness::{Tally, answers, answers_to, entry, list, read_records, text};

#[test]
fn intervals_of_scales() {
    let mut tally = Tally::default();
    for record in read_records("reference/bounds.json") {
        tally.begin(&text(&record["case"]));
        compare(&mut tally, &record, &answers(&text(&record["script"])));
    }
    tally.finish("reference, bounds", 300, 10564);
}

fn compare(tally: &mut Tally, record: &Value, output: &Value) {
    let Some(answer) = answers_to(output, "bounds").first().copied() else {
        tally.fault(format!("no bounds: {}", output["diagnostics"]));
        return;
    };
    let mut dropped: Vec<String> = list(&answer["dropped"]).iter().map(ender).collect();
    dropped.sort();
    dropped.dedup();
    tally.same("dropped", dropped, enders(&record["dropped"]));
    let expected: Vec<_> = record["scales"].as_object().into_iter().flatten().collect();
    tally.same("scales", list(&answer["scales"]).len(), expected.len());
    for (name, intervals) in expected {
        let scale = entry(&answer["scales"], "name", name);
        compare_interval(tally, name, scale, &intervals[0]);
        let what = format!("{name}, unchanged");
        compare_interval(tally, &what, &scale["unchanged"], &intervals[1]);
    }
    compare_nearest(tally, &answer["nearest"], &record["nearest"]);
}

/// One interval: `[low, high, what may end it below, what may end it above]`.
fn compare_interval(tally: &mut Tally, what: &str, found: &Value, expected: &Value) {
    for (i, side) in ["low", "high"].into_iter().enumerate() {
        let what = format!("{what}, {side}");
        tally.number(&what, &found[side], &expected[i], 1e-9);
        let end = &found["limited_by"][side];
        let may_end = enders(&expected[i + 2]);
        let is_one = if end.is_null() {
            may_end.is_empty()
        } else {
            may_end.contains(&ender(end))
        };
        tally.same(
            &format!("{what}, ended by {end} of {may_end:?}"),
            is_one,
            true,
        );
    }
}

/// The nearest way out; nothing is compared where two are as near.
fn compare_nearest(tally: &mut Tally, found: &Value, expected: &Value) {
    if expected == "none" {
        tally.same("nearest", found, &Value::Null);
    } else if !expected.is_null() {
        tally.same("nearest", &found["scale"], &expected[0]);
        tally.number("nearest, factor", &found["factor"], &expected[1], 1e-9);
    }
}

fn ender(end: &Value) -> String {
    format!("{}.{}", text(&end["equation"]), text(&end["term"]))
}

fn enders(stored: &Value) -> Vec<String> {
    let pair = |end: &Value| format!("{}.{}", text(&end[0]), text(&end[1]));
    list(stored).iter().map(pair).collect()
}
