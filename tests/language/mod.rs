//! The language: reading scripts, telling what is wrong with them, printing them.

mod fixtures;
mod grammar;
mod limits;
mod printing;
mod prompt;
mod soup;
mod spans;

use scalewright::source::FileId;
use scalewright::syntax::ast::Script;
use scalewright::syntax::errors::SyntaxError;
use scalewright::syntax::parser::parse;

/// Reads a script.
fn read(text: &str) -> (Script, Vec<SyntaxError>) {
    parse(text, FileId::default())
}

/// Reads a script that has no error.
fn read_well(text: &str) -> Script {
    let (script, errors) = read(text);
    let said: Vec<String> = errors
        .iter()
        .map(|error| error.diagnostic().message)
        .collect();
    assert!(said.is_empty(), "{said:?} in\n{text}");
    script
}

/// A tree as text, without places.
fn without_spans(tree: &impl std::fmt::Debug) -> String {
    let text = format!("{tree:#?}");
    let mut out = String::new();
    let mut lines = text.lines();
    while let Some(line) = lines.next() {
        if !line.contains("Span {") {
            out.push_str(line);
            out.push('\n');
            continue;
        }
        let indent = line.len() - line.trim_start().len();
        let closes = |line: &str| {
            line.trim_start().starts_with('}') && line.len() - line.trim_start().len() == indent
        };
        for line in lines.by_ref() {
            if closes(line) {
                break;
            }
        }
    }
    out
}
