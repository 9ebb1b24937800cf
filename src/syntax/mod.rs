//! From text to syntax tree and back: tokens (`token`), the tree (`ast`), the parser
//! (`parser`) and the printer (`print`).

pub mod ast;
