//! Random systems as scripts: what `find` answers, against the definition of a balance.
//! Coefficients are powers of ten, so that no two known sizes come near one another
//! without being equal.

use std::collections::BTreeMap;
use std::fmt::Write as _;

use proptest::prelude::*;
use serde_json::Value;

use super::answered;
use crate::harness::{answers_to, list};

const NAMES: [&str; 3] = ["X", "Y", "Z"];

/// `10^decade * X^a * Y^b * ...`, of one of three processes or by itself.
#[derive(Debug, Clone)]
struct Term {
    decade: i32,
    exponents: Vec<i32>,
    process: usize,
}

fn term(n: usize) -> impl Strategy<Value = Term> {
    (-6..=6, prop::collection::vec(-2..=2, n), 0..9_usize).prop_map(
        |(decade, exponents, process)| Term {
            decade,
            exponents,
            process,
        },
    )
}

fn system() -> impl Strategy<Value = (usize, Vec<Vec<Term>>)> {
    (1..=3_usize).prop_flat_map(|n| {
        let equations = prop::collection::vec(prop::collection::vec(term(n), 2..=4), 1..=n);
        equations.prop_map(move |equations| (n, equations))
    })
}

fn label(place: usize, term: &Term) -> String {
    match term.process {
        0 | 1 => format!("p{}", term.process),
        _ => format!("t{place}"),
    }
}

fn script(n: usize, equations: &[Vec<Term>]) -> String {
    let mut text: String = NAMES[..n]
        .iter()
        .map(|name| format!("scale {name} in 1\n"))
        .collect();
    for (idx, terms) in equations.iter().enumerate() {
        let written = terms.iter().enumerate().map(|(place, term)| {
            let powers: String =
                NAMES
                    .iter()
                    .zip(&term.exponents)
                    .fold(String::new(), |mut all, (name, power)| {
                        let _ = write!(all, "*{name}^({power})");
                        all
                    });
            format!("10^({}){powers} as {}", term.decade, label(place, term))
        });
        let _ = writeln!(
            text,
            "equation e{idx}: {} = 0",
            written.collect::<Vec<_>>().join(" + ")
        );
    }
    text + "find " + &NAMES[..n].join(", ")
}

/// The logarithm to base 10 of a term at a point.
fn height(term: &Term, point: &[f64]) -> f64 {
    let powers = term.exponents.iter().zip(point);
    f64::from(term.decade) + powers.map(|(power, x)| f64::from(*power) * x).sum::<f64>()
}

fn largest(terms: &[Term], point: &[f64]) -> Vec<String> {
    let top = terms
        .iter()
        .map(|term| height(term, point))
        .fold(f64::NEG_INFINITY, f64::max);
    let attains = |term: &Term| height(term, point) > top - 1e-9;
    let mut found: Vec<String> = (terms.iter().enumerate())
        .filter(|(_, term)| attains(term))
        .map(|(place, term)| label(place, term))
        .collect();
    found.sort();
    found.dedup();
    found
}

fn holds_unknown(terms: &[Term]) -> bool {
    terms
        .iter()
        .any(|term| term.exponents.iter().any(|power| *power != 0))
}

fn is_balance(equations: &[Vec<Term>], point: &[f64]) -> bool {
    equations
        .iter()
        .all(|terms| !holds_unknown(terms) || largest(terms, point).len() > 1)
}

/// The logarithm to base 10 of a product in the answer, the unknowns at a point.
fn product(found: &Value, point: &BTreeMap<&str, f64>) -> f64 {
    let number = match &found["number"] {
        Value::String(text) => match text.split_once('/') {
            Some((above, below)) => above.parse::<f64>().unwrap() / below.parse::<f64>().unwrap(),
            None => text.parse().unwrap(),
        },
        other => other.as_f64().unwrap(),
    };
    let exponents = found["exponents"].as_object().unwrap().iter();
    let power = |text: &Value| {
        let text = text.as_str().unwrap();
        let (above, below) = text.split_once('/').unwrap_or((text, "1"));
        above.parse::<f64>().unwrap() / below.parse::<f64>().unwrap()
    };
    number.log10()
        + exponents
            .map(|(name, text)| power(text) * point[name.as_str()])
            .sum::<f64>()
}

