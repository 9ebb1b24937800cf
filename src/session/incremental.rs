//! A session that grows entry by entry, as at a prompt: a page of accepted statements
//! with the model that they make. What an entry declares again takes the place of what
//! stood there; after an error the page is as it was.
//!
//! The page is a script: its text, comments and order kept, gives the same answers. With
//! each declaration the whole page is checked anew, which is fast; a request is answered
//! on the model that stands.

use crate::analysis::show::{self, CaseNames, Shown};
use crate::analysis::{Case, requests};
use crate::diagnostic::{self, Diagnostic};
use crate::model::dimensions::{self, Dim, Place};
use crate::model::errors::ModelError;
use crate::model::modules;
use crate::model::{Level, Model, declarations};
use crate::saving;
use crate::session::answering::Answering;
use crate::session::changes::{self, Changes};
use crate::session::merge::{self, Merged, Written};
use crate::session::{Checked, Outcome, Session, check_model, judged};
use crate::source::{FileId, Sources, Span};
use crate::syntax::ast::{self, Statement, StatementKind};
use crate::syntax::errors::{Mend, SyntaxError};
use crate::syntax::{parser, print};
use crate::units::Dimension;

pub use crate::session::merge::Replaced;

/// What the accepted text is called in messages.
const PAGE: &str = "earlier";

/// A session that grows.
pub struct Page<'f> {
    session: Session<'f>,
    text: String,
    sources: Sources,
    checked: Checked,
    /// What was said of the page already.
    said: Vec<(&'static str, String)>,
}

/// What came of an entry.
#[derive(Debug, Default)]
pub struct Taken {
    /// Answers and diagnostics.
    pub outcome: Outcome,
    /// Whether the page holds the entry now; not so if it was at fault.
    pub is_taken: bool,
    /// Whether it declares something, rather than asking alone.
    pub declares: bool,
    /// What gave way to it.
    pub replaced: Vec<Replaced>,
    /// What it changed.
    pub changes: Changes,
    /// Its requests, each a statement that can be asked again.
    pub requests: Vec<String>,
}

/// What an expression is worth in one case.
#[derive(Debug, Clone)]
pub struct Worth {
    /// The phenomenon.
    pub phenomenon: Option<String>,
    /// Its dimension; `None` for a 0.
    pub dimension: Option<Dimension>,
    /// Its value; `None` while a name in it is open.
    pub shown: Option<Shown>,
}

impl<'f> Page<'f> {
    /// An empty page.
    pub fn new(session: Session<'f>) -> Page<'f> {
        let (model, errors) = declarations::gather(Vec::new());
        let (checked, _) = check_model(model, errors, None, true);
        Page {
            session,
            text: String::new(),
            sources: Sources::default(),
            checked: checked.unwrap_or_else(Checked::empty),
            said: Vec::new(),
        }
    }

    /// The accepted statements as a script.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// What the page declares.
    pub fn model(&self) -> &Model {
        &self.checked.model
    }

    /// The phenomena, or the page itself where it has none.
    pub fn cases(&self) -> &[Case] {
        &self.checked.cases
    }

    /// How its texts are read.
    pub fn session(&self) -> &Session<'f> {
        &self.session
    }

    /// Takes an entry in: statements, or an expression to show. `name` stands for it in
    /// messages.
    pub fn take(&mut self, name: &str, text: &str) -> Taken {
        self.enter(name, text, Mode::Keep)
    }

    /// Takes a script in without answering its requests.
    pub fn open(&mut self, name: &str, text: &str) -> Taken {
        self.enter(name, text, Mode::Unanswered)
    }

    /// Answers requests that the page does not keep.
    pub fn ask(&mut self, name: &str, text: &str) -> Taken {
        self.enter(name, text, Mode::Ask)
    }

