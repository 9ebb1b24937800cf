//! The program at a pseudo-terminal, with a terminal in memory that shows its screen.

use std::io::Write;
use std::num::NonZeroU16;
use std::path::Path;
use std::process::Command;
use std::time::{Duration, Instant};

use expectrl::session::OsSession;

/// How long anything may take on a busy machine.
const PATIENCE: Duration = Duration::from_secs(60);

/// The mark before an entry, as it stands alone on its line.
const MARK: &str = "~:";

/// A program and its terminal.
pub(super) struct Desk {
    session: OsSession,
    parser: vt100::Parser,
    /// All that was written, escape sequences included.
    pub(super) raw: Vec<u8>,
}

impl Desk {
    /// The prompt in a terminal of this many columns, with its state in a folder.
    pub(super) fn open(columns: u16, state: &Path, change: impl Fn(&mut Command)) -> Desk {
        let mut command = Command::new(env!("CARGO_BIN_EXE_scalewright"));
        change(&mut command);
        Desk::with(command, columns, state)
    }

    pub(super) fn with(mut command: Command, columns: u16, state: &Path) -> Desk {
        if !command.get_envs().any(|(name, _)| name == "NO_COLOR") {
            command.env_remove("NO_COLOR");
        }
        if !command.get_envs().any(|(name, _)| name == "TERM") {
            command.env("TERM", "xterm-256color");
        }
        command
            .env("XDG_STATE_HOME", state)
            .current_dir(state)
            .env_remove("TERM_PROGRAM");
        let mut session = OsSession::spawn(command).expect("the program starts");
        let rows = 40;
        session
            .get_process_mut()
            .set_window_size(columns, rows)
            .expect("the terminal takes a size");
        let size = |n: u16| NonZeroU16::new(n).expect("a size");
        Desk {
            session,
            parser: vt100::Parser::new(size(rows), size(columns), 0),
            raw: Vec::new(),
        }
    }

    /// Presses keys.
    pub(super) fn keys(&mut self, keys: &str) {
        self.session.write_all(keys.as_bytes()).expect("keys go in");
        self.session.flush().expect("keys go in");
    }

    /// Types an entry, and waits until it is answered.
    pub(super) fn enter(&mut self, text: &str) {
        self.keys(text);
        let last: String = text
            .chars()
            .rev()
            .take(6)
            .collect::<Vec<_>>()
            .into_iter()
            .rev()
            .collect();
        self.until(&format!("`{last}` is typed"), |desk| {
            desk.row().contains(last.trim())
        });
        self.keys("\r");
        self.until_ready();
    }

    /// Waits for the mark of the next entry.
    pub(super) fn until_ready(&mut self) {
        self.until("the mark", |desk| desk.row() == MARK);
    }

    /// Ctrl-C until the mark stands alone, whatever the program was doing.
    pub(super) fn drop_line(&mut self) {
        let start = Instant::now();
        loop {
            self.keys("\x03");
            let pause = Instant::now();
            while pause.elapsed() < Duration::from_millis(20) {
                self.read();
                std::thread::sleep(Duration::from_millis(2));
            }
            if self.row() == MARK {
                return;
            }
            assert!(start.elapsed() < PATIENCE, "no mark on\n{}", self.screen());
            // It may ask whether to list more.
            self.keys("n");
        }
    }

    /// Leaves the prompt, until what stands behind it shows. On a busy machine a late Ctrl-C
    /// can take the typed word with it, so it is typed again.
    pub(super) fn leave(&mut self, behind: &str) {
        let start = Instant::now();
        while !self.screen().contains(behind) {
            self.keys("leave\r");
            let pause = Instant::now();
            while pause.elapsed() < Duration::from_secs(1) && !self.screen().contains(behind) {
                self.read();
                std::thread::sleep(Duration::from_millis(5));
            }
            assert!(
                start.elapsed() < PATIENCE,
                "no {behind} on\n{}",
                self.screen()
            );
        }
    }

    /// The lines of `stty -a` that tell how lines are read and echoed.
    pub(super) fn settings(&self) -> Vec<String> {
        let raw = String::from_utf8_lossy(&self.raw);
        let words = [" icanon ", " echo ", " echoctl ", "isig "];
        raw.lines()
            .filter(|line| words.iter().any(|word| line.contains(word)) || line.starts_with("isig"))
            .map(|line| line.trim().to_owned())
            .collect()
    }

    /// Waits until the screen shows a text.
    pub(super) fn until_shown(&mut self, text: &str) {
        self.until(text, |desk| desk.screen().contains(text));
    }

    /// Reads what the program writes until it is as expected.
    pub(super) fn until(&mut self, what: &str, is_so: impl Fn(&Desk) -> bool) {
        let start = Instant::now();
        loop {
            self.read();
            if is_so(self) {
                return;
            }
            assert!(
                start.elapsed() < PATIENCE,
                "no {what} on\n{}",
                self.screen()
            );
            std::thread::sleep(Duration::from_millis(5));
        }
    }

    fn read(&mut self) {
        let mut buffer = [0; 4096];
        while let Ok(n) = self.session.try_read(&mut buffer) {
            if n == 0 {
                return;
            }
            self.parser.process(&buffer[..n]);
            self.raw.extend_from_slice(&buffer[..n]);
        }
    }

    /// Waits for the end of the program; whether it ended well.
    pub(super) fn ends_well(&mut self) -> bool {
        let start = Instant::now();
        while self.session.get_process().is_alive().unwrap_or(false) {
            self.read();
            assert!(start.elapsed() < PATIENCE, "no end on\n{}", self.screen());
            std::thread::sleep(Duration::from_millis(5));
        }
        self.read();
        let status = self.session.get_process().status();
        format!("{status:?}").contains("Exited") && format!("{status:?}").contains(" 0)")
            || status.is_err()
    }

    /// What the screen shows, without blanks at the ends of lines.
    pub(super) fn screen(&self) -> String {
        let contents = self.parser.screen().contents();
        let lines: Vec<&str> = contents.lines().map(str::trim_end).collect();
        lines.join("\n").trim_end().to_owned()
    }

    /// The line in which the cursor stands.
    pub(super) fn row(&self) -> String {
        let screen = self.parser.screen();
        let (row, _) = screen.cursor_position();
        let (_, columns) = screen.size();
        let text = screen.rows(0, columns.get()).nth(usize::from(row));
        text.unwrap_or_default().trim_end().to_owned()
    }

    /// The column of the cursor, from 0.
    pub(super) fn column(&self) -> u16 {
        self.parser.screen().cursor_position().1
    }
}
