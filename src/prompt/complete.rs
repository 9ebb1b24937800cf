//! What could stand at the cursor: words, names, units, modules, processes.
//!
//! The tokens before the cursor tell what is wanted. The word being typed is completed;
//! nothing is looked for inside texts and comments.

use crate::model::library;
use crate::model::names::{FUNCTIONS, OPERATIONS};
use crate::model::{Meaning, Model};
use crate::prompt::entry::OWN_WORDS;
use crate::prompt::help;
use crate::session::incremental::Page;
use crate::source::FileId;
use crate::syntax::token::{self, Kind, RESERVED, Token};
use crate::syntax::{forms, parser};
use crate::units;

/// Words that may stand at the cursor.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Completion {
    /// Where the word being typed begins, in bytes.
    pub start: usize,
    /// What it may become, sorted.
    pub words: Vec<String>,
}

/// The units that are offered before a letter is typed.
const COMMON_UNITS: [&str; 22] = [
    "m", "km", "cm", "mm", "s", "min", "h", "day", "m/s", "cm/s", "km/h", "kt", "1/s", "m^2/s",
    "m/s^2", "hPa", "Pa", "kg/m^3", "K", "deg", "%", "J/(kg.K)",
];

/// Completes the text before the cursor.
pub fn complete(page: &Page<'_>, line: &str, pos: usize) -> Completion {
    let before = line.get(..pos).unwrap_or(line);
    if is_inside_text(before) {
        return Completion::default();
    }
    if let Some(topic) = before.trim_start().strip_prefix("help ") {
        let topic = topic.trim_start();
        let topics = help::topics().into_iter().map(str::to_owned);
        return found(before.len() - topic.len(), topic, topics.collect());
    }
    let tokens = token::read(before, FileId::default()).tokens;
    let place = Place::new(page, before, &tokens);
    let (start, words) = place.candidates();
    found(start, &before[start..], words)
}

fn found(start: usize, typed: &str, mut words: Vec<String>) -> Completion {
    words.retain(|word| word.starts_with(typed) && word != typed);
    words.sort_unstable();
    words.dedup();
    Completion { start, words }
}

/// Whether the cursor stands in a text in quotes or in a comment.
fn is_inside_text(before: &str) -> bool {
    let line = before.rsplit('\n').next().unwrap_or("");
    let mut is_quoted = false;
    for c in line.chars() {
        match c {
            '"' => is_quoted = !is_quoted,
            '#' if !is_quoted => return true,
            _ => {}
        }
    }
    is_quoted
}

/// What stands before the cursor.
struct Place<'a> {
    page: &'a Page<'a>,
    before: &'a str,
    /// The tokens before the word being typed.
    tokens: Vec<Token<'a>>,
    /// The tokens of the statement that the cursor is in, before the word being typed.
    statement: Vec<Token<'a>>,
    /// The token that ends at the cursor, if it is a word or a unit.
    typed: Option<Token<'a>>,
}

