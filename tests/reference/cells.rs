//! The cells of random systems of terms, exactly.

use std::ops::ControlFlow;

use num_rational::BigRational;
use scalewright::number::Exponent;
use scalewright::polyhedra::prevariety::{Ending, Equation, System, Term, balances};
use serde_json::{Value, json};

use crate::harness::{Tally, list, read_records, text};

#[test]
fn cells_of_random_systems() {
    let mut tally = Tally::default();
    for record in read_records("reference/cells.json") {
        tally.begin(&text(&record["case"]));
        let system = system(&record);
        let found = balances(&system, &mut |_| ControlFlow::Continue(()));
        tally.same("ending", found.ending, Ending::Complete);
        let mut cells: Vec<Value> = (found.candidates.iter())
            .map(|candidate| {
                json!({
                    "dimension": candidate.dimension,
                    "attaining": candidate.attaining,
                    "ranges": candidate.ranges.iter().map(range).collect::<Vec<Value>>(),
                })
            })
            .collect();
        let mut stored = list(&record["cells"]).to_vec();
        for cells in [&mut cells, &mut stored] {
            cells.sort_by_key(|cell| cell["attaining"].to_string());
        }
        tally.same("cells", cells.len(), stored.len());
        for (cell, expected) in cells.iter().zip(&stored) {
            tally.same("cell", cell, expected);
        }
    }
    tally.finish("reference, cells", 48, 230);
}

fn range((low, high): &(Option<BigRational>, Option<BigRational>)) -> Value {
    let end = |end: &Option<BigRational>| json!(end.as_ref().map(BigRational::to_string));
    json!([end(low), end(high)])
}

fn system(record: &Value) -> System {
    let n_unknowns = record["unknowns"].as_u64().expect("a number of unknowns");
    System {
        n_unknowns: usize::try_from(n_unknowns).expect("a small number"),
        equations: list(&record["equations"]).iter().map(equation).collect(),
        within: Vec::new(),
    }
}

fn equation(terms: &Value) -> Equation {
    let mut processes: Vec<String> = Vec::new();
    let terms = list(terms).iter().enumerate().map(|(place, term)| {
        let label = match &term[0] {
            Value::String(name) => name.clone(),
            _ => format!("term {place}"),
        };
        let known = processes.iter().position(|found| *found == label);
        let process = known.unwrap_or(processes.len());
        if known.is_none() {
            processes.push(label);
        }
        Term {
            process,
            exponents: (list(&term[2]).iter())
                .map(|exponent| Exponent::from_rational(&rational(exponent)).expect("a small one"))
                .collect(),
            constant: rational(&term[1]),
        }
    });
    Equation {
        terms: terms.collect(),
        required: Vec::new(),
    }
}

fn rational(value: &Value) -> BigRational {
    text(value).parse().expect("a rational number")
}
