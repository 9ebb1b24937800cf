//! Equations made of others: combinations, relations put in, means.

use serde_json::Value;

use crate::harness::{answers, entry, list, read, schema_faults, text};

fn output(script: &str) -> Value {
    let output = answers(script);
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    assert_eq!(output["outcome"], "ok", "{:#}", output["diagnostics"]);
    output
}

/// The terms of an equation with their processes.
fn terms(output: &Value, equation: &str) -> Vec<String> {
    let ranked = entry(&output["answers"][0]["equations"], "name", equation);
    let spelt = |term: &Value| format!("{} as {}", text(&term["text"]), text(&term["process"]));
    list(&ranked["terms"]).iter().map(spelt).collect()
}

fn reduced(output: &Value, equation: &str) -> String {
    let answer = list(&output["answers"])
        .iter()
        .find(|answer| answer["request"] == "reduce")
        .expect("the script asks for it");
    text(&entry(&answer["equations"], "name", equation)["reduced"])
}

#[test]
fn vorticity_loses_the_pressure_and_keeps_its_processes() {
    let output = output(&read("inputs/vorticity.scl"));
    assert_eq!(
        terms(&output, "vorticity"),
        [
            "∂²v/∂x∂t as tendency",
            "∂(u*∂v/∂x)/∂x as advection",
            "∂(v*∂v/∂y)/∂x as advection",
            "∂(w*∂v/∂z)/∂x as advection",
            "f*∂w/∂z as stretching",
            "∂²u/∂y∂t as tendency",
            "∂(u*∂u/∂x)/∂y as advection",
            "∂(v*∂u/∂y)/∂y as advection",
            "∂(w*∂u/∂z)/∂y as advection",
            "v*∂f/∂y as coriolis",
        ]
    );
    assert_eq!(
        reduced(&output, "vorticity"),
        "∂²v/∂x∂t + ∂(u*∂v/∂x)/∂x + ∂(v*∂v/∂y)/∂x - f*∂w/∂z - ∂²u/∂y∂t - ∂(u*∂u/∂x)/∂y \
         - ∂(v*∂u/∂y)/∂y + v*∂f/∂y = 0"
    );
}

#[test]
fn the_mean_momentum_has_its_stresses() {
    let output = output(&read("inputs/mean_momentum.scl"));
    assert_eq!(
        terms(&output, "mean_x"),
        [
            "∂u_m/∂t as tendency",
            "∂(u_m^2)/∂x as flux",
            "∂(mean(u'^2))/∂x as flux",
            "∂(u_m*v_m)/∂y as flux",
            "∂(mean(u'*v'))/∂y as flux",
            "∂(u_m*w_m)/∂z as flux",
            "∂(mean(u'*w'))/∂z as flux",
            "f*v_m as coriolis",
            "∂p_m/∂x/rho as pressure_gradient",
            "nu*∂²u_m/∂z² as viscosity",
        ]
    );
    let ranked = entry(&output["answers"][0]["equations"], "name", "mean_x");
    // A mean varies over the depth of the layer, though the gusts are smaller.
    let stress = entry(&ranked["terms"], "text", "∂(mean(u'*w'))/∂z");
    assert_eq!(stress["scale"], "u_f^2/h");
}

/// A field and a fluctuation along x, with lengths of their own.
const MEANS: &str = "
scale U = 8 m/s
scale u_f = 1 m/s
scale L = 100 km
scale l = 100 m
constant k = 1 m^2/s
coordinate x ~ L
coordinate t ~ L/U
field U_m(x, t) ~ U
fluctuation u'(x ~ l, t ~ l/u_f) ~ u_f
field u = U_m + u'
";

#[test]
fn means_follow_the_rules_of_averaging() {
    let mean = |expr: &str| {
        let script = format!("{MEANS}equation e: mean({expr}) as wanted = k*U/L^2 as rest\nrank");
        let found = terms(&output(&script), "e").into_iter();
        let wanted = found.filter(|term| term.ends_with("as wanted"));
        wanted
            .map(|term| term.trim_end_matches(" as wanted").to_owned())
            .collect::<Vec<String>>()
    };
    assert_eq!(mean("d_t(u)"), ["d_t(U_m)"]);
    assert_eq!(mean("u*d_x(u)"), ["U_m*d_x(U_m)", "mean(u'*d_x(u'))"]);
    assert_eq!(mean("d_x(u*u)"), ["d_x(U_m^2)", "d_x(mean(u'^2))"]);
    assert_eq!(
        mean("U_m*d_x(u*u)/U"),
        ["U_m*d_x(U_m^2)/U", "U_m*d_x(mean(u'^2))/U"]
    );
    assert_eq!(mean("mean(u*u)/L"), ["U_m^2/L", "mean(u'^2)/L"]);
    // A mean is no fluctuation: of this product the mean is 0.
    assert_eq!(
        mean("u'*mean(u*u)/(L*U) + U_m*u/L + u*u/L"),
        ["2*U_m^2/L", "mean(u'^2)/L"]
    );
}

#[test]
fn a_combination_keeps_fields_as_factors() {
    let script = format!(
        "{MEANS}equation m: d_t(U_m) as tendency = -U_m*d_x(U_m) as advection\n\
         equation energy from U_m*m\nequation twice from 2*m - m\nrank"
    );
    let output = output(&script);
    assert_eq!(
        terms(&output, "energy"),
        ["U_m*d_t(U_m) as tendency", "U_m^2*d_x(U_m) as advection"]
    );
    assert_eq!(
        terms(&output, "twice"),
        ["d_t(U_m) as tendency", "U_m*d_x(U_m) as advection"]
    );
}

