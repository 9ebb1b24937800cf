//! Scalewright: a small language for scale analysis.

pub mod diagnostic;
pub mod limits;
pub mod number;
pub mod polyhedra;
pub mod source;
pub mod syntax;
pub mod units;
