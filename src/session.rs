//! A session: takes a script, checks it, answers it. The command line and embedders go
//! through here. A session that grows line by line is in `incremental`.

mod answering;
pub mod changes;
mod expanding;
pub mod incremental;
mod merge;
mod solving;

use std::collections::HashMap;
use std::path::{Path, PathBuf};

use crate::analysis::claims::Held;
use crate::analysis::{self, Answer, Case, bounds, requests};
use crate::audit::{self, AuditRow};
use crate::diagnostic::{self, Diagnostic, Severity};
use crate::model::dimensions::{self};
use crate::model::errors::ModelError;
use crate::model::frames;
use crate::model::modules::{self, Files, Main, NoFiles};
use crate::model::{Model, declarations};
use crate::saving::{self, Folders};
use crate::session::answering::Answering;
use crate::source::{Sources, Span};
use crate::syntax::ast::{self};
use crate::syntax::{parser, print};

pub use solving::Watcher;

/// What came of a script.
#[derive(Debug, Default)]
pub struct Outcome {
    /// The name of the script.
    pub script: String,
    /// All texts that were read, for drawing diagnostics.
    pub sources: Sources,
    /// Errors, warnings and notes in order of place.
    pub diagnostics: Vec<Diagnostic>,
    /// Every symbol with its value and source.
    pub symbols: Vec<AuditRow>,
    /// The answers in order of the requests.
    pub answers: Vec<Answer>,
    /// The claims in order.
    pub claims: Vec<Held>,
    /// The files that requests ask to be written; a session writes none itself.
    pub saved: Vec<Saved>,
}

/// A module that `reduce ... save` asks to be written.
#[derive(Debug, Clone)]
pub struct Saved {
    /// Where to.
    pub path: PathBuf,
    /// Its text.
    pub text: String,
    /// Where the request names it.
    pub span: Span,
}

/// How a script ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Status {
    /// All well.
    Ok,
    /// A claim is not met.
    Unmet,
    /// The script, or one request of it, is invalid.
    Invalid,
}

impl Outcome {
    /// How it ended.
    pub fn status(&self) -> Status {
        if self.diagnostics.iter().any(Diagnostic::is_error) {
            Status::Invalid
        } else if self.claims.iter().any(|claim| !claim.met) {
            Status::Unmet
        } else {
            Status::Ok
        }
    }

    /// The script in its canonical form, comments kept; `None` if none was read.
    pub fn canonical(&self) -> Option<String> {
        let (file, source) = self.sources.iter().next()?;
        let (script, _) = parser::parse(&source.text, file);
        Some(print::print(&script, &source.text))
    }

    /// The diagnostics drawn against their texts.
    pub fn drawn(&self, colour: bool, wanted: impl Fn(&Diagnostic) -> bool) -> String {
        let wanted: Vec<Diagnostic> = self
            .diagnostics
            .iter()
            .filter(|found| wanted(found))
            .cloned()
            .collect();
        diagnostic::draw(&wanted, &self.sources, colour)
    }
}

/// Reads and answers scripts.
#[derive(Clone)]
pub struct Session<'f> {
    files: &'f dyn Files,
    folder: PathBuf,
    root: Option<PathBuf>,
    is_strict: bool,
    watcher: Option<&'f dyn Watcher>,
}

impl Default for Session<'_> {
    fn default() -> Self {
        Session::new()
    }
}

