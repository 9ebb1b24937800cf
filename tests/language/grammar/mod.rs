//! The grammar in `grammar/scl.ebnf` and the parser hold to each other: what the grammar
//! makes is read, and the words and signs of both are the same.

mod ebnf;
mod sentences;

use std::collections::{BTreeMap, BTreeSet};

use scalewright::source::FileId;
use scalewright::syntax::errors::SyntaxError;
use scalewright::syntax::token::{self, RESERVED, SIGNS};

use self::ebnf::Rule;
use self::sentences::{Sentences, is_token};
use super::printing::check_printing;
use super::soup::check;
use super::spans::check_spans;
use super::{read, read_well};

const N_SENTENCES: usize = 6_000;

/// The words that count in some places only.
const WORDS: [&str; 8] = [
    "cartesian",
    "cylindrical",
    "dropped",
    "kept",
    "leading",
    "order",
    "others",
    "spherical",
];

fn grammar() -> BTreeMap<String, Rule> {
    ebnf::read(include_str!("../../../grammar/scl.ebnf"))
}

/// Tokens as a text; a blank stands between two, or now and then new lines and a comment
/// where they may.
fn joined(tokens: &[String], sentences: &mut Sentences<'_>) -> String {
    let mut text = String::new();
    for (at, token) in tokens.iter().enumerate() {
        let is_digit = |c: char| c.is_ascii_digit();
        let behind_number = at > 0 && tokens[at - 1].starts_with(is_digit);
        let blanks = [" ", "\n", "\n\n\n", " # so\n", "\n # so"];
        let blank = match at > 0 && !behind_number && sentences.below(6) == 0 {
            true => blanks[sentences.below(blanks.len())],
            false => " ",
        };
        text.push_str(blank);
        if blank.ends_with('o') {
            text.push('\n');
        }
        text.push_str(token);
    }
    text
}

/// Whether a superscript is raised again: the grammar says in a comment that it is not.
fn is_raised_twice(tokens: &[String]) -> bool {
    let superscript = |token: &str| token.chars().any(|c| "⁻⁰¹²³⁴⁵⁶⁷⁸⁹".contains(c));
    tokens.windows(2).any(|pair| {
        pair[0].starts_with("10")
            && superscript(&pair[0])
            && (pair[1] == "^" || pair[1].starts_with(|c| superscript(&String::from(c))))
    })
}

/// What the form of a sentence cannot say, and the grammar says in a comment.
fn is_beyond_form(error: &SyntaxError) -> bool {
    matches!(
        error,
        SyntaxError::UnlikeOrders { .. }
            | SyntaxError::UnitAfterQuotient { .. }
            | SyntaxError::TooLarge { .. }
    )
}

#[test]
fn sentences_of_the_grammar_are_read_and_printed() {
    let grammar = grammar();
    let mut sentences = Sentences::new(&grammar);
    let mut n_clean = 0;
    for _ in 0..N_SENTENCES {
        let tokens = sentences.tokens("statement");
        let text = joined(&tokens, &mut sentences);
        let (_, errors) = read(&text);
        if is_raised_twice(&tokens) {
            continue;
        }
        assert!(errors.iter().all(is_beyond_form), "{errors:?} in\n{text}");
        if errors.is_empty() {
            check_printing(&text);
            check_spans(&text);
            n_clean += 1;
        }
    }
    assert!(n_clean > N_SENTENCES / 2, "only {n_clean} without an error");
}

#[test]
fn scripts_of_the_grammar_are_read_and_printed() {
    let grammar = grammar();
    let mut sentences = Sentences::new(&grammar);
    for _ in 0..N_SENTENCES / 20 {
        let mut script = Vec::new();
        while script.len() < 20 {
            let tokens = sentences.tokens("statement");
            let (_, errors) = read(&tokens.join(" "));
            if errors.is_empty() {
                script.push(joined(&tokens, &mut sentences) + " # a comment");
            }
        }
        let text = script.join("\n");
        assert_eq!(read_well(&text).statements.len(), script.len());
        check_printing(&text);
    }
}

#[test]
fn sentences_with_a_token_gone_or_twice_do_no_harm() {
    let grammar = grammar();
    let mut sentences = Sentences::new(&grammar);
    for _ in 0..N_SENTENCES {
        let mut tokens = sentences.tokens("statement");
        let at = sentences.below(tokens.len());
        match sentences.below(2) {
            0 => drop(tokens.remove(at)),
            _ => tokens.insert(at, tokens[at].clone()),
        }
        check(&joined(&tokens, &mut sentences));
    }
}

/// All fixed texts of a rule.
fn texts<'a>(rule: &'a Rule, out: &mut BTreeSet<&'a str>) {
    match rule {
        Rule::Text(text) => {
            out.insert(text);
        }
        Rule::Choice(parts) | Rule::Sequence(parts) => {
            parts.iter().for_each(|part| texts(part, out));
        }
        Rule::Repeat(part, ..) => texts(part, out),
        Rule::Class(..) | Rule::Name(_) => {}
    }
}

#[test]
fn words_and_signs_are_those_of_the_parser() {
    let grammar = grammar();
    let mut written = BTreeSet::new();
    let rules = grammar.iter().filter(|(name, _)| !is_token(name));
    rules.for_each(|(_, rule)| texts(rule, &mut written));
    let known = RESERVED.iter().chain(&SIGNS).map(|(_, text)| *text);
    // The numbers of `-> 0` and `others ~ 1`.
    let known: BTreeSet<&str> = known.chain(WORDS).chain(["0", "1"]).collect();
    assert_eq!(written, known);
}

#[test]
fn twins_are_signs_of_the_parser() {
    let grammar = grammar();
    let mut twins = BTreeSet::new();
    texts(&grammar["TWIN"], &mut twins);
    for twin in twins {
        let lexed = token::read(twin, FileId::default());
        let kind = lexed.tokens[0].kind;
        assert!(
            SIGNS
                .iter()
                .any(|(sign, text)| *sign == kind && *text != twin)
        );
    }
}

/// All productions that a rule names.
fn names<'a>(rule: &'a Rule, out: &mut BTreeSet<&'a str>) {
    match rule {
        Rule::Name(name) => {
            out.insert(name);
        }
        Rule::Choice(parts) | Rule::Sequence(parts) => {
            parts.iter().for_each(|part| names(part, out));
        }
        Rule::Repeat(part, ..) => names(part, out),
        Rule::Class(..) | Rule::Text(_) => {}
    }
}

#[test]
fn every_production_is_there_and_used() {
    let grammar = grammar();
    let mut used = BTreeSet::from(["script", "COMMENT", "TWIN"]);
    grammar.values().for_each(|rule| names(rule, &mut used));
    let defined: BTreeSet<&str> = grammar.keys().map(String::as_str).collect();
    assert_eq!(used, defined);
}
