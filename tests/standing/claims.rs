//! Claims that are not met: what was measured, by how much it misses, what would mend it.

use std::path::Path;
use std::process::Command;

use serde_json::Value;

use super::{errors, near, report};
use crate::harness::{answers, list, read, schema_faults, text};

/// A flow with Ro = 0.2 at the nominal values and a drag that is 1 % of the largest term.
const FLOW: &str = "
scale U = 10 m/s   scale L = 500 km   scale T = L/U
constant f = 1e-4 1/s   constant r = 1e-6 1/s   constant none = 0 1/s
scale G = f*U
coordinate x ~ L   coordinate t ~ T
field u, v(x, t) ~ U
equation momentum: d_t(u) as tendency - f*v as coriolis = G as pressure_gradient - r*u as drag + none*u as forcing
";

/// The one claim of a script.
fn held(claim: &str) -> Value {
    held_with(FLOW, claim)
}

fn held_with(flow: &str, claim: &str) -> Value {
    let output = answers(&format!("{flow}claim {claim}\n"));
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    let claims = list(&output["claims"]);
    assert_eq!(claims.len(), 1, "{}", output["diagnostics"]);
    let met = claims[0]["met"] == true;
    assert_eq!(output["outcome"], if met { "ok" } else { "unmet" });
    claims[0].clone()
}

fn mend(claim: &Value, scale: &str) -> f64 {
    let mends = list(&claim["mends"]);
    let found = mends.iter().find(|mend| mend["scale"] == scale);
    found.map_or(f64::NAN, |mend| mend["factor"].as_f64().unwrap_or(f64::NAN))
}

#[test]
fn ten_claims() {
    let file = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/inputs/ten_claims.scl");
    let run = Command::new(env!("CARGO_BIN_EXE_scalewright"))
        .arg("run")
        .arg(&file)
        .output()
        .expect("the program runs");
    assert_eq!(run.status.code(), Some(1));
    let out = String::from_utf8(run.stdout).expect("answers are text");
    assert!(out.contains("10 claims: 8 met, 2 not met"), "{out}");
    let unmet: Vec<&str> = out
        .lines()
        .filter(|line| line.starts_with("  not met"))
        .collect();
    assert_eq!(unmet.len(), 2, "{out}");
    assert!(unmet[0].contains("leading x_momentum = coriolis, pressure_gradient"));
    assert!(unmet[1].contains("U < 90 km/h"));
    let output = answers(&read("inputs/ten_claims.scl"));
    let claims = list(&output["claims"]);
    assert_eq!(claims.len(), 10);
    assert_eq!(
        claims.iter().filter(|claim| claim["met"] == false).count(),
        2
    );
}

#[test]
fn an_unclaimed_process_that_leads() {
    let claim = held("leading momentum = coriolis, pressure_gradient");
    assert_eq!(claim["met"], false);
    // Its share is 0.2, twice the tolerance.
    near(&claim["miss"], 2.0, 1e-12);
    near(&mend(&claim, "L").into(), 2.0, 1e-9);
    near(&mend(&claim, "U").into(), 0.5, 1e-9);
    let measured = text(&claim["measured"]);
    assert_eq!(
        measured,
        "tendency, coriolis, pressure_gradient lead; tendency, not claimed, has a share of 20 %"
    );
}

#[test]
fn a_claimed_process_that_does_not_lead() {
    let flow = FLOW.replace("500 km", "4000 km within 2");
    let claim = held_with(
        &flow,
        "leading momentum = tendency, coriolis, pressure_gradient",
    );
    // Its lowest share is 0.0125.
    near(&claim["miss"], 8.0, 1e-12);
    near(&mend(&claim, "L").into(), 0.125, 1e-9);
    assert!(text(&claim["measured"]).contains("tendency has a share of 1.2 .. 2.5 .. 5 %"));
}

#[test]
fn kept_and_dropped_over_ranges() {
    let flow = FLOW.replace("500 km", "2000 km within 4");
    let kept = held_with(&flow, "kept momentum = coriolis, pressure_gradient");
    near(&kept["miss"], 2.0, 1e-12);
    near(&mend(&kept, "L").into(), 2.0, 1e-9);
    let dropped = held_with(&flow, "dropped momentum = tendency, drag");
    near(&dropped["miss"], 2.0, 1e-12);
    near(&mend(&dropped, "L").into(), 2.0, 1e-9);
    assert!(text(&dropped["measured"]).starts_with("tendency stays"));
    assert_eq!(held_with(&flow, "dropped momentum = drag")["met"], true);
}

