//! Files are written whole or not at all.

use std::fs;
use std::path::Path;

use super::{EQUATION, Folder, GOOD, INVALID, UNMET};

#[test]
fn answers_go_to_a_file() {
    let folder = Folder::with(&[("good.scl", GOOD), ("old.md", "old\n")]);
    let run = folder.run(&[
        "run", "good.scl", "--format", "markdown", "--output", "old.md",
    ]);
    assert_eq!(run.succeeds(), "");
    assert!(folder.read("old.md").starts_with("# Scale analysis"));
    assert_eq!(folder.names(), ["good.scl", "old.md"]);
    // The answers of a script that fails are written too; the exit status tells.
    folder.write("unmet.scl", UNMET.as_bytes());
    folder
        .run(&["run", "unmet.scl", "--output", "unmet.txt"])
        .fails(1, &[]);
    assert!(folder.read("unmet.txt").contains("not met"));
}

#[test]
fn a_folder_that_is_missing_is_told() {
    let folder = Folder::with(&[("good.scl", GOOD)]);
    for option in ["--output", "--junit"] {
        let run = folder.run(&["run", "good.scl", option, "no/such/report.txt"]);
        assert_eq!(run.status, Some(2), "{}", run.err);
        assert!(run.err.contains("cannot-write"), "{}", run.err);
        assert!(
            run.err.contains("there is no folder `no/such`"),
            "{}",
            run.err
        );
    }
    folder
        .run(&["run", "good.scl", "--output", "."])
        .fails(2, &["cannot-write", "it is a folder"]);
    folder
        .run(&["run", "good.scl", "--output", "good.scl/report.txt"])
        .fails(2, &["cannot-write", "is no folder"]);
    assert_eq!(folder.names(), ["good.scl"]);
}

#[cfg(target_os = "linux")]
#[test]
fn a_full_disk_is_told() {
    // A device that takes nothing.
    if !Path::new("/dev/full").exists() {
        return;
    }
    let folder = Folder::with(&[("good.scl", GOOD)]);
    folder
        .run(&["run", "good.scl", "--output", "/dev/full"])
        .fails(2, &["cannot-write", "/dev/full", "no room left"]);
    assert!(Path::new("/dev/full").exists());
    let run = folder.run(&["run", "good.scl", "--junit", "/dev/full"]);
    assert_eq!(run.status, Some(2));
    assert!(run.out.contains("19.4 kt"));
    // Standard output that is full is no reader that went.
    let full = fs::OpenOptions::new().write(true).open("/dev/full");
    let status = folder
        .command(&["run", "good.scl"])
        .stdout(full.expect("it can be opened"))
        .output();
    assert_eq!(status.expect("it runs").status.code(), Some(2));
}

#[cfg(unix)]
#[test]
fn links_and_permissions_stay() {
    use std::os::unix::fs::{PermissionsExt as _, symlink};
    let folder = Folder::with(&[("good.scl", GOOD), ("kept/report.txt", "old\n")]);
    symlink("kept/report.txt", folder.file("link.txt")).expect("links can be made");
    let target = folder.file("kept/report.txt");
    fs::set_permissions(&target, fs::Permissions::from_mode(0o640)).expect("it is ours");
    folder
        .run(&["run", "good.scl", "--output", "link.txt"])
        .succeeds();
    assert!(folder.read("kept/report.txt").contains("19.4 kt"));
    let link = fs::symlink_metadata(folder.file("link.txt")).expect("it is there");
    assert!(link.is_symlink());
    let mode = fs::metadata(&target)
        .expect("it is there")
        .permissions()
        .mode();
    assert_eq!(mode & 0o777, 0o640);
    // A new file is one like others.
    folder
        .run(&["run", "good.scl", "--output", "new.txt"])
        .succeeds();
    let plain = fs::metadata(folder.file("good.scl")).expect("it is there");
    let new = fs::metadata(folder.file("new.txt")).expect("it is there");
    assert_eq!(new.permissions().mode(), plain.permissions().mode());
}

#[test]
fn a_reduced_system_is_saved_beside_its_script() {
    let script = format!("{EQUATION}reduce save \"decay_reduced.scl\"\n");
    let folder = Folder::with(&[("in/decay.scl", &script), ("in/old.txt", "")]);
    folder.run(&["run", "in/decay.scl"]).succeeds();
    let saved = folder.read("in/decay_reduced.scl");
    assert!(
        saved.starts_with("# Reduced system, made from in/decay.scl:"),
        "{saved}"
    );
    let again = folder.run(&["run", "in/decay_reduced.scl"]);
    assert!(
        again.succeeds().contains("u*d_x(u) = -r*u"),
        "{}",
        again.out
    );
    folder.write(
        "in/next.scl",
        b"use \"decay_reduced.scl\"\nscale U = 2 m/s\nreduce\n",
    );
    let used = folder.run(&["run", "in/next.scl"]);
    assert!(used.succeeds().contains("u*d_x(u) = -r*u"), "{}", used.out);
    // Written anew, and whole each time.
    folder.run(&["run", "in/decay.scl"]).succeeds();
    assert_eq!(folder.read("in/decay_reduced.scl"), saved);
}

#[test]
fn what_cannot_be_saved_is_told_and_in_the_answers() {
    let save = |path: &str| format!("{EQUATION}reduce save \"{path}\"\nshow U\n");
    let folder = Folder::with(&[
        ("in/missing.scl", &save("no/such.scl")),
        ("in/outside.scl", &save("../out.scl")),
        ("in/itself.scl", &save("itself.scl")),
        (
            "in/twice.scl",
            &format!("{}reduce save \"out.scl\"\n", save("out.scl")),
        ),
        (
            "in/used.scl",
            &format!("use \"part.scl\"\n{}", save("part.scl")),
        ),
        ("in/part.scl", "scale V = 1 m/s\n"),
        (
            "in/bad.scl",
            &format!("{INVALID}reduce save \"bad_out.scl\""),
        ),
    ]);
    let told = |script: &str, code: &str, reason: &str| {
        let run = folder.run(&["run", script, "--format", "json"]);
        assert_eq!(run.status, Some(2), "{}", run.err);
        assert!(run.err.contains(reason), "{}", run.err);
        assert!(
            run.out.contains(&format!("\"code\": \"{code}\"")),
            "{}",
            run.out
        );
    };
    told("in/missing.scl", "cannot-write", "there is no folder");
    told("in/outside.scl", "outside-folder", "--root");
    told("in/itself.scl", "cannot-write", "this script is made of it");
    told(
        "in/twice.scl",
        "cannot-write",
        "another `save` of this script",
    );
    told("in/used.scl", "cannot-write", "this script is made of it");
    told("in/bad.scl", "unknown-unit", "unknown-unit");
    assert_eq!(folder.read("in/itself.scl"), save("itself.scl"));
    assert_eq!(folder.names(), ["in"]);
    let wider = folder.run(&["run", "in/outside.scl", "--root", "."]);
    wider.succeeds();
    assert_eq!(folder.names(), ["in", "out.scl"]);
}

#[cfg(unix)]
#[test]
fn a_link_leads_no_saved_file_outside() {
    let script = format!("{EQUATION}reduce save \"link/out.scl\"\n");
    let folder = Folder::with(&[("in/decay.scl", &script), ("other/keep.txt", "")]);
    std::os::unix::fs::symlink("../other", folder.file("in/link")).expect("links can be made");
    let run = folder.run(&["run", "in/decay.scl"]);
    assert_eq!(run.status, Some(2));
    assert!(run.err.contains("outside-folder"), "{}", run.err);
    assert!(!folder.file("other/out.scl").exists());
}