impl<'f> Session<'f> {
    /// A session that reads no files but the bundled library.
    pub fn new() -> Session<'f> {
        Session {
            files: &NoFiles,
            folder: PathBuf::new(),
            root: None,
            is_strict: false,
            watcher: None,
        }
    }

    /// Lets scripts use files, found from this folder.
    #[must_use]
    pub fn with_files(mut self, files: &'f dyn Files, folder: impl Into<PathBuf>) -> Session<'f> {
        self.files = files;
        self.folder = folder.into();
        self
    }

    /// Lets scripts use files from a wider folder.
    #[must_use]
    pub fn with_root(mut self, root: Option<PathBuf>) -> Session<'f> {
        self.root = root;
        self
    }

    /// Makes warnings errors.
    #[must_use]
    pub fn with_strictness(mut self, is_strict: bool) -> Session<'f> {
        self.is_strict = is_strict;
        self
    }

    /// Lets somebody watch long searches, and end them.
    #[must_use]
    pub fn with_watcher(mut self, watcher: &'f dyn Watcher) -> Session<'f> {
        self.watcher = Some(watcher);
        self
    }

    /// Reads and checks a script, without answering it.
    pub fn check(&self, name: &str, text: &str, path: Option<&Path>) -> Outcome {
        let (mut outcome, _) = self.checked(name, text, path, Purpose::Check);
        self.finish(&mut outcome);
        outcome
    }

    /// Reads, checks and answers a script.
    pub fn run(&self, name: &str, text: &str, path: Option<&Path>) -> Outcome {
        let (mut outcome, checked) = self.checked(name, text, path, Purpose::Run);
        if let Some(checked) = checked {
            let folders = self.folders(path);
            Answering::new(&checked, &mut outcome, self.watcher, folders).all();
        }
        self.finish(&mut outcome);
        outcome
    }

    /// Writes the files that an outcome asks for; what cannot be written is then among its
    /// errors.
    pub fn write(&self, outcome: &mut Outcome) {
        saving::write(self.files, outcome);
        diagnostic::sort(&mut outcome.diagnostics);
    }

    fn folders<'a>(&'a self, script: Option<&'a Path>) -> Folders<'a> {
        Folders {
            files: self.files,
            folder: &self.folder,
            root: self.root.as_ref().unwrap_or(&self.folder),
            script,
        }
    }

    fn finish(&self, outcome: &mut Outcome) {
        if self.is_strict {
            for found in &mut outcome.diagnostics {
                if found.severity == Severity::Warning {
                    found.severity = Severity::Error;
                }
            }
        }
        diagnostic::sort(&mut outcome.diagnostics);
    }

    fn checked(
        &self,
        name: &str,
        text: &str,
        path: Option<&Path>,
        purpose: Purpose,
    ) -> (Outcome, Option<Checked>) {
        let mut outcome = Outcome {
            script: name.to_owned(),
            ..Outcome::default()
        };
        let main = self.main(name, text, path);
        let (scripts, errors) = modules::load(&main, self.files, &mut outcome.sources);
        let nothing_at = (purpose == Purpose::Run).then(|| main_span(&outcome.sources));
        let checked = judged(scripts, errors, nothing_at, &mut outcome);
        if let Some(checked) = &checked {
            outcome.symbols = audit::rows(&checked.model, &checked.cases);
        }
        (outcome, checked)
    }

    fn main(&self, name: &str, text: &str, path: Option<&Path>) -> Main {
        Main {
            name: name.to_owned(),
            text: text.to_owned(),
            path: path.map(Path::to_owned),
            folder: self.folder.clone(),
            root: self.root.clone().unwrap_or_else(|| self.folder.clone()),
        }
    }
}

/// What a script is read for; a shelf of declarations has nothing to answer, but can be
/// checked.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Purpose {
    Check,
    Run,
}

/// Checks what was read and adds what is wrong to an outcome. A script that holds nothing
/// to answer for is at fault at `nothing_at`, if that is given.
fn judged(
    scripts: Vec<(crate::model::Level, ast::Script)>,
    errors: Vec<Diagnostic>,
    nothing_at: Option<Span>,
    outcome: &mut Outcome,
) -> Option<Checked> {
    let unreadable = unreadable_names(&scripts, &errors, &outcome.sources);
    let is_whole = errors.iter().all(|found| !is_of_module(found));
    let has_form = errors.iter().all(|found| !found.is_error());
    outcome.diagnostics.extend(errors);
    let (model, errors) = declarations::gather(scripts);
    let (checked, errors) = check_model(model, errors, nothing_at, has_form);
    let errors = without_repeats(errors);
    outcome.diagnostics.extend(
        errors
            .iter()
            .filter(|error| !is_echo(error, &unreadable, is_whole))
            .map(ModelError::diagnostic),
    );
    let is_sound = !outcome.diagnostics.iter().any(Diagnostic::is_error);
    checked.filter(|_| is_sound)
}

