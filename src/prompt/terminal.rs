//! The prompt at a terminal: lines are read with rustyline and answered by a
//! [`Dialogue`] on a thread of its own, so that Ctrl-C can leave a long answer behind.

use std::borrow::Cow;
use std::io::{self, Write};
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::mpsc::{self, Receiver, Sender};
use std::thread;

use anstyle::{Effects, Style};
use rustyline::completion::Completer;
use rustyline::error::ReadlineError;
use rustyline::highlight::{CmdKind, Highlighter};
use rustyline::hint::{Hint, Hinter};
use rustyline::history::FileHistory;
use rustyline::validate::{ValidationContext, ValidationResult, Validator};
use rustyline::{ColorMode, CompletionType, Config, Context, Editor, Helper};

use crate::prompt::dialogue::{Dialogue, Reply};
use crate::prompt::layout::Sheet;
use crate::prompt::{Start, complete, entry, highlight, hint, history};
use crate::report::layout::{cut, width};
use crate::session::{Session, Watcher};

/// The mark before an entry: what is typed scales as ...
const MARK: &str = "~: ";

/// Columns where the terminal does not tell.
const COLUMNS: usize = 80;

/// Columns below which a hint is no use.
const LEAST_HINT: usize = 6;

/// Most lines that are remembered.
const REMEMBERED: usize = 2_000;

/// What the terminal can do and the user wants.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Aids {
    /// Completion, hints and colours.
    All,
    /// Plain lines: `NO_COLOR` is set, or the terminal moves no cursor.
    None,
}

/// Talks with a person until they leave.
///
/// # Errors
/// What the terminal meets.
pub fn run(plain: Session<'static>, start: Option<&Start>, aids: Aids) -> io::Result<()> {
    let (events, received) = mpsc::channel();
    let on_interrupt = events.clone();
    // Without a handler Ctrl-C ends the program during an answer, which is bearable.
    let _ = ctrlc::set_handler(move || {
        let _ = on_interrupt.send(Event::Interrupt);
    });
    let mut editor = editor(aids).map_err(io_error)?;
    let sheet = sheet(&mut editor, aids);
    let (session, stop) = watched(&plain);
    let mut dialogue = Dialogue::new(session, sheet);
    greet(sheet)?;
    if let Some(start) = start {
        write(&dialogue.start(&start.name, start.path.as_deref(), &start.text))?;
    }
    editor.set_helper(Some(Aid {
        dialogue: Some(dialogue),
        aids,
    }));
    let history = history::file(history::Platform::here(), |name| std::env::var_os(name));
    if let Some(file) = &history {
        // The first session has none.
        let _ = editor.load_history(file);
    }
    let mut talk = Talk {
        plain,
        stop,
        events,
        received,
        n_entries: 0,
    };
    let result = talk.run(&mut editor, aids);
    if let Some(file) = &history
        && history::prepare(file).is_ok()
    {
        // A history that cannot be written is no reason to complain at the end.
        let _ = editor.save_history(file);
    }
    result
}

fn greet(sheet: Sheet) -> io::Result<()> {
    let version = env!("CARGO_PKG_VERSION");
    let text = format!("scalewright {version}; help tells what there is, Ctrl-D leaves");
    io::stdout().write_all(sheet.paragraph("", &text).as_bytes())
}

type Lines = Editor<Aid, FileHistory>;

fn editor(aids: Aids) -> rustyline::Result<Lines> {
    let colours = match aids {
        Aids::All => ColorMode::Enabled,
        Aids::None => ColorMode::Disabled,
    };
    let config = Config::builder()
        .completion_type(CompletionType::List)
        .color_mode(colours)
        .max_history_size(REMEMBERED)?
        .auto_add_history(true)
        .bracketed_paste(true)
        .tab_stop(4)
        .build();
    Editor::with_config(config)
}

fn sheet(editor: &mut Lines, aids: Aids) -> Sheet {
    Sheet {
        columns: editor
            .dimensions()
            .map_or(COLUMNS, |(columns, _)| usize::from(columns)),
        colour: aids == Aids::All,
    }
}

fn io_error(error: ReadlineError) -> io::Error {
    match error {
        ReadlineError::Io(error) => error,
        error => io::Error::other(error.to_string()),
    }
}

fn write(reply: &Reply) -> io::Result<()> {
    let mut stdout = io::stdout().lock();
    stdout.write_all(reply.text().as_bytes())?;
    stdout.flush()
}

// Answering -----------------------------------------------------------------------------------

enum Event {
    /// Ctrl-C outside the editing of a line.
    Interrupt,
    /// The answer to the entry of this number.
    Done(u64, Box<Dialogue<'static>>, Reply),
    /// The thread that worked on the entry of this number is gone without an answer.
    Lost(u64),
}

/// Ends the searches of an answer that was left.
#[derive(Default)]
struct Stop(AtomicBool);

impl Watcher for Stop {
    fn goes_on(&self, _: usize) -> bool {
        !self.0.load(Ordering::Relaxed)
    }
}

/// A session whose searches can be ended. The few bytes of the switch stay, since a
/// thread that was left may look at it at any time.
fn watched(plain: &Session<'static>) -> (Session<'static>, &'static Stop) {
    let stop: &'static Stop = Box::leak(Box::default());
    (plain.clone().with_watcher(stop), stop)
}

struct Talk {
    /// The session without a watcher.
    plain: Session<'static>,
    /// The switch of the present one.
    stop: &'static Stop,
    events: Sender<Event>,
    received: Receiver<Event>,
    n_entries: u64,
}

impl Talk {
    fn run(&mut self, editor: &mut Lines, aids: Aids) -> io::Result<()> {
        loop {
            match editor.readline(MARK) {
                Ok(text) => {
                    let sheet = sheet(editor, aids);
                    let reply = self.answer(editor, &text, sheet);
                    write(&reply)?;
                    if reply.leaves {
                        return Ok(());
                    }
                }
                // Ctrl-C drops the line.
                Err(ReadlineError::Interrupted) => {}
                Err(ReadlineError::Eof) => return Ok(()),
                Err(error) => return Err(io_error(error)),
            }
        }
    }

