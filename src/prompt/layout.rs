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

/// The widest label of a paragraph.
const LONGEST_LABEL: usize = 17;

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

    /// A report of 80 columns fitted to a narrower terminal: its paragraphs are put
    /// together again and broken anew, other lines are broken where they are too wide.
    pub fn folded(&self, text: &str) -> String {
        if !self.is_narrow() {
            return text.to_owned();
        }
        let mut out = String::new();
        let mut open: Option<(String, String)> = None;
        let mut was_full = false;
        for line in text.lines() {
            let (label, rest) = labelled(line);
            let is_blank = label.trim().is_empty() && !rest.is_empty();
            let above = open.as_ref().map_or(0, |(above, _)| width(above));
            // Under the text of a full line, or deep in the last column of a table.
            let goes_on = is_blank
                && (was_full && width(&label) == above || width(&label) > LONGEST_LABEL + 7);
            was_full = width(line) > WIDTH * 3 / 4;
            match &mut open {
                Some((_, text)) if goes_on => {
                    text.push(' ');
                    text.push_str(rest);
                }
                _ => self.close(open.replace((label, rest.to_owned())), &mut out),
            }
        }
        self.close(open, &mut out);
        out
    }

    fn close(&self, paragraph: Option<(String, String)>, out: &mut String) {
        let Some((label, text)) = paragraph else {
            return;
        };
        let text = match text.starts_with('─') {
            true => text.trim_matches(['─', ' ']),
            false => text.as_str(),
        };
        if text.is_empty() {
            out.push_str(label.trim_end());
            out.push('\n');
            return;
        }
        // What goes on stands under the text, or a little to the right without a label.
        let is_labelled = !label.trim().is_empty();
        let indent = width(&label).min(self.room() / 3) + if is_labelled { 0 } else { 2 };
        out.push_str(&self.hanging(&label, indent, text));
    }
}

/// A line as its indent, or a short label with the blanks around it, and the rest.
fn labelled(line: &str) -> (String, &str) {
    let bare = line.trim_start();
    let indent = line.len() - bare.len();
    let label = bare.find("  ").map(|at| {
        let blanks = bare[at..].len() - bare[at..].trim_start().len();
        indent + at + blanks
    });
    let is_short = |len: &usize| (1..=LONGEST_LABEL).contains(&width(&line[..*len]));
    let len = label
        .filter(is_short)
        .filter(|_| indent > 0)
        .unwrap_or(indent);
    (line[..len].to_owned(), &line[len..])
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
