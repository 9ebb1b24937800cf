//! The exact polyhedra, held against other solvers, brute force and hand calculation.

mod balances;
mod shares;
mod simplex;

use num_rational::BigRational;

/// `numer/denom`.
fn ratio(numer: i64, denom: i64) -> BigRational {
    BigRational::new(numer.into(), denom.into())
}
