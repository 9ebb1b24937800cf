//! Random keys against everything that handles a line, without a terminal: hints,
//! colours and completion at every key, answers at Enter.

use proptest::prelude::*;
use proptest::strategy::ValueTree;
use proptest::test_runner::{Config, RngAlgorithm, TestRng, TestRunner};
use scalewright::prompt::complete::complete;
use scalewright::prompt::dialogue::Dialogue;
use scalewright::prompt::entry::wants_more;
use scalewright::prompt::highlight::{highlight, parts};
use scalewright::prompt::hint::hint;

use super::{SQUALL_LINE, dialogue};

const SEQUENCES: usize = 10_000;

/// A key, or a few that belong together.
#[derive(Debug, Clone)]
enum Key {
    Text(String),
    Left,
    Right,
    Home,
    Backspace,
    Tab,
    Enter,
    DropLine,
}

fn key() -> impl Strategy<Value = Key> {
    let pieces = vec![
        "scale ",
        "U",
        " = ",
        "10 m/s",
        "~",
        "rank ",
        "x_momentum",
        "show ",
        "(",
        ")",
        "{",
        "}",
        "phenomenon ",
        "p' ",
        "ρ_0",
        "深",
        "e\u{301}",
        "∂u/∂x",
        "\"",
        "#",
        "\n",
        "\t",
        "..",
        ":",
        "again",
        "back",
        "page",
        "help ",
        "+",
        "-",
        "*",
        "/",
        "^2",
        " in ",
        "kt",
        "equation ",
        "field ",
        "f",
        "claim ",
        "<<",
        "for ",
        "within ",
        "1e-4 1/s",
        "²",
        "\u{0}",
        "\u{1b}",
        "🌊",
        "group ",
        "use ",
        "atmosphere.",
        "leave",
        "W",
        "0",
        "1e300",
        "²∂",
        "from ",
        ",",
    ];
    prop_oneof![
        12 => prop::sample::select(pieces).prop_map(|piece| Key::Text(piece.to_owned())),
        2 => any::<char>().prop_map(|c| Key::Text(c.to_string())),
        1 => Just(Key::Left),
        1 => Just(Key::Right),
        1 => Just(Key::Home),
        1 => Just(Key::Backspace),
        2 => Just(Key::Tab),
        3 => Just(Key::Enter),
        1 => Just(Key::DropLine),
    ]
}

/// A line as an editor keeps it.
struct Line {
    text: String,
    cursor: usize,
}

impl Line {
    fn put(&mut self, text: &str) {
        self.text.insert_str(self.cursor, text);
        self.cursor += text.len();
    }

    fn left(&mut self) {
        let before = self.text[..self.cursor].chars().next_back();
        self.cursor -= before.map_or(0, char::len_utf8);
    }

    fn right(&mut self) {
        let behind = self.text[self.cursor..].chars().next();
        self.cursor += behind.map_or(0, char::len_utf8);
    }

    fn press(&mut self, key: &Key, talk: &mut Dialogue<'static>) {
        match key {
            Key::Text(text) => self.put(text),
            Key::Left => self.left(),
            Key::Right => self.right(),
            Key::Home => self.cursor = 0,
            Key::Backspace => {
                let end = self.cursor;
                self.left();
                self.text.replace_range(self.cursor..end, "");
            }
            Key::Tab => {
                let found = complete(talk.page(), &self.text, self.cursor);
                assert!(found.start <= self.cursor && self.text.is_char_boundary(found.start));
                if let Some(word) = found.words.first() {
                    self.text.replace_range(found.start..self.cursor, word);
                    self.cursor = found.start + word.len();
                }
            }
            Key::Enter if wants_more(&self.text) => self.put("\n"),
            Key::Enter => {
                // No file is written here.
                if !self.text.contains("keep") {
                    talk.enter(&self.text);
                }
                self.drop();
            }
            Key::DropLine => self.drop(),
        }
    }

    fn drop(&mut self) {
        self.text.clear();
        self.cursor = 0;
    }
}

#[test]
fn random_keys_do_no_harm() {
    let config = Config {
        failure_persistence: None,
        ..Config::default()
    };
    let rng = TestRng::from_seed(RngAlgorithm::ChaCha, &[9; 32]);
    let mut runner = TestRunner::new_with_rng(config, rng);
    let sequences = prop::collection::vec(key(), 1..24);
    let mut talk = dialogue(80);
    for n in 0..SEQUENCES {
        // Now and then anew, with something declared.
        if n % 100 == 0 {
            talk = dialogue(if n % 200 == 0 { 80 } else { 40 });
            talk.enter(&SQUALL_LINE[..8].join("\n"));
        }
        let keys = sequences.new_tree(&mut runner).unwrap().current();
        let mut line = Line {
            text: String::new(),
            cursor: 0,
        };
        for key in &keys {
            line.press(key, &mut talk);
            let (text, cursor) = (line.text.as_str(), line.cursor);
            if cursor == text.len() {
                hint(talk.page(), text);
            }
            let coloured = parts(talk.page(), text, cursor);
            assert!(
                coloured.windows(2).all(|pair| pair[0].1 <= pair[1].0),
                "{text:?}"
            );
            assert!(highlight(talk.page(), text, cursor).len() >= text.len());
        }
    }
}

/// Random sequences as a terminal sends them, without those that write files or leave.
#[cfg(unix)]
pub(super) fn for_terminal(count: usize) -> Vec<String> {
    let config = Config {
        failure_persistence: None,
        ..Config::default()
    };
    let rng = TestRng::from_seed(RngAlgorithm::ChaCha, &[7; 32]);
    let mut runner = TestRunner::new_with_rng(config, rng);
    let sequences = prop::collection::vec(key(), 1..12);
    let sequence = |keys: Vec<Key>| -> String {
        let keys = keys.into_iter().map(|key| match key {
            Key::Text(text) => text.replace(|c: char| c.is_control() || c == 'k' || c == 'l', ""),
            Key::Left => "\x1b[D".to_owned(),
            Key::Right => "\x1b[C".to_owned(),
            Key::Home => "\x01".to_owned(),
            Key::Backspace => "\x7f".to_owned(),
            Key::Tab => "\t".to_owned(),
            Key::Enter => "\r".to_owned(),
            Key::DropLine => "\x03".to_owned(),
        });
        keys.collect()
    };
    (0..count)
        .map(|_| sequence(sequences.new_tree(&mut runner).unwrap().current()))
        .collect()
}
