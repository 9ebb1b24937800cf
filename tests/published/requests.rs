//! Checks of the requests beside `rank` and `reduce`: `show`, `compare`, `groups`, `bounds`,
//! `find` and `layers`.

use serde_json::Value;

use super::checks::{Case, within};
use super::span::{Vector, rank, vectors};
use crate::harness::{Tally, answers_to, entry, list, sorted_map, sorted_texts, text};

/// The `show` answers that a value names, each against the value and the printed number.
pub(crate) fn compare_value(tally: &mut Tally, case: &Case, check: &Value) {
    let shown = answers_to(case.output, "show");
    for index in list(&check["shows"]) {
        let index = index.as_u64().and_then(|index| usize::try_from(index).ok());
        let answer = index.and_then(|index| shown.get(index).copied());
        compare_shown(tally, answer.unwrap_or(&Value::Null), check);
    }
}

fn compare_shown(tally: &mut Tally, answer: &Value, check: &Value) {
    let what = text(&check["what"]);
    let value = &answer["value"]["nominal"];
    tally.number(&what, value, &check["si"], within(check));
    tally.same(&format!("{what}, unit"), &answer["unit"], &check["si_unit"]);
    let converted = &answer["in"]["value"]["nominal"];
    if answer["in"].is_object() {
        tally.number(
            &format!("{what}, converted"),
            converted,
            &check["value"],
            within(check),
        );
    }
    if check["powers"].is_object() {
        let exponents = sorted_map(&answer["exponents"]);
        tally.same(
            &format!("{what}, exponents"),
            exponents,
            sorted_map(&check["powers"]),
        );
        tally.same(
            &format!("{what}, number"),
            &answer["number"],
            &check["number"],
        );
    }
    if let Some(printed) = check["printed"].as_str() {
        let printed: f64 = printed.parse().expect("a printed number is a number");
        let shown = if answer["in"].is_object() {
            converted
        } else {
            value
        };
        let margin = check["printed_within"]
            .as_f64()
            .expect("a printed number has a margin");
        tally.number(&format!("{what}, printed"), shown, &printed.into(), margin);
    }
}

/// A group of two phenomena side by side.
pub(crate) fn compare_group(tally: &mut Tally, case: &Case, check: &Value) {
    let name = text(&check["group"]);
    let answer = case.answer(tally, "compare");
    let group = entry(&answer["groups"], "name", &name);
    tally.same(&format!("{name}, match"), &group["match"], &check["match"]);
    let values = list(&group["values"]);
    tally.same(&name, values.len(), list(&check["values"]).len());
    for (value, expected) in values.iter().zip(list(&check["values"])) {
        tally.number(&name, &value["nominal"], expected, within(check));
    }
}

/// The independent groups are as many as stated and span the same space.
pub(crate) fn compare_span(tally: &mut Tally, case: &Case, check: &Value) {
    let answer = case.answer(tally, "groups");
    let found = vectors(&answer["independent"], "exponents");
    let expected = vectors(&check["groups"], "powers");
    tally.same(
        "number of groups",
        found.len() as u64,
        check["count"].as_u64().unwrap_or(0),
    );
    tally.same("independent groups", rank(&found), expected.len());
    let both: Vec<Vector> = found.into_iter().chain(expected.clone()).collect();
    tally.same("space of the groups", rank(&both), expected.len());
}

/// The interval of one scale over which the reduced system stands.
pub(crate) fn compare_interval(tally: &mut Tally, case: &Case, check: &Value) {
    let name = text(&check["scale"]);
    let answer = case.answer(tally, "bounds");
    let scale = entry(&answer["scales"], "name", &name);
    for field in ["nominal", "low", "high"] {
        let expected = &check["si"][field];
        tally.number(
            &format!("{name}, {field}"),
            &scale[field],
            expected,
            within(check),
        );
    }
    for side in ["low", "high"] {
        let end = &scale["limited_by"][side];
        let allowed = sorted_texts(&check["ended_by"][side]);
        let ending = format!("{}.{}", text(&end["equation"]), text(&end["term"]));
        let is_right = if end.is_null() {
            allowed.is_empty()
        } else {
            allowed.contains(&ending)
        };
        tally.same(&format!("{name}, {side} ended by {ending}"), is_right, true);
    }
}

/// A condition under which the reduced system stands, in named groups.
pub(crate) fn compare_condition(tally: &mut Tally, case: &Case, check: &Value) {
    let ratio = text(&check["ratio"]);
    let answer = case.answer(tally, "bounds");
    let is_it = |condition: &&Value| condition["groups"] == check["groups"];
    let condition = list(&answer["conditions"])
        .iter()
        .find(is_it)
        .unwrap_or(&Value::Null);
    tally.number(&ratio, &condition["limit"], &check["limit"], within(check));
    tally.number(&ratio, &condition["value"], &check["now"], within(check));
    tally.same(
        &format!("{ratio} holds"),
        condition["holds"].as_bool(),
        Some(true),
    );
}

