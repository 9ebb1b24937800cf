//! Input that is no terminal.

use std::io::Write;
use std::process::{Command, Output, Stdio};

fn piped(arguments: &[&str], input: &[u8]) -> Output {
    let mut child = Command::new(env!("CARGO_BIN_EXE_scalewright"))
        .args(arguments)
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    child.stdin.take().unwrap().write_all(input).unwrap();
    child.wait_with_output().unwrap()
}

#[test]
fn answers_and_errors_go_apart() {
    let output = piped(&[], b"scale U = 10 m/s\nU in kt\nV\nU/2\n");
    let out = String::from_utf8(output.stdout).unwrap();
    let err = String::from_utf8(output.stderr).unwrap();
    assert_eq!(out, "  = 19.4 kt, order 1e1 m/s\n  = 5 m/s, order 1e1\n");
    assert!(
        err.starts_with("[unknown-name] Error: nothing declares `V`"),
        "{err}"
    );
    assert!(!err.contains('\u{1b}'));
    assert_eq!(output.status.code(), Some(2));
}

#[test]
fn the_status_is_that_of_the_worst() {
    let output = piped(&["prompt"], b"scale U = 10 m/s\nclaim U > 20 m/s\nU\n");
    assert_eq!(output.status.code(), Some(1));
    let output = piped(&["prompt", "demo.squall_vortex"], b"again\n");
    assert_eq!(output.status.code(), Some(0));
    assert!(
        String::from_utf8(output.stdout)
            .unwrap()
            .contains("8 claims: 8 met")
    );
    let output = piped(&["prompt"], b"scale U = \xff\n");
    assert_eq!(output.status.code(), Some(2));
    let output = piped(&["prompt", "nothing.known"], b"");
    assert_eq!(output.status.code(), Some(2));
    assert_eq!(piped(&[], b"").status.code(), Some(0));
}
