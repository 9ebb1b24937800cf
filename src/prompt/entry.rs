//! What is typed: whether it is finished, how a paste falls into entries, and the
//! prompt's own few words.

use crate::session::incremental::{is_readable, is_unfinished};
use crate::source::FileId;
use crate::syntax::errors::SyntaxError;
use crate::syntax::parser;
use crate::syntax::token::{self, Kind};

/// A word of the prompt's own.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct OwnWord {
    /// The word.
    pub word: &'static str,
    /// How it is written.
    pub form: &'static str,
    /// What it does.
    pub says: &'static str,
}

/// The prompt's own words; a statement begins with none of them.
pub const OWN_WORDS: [OwnWord; 6] = [
    OwnWord {
        word: "again",
        form: "again",
        says: "asks the last request again and tells what moved",
    },
    OwnWord {
        word: "back",
        form: "back",
        says: "takes the last declaration back",
    },
    OwnWord {
        word: "page",
        form: "page",
        says: "shows the script that the session amounts to",
    },
    OwnWord {
        word: "keep",
        form: "keep \"FILE.scl\"",
        says: "writes that script to a file",
    },
    OwnWord {
        word: "help",
        form: "help [TOPIC]",
        says: "tells of a word, an error code or a module",
    },
    OwnWord {
        word: "leave",
        form: "leave",
        says: "ends the session, as Ctrl-D does",
    },
];

/// Something that the prompt does itself.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Command {
    /// `again`.
    Again,
    /// `back`.
    Back,
    /// `page`.
    Page,
    /// `keep "lows.scl"`; empty where the file is missing.
    Keep(String),
    /// `help TOPIC`; empty for the first screen.
    Help(String),
    /// `leave`.
    Leave,
}

/// The command that a text is, if it is one.
pub fn command(text: &str) -> Option<Command> {
    let text = text.trim();
    if text.contains('\n') {
        return None;
    }
    let (word, rest) = match text.split_once(char::is_whitespace) {
        Some((word, rest)) => (word, rest.trim()),
        None => (text, ""),
    };
    let bare = rest.split('#').next().unwrap_or("").trim();
    match (word, bare) {
        ("again", "") => Some(Command::Again),
        ("back", "") => Some(Command::Back),
        ("page", "") => Some(Command::Page),
        ("leave", "") => Some(Command::Leave),
        ("keep", _) => command_argument(rest).map(Command::Keep),
        ("help", _) => Some(Command::Help(bare.to_owned())),
        _ => None,
    }
}

/// What stands behind `keep`: a text in quotes, or a word that is no part of an
/// expression.
fn command_argument(rest: &str) -> Option<String> {
    if let Some(quoted) = rest.strip_prefix('"') {
        return Some(quoted.split('"').next().unwrap_or("").to_owned());
    }
    let is_word = !rest.starts_with(['+', '-', '*', '/', '^', '=']) || rest.starts_with('/');
    is_word.then(|| rest.to_owned())
}

/// Whether more must be typed to finish an entry.
pub fn wants_more(text: &str) -> bool {
    command(text).is_none() && is_unfinished(text)
}

/// Whether a text holds no more than blanks and comments.
pub fn is_blank(text: &str) -> bool {
    let lexed = token::read(text, FileId::default());
    lexed.tokens.is_empty() && lexed.errors.is_empty()
}

/// Cuts a text of many lines into entries, as if its lines had been typed one after
/// another. A line goes on with the entry before it if that is unfinished, or if it can
/// be read in no other way.
pub fn entries(text: &str) -> Vec<String> {
    let mut entries: Vec<String> = Vec::new();
    for line in text.lines() {
        match entries.last_mut() {
            Some(entry) if goes_on(entry, line) => {
                entry.push('\n');
                entry.push_str(line);
            }
            _ => entries.push(line.to_owned()),
        }
    }
    entries.retain(|entry| !entry.trim().is_empty());
    entries
}

