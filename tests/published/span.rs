//! Exponent vectors and their rank, in exact rational numbers.

use std::collections::BTreeMap;

use num_rational::Rational64;
use num_traits::Zero;
use serde_json::Value;

use crate::harness::{list, sorted_map, text};

/// The exponents of a product of powers, by symbol, without zeros.
pub(crate) type Vector = BTreeMap<String, Rational64>;

/// The exponents of each entry of a list.
pub(crate) fn vectors(entries: &Value, field: &str) -> Vec<Vector> {
    let vector = |entry: &Value| {
        let exponents = sorted_map(&entry[field]).into_iter();
        exponents
            .map(|(name, power)| (name.clone(), rational(power)))
            .collect()
    };
    list(entries).iter().map(vector).collect()
}

fn rational(value: &Value) -> Rational64 {
    text(value)
        .parse()
        .expect("an exponent is a rational number")
}

/// The largest number of independent vectors, by elimination.
pub(crate) fn rank(rows: &[Vector]) -> usize {
    let mut rest = rows.to_vec();
    let mut n_independent = 0;
    while let Some(pivot) = rest.pop() {
        let Some((symbol, lead)) = pivot
            .iter()
            .next()
            .map(|(name, lead)| (name.clone(), *lead))
        else {
            continue;
        };
        n_independent += 1;
        for row in &mut rest {
            let factor = row
                .get(&symbol)
                .map_or_else(Rational64::zero, |power| power / lead);
            subtract(row, &pivot, factor);
        }
    }
    n_independent
}

fn subtract(row: &mut Vector, pivot: &Vector, factor: Rational64) {
    for (symbol, power) in pivot {
        let entry = row.entry(symbol.clone()).or_insert_with(Rational64::zero);
        *entry -= factor * power;
    }
    row.retain(|_, power| !power.is_zero());
}

#[test]
fn rank_counts_independent_vectors() {
    let rows: Value = serde_json::from_str(
        r#"[{"p": {"U": "1", "L": "-1/2"}}, {"p": {"U": "-2", "L": "1"}}, {"p": {"L": "3"}}, {"p": {}}]"#,
    )
    .expect("the text is JSON");
    assert_eq!(rank(&vectors(&rows, "p")), 2);
    assert_eq!(rank(&[]), 0);
}
