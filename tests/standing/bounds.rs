//! `bounds`.

use std::collections::BTreeSet;

use serde_json::Value;

use super::{answer, errors, near, report};
use crate::harness::{answers, answers_to, entry, list, read, read_records, text};

/// A flow whose Rossby number is 0.05 at the nominal values.
const FLOW: &str = "
scale U = 10 m/s   scale L = 2000 km   scale T = L/U
constant f = 1e-4 1/s
scale G = f*U
coordinate x ~ L   coordinate t ~ T
field u, v(x, t) ~ U
equation momentum: d_t(u) as tendency - f*v as coriolis = G as pressure_gradient
group Ro = U/(f*L)
";

fn with(more: &str) -> String {
    format!("{FLOW}{more}\n")
}

fn ender(end: &Value) -> String {
    format!("{}.{}", text(&end["equation"]), text(&end["term"]))
}

#[test]
fn first_page() {
    let bounds = answer(&read("inputs/first_page_whole.scl"), "bounds");
    let of = |name: &str| entry(&bounds["scales"], "name", name).clone();
    let (length, speed) = (of("L"), of("U"));
    near(&length["low"], 969.6868209e3, 1e-10);
    near(&length["high"], 8080.7235e3, 1e-8);
    near(&speed["low"], 0.788597866, 1e-9);
    near(&speed["high"], 10.56727858, 1e-9);
    assert_eq!(ender(&length["limited_by"]["low"]), "x_momentum.tendency");
    assert_eq!(
        ender(&length["limited_by"]["high"]),
        "x_momentum.pressure_gradient"
    );
    assert_eq!(ender(&speed["limited_by"]["low"]), "x_momentum.coriolis");
    assert_eq!(ender(&speed["limited_by"]["high"]), "x_momentum.tendency");
    // Both lie equally near in the logarithm; L is listed first.
    assert_eq!(bounds["nearest"]["scale"], "L");
    near(&bounds["nearest"]["factor"], 0.9463174, 1e-7);
    assert_eq!(bounds["whole_box"], false);
    assert_eq!(bounds["fails_first"]["text"], "Ro <= 0.1");
    near(&bounds["fails_first"]["range"]["high"], 0.277053377, 1e-8);
    let is_out = |term: &str| {
        let is_it = |found: &Value| found["equation"] == "x_momentum" && found["term"] == term;
        list(&bounds["dropped"]).iter().any(is_it)
    };
    assert!(is_out("tendency") && is_out("advection") && !is_out("coriolis"));
}

/// Puts the end of each interval back into the script that it came from.
#[test]
fn an_end_put_back_sits_at_the_tolerance() {
    let mut n_ends = 0;
    for record in read_records("reference/bounds.json").iter().step_by(6) {
        let script = text(&record["script"]);
        let bounds = answer(&script, "bounds");
        for scale in list(&bounds["scales"]) {
            for interval in [scale, &scale["unchanged"]] {
                for side in ["low", "high"] {
                    if !interval[side].is_null() {
                        let moved = moved(&script, &text(&scale["name"]), &interval[side]);
                        let end = &interval["limited_by"][side];
                        at_the_tolerance(&moved, end, &bounds["dropped"]);
                        n_ends += 1;
                    }
                }
            }
        }
    }
    assert!(n_ends > 400, "{n_ends} ends");
}

/// The script with another value of one scale and without its `bounds`.
fn moved(script: &str, scale: &str, value: &Value) -> String {
    let lines = script.lines().map(|line| {
        if line.starts_with(&format!("scale {scale} =")) {
            format!(
                "scale {scale} = {:e}",
                value.as_f64().expect("an end is a number")
            )
        } else if line.starts_with("bounds") {
            "rank".to_owned()
        } else {
            line.to_owned()
        }
    });
    lines.collect::<Vec<String>>().join("\n")
}

/// A term of the one that ends the interval has exactly the tolerance as its share of the
/// largest kept term.
fn at_the_tolerance(script: &str, end: &Value, dropped: &Value) {
    let output = answers(script);
    let rank = answers_to(&output, "rank")[0];
    let equation = entry(&rank["equations"], "name", &text(&end["equation"]));
    let tolerance = equation["tolerance"].as_f64().expect("a tolerance");
    let out: BTreeSet<String> = list(dropped)
        .iter()
        .filter(|found| found["equation"] == end["equation"])
        .map(|found| text(&found["text"]))
        .collect();
    let size = |term: &Value| term["size"]["nominal"].as_f64().expect("a size");
    let kept = list(&equation["terms"])
        .iter()
        .filter(|term| !out.contains(&text(&term["text"])));
    let largest = kept.map(size).fold(0.0, f64::max);
    let off = list(&equation["terms"])
        .iter()
        .filter(|term| term["process"] == end["term"])
        .map(|term| (size(term) / (tolerance * largest) - 1.0).abs())
        .fold(f64::INFINITY, f64::min);
    assert!(
        off < 1e-12,
        "{end} misses the tolerance by {off:e} in\n{script}"
    );
}