/// Whether a point lies in a candidate, its ends included.
fn lies_in(candidate: &Value, point: &BTreeMap<&str, f64>) -> bool {
    let scales = candidate["scales"].as_object().unwrap();
    let given = scales.iter().filter(|(_, found)| !found.is_null());
    let near = |a: f64, b: f64| (a - b).abs() < 1e-7;
    let mut fits = given
        .into_iter()
        .all(|(name, found)| near(product(found, point), point[name.as_str()]));
    for free in list(&candidate["free"]) {
        let own = point[free["scale"].as_str().unwrap()];
        fits &= list(&free["ends"]["low"])
            .iter()
            .all(|end| product(end, point) < own + 1e-7);
        fits &= list(&free["ends"]["high"])
            .iter()
            .all(|end| product(end, point) > own - 1e-7);
    }
    fits
}

/// Points where some n ties of terms hold, for all choices of pairs of terms.
fn tie_points(n: usize, equations: &[Vec<Term>]) -> Vec<Vec<f64>> {
    let mut ties: Vec<(Vec<f64>, f64)> = Vec::new();
    for terms in equations.iter().filter(|terms| holds_unknown(terms)) {
        for (i, a) in terms.iter().enumerate() {
            for b in &terms[..i] {
                let row = a
                    .exponents
                    .iter()
                    .zip(&b.exponents)
                    .map(|(p, q)| f64::from(p - q));
                ties.push((row.collect(), f64::from(b.decade - a.decade)));
            }
        }
    }
    let mut points = Vec::new();
    let mut chosen: Vec<usize> = (0..n).collect();
    while chosen.last().is_some_and(|last| *last < ties.len()) {
        let rows = chosen.iter().map(|tie| ties[*tie].clone()).collect();
        points.extend(solved(rows));
        let Some(place) = (0..n)
            .rev()
            .find(|place| chosen[*place] + n - place < ties.len())
        else {
            break;
        };
        chosen[place] += 1;
        for later in place + 1..n {
            chosen[later] = chosen[later - 1] + 1;
        }
    }
    points
}

fn solved(mut rows: Vec<(Vec<f64>, f64)>) -> Option<Vec<f64>> {
    let n = rows.len();
    for column in 0..n {
        let pivot = (column..n).max_by(|a, b| {
            rows[*a].0[column]
                .abs()
                .total_cmp(&rows[*b].0[column].abs())
        })?;
        rows.swap(column, pivot);
        if rows[column].0[column].abs() < 1e-9 {
            return None;
        }
        let lead = rows[column].clone();
        for (place, row) in rows
            .iter_mut()
            .enumerate()
            .filter(|(place, _)| *place != column)
        {
            let _ = place;
            let factor = row.0[column] / lead.0[column];
            row.0
                .iter_mut()
                .zip(&lead.0)
                .for_each(|(entry, above)| *entry -= factor * above);
            row.1 -= factor * lead.1;
        }
    }
    Some(
        (0..n)
            .map(|place| rows[place].1 / rows[place].0[place])
            .collect(),
    )
}

fn named(n: usize, point: &[f64]) -> BTreeMap<&'static str, f64> {
    NAMES[..n]
        .iter()
        .copied()
        .zip(point.iter().copied())
        .collect()
}

/// The processes that a candidate names, in the form of [`largest`].
fn stated(candidate: &Value, idx: usize) -> Vec<String> {
    let processes = list(&candidate["balances"][format!("e{idx}")]).iter();
    let mut names: Vec<String> = processes
        .map(|name| name.as_str().unwrap().to_owned())
        .collect();
    names.sort();
    names
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(200))]

    #[test]
    fn found_balances_balance_and_none_is_missed((n, equations) in system()) {
        let output = answered(&script(n, &equations));
        let answers = answers_to(&output, "find");
        prop_assert_eq!(answers.len(), 1, "{}", output["diagnostics"]);
        let candidates = list(&answers[0]["candidates"]);
        for candidate in candidates.iter().filter(|found| list(&found["free"]).is_empty()) {
            let value = |name: &&str| candidate["scales"][*name]["value"]["nominal"].as_f64().unwrap().log10();
            let point: Vec<f64> = NAMES[..n].iter().map(value).collect();
            prop_assert!(is_balance(&equations, &point));
            for (idx, terms) in equations.iter().enumerate().filter(|(_, terms)| holds_unknown(terms)) {
                prop_assert_eq!(stated(candidate, idx), largest(terms, &point));
            }
        }
        for point in tie_points(n, &equations) {
            if is_balance(&equations, &point) {
                let point = named(n, &point);
                prop_assert!(candidates.iter().any(|found| lies_in(found, &point)), "{point:?}");
            }
        }
    }
}
