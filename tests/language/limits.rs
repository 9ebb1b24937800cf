//! Limits: whatever is written, reading ends at once, and with a clear error.

use std::time::{Duration, Instant};

use scalewright::limits::{NESTING, SCRIPT_BYTES, STATEMENT_TOKENS};

use super::read;

/// Reads on a thread with a small stack; gives the codes of the errors.
fn codes(text: String) -> Vec<&'static str> {
    const STACK: usize = 1 << 20;
    let start = Instant::now();
    let codes = std::thread::Builder::new()
        .stack_size(STACK)
        .spawn(move || {
            let (_, errors) = read(&text);
            let codes = errors.iter().map(|error| error.diagnostic().code);
            codes.collect::<Vec<_>>()
        })
        .unwrap()
        .join()
        .unwrap();
    assert!(start.elapsed() < Duration::from_secs(5), "too slow");
    codes
}

#[test]
fn whatever_nests_too_deep_is_one_error() {
    const N: usize = 100_000;
    for text in [
        "(".repeat(N),
        format!("{}x{}", "(".repeat(N), ")".repeat(N)),
        format!("{}x", "-".repeat(N)),
        format!("x{}", "^x".repeat(N)),
        format!("x{}", "^-x".repeat(N)),
        "f(".repeat(N),
        "∂(".repeat(N),
        "a*(b + ".repeat(N),
        "(a ~ ".repeat(N),
        "(a, ".repeat(N),
    ] {
        let start = text[..20].to_owned();
        assert_eq!(codes(format!("show {text}")), ["too-deep"], "{start}");
    }
}

#[test]
fn whatever_nests_less_deep_is_read() {
    for text in [
        format!("{}x{}", "(".repeat(NESTING - 1), ")".repeat(NESTING - 1)),
        format!("{}x", "-".repeat(NESTING - 1)),
        format!("{}x{}", "f(".repeat(NESTING - 1), ")".repeat(NESTING - 1)),
        format!("{}x{}", "∂(".repeat(66), ")/∂x".repeat(66)),
        format!("{}x{}", "-(a + b*".repeat(38), ")^2".repeat(38)),
        vec!["a*b"; 1_000].join(" + "),
    ] {
        assert!(codes(format!("show {text}")).is_empty(), "{}", &text[..20]);
    }
}

#[test]
fn long_scripts_and_statements_are_refused() {
    assert_eq!(codes(" ".repeat(SCRIPT_BYTES + 1)), ["too-long"]);
    assert!(codes(" ".repeat(SCRIPT_BYTES)).is_empty());
    let long = format!(
        "scale U = 1 m show {} scale L = )",
        "a+".repeat(STATEMENT_TOKENS)
    );
    assert_eq!(codes(long), ["too-long", "unexpected-word"]);
}

#[test]
fn a_megabyte_of_garbage_is_read_in_no_time() {
    for piece in [
        "$ ",
        "a ",
        "aa bb\n",
        "scal U = 1 m\n",
        "show )\n",
        "phenomenon a { ",
        "}",
        "\"",
        "9",
        "equation a: ( = ) ",
        "m/(a.",
        "1 m/(a.b",
        "10^",
        "1 ",
        "∂",
        "scale = ",
        "field p = ",
    ] {
        assert!(!codes(piece.repeat(SCRIPT_BYTES / piece.len())).is_empty());
    }
}

#[test]
fn literals_beyond_the_limits_are_refused() {
    for number in [
        "10^1000000",
        "1e-999",
        "1e99999999999999999999",
        &"9".repeat(5_000),
    ] {
        assert_eq!(codes(format!("show {number} m")), ["too-large"]);
    }
    assert_eq!(codes("show sin^99999999999(x)".to_owned()), ["too-large"]);
}
