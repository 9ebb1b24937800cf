//! The command line: words to library calls, nothing else.

mod command;
mod progress;

use std::fs;
use std::io::{self, IsTerminal as _, Read as _, Write as _};
use std::path::{Path, PathBuf};
use std::process::ExitCode;

use clap::error::ErrorKind;
use clap::{Args, CommandFactory as _, Parser, Subcommand, ValueEnum};
use scalewright::analysis::shelf;
use scalewright::diagnostic::{Diagnostic, Severity};
use scalewright::model::errors::ModelError;
use scalewright::model::library;
use scalewright::model::modules::{Files, Main};
use scalewright::model::names;
use scalewright::prompt::layout::Sheet;
use scalewright::prompt::terminal::Aids;
use scalewright::prompt::{self, Start};
use scalewright::report;
use scalewright::source::Sources;
use scalewright::{Outcome, Session, Status};

use crate::command::writing;

/// Decide, for one phenomenon, which terms of the governing equations matter.
///
/// Without a command it asks for statements and answers them one by one.
#[derive(Parser)]
#[command(version)]
struct Words {
    #[command(subcommand)]
    command: Option<Command>,
}

#[derive(Subcommand)]
enum Command {
    /// Try scales and requests one by one; without a terminal, answer what is piped in
    Prompt {
        /// A script to start from: a file or a bundled module
        #[arg(value_name = "FILE")]
        start: Option<String>,
    },
    /// Answer scripts: files, bundled modules, or - for standard input
    Run(Run),
    /// Read and check scripts without answering them
    Check {
        #[command(flatten)]
        scripts: Scripts,
        /// Print them in the canonical form, comments kept
        #[arg(long)]
        print: bool,
    },
    /// List the bundled modules, or show one
    Library {
        /// The module, as atmosphere.momentum
        name: Option<String>,
    },
}

#[derive(Args)]
struct Run {
    #[command(flatten)]
    scripts: Scripts,
    /// The form of the answers
    #[arg(long, value_enum, default_value_t = Format::Text)]
    format: Format,
    /// With --format latex: a whole document, which compiles as it is
    #[arg(long)]
    document: bool,
    /// Write the answers to this file instead of standard output
    #[arg(long, value_name = "FILE")]
    output: Option<PathBuf>,
    /// Write the claims to this file too, as JUnit XML
    #[arg(long, value_name = "FILE")]
    junit: Option<PathBuf>,
}

#[derive(Args)]
struct Scripts {
    /// A file (it holds a / or ends in .scl), a bundled module, or -
    #[arg(required = true, value_name = "FILE")]
    names: Vec<String>,
    /// Take warnings for errors
    #[arg(long)]
    strict: bool,
    /// Let scripts use files below this folder
    #[arg(long, value_name = "DIR")]
    root: Option<PathBuf>,
}

#[derive(Clone, Copy, PartialEq, Eq, ValueEnum)]
enum Format {
    /// For reading at a terminal
    Text,
    /// Tables and equations for documents in Markdown
    Markdown,
    /// A part of a paper, or with --document a whole one
    Latex,
    /// For other programs
    Json,
}

/// The files of this machine.
struct Disk;

impl Files for Disk {
    fn canonical(&self, path: &Path) -> Result<PathBuf, String> {
        let path = if path.as_os_str().is_empty() {
            Path::new(".")
        } else {
            path
        };
        fs::canonicalize(path).map_err(|error| reason(&error))
    }

    fn read(&self, path: &Path) -> Result<Vec<u8>, String> {
        fs::read(path).map_err(|error| reason(&error))
    }

    fn write(&self, path: &Path, text: &str) -> Result<(), Box<Diagnostic>> {
        writing::whole(path, text.as_bytes())
    }
}

fn reason(error: &io::Error) -> String {
    match error.kind() {
        io::ErrorKind::NotFound => "there is no such file".to_owned(),
        io::ErrorKind::PermissionDenied => "reading it is not allowed".to_owned(),
        io::ErrorKind::IsADirectory => "it is a folder".to_owned(),
        _ => error.to_string(),
    }
}

fn main() -> ExitCode {
    let words = Words::parse();
    let none = Command::Prompt { start: None };
    let done = match words.command.as_ref().unwrap_or(&none) {
        Command::Prompt { start } => prompt(start.as_deref()),
        Command::Run(words) => run(words),
        Command::Check { scripts, print } => check(scripts, *print),
        Command::Library { name } => show_library(name.as_deref()),
    };
    match done {
        Ok(code) => code,
        // Whoever read the answers has gone; that is no fault.
        Err(error) if error.kind() == io::ErrorKind::BrokenPipe => ExitCode::SUCCESS,
        Err(error) => {
            let _ = writeln!(io::stderr(), "cannot-write: {error}");
            ExitCode::from(2)
        }
    }
}

fn exit_code(status: Status) -> ExitCode {
    ExitCode::from(match status {
        Status::Ok => 0,
        Status::Unmet => 1,
        Status::Invalid => 2,
    })
}

// Reading -------------------------------------------------------------------------------------

