//! Metric terms of the published cases: each component of an operation against what the
//! program makes of it, process by process. Any equal form is right, so both are compared
//! by their values, with all derivatives, at one place.

use scalewright::model::declarations::gather;
use scalewright::model::{Level, Model, frames};
use scalewright::source::FileId;
use scalewright::syntax::ast::{EquationBody, Expr};
use scalewright::syntax::parser;

use crate::harness::jets::Place;
use crate::harness::{Tally, list, read_records, text};

/// The operation that a component belongs to: the case, a word of its name, the operation,
/// and its frame.
#[rustfmt::skip]
const OPERATIONS: [(&str, &str, &str, &str); 8] = [
    ("cylindrical_acceleration", "",            "D_t(V)",             CYLINDRICAL),
    ("spherical_acceleration",   "",            "D_t(V)",             SPHERICAL),
    ("divergence",               "cylindrical", "div(V)",             CYLINDRICAL),
    ("divergence",               "spherical",   "div(V)",             SPHERICAL),
    ("cylindrical_laplacian",    "lap(p)",      "laplacian(p)",       CYLINDRICAL),
    ("cylindrical_laplacian",    "lap(V)",      "laplacian(V)",       CYLINDRICAL),
    ("spherical_curl",           "",            "curl(V)",            SPHERICAL),
    ("coriolis",                 "",            "2*cross(Omega_v, V) as coriolis", SPHERICAL),
];

const CYLINDRICAL: &str = "frame cylindrical (r, theta, z)  coordinate r, theta, z, t ~ 1
    field u, v, w, p(r, theta, z, t) ~ 1";

const SPHERICAL: &str = "frame spherical (lambda, phi, r)  coordinate lambda, phi, r, t ~ 1
    field u, v, w, p(lambda, phi, r, t) ~ 1
    vector Omega_v = (0, Omega*cos(phi), Omega*sin(phi))";

#[test]
fn metric_terms() {
    let mut tally = Tally::default();
    for record in read_records("published/cases/frames.json") {
        let case = text(&record["case"]);
        let components = list(&record["checks"]).iter();
        for component in components.filter(|check| check["check"] == "component") {
            tally.begin(&format!("{case}, {}", component["of"]));
            compare(&mut tally, &case, component);
        }
    }
    tally.finish("published, metric terms", 18, 47);
}

fn compare(tally: &mut Tally, case: &str, component: &serde_json::Value) {
    let of = text(&component["of"]);
    let mut operations = OPERATIONS.iter();
    let operation = operations.find(|(name, word, ..)| *name == case && of.contains(word));
    let Some((_, _, operation, frame)) = operation else {
        return tally.fault("no such operation");
    };
    let model = resolved(&format!(
        "{frame}  constant Omega = 1  vector V = (u, v, w)  velocity V\nequation e: {operation} = 0"
    ));
    // `curl, lambda` is the component along lambda; a scalar has no coordinate.
    let along = of.rsplit([',', ' ']).next().unwrap_or_default();
    let named = format!("e_{along}");
    let equation = model.equation(&named).or_else(|| model.equation("e"));
    let Some(EquationBody::Written { left, .. }) = equation.map(|idx| &model.equations[idx].body)
    else {
        return tally.fault("no such component");
    };
    let place = Place::new(&model);
    let found = place.by_process(&frames::expanded(left, &model).expect("a scalar"));
    let mut expected = std::collections::BTreeMap::<String, f64>::new();
    for term in list(&component["terms"]) {
        let value = place.jet(&parsed(&text(&term["text"]))).value();
        *expected.entry(text(&term["process"])).or_default() += value;
    }
    tally.same(
        "processes",
        found.keys().collect::<Vec<_>>(),
        expected.keys().collect(),
    );
    for (process, value) in &expected {
        tally.number(
            process,
            &found.get(process).copied().into(),
            &(*value).into(),
            1e-12,
        );
    }
}

fn resolved(script: &str) -> Model {
    let (script, faults) = parser::parse(script, FileId::default());
    assert!(faults.is_empty(), "{faults:?}");
    let (mut model, faults) = gather(vec![(Level::Script, script)]);
    assert!(faults.is_empty(), "{faults:?}");
    let faults = frames::resolve(&mut model);
    assert!(faults.is_empty(), "{faults:?}");
    model
}

fn parsed(text: &str) -> Expr {
    let (expr, faults) = parser::parse_expression(text, FileId::default());
    assert!(faults.is_empty(), "{faults:?}");
    expr
}
