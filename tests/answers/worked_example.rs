//! The winter low of the Varn coast, worked by hand and by linear programs outside the
//! project (HiGHS, through SciPy), to nine digits.
//!
//! Given: rho = 1.2 kg/m^3, nu = 5 m^2/s, a = 6371 km, phi = 45 deg, Omega = 7.292115e-5
//! 1/s (WGS 84); the box is that of `tests/inputs/first_page.scl`.

use serde_json::Value;

use crate::harness::{answers, entry, list, read, schema_faults};

/// A term: text, process, exponents, size low to high, order, share low to high, verdict.
type Row = (
    &'static str,
    &'static str,
    &'static [(&'static str, &'static str)],
    [f64; 3],
    i64,
    [f64; 3],
    &'static str,
);

#[rustfmt::skip]
const X_MOMENTUM: [Row; 10] = [
    ("∂u/∂t", "tendency", &[("U", "2"), ("L", "-1")], [1.666666667e-5, 9.759000729e-5, 5.714285714e-4], -4, [0.02, 0.0946317439, 0.277053377], "depends"),
    ("u*∂u/∂x", "advection", &[("U", "2"), ("L", "-1")], [1.666666667e-5, 9.759000729e-5, 5.714285714e-4], -4, [0.02, 0.0946317439, 0.277053377], "depends"),
    ("v*∂u/∂y", "advection", &[("U", "2"), ("L", "-1")], [1.666666667e-5, 9.759000729e-5, 5.714285714e-4], -4, [0.02, 0.0946317439, 0.277053377], "depends"),
    ("w*∂u/∂z", "advection", &[("U", "1"), ("W", "1"), ("H", "-1")], [1.666666667e-6, 1.0e-5, 6.0e-5], -5, [9.33333333e-4, 0.00969686821, 0.0290906046], "drops"),
    ("f*v", "coriolis", &[("f", "1"), ("U", "1")], [5.156303966e-4, 1.031260793e-3, 2.062521586e-3], -3, [0.288753022, 1.0, 1.0], "leads"),
    ("e*w", "coriolis_vertical", &[("e", "1"), ("W", "1")], [3.437535977e-7, 1.031260793e-6, 3.093782379e-6], -6, [1.66666667e-4, 0.001, 0.006], "drops"),
    ("u*v*tan(phi)/a", "curvature", &[("U", "2"), ("tan(phi)", "1"), ("a", "-1")], [3.924030764e-6, 1.569612306e-5, 6.278449223e-5], -5, [0.00219745723, 0.0152203237, 0.0304406473], "drops"),
    ("u*w/a", "curvature", &[("U", "1"), ("W", "1"), ("a", "-1")], [2.616020510e-9, 1.569612306e-8, 9.417673835e-8], -8, [1.46497149e-6, 1.52203237e-5, 4.56609710e-5], "drops"),
    ("∂p/∂x/rho", "pressure_gradient", &[("dP", "1"), ("rho", "-1"), ("L", "-1")], [3.703703704e-4, 8.132500608e-4, 1.785714286e-3], -3, [0.179571633, 0.788597866, 1.0], "leads"),
    ("nu*∂²u/∂z²", "friction", &[("nu", "1"), ("U", "1"), ("H", "-2")], [2.5e-7, 5.0e-7, 1.0e-6], -6, [1.4e-4, 4.84843410e-4, 4.84843410e-4], "drops"),
];

#[rustfmt::skip]
const PROCESSES: [(&str, [f64; 3], &str); 7] = [
    ("tendency", [0.02, 0.0946317439, 0.277053377], "depends"),
    ("advection", [0.02, 0.0946317439, 0.277053377], "depends"),
    ("coriolis", [0.288753022, 1.0, 1.0], "leads"),
    ("coriolis_vertical", [1.66666667e-4, 0.001, 0.006], "drops"),
    ("curvature", [0.00219745723, 0.0152203237, 0.0304406473], "drops"),
    ("pressure_gradient", [0.179571633, 0.788597866, 1.0], "leads"),
    ("friction", [1.4e-4, 4.84843410e-4, 4.84843410e-4], "drops"),
];

fn first_page() -> Value {
    let output = answers(&read("inputs/first_page.scl"));
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    output
}

