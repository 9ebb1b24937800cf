//! Exact polyhedral calculation with affine forms in the logarithms of scales. It knows
//! nothing of scripts, equations or units: rational numbers in, rational numbers out.
//!
//! - `simplex`: linear programs;
//! - `shares`: highest and lowest shares of terms over a box of ranges.
//!
//! Below them stand `whole`, whole numbers that are fast while small and never overflow,
//! and `tableau`, the pivots.

mod shares;
mod simplex;
mod tableau;
mod whole;

pub use shares::{Affine, highest, highest_against, lowest, lowest_of_process};
pub use simplex::{Condition, Outcome, Program, Relation, maximise};
