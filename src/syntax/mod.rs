//! From text to syntax tree and back: tokens (`token`), the tree (`ast`), the parser
//! (`parser`), the printer (`print`) and what can be wrong (`errors`).

pub mod ast;
pub mod errors;
pub mod forms;
pub mod names;
pub mod parser;
pub mod print;
mod print_expression;
mod print_statement;
pub mod structure;
pub mod token;
mod unit_run;
pub(crate) mod unit_spelling;
