//! The tests of the whole, in one binary; the folders say what they prove.

mod harness;
mod language;
mod polyhedra;
mod prompt;
mod published;
mod reference;
