//! Which groups are found, in which order, and how coefficients and conditions speak in
//! named ones.

use serde_json::{Value, json};

use crate::harness::{answers, answers_to, list, schema_faults, text};

const FLOW: &str = "
scale U = 10 m/s  scale L = 1000 km  scale H in m
constant f = 1e-4 1/s  constant N in 1/s
";

fn groups(script: &str) -> Value {
    let output = answers(script);
    assert_eq!(output["outcome"], "ok", "{}", output["diagnostics"]);
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    (*answers_to(&output, "groups")[0]).clone()
}

fn texts(entries: &Value) -> Vec<String> {
    list(entries)
        .iter()
        .map(|entry| text(&entry["text"]))
        .collect()
}

#[test]
fn shortest_circuits_come_first_ties_by_declaration() {
    let found = groups(&format!("{FLOW} groups"));
    assert_eq!(texts(&found["independent"]), ["L/H", "f/N", "U/(H*N)"]);
}

#[test]
fn an_open_scale_takes_part_without_a_value() {
    let found = groups(&format!(
        "{FLOW} group Ro = U/(f*L)  group Bu = (N*H/(f*L))^2  groups"
    ));
    assert!(
        list(&found["independent"])
            .iter()
            .all(|group| group["value"].is_null())
    );
    let (rossby, burger) = (&found["named"][0], &found["named"][1]);
    assert_eq!(
        rossby["groups"],
        json!({ "Pi_1": "-1", "Pi_2": "-1", "Pi_3": "1" })
    );
    let value = rossby["value"]["nominal"].as_f64().unwrap();
    assert!((value - 0.1).abs() < 1e-12, "{value}");
    assert_eq!(burger["groups"], json!({ "Pi_1": "-2", "Pi_2": "-2" }));
    assert_eq!(burger["value"], Value::Null);
    assert_eq!(found["spanning"], json!(["Ro", "Bu"]));
    assert_eq!(found["complete"], false);
}

#[test]
fn derived_products_are_replaced_and_other_symbols_left_out() {
    let found = groups(
        "scale U = 1 m/s  scale L = 1 km  scale T = L/U  scale Q = 3 m/s
         coordinate x ~ L  coordinate t ~ T
         field u(x, t) ~ U
         equation e: d_t(u) + u*d_x(u) = 0
         group St = L/(U*T)  group other = Q/U
         groups",
    );
    assert_eq!(texts(&found["independent"]), Vec::<String>::new());
    assert_eq!(found["named"][0]["groups"], json!({}));
    assert_eq!(found["named"][1]["groups"], Value::Null);
}

#[test]
fn a_named_group_keeps_its_own_number() {
    let found = groups(
        "scale U = 2 m/s  scale L = 5 m  constant nu = 1e-2 m^2/s
         group Re_half = U*L/(2*nu)  groups",
    );
    assert_eq!(texts(&found["independent"]), ["U*L/nu"]);
    assert_eq!(found["independent"][0]["name"], Value::Null);
    assert_eq!(found["named"][0]["number"], "1/2");
    assert_eq!(found["named"][0]["groups"], json!({ "Pi_1": "1" }));
}

const TURNING: &str = "
scale U = 10 m/s within 2  scale L = 1000 km  scale T = L/U  scale dP = 12 hPa
constant rho = 1.2 kg/m^3
constant phi = 45 deg
constant f = 2*(7.292115e-5 rad/s)*sin(phi)
coordinate x, y ~ L  coordinate t ~ T
field u, v(x, y, t) ~ U  field p(x, y, t) ~ dP
velocity (u, v) along (x, y)
group Ro = U/(f*L) \"Rossby number\"
equation x_momentum: D_t(u) - f*v as coriolis = -d_x(p)/rho as pressure_gradient
";

#[test]
fn conditions_speak_in_named_groups() {
    let output = answers(&format!("{TURNING} tolerance 10 %  reduce"));
    let reduced = &answers_to(&output, "reduce")[0]["equations"][0];
    let advection = list(&reduced["kept"])
        .iter()
        .find(|term| term["process"] == "advection")
        .expect("the advection is kept");
    assert_eq!(advection["verdict"], "depends");
    // At small U the pressure gradient is the largest.
    let condition = text(&advection["condition"]);
    assert!(condition.starts_with("Ro <= 0.1"), "{condition}");
}

