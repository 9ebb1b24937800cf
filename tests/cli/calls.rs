//! Exit statuses, forms, standard input and output, and scripts that cannot be read.

use std::process::Stdio;

use serde_json::Value;

use super::{EQUATION, Folder, GOOD, INVALID, UNMET, WARNED};
use crate::harness::schema_faults;

#[test]
fn the_exit_status_tells_how_it_ended() {
    let folder = Folder::with(&[
        ("good.scl", GOOD),
        ("unmet.scl", UNMET),
        ("bad.scl", INVALID),
    ]);
    assert_eq!(folder.run(&["run", "good.scl"]).status, Some(0));
    let unmet = folder.run(&["run", "unmet.scl"]);
    assert_eq!(unmet.status, Some(1));
    assert!(
        unmet.out.contains("1 claim: 0 met, 1 not met"),
        "{}",
        unmet.out
    );
    folder
        .run(&["run", "bad.scl"])
        .fails(2, &["unknown-unit", "bad.scl:1:"]);
    // The worst of several counts.
    let several = folder.run(&["run", "good.scl", "unmet.scl", "bad.scl"]);
    assert_eq!(several.status, Some(2));
    let two = folder.run(&["run", "unmet.scl", "good.scl"]);
    assert_eq!(two.status, Some(1));
    assert_eq!(folder.run(&["check", "unmet.scl"]).status, Some(0));
    folder
        .run(&["check", "bad.scl"])
        .fails(2, &["unknown-unit"]);
}

#[test]
fn ten_claims_end_with_1_and_name_the_two() {
    let folder = Folder::with(&[]);
    let script = concat!(env!("CARGO_MANIFEST_DIR"), "/tests/inputs/ten_claims.scl");
    let run = folder.run(&["run", script, "--junit", "claims.xml"]);
    assert_eq!(run.status, Some(1), "{}", run.err);
    assert!(
        run.out
            .contains("not met  leading x_momentum = coriolis, pressure_gradient")
    );
    assert!(run.out.contains("not met  U < 90 km/h"));
    assert!(run.out.contains("10 claims: 8 met, 2 not met"));
    let suites =
        junit_parser::from_reader(folder.read("claims.xml").as_bytes()).expect("it is JUnit");
    assert_eq!((suites.tests, suites.failures), (10, 2));
}

#[test]
fn wrong_calls_are_told_by_usage() {
    let folder = Folder::with(&[("good.scl", GOOD)]);
    folder.run(&["run"]).fails(2, &["Usage"]);
    folder
        .run(&["run", "good.scl", "--format", "pdf"])
        .fails(2, &["possible values"]);
    folder
        .run(&["run", "good.scl", "--fast"])
        .fails(2, &["--fast"]);
    folder.run(&["answer", "good.scl"]).fails(2, &["answer"]);
    folder
        .run(&["run", "good.scl", "--document"])
        .fails(2, &["--document goes with --format latex"]);
}

#[test]
fn every_form_is_written() {
    let folder = Folder::with(&[("good.scl", GOOD)]);
    let form = |name: &str| folder.run(&["run", "good.scl", "--format", name]);
    assert!(form("text").succeeds().starts_with("given\n"));
    assert!(
        form("markdown")
            .succeeds()
            .starts_with("# Scale analysis: good.scl\n")
    );
    assert!(
        form("latex")
            .succeeds()
            .contains("\\section*{\\raggedright Scale analysis: good.\\allowbreak{}scl}")
    );
    let document = folder.run(&["run", "good.scl", "--format", "latex", "--document"]);
    assert!(document.succeeds().starts_with("\\documentclass"));
    assert!(document.out.ends_with("\\end{document}\n"));
    let json: Value = serde_json::from_str(form("json").succeeds()).expect("it is JSON");
    assert_eq!(json["outcome"], "ok");
    assert_eq!(schema_faults(&json), Vec::<String>::new());
}

#[test]
fn several_files_give_one_array() {
    let folder = Folder::with(&[("good.scl", GOOD), ("bad.scl", INVALID)]);
    let run = folder.run(&[
        "run",
        "good.scl",
        "bad.scl",
        "missing.scl",
        "--format",
        "json",
    ]);
    assert_eq!(run.status, Some(2));
    let json: Value = serde_json::from_str(&run.out).expect("it is JSON");
    assert_eq!(schema_faults(&json), Vec::<String>::new());
    let outcomes: Vec<&str> = json
        .as_array()
        .expect("several give an array")
        .iter()
        .map(|one| one["outcome"].as_str().unwrap_or(""))
        .collect();
    assert_eq!(outcomes, ["ok", "invalid", "invalid"]);
    let text = folder.run(&["run", "good.scl", "good.scl"]);
    assert_eq!(text.succeeds().matches("19.4 kt").count(), 2);
}

