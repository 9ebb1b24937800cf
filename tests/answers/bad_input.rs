//! Bad input ends in a clear error at the right place, never in a panic or a hang.

use serde_json::Value;

use crate::harness::{answers, list, read, schema_faults};

/// The errors of a script, as code and line.
fn errors(script: &str) -> Vec<(String, u64)> {
    let output = answers(script);
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    let found: Vec<(String, u64)> = list(&output["diagnostics"])
        .iter()
        .filter(|found| found["severity"] == "error")
        .map(|found| {
            let line = found["span"]["start"]["line"].as_u64().unwrap_or(0);
            (found["code"].as_str().unwrap_or("").to_owned(), line)
        })
        .collect();
    let is_invalid = output["outcome"] == "invalid";
    assert_eq!(is_invalid, !found.is_empty(), "{:#}", output["diagnostics"]);
    found
}

/// The script has this one error, on this line.
fn assert_error(script: &str, code: &str, line: u64) {
    assert_eq!(errors(script), [(code.to_owned(), line)], "{script}");
}

#[test]
fn five_mistakes_are_five_errors_each_at_its_line() {
    let found = errors(&read("inputs/five_mistakes.scl"));
    let expected = [
        ("unknown-unit", 2),
        ("range-upside-down", 3),
        ("unexpected-word", 4),
        ("unknown-name", 5),
        ("unlike-dimensions", 11),
    ];
    let expected: Vec<(String, u64)> = expected
        .map(|(code, line)| (code.to_owned(), line))
        .to_vec();
    assert_eq!(found, expected);
}

#[test]
fn nothing_to_answer_for_is_said() {
    assert_error("", "nothing-to-rank", 1);
    assert_error("# a comment alone\n", "nothing-to-rank", 1);
    assert_error("scale U = 1 m/s\n", "nothing-to-rank", 1);
    assert_error("scale U = 1 m/s\nrank\n", "nothing-to-rank", 2);
}

#[test]
fn values_that_make_no_sense_are_refused() {
    assert_error("scale U = 0 m/s\nshow U", "not-positive", 1);
    assert_error("scale U = -2 m/s\nshow U", "not-positive", 1);
    assert_error("scale U = 3 m/s .. 2 m/s\nshow U", "range-upside-down", 1);
    assert_error("scale U = 3 m/s within 0.5\nshow U", "range-upside-down", 1);
    assert_error("scale U = 3 +- 4 m/s\nshow U", "margin-too-wide", 1);
    assert_error("constant b = -1 m .. 1 m\nshow b", "range-holds-zero", 1);
    assert_error("scale U = 3 m/s +- 20 %\nshow U", "unlike-dimensions", 1);
    assert_error(
        "scale L = 3 m\nscale M = L within 2\nshow M",
        "derived-scale",
        2,
    );
    assert_error("tolerance 0 %\nshow 1", "not-positive", 1);
    assert_error("tolerance 100 %\nshow 1", "too-large", 1);
    assert_error(
        "scale A = 1 m\nscale B = 2 m\nscale D = A - B\nshow D",
        "not-positive",
        3,
    );
}

#[test]
fn zeros_below_the_line_are_refused() {
    assert_error(
        "constant c = 0\nscale U = 1 m/s\nscale V = U/c\nshow V",
        "divides-by-zero",
        3,
    );
    assert_error("constant c = 0\nshow 1/c", "divides-by-zero", 2);
    assert_error("show tan(90 deg)", "divides-by-zero", 1);
    assert_error("show 1/sin(180 deg)", "divides-by-zero", 1);
    assert_error(
        "constant c = 0\nscale L = 1 m\ncoordinate x ~ L\nfield u, v(x) ~ L\nequation a: u*d_x(u)/c = v",
        "divides-by-zero",
        5,
    );
}

#[test]
fn what_grows_beyond_the_limits_is_refused_at_once() {
    assert_error("scale U = 1 m/s\nshow U^1000001", "too-large", 2);
    assert_error("show 2^100000", "too-large", 1);
    assert_error("show 1e999", "too-large", 1);
    assert_error(
        "scale L = 1 m\ncoordinate x ~ L\nfield u, v(x) ~ L\nequation a: (u + v)^13 = u^13",
        "too-large",
        4,
    );
    assert_error(
        &format!("show {}1{}", "(".repeat(100_000), ")".repeat(100_000)),
        "too-deep",
        1,
    );
    assert_error(&format!("show {}1", "-".repeat(100_000)), "too-deep", 1);
    assert_error(&"# a line\n".repeat(200_000), "too-long", 116_509);
}

#[test]
fn a_megabyte_of_valid_statements_is_answered() {
    let mut script: String = (0..36_000)
        .map(|idx| format!("scale U_{idx} = {} m/s\n", idx + 1))
        .collect();
    script.push_str("show U_35999");
    let output = answers(&script);
    assert_eq!(output["outcome"], "ok");
    assert_eq!(output["answers"][0]["value"]["nominal"], 36_000.0);
}

