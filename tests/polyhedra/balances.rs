//! Every system in `tests/balances` has exactly the balances that stand in its file.

use std::collections::BTreeMap;
use std::fs;
use std::ops::ControlFlow;
use std::path::PathBuf;

use num_rational::BigRational;
use num_traits::Zero;
use scalewright::number::Exponent;
use scalewright::polyhedra::prevariety::{
    Candidate, Ending, Equation, LinearForm, System, Term, balances, contradiction,
};
use serde_json::Value;

use super::largest_at;

/// A file of `tests/balances`.
struct Case {
    name: String,
    file: Value,
    system: System,
}

fn cases() -> Vec<Case> {
    let folder = PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("tests/balances");
    let entries = fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().path());
    let mut paths: Vec<PathBuf> = entries
        .filter(|path| path.extension().is_some_and(|e| e == "json"))
        .collect();
    paths.sort();
    assert!(paths.len() > 50, "the cases are there");
    paths.iter().map(read_case).collect()
}

fn read_case(path: &PathBuf) -> Case {
    let file: Value = serde_json::from_str(&fs::read_to_string(path).unwrap()).unwrap();
    let system = System {
        n_unknowns: items(&file["unknowns"]).len(),
        equations: fields(&file["equations"])
            .map(|(_, terms)| read_equation(&file, terms))
            .collect(),
        within: Vec::new(),
    };
    let name = path.file_stem().unwrap().to_string_lossy().into_owned();
    Case { name, file, system }
}

fn items(value: &Value) -> &Vec<Value> {
    value.as_array().expect("a list")
}

fn fields(value: &Value) -> impl Iterator<Item = (&String, &Value)> {
    value.as_object().expect("an object").iter()
}

fn rational(value: &Value) -> BigRational {
    value.as_str().expect("a number as text").parse().unwrap()
}

fn vector(file: &Value, exponents: &Value) -> Vec<BigRational> {
    let exponent = |unknown: &Value| match exponents.get(unknown.as_str().unwrap()) {
        Some(value) => rational(value),
        None => BigRational::zero(),
    };
    items(&file["unknowns"]).iter().map(exponent).collect()
}

fn read_equation(file: &Value, terms: &Value) -> Equation {
    let mut processes: Vec<&str> = Vec::new();
    let terms = items(terms).iter().enumerate().map(|(index, term)| {
        let process = match term[1].as_str() {
            None => 1_000 + index,
            Some(name) => match processes.iter().position(|&p| p == name) {
                Some(process) => process,
                None => {
                    processes.push(name);
                    processes.len() - 1
                }
            },
        };
        let exponents = vector(file, &term[3]);
        Term {
            process,
            exponents: exponents
                .iter()
                .map(|e| Exponent::from_rational(e).unwrap())
                .collect(),
            constant: rational(&term[2]),
        }
    });
    Equation {
        terms: terms.collect(),
        required: Vec::new(),
    }
}

fn form(file: &Value, value: &Value) -> LinearForm {
    LinearForm {
        exponents: vector(file, &value[1]),
        constant: rational(&value[0]),
    }
}

fn forms(file: &Value, value: &Value) -> Vec<LinearForm> {
    items(value).iter().map(|row| form(file, row)).collect()
}

/// The attaining terms by name, equations without an unknown left out.
fn named(case: &Case, attaining: &[Vec<usize>]) -> BTreeMap<String, Vec<String>> {
    let equations = fields(&case.file["equations"]).zip(attaining);
    let name = |terms: &Value, &term: &usize| terms[term][0].as_str().unwrap().to_string();
    equations
        .filter(|(_, attaining)| !attaining.is_empty())
        .map(|((equation, terms), attaining)| {
            (
                equation.clone(),
                attaining.iter().map(|term| name(terms, term)).collect(),
            )
        })
        .collect()
}

fn stated_names(balance: &Value) -> BTreeMap<String, Vec<String>> {
    let names = |terms: &Value| {
        items(terms)
            .iter()
            .map(|t| t.as_str().unwrap().to_string())
            .collect()
    };
    fields(&balance["attaining"])
        .map(|(equation, terms)| (equation.clone(), names(terms)))
        .collect()
}

