//! The prompt without a terminal: an entry goes in, what is to be written comes out. The
//! terminal, the filter and the tests all talk to it.

use std::fs;
use std::io;
use std::path::{Path, PathBuf};

use crate::analysis::Answer;
use crate::analysis::claims::Held;
use crate::diagnostic::{Diagnostic, Severity};
use crate::prompt::answers;
use crate::prompt::entry::{self, Command};
use crate::prompt::help;
use crate::prompt::layout::Sheet;
use crate::prompt::mends;
use crate::prompt::moved;
use crate::report::words::is_in_report;
use crate::session::incremental::{Page, Taken};
use crate::session::{Session, Status};

/// What an entry is called in messages.
const TYPED: &str = "typed";

/// Most entries that can be taken back.
const MOST_BACK: usize = 100;

/// A session with a person.
pub struct Dialogue<'f> {
    page: Page<'f>,
    sheet: Sheet,
    last: Option<Asked>,
    /// What was declared, each with the text of the page before it.
    earlier: Vec<Declared>,
    /// Files that this session may write over.
    own_files: Vec<PathBuf>,
}

/// An entry that declared something.
#[derive(Debug, Clone)]
struct Declared {
    entry: String,
    page_before: String,
}

/// The last request with its answers.
struct Asked {
    text: String,
    answers: Vec<Answer>,
    claims: Vec<Held>,
}

/// What is to be written.
#[derive(Debug, Default, PartialEq, Eq)]
pub struct Reply {
    /// Its parts in order.
    pub parts: Vec<Part>,
    /// Whether the session ends.
    pub leaves: bool,
    /// How it went.
    pub status: Option<Status>,
}

/// A part of what is to be written.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Part {
    /// Answers.
    Answer(String),
    /// Errors, warnings and notes.
    Fault(String),
}

impl Reply {
    /// What could not be done.
    pub fn failed(text: String) -> Reply {
        Reply {
            parts: vec![Part::Fault(text)],
            status: Some(Status::Invalid),
            ..Reply::default()
        }
    }

    /// All of it as one text.
    pub fn text(&self) -> String {
        let texts = self.parts.iter().map(|part| match part {
            Part::Answer(text) | Part::Fault(text) => text.as_str(),
        });
        texts.collect()
    }

    fn said(text: String) -> Reply {
        Reply {
            parts: vec![Part::Answer(text)],
            ..Reply::default()
        }
    }

    /// Faults, and how it went.
    fn about(faults: String, status: Status) -> Reply {
        Reply {
            parts: vec![Part::Fault(faults)],
            status: Some(status),
            ..Reply::default()
        }
    }

    fn answer(&mut self, text: String) {
        self.parts.push(Part::Answer(text));
    }

    fn add(&mut self, other: Reply) {
        self.parts.extend(other.parts);
        self.leaves |= other.leaves;
        self.status = self.status.max(other.status);
    }
}

/// What can be restored of a dialogue whose answer was stopped.
#[derive(Debug, Clone, Default)]
pub struct Snapshot {
    text: String,
    earlier: Vec<Declared>,
    own_files: Vec<PathBuf>,
}

impl<'f> Dialogue<'f> {
    /// An empty one.
    pub fn new(session: Session<'f>, sheet: Sheet) -> Dialogue<'f> {
        Dialogue {
            page: Page::new(session),
            sheet,
            last: None,
            earlier: Vec::new(),
            own_files: Vec::new(),
        }
    }

    /// The page so far.
    pub fn page(&self) -> &Page<'f> {
        &self.page
    }

    /// How what is written is laid out.
    pub fn sheet(&self) -> Sheet {
        self.sheet
    }

    /// Fits what is written to another width.
    pub fn set_sheet(&mut self, sheet: Sheet) {
        self.sheet = sheet;
    }

    /// What to keep while an answer is worked out.
    pub fn snapshot(&self) -> Snapshot {
        Snapshot {
            text: self.page.text().to_owned(),
            earlier: self.earlier.clone(),
            own_files: self.own_files.clone(),
        }
    }

