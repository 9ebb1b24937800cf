//! The tests of the whole, in one binary; the folders say what they prove.

mod answers;
mod cli;
mod forms;
mod harness;
mod language;
mod polyhedra;
mod published;
mod reference;