    /// Has an entry answered while Ctrl-C is listened for.
    fn answer(&mut self, editor: &mut Lines, text: &str, sheet: Sheet) -> Reply {
        let Some(mut dialogue) = editor.helper_mut().and_then(|aid| aid.dialogue.take()) else {
            return Reply::default();
        };
        dialogue.set_sheet(sheet);
        let snapshot = dialogue.snapshot();
        // Ctrl-C of before belongs to nothing.
        while self.received.try_recv().is_ok() {}
        self.n_entries += 1;
        self.begin(dialogue, text.to_owned());
        let (dialogue, reply) = match self.wait() {
            Some(done) => done,
            None => {
                let text = "[interrupted] the answer was left; the page is as it was\n";
                let reply = Reply::failed(text.to_owned());
                self.stop.0.store(true, Ordering::Relaxed);
                let (session, stop) = watched(&self.plain);
                self.stop = stop;
                let restored = Dialogue::restored(session, sheet, snapshot);
                (Box::new(restored), reply)
            }
        };
        if let Some(aid) = editor.helper_mut() {
            aid.dialogue = Some(*dialogue);
        }
        reply
    }

    fn begin(&self, mut dialogue: Dialogue<'static>, text: String) {
        let (events, n) = (self.events.clone(), self.n_entries);
        thread::spawn(move || {
            let guard = Guard {
                events: events.clone(),
                n,
            };
            let reply = dialogue.enter(&text);
            let _ = events.send(Event::Done(n, Box::new(dialogue), reply));
            drop(guard);
        });
    }

    /// The answer to the present entry; `None` if it was interrupted.
    fn wait(&self) -> Option<(Box<Dialogue<'static>>, Reply)> {
        loop {
            match self.received.recv() {
                Ok(Event::Done(n, dialogue, reply)) if n == self.n_entries => {
                    return Some((dialogue, reply));
                }
                Ok(Event::Interrupt) | Err(_) => return None,
                Ok(Event::Lost(n)) if n == self.n_entries => return None,
                // Of an entry that was left.
                Ok(Event::Done(..) | Event::Lost(_)) => {}
            }
        }
    }
}

/// Tells that a thread is gone, whatever ended it.
struct Guard {
    events: Sender<Event>,
    n: u64,
}

impl Drop for Guard {
    fn drop(&mut self) {
        let _ = self.events.send(Event::Lost(self.n));
    }
}

// Editing -------------------------------------------------------------------------------------

/// What the line editor asks for.
struct Aid {
    /// Away while an entry is answered.
    dialogue: Option<Dialogue<'static>>,
    aids: Aids,
}

impl Aid {
    fn dialogue(&self) -> Option<&Dialogue<'static>> {
        self.dialogue.as_ref().filter(|_| self.aids == Aids::All)
    }
}

impl Helper for Aid {}

impl Completer for Aid {
    type Candidate = String;

    fn complete(
        &self,
        line: &str,
        pos: usize,
        _: &Context<'_>,
    ) -> rustyline::Result<(usize, Vec<String>)> {
        let Some(dialogue) = self.dialogue() else {
            return Ok((pos, Vec::new()));
        };
        let found = complete::complete(dialogue.page(), line, pos);
        Ok((found.start, found.words))
    }
}

/// A hint that says something and completes nothing.
struct Remark(String);

impl Hint for Remark {
    fn display(&self) -> &str {
        &self.0
    }

    fn completion(&self) -> Option<&str> {
        None
    }
}

impl Hinter for Aid {
    type Hint = Remark;

    fn hint(&self, line: &str, pos: usize, _: &Context<'_>) -> Option<Remark> {
        if pos < line.len() {
            return None;
        }
        let dialogue = self.dialogue()?;
        let said = hint::hint(dialogue.page(), line)?;
        let taken = width(MARK) + width(line.rsplit('\n').next().unwrap_or(line));
        let room = dialogue.sheet().columns.saturating_sub(taken + 1);
        (room >= LEAST_HINT).then(|| Remark(cut(&said, room)))
    }
}

impl Highlighter for Aid {
    fn highlight<'l>(&self, line: &'l str, pos: usize) -> Cow<'l, str> {
        match self.dialogue() {
            Some(dialogue) => Cow::Owned(highlight::highlight(dialogue.page(), line, pos)),
            None => Cow::Borrowed(line),
        }
    }

    fn highlight_prompt<'b, 's: 'b, 'p: 'b>(&'s self, prompt: &'p str, _: bool) -> Cow<'b, str> {
        let style = Style::new().effects(Effects::BOLD);
        match self.aids {
            Aids::All => Cow::Owned(format!("{style}{prompt}{style:#}")),
            Aids::None => Cow::Borrowed(prompt),
        }
    }

    fn highlight_hint<'h>(&self, hint: &'h str) -> Cow<'h, str> {
        let style = Style::new().effects(Effects::DIMMED);
        Cow::Owned(format!("{style}{hint}{style:#}"))
    }

    fn highlight_char(&self, _: &str, _: usize, _: CmdKind) -> bool {
        self.aids == Aids::All
    }
}

impl Validator for Aid {
    fn validate(&self, cx: &mut ValidationContext<'_>) -> rustyline::Result<ValidationResult> {
        Ok(match entry::wants_more(cx.input()) {
            true => ValidationResult::Incomplete,
            false => ValidationResult::Valid(None),
        })
    }
}