#[test]
fn a_relation_is_put_in_wherever_its_left_side_stands() {
    let script = "scale U = 1 m/s\nscale L = 1 km\nscale H = 100 m\nscale W = U*H/L\n\
                  constant k = 1 m^2/s\n\
                  coordinate x ~ L\ncoordinate z ~ H\n\
                  field u(x, z) ~ U\nfield w(x, z) ~ W\nfield q(x, z) ~ U\n\
                  equation no_divergence: d_z(w) = -d_x(u) as stretching\n\
                  equation e: u*d_x(w) = k*d_z^2(w) as friction + q*d_z(w) as flux using no_divergence\n\
                  rank e";
    let output = output(script);
    assert_eq!(
        terms(&output, "e"),
        [
            "u*d_x(w) as null",
            "k*d_z(d_x(u)) as stretching",
            "q*d_x(u) as stretching"
        ]
    );
}

#[test]
fn a_hydrostatic_base_state_is_named_and_goes() {
    let script = "
scale H = 10 km
scale R = 1 kg/m^3
scale r = 0.01 kg/m^3
scale W = 1 m/s
scale T = 100 s
constant g = 9.81 m/s^2
coordinate z ~ H
coordinate t ~ T
field rho_0(z) ~ R
field p_0(z) ~ R*g*H
field rho'(z, t) ~ r
field p'(z, t) ~ r*g*H
field w(z, t) ~ W
field rho = rho_0 + rho'
field p = p_0 + p'
equation hydrostatic_base: d_z(p_0) = -rho_0*g as gravity
equation z_momentum: rho*d_t(w) as tendency = -d_z(p) as pressure_gradient - rho*g as gravity
equation perturbation from z_momentum using hydrostatic_base
rank perturbation
reduce
";
    let output = output(script);
    assert_eq!(
        terms(&output, "perturbation"),
        [
            "rho_0*d_t(w) as tendency",
            "rho'*d_t(w) as tendency",
            "d_z(p') as pressure_gradient",
            "rho'*g as gravity"
        ]
    );
    let answer = &output["answers"][1];
    let base = |name: &str| entry(&answer["equations"], "name", name)["base_state"].clone();
    assert_eq!(base("z_momentum"), true);
    assert_eq!(base("hydrostatic_base"), true);
    assert_eq!(base("perturbation"), false);
    assert_eq!(
        reduced(&output, "perturbation"),
        "rho_0*d_t(w) = -d_z(p') - rho'*g"
    );
}

#[test]
fn a_mean_beside_its_fluctuation_is_no_base_state() {
    let script = "
scale U = 8 m/s   scale u_f = 0.8 m/s   scale P = 1 hPa   scale p_f = 1 Pa   scale L = 200 km
constant rho = 1.2 kg/m^3
coordinate x ~ L
field u_m(x) ~ U
field p_m(x) ~ P
fluctuation u'(x) ~ u_f
fluctuation p'(x) ~ p_f
field u = u_m + u'
field p = p_m + p'
equation momentum: d_x(u*u) as flux = -d_x(p)/rho as pressure_gradient
equation mean_momentum from mean(momentum)
reduce mean_momentum
";
    let output = output(script);
    assert_eq!(
        reduced(&output, "mean_momentum"),
        "d_x(u_m^2) = -d_x(p_m)/rho"
    );
    let equations = &output["answers"][0]["equations"];
    assert_eq!(
        entry(equations, "name", "mean_momentum")["base_state"],
        false
    );
}

#[test]
fn combinations_that_make_no_sense_are_refused() {
    let given = "scale U = 1 m/s\nscale L = 1 km\ncoordinate x ~ L\nfield u, v(x) ~ U\n\
                 equation a: d_x(u) = d_x(v)\n";
    let codes = |script: &str| {
        let output = answers(&format!("{given}{script}\nrank"));
        assert_eq!(output["outcome"], "invalid", "{script}");
        let found = list(&output["diagnostics"]).iter();
        let errors = found.filter(|found| found["severity"] == "error");
        errors
            .map(|found| text(&found["code"]))
            .collect::<Vec<String>>()
    };
    assert_eq!(codes("equation e from a*a"), ["not-a-relation"]);
    assert_eq!(codes("equation e from 1/a"), ["not-a-relation"]);
    assert_eq!(codes("equation e from sqrt(a)"), ["not-a-relation"]);
    assert_eq!(codes("equation e from a + u/L"), ["not-a-relation"]);
    assert_eq!(codes("equation e from u"), ["not-a-relation"]);
    assert_eq!(
        codes("equation e from nothing"),
        ["not-a-relation", "unknown-name"]
    );
    assert_eq!(codes("equation e from a + d_x(a)"), ["unlike-dimensions"]);
    assert_eq!(
        codes("equation e from a using nothing"),
        ["unknown-equation"]
    );
    assert_eq!(
        codes("equation e from b\nequation b from e"),
        ["circular-definition"]
    );
    assert_eq!(
        codes("equation s: d_x(u) + d_x(v) = U/L\nequation e from a using s"),
        ["not-a-product"]
    );
    assert_eq!(
        codes("equation s: 0 = d_x(u) + d_x(v)\nequation e from a using s"),
        ["not-a-relation"]
    );
    assert_eq!(
        codes("equation s: d_x(u) = 2*d_x(u) + d_x(v)\nequation e from a using s"),
        ["circular-definition"]
    );
    assert_eq!(codes("equation e from a - a"), ["one-term"]);
}
