//! What the prompt writes, fitted to the width of the terminal.

use crate::report::layout::{WIDTH, width};

/// The width of what is written, and whether it is coloured.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Sheet {
    /// Columns of the terminal.
    pub columns: usize,
    /// Whether escape sequences for colours are written.
    pub colour: bool,
}

/// The narrowest terminal for which lines are broken.
const NARROWEST: usize = 24;

impl Sheet {
    /// Without colour.
    pub fn plain(columns: usize) -> Sheet {
        Sheet {
            columns,
            colour: false,
        }
    }

    /// Whether reports, which are 80 columns wide, do not fit.
    pub fn is_narrow(&self) -> bool {
        self.columns < WIDTH
    }

    fn room(&self) -> usize {
        self.columns.clamp(NARROWEST, WIDTH)
    }

    /// A paragraph behind a label; later lines begin under its first word.
    pub fn paragraph(&self, label: &str, text: &str) -> String {
        self.hanging(label, width(label), text)
    }

    /// A paragraph behind a label, with its own indent for later lines.
    fn hanging(&self, label: &str, indent: usize, text: &str) -> String {
        let mut out = String::from(label);
        let mut column = width(label);
        let mut is_first = true;
        for word in text.split_whitespace() {
            for piece in pieces(word, self.room().saturating_sub(indent).max(1)) {
                let needed = width(&piece);
                let blank = usize::from(!is_first);
                if !is_first && column + blank + needed > self.room() {
                    out.push('\n');
                    out.push_str(&" ".repeat(indent));
                    column = indent;
                } else if !is_first {
                    out.push(' ');
                    column += 1;
                }
                out.push_str(&piece);
                column += needed;
                is_first = false;
            }
        }
        out.push('\n');
        out
    }

    /// Lines that may be too wide, broken where that is best; later parts are indented.
    pub fn folded(&self, text: &str) -> String {
        if !self.is_narrow() {
            return text.to_owned();
        }
        let mut out = String::new();
        for line in text.lines() {
            if width(line) <= self.room() {
                out.push_str(line);
                out.push('\n');
                continue;
            }
            let bare = line.trim_start();
            let indent = line.len() - bare.len();
            let label = " ".repeat(indent.min(self.room() / 4));
            let is_rule = bare.starts_with('─');
            let bare = match is_rule {
                true => bare.trim_matches(['─', ' ']),
                false => bare,
            };
            // What goes on stands a little to the right.
            out.push_str(&self.hanging(&label, label.len() + 2, bare));
        }
        out
    }
}

/// A word cut so that each piece fits a line.
fn pieces(word: &str, room: usize) -> Vec<String> {
    let mut pieces = vec![String::new()];
    for c in word.chars() {
        let last = pieces.len() - 1;
        let with = format!("{}{c}", pieces[last]);
        if width(&with) > room && !pieces[last].is_empty() {
            pieces.push(c.to_string());
        } else {
            pieces[last] = with;
        }
    }
    pieces
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn nothing_is_wider_than_the_terminal() {
        let sheet = Sheet::plain(40);
        let long = format!("  label  {} {}", "word ".repeat(20), "ρ".repeat(90));
        for text in [sheet.paragraph("  label  ", &long), sheet.folded(&long)] {
            assert!(text.lines().all(|line| width(line) <= 40), "{text}");
            assert!(text.lines().count() > 3);
        }
        assert_eq!(Sheet::plain(80).folded("x"), "x");
    }
}