#[test]
fn a_mend_put_back_makes_the_claim_hold() {
    let flow = FLOW.replace("500 km", "2000 km within 4");
    let claim = "dropped momentum = tendency";
    let factor = mend(&held_with(&flow, claim), "L");
    let length = 2e6 * factor * (1.0 + 1e-12);
    let mended = FLOW.replace("500 km", &format!("{length:e} m within 4"));
    assert_eq!(held_with(&mended, claim)["met"], true);
}

#[test]
fn a_process_of_size_zero() {
    assert_eq!(held("dropped momentum = forcing")["met"], true);
    let kept = held("kept momentum = tendency, coriolis, pressure_gradient, forcing");
    assert_eq!(kept["met"], false);
    assert_eq!(kept["miss"], Value::Null);
    assert_eq!(list(&kept["mends"]).len(), 0);
    assert!(text(&kept["measured"]).ends_with("forcing is gone"));
    assert_eq!(held("momentum.forcing << momentum.coriolis")["met"], true);
    let over = held("momentum.coriolis << momentum.forcing");
    assert_eq!(over["met"], false);
    assert_eq!(over["value"], Value::Null);
}

#[test]
fn an_equation_of_which_nothing_is_left() {
    let flow = "constant none = 0  field s ~ 1
        equation e: none*s as a = none*s as b + 0*s as c\n";
    let output = answers(&format!("{flow}claim dropped e = a  claim leading e = b\n"));
    let claims = list(&output["claims"]);
    assert_eq!(claims.len(), 2, "{}", output["diagnostics"]);
    assert_eq!(claims[0]["met"], true);
    assert_eq!(claims[1]["met"], false);
}

#[test]
fn numbers_speak_in_the_unit_of_the_claim() {
    let claim = held("U < 30 km/h");
    near(&claim["value"]["nominal"], 10.0, 1e-12);
    near(&claim["miss"], 1.2, 1e-12);
    near(&mend(&claim, "U").into(), 1.0 / 1.2, 1e-9);
    assert_eq!(text(&claim["measured"]), "36 km/h against 30 km/h");
    assert_eq!(held("U < 40 km/h")["met"], true);
}

#[test]
fn a_ratio_over_ranges_misses_by_its_worst_end() {
    let flow = FLOW.replace("500 km", "1000 km within 4");
    let claim = held_with(&flow, "momentum.tendency << momentum.coriolis");
    near(&claim["value"]["nominal"], 0.1, 1e-12);
    near(&claim["miss"], 4.0, 1e-12);
    near(&mend(&claim, "L").into(), 4.0, 1e-9);
}

#[test]
fn bad_claims_are_refused() {
    let code = |claim: &str| errors(&format!("{FLOW}claim {claim}\n"))[0].0.clone();
    assert_eq!(code("leading momentum = coriolis, wind"), "unknown-process");
    assert_eq!(code("kept momenta = coriolis"), "unknown-equation");
    assert_eq!(
        code("momentum.wind << momentum.coriolis"),
        "unknown-process"
    );
    assert_eq!(code("U < 3 m"), "unlike-dimensions");
    assert_eq!(code("momentum.coriolis ~ U"), "unlike-dimensions");
    assert_eq!(code("U < 3 m/s for nowhere"), "unknown-phenomenon");
    assert_eq!(code("Q < 3 m"), "unknown-name");
    assert_eq!(code("U < 3 m/s within 5 %"), "unexpected-word");
    let open = format!("{FLOW}scale Z in m\nclaim Z < 3 m\n");
    assert_eq!(errors(&open)[0].0, "open-scale");
}

#[test]
fn warnings_are_errors_where_strict() {
    let script = format!("{FLOW}equation lone: 100*u as a = v as b\nbounds\n");
    let plain = scalewright::Session::new().run("case.scl", &script, None);
    assert_eq!(plain.status(), scalewright::Status::Ok);
    let strict = scalewright::Session::new().with_strictness(true);
    let strict = strict.run("case.scl", &script, None);
    assert_eq!(strict.status(), scalewright::Status::Invalid);
    assert_eq!(strict.answers.len(), plain.answers.len());
}

#[test]
fn an_unmet_claim_reads_well() {
    let text = report(&format!(
        "{FLOW}claim leading momentum = coriolis, pressure_gradient\n"
    ));
    let words: Vec<&str> = text.split_whitespace().collect();
    assert!(words.join(" ").contains(
        "tendency, not claimed, has a share of 20 %; misses by a factor 2; \
         would hold with U ÷ 2 or L × 2"
    ));
}
