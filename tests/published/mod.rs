//! What textbooks, papers and standards state, against what the program answers.
//!
//! `cases/` holds the statements: one JSON file a kind with a case a line (title, question,
//! what is checked, work and place), and beside it a folder of the scripts. A value whose
//! `standing` is `from memory` was not looked up when it was written down; `printed` is the
//! source's own rounded number. `constants.json` holds constants of nature and of the trade,
//! `units.json` factors of units, `seawater.json` sea water by TEOS-10.

mod cases;
mod checks;
mod constants;
mod frames;
mod orders;
mod requests;
mod seawater;
mod span;
mod standard_atmosphere;
mod units;
