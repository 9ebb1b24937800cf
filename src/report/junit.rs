//! The claims as JUnit XML, which build servers read: one test suite a script, one test
//! case a claim and phenomenon. A script with errors is a case of its own that could not
//! be run.

use quick_junit::{NonSuccessKind, Report, SerializeError, TestCase, TestCaseStatus, TestSuite};

use crate::analysis::claims::Held;
use crate::diagnostic::Diagnostic;
use crate::report::words;
use crate::session::Outcome;

/// The report of some scripts.
///
/// # Errors
/// What the XML cannot hold.
pub fn report(outcomes: &[Outcome]) -> Result<String, SerializeError> {
    let mut report = Report::new("scalewright");
    for outcome in outcomes {
        let mut suite = TestSuite::new(outcome.script.as_str());
        let claims = outcome.claims.iter().map(|claim| case(claim, outcome));
        suite.add_test_cases(claims);
        suite.add_test_cases(errored(outcome));
        report.add_test_suite(suite);
    }
    report.to_string()
}

fn case(claim: &Held, outcome: &Outcome) -> TestCase {
    let mut status = TestCaseStatus::success();
    if !claim.met {
        status = TestCaseStatus::non_success(NonSuccessKind::Failure);
        let place = place(claim, outcome);
        status
            .set_type("claim-not-met")
            .set_message(words::unmet(claim))
            .set_description(format!("{}\n{}\n{place}", claim.text, words::unmet(claim)));
    }
    let mut case = TestCase::new(words::claim(claim), status);
    case.set_classname(class(outcome, claim.phenomenon.as_deref()));
    case
}

/// Script and phenomenon.
fn class(outcome: &Outcome, phenomenon: Option<&str>) -> String {
    match phenomenon {
        Some(phenomenon) => format!("{}.{phenomenon}", outcome.script),
        None => outcome.script.clone(),
    }
}

fn place(claim: &Held, outcome: &Outcome) -> String {
    let sources = &outcome.sources;
    let at = sources.position(claim.span.file, claim.span.start);
    let name = &sources.get(claim.span.file).name;
    format!("{name}:{}:{}", at.line, at.column)
}

/// The errors of a script, as one case.
fn errored(outcome: &Outcome) -> Option<TestCase> {
    let errors: Vec<&Diagnostic> = outcome
        .diagnostics
        .iter()
        .filter(|found| found.is_error())
        .collect();
    let first = errors.first()?;
    let mut status = TestCaseStatus::non_success(NonSuccessKind::Error);
    status
        .set_type(first.code)
        .set_message(first.message.as_str())
        .set_description(outcome.drawn(false, Diagnostic::is_error));
    let mut case = TestCase::new("the script is valid", status);
    case.set_classname(outcome.script.as_str());
    Some(case)
}
