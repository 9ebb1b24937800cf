//! The tests of the whole, in one binary; the folders say what they prove.

mod answers;
mod cli;
mod exact;
mod finding;
mod forms;
mod harness;
mod language;
mod library;
mod polyhedra;
mod prompt;
mod properties;
mod published;
mod reference;
mod standing;