fn sorted(mut forms: Vec<LinearForm>) -> Vec<LinearForm> {
    forms.sort_by(|a, b| (&a.exponents, &a.constant).cmp(&(&b.exponents, &b.constant)));
    forms
}

fn check_candidate(case: &Case, found: &Candidate, stated: &Value) {
    let (name, file) = (&case.name, &case.file);
    assert_eq!(
        found.dimension as u64,
        stated["dimension"].as_u64().unwrap(),
        "{name}"
    );
    assert_eq!(found.equalities, forms(file, &stated["zero"]), "{name}");
    let inequalities = found.inequalities.iter().map(|i| i.form.clone()).collect();
    let expected = forms(file, &stated["not_negative"]);
    assert_eq!(sorted(inequalities), sorted(expected), "{name}");
    let directions: Vec<Vec<BigRational>> = items(&stated["directions"])
        .iter()
        .map(|d| vector(file, d))
        .collect();
    assert_eq!(found.directions, directions, "{name}");
    for (range, stated) in found.ranges.iter().zip(items(&stated["ranges"])) {
        let end = |value: &Value| (!value.is_null()).then(|| rational(value));
        assert_eq!(*range, (end(&stated[0]), end(&stated[1])), "{name}");
    }
    if found.dimension == 0 {
        let point: Vec<BigRational> = items(&stated["point"]).iter().map(rational).collect();
        assert_eq!(found.point, point, "{name}");
    }
    assert_eq!(
        largest_at(&case.system, &found.point),
        found.attaining,
        "{name}"
    );
}

#[test]
fn all_balances_of_all_systems_are_found_and_no_others() {
    for case in cases() {
        let found = balances(&case.system, &mut |_| ControlFlow::Continue(()));
        assert_eq!(found.ending, Ending::Complete, "{}", case.name);
        let stated = items(&case.file["balances"]);
        let found_names: Vec<_> = found
            .candidates
            .iter()
            .map(|c| named(&case, &c.attaining))
            .collect();
        for names in &found_names {
            let is_stated = stated.iter().any(|balance| stated_names(balance) == *names);
            assert!(is_stated, "{}: found only: {names:?}", case.name);
        }
        for balance in stated {
            let names = stated_names(balance);
            let mut same = found
                .candidates
                .iter()
                .zip(&found_names)
                .filter(|(_, n)| **n == names);
            let Some((candidate, _)) = same.next() else {
                panic!("{}: not found: {names:?}", case.name);
            };
            assert!(
                same.next().is_none(),
                "{}: found twice: {names:?}",
                case.name
            );
            check_candidate(&case, candidate, balance);
        }
    }
}

#[test]
fn published_points_lie_in_a_balance() {
    let mut n_points = 0;
    for case in cases() {
        let found = balances(&case.system, &mut |_| ControlFlow::Continue(()));
        for point in case.file.get("published").into_iter().flat_map(items) {
            let point: Vec<BigRational> = items(point).iter().map(rational).collect();
            let lies_in = |candidate: &Candidate| {
                candidate
                    .equalities
                    .iter()
                    .all(|form| form.at(&point).is_zero())
                    && (candidate.inequalities.iter())
                        .all(|inequality| inequality.form.at(&point) >= BigRational::zero())
            };
            assert!(found.candidates.iter().any(lies_in), "{}", case.name);
            n_points += 1;
        }
    }
    assert!(n_points > 20, "most published cases state a point");
}

#[test]
fn systems_without_a_balance_name_their_first_contradiction() {
    let mut n_systems = 0;
    for case in cases() {
        let names: Vec<&String> = fields(&case.file["equations"])
            .map(|(name, _)| name)
            .collect();
        let found = contradiction(&case.system, &mut |_| ControlFlow::Continue(()));
        let Some(stated) = case.file.get("contradictions") else {
            assert_eq!(found, None, "{}", case.name);
            continue;
        };
        let found = found.unwrap_or_default();
        let found: Vec<&str> = found
            .iter()
            .map(|&equation| names[equation].as_str())
            .collect();
        let first: Vec<&str> = items(&stated[0])
            .iter()
            .map(|name| name.as_str().unwrap())
            .collect();
        assert_eq!(found, first, "{}", case.name);
        n_systems += 1;
    }
    assert!(n_systems >= 4, "some systems have no balance");
}
