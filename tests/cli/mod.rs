//! The command line, run as it is: exit statuses, where output goes, and what is left of a
//! file that could not be written.

mod calls;
mod files;

use std::fs;
use std::io::Write as _;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};

/// A folder of its own with some files in it.
struct Folder(tempfile::TempDir);

impl Folder {
    fn with(files: &[(&str, &str)]) -> Folder {
        let folder = Folder(tempfile::tempdir().expect("there is a place for it"));
        for (name, text) in files {
            folder.write(name, text.as_bytes());
        }
        folder
    }

    fn path(&self) -> &Path {
        self.0.path()
    }

    fn file(&self, name: &str) -> PathBuf {
        self.path().join(name)
    }

    fn write(&self, name: &str, bytes: &[u8]) {
        let path = self.file(name);
        fs::create_dir_all(path.parent().expect("it lies in the folder")).expect("it can be made");
        fs::write(path, bytes).expect("it can be written");
    }

    fn read(&self, name: &str) -> String {
        fs::read_to_string(self.file(name)).expect("it is there")
    }

    /// All names in it, sorted.
    fn names(&self) -> Vec<String> {
        let entries = fs::read_dir(self.path()).expect("it is there");
        let name = |entry: std::io::Result<fs::DirEntry>| {
            let entry = entry.expect("it can be read");
            entry.file_name().to_string_lossy().into_owned()
        };
        let mut names: Vec<String> = entries.map(name).collect();
        names.sort();
        names
    }

    fn command(&self, words: &[&str]) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_scalewright"));
        command
            .args(words)
            .current_dir(self.path())
            .env_remove("CLICOLOR_FORCE")
            .env("NO_COLOR", "1");
        command
    }

    fn run(&self, words: &[&str]) -> Run {
        let output = self.command(words).stdin(Stdio::null()).output();
        Run::of(output.expect("it can be started"))
    }

    fn run_with_input(&self, words: &[&str], input: &[u8]) -> Run {
        let mut child = self
            .command(words)
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .expect("it can be started");
        let mut stdin = child.stdin.take().expect("it was asked for");
        stdin.write_all(input).expect("it reads");
        drop(stdin);
        Run::of(child.wait_with_output().expect("it ends"))
    }
}

/// What came of a call.
struct Run {
    status: Option<i32>,
    out: String,
    err: String,
}

impl Run {
    fn of(output: Output) -> Run {
        Run {
            status: output.status.code(),
            out: String::from_utf8(output.stdout).expect("it writes UTF-8"),
            err: String::from_utf8(output.stderr).expect("it writes UTF-8"),
        }
    }

    /// It ends with this status, nothing on standard output, and a message that holds
    /// these parts.
    #[track_caller]
    fn fails(&self, status: i32, parts: &[&str]) {
        assert_eq!(self.status, Some(status), "{}", self.err);
        assert_eq!(self.out, "");
        for part in parts {
            assert!(self.err.contains(part), "{part} in\n{}", self.err);
        }
        assert!(!self.err.contains("panicked"), "{}", self.err);
    }

    #[track_caller]
    fn succeeds(&self) -> &str {
        assert_eq!(self.status, Some(0), "{}", self.err);
        &self.out
    }
}

/// A script that ends well.
const GOOD: &str = "scale U = 10 m/s\nshow U in kt\nclaim U < 20 m/s\n";
/// One whose claim is not met.
const UNMET: &str = "scale U = 10 m/s\nclaim U > 20 m/s\n";
/// One that is invalid.
const INVALID: &str = "scale U = 10 m/ß\nshow U\n";
/// One with a warning.
const WARNED: &str = "scale N = 2 1/s\nscale s = 1 m\nshow 2 s\n";
/// An equation of which two terms stay.
const EQUATION: &str = "scale U = 1 m/s within 2\ncoordinate x ~ 1 km\nfield u(x) ~ U\n\
    constant r = 1e-3 1/s\nequation decay: u*d_x(u) = -r*u + 1e-9 m/s^2\n";