#[test]
fn a_group_over_a_constant_that_is_0_is_not_there() {
    let turned = TURNING.replace("45 deg", "0 deg");
    let output = answers(&format!("{turned} rank  reduce  nondimensionalize  groups"));
    assert_eq!(output["outcome"], "ok", "{}", output["diagnostics"]);
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    let named = &answers_to(&output, "groups")[0]["named"][0];
    assert_eq!(
        (&named["value"], &named["groups"]),
        (&Value::Null, &Value::Null)
    );
    let row = list(&output["symbols"])
        .iter()
        .find(|row| row["name"] == "Ro");
    assert_eq!(row.expect("the group is listed")["value"], Value::Null);
}

#[test]
fn a_script_overrides_a_group_of_a_module() {
    let script = "use base.rotation_numbers
        group Ro = U/(2*f*L) \"half of it\"
        scale U = 10 m/s  scale L = 100 km  constant f = 1e-4 1/s
        show Ro";
    let output = answers(script);
    assert_eq!(output["outcome"], "ok", "{}", output["diagnostics"]);
    let note = &output["diagnostics"][0];
    assert_eq!(
        (&note["code"], &note["severity"]),
        (&json!("value-overridden"), &json!("note"))
    );
    assert_eq!(output["answers"][0]["value"]["nominal"], 0.5);
}

#[test]
fn a_second_group_of_one_name_is_a_clash() {
    let output = answers("scale U = 1 m/s  group A = U/U  group A = U^2/U^2  show A");
    assert_eq!(output["diagnostics"][0]["code"], "name-clash");
}

#[test]
fn a_process_that_no_equation_has_is_unknown() {
    let output = answers(&format!("{TURNING} nondimensionalize by buoyancy"));
    assert_eq!(output["diagnostics"][0]["code"], "unknown-process");
}

#[test]
fn too_many_groups_are_an_error() {
    let scales: String = (0..120)
        .map(|n| format!("scale Q_{n} in m^{}/s\n", n % 11 + 1))
        .collect();
    let output = answers(&format!("{scales}groups"));
    assert_eq!(output["diagnostics"][0]["code"], "too-large");
}

#[test]
fn an_equation_is_divided_by_the_term_named() {
    let output = answers(&format!(
        "{TURNING} nondimensionalize  nondimensionalize x_momentum by u*d_x(u)
         nondimensionalize by pressure_gradient"
    ));
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    let divided: Vec<String> = answers_to(&output, "nondimensionalize")
        .iter()
        .map(|answer| text(&answer["equations"][0]["by"]))
        .collect();
    assert_eq!(divided, ["f*v", "u*d_x(u)", "d_x(p)/rho"]);
    let by_advection = answers_to(&output, "nondimensionalize")[1];
    let dimensionless = text(&by_advection["equations"][0]["text"]);
    assert_eq!(
        dimensionless,
        "d_t(u) + u*d_x(u) + v*d_y(u) - 1/Ro*v = -dP/(U^2*rho)*d_x(p)"
    );
}

#[test]
fn signs_stand_with_the_numbers() {
    let output = answers(
        "scale U = 1 m/s  scale L = 100 km  constant f = -1e-4 1/s  scale G = 1e-4 m/s^2
         coordinate x ~ L  field u, v(x) ~ U
         group Ro = U/(f*L)
         equation e: u*d_x(u) - 2*f*v as coriolis = G as forcing
         nondimensionalize",
    );
    let terms = &output["answers"][0]["equations"][0]["terms"];
    let coefficient = |idx: usize| &terms[idx]["coefficient"];
    assert_eq!(text(&output["answers"][0]["equations"][0]["by"]), "2*f*v");
    assert_eq!(
        (&coefficient(1)["number"], &coefficient(1)["groups"]),
        (&json!("-1"), &json!({}))
    );
    assert_eq!(
        (&coefficient(0)["number"], &coefficient(0)["groups"]),
        (&json!("1/2"), &json!({ "Ro": "1" }))
    );
    // f is negative, and Ro with it.
    let value = coefficient(0)["value"]["nominal"].as_f64().unwrap();
    assert!((value + 0.05).abs() < 1e-12, "{value}");
    assert_eq!(terms[1]["number"], "-2");
}
