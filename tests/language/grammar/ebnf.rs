//! A reader of W3C EBNF, as far as the grammar uses it.

use std::collections::BTreeMap;

/// A production's right side.
#[derive(Debug, Clone)]
pub(super) enum Rule {
    /// One of several.
    Choice(Vec<Rule>),
    /// One behind the other.
    Sequence(Vec<Rule>),
    /// Between so many and so many times.
    Repeat(Box<Rule>, usize, Option<usize>),
    /// `'scale'`
    Text(String),
    /// `[A-Za-z]`: one of these characters, or none of them.
    Class(Vec<(char, char)>, bool),
    /// Another production.
    Name(String),
}

/// The productions by their names.
pub(super) fn read(text: &str) -> BTreeMap<String, Rule> {
    let mut reader = Reader {
        rest: &without_comments(text),
    };
    let mut productions = BTreeMap::new();
    while !reader.rest.is_empty() {
        let name = reader.name();
        assert!(reader.take("::="), "no ::= behind {name}");
        let rule = reader.choice();
        assert!(productions.insert(name.clone(), rule).is_none(), "{name}");
    }
    productions
}

fn without_comments(text: &str) -> String {
    let mut out = String::new();
    let mut rest = text;
    while let Some(start) = rest.find("/*") {
        out.push_str(&rest[..start]);
        let end = rest[start..].find("*/").expect("an open comment");
        rest = &rest[start + end + 2..];
    }
    (out + rest).trim_start().to_owned()
}

struct Reader<'a> {
    rest: &'a str,
}

impl Reader<'_> {
    fn skip(&mut self, len: usize) -> String {
        let taken = self.rest[..len].to_owned();
        self.rest = self.rest[len..].trim_start();
        taken
    }

    fn take(&mut self, text: &str) -> bool {
        let is_next = self.rest.starts_with(text);
        if is_next {
            self.skip(text.len());
        }
        is_next
    }

    fn name_len(&self) -> usize {
        let is_part = |c: char| c.is_ascii_alphanumeric() || c == '_';
        self.rest.find(|c| !is_part(c)).unwrap_or(self.rest.len())
    }

    fn name(&mut self) -> String {
        let len = self.name_len();
        assert!(len > 0, "no name at {:.40}", self.rest);
        self.skip(len)
    }

    fn choice(&mut self) -> Rule {
        let mut parts = vec![self.sequence()];
        while self.take("|") {
            parts.push(self.sequence());
        }
        one_or(parts, Rule::Choice)
    }

    fn sequence(&mut self) -> Rule {
        let mut parts = Vec::new();
        while let Some(part) = self.repeated() {
            parts.push(part);
        }
        assert!(!parts.is_empty(), "nothing at {:.40}", self.rest);
        one_or(parts, Rule::Sequence)
    }

    fn repeated(&mut self) -> Option<Rule> {
        let rule = self.primary()?;
        for (sign, least, most) in [("*", 0, None), ("+", 1, None), ("?", 0, Some(1))] {
            if self.take(sign) {
                return Some(Rule::Repeat(Box::new(rule), least, most));
            }
        }
        Some(rule)
    }

    fn primary(&mut self) -> Option<Rule> {
        let first = self.rest.chars().next()?;
        match first {
            '\'' | '"' => {
                let end = self.rest[1..].find(first).expect("an open text");
                let text = self.skip(end + 2);
                Some(Rule::Text(text[1..=end].to_owned()))
            }
            '[' => {
                let end = self.rest.find(']').expect("an open class");
                let text = self.skip(end + 1);
                Some(class(&text[1..end]))
            }
            '(' => {
                self.take("(");
                let rule = self.choice();
                assert!(self.take(")"), "no ) at {:.40}", self.rest);
                Some(rule)
            }
            _ => {
                let len = self.name_len();
                let is_next_production = self.rest[len..].trim_start().starts_with("::=");
                (len > 0 && !is_next_production).then(|| Rule::Name(self.skip(len)))
            }
        }
    }
}

fn one_or(mut parts: Vec<Rule>, many: fn(Vec<Rule>) -> Rule) -> Rule {
    match parts.len() {
        1 => parts.remove(0),
        _ => many(parts),
    }
}

/// `^"#xA#xD`, `A-Za-z`.
fn class(text: &str) -> Rule {
    let (text, is_negated) = match text.strip_prefix('^') {
        Some(rest) => (rest, true),
        None => (text, false),
    };
    let text = text.replace("#xA", "\n").replace("#xD", "\r");
    let chars: Vec<char> = text.chars().collect();
    let mut ranges = Vec::new();
    let mut at = 0;
    while at < chars.len() {
        let is_range = chars.get(at + 1) == Some(&'-') && at + 2 < chars.len();
        let last = if is_range { chars[at + 2] } else { chars[at] };
        ranges.push((chars[at], last));
        at += if is_range { 3 } else { 1 };
    }
    Rule::Class(ranges, is_negated)
}
