//! The colours of the text being typed. Only colours that can be read on a light and on
//! a dark ground are used, and weight where that does.

use anstyle::{AnsiColor, Effects, Style};

use crate::model::names::{is_pi, is_reserved_function};
use crate::prompt::entry::command;
use crate::session::incremental::Page;
use crate::source::{FileId, Span};
use crate::syntax::names::normalised;
use crate::syntax::parser;
use crate::syntax::token::{self, Kind, Token};
use crate::units;

/// What a stretch of the text is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Part {
    /// A word of the language or of the prompt.
    Word,
    /// A declared or built-in name.
    Name,
    /// A number with its unit.
    Number,
    /// A text in quotes.
    Text,
    /// A comment.
    Comment,
    /// Something wrong.
    Fault,
}

impl Part {
    fn style(self) -> Style {
        let colour = |colour: AnsiColor| Style::new().fg_color(Some(colour.into()));
        match self {
            Part::Word => Style::new().effects(Effects::BOLD),
            Part::Name => colour(AnsiColor::Cyan),
            Part::Number => colour(AnsiColor::Magenta),
            Part::Text => colour(AnsiColor::Green),
            Part::Comment => Style::new().effects(Effects::DIMMED),
            Part::Fault => colour(AnsiColor::Red).effects(Effects::UNDERLINE),
        }
    }
}

/// The text with colours; its characters stay as they are.
pub fn highlight(page: &Page<'_>, text: &str, cursor: usize) -> String {
    let mut out = String::with_capacity(text.len() * 2);
    let mut at = 0;
    for (start, end, part) in parts(page, text, cursor) {
        let style = part.style();
        out.push_str(&text[at..start]);
        out.push_str(&format!("{style}{}{style:#}", &text[start..end]));
        at = end;
    }
    out.push_str(&text[at..]);
    out
}

/// The coloured stretches of a text in order, in bytes; they do not overlap.
pub fn parts(page: &Page<'_>, text: &str, cursor: usize) -> Vec<(usize, usize, Part)> {
    let place = |span: Span| (span.start as usize, span.end as usize);
    if command(text).is_some() {
        let start = text.len() - text.trim_start().len();
        let end = text[start..].find(char::is_whitespace);
        let end = end.map_or(text.len(), |len| start + len);
        return vec![(start, end, Part::Word)];
    }
    let lexed = token::read(text, FileId::default());
    let faults = faults(text, cursor);
    let mut parts: Vec<(usize, usize, Part)> = Vec::new();
    for token in &lexed.tokens {
        let (start, end) = place(token.span);
        let is_faulty = faults.contains(&(start, end));
        let part = match is_faulty {
            true => Some(Part::Fault),
            false => part(page, token, cursor),
        };
        parts.extend(part.map(|part| (start, end, part)));
    }
    for comment in &lexed.comments {
        let (start, end) = place(comment.span);
        parts.push((start, end, Part::Comment));
    }
    for error in &lexed.errors {
        let (start, end) = place(error.span());
        parts.push((start, end, Part::Fault));
    }
    parts.sort_unstable_by_key(|(start, end, _)| (*start, *end));
    without_overlaps(parts, text)
}

fn part(page: &Page<'_>, token: &Token<'_>, cursor: usize) -> Option<Part> {
    match token.kind {
        kind if kind.is_reserved() => Some(Part::Word),
        Kind::Number => Some(Part::Number),
        Kind::Unit => {
            let is_known = units::parse_unit(token.text).is_ok();
            let is_typed = token.span.end as usize == cursor;
            Some(match is_known || is_typed {
                true => Part::Number,
                false => Part::Fault,
            })
        }
        Kind::Text => Some(Part::Text),
        Kind::Name => {
            let name = normalised(token.text);
            let is_known = page.model().meaning(&name, None).is_some()
                || page.model().equation(&name).is_some()
                || is_reserved_function(&name)
                || is_pi(&name);
            is_known.then_some(Part::Name)
        }
        _ => None,
    }
}

/// The tokens that cannot stand where they do; not while they are typed.
fn faults(text: &str, cursor: usize) -> Vec<(usize, usize)> {
    let (_, expression) = parser::parse_expression(text, FileId::default());
    let (_, script) = parser::parse(text, FileId::default());
    if expression.is_empty() || script.is_empty() {
        return Vec::new();
    }
    let begins = token::read(text, FileId::default())
        .tokens
        .first()
        .is_some_and(|token| token.kind.begins_statement());
    let errors = if begins { script } else { expression };
    errors
        .iter()
        .filter(|error| !error.wants_more())
        .map(|error| (error.span().start as usize, error.span().end as usize))
        .filter(|(start, end)| start < end && *end < cursor)
        .collect()
}

fn without_overlaps(parts: Vec<(usize, usize, Part)>, text: &str) -> Vec<(usize, usize, Part)> {
    let mut kept: Vec<(usize, usize, Part)> = Vec::new();
    for (start, end, part) in parts {
        let is_behind = kept.last().is_none_or(|(_, last, _)| *last <= start);
        let is_text = text.get(start..end).is_some_and(|text| !text.is_empty());
        if is_behind && is_text {
            kept.push((start, end, part));
        }
    }
    kept
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::session::Session;

    fn parts_of(text: &str) -> Vec<(String, Part)> {
        let mut page = Page::new(Session::new());
        assert!(
            page.take("typed", "scale ρ = 1 kg/m^3 scale U = 1 m/s")
                .is_taken
        );
        let found = parts(&page, text, text.len() + 1);
        found
            .into_iter()
            .map(|(start, end, part)| (text[start..end].to_owned(), part))
            .collect()
    }

    #[test]
    fn words_names_numbers_and_faults_are_told_apart() {
        let found = parts_of("scale L = 10 km \"len\" # so");
        let expected = [
            ("scale", Part::Word),
            ("10", Part::Number),
            ("km", Part::Number),
            ("\"len\"", Part::Text),
            ("# so", Part::Comment),
        ];
        assert_eq!(found, expected.map(|(text, part)| (text.to_owned(), part)));
        let found = parts_of("ρ*U + sin(q) $ 3 kmm");
        assert!(found.contains(&("ρ".to_owned(), Part::Name)));
        assert!(found.contains(&("sin".to_owned(), Part::Name)));
        assert!(found.contains(&("$".to_owned(), Part::Fault)));
        assert!(found.contains(&("kmm".to_owned(), Part::Fault)));
        assert!(!found.iter().any(|(text, _)| text == "q"));
        assert_eq!(parts_of("again"), [("again".to_owned(), Part::Word)]);
        assert!(parts_of("scale U = ) 3").contains(&(")".to_owned(), Part::Fault)));
    }

    #[test]
    fn only_colours_are_added() {
        let page = Page::new(Session::new());
        for text in [
            "scale ρ = 10 m/ß",
            "",
            "∂u/∂x  \"ü",
            "深 = 3 # 深",
            "\u{feff}scale",
        ] {
            let coloured = highlight(&page, text, text.len());
            let bare = anstream::adapter::strip_str(&coloured).to_string();
            assert_eq!(bare, text);
        }
    }
}