/// Whether a line belongs to the entry before it.
fn goes_on(entry: &str, line: &str) -> bool {
    if command(entry).is_some() {
        return false;
    }
    if is_blank(entry) || is_inside_phenomenon(entry) {
        return true;
    }
    if is_blank(line) {
        return is_unfinished(entry);
    }
    if begins_statement(line) || command(line).is_some() {
        return false;
    }
    let joined = format!("{entry}\n{line}");
    if is_unfinished(entry) {
        return is_readable(&joined) || is_unfinished(&joined);
    }
    let stands_alone = !line.starts_with([' ', '\t']) && is_readable(line);
    !stands_alone && (is_readable(&joined) || is_unfinished(&joined))
}

fn is_inside_phenomenon(entry: &str) -> bool {
    let (_, errors) = parser::parse(entry, FileId::default());
    let is_open = |error: &SyntaxError| {
        error.wants_more() && matches!(error, SyntaxError::OpenPhenomenon { .. })
    };
    errors.iter().any(is_open)
}

fn begins_statement(line: &str) -> bool {
    let lexed = token::read(line, FileId::default());
    lexed
        .tokens
        .first()
        .is_some_and(|token| token.kind.begins_statement())
}

/// Whether an entry only declares.
pub fn is_declaration(entry: &str) -> bool {
    first_kind(entry).is_some_and(|kind| kind.begins_statement() && kind < Kind::Show)
}

/// Whether an entry is made of statements, not of an expression or a command.
pub fn is_statement(entry: &str) -> bool {
    first_kind(entry).is_some_and(Kind::begins_statement) && command(entry).is_none()
}

fn first_kind(entry: &str) -> Option<Kind> {
    let lexed = token::read(entry, FileId::default());
    lexed.tokens.first().map(|token| token.kind)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::syntax::token::is_reserved;

    #[test]
    fn own_words_clash_with_no_word_of_the_language() {
        for own in OWN_WORDS {
            assert!(!is_reserved(own.word), "{}", own.word);
            assert!(own.form.starts_with(own.word));
            assert!(command(own.word).is_some(), "{}", own.word);
        }
    }

    #[test]
    fn a_command_stands_alone() {
        assert_eq!(command(" again  # once more"), Some(Command::Again));
        assert_eq!(command("help rank"), Some(Command::Help("rank".to_owned())));
        let keep = |name: &str| Some(Command::Keep(name.to_owned()));
        assert_eq!(command("keep \"a b.scl\""), keep("a b.scl"));
        assert_eq!(command("keep /tmp/a.scl"), keep("/tmp/a.scl"));
        for text in ["again*2", "again + 1", "page/2", "keep * 3", "U", "back to"] {
            assert_eq!(command(text), None, "{text}");
        }
    }

    #[test]
    fn a_paste_falls_into_entries() {
        let text = "# head\n\nscale U = 10 m/s\n  \"wind\"\nscale L =\n  1000 km\nU/L\n-U/L\n\
                    phenomenon a {\n  scale U = 1 m/s\n\n}\nequation x: a = b\n  - c\nagain\nshow U\nin kt\n";
        let expected = [
            "# head\n\nscale U = 10 m/s\n  \"wind\"",
            "scale L =\n  1000 km",
            "U/L",
            "-U/L",
            "phenomenon a {\n  scale U = 1 m/s\n\n}",
            "equation x: a = b\n  - c",
            "again",
            "show U\nin kt",
        ];
        assert_eq!(entries(text), expected);
    }

    #[test]
    fn a_faulty_line_does_not_swallow_the_next() {
        let text = "scale U =\nscale L = 1 km\nU +\nrank";
        assert_eq!(entries(text), text.lines().collect::<Vec<_>>());
    }

    #[test]
    fn more_is_wanted_only_where_a_statement_is_unfinished() {
        for text in ["scale U =", "U/(f*", "phenomenon a {", "(U"] {
            assert!(wants_more(text), "{text}");
        }
        for text in ["", "U", "U L", "again", "help (", "show )", "# a"] {
            assert!(!wants_more(text), "{text}");
        }
    }
}
