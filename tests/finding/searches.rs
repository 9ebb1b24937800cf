//! What `find` refuses, what it says where there is no balance, and searches that are ended.

use std::sync::atomic::{AtomicUsize, Ordering};

use scalewright::{Session, Watcher, report};
use serde_json::json;

use super::{answer, answered, candidates, codes};
use crate::harness::{answers_to, list};

const BASE: &str = "scale X in m  scale A = 1 m  scale B = 50 m  scale Y = 3*A
    equation one: X as x = A as a
    equation two: X as x = B as b
    equation three: X^2 as x = A*B as ab
    equation known: Y as y = A as a\n";

fn asked(requests: &str) -> serde_json::Value {
    answered(&format!("{BASE}{requests}"))
}

#[test]
fn the_first_smallest_contradiction_is_named() {
    let output = asked("find X");
    assert_eq!(codes(&output), ["no-balance"]);
    let found = answer(&output, "find", 0);
    assert_eq!(found["candidates"], json!([]));
    assert_eq!(found["contradiction"], json!(["one", "two"]));
    assert_eq!(output["outcome"], "ok");
}

#[test]
fn a_condition_that_cannot_hold_leaves_nothing() {
    let output = answered(
        "scale X in 1
        equation e: X as x + 1e-6 as small = 1 as one
        find X where e: x ~ small",
    );
    assert_eq!(answer(&output, "find", 0)["contradiction"], json!(["e"]));
}

#[test]
fn what_is_not_open_is_refused() {
    assert_eq!(codes(&asked("find A")), ["not-open"]);
    assert_eq!(codes(&asked("find Y")), ["derived-scale"]);
    assert_eq!(codes(&asked("find Z")), ["unknown-name"]);
    assert_eq!(
        codes(&asked("find X where four: x ~ a")),
        ["unknown-equation"]
    );
    assert_eq!(
        codes(&asked("find X where one: x ~ b")),
        ["unknown-process"]
    );
    assert_eq!(codes(&asked("find X where known: y ~ a")), ["not-open"]);
}

#[test]
fn a_name_of_another_kind_is_refused() {
    let output = answered(
        "scale L in m  coordinate x ~ L  field c(x) ~ 1
        equation e: d_x(c) = 1/L
        find x",
    );
    assert_eq!(codes(&output), ["unexpected-word"]);
}

/// A scale that is no product hides its exponent.
#[test]
fn a_symbol_that_is_no_product_is_to_be_looked_for_itself() {
    let output = answered(
        "scale X in m  scale A = 1 m  scale V = X + A
        equation e: V as v = 7*A as a
        find X",
    );
    assert_eq!(codes(&output), ["not-a-product"]);
    assert!(output["diagnostics"][0]["help"].to_string().contains("`V`"));
}

#[test]
fn phenomena_where_the_scale_has_a_value_are_named() {
    let output = asked(
        "find X where three: x ~ ab
        phenomenon open_one { scale B = 1 m }
        phenomenon given_one { scale X = 2 m }",
    );
    assert_eq!(answers_to(&output, "find").len(), 1);
    assert_eq!(answer(&output, "find", 0)["phenomenon"], "open_one");
    let note = list(&output["diagnostics"])
        .iter()
        .find(|found| found["code"] == "not-open");
    assert!(note.is_some_and(|note| note["message"].to_string().contains("given_one")));
}

#[test]
fn formulas_of_one_phenomenon_are_its_own() {
    let output = answered(
        "scale X in m  scale A in m
        equation e: X as x = 2*A as a
        phenomenon small { scale A = 1 m }
        phenomenon large { scale A = 100 m }
        find X for small
        show X",
    );
    assert_eq!(answers_to(&output, "show").len(), 1);
    assert_eq!(answer(&output, "show", 0)["value"]["nominal"], 2.0);
    assert_eq!(codes(&output), ["open-scale"]);
}

/// Exact numbers meet exactly, in whatever way they are written: 3 terms, 1 point.
#[test]
fn a_point_where_three_terms_meet_is_one_candidate() {
    let output = answered(
        "scale X in m  constant k = 0.1 1/m  constant q = 1e3  constant c = 1e-30 m^-30
        equation e: (k*X)^3 as cube + c*X^30 as steep = q as one
        find X",
    );
    let found = candidates(&output);
    assert_eq!(found.len(), 1);
    assert_eq!(
        found[0]["largest_neglected"]
            .as_f64()
            .map(|share| share < 1.0),
        Some(true)
    );
    let output = answered(
        "scale X in m  constant k = 0.1 1/m  constant q = 1e3  constant c = 1e-57 m^-30
        equation e: (k*X)^3 as cube + c*X^30 as steep = q as one
        find X",
    );
    assert_eq!(
        candidates(&output)[0]["balances"]["e"],
        json!(["cube", "steep", "one"])
    );
}

/// Ends a search at its nth step.
struct Ender {
    steps: AtomicUsize,
    last: usize,
}

impl Watcher for Ender {
    fn goes_on(&self, _: usize) -> bool {
        self.steps.fetch_add(1, Ordering::Relaxed) + 1 < self.last
    }
}

#[test]
fn a_search_that_is_ended_keeps_the_answers_before_it() {
    let script = format!("{BASE}show A\nfind X\nshow B");
    let ender = Ender {
        steps: AtomicUsize::new(0),
        last: 1,
    };
    let outcome = Session::new()
        .with_watcher(&ender)
        .run("case.scl", &script, None);
    let output = report::json::outcome(&outcome);
    assert_eq!(codes(&output), ["interrupted"]);
    assert_eq!(answers_to(&output, "show").len(), 1);
    assert_eq!(answers_to(&output, "find").len(), 0);
}

#[test]
fn a_search_is_watched_step_by_step() {
    let script = "scale X in 1  equation e: X as x = 2 as two  find X";
    let ender = Ender {
        steps: AtomicUsize::new(0),
        last: usize::MAX,
    };
    let outcome = Session::new()
        .with_watcher(&ender)
        .run("case.scl", script, None);
    assert!(outcome.diagnostics.is_empty() && ender.steps.load(Ordering::Relaxed) > 0);
}
