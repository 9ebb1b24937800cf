//! The exact core: scales that can be put back, dimensionless groups, and the library as it
//! is shown.

mod groups;
mod library;
mod scales;
mod stratified;
