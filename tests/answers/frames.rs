//! Vectors and frames in answers: component equations and their names, equations made of
//! vector equations, and how faults are told.

use serde_json::Value;

use crate::harness::{answers, entry, list, schema_faults, text};

const PLANE: &str = "
scale U = 10 m/s    scale L = 100 km   scale H = 5 km    scale T = L/U
constant f = 1e-4 1/s
coordinate x, y ~ L   coordinate z ~ H   coordinate t ~ T
field u, v, w(x, y, z, t) ~ U   field p(x, y, z, t) ~ U^2
";

const CARTESIAN: &str = "
frame cartesian (x, y, z)
vector V = (u, v, w)   vector F = (0, 0, f)
velocity V
equation momentum: D_t(V) + cross(F, V) as coriolis = -grad(p) as pressure_gradient
";

const SPHERE: &str = "
scale U = 10 m/s    scale L = 500 km   scale H = 10 km   scale T = L/U
constant Omega = 7e-5 1/s   constant a = 6371 km   constant phi_0 = 50 deg
frame spherical (lambda, phi, r)
coordinate lambda ~ L/a   coordinate phi ~ L/a about phi_0   coordinate r ~ H about a
coordinate t ~ T
field u, v, w(lambda, phi, r, t) ~ U   field p(lambda, phi, r, t) ~ U^2
vector V = (u, v, w)   vector F = (0, 0, 2*Omega*sin(phi))
velocity V
equation momentum: D_t(V) + cross(F, V) as coriolis = -grad(p) as pressure_gradient
";

fn ranked(script: &str) -> Value {
    let output = answers(script);
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    assert_eq!(output["outcome"], "ok", "{:#}", output["diagnostics"]);
    output["answers"][0]["equations"].clone()
}

fn names(equations: &Value) -> Vec<String> {
    list(equations)
        .iter()
        .map(|one| text(&one["name"]))
        .collect()
}

/// The terms of an equation with their processes.
fn terms(equations: &Value, equation: &str) -> Vec<String> {
    let spelt = |term: &Value| format!("{} as {}", text(&term["text"]), text(&term["process"]));
    let terms = &entry(equations, "name", equation)["terms"];
    list(terms).iter().map(spelt).collect()
}

fn processes(equations: &Value, equation: &str) -> Vec<String> {
    let terms = list(&entry(equations, "name", equation)["terms"]).iter();
    let mut found: Vec<String> = terms.map(|term| text(&term["process"])).collect();
    found.sort();
    found.dedup();
    found
}

#[test]
fn a_vector_equation_stands_for_its_components() {
    let equations = ranked(&format!("{PLANE}{CARTESIAN}rank"));
    assert_eq!(
        names(&equations),
        ["momentum_x", "momentum_y", "momentum_z"]
    );
    assert_eq!(
        processes(&equations, "momentum_x"),
        ["advection", "coriolis", "pressure_gradient", "tendency"]
    );
    // The rotation has no component along the plane, so none upward either.
    assert_eq!(
        processes(&equations, "momentum_z"),
        ["advection", "pressure_gradient", "tendency"]
    );
    let named = ranked(&format!("{PLANE}{CARTESIAN}rank momentum"));
    assert_eq!(names(&named), names(&equations));
}

#[test]
fn a_component_in_which_nothing_stands_is_left_out() {
    let flat = "frame cartesian (x, y, z)
        vector V = (u, v, 0)
        equation drag: ∂V/∂t as tendency = -f*V as drag\nrank";
    assert_eq!(
        names(&ranked(&format!("{PLANE}{flat}"))),
        ["drag_x", "drag_y"]
    );
}

#[test]
fn the_curl_of_an_equation_is_one() {
    // Above the equation that it is made of, as well as below.
    let script =
        format!("{PLANE}equation vorticity from curl(momentum)\n{CARTESIAN}rank vorticity");
    let equations = ranked(&script);
    assert_eq!(
        names(&equations),
        ["vorticity_x", "vorticity_y", "vorticity_z"]
    );
    assert_eq!(
        terms(&equations, "vorticity_z"),
        [
            "∂²v/∂x∂t as tendency",
            "∂(u*∂v/∂x)/∂x as advection",
            "∂(v*∂v/∂y)/∂x as advection",
            "∂(w*∂v/∂z)/∂x as advection",
            "f*∂u/∂x as coriolis",
            "∂²u/∂y∂t as tendency",
            "∂(u*∂u/∂x)/∂y as advection",
            "∂(v*∂u/∂y)/∂y as advection",
            "∂(w*∂u/∂z)/∂y as advection",
            "f*∂v/∂y as coriolis",
        ]
    );
}

#[test]
fn the_curl_of_a_gradient_is_gone_in_every_frame() {
    for frame in [format!("{PLANE}{CARTESIAN}"), SPHERE.to_owned()] {
        let script = format!("{frame}equation vorticity from curl(momentum)\nrank vorticity");
        let equations = ranked(&script);
        assert_eq!(list(&equations).len(), 3);
        for equation in names(&equations) {
            let found = processes(&equations, &equation);
            assert!(
                found.contains(&"coriolis".to_owned()),
                "{equation}: {found:?}"
            );
            assert!(
                !found.contains(&"pressure_gradient".to_owned()),
                "{equation}: {:?}",
                terms(&equations, &equation)
            );
        }
    }
}