#[derive(Debug)]
struct Checked {
    model: Model,
    cases: Vec<Case>,
}

fn main_span(sources: &Sources) -> Span {
    let first = sources.iter().next().map(|(file, _)| file);
    Span::new(first.unwrap_or_default(), 0, 0)
}

fn check_model(
    mut model: Model,
    mut errors: Vec<ModelError>,
    nothing_at: Option<Span>,
    has_form: bool,
) -> (Option<Checked>, Vec<ModelError>) {
    errors.extend(frames::resolve(&mut model));
    errors.extend(dimensions::check(&mut model));
    errors.extend(requests::check(&model));
    if let Some(span) = nothing_at
        && model.equations.is_empty()
        && model.requests.is_empty()
        && has_form
    {
        errors.push(ModelError::NothingToRank { span });
    }
    if !has_form || errors.iter().any(|error| error.diagnostic().is_error()) {
        for error in analysis::value_errors(&model) {
            if errors.iter().all(|known| !overlap(known, &error)) {
                errors.push(error);
            }
        }
        return (None, errors);
    }
    let (cases, found) = analysis::cases(&model);
    errors.extend(found);
    for case in &cases {
        errors.extend(requests::check_processes(&model, case));
        errors.extend(bounds::check(&model, case));
    }
    (Some(Checked { model, cases }), errors)
}

/// Whether two faults point at one place, so that the second would repeat the first.
fn overlap(a: &ModelError, b: &ModelError) -> bool {
    match (a.diagnostic().span, b.diagnostic().span) {
        (Some(a), Some(b)) => a.file == b.file && a.start < b.end && b.start < a.end,
        (Some(_) | None, None) | (None, Some(_)) => false,
    }
}

/// Names that stand in statements which could not be read: to call their uses unknown too
/// would repeat the fault.
fn unreadable_names(
    scripts: &[(crate::model::Level, ast::Script)],
    errors: &[Diagnostic],
    sources: &Sources,
) -> Vec<String> {
    let faulty = scripts
        .iter()
        .flat_map(|(_, script)| &script.statements)
        .filter(|statement| {
            matches!(statement.kind, ast::StatementKind::Error)
                || errors.iter().filter_map(|error| error.span).any(|span| {
                    span.file == statement.span.file
                        && statement.span.start <= span.start
                        && span.start <= statement.span.end
                })
        });
    faulty
        .flat_map(|statement| {
            sources
                .slice(statement.span)
                .split(|c: char| !(c.is_alphanumeric() || c == '_' || c == '\''))
        })
        .filter(|word| !word.is_empty())
        .map(str::to_owned)
        .collect()
}

/// Whether a module or file is missing, whose names then are too.
fn is_of_module(found: &Diagnostic) -> bool {
    matches!(
        found.code,
        "unreadable-file" | "not-utf8" | "unknown-module" | "outside-folder" | "use-cycle"
    )
}

/// What nothing declares is told once, at its first place.
fn without_repeats(errors: Vec<ModelError>) -> Vec<ModelError> {
    let unknown = |error: &ModelError| match error {
        ModelError::UnknownName { name, span, .. } => Some((false, name.clone(), *span)),
        ModelError::NotAFunction { name, span, .. } => Some((true, name.clone(), *span)),
        _ => None,
    };
    let mut first: HashMap<(bool, String), Span> = HashMap::new();
    for (is_function, name, span) in errors.iter().filter_map(unknown) {
        let place = first.entry((is_function, name)).or_insert(span);
        *place = span.min(*place);
    }
    let is_first = |error: &ModelError| match unknown(error) {
        Some((is_function, name, span)) => first.get(&(is_function, name)) == Some(&span),
        None => true,
    };
    errors.into_iter().filter(is_first).collect()
}

fn is_echo(error: &ModelError, unreadable: &[String], is_whole: bool) -> bool {
    match error {
        ModelError::UnknownName { name, .. }
        | ModelError::UnknownEquation { name, .. }
        | ModelError::UnknownPhenomenon { name, .. } => !is_whole || unreadable.contains(name),
        _ => false,
    }
}
