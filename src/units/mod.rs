//! Dimensions, units and quantities known to a range.
//!
//! `dimension` holds exact exponents, `names` what dimensions are called, `table` every
//! symbol with its exact factor (out of `uom_units`, `own_units` and `prefixes`),
//! `parse` the syntax of units, `range` intervals of sizes. What a script says with them
//! is left to the model.

mod dimension;
mod error;
mod exact_trigonometry;
mod function;
mod names;
mod nearest;
mod own_units;
mod parse;
mod prefixes;
mod range;
mod reader;
mod standard_atmosphere;
mod table;
mod uom_units;

pub use dimension::Dimension;
pub use error::{Expected, UnitError};
pub use exact_trigonometry::{ExactTrig, Trig, exact_trig};
pub use function::Function;
pub use parse::{Unit, parse as parse_unit};
pub use prefixes::Prefix;
pub use range::{Range, RangeError};
pub use standard_atmosphere::StandardAtmosphere;
pub use table::{UnitInfo, display_name, find_unit, symbols, units};
