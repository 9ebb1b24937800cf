//! The tests of the whole, in one binary; the folders say what they prove.

mod polyhedra;
mod published;