/// A script as it was named on the command line.
struct Input {
    name: String,
    path: Option<PathBuf>,
    folder: PathBuf,
    text: Result<String, Box<ModelError>>,
}

fn read(name: &str) -> Input {
    if name == "-" {
        return read_standard_input();
    }
    if !name.contains('/') && !name.ends_with(".scl") {
        let text = library::find(name).map(|module| module.text.to_owned());
        let known = library::MODULES.iter().map(|module| module.name);
        return Input {
            name: name.to_owned(),
            path: None,
            folder: PathBuf::new(),
            text: text.ok_or_else(|| {
                Box::new(ModelError::UnknownModule {
                    name: name.to_owned(),
                    span: None,
                    nearest: names::nearest(name, known),
                })
            }),
        };
    }
    let path = PathBuf::from(name);
    let bytes = fs::read(&path).map_err(|error| {
        Box::new(ModelError::UnreadableFile {
            path: name.to_owned(),
            reason: reason(&error),
            span: None,
        })
    });
    Input {
        name: name.to_owned(),
        folder: path.parent().map(Path::to_owned).unwrap_or_default(),
        path: Some(path),
        text: bytes.and_then(|bytes| utf8(name, bytes)),
    }
}

fn read_standard_input() -> Input {
    let mut bytes = Vec::new();
    let read = io::stdin().lock().read_to_end(&mut bytes);
    let name = "standard input";
    Input {
        name: name.to_owned(),
        path: None,
        folder: PathBuf::new(),
        text: match read {
            Ok(_) => utf8(name, bytes),
            Err(error) => Err(Box::new(ModelError::UnreadableFile {
                path: name.to_owned(),
                reason: reason(&error),
                span: None,
            })),
        },
    }
}

fn utf8(name: &str, bytes: Vec<u8>) -> Result<String, Box<ModelError>> {
    String::from_utf8(bytes).map_err(|error| {
        Box::new(ModelError::NotUtf8 {
            path: name.to_owned(),
            offset: error.utf8_error().valid_up_to(),
            span: None,
        })
    })
}

