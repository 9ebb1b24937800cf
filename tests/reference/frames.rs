//! What vector expressions come to in each frame, as the program writes them: the texts that
//! SymPy found equal to the same expressions from Cartesian coordinates.

use scalewright::model::declarations::gather;
use scalewright::model::{Level, Model, frames};
use scalewright::source::FileId;
use scalewright::syntax::ast::{EquationBody, Expr};
use scalewright::syntax::{parser, print};

use crate::harness::jets::Place;
use crate::harness::{Tally, list, read_records, text};

#[test]
fn components_of_vector_expressions() {
    let mut tally = Tally::default();
    for record in read_records("reference/frames.json") {
        tally.begin(&text(&record["case"]));
        let found = written_out(&text(&record["script"]));
        let expected: Vec<String> = list(&record["texts"]).iter().map(text).collect();
        tally.same("texts", found, expected);
    }
    tally.finish("reference, frames", 95, 95);
}

/// What the rules make of `div(curl(V))` and `curl(grad(p))` when they are applied one after the
/// other, at a place where no derivative of the fields is special.
#[test]
fn a_curl_has_no_divergence_and_a_gradient_no_curl() {
    for frame in [
        "cartesian (x, y, z)",
        "cylindrical (x, y, z)",
        "spherical (x, y, z)",
    ] {
        let names = "coordinate x, y, z, t ~ 1  field u, v, w, p(x, y, z, t) ~ 1";
        let head = format!("frame {frame}  {names}  vector V = (u, v, w)  velocity V");
        let texts = |operation: &str| written_out(&format!("{head}  equation e: {operation} = 0"));
        let curl = texts("curl(V)").join(", ");
        let gradient = texts("grad(p)").join(", ");
        for operation in [format!("div(({curl}))"), format!("curl(({gradient}))")] {
            for text in texts(&operation) {
                let model = resolved(&head);
                let (expr, _) = parser::parse_expression(&text, FileId::default());
                let value = Place::new(&model).jet(&expr).value();
                assert!(value.abs() < 1e-12, "{frame}, {operation}: {value}");
            }
        }
    }
}

/// The left sides of the equations of a script, vector operations written out.
fn written_out(script: &str) -> Vec<String> {
    let model = resolved(script);
    let sides = model.equations.iter().map(|decl| match &decl.body {
        EquationBody::Written { left, .. } => side(left, &model),
        EquationBody::Made(_) => String::new(),
    });
    sides.collect()
}

fn resolved(script: &str) -> Model {
    let (script, faults) = parser::parse(script, FileId::default());
    assert!(faults.is_empty(), "{faults:?}");
    let (mut model, _) = gather(vec![(Level::Script, script)]);
    let faults = frames::resolve(&mut model);
    assert!(faults.is_empty(), "{faults:?}");
    model
}

fn side(expr: &Expr, model: &Model) -> String {
    match frames::expanded(expr, model) {
        Ok(expr) => print::expression(&expr),
        Err(error) => format!("{error:?}"),
    }
}