impl<'a> Place<'a> {
    fn new(page: &'a Page<'a>, before: &'a str, tokens: &[Token<'a>]) -> Place<'a> {
        let is_word = |kind: Kind| kind == Kind::Name || kind == Kind::Unit || kind.is_reserved();
        let typed = tokens
            .last()
            .filter(|token| token.span.end as usize == before.len() && is_word(token.kind))
            .copied();
        let n_before = tokens.len() - usize::from(typed.is_some());
        let tokens = tokens[..n_before].to_vec();
        let begins = tokens
            .iter()
            .rposition(|token| token.kind.begins_statement());
        Place {
            page,
            before,
            statement: tokens[begins.unwrap_or(0)..].to_vec(),
            tokens,
            typed,
        }
    }

    fn model(&self) -> &'a Model {
        self.page.model()
    }

    fn keyword(&self) -> Option<Kind> {
        let first = self.statement.first()?.kind;
        first.begins_statement().then_some(first)
    }

    fn last(&self) -> Option<Kind> {
        self.tokens.last().map(|token| token.kind)
    }

    fn typed_start(&self) -> usize {
        self.typed
            .map_or(self.before.len(), |token| token.span.start as usize)
    }

    /// Where the word begins and what it may become.
    fn candidates(&self) -> (usize, Vec<String>) {
        if self.keyword() == Some(Kind::Use) {
            return self.modules();
        }
        if let Some(units) = self.units() {
            return units;
        }
        (self.typed_start(), self.words())
    }

    fn modules(&self) -> (usize, Vec<String>) {
        let start = self
            .before
            .rfind(char::is_whitespace)
            .map_or(0, |at| at + 1);
        let names = library::MODULES.iter().map(|module| module.name.to_owned());
        (start, names.collect())
    }

    // Units -----------------------------------------------------------------------------------

    /// Units, behind a number on its line and behind `in`.
    fn units(&self) -> Option<(usize, Vec<String>)> {
        let is_behind_number = self.last() == Some(Kind::Number) && self.is_on_line_of_last();
        let is_behind_in = self.last() == Some(Kind::In);
        if !is_behind_number && !is_behind_in {
            return None;
        }
        let typed = &self.before[self.typed_start()..];
        let is_glued = typed.is_empty() && !self.before.ends_with([' ', '\t']);
        if is_glued && is_behind_number {
            return Some((self.before.len(), Vec::new()));
        }
        let inner = typed.rfind(['.', '/', '(', '·']).map_or(0, |at| {
            at + typed[at..].chars().next().map_or(1, char::len_utf8)
        });
        let mut words: Vec<String> = match typed[inner..].is_empty() {
            true if inner == 0 => COMMON_UNITS.map(str::to_owned).to_vec(),
            true => Vec::new(),
            false => units::symbols().collect(),
        };
        if let Some(dimension) = self.shown_dimension().filter(|_| inner == 0) {
            words = units::symbols()
                .chain(COMMON_UNITS.map(str::to_owned))
                .collect();
            words.retain(|word| {
                units::parse_unit(word).is_ok_and(|unit| unit.dimension == dimension)
            });
        }
        if is_behind_number && inner == 0 {
            words.extend(self.clause_words());
        }
        Some((self.typed_start() + inner, words))
    }

    fn is_on_line_of_last(&self) -> bool {
        let end = self
            .tokens
            .last()
            .map_or(0, |token| token.span.end as usize);
        !self.before[end..].contains('\n')
    }

    /// The dimension of what is shown, behind `show EXPR in`.
    fn shown_dimension(&self) -> Option<units::Dimension> {
        let (first, last) = (self.statement.first()?, self.statement.last()?);
        if first.kind != Kind::Show || last.kind != Kind::In {
            return None;
        }
        let text = self
            .before
            .get(first.span.end as usize..last.span.start as usize)?;
        let (expr, errors) = parser::parse_expression(text, FileId::default());
        if !errors.is_empty() {
            return None;
        }
        self.page.worth(&expr).first()?.dimension
    }

    // Words -----------------------------------------------------------------------------------

    fn words(&self) -> Vec<String> {
        if self.tokens.is_empty() {
            let mut words: Vec<String> = statements();
            words.extend(OWN_WORDS.iter().map(|own| own.word.to_owned()));
            words.extend(self.names());
            return words;
        }
        if let Some(processes) = self.processes() {
            return processes;
        }
        let mut words = match self.clause() {
            Some(Kind::For) => self.phenomena(),
            Some(Kind::Matching | Kind::Limit) => self.groups(),
            Some(Kind::Compare) => self.phenomena(),
            Some(
                Kind::Rank | Kind::Reduce | Kind::Nondimensionalize | Kind::Expand | Kind::Using,
            ) => self.equations(),
            Some(Kind::Where | Kind::Balance) => self.equations(),
            Some(Kind::Bounds | Kind::Find | Kind::Sweep | Kind::Regimes) => self.symbols(),
            Some(Kind::Frame) => ["cartesian", "cylindrical", "spherical"]
                .map(str::to_owned)
                .to_vec(),
            Some(Kind::Claim) => {
                let own = ["leading", "kept", "dropped"].map(str::to_owned);
                own.into_iter()
                    .chain(self.equations())
                    .chain(self.names())
                    .collect()
            }
            Some(Kind::Show) => self.equations().into_iter().chain(self.names()).collect(),
            _ => self.names(),
        };
        words.extend(self.clause_words());
        // A clause that has just begun wants a name first.
        let has_begun = self.last().is_some_and(|kind| !kind.is_reserved());
        if self.typed.is_some() && has_begun {
            words.extend(statements());
        }
        words
    }

    /// The last reserved word before the cursor: it says what is wanted.
    fn clause(&self) -> Option<Kind> {
        let kinds = self.statement.iter().map(|token| token.kind);
        kinds.rev().find(|kind| kind.is_reserved())
    }

    /// The clause words of the statement.
    fn clause_words(&self) -> Vec<String> {
        let form = self.keyword().and_then(forms::form).unwrap_or("");
        let words = form.split(|c: char| !c.is_ascii_lowercase());
        words
            .filter(|word| {
                RESERVED
                    .iter()
                    .any(|(kind, found)| found == word && !kind.begins_statement())
            })
            .map(str::to_owned)
            .collect()
    }

    /// The processes of an equation, where one is wanted.
    fn processes(&self) -> Option<Vec<String>> {
        let tokens = &self.statement;
        let n = tokens.len();
        let named = match tokens.get(n.checked_sub(1)?)?.kind {
            Kind::Dot => tokens.get(n.checked_sub(2)?).map(|token| token.text),
            Kind::By => tokens.get(1).map(|token| token.text),
            Kind::LeftBrace | Kind::Equals | Kind::Colon | Kind::Comma | Kind::Tilde => {
                self.equation_of_list()
            }
            _ => None,
        }?;
        let idx = self.model().equation(named)?;
        let mut found: Vec<String> = Vec::new();
        for case in self.page.cases() {
            let terms = case.equations[idx].terms.iter();
            found.extend(terms.map(|term| process_word(term.label())));
        }
        Some(found)
    }

    /// The equation in whose list of processes the cursor stands: in `balance`, behind
    /// `where EQ:`, or in a claim of verdicts.
    fn equation_of_list(&self) -> Option<&'a str> {
        let tokens = &self.statement;
        match self.keyword()? {
            Kind::Balance => {
                let open = tokens
                    .iter()
                    .rposition(|token| token.kind == Kind::LeftBrace)?;
                let is_closed = tokens[open..]
                    .iter()
                    .any(|token| token.kind == Kind::RightBrace);
                let name = tokens.get(open.checked_sub(1)?)?;
                (!is_closed).then_some(name.text)
            }
            Kind::Find => {
                let colon = tokens.iter().rposition(|token| token.kind == Kind::Colon)?;
                let is_over = tokens[colon..]
                    .iter()
                    .any(|token| token.kind == Kind::Comma);
                let name = tokens.get(colon.checked_sub(1)?)?;
                (!is_over).then_some(name.text)
            }
            Kind::Claim => {
                let is_verdict = matches!(tokens.get(1)?.text, "leading" | "kept" | "dropped");
                let has_list = tokens.get(3)?.kind == Kind::Equals;
                (is_verdict && has_list).then_some(tokens[2].text)
            }
            _ => None,
        }
    }

    // Names -----------------------------------------------------------------------------------

    fn names(&self) -> Vec<String> {
        let declared = self.model().visible_names(None).into_iter();
        let functions = FUNCTIONS.iter().map(|(name, _)| *name);
        declared
            .chain(functions)
            .chain(OPERATIONS)
            .chain(["pi"])
            .map(str::to_owned)
            .collect()
    }

    fn symbols(&self) -> Vec<String> {
        let infos = self.model().symbols.iter();
        infos.map(|info| info.name.clone()).collect()
    }

    fn groups(&self) -> Vec<String> {
        let names = self.model().visible_names(None).into_iter();
        let is_group =
            |name: &&str| matches!(self.model().meaning(name, None), Some(Meaning::Group(_)));
        names.filter(is_group).map(str::to_owned).collect()
    }

    fn equations(&self) -> Vec<String> {
        let equations = self.model().equations.iter();
        equations
            .map(|equation| equation.name.text.clone())
            .collect()
    }

    fn phenomena(&self) -> Vec<String> {
        let phenomena = self.model().phenomena.iter();
        phenomena.map(|found| found.name.text.clone()).collect()
    }
}

