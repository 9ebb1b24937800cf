//! Random splits and expansions: what `rank` and `expand` make of them, term by term.

use serde_json::Value;

use crate::harness::{Tally, answers, answers_to, list, read_records, sorted_map, text};

#[test]
fn splits_and_expansions() {
    let mut tally = Tally::default();
    for record in read_records("reference/expansions.json") {
        tally.begin(&text(&record["case"]));
        let output = answers(&text(&record["script"]));
        if output["outcome"] != "ok" {
            tally.fault(format!(
                "{}\n{}",
                output["diagnostics"],
                text(&record["script"])
            ));
            continue;
        }
        compare_ranked(&mut tally, &record, &output);
        compare_orders(&mut tally, &record, &output);
    }
    tally.finish("reference, expansions", 220, 1_000);
}

/// All terms of a written term stand together, in no order.
fn compare_ranked(tally: &mut Tally, record: &Value, output: &Value) {
    let answer = answers_to(output, "rank");
    let terms = list(&answer[0]["equations"][0]["terms"]);
    let found: Vec<String> = terms.iter().map(ranked_text).collect();
    let mut at = 0;
    for written in list(&record["ranked"]) {
        let expected: Vec<String> = list(written).iter().map(text).collect();
        let end = (at + expected.len()).min(found.len());
        let mut own = found[at.min(end)..end].to_vec();
        own.sort();
        tally.same("ranked", own, expected);
        at = end;
    }
    tally.same("ranked terms", at, found.len());
}

fn ranked_text(term: &Value) -> String {
    let powers = sorted_map(&term["exponents"]);
    let powers = powers
        .iter()
        .map(|(name, power)| format!(" {name}^{}", text(power)));
    let powers: String = powers.collect();
    format!("{}{powers}", text(&term["number"]))
}

fn compare_orders(tally: &mut Tally, record: &Value, output: &Value) {
    let answer = answers_to(output, "expand");
    let orders = list(&answer[0]["orders"]);
    let expected = sorted_map(&record["orders"]);
    let filled = orders
        .iter()
        .filter(|order| !list(&order["equations"]).is_empty());
    tally.same("orders", filled.count(), expected.len());
    for (order, expected) in expected {
        let found = orders.iter().find(|found| found["order"] == *order);
        let terms = found.map_or(&[][..], |found| list(&found["equations"][0]["terms"]));
        let mut found: Vec<String> = terms.iter().map(ordered_text).collect();
        found.sort();
        let expected: Vec<String> = list(expected).iter().map(text).collect();
        tally.same(&format!("order {order}"), found, expected);
    }
}

fn ordered_text(term: &Value) -> String {
    let groups = sorted_map(&term["groups"]);
    let groups = groups
        .iter()
        .map(|(name, power)| format!("{name}^{}", text(power)));
    let mut factors: Vec<String> = list(&term["factors"])
        .iter()
        .map(|factor| {
            let (field, order) = (text(&factor["field"]), text(&factor["order"]));
            format!("{field}@{order}^{}", text(&factor["power"]))
        })
        .collect();
    factors.sort();
    let mut parts = vec![text(&term["side"]), text(&term["number"])];
    parts.extend(groups);
    parts.extend(factors);
    parts.join(" ")
}