#[test]
fn an_end_is_in_the_system() {
    // At the end itself the tendency still drops; a hair beyond it does not.
    let at = |length: f64| {
        let script = with("rank").replace("2000 km", &format!("{length:e} m"));
        let ranked = answer(&script, "rank");
        let terms = &entry(&ranked["equations"], "name", "momentum")["terms"];
        text(&entry(terms, "process", "tendency")["verdict"])
    };
    let bounds = answer(&with("bounds L"), "bounds");
    let low = bounds["scales"][0]["low"].as_f64().expect("it ends below");
    assert_eq!(at(low), "drops");
    assert_eq!(at(low * (1.0 - 1e-9)), "leads");
}

#[test]
fn conditions_are_inequalities_between_groups() {
    let bounds = answer(&with("bounds"), "bounds");
    let conditions = list(&bounds["conditions"]);
    // The ratio of the two kept terms is a number: no scale could change it.
    assert_eq!(conditions.len(), 1);
    assert_eq!(conditions[0]["text"], "Ro <= 0.1");
    assert_eq!(conditions[0]["holds"], true);
    near(&conditions[0]["value"], 0.05, 1e-14);
    let names: Vec<String> = list(&bounds["scales"])
        .iter()
        .map(|scale| text(&scale["name"]))
        .collect();
    assert_eq!(names, ["U", "L", "f"]);
    assert_eq!(bounds["nearest"]["scale"], "U");
    near(&bounds["nearest"]["factor"], 2.0, 1e-14);
    assert!(
        report(&with("bounds"))
            .contains("U may grow by 2 (to 20 m/s), then tendency matters in momentum")
    );
}

#[test]
fn a_kept_term_that_depends_has_its_condition() {
    // Nominally Ro is 0.2 and the tendency kept; over the range it may go.
    let script = with("bounds").replace("2000 km", "500 km within 4");
    let bounds = answer(&script, "bounds");
    let condition = entry(&bounds["conditions"], "term", "tendency");
    assert_eq!(condition["text"], "Ro <= 0.1");
    assert_eq!(condition["holds"], false);
    assert_eq!(list(&bounds["dropped"]).len(), 0);
    assert_eq!(bounds["whole_box"], true);
    let text = report(&script);
    let (_, may_go) = text
        .split_once("more may go where")
        .expect("it is told apart");
    assert!(
        may_go.contains("then tendency of momentum may go"),
        "{text}"
    );
}

#[test]
fn the_box_may_be_too_wide() {
    let wide = |range: &str| answer(&with("bounds").replace("2000 km", range), "bounds");
    assert_eq!(wide("2000 km within 1.9")["whole_box"], true);
    let too_wide = wide("2000 km within 2.1");
    assert_eq!(too_wide["whole_box"], false);
    assert_eq!(too_wide["fails_first"]["term"], "tendency");
    assert_eq!(wide("2000 km within 2")["whole_box"], true, "the end is in");
}

#[test]
fn the_condition_that_fails_first_lies_nearest_in_the_box() {
    // p reaches the tolerance at A = 5, q already at B = 3; A ranges further.
    let script = "scale A = 1 .. 100   scale B = 1 .. 10   field s ~ 1
        equation e: s as a + s as b = 0.02/10*A*s as p + 0.1/3/sqrt(10)*B*s as q   bounds";
    let bounds = answer(script, "bounds");
    assert_eq!(bounds["fails_first"]["term"], "p");
    assert_eq!(bounds["whole_box"], false);
}

#[test]
fn a_derived_scale_names_its_parts() {
    let found = errors(&with("bounds T"));
    assert_eq!(found.len(), 1);
    assert_eq!(found[0].0, "derived-scale");
    assert!(found[0].1.contains("`U`, `L`"), "{}", found[0].1);
}

#[test]
fn a_part_of_a_function_names_the_symbol_to_take() {
    let script = with("bounds phi").replace(
        "constant f = 1e-4 1/s",
        "constant Omega = 7e-5 1/s  constant phi = 45 deg  constant f = 2*Omega*sin(phi)",
    );
    let found = errors(&script);
    assert_eq!(found[0].0, "not-a-product");
    assert!(found[0].1.contains("take `f` instead"), "{}", found[0].1);
    let bounds = answer(&script.replace("bounds phi", "bounds"), "bounds");
    let names: Vec<String> = list(&bounds["scales"])
        .iter()
        .map(|scale| text(&scale["name"]))
        .collect();
    assert_eq!(names, ["U", "L", "f"]);
}

#[test]
fn a_part_of_an_unnamed_function_asks_for_a_name() {
    let script = "scale A = 1  constant phi = 30 deg  field s ~ A
        equation e: s as a + s*tan(phi) as b = s as c  bounds phi";
    let found = errors(script);
    assert_eq!(found[0].0, "not-a-product");
    assert!(
        found[0].1.contains("`constant k = tan(phi)`"),
        "{}",
        found[0].1
    );
}

