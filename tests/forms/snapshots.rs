//! The reports as they look, without colour.

use scalewright::model::library;
use scalewright::report::{latex, markdown, text};
use scalewright::{Outcome, Session};

use crate::harness::read;

fn first_page() -> Outcome {
    let script = read("inputs/first_page.scl");
    Session::new().run("first_page.scl", &script, None)
}

fn demo(name: &str) -> Outcome {
    let module = library::find(name).expect("it is bundled");
    Session::new().run(name, module.text, None)
}

fn unmet() -> Outcome {
    let script = read("inputs/ten_claims.scl");
    Session::new().run("ten_claims.scl", &script, None)
}

#[test]
fn text_reports() {
    for (name, outcome) in [
        ("first_page", first_page()),
        ("winter_low", demo("demo.winter_low")),
        ("ten_claims", unmet()),
    ] {
        let report = text::report(&outcome, false);
        let widest = report.lines().map(|line| line.chars().count()).max();
        assert!(widest.is_some_and(|widest| widest <= 80), "{widest:?}");
        insta::assert_snapshot!(format!("{name}_text"), report);
    }
}

#[test]
fn markdown_reports() {
    insta::assert_snapshot!("first_page_markdown", markdown::report(&first_page()));
    insta::assert_snapshot!(
        "winter_low_markdown",
        markdown::report(&demo("demo.winter_low"))
    );
}

#[test]
fn latex_reports() {
    insta::assert_snapshot!("first_page_latex", latex::fragment(&first_page()));
    let document = latex::document(&[demo("demo.winter_low")]);
    insta::assert_snapshot!("winter_low_latex", document);
}
