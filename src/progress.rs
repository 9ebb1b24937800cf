//! Long searches at a terminal: a line on standard error that tells how they get on, and
//! Ctrl-C, which ends the search but keeps the answers.

use std::process;
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::{Arc, Mutex, PoisonError};
use std::time::{Duration, Instant};

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};
use scalewright::Watcher;

/// A search that is over sooner is not told of.
const PATIENCE: Duration = Duration::from_millis(500);

/// Between two looks at the line.
const REDRAW_HZ: u8 = 5;

/// What the shell expects of a program that Ctrl-C ends.
const ENDED_BY_INTERRUPT: i32 = 130;

/// The terminal that a script is run at.
pub(crate) struct Terminal {
    searching: Arc<AtomicBool>,
    interrupted: Arc<AtomicBool>,
    bar: ProgressBar,
    /// When the present search began.
    since: Mutex<Option<Instant>>,
}

impl Terminal {
    /// Takes over Ctrl-C: during a search it ends that, otherwise, or a second time, the
    /// program.
    pub(crate) fn new() -> Terminal {
        let terminal = Terminal {
            searching: Arc::default(),
            interrupted: Arc::default(),
            bar: ProgressBar::hidden(),
            since: Mutex::default(),
        };
        let searching = Arc::clone(&terminal.searching);
        let interrupted = Arc::clone(&terminal.interrupted);
        // Where it cannot be taken over, Ctrl-C ends the program as ever.
        let _ = ctrlc::set_handler(move || {
            let is_second = interrupted.swap(true, Ordering::SeqCst);
            if is_second || !searching.load(Ordering::SeqCst) {
                process::exit(ENDED_BY_INTERRUPT);
            }
        });
        terminal
    }

    fn show(&self, n_found: usize) {
        if self.bar.is_hidden() {
            self.bar
                .set_draw_target(ProgressDrawTarget::stderr_with_hz(REDRAW_HZ));
            if let Ok(style) = ProgressStyle::with_template("{spinner} {elapsed}  {msg}") {
                self.bar.set_style(style);
            }
        }
        self.bar.set_message(format!(
            "looking for balances, {n_found} so far (Ctrl-C ends the search, answers stay)"
        ));
        self.bar.tick();
    }
}

impl Watcher for Terminal {
    fn goes_on(&self, n_found: usize) -> bool {
        self.searching.store(true, Ordering::SeqCst);
        let mut since = self.since.lock().unwrap_or_else(PoisonError::into_inner);
        if since.get_or_insert_with(Instant::now).elapsed() > PATIENCE {
            self.show(n_found);
        }
        !self.interrupted.load(Ordering::SeqCst)
    }

    fn is_done(&self) {
        self.searching.store(false, Ordering::SeqCst);
        let mut since = self.since.lock().unwrap_or_else(PoisonError::into_inner);
        if since.take().is_some() {
            self.bar.finish_and_clear();
            self.bar.reset();
            self.bar.set_draw_target(ProgressDrawTarget::hidden());
        }
    }
}
