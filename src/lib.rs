//! Scalewright: a small language for scale analysis of the equations of the atmosphere
//! and the ocean. A script declares characteristic scales, fields and equations; the
//! answers rank every term, give the leading-order system and its error, and hold claims.
//!
//! ```
//! use scalewright::Session;
//!
//! let script = "
//!     scale U = 10 m/s   scale L = 1000 km   scale T = L/U
//!     constant f = 1e-4 1/s
//!     constant rho = 1.2 kg/m^3
//!     scale dP = 12 hPa
//!     coordinate x, y ~ L
//!     coordinate t ~ T
//!     field u, v(x, y, t) ~ U
//!     field p(x, y, t) ~ dP
//!     velocity (u, v) along (x, y)
//!     equation x_momentum: D_t(u) - f*v as coriolis = -d_x(p)/rho as pressure_gradient
//!     claim leading x_momentum = coriolis, pressure_gradient
//! ";
//! let outcome = Session::new().run("low.scl", script, None);
//! assert!(outcome.claims[0].met);
//! ```
//!
//! Text goes down: `syntax` reads it, `model` checks it and turns equations into terms,
//! `analysis` answers, `report` puts the answers into words. [`Session`] drives all of it.

pub mod algebra;
pub mod analysis;
pub mod audit;
pub mod diagnostic;
pub mod limits;
pub mod model;
pub mod number;
pub mod polyhedra;
pub mod prompt;
pub mod report;
mod saving;
pub mod session;
pub mod source;
pub mod syntax;
pub mod units;

pub use session::{Outcome, Saved, Session, Status, Watcher};

/// Runs a script that uses no files and gives its answers as one JSON object.
pub fn run_to_json(name: &str, text: &str) -> serde_json::Value {
    report::json::outcome(&Session::new().run(name, text, None))
}