    /// The dialogue as it was at a snapshot, but for the last request.
    pub fn restored(session: Session<'f>, sheet: Sheet, snapshot: Snapshot) -> Dialogue<'f> {
        Dialogue {
            page: Page::restored(session, &snapshot.text),
            sheet,
            last: None,
            earlier: snapshot.earlier,
            own_files: snapshot.own_files,
        }
    }

    /// Starts from a script. Its requests wait for `again`.
    pub fn start(&mut self, name: &str, path: Option<&Path>, text: &str) -> Reply {
        self.own_files.extend(path.map(Path::to_owned));
        let taken = self.page.open(name, text);
        let mut reply = Reply::about(self.drawn(&taken), taken.outcome.status());
        if taken.is_taken {
            let n_requests = taken.requests.len();
            reply.answer(answers::changed(&taken, &self.sheet));
            if n_requests > 0 {
                let text = format!("{n_requests} from {name}; again answers them");
                reply.answer(self.sheet.paragraph("  requests     ", &text));
                self.last = Some(Asked {
                    text: taken.requests.join("\n"),
                    answers: Vec::new(),
                    claims: Vec::new(),
                });
            }
        }
        reply
    }

    /// Takes what was typed or pasted.
    pub fn enter(&mut self, text: &str) -> Reply {
        let entries = entry::entries(text);
        let mut reply = Reply::default();
        let mut at = 0;
        while at < entries.len() && !reply.leaves {
            let run = &entries[at..at + run_length(&entries[at..])];
            at += run.len();
            match run {
                [one] => reply.add(self.entry(one)),
                run => reply.add(self.run(run)),
            }
        }
        reply
    }

    /// Several statements at once, as in a script, where order does not matter; if they
    /// are at fault together, one after another.
    fn run(&mut self, run: &[String]) -> Reply {
        let page_before = self.page.text().to_owned();
        let entry = run.join("\n");
        let taken = self.page.take(TYPED, &entry);
        if taken.is_taken {
            return self.told(taken, Declared { entry, page_before });
        }
        let mut reply = Reply::default();
        for entry in run {
            reply.add(self.entry(entry));
        }
        reply
    }

    fn entry(&mut self, text: &str) -> Reply {
        match entry::command(text) {
            Some(command) => self.command(&command),
            None => {
                let page_before = self.page.text().to_owned();
                let mut taken = self.page.take(TYPED, text);
                mends::mend(&mut taken.outcome.diagnostics, text, &self.page);
                let entry = text.to_owned();
                self.told(taken, Declared { entry, page_before })
            }
        }
    }

    /// What is said of an entry, and what is remembered of it.
    fn told(&mut self, taken: Taken, declared: Declared) -> Reply {
        let mut reply = Reply::about(self.drawn(&taken), taken.outcome.status());
        if !taken.is_taken {
            return reply;
        }
        if taken.declares {
            self.earlier.push(declared);
            let n_over = self.earlier.len().saturating_sub(MOST_BACK);
            self.earlier.drain(..n_over);
        }
        reply.answer(answers::changed(&taken, &self.sheet));
        reply.answer(answers::answers(&taken, &self.sheet));
        if !taken.requests.is_empty() {
            self.last = Some(Asked {
                text: taken.requests.join("\n"),
                answers: taken.outcome.answers,
                claims: taken.outcome.claims,
            });
        }
        reply
    }

    /// Errors and warnings against the text, notes in a line each. What a report says
    /// already, and what an override says, is not said a second time.
    fn drawn(&self, taken: &Taken) -> String {
        let is_drawn = |found: &Diagnostic| match found.severity {
            Severity::Error => true,
            Severity::Warning => !is_in_report(found.code),
            Severity::Note => false,
        };
        let mut text = taken.outcome.drawn(self.sheet.colour, is_drawn);
        for found in &taken.outcome.diagnostics {
            let is_known = is_in_report(found.code) || found.code == "value-overridden";
            if found.severity == Severity::Note && !is_known {
                text.push_str(&self.sheet.paragraph("  note         ", &found.message));
            }
        }
        text
    }

    // Commands --------------------------------------------------------------------------------

    fn command(&mut self, command: &Command) -> Reply {
        match command {
            Command::Again => self.again(),
            Command::Back => self.back(),
            Command::Page => Reply::said(self.page.text().to_owned()),
            Command::Keep(name) => self.keep(name),
            Command::Help(topic) => Reply::said(help::help(topic, &self.sheet)),
            Command::Leave => Reply {
                leaves: true,
                ..Reply::default()
            },
        }
    }

    fn again(&mut self) -> Reply {
        let Some(last) = self.last.take() else {
            return Reply::failed("nothing was asked yet\n".to_owned());
        };
        let taken = self.page.ask(TYPED, &last.text);
        let mut reply = Reply::about(self.drawn(&taken), taken.outcome.status());
        if !taken.is_taken {
            self.last = Some(last);
            return reply;
        }
        reply.answer(answers::answers(&taken, &self.sheet));
        let (answers, claims) = (taken.outcome.answers, taken.outcome.claims);
        if !last.answers.is_empty() || !last.claims.is_empty() {
            let before = (last.answers.as_slice(), last.claims.as_slice());
            reply.answer(moved::moved(before, (&answers, &claims), &self.sheet));
        }
        self.last = Some(Asked {
            text: last.text,
            answers,
            claims,
        });
        reply
    }

    fn back(&mut self) -> Reply {
        let Some(declared) = self.earlier.pop() else {
            return Reply::failed("nothing was declared yet\n".to_owned());
        };
        let session = self.page.session().clone();
        self.page = Page::restored(session, &declared.page_before);
        Reply::said(self.sheet.paragraph("  taken back   ", &declared.entry))
    }

    fn keep(&mut self, name: &str) -> Reply {
        if name.is_empty() {
            return Reply::failed("expected a file, as in keep \"lows.scl\"\n".to_owned());
        }
        let path = PathBuf::from(name);
        if path.exists() && !self.own_files.contains(&path) {
            let text = format!("[cannot-write] `{name}` is there already: choose another name\n");
            return Reply::failed(text);
        }
        let text = self.page.script();
        match write_whole(&path, &text) {
            Ok(()) => {
                self.own_files.push(path);
                let n_lines = text.lines().count();
                Reply::said(
                    self.sheet
                        .paragraph("  ", &format!("{name}: {n_lines} lines")),
                )
            }
            Err(error) => Reply::failed(format!("[cannot-write] `{name}`: {error}\n")),
        }
    }
}

/// How many entries from the first on are taken together: declarations with the requests
/// behind them, or one entry of another kind.
fn run_length(entries: &[String]) -> usize {
    let declarations = entries
        .iter()
        .take_while(|entry| entry::is_declaration(entry))
        .count();
    let requests = entries[declarations..]
        .iter()
        .take_while(|entry| entry::is_statement(entry) && !entry::is_declaration(entry))
        .count();
    (declarations + requests).max(1)
}

/// Writes a file whole or not at all: beside its place first, then under its name.
fn write_whole(path: &Path, text: &str) -> io::Result<()> {
    let mut beside = path.as_os_str().to_owned();
    beside.push(".part");
    let beside = PathBuf::from(beside);
    let written = fs::write(&beside, text).and_then(|()| fs::rename(&beside, path));
    if written.is_err() {
        let _ = fs::remove_file(&beside);
    }
    written
}