/// The candidate of `find`, or the layer, in which these processes balance, with its formulas.
pub(crate) fn compare_balances(tally: &mut Tally, case: &Case, check: &Value) {
    if case.checks_of("layer").next().is_some() {
        return; // compared with its layer
    }
    let answer = case.answer(tally, "find");
    let candidates = list(&answer["candidates"]);
    let is_point = |candidate: &&Value| list(&candidate["free"]).is_empty();
    let is_it = |candidate: &&Value| has_balances(&candidate["balances"], &check["balances"]);
    let found = candidates.iter().find(is_it).unwrap_or(&Value::Null);
    let neglected = &found["largest_neglected"];
    tally.number(
        "largest neglected",
        neglected,
        &check["neglected"],
        within(check),
    );
    for formula in case.checks_of("formula") {
        compare_formula(tally, &found["scales"][text(&formula["scale"])], formula);
    }
    for others in case.checks_of("others") {
        let n_others = candidates.iter().filter(is_point).count().saturating_sub(1);
        tally.same(
            "other candidates",
            n_others as u64,
            others["count"].as_u64().unwrap_or(0),
        );
    }
}

fn has_balances(found: &Value, expected: &Value) -> bool {
    let sorted = |value: &Value| -> Vec<(String, Vec<String>)> {
        let equations = sorted_map(value).into_iter();
        equations
            .map(|(name, processes)| (name.clone(), sorted_texts(processes)))
            .collect()
    };
    sorted(found) == sorted(expected)
}

/// A scale that `find` gives, or a thickness: its formula and its value.
fn compare_formula(tally: &mut Tally, found: &Value, check: &Value) {
    let name = text(&check["scale"]);
    tally.same(
        &format!("{name}, exponents"),
        sorted_map(&found["exponents"]),
        sorted_map(&check["powers"]),
    );
    if check["amount"].is_number() {
        tally.number(
            &format!("{name}, number"),
            &found["number"],
            &check["amount"],
            within(check),
        );
    } else {
        tally.same(
            &format!("{name}, number"),
            text(&found["number"]),
            text(&check["number"]),
        );
    }
    tally.number(
        &name,
        &found["value"]["nominal"],
        &check["si"],
        within(check),
    );
    tally.same(&format!("{name}, unit"), &found["unit"], &check["si_unit"]);
}

/// All balances of one open scale, and nothing else.
pub(crate) fn compare_candidates(tally: &mut Tally, case: &Case, check: &Value) {
    let scale = text(&check["scale"]);
    let answer = case.answer(tally, "find");
    let candidates = list(&answer["candidates"]);
    let formulas = list(&check["formulas"]);
    tally.same("candidates", candidates.len(), formulas.len());
    for formula in formulas {
        let has_it = |candidate: &&Value| {
            let found = &candidate["scales"][&scale];
            found["exponents"] == formula["powers"] && found["number"] == formula["number"]
        };
        let found = candidates.iter().find(has_it).unwrap_or(&Value::Null);
        let balances = found["balances"]
            .as_object()
            .and_then(|balances| balances.values().next());
        let processes = sorted_texts(balances.unwrap_or(&Value::Null));
        tally.same(&scale, processes, sorted_texts(&formula["balance"]));
        let neglected = &found["largest_neglected"];
        tally.number(&scale, neglected, &formula["neglected"], within(check));
    }
}

/// A thin layer: its balance, its thickness and how thin it is.
pub(crate) fn compare_layer(tally: &mut Tally, case: &Case, check: &Value) {
    let answer = case.answer(tally, "layers");
    let along = |layer: &&Value| {
        layer["equation"] == check["equation"] && layer["coordinate"] == check["coordinate"]
    };
    let layers: Vec<&Value> = list(&answer["layers"]).iter().filter(along).collect();
    for others in case.checks_of("others") {
        let n_others = layers.len().saturating_sub(1) as u64;
        tally.same(
            "other layers",
            n_others,
            others["count"].as_u64().unwrap_or(0),
        );
    }
    let layer = layers.first().copied().unwrap_or(&Value::Null);
    tally.number(
        "ratio",
        &layer["ratio"]["nominal"],
        &check["ratio"],
        within(check),
    );
    for balances in case.checks_of("balances") {
        let expected = &balances["balances"][text(&check["equation"])];
        tally.same(
            "balance",
            sorted_texts(&layer["balance"]),
            sorted_texts(expected),
        );
    }
    for formula in case.checks_of("formula") {
        compare_formula(tally, layer, formula);
    }
}