fn answer<'a>(output: &'a Value, request: &str, phenomenon: &str) -> &'a Value {
    let fits = |answer: &&Value| answer["request"] == request && answer["phenomenon"] == phenomenon;
    list(&output["answers"])
        .iter()
        .find(fits)
        .expect("the request is answered")
}

/// Equal to the digits given: nine of them, or all ten.
fn assert_near(found: &Value, expected: f64, what: &str) {
    let found = found.as_f64().unwrap_or(f64::NAN);
    let off = ((found - expected) / expected).abs();
    assert!(off < 5e-9, "{what}: {found}, expected {expected}");
}

fn assert_range(found: &Value, [low, nominal, high]: [f64; 3], what: &str) {
    assert_near(&found["low"], low, what);
    assert_near(&found["nominal"], nominal, what);
    assert_near(&found["high"], high, what);
}

#[test]
fn every_term_of_the_winter_low_has_its_size_share_and_verdict() {
    let output = first_page();
    let rank = answer(&output, "rank", "winter_low");
    let equation = entry(&rank["equations"], "name", "x_momentum");
    let terms = list(&equation["terms"]);
    assert_eq!(terms.len(), X_MOMENTUM.len());
    for (term, (text, process, exponents, size, order, share, verdict)) in
        terms.iter().zip(X_MOMENTUM)
    {
        assert_eq!(term["text"], text);
        assert_eq!(term["process"], process, "{text}");
        assert_eq!(term["number"], "1", "{text}");
        assert_eq!(term["order"], order, "{text}");
        assert_eq!(term["verdict"], verdict, "{text}");
        let found = term["exponents"]
            .as_object()
            .expect("exponents are an object");
        assert_eq!(found.len(), exponents.len(), "{text}");
        for (name, power) in exponents {
            assert_eq!(found[*name], *power, "{text}, {name}");
        }
        assert_range(&term["size"], size, text);
        assert_range(&term["share"], share, text);
    }
    let processes = list(&equation["processes"]);
    assert_eq!(processes.len(), PROCESSES.len());
    for (name, share, verdict) in PROCESSES {
        let process = entry(&equation["processes"], "process", name);
        assert_range(&process["share"], share, name);
        assert_eq!(process["verdict"], verdict, "{name}");
    }
}

#[test]
fn the_winter_low_reduces_to_geostrophic_wind_with_its_error() {
    let output = first_page();
    let reduce = answer(&output, "reduce", "winter_low");
    let equation = entry(&reduce["equations"], "name", "x_momentum");
    assert_eq!(
        equation["reduced"],
        "∂u/∂t + u*∂u/∂x + v*∂u/∂y - f*v = -∂p/∂x/rho"
    );
    assert_near(&equation["error"], 0.0304406473, "error");
    assert_near(&equation["error_sum"], 0.0660617563, "error_sum");
    assert_eq!(equation["first_neglected"], "u*v*tan(phi)/a");
    assert_eq!(equation["balance"], "geostrophic");
    assert_eq!(equation["by_construction"], false);
    assert_eq!(equation["kind"]["u"], "prognostic");
    assert_eq!(equation["kind"]["v"], "diagnostic");
    assert_eq!(list(&equation["lost_derivatives"]).len(), 1);
    assert_eq!(equation["lost_derivatives"][0]["coordinate"], "z");
    assert_eq!(equation["lost_derivatives"][0]["field"], "u");
    assert_eq!(equation["lost_derivatives"][0]["order"], 2);
    let tendency = entry(&equation["kept"], "text", "∂u/∂t");
    let condition = tendency["condition"].as_str().expect("it depends");
    assert!(condition.starts_with("Ro <= 0.1 or "), "{condition}");

    let y = entry(&reduce["equations"], "name", "y_momentum");
    assert_near(&y["error"], 0.0304406473, "error of y_momentum");
    assert_near(&y["error_sum"], 0.0600617563, "error_sum of y_momentum");
    let z = entry(&reduce["equations"], "name", "z_momentum");
    assert_eq!(z["balance"], "hydrostatic");
    assert_eq!(z["by_construction"], true);
    assert_near(&z["error"], 2.10318670e-4, "error of z_momentum");
    assert_eq!(z["first_neglected"], "e*u");
}

