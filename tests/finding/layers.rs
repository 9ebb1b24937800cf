//! Thin layers: what thins, what does not, what they are called, layers inside layers.

use serde_json::{Value, json};

use super::{answer, answered, assert_close, assert_formula};
use crate::harness::list;

fn layers(script: &str) -> Vec<Value> {
    list(&answer(&answered(script), "layers", 0)["layers"]).to_vec()
}

fn along<'a>(found: &'a [Value], coordinate: &str) -> Vec<&'a Value> {
    found
        .iter()
        .filter(|layer| layer["coordinate"] == coordinate)
        .collect()
}

/// A geostrophic current over a shelf, with friction and time.
const SHELF: &str = "scale U = 0.1 m/s  scale L = 50 km  scale H = 400 m  scale T = 10 d
    scale W = U*H/L
    constant f = 1e-4 1/s  constant rho = 1027 kg/m^3  constant nu = 1e-2 m^2/s within 4
    scale dP = rho*f*U*L
    coordinate x, y ~ L  coordinate z ~ H  coordinate t ~ T
    field u, v(x, y, z, t) ~ U  field w(x, y, z, t) ~ W  field p(x, y, t) ~ dP
    velocity (u, v, w) along (x, y, z)
    equation x_momentum: D_t(u) - f*v as coriolis = -d_x(p)/rho as pressure + nu*d_z^2(u) as friction
    equation y_momentum: D_t(v) + f*u as coriolis = -d_y(p)/rho as pressure + nu*d_z^2(v) as friction
    balance ekman: x_momentum { coriolis, pressure, friction } y_momentum { coriolis, pressure, friction }
    balance half: x_momentum { coriolis, friction }\n";

#[test]
fn the_wind_driven_layer_is_found_from_the_full_equations() {
    let found = layers(&format!("{SHELF}layers"));
    let thin = along(&found, "z");
    assert_eq!(thin.len(), 2);
    for layer in &thin {
        assert_formula(layer, "1", &json!({ "nu": "1/2", "f": "-1/2" }));
        assert_close(&layer["value"]["nominal"], 10.0);
        assert_close(&layer["value"]["high"], 20.0);
        assert_close(&layer["ratio"]["low"], 5.0 / 400.0);
        assert_eq!(
            layer["balance"],
            json!(["coriolis", "pressure", "friction"])
        );
        assert_eq!(layer["outer_balance"], json!(["coriolis", "pressure"]));
        assert_eq!(
            (&layer["name"], &layer["inside"]),
            (&json!("ekman"), &json!(null))
        );
    }
}

#[test]
fn a_dropped_tendency_comes_back_in_a_fast_adjustment() {
    let found = layers(&format!("{SHELF}layers"));
    let fast = along(&found, "t");
    assert_eq!(fast.len(), 2);
    assert_formula(fast[0], "1", &json!({ "f": "-1" }));
    assert_eq!(fast[0]["unit"], "s");
    assert_eq!(
        fast[0]["balance"],
        json!(["tendency", "coriolis", "pressure"])
    );
}

#[test]
fn a_field_with_a_length_of_its_own_keeps_it() {
    let script = SHELF.replace("field u, v(x, y, z, t)", "field u, v(x, y, z ~ 300 m, t)");
    assert_eq!(along(&layers(&format!("{script}layers")), "z").len(), 0);
}

/// Heat in a flow along a plate: W is U H/L outside and shrinks with the layer, so the
/// vertical advection stays as large as the other and no other layer comes of it.
#[test]
fn the_velocity_across_shrinks_with_the_layer() {
    let found = layers(
        "scale U = 1 m/s  scale L = 10 m  scale H = 1 m  scale dT = 5 K  scale W = U*H/L
        constant kappa = 1e-5 m^2/s
        coordinate x ~ L  coordinate z ~ H
        field u(x, z) ~ U  field w(x, z) ~ W  field theta(x, z) ~ dT
        velocity (u, w) along (x, z)
        equation heat: u*d_x(theta) as advection + w*d_z(theta) as advection = kappa*d_z^2(theta) as conduction
        layers",
    );
    let [layer] = found.as_slice() else {
        panic!("one layer: {found:?}")
    };
    assert_formula(
        layer,
        "1",
        &json!({ "L": "1/2", "U": "-1/2", "kappa": "1/2" }),
    );
    assert_close(&layer["value"]["nominal"], 0.01);
}

/// a y''' + b y'' + y' + y = 0: y'' comes back at b, y''' within it at a/b.
#[test]
fn layers_lie_inside_one_another() {
    let found = layers(
        "scale X = 1  scale Y = 1  constant a = 1e-6  constant b = 0.01
        coordinate x ~ X  field y(x) ~ Y
        equation ode: a*d_x^3(y) as third + b*d_x^2(y) as second + d_x(y) as first + y as zeroth = 0
        layers",
    );
    let formulas: Vec<&Value> = found.iter().map(|layer| &layer["exponents"]).collect();
    assert_eq!(
        formulas,
        [&json!({ "b": "1" }), &json!({ "a": "1", "b": "-1" })]
    );
    assert_eq!(found[0]["balance"], json!(["second", "first"]));
    assert_eq!(found[1]["balance"], json!(["third", "second"]));
    assert_eq!(
        (&found[0]["inside"], &found[1]["inside"]),
        (&json!(null), &json!(0))
    );
}

/// Where a > b^2 the third derivative overtakes the second before it counts.
#[test]
fn a_derivative_that_is_never_among_the_largest_makes_no_layer() {
    let found = layers(
        "scale X = 1  scale Y = 1  constant a = 1e-4  constant b = 1e-3
        coordinate x ~ X  field y(x) ~ Y
        equation ode: a*d_x^3(y) as third + b*d_x^2(y) as second + d_x(y) as first + y as zeroth = 0
        layers",
    );
    assert_eq!(found.len(), 1);
    assert_formula(&found[0], "1", &json!({ "a": "1/2" }));
    assert_eq!(found[0]["balance"], json!(["third", "first"]));
}

#[test]
fn a_layer_that_stands_over_part_of_the_ranges_says_so() {
    let found = layers(
        "scale X = 1  scale Y = 1  constant a = 1e-4  constant b = 0.01 within 3
        coordinate x ~ X  field y(x) ~ Y
        equation ode: a*d_x^3(y) as third + b*d_x^2(y) as second + d_x(y) as first + y as zeroth = 0
        layers",
    );
    assert!(
        found
            .iter()
            .any(|layer| layer["whole_box"] == false && layer["conditions"] != json!([]))
    );
}

#[test]
fn nothing_dropped_makes_no_layer() {
    let found = layers(
        "scale X = 1  scale Y = 1
        coordinate x ~ X  field y(x) ~ Y
        equation ode: d_x^2(y) as second = y as zeroth
        layers",
    );
    assert!(found.is_empty());
}