#[test]
fn a_long_chain_of_definitions_is_followed_and_a_ring_told() {
    let mut script = "scale S_0 = 3 m\n".to_owned();
    script.extend((0..20_000).map(|idx| format!("scale S_{} = S_{idx}\n", idx + 1)));
    script.push_str("show S_20000");
    assert_eq!(answers(&script)["answers"][0]["value"]["nominal"], 3.0);
    assert_error(
        "scale A = B\nscale B = C\nscale C = A\nshow A",
        "circular-definition",
        1,
    );
    assert_error("group A = B\ngroup B = A\nshow 1", "circular-definition", 1);
}

#[test]
fn names_and_units_that_are_not_there_come_with_a_suggestion() {
    let help = |script: &str| -> String {
        let output = answers(script);
        output["diagnostics"][0]["help"]
            .as_str()
            .unwrap_or("")
            .to_owned()
    };
    assert_error("scale Umax = 1 m/s\nshow Umx", "unknown-name", 2);
    assert_eq!(help("scale Umax = 1 m/s\nshow Umx"), "did you mean `Umax`?");
    assert_error("scale U = 10 mps\nshow U", "unknown-unit", 1);
    assert_eq!(help("scale U = 10 mps\nshow U"), "write `m/s`");
    assert_error("use atmosphere.momentun\nshow 1", "unknown-module", 1);
    assert_eq!(
        help("use atmosphere.momentun\nshow 1"),
        "did you mean `atmosphere.momentum`?"
    );
    assert_error("scale L = 1 m\nshow L(2)", "unknown-name", 2);
    assert_eq!(
        help("scale L = 1 m\nshow L(2)"),
        "for a product write `L*(...)`"
    );
    for (script, mend) in [
        (
            "show 1000 hPa/standard_pressure(5 km)",
            "1000 hPa / standard_pressure(...)",
        ),
        ("show 10 kg.m.sqrt(4)", "10 kg.m * sqrt(...)"),
    ] {
        let found = help(script);
        assert_eq!(found, format!("a unit ends at a blank: write `{mend}`"));
    }
    assert_eq!(
        answers("show 10 kg.m * sqrt(4)")["answers"][0]["value"]["nominal"],
        20.0
    );
    assert_eq!(help("show 10 m/s(4)"), "write `10*m/s` for a product");
    assert_error("show 1 for nobody", "unknown-phenomenon", 1);
    assert_error("rank momentum", "unknown-equation", 1);
}

#[test]
fn an_open_scale_is_named_with_the_way_to_give_it() {
    let script = "scale L in km\nscale U = 1 m/s\ncoordinate x ~ L\nfield u(x) ~ U\nequation a: u*d_x(u) = U^2/L\nrank";
    assert_error(script, "open-scale", 6);
    let output = answers(script);
    let message = output["diagnostics"][0]["message"].as_str().unwrap_or("");
    assert!(message.contains("`L`"), "{message}");
}

#[test]
fn an_equation_with_an_open_scale_is_left_out_of_a_request_for_all() {
    let script = "scale L in km\nscale M = 1 m\nscale U = 1 m/s\ncoordinate x ~ L\ncoordinate y ~ M\nfield u(x, y) ~ U
equation a: u*d_x(u) = U^2/L\nequation b: u*d_y(u) = U^2/M\nrank";
    let output = answers(script);
    assert_eq!(output["outcome"], "ok");
    let answer = &output["answers"][0];
    assert_eq!(answer["left_out"][0]["equation"], "a");
    assert_eq!(answer["left_out"][0]["open"][0], "L");
    assert_eq!(list(&answer["equations"]).len(), 1);
}

#[test]
fn an_equation_with_one_term_is_refused() {
    let head = "scale L = 1 m\ncoordinate x ~ L\nfield u(x) ~ L\n";
    assert_error(&format!("{head}equation a: d_x(u) = 0"), "one-term", 4);
    assert_error(&format!("{head}equation a: 0 = 0"), "one-term", 4);
}

#[test]
fn the_fault_of_one_request_leaves_the_others_answered() {
    let output = answers("scale U in m/s\nscale V = 2 m/s\nshow U\nshow V");
    assert_eq!(output["outcome"], "invalid");
    assert_eq!(list(&output["answers"]).len(), 1);
    assert_eq!(output["answers"][0]["value"]["nominal"], 2.0);
}

#[test]
fn what_a_later_version_answers_is_refused_at_its_place() {
    let output = answers("scale U = 1 m/s\nsweep U from 1 m/s to 2 m/s");
    let found: &Value = &output["diagnostics"][0];
    assert_eq!(found["code"], "not-available");
    assert_eq!(found["span"]["start"]["line"], 2);
}