fn statements() -> Vec<String> {
    let words = RESERVED.iter().filter(|(kind, _)| kind.begins_statement());
    words.map(|(_, word)| (*word).to_owned()).collect()
}

/// A process as it is named: a name, or a text in quotes.
fn process_word(label: &str) -> String {
    let tokens = token::read(label, FileId::default());
    let is_name = tokens.errors.is_empty()
        && matches!(tokens.tokens.as_slice(), [one] if one.kind == Kind::Name);
    let is_term = label.contains(['*', '/', '^', '(', '∂', '+', '-']);
    match is_name || is_term {
        true => label.to_owned(),
        false => format!("\"{label}\""),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::session::Session;

    fn words(line: &str) -> Vec<String> {
        let mut page = Page::new(Session::new());
        let text =
            "use atmosphere.momentum  scale ρ_s = 1 kg/m^3  phenomenon low { scale U = 1 m/s }";
        let taken = page.take("typed", text);
        assert!(taken.is_taken, "{:?}", taken.outcome.diagnostics);
        complete(&page, line, line.len()).words
    }

    #[test]
    fn what_is_wanted_is_offered() {
        for (line, expected) in [
            ("sca", vec!["scale"]),
            ("aga", vec!["again"]),
            ("scale L = 10 kno", vec![]),
            ("scale L = 10 hP", vec!["hPa"]),
            ("scale L = 10 kg/m^3 withi", vec!["within"]),
            ("scale L = 10 withi", vec!["within"]),
            ("scale L = 10 m/mbar", vec![]),
            ("use atmosphere.mom", vec!["atmosphere.momentum"]),
            ("show x_momentum.cor", vec!["coriolis", "coriolis_vertical"]),
            ("rank y_", vec!["y_momentum"]),
            ("rank for l", vec!["low"]),
            ("claim leading x_momentum = coriolis, fr", vec!["friction"]),
            ("balance b: z_momentum { gra", vec!["gravity"]),
            (
                "nondimensionalize x_momentum by pre",
                vec!["pressure_gradient"],
            ),
            ("find W where x_momentum: fri", vec!["friction"]),
            ("frame sph", vec!["spherical"]),
            ("show ρ", vec!["ρ_s"]),
            ("U/Ome", vec!["Omega"]),
            ("help unknown-u", vec!["unknown-unit"]),
            ("scale L = 10 m \"dep", vec![]),
            ("scale L = 10 m # sca", vec![]),
        ] {
            assert_eq!(words(line), expected, "{line}");
        }
    }

    #[test]
    fn units_fit_what_is_shown() {
        let found = words("show U in ");
        assert!(found.contains(&"kt".to_owned()), "{found:?}");
        assert!(found.contains(&"m/s".to_owned()), "{found:?}");
        assert!(!found.contains(&"hPa".to_owned()));
    }

    #[test]
    fn a_number_alone_takes_common_units() {
        let found = words("scale D = 10 ");
        assert!(found.contains(&"m/s".to_owned()) && found.contains(&"within".to_owned()));
        assert!(words("scale D = 10").is_empty());
        assert!(words("scale D = 10 m/mi").contains(&"min".to_owned()));
    }
}