    /// The page with another text; one that is at fault leaves it empty.
    pub fn restored(session: Session<'f>, text: &str) -> Page<'f> {
        let mut page = Page::new(session);
        page.enter(PAGE, text, Mode::Unanswered);
        page
    }

    /// What an expression is worth, case by case; empty if it is at fault.
    pub fn worth(&self, expr: &ast::Expr) -> Vec<Worth> {
        let model = &self.checked.model;
        let mut worths = Vec::new();
        for case in &self.checked.cases {
            let mut errors = Vec::new();
            let phenomenon = case.setting.phenomenon;
            let dim = dimensions::dimension(expr, model, phenomenon, Place::Request, &mut errors);
            requests::named_processes(model, case, expr, &mut errors);
            if !errors.is_empty() {
                return Vec::new();
            }
            let (dimension, unit) = match dim {
                Dim::Known(dimension, _) => (Some(dimension), dimension.unit_text()),
                Dim::Any => (None, "1".to_owned()),
                Dim::Faulty => return Vec::new(),
            };
            worths.push(Worth {
                phenomenon: case.setting.name.clone(),
                dimension,
                shown: show::show(expr, None, unit, &CaseNames { model, case }).ok(),
            });
        }
        worths
    }

    /// The page as a script that can be kept: requests that no longer hold are comments.
    pub fn script(&self) -> String {
        let mut text = self.text.clone();
        // Each turn turns at least one request into a comment.
        for _ in 0..text.len() {
            let outcome = self.session.run(PAGE, &text, None);
            let faults: Vec<Span> = outcome
                .diagnostics
                .iter()
                .filter(|found| found.is_error() && found.code != "nothing-to-rank")
                .filter_map(|found| found.span)
                .collect();
            let Some(span) = faulty_request(&text, &faults) else {
                break;
            };
            comment_out(&mut text, span);
        }
        text
    }

    fn enter(&mut self, name: &str, text: &str, mode: Mode) -> Taken {
        let text = text.strip_prefix('\u{feff}').unwrap_or(text);
        let entry = read(text, FileId::default());
        let is_plain = entry.script.statements.iter().all(is_request);
        if entry.errors.is_empty() && !is_plain {
            return self.declare(name, &entry.text, mode);
        }
        let mut sources = self.sources.clone();
        let file = sources.add(name, entry.text.clone());
        let entry = read(text, file);
        let outcome = Outcome {
            script: name.to_owned(),
            sources,
            ..Outcome::default()
        };
        if entry.errors.is_empty() {
            self.request(entry, outcome, mode)
        } else {
            let errors = entry.errors.iter().map(SyntaxError::diagnostic);
            refused(Outcome {
                diagnostics: errors.collect(),
                ..outcome
            })
        }
    }

    // Requests alone --------------------------------------------------------------------------

    fn request(&mut self, entry: Entry, outcome: Outcome, mode: Mode) -> Taken {
        let mut taken = Taken {
            outcome,
            requests: entry.requests(),
            ..Taken::default()
        };
        let model = &mut self.checked.model;
        let n_before = model.requests.len();
        let asked = entry.script.statements.into_iter();
        model
            .requests
            .extend(asked.filter_map(|statement| match statement.kind {
                StatementKind::Request(request) => Some((None, request)),
                _ => None,
            }));
        let found = request_errors(&self.checked);
        let outcome = &mut taken.outcome;
        outcome.diagnostics = found.iter().map(ModelError::diagnostic).collect();
        if mode != Mode::Unanswered && !outcome.diagnostics.iter().any(Diagnostic::is_error) {
            answer(&self.checked, n_before, outcome, &self.session);
        }
        diagnostic::sort(&mut outcome.diagnostics);
        taken.is_taken = !outcome.diagnostics.iter().any(Diagnostic::is_error);
        if taken.is_taken && mode != Mode::Ask {
            merge::append(&mut self.text, &entry.script_text);
            settle(&mut self.checked.model);
            if self.checked.model.requests.len() > n_before {
                // Those that stay have their places in this text.
                self.sources = taken.outcome.sources.clone();
            }
        } else {
            self.checked.model.requests.truncate(n_before);
        }
        taken
    }

    // Declarations ----------------------------------------------------------------------------

    fn declare(&mut self, name: &str, text: &str, mode: Mode) -> Taken {
        let mut dropped: Vec<Span> = Vec::new();
        loop {
            let mut attempt = self.attempt(name, text, &dropped);
            // A request that stands may not hold under what is new; then it goes.
            let n_known = dropped.len();
            dropped.extend(attempt.faulty_settled());
            if dropped.len() > n_known {
                continue;
            }
            let Some(checked) = attempt.checked.take() else {
                return refused(attempt.outcome);
            };
            return self.accept(attempt, checked, mode);
        }
    }

    fn attempt(&self, name: &str, text: &str, dropped: &[Span]) -> Attempt {
        let mut outcome = Outcome {
            script: name.to_owned(),
            ..Outcome::default()
        };
        let main = self.session.main(PAGE, &self.text, None);
        let (mut scripts, errors) = modules::load_with(
            &main,
            &[(name, text)],
            self.session.files,
            &mut outcome.sources,
        );
        let entry = scripts.pop().map(|(_, script)| script).unwrap_or_default();
        let given = given_names(&entry);
        let requests = Entry::requests_of(&entry);
        let page_at = scripts
            .iter()
            .rposition(|(level, _)| *level == Level::Script);
        let mut page = page_at.map(|at| scripts.remove(at).1).unwrap_or_default();
        merge::drop_requests(&mut page, dropped);
        let settled = settled_requests(&page);
        let page_file = FileId::default();
        let page = Written {
            script: page,
            text: &self.text,
        };
        let entry = Written {
            script: entry,
            text,
        };
        let Merged {
            script,
            text,
            replaced,
        } = merge::merge(page, entry, page_file);
        scripts.push((Level::Script, script));
        let checked = judged(scripts, errors, None, &mut outcome);
        Attempt {
            outcome,
            checked,
            text,
            replaced,
            given,
            requests,
            settled,
        }
    }

    fn accept(&mut self, attempt: Attempt, mut checked: Checked, mode: Mode) -> Taken {
        let mut outcome = attempt.outcome;
        let told: Vec<(&'static str, String)> = outcome
            .diagnostics
            .iter()
            .map(|found| (found.code, found.message.clone()))
            .collect();
        let is_new = |found: &Diagnostic| {
            let known =
                |(code, message): &(&str, String)| *code == found.code && *message == found.message;
            !self.said.iter().any(known)
        };
        outcome.diagnostics.retain(is_new);
        if mode != Mode::Unanswered {
            let n_settled = attempt.settled.len();
            sort_requests(&mut checked.model, &attempt.settled);
            answer(&checked, n_settled, &mut outcome, &self.session);
        }
        diagnostic::sort(&mut outcome.diagnostics);
        if outcome.diagnostics.iter().any(Diagnostic::is_error) {
            return refused(outcome);
        }
        let changes = changes::changes(&self.checked, &checked, &attempt.given);
        settle(&mut checked.model);
        self.text = attempt.text;
        self.sources = outcome.sources.clone();
        self.checked = checked;
        self.said = told;
        Taken {
            outcome,
            is_taken: true,
            declares: true,
            replaced: attempt.replaced,
            changes,
            requests: attempt.requests,
        }
    }
}

/// What becomes of an entry.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Mode {
    /// It is answered and kept.
    Keep,
    /// It is kept.
    Unanswered,
    /// It is answered.
    Ask,
}

/// A page with an entry put into it, on trial.
struct Attempt {
    outcome: Outcome,
    checked: Option<Checked>,
    text: String,
    replaced: Vec<Replaced>,
    given: Vec<String>,
    requests: Vec<String>,
    /// The requests of the page that settle something.
    settled: Vec<Span>,
}

impl Attempt {
    /// Requests of the page that are at fault now.
    fn faulty_settled(&self) -> Vec<Span> {
        let errors = self.outcome.diagnostics.iter();
        let places: Vec<Span> = errors
            .filter(|found| found.is_error())
            .filter_map(|found| found.span)
            .collect();
        let holds = |request: &&Span| places.iter().any(|place| is_inside(*place, **request));
        self.settled.iter().filter(holds).copied().collect()
    }
}

fn refused(outcome: Outcome) -> Taken {
    Taken {
        outcome,
        ..Taken::default()
    }
}

fn is_inside(place: Span, whole: Span) -> bool {
    place.file == whole.file && whole.start <= place.start && place.end <= whole.end
}

// Reading -------------------------------------------------------------------------------------

/// An entry as it was read.
struct Entry {
    script: ast::Script,
    errors: Vec<SyntaxError>,
    /// The text that was read.
    text: String,
    /// The same as a script holds it.
    script_text: String,
}

impl Entry {
    fn requests(&self) -> Vec<String> {
        Entry::requests_of(&self.script)
    }

