//! x
pub mod escape;
pub mod math;
