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
    let [leading, speed] = failed.as_slice() else {
        panic!("{failed:?}");
    };
    assert_eq!(
        leading.0,
        "leading x_momentum = coriolis, pressure_gradient for squall"
    );
    assert!(
        leading
            .1
            .contains("tendency, advection, pressure_gradient lead"),
        "{}",
        leading.1
    );
    assert_eq!(
        *speed,
        (
            "U < 90 km/h for squall",
            "48 .. 72 .. 108 km/h against 90 km/h; misses by a factor 1.2; would hold with U ÷ 1.2"
        )
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