#[test]
fn standard_input_is_a_script() {
    let folder = Folder::with(&[("part.scl", "scale V = 3 m/s\n")]);
    let run = folder.run_with_input(&["run", "-"], GOOD.as_bytes());
    assert!(run.succeeds().contains("19.4 kt"));
    let bad = folder.run_with_input(&["run", "-"], INVALID.as_bytes());
    bad.fails(2, &["unknown-unit", "standard input:1:"]);
    // It finds files from the folder of the call.
    let using = folder.run_with_input(&["run", "-"], b"use \"part.scl\"\nshow V\n");
    assert!(using.succeeds().contains("= 3 m/s"));
}

#[test]
fn bundled_modules_run_and_unknown_ones_are_told() {
    let folder = Folder::with(&[]);
    let run = folder.run(&["run", "demo.winter_low"]);
    assert!(run.succeeds().contains("geostrophic"));
    folder
        .run(&["run", "demo.winter_lows"])
        .fails(2, &["unknown-module", "demo.winter_low"]);
}

#[test]
fn a_reader_that_goes_is_no_fault() {
    let folder = Folder::with(&[("good.scl", GOOD)]);
    for words in [
        &["run", "demo.winter_low", "good.scl", "demo.squall_vortex"][..],
        &["library"],
        &["check", "good.scl"],
    ] {
        let mut child = folder
            .command(words)
            .stdin(Stdio::null())
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .expect("it can be started");
        drop(child.stdout.take());
        let output = child.wait_with_output().expect("it ends");
        assert_eq!(output.status.code(), Some(0), "{words:?}");
        assert_eq!(String::from_utf8_lossy(&output.stderr), "", "{words:?}");
    }
}

#[test]
fn scripts_that_cannot_be_read_are_told() {
    let folder = Folder::with(&[("empty.scl", ""), ("blank.scl", "# nothing yet\n\n")]);
    folder
        .run(&["run", "missing.scl"])
        .fails(2, &["unreadable-file", "missing.scl", "no such file"]);
    folder
        .run(&["run", "empty.scl"])
        .fails(2, &["nothing-to-rank"]);
    folder
        .run(&["run", "blank.scl"])
        .fails(2, &["nothing-to-rank"]);
    folder
        .run(&["run", "./"])
        .fails(2, &["unreadable-file", "folder"]);
    folder.write(
        "binary.scl",
        &[0x7f, b'E', b'L', b'F', 0, 1, 2, 0xff, 0xfe, 0x80],
    );
    folder
        .run(&["run", "binary.scl"])
        .fails(2, &["not-utf8", "binary.scl"]);
    folder.write("latin.scl", b"scale U = 1 m/s \"gr\xf6\xdfe\"\nshow U\n");
    folder.run(&["run", "latin.scl"]).fails(2, &["not-utf8"]);
    let zeros = vec![0_u8; 10_000];
    folder.write("zeros.scl", &zeros);
    folder
        .run(&["run", "zeros.scl"])
        .fails(2, &["unexpected-character"]);
}

#[test]
fn modules_that_cannot_be_used_are_told() {
    let folder = Folder::with(&[
        ("in/a.scl", "use \"b.scl\"\nshow 1\n"),
        ("in/b.scl", "use \"a.scl\"\n"),
        ("in/out.scl", "use \"../part.scl\"\nshow V\n"),
        ("in/none.scl", "use \"nowhere.scl\"\nshow 1\n"),
        ("part.scl", "scale V = 3 m/s\n"),
    ]);
    folder
        .run(&["run", "in/a.scl"])
        .fails(2, &["use-cycle", "b.scl"]);
    folder
        .run(&["run", "in/out.scl"])
        .fails(2, &["outside-folder", "--root"]);
    let wider = folder.run(&["run", "in/out.scl", "--root", "."]);
    assert!(wider.succeeds().contains("= 3 m/s"));
    folder
        .run(&["run", "in/none.scl"])
        .fails(2, &["unreadable-file", "nowhere.scl"]);
}

#[test]
fn strictness_makes_warnings_errors() {
    let folder = Folder::with(&[("warned.scl", WARNED), ("good.scl", GOOD)]);
    let plain = folder.run(&["run", "warned.scl"]);
    plain.succeeds();
    assert!(plain.err.contains("Warning"), "{}", plain.err);
    let strict = folder.run(&["run", "warned.scl", "--strict"]);
    assert_eq!(strict.status, Some(2));
    assert!(
        strict.err.contains("[unit-or-symbol] Error"),
        "{}",
        strict.err
    );
    folder.run(&["run", "good.scl", "--strict"]).succeeds();
    assert_eq!(
        folder.run(&["check", "warned.scl", "--strict"]).status,
        Some(2)
    );
}

#[test]
fn one_faulty_request_leaves_the_others_answered() {
    let script = format!("{EQUATION}scale W in m/s\nshow W\nshow U\n");
    let folder = Folder::with(&[("open.scl", &script)]);
    let run = folder.run(&["run", "open.scl"]);
    assert_eq!(run.status, Some(2));
    assert!(run.err.contains("open-scale"), "{}", run.err);
    assert!(run.out.contains("show U"), "{}", run.out);
}
