//! Help from the prompt: a topic for every word, error code and module.

pub mod words;

use crate::diagnostic::codes::{self, CODES, Explained};
use crate::model::library::{self, Module};
use crate::model::names::nearest;
use crate::prompt::entry::{OWN_WORDS, OwnWord};
use crate::prompt::help::words::{NOTIONS, WORDS, Word};
use crate::prompt::layout::Sheet;
use crate::source::FileId;
use crate::syntax::ast::{self, StatementKind};
use crate::syntax::token::Kind;
use crate::syntax::{forms, parser, token};

/// The lists that have a topic of their own.
const LISTS: [&str; 2] = ["codes", "library"];

/// Every topic, for completion.
pub fn topics() -> Vec<&'static str> {
    let words = WORDS.iter().chain(NOTIONS).map(|found| found.word);
    let own = OWN_WORDS.iter().map(|found| found.word);
    let codes = CODES.iter().map(|found| found.code);
    let modules = library::MODULES.iter().map(|found| found.name);
    words
        .chain(own)
        .chain(LISTS)
        .chain(codes)
        .chain(modules)
        .collect()
}

/// The text of a topic; the first screen for an empty one.
pub fn help(topic: &str, sheet: &Sheet) -> String {
    if topic.is_empty() {
        return first_screen(sheet);
    }
    let mut words = WORDS.iter().chain(NOTIONS);
    if let Some(found) = words.find(|found| found.word == topic) {
        return word(found, sheet);
    }
    if let Some(found) = OWN_WORDS.iter().find(|found| found.word == topic) {
        return own_word(found, sheet);
    }
    if let Some(found) = codes::find(topic) {
        return code(found, sheet);
    }
    if let Some(found) = library::find(topic) {
        return module(found, sheet);
    }
    match topic {
        "codes" => list("error codes", CODES.iter().map(|found| found.code), sheet),
        "library" => modules(sheet),
        _ => unknown(topic, sheet),
    }
}

fn first_screen(sheet: &Sheet) -> String {
    let statements = |begins: fn(Kind) -> bool| {
        let words = token::RESERVED
            .iter()
            .filter(|(kind, _)| kind.begins_statement());
        let words: Vec<&str> = words
            .filter(|(kind, _)| begins(*kind))
            .map(|(_, word)| *word)
            .collect();
        words.join(" ")
    };
    let mut out = sheet.paragraph(
        "",
        "Type a statement, or an expression to see what it is worth.",
    );
    out.push_str(&sheet.paragraph("  declare  ", &statements(|kind| kind < Kind::Show)));
    out.push_str(&sheet.paragraph("  ask      ", &statements(|kind| kind >= Kind::Show)));
    for own in OWN_WORDS.iter().filter(|own| own.word != "help") {
        let label = format!("  {:<9}", own.word);
        out.push_str(&sheet.paragraph(&label, own.says));
    }
    out.push_str(&sheet.paragraph(
        "  help     ",
        "behind it any word above, an error code (help open-scale) or a module of the library \
         (help atmosphere.momentum); help codes and help library list them",
    ));
    out.push_str(&sheet.paragraph(
        "  keys     ",
        "Tab completes, Up and Down go through earlier lines, Ctrl-C drops the line or stops a \
         long answer, Ctrl-D leaves",
    ));
    out
}

fn word(found: &Word, sheet: &Sheet) -> String {
    let mut out = sheet.paragraph("", found.says);
    let kind = token::RESERVED.iter().find(|(_, word)| *word == found.word);
    if let Some(form) = kind.and_then(|(kind, _)| forms::form(*kind)) {
        out.push_str(&sheet.paragraph("  form     ", form));
    }
    out.push_str(&sheet.paragraph("  example  ", found.example));
    out
}

fn own_word(found: &OwnWord, sheet: &Sheet) -> String {
    let says = format!("It {}.", found.says);
    sheet.paragraph("", &says) + &sheet.paragraph("  form     ", found.form)
}

fn code(found: &Explained, sheet: &Sheet) -> String {
    sheet.paragraph("", found.meaning) + &sheet.paragraph("  mend     ", found.mend)
}

