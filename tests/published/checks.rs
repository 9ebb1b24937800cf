//! Compares one case with its answers: which request answers a check, and the checks of
//! `rank` and `reduce`. The other requests' checks stand in `requests.rs`.

use std::collections::BTreeMap;

use serde_json::Value;

use super::orders;
use super::requests;
use crate::harness::{Tally, answers_to, entry, list, sorted_map, sorted_texts, text};

/// The checks of a case and the program's output for its script.
pub(crate) struct Case<'a> {
    /// As stored, in order.
    pub(crate) checks: &'a [Value],
    /// The whole JSON object.
    pub(crate) output: &'a Value,
}

impl<'a> Case<'a> {
    /// The first answer to a request; null, and a fault, if there is none.
    pub(crate) fn answer(&self, tally: &mut Tally, request: &str) -> &'a Value {
        let first = answers_to(self.output, request).first().copied();
        first.unwrap_or_else(|| {
            tally.fault(format!("no answer to {request}"));
            &Value::Null
        })
    }

    /// The checks of one sort.
    pub(crate) fn checks_of(&self, sort: &str) -> impl Iterator<Item = &'a Value> {
        self.checks
            .iter()
            .filter(move |check| check["check"] == sort)
    }
}

/// Compares every check of a case.
pub(crate) fn compare(tally: &mut Tally, case: &Case) {
    compare_terms(tally, case);
    for check in case.checks {
        match check["check"].as_str().expect("a check names its sort") {
            "term" => {} // counted together, in their order
            "leads" | "drops" | "next" | "kind" | "lost" => compare_reduction(tally, case, check),
            "name" => compare_name(tally, case, check),
            "value" => requests::compare_value(tally, case, check),
            "compared" => requests::compare_group(tally, case, check),
            "span" => requests::compare_span(tally, case, check),
            "interval" => requests::compare_interval(tally, case, check),
            "condition" => requests::compare_condition(tally, case, check),
            "balances" => requests::compare_balances(tally, case, check),
            "candidates" => requests::compare_candidates(tally, case, check),
            "layer" => requests::compare_layer(tally, case, check),
            // Compared with the candidate or layer that they belong to.
            "formula" | "others" => {}
            "order" => orders::compare_order(tally, case, check),
            // Solutions of the orders: they show that the orders are right, nobody asks for them.
            "series" | "solution" | "follows" => {}
            unknown => tally.fault(format!("unknown check {unknown}")),
        }
    }
}

/// The terms of each equation, one by one in the order written.
fn compare_terms(tally: &mut Tally, case: &Case) {
    let mut expected: BTreeMap<String, Vec<&Value>> = BTreeMap::new();
    for check in case.checks_of("term") {
        expected
            .entry(text(&check["equation"]))
            .or_default()
            .push(check);
    }
    for (equation, checks) in expected {
        let answer = case.answer(tally, "rank");
        let terms = list(&entry(&answer["equations"], "name", &equation)["terms"]);
        tally.same(&format!("terms of {equation}"), terms.len(), checks.len());
        let unit = &entry(&answer["equations"], "name", &equation)["unit"];
        for (term, check) in terms.iter().zip(checks) {
            tally.same("unit", unit, &check["unit"]);
            compare_term(tally, term, check);
        }
    }
}

fn compare_term(tally: &mut Tally, term: &Value, check: &Value) {
    let name = text(&check["process"]);
    let within = within(check);
    let what = |field: &str| format!("{name}, {field}");
    tally.same("process", process_of(term), name.clone());
    tally.same(
        &what("number"),
        text(&term["number"]),
        text(&check["number"]),
    );
    tally.same(
        &what("exponents"),
        sorted_map(&term["exponents"]),
        sorted_map(&check["powers"]),
    );
    tally.number(
        &what("size"),
        &term["size"]["nominal"],
        &check["size"],
        within,
    );
    tally.same(&what("order"), &term["order"], &check["decade"]);
    tally.number(
        &what("share"),
        &term["share"]["nominal"],
        &check["share"],
        within,
    );
    if check["lowest"].is_number() {
        tally.number(
            &what("lowest share"),
            &term["share"]["low"],
            &check["lowest"],
            within,
        );
        tally.number(
            &what("highest share"),
            &term["share"]["high"],
            &check["highest"],
            within,
        );
    }
    tally.same(&what("verdict"), &term["verdict"], &check["verdict"]);
}