#[test]
fn divergence_and_energy_are_scalar_equations() {
    let made = "equation divergence from div(momentum)
        equation energy from dot(V, momentum)
        rank divergence, energy";
    let equations = ranked(&format!("{PLANE}{CARTESIAN}{made}"));
    assert_eq!(names(&equations), ["divergence", "energy"]);
    let pressure = |equation: &str| {
        let mut found = terms(&equations, equation);
        found.retain(|term| term.ends_with("pressure_gradient"));
        found
    };
    assert_eq!(
        pressure("divergence"),
        ["∂²p/∂x²", "∂²p/∂y²", "∂²p/∂z²"].map(|term| format!("{term} as pressure_gradient"))
    );
    assert_eq!(
        pressure("energy"),
        ["u*∂p/∂x", "v*∂p/∂y", "w*∂p/∂z"].map(|term| format!("{term} as pressure_gradient"))
    );
    // The rotation does no work.
    assert_eq!(
        processes(&equations, "energy"),
        ["advection", "pressure_gradient", "tendency"]
    );
}

#[test]
fn vector_equations_add_up_and_are_named_on() {
    let made = "equation friction: ∂V/∂t as tendency = -f*V as drag
        equation sum from momentum + 2*friction
        equation spin from curl(sum)
        equation weight from (1/f)*div(sum)
        rank sum, spin, weight";
    let equations = ranked(&format!("{PLANE}{CARTESIAN}{made}"));
    assert_eq!(
        names(&equations),
        [
            "sum_x", "sum_y", "sum_z", "spin_x", "spin_y", "spin_z", "weight"
        ]
    );
    assert!(terms(&equations, "sum_x").contains(&"3*∂u/∂t as tendency".to_owned()));
}

fn codes(script: &str) -> Vec<String> {
    let output = answers(script);
    assert_eq!(output["outcome"], "invalid", "{script}");
    let found = list(&output["diagnostics"]).iter();
    let errors = found.filter(|found| found["severity"] == "error");
    errors.map(|found| text(&found["code"])).collect()
}

#[test]
fn vectors_want_a_frame() {
    let without = "vector V = (u, v, w)\nequation e: ∂V/∂t = -grad(p)\n";
    assert_eq!(codes(&format!("{PLANE}{without}rank")), ["no-frame"]);
    let made = "equation e: ∂u/∂t = -∂p/∂x\nequation c from curl(e)\n";
    assert_eq!(
        codes(&format!("{PLANE}{made}rank")),
        ["no-frame", "not-a-vector"]
    );
    let strange = "frame cartesian (x, y, height)\n";
    assert_eq!(
        codes(&format!("{PLANE}{strange}equation e: ∂u/∂t = -∂p/∂x\nrank")),
        ["unknown-name"]
    );
}

#[test]
fn what_is_no_vector_is_told() {
    let given = format!("{PLANE}frame cartesian (x, y, z)\nvector V = (u, v, w)\n");
    for equation in [
        "equation e: ∂V/∂t = -p",
        "equation e: ∂V/∂t = -grad(V)",
        "equation e: ∂V/∂t = -curl(p)",
        "equation e: ∂V/∂t = -cross(V, p)",
        "equation e: ∂u/∂t = -dot(V, u)",
        "vector W = (u, v)\nequation e: ∂W/∂t = -grad(p)",
        "vector W = (V, u, v)\nequation e: ∂V/∂t = -grad(p)",
        "velocity u\nequation e: ∂u/∂t = -∂p/∂x",
    ] {
        assert_eq!(
            codes(&format!("{given}{equation}\nrank")),
            ["not-a-vector"],
            "{equation}"
        );
    }
}

#[test]
fn combinations_of_vector_equations_that_make_no_sense_are_refused() {
    let given = format!("{PLANE}{CARTESIAN}equation shore: ∂u/∂t = -∂p/∂x\n");
    let code = |made: &str| codes(&format!("{given}{made}\nrank"));
    assert_eq!(code("equation e from momentum + shore"), ["not-a-vector"]);
    assert_eq!(code("equation e from curl(shore)"), ["not-a-vector"]);
    assert_eq!(code("equation e from grad(momentum)"), ["not-a-vector"]);
    assert_eq!(code("equation e from V*momentum"), ["not-a-vector"]);
    assert_eq!(
        code("equation e from dot(momentum, momentum)"),
        ["not-a-relation"]
    );
    assert_eq!(
        code("equation e from curl(c)\nequation c from curl(e)"),
        ["circular-definition"]
    );
    // No vorticity has a source.
    assert_eq!(
        code("equation c from curl(momentum)\nequation e from div(c)"),
        ["one-term"]
    );
    assert_eq!(
        code("claim leading momentum = tendency"),
        ["unknown-equation"]
    );
}
