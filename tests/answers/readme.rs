//! The page that the README shows, and its report, are those of the program.

use scalewright::Session;
use scalewright::report::text;

use crate::harness::read;

/// The fenced block behind a mark.
fn block<'a>(readme: &'a str, mark: &str) -> &'a str {
    let behind = readme.split(mark).nth(1).expect("the mark stands in the README");
    let inside = behind.split("```").nth(1).expect("a block stands behind it");
    inside.split_once('\n').expect("it has lines").1
}

#[test]
fn the_readme_shows_a_page_and_its_report() {
    let readme = read("../README.md");
    let script = read("inputs/from_the_readme.scl");
    assert_eq!(block(&readme, "<!-- script -->"), script);
    let outcome = Session::new().run("seiche.scl", &script, None);
    assert_eq!(block(&readme, "<!-- report -->"), text::report(&outcome, false));
}
