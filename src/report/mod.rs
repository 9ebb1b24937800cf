//! Answers in the forms that people and programs read: `text` for the terminal (with the
//! `ruler` of decades), `json` for other programs. `words` holds the sentences that all
//! forms share, `layout` numbers, columns and wrapping.

pub mod given;
pub mod json;
pub mod junit;
pub mod latex;
pub mod layout;
pub mod markdown;
pub mod module;
pub mod ruler;
pub mod text;
pub mod words;

/// What every report ends with, since a result may bear on somebody's safety.
pub const CAUTION: &str =
    "Order-of-magnitude estimates, not a design basis: local codes and licensed practice decide.";
