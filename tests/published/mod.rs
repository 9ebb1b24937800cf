//! Tests against sources outside the project.

mod standard_atmosphere;
mod units;