    /// The requests of a script, those of a phenomenon with its name behind `for`.
    fn requests_of(script: &ast::Script) -> Vec<String> {
        let mut found = Vec::new();
        for statement in &script.statements {
            match &statement.kind {
                StatementKind::Request(request) => found.push(print::request(request)),
                StatementKind::Phenomenon(decl) => {
                    for inner in &decl.body {
                        if let StatementKind::Request(request) = &inner.kind {
                            let mut request = request.clone();
                            request.phenomena = vec![decl.name.clone()];
                            found.push(print::request(&request));
                        }
                    }
                }
                _ => {}
            }
        }
        found
    }
}

/// Whether more text could finish an entry.
pub fn is_unfinished(text: &str) -> bool {
    let errors = read(text, FileId::default()).errors;
    !errors.is_empty() && errors.iter().all(SyntaxError::wants_more)
}

/// Whether an entry has the form of statements or of an expression.
pub fn is_readable(text: &str) -> bool {
    read(text, FileId::default()).errors.is_empty()
}

/// Reads statements, or an expression in place of `show`, with or without its clauses.
fn read(text: &str, file: FileId) -> Entry {
    let (script, errors) = parser::parse(text, file);
    let entry = |script, errors, text: &str, script_text: String| Entry {
        script,
        errors,
        text: text.to_owned(),
        script_text,
    };
    if errors.is_empty() {
        return entry(script, errors, text, text.to_owned());
    }
    let (expr, faults) = parser::parse_expression(text, file);
    let start = expr_start(text, file);
    let as_request = format!("{}show {}", &text[..start], &text[start..]);
    if faults.is_empty() {
        return entry(shown(expr), faults, text, as_request);
    }
    let (script_again, errors_again) = parser::parse(&as_request, file);
    let is_show = matches!(script_again.statements.as_slice(), [one] if is_request(one));
    if errors_again.is_empty() && is_show {
        return entry(script_again, errors_again, &as_request, as_request.clone());
    }
    let errors = match is_meant_as_expression(&errors, start) {
        true => faults,
        false => errors,
    };
    entry(script, errors, text, text.to_owned())
}

fn shown(expr: ast::Expr) -> ast::Script {
    let span = expr.span;
    let kind = ast::RequestKind::Show { expr, unit: None };
    let request = ast::Request {
        kind,
        phenomena: Vec::new(),
        span,
    };
    ast::Script {
        statements: vec![Statement {
            kind: StatementKind::Request(request),
            span,
        }],
        comments: Vec::new(),
    }
}

/// Where the first word or sign stands; 0 where there is none.
fn expr_start(text: &str, file: FileId) -> usize {
    let tokens = crate::syntax::token::read(text, file).tokens;
    tokens.first().map_or(0, |token| token.span.start as usize)
}

/// Whether a text that can be read neither as statements nor as an expression was meant
/// as the latter: its first word is no statement, and none that is merely misspelt.
fn is_meant_as_expression(errors: &[SyntaxError], start: usize) -> bool {
    errors.iter().any(|error| match error {
        // A word with a keyword to take its place was no expression.
        SyntaxError::NoStatement { span, mend, .. } => {
            span.start as usize == start && !matches!(mend, Mend::Word(_))
        }
        _ => false,
    })
}

fn is_request(statement: &Statement) -> bool {
    matches!(statement.kind, StatementKind::Request(_))
}

fn given_names(script: &ast::Script) -> Vec<String> {
    let values = script
        .statements
        .iter()
        .filter_map(|found| match &found.kind {
            StatementKind::Value(decl) => Some(decl.name.text.clone()),
            _ => None,
        });
    values.collect()
}

// Requests ------------------------------------------------------------------------------------

fn settled_requests(script: &ast::Script) -> Vec<Span> {
    let mut found = Vec::new();
    let mut add = |statement: &Statement| {
        if let StatementKind::Request(request) = &statement.kind {
            found.push(request.span);
        }
    };
    for statement in &script.statements {
        match &statement.kind {
            StatementKind::Phenomenon(decl) => decl.body.iter().for_each(&mut add),
            _ => add(statement),
        }
    }
    found
}

/// Puts the requests that stand before those that are new.
fn sort_requests(model: &mut Model, settled: &[Span]) {
    model
        .requests
        .sort_by_key(|(_, request)| !settled.contains(&request.span));
}

/// Leaves a model only the requests that settle something.
fn settle(model: &mut Model) {
    model
        .requests
        .retain(|(_, request)| merge::settles(request));
}

fn request_errors(checked: &Checked) -> Vec<ModelError> {
    let mut errors = requests::check(&checked.model);
    if errors.iter().any(|error| error.diagnostic().is_error()) {
        return errors;
    }
    for case in &checked.cases {
        errors.extend(requests::check_processes(&checked.model, case));
    }
    errors
}

/// Answers the requests of a model from the `first` on; those before it only settle what
/// they settle.
fn answer(checked: &Checked, first: usize, outcome: &mut Outcome, session: &Session<'_>) {
    let told = std::mem::take(&mut outcome.diagnostics);
    let mut answering = Answering::new(checked, outcome, session.watcher, session.folders(None));
    for (idx, (own, request)) in checked.model.requests.iter().enumerate() {
        if idx == first {
            answering.outcome.answers.clear();
            answering.outcome.claims.clear();
            answering.outcome.saved.clear();
            answering.outcome.diagnostics.clear();
        }
        answering.in_turn(*own, request);
    }
    if first >= checked.model.requests.len() {
        outcome.saved.clear();
        outcome.answers.clear();
        outcome.diagnostics.clear();
    }
    if outcome.diagnostics.iter().any(Diagnostic::is_error) {
        outcome.saved.clear();
    }
    saving::write(session.files, outcome);
    outcome.diagnostics.splice(0..0, told);
}

/// The first request that holds one of these places.
fn faulty_request(text: &str, faults: &[Span]) -> Option<Span> {
    let (script, _) = parser::parse(text, FileId::default());
    let mut spans = Vec::new();
    for statement in &script.statements {
        match &statement.kind {
            StatementKind::Request(request) => spans.push(request.span),
            StatementKind::Phenomenon(decl) => {
                spans.extend(
                    decl.body
                        .iter()
                        .filter(|inner| is_request(inner))
                        .map(|inner| inner.span),
                );
            }
            _ => {}
        }
    }
    spans
        .into_iter()
        .find(|span| faults.iter().any(|fault| is_inside(*fault, *span)))
}

/// Makes a request a comment, with what stands beside it put on lines of its own.
fn comment_out(text: &mut String, span: Span) {
    let (start, end) = (span.start as usize, span.end as usize);
    let Some(request) = text.get(start..end) else {
        return;
    };
    let lines: Vec<String> = request.lines().map(|line| format!("# {line}")).collect();
    let line = text[..start].rfind('\n').map_or(0, |at| at + 1);
    let before = match text[line..start].trim().is_empty() {
        true => "",
        false => "\n",
    };
    let blanks = text[end..].len() - text[end..].trim_start_matches([' ', '\t']).len();
    let rest = &text[end + blanks..];
    let behind = match rest.is_empty() || rest.starts_with('\n') {
        true => "",
        false => "\n",
    };
    let comment = format!(
        "{before}# no longer answered:\n{}{behind}",
        lines.join("\n")
    );
    text.replace_range(start..end + blanks, &comment);
}

impl Checked {
    /// Nothing at all.
    fn empty() -> Checked {
        Checked {
            model: Model::default(),
            cases: Vec::new(),
        }
    }
}
