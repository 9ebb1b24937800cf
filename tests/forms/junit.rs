//! JUnit XML, read back by a reader of another project.

use junit_parser::TestStatus;
use scalewright::report::junit;
use scalewright::{Outcome, Session};

use crate::harness::read;

fn suites(outcomes: &[Outcome]) -> junit_parser::TestSuites {
    let xml = junit::report(outcomes).expect("the claims are XML");
    junit_parser::from_reader(xml.as_bytes()).expect("it is JUnit")
}

#[test]
fn ten_claims_two_of_them_wrong() {
    let script = read("inputs/ten_claims.scl");
    let outcome = Session::new().run("ten_claims.scl", &script, None);
    let suites = suites(&[outcome]);
    assert_eq!((suites.tests, suites.failures, suites.errors), (10, 2, 0));
    let suite = &suites.suites[0];
    assert_eq!(suite.name, "ten_claims.scl");
    let failed: Vec<(&str, &str)> = suite
        .cases
        .iter()
        .filter_map(|case| match &case.status {
            TestStatus::Failure(failure) => {
                Some((case.original_name.as_str(), failure.message.as_str()))
            }
            _ => None,
        })
        .collect();
    assert_eq!(
        failed,
        [
            (
                "x_momentum.friction >> x_momentum.coriolis for winter_low",
                "ratio 4.85e-4; at least 10 is asked for; misses by a factor 2.06e4; would hold \
                 with H ÷ 144"
            ),
            (
                "U < 15 m/s for winter_low",
                "5 .. 10 .. 20 m/s against 15 m/s; misses by a factor 1.33; would hold with U ÷ 1.33"
            ),
        ]
    );
}

#[test]
fn a_script_with_errors_is_a_case_that_could_not_be_run() {
    let broken = Session::new().run("broken.scl", "scale U = 1 m/ß\nclaim U < 2 m/s", None);
    let whole = Session::new().run("whole.scl", "claim 1 < 2", None);
    let suites = suites(&[broken, whole]);
    assert_eq!((suites.tests, suites.failures, suites.errors), (2, 0, 1));
    let case = &suites.suites[0].cases[0];
    let TestStatus::Error(error) = &case.status else {
        panic!("{:?}", case.status);
    };
    assert_eq!(error.error_type, "unknown-unit");
    assert!(error.message.contains("ß"), "{}", error.message);
    assert!(suites.suites[1].cases[0].status.is_success());
}

#[test]
fn what_a_claim_holds_is_escaped() {
    let script = "scale U = 1 m/s\nclaim U << 2 m/s # <&\">\nclaim U > 0 m/s";
    let outcome = Session::new().run("a<b>&\".scl", script, None);
    let suites = suites(&[outcome]);
    assert_eq!(suites.suites[0].name, "a<b>&\".scl");
    assert_eq!(suites.suites[0].cases[0].original_name, "U << 2 m/s");
}
