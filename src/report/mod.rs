//! Answers in the forms that people and programs read: `text` for the terminal (with the
//! `ruler` of decades), `json` for other programs. `words` and `standing` hold the
//! sentences that all forms share, `layout` numbers, columns and wrapping.

pub mod conditions;
pub mod dimensionless;
pub mod given;
pub mod json;
pub mod junit;
pub mod latex;
pub mod layout;
pub mod markdown;
pub mod mathematics;
pub mod module;
pub mod orders;
pub mod ruler;
pub mod sheets;
pub mod shelf;
pub mod standing;
pub mod text;
pub mod words;

/// What every report ends with, since a result may bear on somebody's safety.
pub const CAUTION: &str =
    "Order-of-magnitude estimates, not a design basis: local codes and licensed practice decide.";
