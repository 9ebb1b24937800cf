//! What holds for every script: it is drawn at random, and one thing about it is changed.

mod script;

use std::collections::BTreeMap;

use proptest::prelude::*;
use serde_json::Value;

use self::script::{Script, scripts};
use crate::harness::{answers, answers_to, list, schema_faults, sorted_texts, text};

/// The answers to a script that must be valid.
fn valid(script: &str) -> Value {
    let output = answers(script);
    assert_ne!(
        output["outcome"], "invalid",
        "{script}\n{}",
        output["diagnostics"]
    );
    output
}

/// The terms of every equation, as `rank` gives them.
fn ranked(output: &Value) -> Vec<&Value> {
    let equations = list(&answers_to(output, "rank")[0]["equations"]);
    equations
        .iter()
        .flat_map(|equation| list(&equation["terms"]))
        .collect()
}

fn is_near(found: &Value, expected: &Value) -> bool {
    match (found.as_f64(), expected.as_f64()) {
        (Some(found), Some(expected)) => (found - expected).abs() <= 1e-9 * expected.abs(),
        (Some(_), None) | (None, Some(_)) | (None, None) => found == expected,
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 96, ..ProptestConfig::default() })]

    #[test]
    fn other_units_change_no_verdict(script in scripts()) {
        let plain = valid(&script.text(&Script::SI));
        // The same numbers, read in other units throughout: another flow, similar to the
        // first. The same sizes, written with other prefixes: the same flow.
        for units in [Script::IMPERIAL, Script::PREFIXED] {
            let other = valid(&script.text(&units));
            for (term, found) in ranked(&plain).into_iter().zip(ranked(&other)) {
                prop_assert_eq!(&term["verdict"], &found["verdict"]);
                for end in ["low", "nominal", "high"] {
                    prop_assert!(is_near(&found["share"][end], &term["share"][end]), "{}\n{}", term, found);
                }
                if units == Script::PREFIXED {
                    prop_assert!(is_near(&found["size"]["nominal"], &term["size"]["nominal"]));
                }
            }
            prop_assert_eq!(texts_of_kept(&plain), texts_of_kept(&other));
        }
    }

    #[test]
    fn renaming_changes_names_only(script in scripts()) {
        let text = script.text(&Script::SI);
        let renamed = in_other_names(&text);
        prop_assert_ne!(&text, &renamed);
        let found = valid(&renamed).to_string();
        prop_assert_eq!(in_other_names(&valid(&text).to_string()), found);
    }

    #[test]
    fn a_tightened_tolerance_drops_no_more(script in scripts(), first in 1..60_u32, second in 1..60_u32) {
        let (tight, wide) = (first.min(second), first.max(second));
        let dropped = |percent: u32| {
            let text = format!("{}tolerance {percent} %\n", script.text(&Script::SI));
            texts_of(&valid(&text), "dropped")
        };
        let wide = dropped(wide);
        for (equation, texts) in dropped(tight) {
            for text in texts {
                prop_assert!(wide[&equation].contains(&text), "{}", text);
            }
        }
    }

    #[test]
    fn shares_lie_between_0_and_1_and_the_largest_is_1(script in scripts()) {
        let output = valid(&script.text(&Script::SI));
        prop_assert_eq!(schema_faults(&output), Vec::<String>::new());
        for equation in list(&answers_to(&output, "rank")[0]["equations"]) {
            let shares: Vec<[f64; 3]> = list(&equation["terms"])
                .iter()
                .map(|term| ["low", "nominal", "high"].map(|end| term["share"][end].as_f64().unwrap()))
                .collect();
            for [low, nominal, high] in &shares {
                prop_assert!(0.0 < *low && low <= nominal && nominal <= high && *high <= 1.0);
            }
            let largest = shares.iter().map(|[_, nominal, _]| *nominal).fold(0.0, f64::max);
            prop_assert_eq!(largest, 1.0);
        }
    }

    #[test]
    fn the_output_is_the_same_from_run_to_run(script in scripts()) {
        let text = script.text(&Script::SI);
        let run = || {
            let outcome = scalewright::Session::new().run("case.scl", &text, None);
            let json = scalewright::report::json::outcome(&outcome).to_string();
            (json, scalewright::report::text::report(&outcome, false))
        };
        prop_assert_eq!(run(), run());
    }

    #[test]
    fn reports_fit_a_terminal(script in scripts()) {
        let outcome = scalewright::Session::new().run("case.scl", &script.text(&Script::SI), None);
        for line in scalewright::report::text::report(&outcome, false).lines() {
            // A word that fits no line stands alone.
            let words = line.split_whitespace().count();
            prop_assert!(line.chars().count() <= 80 || words <= 1, "{}", line);
        }
    }
}

fn texts_of_kept(output: &Value) -> BTreeMap<String, Vec<String>> {
    texts_of(output, "kept")
}

/// The texts of the kept or dropped terms, by equation.
fn texts_of(output: &Value, field: &str) -> BTreeMap<String, Vec<String>> {
    let equations = list(&answers_to(output, "reduce")[0]["equations"]);
    equations
        .iter()
        .map(|equation| {
            let texts = list(&equation[field])
                .iter()
                .map(|term| text(&term["text"]));
            let texts: Value = texts.collect::<Vec<_>>().into();
            (text(&equation["name"]), sorted_texts(&texts))
        })
        .collect()
}

/// Every name of the scripts in the same number of other letters; words of the language and
/// of the answers stay, since no name of the scripts is one of them.
fn in_other_names(text: &str) -> String {
    script::NAMES.iter().fold(text.to_owned(), |text, name| {
        let other: String = name
            .chars()
            .map(|c| if c == 'q' { 'j' } else { c })
            .collect();
        text.replace(name, &other)
    })
}
