//! The exact polyhedra, held against other solvers, brute force and hand calculation.

mod balances;
mod prevariety;
mod shares;
mod simplex;

use num_rational::BigRational;
use scalewright::polyhedra::prevariety::{System, Term};

/// `numer/denom`.
fn ratio(numer: i64, denom: i64) -> BigRational {
    BigRational::new(numer.into(), denom.into())
}

/// For each equation that holds an unknown the terms that are the largest at a point, by
/// the definition alone.
fn largest_at(system: &System, point: &[BigRational]) -> Vec<Vec<usize>> {
    let size = |term: &Term| -> BigRational {
        let products = term
            .exponents
            .iter()
            .zip(point)
            .map(|(e, x)| e.to_rational() * x);
        products.sum::<BigRational>() + &term.constant
    };
    let mut largest = Vec::new();
    for equation in &system.equations {
        let sizes: Vec<BigRational> = equation.terms.iter().map(size).collect();
        let attains = |index: &usize| Some(&sizes[*index]) == sizes.iter().max();
        largest.push(match equation.holds_unknown() {
            true => (0..sizes.len()).filter(attains).collect(),
            false => Vec::new(),
        });
    }
    largest
}
