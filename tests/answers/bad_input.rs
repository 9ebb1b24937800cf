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

/// What is said of a script, as code, message and help.
fn said(script: &str) -> Vec<[String; 3]> {
    let output = answers(script);
    let text = |found: &Value, field: &str| found[field].as_str().unwrap_or("").to_owned();
    list(&output["diagnostics"])
        .iter()
        .map(|found| ["code", "message", "help"].map(|field| text(found, field)))
        .collect()
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
fn a_name_that_is_also_a_unit_is_to_be_declared_and_told_once() {
    let found = said("scale U = H/T\nscale W = H/T\nshow U/H");
    let helps: Vec<(&str, &str)> = found
        .iter()
        .map(|[_, message, help]| (message.as_str(), help.as_str()))
        .collect();
    let expected = [
        (
            "nothing declares `H`",
            "declare it, as in `scale H = 10 m`, or check its spelling",
        ),
        (
            "nothing declares `T`",
            "declare it, as in `scale T = 10 s`, or check its spelling",
        ),
    ];
    assert_eq!(helps, expected);
    let help = |script: &str| said(script)[0][2].clone();
    assert_eq!(help("scale Ha = 1 m\nshow 2*H"), "did you mean `Ha`?");
    assert_eq!(
        help("scale L = 1 m\ncoordinate x ~ L\nfield u(x) ~ L\nequation a: u = h"),
        "declare it as a field, a scale or a constant, or check its spelling"
    );
    assert!(help("find W").contains("`scale W in UNIT`"));
}

#[test]
fn a_unit_with_blanks_around_its_signs_is_spelt_as_one() {
    let help = |script: &str| said(script)[0][2].clone();
    let unit = |name: &str, whole: &str| {
        format!("for the unit `{name}` write `{whole}`: a unit has no blank inside")
    };
    assert_eq!(help("show 10 m / s"), unit("s", "10 m/s"));
    assert_eq!(help("show 10 m / s^2"), unit("s", "10 m/s^2"));
    assert_eq!(help("show 10 J / kg / K"), unit("kg", "10 J/(kg.K)"));
    assert_eq!(help("show 10 kg * m"), unit("m", "10 kg.m"));
    let declared = help("scale s = 1 m\nshow 10 m / s / T");
    assert!(declared.contains("`scale T = 10 s`"), "{declared}");
    let bare = help("show 2*T");
    assert!(bare.contains("`scale T = 10 s`"), "{bare}");
}

const SPLIT: &str = "scale L = 1 m\nscale U = 1 m/s\ncoordinate x, z ~ L\nfield u, w_m(x, z) ~ U
fluctuation w'(x, z) ~ U\nfield w = w_m + w'\nequation A: u*d_z(w) + u*d_x(u) = 0\n";

#[test]
fn a_split_field_on_the_left_of_a_relation_is_named_with_its_parts() {
    let script = format!("{SPLIT}equation vol: d_z(w) = -d_x(u)\nequation B from A using vol");
    assert_error(&script, "not-a-product", 8);
    let [_, message, help] = &said(&script)[0];
    assert_eq!(
        message,
        "`w` on the left of `vol` is a sum of its parts `w_m`, `w'`"
    );
    assert!(help.contains("`w'` in place of `w`"), "{help}");
    let mended = script.replace("vol: d_z(w) = -d_x(u)", "vol: d_z(w') = -d_x(u) - d_z(w_m)");
    let output = answers(&mended);
    assert_eq!(output["diagnostics"][0]["code"], "one-term");
}

#[test]
fn a_relation_that_replaces_nothing_is_warned_of() {
    let script = format!("{SPLIT}equation C: d_z(u) = d_x(w_m)\nequation B from A using C");
    let found = said(&script);
    let [code, message, _] = &found[0];
    assert_eq!(
        (found.len(), code.as_str(), message.as_str()),
        (
            1,
            "nothing-replaced",
            "`C` replaces nothing in `B`: `d_z(u)` does not occur there"
        )
    );
    assert_eq!(answers(&script)["outcome"], "ok");
    let used = script.replace("C: d_z(u) = d_x(w_m)", "C: d_x(u) = d_z(u)");
    assert_eq!(said(&used), Vec::<[String; 3]>::new());
}

#[test]
fn a_relation_used_in_one_component_alone_is_used() {
    let script = "scale L = 1 m\nscale U = 1 m/s\nconstant c = 1 m/s
coordinate x, y, z ~ L\nframe cartesian (x, y, z)\nfield u, v, w(x, y, z) ~ U\nvector V = (u, v, w)
equation m: dot(V, V)*V = c^2*L*curl(V)\nequation r: d_y(w) = d_z(w)\nequation n from m*c using r\n";
    let codes = |script: &str| -> Vec<String> {
        let found = said(script).into_iter();
        found.map(|[code, ..]| code).collect()
    };
    assert_eq!(codes(script), Vec::<String>::new());
    let idle = script.replace("r: d_y(w) =", "r: d_x(u) =");
    assert_eq!(codes(&idle), ["nothing-replaced"]);
}

#[test]
fn a_field_that_is_a_part_of_itself_is_told_how_to_name_the_part() {
    let head = "scale L = 1 m\ncoordinate x ~ L\nfield p_b(x) ~ L\n";
    let script = format!("{head}field p = p_b + p\nshow L");
    assert_error(&script, "circular-definition", 4);
    assert_eq!(said(&script)[0][2], "give the part another name, as `p'`");
}

#[test]
fn a_function_of_a_vector_that_is_not_there_comes_with_a_suggestion() {
    let script = "scale L = 1 m\ncoordinate x, y, z ~ L\nframe cartesian (x, y, z)
field a, b, c(x, y, z) ~ L\nvector u = (a, b, c)\nequation m: u = L^2*lap(u) + L^2*lap(u)";
    assert_error(script, "unknown-name", 6);
    let [_, message, help] = &said(script)[0];
    assert_eq!(message, "there is no function `lap`");
    assert_eq!(help, "did you mean `laplacian`?");
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
