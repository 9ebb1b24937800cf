//! Split fields and coordinates about an origin: what is substituted, what is expanded,
//! and what is refused.

use serde_json::Value;

use crate::harness::{answers, entry, list, schema_faults, text};

/// Declarations that the scripts below share.
const GIVEN: &str = "
scale H = 10 km
scale L = 1000 km
scale U = 10 m/s
scale R = 1 kg/m^3
scale r_1 = 0.01 kg/m^3
constant g = 9.81 m/s^2
scale P = R*g*H
coordinate x ~ L
coordinate z ~ H
field u(x, z) ~ U
field p(x, z) ~ P
field rho_0(z) ~ R
field rho', rho_s(x, z) ~ r_1
field rho = rho_0 + rho'
";

fn output(equation: &str) -> Value {
    let output = answers(&format!("{GIVEN}{equation}\nrank\nreduce"));
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    assert_eq!(output["outcome"], "ok", "{:#}", output["diagnostics"]);
    output
}

/// The terms of an equation `e`, each as number, text and scale.
fn terms(equation: &str) -> Vec<String> {
    let output = output(equation);
    let ranked = entry(&output["answers"][0]["equations"], "name", "e");
    let spelt = |term: &Value| {
        let number = text(&term["number"]);
        format!(
            "{number}: {} ~ {}",
            text(&term["text"]),
            text(&term["scale"])
        )
    };
    list(&ranked["terms"]).iter().map(spelt).collect()
}

/// The same without the scales.
fn unscaled(equation: &str) -> Vec<String> {
    let before = |term: String| term.split(" ~ ").next().unwrap_or("").to_owned();
    terms(equation).into_iter().map(before).collect()
}

fn errors(script: &str) -> Vec<(String, u64)> {
    let output = answers(&format!("{GIVEN}{script}"));
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    let found = list(&output["diagnostics"]).iter();
    found
        .filter(|found| found["severity"] == "error")
        .map(|found| {
            let line = found["span"]["start"]["line"].as_u64().unwrap_or(0);
            (text(&found["code"]), line)
        })
        .collect()
}

/// The line of the first statement behind the shared declarations.
fn first_line() -> u64 {
    GIVEN.lines().count() as u64 + 1
}

#[test]
fn linear_places_are_exact() {
    assert_eq!(
        terms("equation e: rho*g = -d_z(p)"),
        ["1: rho_0*g ~ R*g", "1: rho'*g ~ r_1*g", "1: d_z(p) ~ P/H"]
    );
    // A whole power is multiplied out.
    assert_eq!(
        terms("equation e: rho^2*g = -R*d_z(p)"),
        [
            "1: rho_0^2*g ~ R^2*g",
            "2: 2*rho_0*rho'*g ~ 2*R*r_1*g",
            "1: rho'^2*g ~ r_1^2*g",
            "1: R*d_z(p) ~ R*P/H"
        ]
    );
}

#[test]
fn an_inverse_goes_to_the_second_order() {
    assert_eq!(
        terms("equation e: g = -d_z(p)/rho"),
        [
            "1: g ~ g",
            "1: d_z(p)/rho_0 ~ P/(H*R)",
            "1: d_z(p)*rho'/rho_0^2 ~ P*r_1/(H*R^2)",
            "1: d_z(p)*rho'^2/rho_0^3 ~ P*r_1^2/(H*R^3)"
        ]
    );
    assert_eq!(
        terms("equation e: g = 8*g*(rho/rho_0)^(-3/2)"),
        [
            "1: g ~ g",
            "8: 8*g ~ 8*g",
            "12: 12*g*rho'/rho_0 ~ 12*g*r_1/R",
            "15: 15*g*rho'^2/rho_0^2 ~ 15*g*r_1^2/R^2"
        ]
    );
}

#[test]
fn all_ratios_of_a_product_count_together() {
    let found = terms(
        "scale B = 100 m\nfield d = D_0 + b\nconstant D_0 = 1 km\nfield b(x) ~ B\n\
         equation e: g = -d_z(p)/rho*D_0/d",
    );
    // Orders (0,0) (0,1) (0,2) (1,0) (1,1) (2,0), and g.
    assert_eq!(found.len(), 7, "{found:?}");
    assert!(found.contains(&"1: d_z(p)*b^2/rho_0/D_0^2 ~ P*B^2/(H*R*D_0^2)".to_owned()));
    assert!(
        !found
            .iter()
            .any(|term| term.contains("rho'^2") && term.contains('b'))
    );
}