#[test]
fn what_is_no_scale_is_refused() {
    let code = |names: &str| errors(&with(&format!("bounds {names}")))[0].0.clone();
    assert_eq!(code("Q"), "unknown-name");
    assert_eq!(code("u"), "unexpected-word");
    assert_eq!(code("Ro"), "unexpected-word");
    assert_eq!(errors(&with("scale Z in m bounds Z"))[0].0, "open-scale");
}

#[test]
fn an_equation_with_a_lone_term_is_left_out() {
    let script = with("equation lone: 100*u as a = v as b\nbounds");
    let bounds = answer(&script, "bounds");
    assert_eq!(
        bounds["lone"],
        serde_json::json!([{ "equation": "lone", "term": "a" }])
    );
    assert_eq!(list(&bounds["scales"]).len(), 3);
    let output = answers(&script);
    let codes: Vec<&Value> = list(&output["diagnostics"])
        .iter()
        .map(|found| &found["code"])
        .collect();
    assert_eq!(codes, ["lone-leading-term"]);
    assert!(report(&script).contains("warning  `lone` is left with `a` alone"));
}

#[test]
fn one_process_alone_has_no_second_to_lose() {
    // Both parts of a divergence are one process: only the dropped term ends it.
    let script = "scale A = 1  scale B = 1  field s ~ 1
        equation e: A*s as div + B*s as div = 0.01*s as c  bounds A";
    let scale = &answer(script, "bounds")["scales"][0];
    assert_eq!(scale["low"], Value::Null);
    assert_eq!(scale["high"], Value::Null);
    near(&scale["unchanged"]["low"], 0.1, 1e-14);
    near(&scale["unchanged"]["high"], 10.0, 1e-14);
}

#[test]
fn a_size_of_its_own_ends_at_its_parts() {
    let script = "scale U = 1 m/s  scale L = 10 m  scale D = 0.05 1/s
        coordinate x, y ~ L  field u, v(x, y) ~ U  scale S = U/L
        equation e: (d_x(u) + d_y(v) ~ D) as divergence = S as source  bounds D, U";
    let bounds = answer(script, "bounds");
    let divergence = entry(&bounds["scales"], "name", "D");
    near(&divergence["high"], 0.1, 1e-14);
    assert_eq!(ender(&divergence["limited_by"]["high"]), "e.divergence");
    near(&entry(&bounds["scales"], "name", "U")["low"], 0.5, 1e-14);
    assert!(report(script).contains("divergence exceeds its parts in e"));
}

#[test]
fn a_negative_constant_keeps_its_sign() {
    let script = with("bounds f")
        .replace("f = 1e-4", "f = -1e-4")
        .replace("G = f*U", "G = -f*U");
    let scale = &answer(&script, "bounds")["scales"][0];
    near(&scale["nominal"], -1e-4, 1e-14);
    near(&scale["high"], -5e-5, 1e-12);
    assert_eq!(scale["low"], Value::Null);
    assert_eq!(ender(&scale["limited_by"]["high"]), "momentum.tendency");
}

#[test]
fn a_scale_in_no_term_has_no_end() {
    let bounds = answer(&with("scale Z = 3 m  bounds Z"), "bounds");
    assert_eq!(bounds["scales"][0]["low"], Value::Null);
    assert_eq!(bounds["scales"][0]["unchanged"]["high"], Value::Null);
    assert_eq!(bounds["nearest"], Value::Null);
    assert!(report(&with("scale Z = 3 m  bounds Z")).contains("no scale alone ends it"));
}

#[test]
fn a_term_at_the_tolerance_is_out_and_at_its_end() {
    let script = with("bounds L").replace("2000 km", "1000 km");
    let bounds = answer(&script, "bounds");
    assert_eq!(bounds["dropped"][0]["term"], "tendency");
    near(&bounds["scales"][0]["low"], 1e6, 1e-12);
    near(&bounds["nearest"]["factor"], 1.0, 1e-12);
}

#[test]
fn a_balance_that_was_found_is_marked_where_it_ends() {
    // dP follows from rotation against pressure; from U/(f L) = 1 on, inertia is larger.
    let script = "
        scale U = 10 m/s   scale L = 2000 km   scale T = L/U   scale dP in Pa
        constant f = 1e-4 1/s   constant rho = 1.2 kg/m^3
        coordinate x ~ L   coordinate t ~ T
        field u, v(x, t) ~ U   field p(x, t) ~ dP
        equation momentum: d_t(u) as tendency - f*v as coriolis = -d_x(p)/rho as pressure_gradient
        find dP where momentum: coriolis ~ pressure_gradient
        bounds L";
    let scale = &answer(script, "bounds")["scales"][0];
    near(&scale["low"], 1e6, 1e-12);
    near(&scale["balance"]["low"], 1e5, 1e-12);
    assert_eq!(
        ender(&scale["balance"]["limited_by"]["low"]),
        "momentum.tendency"
    );
    assert_eq!(scale["balance"]["high"], Value::Null);
    let text = report(script);
    assert!(text.contains("tendency exceeds the balance in"), "{text}");
    let derived = errors(&script.replace("bounds L", "bounds dP"));
    assert_eq!(derived[0].0, "derived-scale");
}