#[test]
fn the_squall_vortex_is_cyclostrophic() {
    let output = first_page();
    let rank = answer(&output, "rank", "squall_vortex");
    let terms = &entry(&rank["equations"], "name", "x_momentum")["terms"];
    let sizes = [
        ("u*∂u/∂x", 10.6666667, 1.0),
        ("∂p/∂x/rho", 8.33333333, 0.78125),
        ("w*∂u/∂z", 0.4, 0.0375),
        ("f*v", 4.12504317e-3, 3.86722797e-4),
        ("u*w/a", 6.27844922e-5, 5.88604615e-6),
    ];
    for (text, size, share) in sizes {
        let term = entry(terms, "text", text);
        assert_near(&term["size"]["nominal"], size, text);
        assert_near(&term["share"]["nominal"], share, text);
    }
    let reduce = answer(&output, "reduce", "squall_vortex");
    let x = entry(&reduce["equations"], "name", "x_momentum");
    assert_eq!(x["balance"], "cyclostrophic");
    assert_near(&x["error"], 0.0375, "error");
    assert_near(&x["error_sum"], 0.0380315837, "error_sum");
    let z = entry(&reduce["equations"], "name", "z_momentum");
    let advection = entry(
        &entry(&rank["equations"], "name", "z_momentum")["processes"],
        "process",
        "advection",
    );
    assert_near(
        &advection["share"]["nominal"],
        0.271924323,
        "advection of z_momentum",
    );
    assert_ne!(z["balance"], "hydrostatic");
}

#[test]
fn the_claims_of_the_first_page_hold() {
    let output = first_page();
    let claims = list(&output["claims"]);
    assert_eq!(output["outcome"], "ok");
    assert_eq!(claims.len(), 4);
    assert!(claims.iter().all(|claim| claim["met"] == true));
    assert_range(
        &claims[0]["value"],
        [0.288753022, 1.26807343, 5.56880828],
        "coriolis ~ pressure_gradient",
    );
    assert_range(
        &claims[1]["value"],
        [0.0323228940, 0.0946317439, 0.277053377],
        "advection << coriolis",
    );
    assert_range(
        &claims[3]["value"],
        [1.69952702e-6, 9.95141127e-6, 5.82694979e-5],
        "U^2/(g*L)",
    );
}

#[test]
fn pressure_along_the_vertical_decides_what_holds_by_construction() {
    // The same low with three scales of the pressure along z.
    let script = |pressure: &str| {
        format!(
            "{}\n{pressure}\nreduce z_momentum\nrank z_momentum\n",
            "scale U = 10 m/s\nscale W = 1 cm/s\nscale L = 1024.6950766 km\nscale H = 10 km\nscale T = L/U\nscale dP = 10 hPa
             constant g = 9.80665 m/s^2\nconstant rho = 1.2 kg/m^3\ncoordinate x, y ~ L\ncoordinate z ~ H\ncoordinate t ~ T
             field u, v(x, y, z, t) ~ U\nfield w(x, y, z, t) ~ W\nvelocity (u, v, w) along (x, y, z)
             equation z_momentum: D_t(w) = -d_z(p)/rho as pressure_gradient - g as gravity
             balance hydrostatic: z_momentum { pressure_gradient, gravity }"
        )
    };
    let reduced = |pressure: &str| {
        let output = answers(&script(pressure));
        assert_eq!(output["outcome"], "ok", "{:#}", output["diagnostics"]);
        output["answers"][0]["equations"][0].clone()
    };
    let same = reduced("field p(x, y, t, z) ~ dP");
    assert_eq!(same["warnings"][0]["code"], "lone-leading-term");
    assert!(same["balance"].is_null());
    let constant =
        reduced("scale P_0 = 1000 hPa\nfield p(x, y, t, z varying P_0) ~ P_0 varying dP");
    assert_eq!(
        (&constant["balance"], &constant["by_construction"]),
        (&"hydrostatic".into(), &false.into())
    );
    let weight = reduced("scale P_0 = rho*g*H\nfield p(x, y, t, z varying P_0) ~ P_0 varying dP");
    assert_eq!(
        (&weight["balance"], &weight["by_construction"]),
        (&"hydrostatic".into(), &true.into())
    );
}
