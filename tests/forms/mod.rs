//! The forms of the answers: Markdown, LaTeX, JUnit, the text at a terminal, and the
//! reduced system as a module.

mod junit;
mod latex;
mod saving;
mod snapshots;

use std::fs;
use std::path::{Path, PathBuf};

use scalewright::model::library;
use scalewright::source::FileId;
use scalewright::syntax::ast::StatementKind;
use scalewright::syntax::parser;

/// The demonstrations of the library and all stored scripts, each with its name.
fn scripts() -> Vec<(String, String)> {
    let demos = library::MODULES.iter();
    let demos = demos.filter(|module| module.name.starts_with("demo."));
    let mut found: Vec<(String, String)> = demos
        .map(|module| (module.name.to_owned(), module.text.to_owned()))
        .collect();
    let tests = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests");
    for folder in ["inputs", "published/cases"] {
        let mut files = Vec::new();
        collect(&tests.join(folder), &mut files);
        files.sort();
        found.extend(files.into_iter().filter_map(|path| {
            let name = path.strip_prefix(&tests).ok()?.display().to_string();
            Some((name, fs::read_to_string(&path).ok()?))
        }));
    }
    for (_, text) in &mut found {
        *text = without_requests(text);
    }
    found
}

/// The declarations of a script alone.
fn without_requests(text: &str) -> String {
    let (script, _) = parser::parse(text, FileId::default());
    let mut declared = text.to_owned();
    for statement in script.statements.iter().rev() {
        if let StatementKind::Request(_) = statement.kind {
            let span = statement.span;
            declared.replace_range(span.start as usize..span.end as usize, "");
        }
    }
    declared
}

fn collect(folder: &Path, files: &mut Vec<PathBuf>) {
    let entries = fs::read_dir(folder).expect("the folder is there");
    for path in entries.map(|entry| entry.expect("it can be read").path()) {
        if path.is_dir() {
            collect(&path, files);
        } else if path.extension().is_some_and(|extension| extension == "scl") {
            files.push(path);
        }
    }
}
