//! `compare`.

use serde_json::{Value, json};

use super::{answer, errors, near, report};
use crate::harness::{answers, answers_to, entry, list};

/// An eddy in a bay and in a turning tank.
const EDDIES: &str = "
scale U in m/s   scale L in m   scale H in m
constant f in 1/s   constant nu = 1e-6 m^2/s   constant g = 9.80665 m/s^2
group Ro = U/(f*L)
group Fr = U/sqrt(g*H)
group steep = H/L
group Re = U*L/nu
phenomenon tank { scale U = 5 cm/s  scale L = 20 cm  scale H = 10 cm  constant f = 1 1/s }
phenomenon bay { scale U = 20 cm/s  scale L = 20 km  scale H = 40 m  constant f = 1e-4 1/s }
phenomenon gulf { scale U = 21 cm/s  scale L = 20 km  scale H = 42 m  constant f = 1e-4 1/s }
";

fn with(more: &str) -> String {
    format!("{EDDIES}{more}\n")
}

fn matching(groups: &str) -> Value {
    answer(
        &with(&format!("compare tank, bay matching {groups}")),
        "compare",
    )["matching"]
        .clone()
}

fn changes(matching: &Value) -> Vec<(String, f64)> {
    list(&matching["changes"])
        .iter()
        .map(|change| {
            let factor = change["factor"].as_f64().unwrap_or(f64::NAN);
            (change["scale"].as_str().unwrap_or("").to_owned(), factor)
        })
        .collect()
}

#[test]
fn groups_match_within_the_tolerance() {
    let comparison = answer(&with("compare bay, gulf"), "compare");
    assert_eq!(comparison["phenomenon"], Value::Null);
    assert_eq!(comparison["phenomena"], json!(["bay", "gulf"]));
    assert_eq!(entry(&comparison["groups"], "name", "Ro")["match"], true);
    let strict = answer(&with("tolerance 4 %  compare bay, gulf"), "compare");
    assert_eq!(entry(&strict["groups"], "name", "Ro")["match"], false);
    assert_eq!(entry(&strict["groups"], "name", "Fr")["match"], true);
    assert_eq!(comparison["matching"], Value::Null);
}

#[test]
fn one_group_takes_one_scale() {
    // Ro is 0.25 in the tank, 0.1 in the bay: U by 0.4, or L by 2.5, as far; U is first.
    let found = matching("Ro");
    let changes = changes(&found);
    assert_eq!(found["possible"], true);
    assert_eq!(changes.len(), 1);
    assert_eq!(changes[0].0, "U");
    near(&json!(changes[0].1), 0.4, 1e-12);
}

#[test]
fn matched_groups_are_those_of_the_other() {
    let found = matching("Ro, Fr");
    let mut script = with("compare tank, bay");
    for (scale, factor) in changes(&found) {
        let (old, unit) = match scale.as_str() {
            "U" => (5.0, "cm/s"),
            "L" => (20.0, "cm"),
            _ => (10.0, "cm"),
        };
        let new = format!("scale {scale} = {:e} {unit}", old * factor);
        script = script.replacen(&format!("scale {scale} = {old} {unit}"), &new, 1);
    }
    let comparison = answer(&script, "compare");
    for group in ["Ro", "Fr"] {
        let values = &entry(&comparison["groups"], "name", group)["values"];
        let bay = values[1]["nominal"].as_f64().unwrap_or(f64::NAN);
        near(&values[0]["nominal"], bay, 1e-12);
    }
    assert_eq!(list(&found["changes"]).len(), 2);
}

#[test]
fn groups_that_match_need_no_change() {
    let found = answer(&with("compare bay, gulf matching Ro, Fr"), "compare");
    assert_eq!(
        found["matching"],
        json!({ "possible": true, "changes": [], "conflict": [] })
    );
}

#[test]
fn groups_in_conflict_are_named() {
    // Four conditions on three scales.
    let script = with("compare tank, bay matching Ro, Fr, steep, Re");
    let output = answers(&script);
    assert_eq!(output["outcome"], "invalid");
    let found = &answers_to(&output, "compare")[0]["matching"];
    assert_eq!(found["possible"], false);
    assert_eq!(found["changes"], json!([]));
    assert_eq!(found["conflict"], json!(["Ro", "Fr", "steep", "Re"]));
    let found = errors(&script);
    assert_eq!(found.len(), 1);
    assert_eq!(found[0].0, "cannot-match");
    assert!(
        found[0]
            .1
            .contains("`Ro`, `Fr`, `steep`, `Re` cannot be matched together")
    );
    assert!(report(&script).contains("cannot be matched together by scales of tank alone"));
}

