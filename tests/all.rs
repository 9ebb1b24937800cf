//! The integration tests, one folder for each kind of proof.

mod harness;
mod published;
mod reference;
