//! Random sentences of a grammar.

use std::collections::BTreeMap;

use scalewright::syntax::token::is_reserved;

use super::ebnf::Rule;

/// Makes sentences, the same ones each time.
pub(super) struct Sentences<'a> {
    productions: &'a BTreeMap<String, Rule>,
    /// How deep each production nests at the least.
    depths: BTreeMap<&'a str, usize>,
    state: u64,
}

/// How deep a sentence nests before it takes the shortest way.
const DEPTH: usize = 26;

impl<'a> Sentences<'a> {
    pub(super) fn new(productions: &'a BTreeMap<String, Rule>) -> Sentences<'a> {
        Sentences {
            productions,
            depths: depths(productions),
            state: 1,
        }
    }

    /// The tokens of a sentence of a production, each with what stands before it.
    pub(super) fn tokens(&mut self, name: &str) -> Vec<String> {
        let mut tokens = Vec::new();
        self.write(&mut tokens, &Rule::Name(name.to_owned()), DEPTH);
        tokens
    }

    /// A number below `n`, at random.
    pub(super) fn below(&mut self, n: usize) -> usize {
        self.state = self
            .state
            .wrapping_mul(6_364_136_223_846_793_005)
            .wrapping_add(1_442_695_040_888_963_407);
        ((self.state >> 33) % n as u64) as usize
    }

    fn write(&mut self, tokens: &mut Vec<String>, rule: &Rule, depth: usize) {
        match rule {
            Rule::Name(name) if is_token(name) => {
                let token = self.token(name);
                tokens.push(token);
            }
            Rule::Name(name) => {
                let rule = &self.productions[name];
                self.write(tokens, rule, depth.saturating_sub(1));
            }
            Rule::Text(text) => tokens.push(text.clone()),
            Rule::Sequence(parts) => {
                for part in parts {
                    self.write(tokens, part, depth);
                }
            }
            Rule::Choice(parts) => {
                let part = self.choose(parts, depth);
                self.write(tokens, part, depth);
            }
            Rule::Repeat(part, least, most) => {
                for _ in 0..self.times(*least, *most, depth) {
                    self.write(tokens, part, depth);
                }
            }
            Rule::Class(..) => panic!("a class stands outside the tokens"),
        }
    }

    fn choose<'b>(&mut self, parts: &'b [Rule], depth: usize) -> &'b Rule {
        let depth_of = |part: &Rule| rule_depth(part, &self.depths).unwrap_or(usize::MAX);
        let fits: Vec<&Rule> = parts
            .iter()
            .filter(|part| depth_of(part) <= depth)
            .collect();
        if fits.is_empty() {
            return parts
                .iter()
                .min_by_key(|part| depth_of(part))
                .expect("a choice has parts");
        }
        fits[self.below(fits.len())]
    }

    fn times(&mut self, least: usize, most: Option<usize>, depth: usize) -> usize {
        if depth == 0 || self.below(2) == 0 {
            return least;
        }
        least + self.below(most.map_or(3, |most| most - least + 1))
    }

    /// A token, of letters without blanks, that is no reserved word.
    fn token(&mut self, name: &str) -> String {
        loop {
            let mut text = String::new();
            self.spell(&mut text, &self.productions[name].clone());
            let words = text.split(|c: char| !c.is_alphanumeric() && c != '_' && c != '%');
            if !words.into_iter().any(is_reserved) || name == "TEXT" {
                return text;
            }
        }
    }

    fn spell(&mut self, text: &mut String, rule: &Rule) {
        match rule {
            Rule::Name(name) => self.spell(text, &self.productions[name].clone()),
            Rule::Text(part) => text.push_str(part),
            Rule::Sequence(parts) => parts.iter().for_each(|part| self.spell(text, part)),
            Rule::Choice(parts) => {
                let depth = self.below(8);
                let part = self.choose(parts, depth).clone();
                self.spell(text, &part);
            }
            Rule::Repeat(part, least, most) => {
                for _ in 0..self.times(*least, *most, 1) {
                    self.spell(text, part);
                }
            }
            Rule::Class(ranges, is_negated) => {
                let c = self.character(ranges, *is_negated);
                text.push(c);
            }
        }
    }

    fn character(&mut self, ranges: &[(char, char)], is_negated: bool) -> char {
        if is_negated {
            let others = ['a', ' ', '#', 'ρ', '(', '.', '\''];
            return others[self.below(others.len())];
        }
        let (first, last) = ranges[self.below(ranges.len())];
        let n = last as u32 - first as u32 + 1;
        char::from_u32(first as u32 + self.below(n as usize) as u32).expect("a range of characters")
    }
}

/// Tokens have names in capitals.
pub(super) fn is_token(name: &str) -> bool {
    name.starts_with(|c: char| c.is_ascii_uppercase())
}

fn depths(productions: &BTreeMap<String, Rule>) -> BTreeMap<&str, usize> {
    let mut depths = BTreeMap::new();
    loop {
        let before = depths.len();
        for (name, rule) in productions {
            if let Some(depth) = rule_depth(rule, &depths) {
                depths.entry(name.as_str()).or_insert(depth + 1);
            }
        }
        if depths.len() == before {
            return depths;
        }
    }
}

/// How deep a rule nests at the least; `None` as long as that is not known.
fn rule_depth(rule: &Rule, depths: &BTreeMap<&str, usize>) -> Option<usize> {
    match rule {
        Rule::Name(name) => depths.get(name.as_str()).copied(),
        Rule::Text(_) | Rule::Class(..) => Some(0),
        Rule::Sequence(parts) => parts
            .iter()
            .map(|part| rule_depth(part, depths))
            .try_fold(0, |most, depth| Some(most.max(depth?))),
        Rule::Choice(parts) => parts
            .iter()
            .filter_map(|part| rule_depth(part, depths))
            .min(),
        Rule::Repeat(_, 0, _) => Some(0),
        Rule::Repeat(part, _, _) => rule_depth(part, depths),
    }
}