#[test]
fn a_group_of_constants_cannot_be_matched() {
    let script = with("constant k in 1  group K = k  compare tank, bay matching Ro, K")
        .replace("phenomenon tank {", "phenomenon tank { constant k = 1")
        .replace("phenomenon bay {", "phenomenon bay { constant k = 2")
        .replace("phenomenon gulf {", "phenomenon gulf { constant k = 2");
    let output = answers(&script);
    let found = &answers_to(&output, "compare")[0]["matching"];
    assert_eq!(found["conflict"], json!(["K"]));
    assert_eq!(errors(&script)[0].0, "cannot-match");
}

#[test]
fn others_that_disagree_cannot_both_be_met() {
    let script = with("tolerance 1 %  compare tank, bay, gulf matching Ro");
    assert_eq!(errors(&script)[0].0, "cannot-match");
    // Within 10 % they agree, and the middle of them is met.
    let found = answer(&with("compare tank, bay, gulf matching Ro"), "compare");
    let changes = changes(&found["matching"]);
    near(&json!(changes[0].1), 0.4 * 1.05f64.sqrt(), 1e-12);
}

#[test]
fn bad_names_are_refused() {
    let code = |request: &str| errors(&with(request))[0].0.clone();
    assert_eq!(code("compare tank, lake"), "unknown-phenomenon");
    assert_eq!(code("compare tank, bay matching Rx"), "unknown-name");
    assert_eq!(code("compare tank, bay matching U"), "unexpected-word");
    let open = with("scale Q in m  group q = Q/L  compare tank, bay matching q");
    assert_eq!(errors(&open)[0].0, "open-scale");
}

#[test]
fn an_open_group_is_left_out() {
    let script = with("scale Q in m  group q = Q/L  compare tank, bay");
    let comparison = answer(&script, "compare");
    assert_eq!(entry(&comparison["groups"], "name", "q"), &Value::Null);
    assert_eq!(list(&comparison["groups"]).len(), 4);
}

#[test]
fn terms_stand_side_by_side() {
    let script = "
        scale U in m/s  scale L in m  constant f in 1/s  scale T = L/U
        coordinate x ~ L  coordinate t ~ T  field u, v(x, t) ~ U
        equation m: d_t(u) as tendency - f*v as coriolis = 1e-3*u as drag*1
        balance inertial: m { tendency, coriolis }
        phenomenon still { scale U = 1 m/s  scale L = 1 km  constant f = 0 1/s }
        phenomenon turning { scale U = 1 m/s  scale L = 10 km  constant f = 1e-4 1/s }
        compare still, turning";
    let script = script
        .replace("1e-3*u as drag*1", "1e-6*U*1e0 as drag")
        .replace("1e-6*U*1e0", "R");
    let script = script.replace(
        "constant f in 1/s",
        "constant f in 1/s  scale R = 1e-6 m/s^2",
    );
    let comparison = answer(&script, "compare");
    let equation = entry(&comparison["equations"], "name", "m");
    let coriolis = entry(&equation["terms"], "process", "coriolis");
    near(&coriolis["shares"][0]["nominal"], 0.0, 0.0);
    assert_eq!(coriolis["verdicts"], json!(["drops", "leads"]));
    near(&coriolis["sizes"][1]["nominal"], 1e-4, 1e-12);
    assert_eq!(equation["balances"], json!([null, "inertial"]));
    assert_eq!(
        equation["reduced"],
        json!(["d_t(u) = 0", "d_t(u) - f*v = 0"])
    );
    let text = report(&script);
    assert!(text.contains("not there"), "{text}");
    assert!(text.contains("turning: d_t(u) - f*v = 0"), "{text}");
}

#[test]
fn an_equation_open_in_one_of_them_is_left_out() {
    let script = with(
        "scale Q in m  field q ~ Q
        equation e: q as a + L*q/L as b = q as c
        compare tank, bay",
    );
    let comparison = answer(&script, "compare");
    assert_eq!(comparison["equations"], json!([]));
    assert_eq!(
        comparison["left_out"],
        json!([{ "equation": "e", "open": ["Q"] }])
    );
}

#[test]
fn many_phenomena_fit_a_terminal() {
    let mut script = "scale U in m/s  scale L in m  constant f = 1e-4 1/s
        field u ~ U  scale G = f*U  group Ro = U/(f*L)
        equation e: f*u as coriolis + u*U/L as advection = G as pressure\n"
        .to_owned();
    let names: Vec<String> = (1..=9)
        .map(|idx| format!("a_rather_long_phenomenon_{idx}"))
        .collect();
    for (idx, name) in names.iter().enumerate() {
        let value = idx + 1;
        script += &format!(
            "phenomenon {name} {{ scale U = {value} m/s within 3 scale L = {value}00 km }}\n"
        );
    }
    script += &format!("compare {}\n", names.join(", "));
    let text = report(&script);
    // The name of the ninth is cut to its column, but its values stand there.
    assert!(text.contains("900 km"), "{text}");
    assert_eq!(text.matches("match").count(), 2, "{text}");
}
