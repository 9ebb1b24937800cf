//! The prompt: the place where numbers are tried. `entry` tells what was typed,
//! `dialogue` answers it, `terminal` reads lines with completion (`complete`), hints
//! (`hint`) and colours (`highlight`), and `filter` takes input that is no terminal.
//! `help` has the topics, `answers` and `moved` what is written.

pub mod answers;
pub mod complete;
pub mod dialogue;
pub mod entry;
pub mod filter;
pub mod help;
pub mod highlight;
pub mod hint;
pub mod history;
pub mod layout;
mod mends;
pub mod moved;
pub mod terminal;

/// A script to start from.
#[derive(Debug, Clone)]
pub struct Start {
    /// Its name in messages.
    pub name: String,
    /// Its path, where it is a file.
    pub path: Option<std::path::PathBuf>,
    /// Its text.
    pub text: String,
}
