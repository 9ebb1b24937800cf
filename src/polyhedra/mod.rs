//! Exact polyhedral calculation with affine forms in the logarithms of scales. It knows
//! nothing of scripts, equations or units: rational numbers in, rational numbers out.
//!
//! - `simplex`: linear programs;
//! - `shares`: highest and lowest shares of terms over a box of ranges;
//! - `prevariety`: all dominant balances of a system, with `contests`, `search`,
//!   `candidates` and `contradictions`;
//! - `polygon`: convex polygons cut by straight lines.
//!
//! Below them stand `whole` (whole numbers that are fast while small and never
//! overflow), `tableau` (the pivots), `cells` (polyhedra by corners and directions) and
//! `linear` (linear forms and equations between unknowns).

mod candidates;
mod cells;
mod contests;
mod contradictions;
mod linear;
mod polygon;
pub mod prevariety;
mod search;
mod shares;
mod simplex;
mod tableau;
mod whole;

pub use linear::LinearForm;
pub use polygon::{Point, Polygon, Split};
pub use shares::{Affine, highest, highest_against, lowest, lowest_of_process};
pub use simplex::{Condition, Outcome, Program, Relation, maximise};