#[test]
fn functions_of_split_fields_go_by_taylor() {
    let given = "constant q_0 = 1\nscale Q = 0.1\nfield q'(x) ~ Q\nfield q = q_0 + q'\n";
    assert_eq!(
        terms(&format!("{given}equation e: g = g*exp(2*q)")),
        [
            "1: g ~ g",
            "1: g*exp(2*q_0) ~ g*exp(2*q_0)",
            "2: 2*g*exp(2*q_0)*q' ~ 2*g*exp(2*q_0)*Q",
            "2: 2*g*exp(2*q_0)*q'^2 ~ 2*g*exp(2*q_0)*Q^2"
        ]
    );
    assert_eq!(
        terms(&format!("{given}equation e: g = g*log(q)")),
        [
            "1: g ~ g",
            "1: g*q'/q_0 ~ g*Q/q_0",
            "1/2: 1/2*g*q'^2/q_0^2 ~ 1/2*g*Q^2/q_0^2"
        ]
    );
}

#[test]
fn the_derivative_of_a_function_goes_by_the_chain_rule() {
    assert_eq!(
        terms("equation e: d_z(p)/p = d_z(log(rho_0/R)) + g*rho_0/p"),
        [
            "1: d_z(p)/p ~ 1/H",
            "1: d_z(log(rho_0/R)) ~ 1/H",
            "1: g*rho_0/p ~ g*R/P"
        ]
    );
}

#[test]
fn a_sum_in_a_nonlinear_place_is_expanded() {
    assert_eq!(
        terms("constant a = 6371 km\nfield h(x) ~ H\nequation e: g = g/(1 + h/a)^2"),
        [
            "1: g ~ g",
            "1: g ~ g",
            "2: 2*g*h/a ~ 2*g*H/a",
            "3: 3*g*h^2/a^2 ~ 3*g*H^2/a^2"
        ]
    );
}

#[test]
fn a_logarithm_of_one_vanishes_and_the_rest_stays() {
    let given = "constant q_0 = 1\nscale Q = 0.1\nfield q'(x) ~ Q\nfield q = q_0 + q'\n";
    let output = output(&format!("{given}equation e: g = g*log(q)"));
    let codes: Vec<String> = list(&output["diagnostics"])
        .iter()
        .map(|found| text(&found["code"]))
        .collect();
    assert!(codes.contains(&"zero-constant".to_owned()), "{codes:?}");
}

#[test]
fn the_first_term_left_out_is_in_the_error() {
    let output = output("equation e: g = -d_z(p)/rho");
    let reduced = &output["answers"][1]["equations"][0];
    let dropped = list(&reduced["dropped"]);
    assert_eq!(dropped.len(), 2);
    let sum = reduced["error_sum"].as_f64().unwrap();
    // 1e-2 and 1e-4 drop; 1e-6 is what the expansion leaves out.
    assert!((sum - 0.010101).abs() < 1e-12, "{sum}");
}

#[test]
fn a_beta_plane_and_a_shallow_layer_come_out() {
    let given = "constant phi_0 = 45 deg\nconstant a = 6371 km\nconstant Omega = 7.3e-5 rad/s\n\
                 coordinate phi ~ L/a about phi_0\ncoordinate r ~ H about a\n\
                 field v(phi, r) ~ U\nfield q(phi, r) ~ P\n";
    let equation = "equation e: 2*Omega*sin(phi)*v = -d_phi(q)/(R*r)";
    assert_eq!(
        unscaled(&format!("{given}{equation}")),
        [
            "2: 2*Omega*sin(phi_0)*v",
            "2: 2*Omega*cos(phi_0)*(phi - phi_0)*v",
            "1: Omega*sin(phi_0)*(phi - phi_0)^2*v",
            "1: d_phi(q)/R/a",
            "1: d_phi(q)*(r - a)/R/a^2",
            "1: d_phi(q)*(r - a)^2/R/a^3"
        ]
    );
}

#[test]
fn factors_of_a_coordinate_cancel_before_they_are_expanded() {
    let given = "constant a = 6371 km\ncoordinate r ~ H about a\nfield w(r) ~ U\n";
    assert_eq!(
        unscaled(&format!("{given}equation e: d_r(r^2*w)/r^2 = U/H")),
        [
            "2: 2*w/a",
            "2: 2*(r - a)*w/a^2",
            "2: 2*(r - a)^2*w/a^3",
            "1: d_r(w)",
            "1: U/H"
        ]
    );
}

#[test]
fn an_origin_at_the_equator_works() {
    let given = "constant phi_0 = 0 deg\nconstant a = 6371 km\nconstant Omega = 7.3e-5 rad/s\n\
                 coordinate phi ~ L/a about phi_0\nfield v(phi) ~ U\n";
    let found = unscaled(&format!(
        "{given}equation e: 2*Omega*sin(phi)*v = g*cos(phi)"
    ));
    assert_eq!(found, ["2: 2*Omega*sin(phi)*v", "1: g", "1/2: 1/2*g*phi^2"]);
}