/// The head comment of a module, what it leaves open, and its equations.
fn module(found: &Module, sheet: &Sheet) -> String {
    let mut out = String::new();
    for paragraph in head_comment(found.text) {
        out.push_str(&sheet.paragraph("", &paragraph));
    }
    let (script, _) = parser::parse(found.text, FileId::default());
    let mut open = Vec::new();
    for statement in &script.statements {
        match &statement.kind {
            StatementKind::Value(decl) => {
                if let ast::Value::Open(unit) = &decl.value {
                    open.push(format!("{} ({})", decl.name.text, unit.text));
                }
            }
            StatementKind::Equation(decl) => {
                let title = decl.title.as_ref().map(|title| format!(", {}", title.text));
                let text = format!("{}{}", decl.name.text, title.unwrap_or_default());
                out.push_str(&sheet.paragraph("  equation  ", &text));
            }
            _ => {}
        }
    }
    if !open.is_empty() {
        out.push_str(&sheet.paragraph("  opens     ", &open.join(", ")));
    }
    out.push_str(&sheet.paragraph("  example   ", &format!("use {}", found.name)));
    out
}

/// The comment at the head of a text, paragraph by paragraph.
fn head_comment(text: &str) -> Vec<String> {
    let mut paragraphs = vec![String::new()];
    for line in text.lines().map_while(|line| line.strip_prefix('#')) {
        let line = line.trim();
        match paragraphs.last_mut() {
            Some(last) if !line.is_empty() => {
                if !last.is_empty() {
                    last.push(' ');
                }
                last.push_str(line);
            }
            _ => paragraphs.push(String::new()),
        }
    }
    paragraphs.retain(|paragraph| !paragraph.is_empty());
    paragraphs
}

fn modules(sheet: &Sheet) -> String {
    let names = library::MODULES.iter().map(|module| module.name);
    list("modules of the library", names, sheet)
}

fn list<'a>(title: &str, names: impl Iterator<Item = &'a str>, sheet: &Sheet) -> String {
    let names: Vec<&str> = names.collect();
    sheet.paragraph("", &format!("The {title}:")) + &sheet.paragraph("  ", &names.join(" "))
}

fn unknown(topic: &str, sheet: &Sheet) -> String {
    let near = nearest(topic, topics());
    let text = match near {
        Some(near) => format!("There is no topic `{topic}`; did you mean `help {near}`?"),
        None => format!("There is no topic `{topic}`; `help` alone tells what there is."),
    };
    sheet.paragraph("", &text)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_topic_is_answered() {
        let sheet = Sheet::plain(80);
        let topics = topics();
        assert!(topics.len() > 43 + 60 + 20, "{}", topics.len());
        for topic in topics {
            let text = help(topic, &sheet);
            assert!(!text.contains("There is no topic"), "{topic}");
            assert!(text.lines().count() < 40, "{topic}:\n{text}");
        }
    }

    #[test]
    fn the_first_screen_is_one_screen() {
        for (columns, lines) in [(80, 23), (40, 39)] {
            let text = help("", &Sheet::plain(columns));
            assert!(text.lines().count() <= lines, "{text}");
            assert!(
                text.lines().all(|line| line.chars().count() <= columns),
                "{text}"
            );
        }
    }

    #[test]
    fn splits_and_means_have_topics() {
        let sheet = Sheet::plain(80);
        for (topic, example) in [
            ("field", "field p = p_0 + p'"),
            ("split", "field p = p_0 + p'"),
            ("mean", "from mean(x_momentum)"),
            ("fluctuation", "fluctuation u', v'"),
            ("using", "using no_divergence"),
            ("base", "d_z(p_0) = -rho_0*g"),
        ] {
            let text = help(topic, &sheet);
            let line = text.split_whitespace().collect::<Vec<_>>().join(" ");
            assert!(line.contains(example), "{topic}:\n{text}");
        }
    }

    #[test]
    fn a_misspelt_topic_gets_the_nearest() {
        let text = help("rnak", &Sheet::plain(80));
        assert!(text.contains("`help rank`"), "{text}");
    }
}
