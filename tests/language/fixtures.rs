//! Scripts in `tests/inputs/parser`: those in `ok` are read without an error and their
//! canonical form is compared, those in `err` have errors, which are compared as drawn.

use std::path::Path;

use scalewright::diagnostic::draw;
use scalewright::source::Sources;
use scalewright::syntax::parser::parse;

use super::printing::check_printing;
use super::spans::check_spans;

#[test]
fn scripts_are_read() {
    insta::glob!("..", "inputs/parser/ok/*.scl", |path| {
        let source = text_of(path);
        let printed = check_printing(&source);
        check_spans(&source);
        insta::with_settings!({ description => source, omit_expression => true }, {
            insta::assert_snapshot!("ok", printed);
        });
    });
}

#[test]
fn mistakes_are_told() {
    insta::glob!("..", "inputs/parser/err/*.scl", |path| {
        let source = text_of(path);
        let mut sources = Sources::default();
        let name = path.file_name().unwrap().to_string_lossy();
        let file = sources.add(name, source.as_str());
        let (_, errors) = parse(&source, file);
        assert!(!errors.is_empty(), "{} has no error", path.display());
        let diagnostics: Vec<_> = errors.iter().map(|error| error.diagnostic()).collect();
        let drawn = draw(&diagnostics, &sources, false);
        insta::with_settings!({ description => source, omit_expression => true }, {
            insta::assert_snapshot!("err", drawn);
        });
    });
}

fn text_of(path: &Path) -> String {
    std::fs::read_to_string(path).unwrap()
}