#[test]
fn ratios_that_are_not_small_are_told_with_their_value() {
    let script = "scale big = 0.5 kg/m^3\nfield q(x) ~ big\nfield n = rho_0 + q\n\
                  equation e: g = -d_z(p)/n\nequation d: g = 2*g\nrank\nshow g";
    assert_eq!(
        errors(script),
        [("ratio-not-small".to_owned(), first_line() + 3)]
    );
    let output = answers(&format!("{GIVEN}{script}"));
    let message = text(&output["diagnostics"][0]["message"]);
    assert!(message.contains("`q` is 0.500 of `rho_0`"), "{message}");
    let help = text(&output["diagnostics"][0]["help"]);
    assert!(help.contains("change the declaration of `q`"), "{help}");
    // The others are answered.
    let equations = list(&output["answers"][0]["equations"]);
    assert_eq!(equations.len(), 1);
    assert_eq!(output["answers"][1]["request"], "show");
}

#[test]
fn a_displacement_must_be_small_itself_in_a_function_of_an_angle() {
    let script = "constant phi_0 = 10 deg\nconstant a = 6371 km\n\
                  coordinate phi ~ 5000 km/a about phi_0\nfield v(phi) ~ U\n\
                  equation e: v*sin(phi) = U\nrank";
    let script = script.replace("5000 km/a", "0.5");
    assert_eq!(
        errors(&script),
        [("ratio-not-small".to_owned(), first_line() + 4)]
    );
    // Of its ratio to the origin nothing is asked.
    assert_eq!(errors(&script.replace("0.5", "0.3")), []);
}

#[test]
fn splits_and_expansions_that_make_no_sense_are_refused() {
    let line = first_line();
    let one = |code: &str, at: u64| [(code.to_owned(), line + at)];
    assert_eq!(
        errors("field q = rho_0 + nothing\nequation e: q*g = g*R"),
        one("unknown-name", 0)
    );
    assert_eq!(
        errors("field q = rho_0 + n\nfield n = q + rho'\nequation e: q*g = g*R"),
        one("circular-definition", 0)
    );
    assert_eq!(
        errors("constant c = 0 km\ncoordinate y ~ L about c\nequation e: 1/y = 1/L\nrank"),
        one("singular-expansion", 2)
    );
    assert_eq!(
        errors("coordinate phi ~ 0.1 about 90 deg\nequation e: tan(phi)*g = g\nrank"),
        one("singular-expansion", 1)
    );
    assert_eq!(
        errors("equation e: exp(rho_0/R)*g = g\nrank"),
        one("not-split", 0)
    );
    let many: String = (0..25)
        .map(|idx| format!("field q{} = q{idx} + rho'\n", idx + 1))
        .collect();
    assert_eq!(
        errors(&format!(
            "field q0 = rho_0 + rho_s\n{many}equation e: q25*g = g*R"
        )),
        one("too-large", 20)
    );
    let doubled: String = (0..12)
        .map(|idx| format!("field q{} = q{idx} + q{idx}\n", idx + 1))
        .collect();
    assert_eq!(
        errors(&format!(
            "field q0 = rho_0 + rho_s\n{doubled}equation e: q12*g = g*R"
        ))[0]
            .0,
        "too-large"
    );
}

#[test]
fn a_quotient_by_a_split_field_cancels_exactly() {
    let output = output(
        "scale T = L/U coordinate t ~ T field w(z, t) ~ U
        equation whole: rho*d_t(w) as tendency = -rho*w/T as drag
        equation e from whole/rho",
    );
    let equation = entry(&answer_equations(&output, "reduce"), "name", "e").clone();
    assert_eq!(equation["reduced"], "d_t(w) = -w/T");
    assert_eq!(equation["error"], 0.0);
    assert_eq!(list(&equation["dropped"]).len(), 0);
}

/// The equations of the one answer to a request.
fn answer_equations(output: &Value, request: &str) -> Value {
    let answers = list(&output["answers"]).iter();
    let mut own = answers.filter(|answer| answer["request"] == request);
    own.next()
        .map_or(Value::Null, |answer| answer["equations"].clone())
}

#[test]
fn a_literal_keeps_its_unit_in_the_terms_made_of_it() {
    let given = "scale U = 1 m/s scale L = 1 km coordinate x ~ L coordinate t ~ L/U
        field u(x, t) ~ U field a, b(x, t) ~ U field q = a + b
        equation e: d_t(u) = 0.5 1/s*q/(2 s)*(2 s) - q*u/(3 m)
        tolerance 1 %";
    let output = answers(&format!("{given}\nrank\nreduce save \"kept.scl\""));
    assert_eq!(output["outcome"], "ok", "{:#}", output["diagnostics"]);
    let terms = list(&output["answers"][0]["equations"][0]["terms"]).iter();
    let texts: Vec<String> = terms.map(|term| text(&term["text"])).collect();
    for expected in [
        "0.5 1/s * a",
        "0.5 1/s * b",
        "1 1/m * 1/3*a*u",
        "1 1/m * 1/3*b*u",
    ] {
        assert!(texts.iter().any(|text| text == expected), "{texts:?}");
    }
    let outcome = scalewright::Session::new().run(
        "given.scl",
        &format!("{given}\nreduce save \"kept.scl\""),
        None,
    );
    let saved = &outcome.saved[0].text;
    assert_eq!(answers(saved)["outcome"], "ok", "{saved}");
}