/// One check of a reduced equation.
fn compare_reduction(tally: &mut Tally, case: &Case, check: &Value) {
    let equation = text(&check["equation"]);
    let answer = case.answer(tally, "reduce");
    let reduced = entry(&answer["equations"], "name", &equation);
    match check["check"].as_str() {
        Some("leads") => {
            tally.same(
                &equation,
                leading(reduced),
                sorted_texts(&check["processes"]),
            );
        }
        Some("drops") => compare_dropped(tally, reduced, check),
        Some("next") => compare_next(tally, reduced, check),
        Some("kind") => {
            for kind in ["prognostic", "diagnostic"] {
                tally.same(
                    kind,
                    fields_of_kind(reduced, kind),
                    sorted_texts(&check[kind]),
                );
            }
        }
        Some("lost") => {
            let lost = entry(
                &reduced["lost_derivatives"],
                "coordinate",
                &text(&check["coordinate"]),
            );
            tally.same("lost derivative", lost.is_object(), true);
        }
        _ => tally.fault("not a check of a reduced equation"),
    }
}

fn leading(reduced: &Value) -> Vec<String> {
    let kept = list(&reduced["kept"]).iter();
    let mut processes: Vec<String> = kept
        .filter(|term| term["verdict"] == "leads")
        .map(process_of)
        .collect();
    processes.sort();
    processes.dedup();
    processes
}

/// Every term of the process drops, and the largest of their highest shares is as stated.
fn compare_dropped(tally: &mut Tally, reduced: &Value, check: &Value) {
    let process = text(&check["process"]);
    let is_one = |term: &&Value| process_of(term) == process;
    let n_kept = list(&reduced["kept"]).iter().filter(is_one).count();
    tally.same(&format!("kept terms of {process}"), n_kept, 0);
    let shares = list(&reduced["dropped"])
        .iter()
        .filter(is_one)
        .map(|term| &term["share"]["high"]);
    let largest = shares.filter_map(Value::as_f64).reduce(f64::max);
    tally.number(&process, &largest.into(), &check["share"], within(check));
}

fn compare_next(tally: &mut Tally, reduced: &Value, check: &Value) {
    let next = entry(
        &reduced["dropped"],
        "text",
        &text(&reduced["first_neglected"]),
    );
    let is_listed = sorted_texts(&check["one_of"]).contains(&process_of(next));
    tally.same(&format!("first neglected, {next}"), is_listed, true);
    tally.number("error", &reduced["error"], &check["share"], within(check));
}

fn fields_of_kind(reduced: &Value, kind: &str) -> Vec<String> {
    let fields = reduced["kind"].as_object().into_iter().flatten();
    let mut names: Vec<String> = fields
        .filter(|(_, found)| *found == kind)
        .map(|(name, _)| name.clone())
        .collect();
    names.sort();
    names
}

/// The declared balance is recognised in one of the equations.
fn compare_name(tally: &mut Tally, case: &Case, check: &Value) {
    let answer = case.answer(tally, "reduce");
    let recognised = entry(&answer["equations"], "balance", &text(&check["balance"]));
    tally.same(
        &format!("balance {}", check["balance"]),
        recognised.is_object(),
        true,
    );
}

/// The process of a term, or its text where it has none.
fn process_of(term: &Value) -> String {
    if term["process"].is_null() {
        text(&term["text"])
    } else {
        text(&term["process"])
    }
}

/// The relative margin of a check.
pub(crate) fn within(check: &Value) -> f64 {
    check["within"].as_f64().unwrap_or(1e-9)
}