/// Takes each named script through the session.
fn outcomes(
    scripts: &Scripts,
    take: impl Fn(&Session<'_>, &Input, &str) -> Outcome,
) -> Vec<Outcome> {
    let terminal = progress::Terminal::new();
    scripts
        .names
        .iter()
        .map(|name| {
            let input = read(name);
            let session = Session::new()
                .with_files(&Disk, input.folder.clone())
                .with_root(scripts.root.clone())
                .with_watcher(&terminal)
                .with_strictness(scripts.strict);
            match &input.text {
                Ok(text) => take(&session, &input, text),
                Err(error) => Outcome {
                    script: input.name.clone(),
                    diagnostics: vec![error.diagnostic()],
                    ..Outcome::default()
                },
            }
        })
        .collect()
}

// The prompt ----------------------------------------------------------------------------------

fn prompt(start: Option<&str>) -> io::Result<ExitCode> {
    let input = start.map(read);
    let folder = input
        .as_ref()
        .map(|input| input.folder.clone())
        .unwrap_or_default();
    let session = Session::new().with_files(&Disk, folder);
    let start = match input.map(start_of).transpose() {
        Ok(start) => start,
        Err(outcome) => {
            draw_diagnostics(&[outcome], |_| true)?;
            return Ok(ExitCode::from(2));
        }
    };
    if io::stdin().is_terminal() {
        prompt::terminal::run(session, start.as_ref(), aids())?;
        return Ok(ExitCode::SUCCESS);
    }
    let sheet = Sheet {
        columns: report::layout::WIDTH,
        colour: io::stderr().is_terminal()
            && anstream::AutoStream::choice(&io::stdout()) != anstream::ColorChoice::Never,
    };
    let (mut out, mut err) = (io::stdout().lock(), io::stderr().lock());
    let mut input = io::stdin().lock();
    let status = prompt::filter::run(
        session,
        start.as_ref(),
        &mut input,
        &mut out,
        &mut err,
        sheet,
    )?;
    Ok(exit_code(status))
}

fn start_of(input: Input) -> Result<Start, Outcome> {
    match input.text {
        Ok(text) => Ok(Start {
            name: input.name,
            path: input.path,
            text,
        }),
        Err(error) => Err(Outcome {
            script: input.name,
            diagnostics: vec![error.diagnostic()],
            ..Outcome::default()
        }),
    }
}

/// Completion, hints and colours, unless the terminal or the user wants none.
fn aids() -> Aids {
    let is_set = |name: &str| std::env::var_os(name).is_some_and(|value| !value.is_empty());
    let is_dumb = std::env::var_os("TERM").is_none_or(|term| term == "dumb" || term.is_empty());
    match is_set("NO_COLOR") || is_dumb && !cfg!(windows) || !io::stdout().is_terminal() {
        true => Aids::None,
        false => Aids::All,
    }
}

// Answering -----------------------------------------------------------------------------------

fn run(words: &Run) -> io::Result<ExitCode> {
    if words.document && words.format != Format::Latex {
        Words::command()
            .error(
                ErrorKind::ArgumentConflict,
                "--document goes with --format latex",
            )
            .exit();
    }
    let outcomes = outcomes(&words.scripts, |session, input, text| {
        let mut outcome = session.run(&input.name, text, input.path.as_deref());
        session.write(&mut outcome);
        outcome
    });
    let text = report_text(words, &outcomes);
    // What a report says already is not drawn a second time beside it.
    draw_diagnostics(&outcomes, |found| {
        let is_told = found.severity == Severity::Note || report::words::is_in_report(found.code);
        found.is_error() || !is_told
    })?;
    let mut faults = Vec::new();
    if let Some(path) = &words.junit {
        let xml = report::junit::report(&outcomes).map_err(io::Error::other)?;
        let written = writing::whole(path, xml.as_bytes());
        faults.extend(written.err().map(|fault| *fault));
    }
    match &words.output {
        None => io::stdout().lock().write_all(text.as_bytes())?,
        Some(path) => {
            let written = writing::whole(path, text.as_bytes());
            faults.extend(written.err().map(|fault| *fault));
        }
    }
    if faults.is_empty() {
        return Ok(exit_code(worst(&outcomes)));
    }
    let unwritten = Outcome {
        diagnostics: faults,
        ..Outcome::default()
    };
    draw_diagnostics(&[unwritten], |_| true)?;
    Ok(exit_code(Status::Invalid))
}

fn report_text(words: &Run, outcomes: &[Outcome]) -> String {
    let colour = words.output.is_none()
        && anstream::AutoStream::choice(&io::stdout()) != anstream::ColorChoice::Never;
    match words.format {
        Format::Text => text_report(outcomes, colour),
        Format::Markdown => outcomes.iter().map(report::markdown::report).collect(),
        Format::Latex if words.document => report::latex::document(outcomes),
        Format::Latex => outcomes.iter().map(report::latex::fragment).collect(),
        Format::Json => json_report(outcomes),
    }
}

fn worst(outcomes: &[Outcome]) -> Status {
    outcomes
        .iter()
        .map(Outcome::status)
        .max()
        .unwrap_or(Status::Ok)
}

fn text_report(outcomes: &[Outcome], colour: bool) -> String {
    let mut out = String::new();
    for outcome in outcomes {
        if outcomes.len() > 1 {
            out.push_str(&format!("{}\n\n", outcome.script));
        }
        out.push_str(&report::text::report(outcome, colour));
        if outcomes.len() > 1 {
            out.push('\n');
        }
    }
    out
}

fn json_report(outcomes: &[Outcome]) -> String {
    let mut values: Vec<serde_json::Value> = outcomes.iter().map(report::json::outcome).collect();
    let value = match values.len() {
        1 => values.swap_remove(0),
        _ => serde_json::Value::Array(values),
    };
    format!("{value:#}\n")
}

fn draw_diagnostics(outcomes: &[Outcome], wanted: impl Fn(&Diagnostic) -> bool) -> io::Result<()> {
    let colour = io::stderr().is_terminal()
        && anstream::AutoStream::choice(&io::stderr()) != anstream::ColorChoice::Never;
    let mut stderr = io::stderr().lock();
    for outcome in outcomes {
        stderr.write_all(outcome.drawn(colour, &wanted).as_bytes())?;
    }
    Ok(())
}

fn check(scripts: &Scripts, is_printed: bool) -> io::Result<ExitCode> {
    let outcomes = outcomes(scripts, |session, input, text| {
        session.check(&input.name, text, input.path.as_deref())
    });
    draw_diagnostics(&outcomes, |_| true)?;
    let mut stdout = io::stdout().lock();
    for outcome in outcomes
        .iter()
        .filter(|outcome| outcome.status() == Status::Ok)
    {
        match outcome.canonical() {
            Some(text) if is_printed => stdout.write_all(text.as_bytes())?,
            Some(_) | None => writeln!(stdout, "{}: no errors", outcome.script)?,
        }
    }
    Ok(exit_code(worst(&outcomes)))
}

fn show_library(name: Option<&str>) -> io::Result<ExitCode> {
    let Some(name) = name else {
        let text = report::shelf::list(library::MODULES);
        io::stdout().lock().write_all(text.as_bytes())?;
        return Ok(ExitCode::SUCCESS);
    };
    let input = read(name);
    let (diagnostics, sources) = match &input.text {
        Ok(text) => {
            let main = Main {
                name: input.name.clone(),
                text: text.clone(),
                path: input.path.clone(),
                folder: input.folder.clone(),
                root: input.folder.clone(),
            };
            match shelf::shelf(&main, &Disk) {
                Ok(shelf) => {
                    let text = report::shelf::shelf(&shelf);
                    io::stdout().lock().write_all(text.as_bytes())?;
                    return Ok(ExitCode::SUCCESS);
                }
                Err(found) => found,
            }
        }
        Err(error) => (vec![error.diagnostic()], Sources::default()),
    };
    let outcome = Outcome {
        diagnostics,
        sources,
        ..Outcome::default()
    };
    draw_diagnostics(&[outcome], Diagnostic::is_error)?;
    Ok(ExitCode::from(2))
}
