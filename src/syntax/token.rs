//! From text to tokens: the lexer.
//!
//! Gives every token with its kind, its text and its place, and the comments apart.
//! Units are read here, since only the text right behind a number (or behind `in`)
//! tells a unit from a name. A character that no script has is reported here and gives
//! no token. What a number or a unit is worth is left to others.

use logos::Logos;

use crate::source::{FileId, Span};
use crate::syntax::ast::Comment;
use crate::syntax::errors::SyntaxError;
use crate::syntax::unit_run::{StartOfUnit, exponent_length, unit_length};

/// A token.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Token<'s> {
    /// What it is.
    pub kind: Kind,
    /// How it is written.
    pub text: &'s str,
    /// Where it stands.
    pub span: Span,
}

/// What the lexer gives.
#[derive(Debug, Default)]
pub struct Lexed<'s> {
    /// The tokens in order.
    pub tokens: Vec<Token<'s>>,
    /// The comments in order.
    pub comments: Vec<Comment>,
    /// What could not be read.
    pub errors: Vec<SyntaxError>,
}

/// Reads a text.
pub fn read(text: &str, file: FileId) -> Lexed<'_> {
    let mut reader = Reader {
        file,
        lexer: Kind::lexer(text),
        out: Lexed::default(),
        unit_wanted: false,
    };
    if text.starts_with(BYTE_ORDER_MARK) {
        reader.lexer.bump(BYTE_ORDER_MARK.len_utf8());
    }
    reader.read();
    reader.out
}

const BYTE_ORDER_MARK: char = '\u{feff}';

/// The kinds of token: first the statement keywords, then the clause words, then the rest.
#[derive(Logos, Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
#[logos(skip r"[ \t\r\n\f]+")]
#[rustfmt::skip]
#[expect(missing_docs, reason = "each stands for what is written beside it")]
pub enum Kind {
    #[token("scale")] Scale,
    #[token("constant")] Constant,
    #[token("coordinate")] Coordinate,
    #[token("frame")] Frame,
    #[token("vector")] Vector,
    #[token("field")] Field,
    #[token("fluctuation")] Fluctuation,
    #[token("velocity")] Velocity,
    #[token("equation")] Equation,
    #[token("group")] Group,
    #[token("balance")] Balance,
    #[token("tolerance")] Tolerance,
    #[token("phenomenon")] Phenomenon,
    #[token("use")] Use,
    #[token("show")] Show,
    #[token("rank")] Rank,
    #[token("nondimensionalize")] Nondimensionalize,
    #[token("reduce")] Reduce,
    #[token("bounds")] Bounds,
    #[token("find")] Find,
    #[token("layers")] Layers,
    #[token("groups")] Groups,
    #[token("limit")] Limit,
    #[token("expand")] Expand,
    #[token("sweep")] Sweep,
    #[token("regimes")] Regimes,
    #[token("compare")] Compare,
    #[token("claim")] Claim,

    #[token("in")] In,
    #[token("for")] For,
    #[token("by")] By,
    #[token("from")] From,
    #[token("to")] To,
    #[token("within")] Within,
    #[token("about")] About,
    #[token("along")] Along,
    #[token("as")] As,
    #[token("where")] Where,
    #[token("with")] With,
    #[token("varying")] Varying,
    #[token("using")] Using,
    #[token("save")] Save,
    #[token("matching")] Matching,

    #[regex(r"\p{L}[\p{L}\p{M}0-9_\u{2080}-\u{2089}]*['\u{2032}]*")] Name,
    #[regex(r"[0-9]+(\.[0-9]+)?([eE][+-]?[0-9]+)?")] Number,
    /// Made in the loop, not by a pattern.
    Unit,
    #[regex("\"[^\"\r\n]*\"")] Text,
    #[regex("\u{207B}?[\u{2070}\u{B9}\u{B2}\u{B3}\u{2074}-\u{2079}]+")] Superscript,
    #[token("+")] Plus,
    #[token("-")] Minus,
    #[token("*")] #[token("\u{B7}")] #[token("\u{D7}")] Star,
    #[token("/")] Slash,
    #[token("^")] Caret,
    #[token("(")] LeftBracket,
    #[token(")")] RightBracket,
    #[token("{")] LeftBrace,
    #[token("}")] RightBrace,
    #[token(",")] Comma,
    #[token(":")] Colon,
    #[token(".")] Dot,
    #[token("..")] Range,
    #[token("=")] Equals,
    #[token("~")] Tilde,
    #[token("<")] Less,
    #[token(">")] Greater,
    #[token("<<")] #[token("\u{226A}")] MuchLess,
    #[token(">>")] #[token("\u{226B}")] MuchGreater,
    #[token("+-")] #[token("\u{B1}")] PlusMinus,
    #[token("->")] #[token("\u{2192}")] Arrow,
    #[token("\u{2202}")] Partial,
    #[token("\u{2207}")] Nabla,

    /// A text that its line ends; it becomes a [`Kind::Text`].
    #[regex("\"[^\"\r\n]*")] OpenText,
    /// It goes to the comments.
    #[regex(r"#[^\n]*", allow_greedy = true)] Comment,
}

/// The reserved words: first those that begin a statement.
pub const RESERVED: [(Kind, &str); 43] = [
    (Kind::Scale, "scale"),
    (Kind::Constant, "constant"),
    (Kind::Coordinate, "coordinate"),
    (Kind::Frame, "frame"),
    (Kind::Vector, "vector"),
    (Kind::Field, "field"),
    (Kind::Fluctuation, "fluctuation"),
    (Kind::Velocity, "velocity"),
    (Kind::Equation, "equation"),
    (Kind::Group, "group"),
    (Kind::Balance, "balance"),
    (Kind::Tolerance, "tolerance"),
    (Kind::Phenomenon, "phenomenon"),
    (Kind::Use, "use"),
    (Kind::Show, "show"),
    (Kind::Rank, "rank"),
    (Kind::Nondimensionalize, "nondimensionalize"),
    (Kind::Reduce, "reduce"),
    (Kind::Bounds, "bounds"),
    (Kind::Find, "find"),
    (Kind::Layers, "layers"),
    (Kind::Groups, "groups"),
    (Kind::Limit, "limit"),
    (Kind::Expand, "expand"),
    (Kind::Sweep, "sweep"),
    (Kind::Regimes, "regimes"),
    (Kind::Compare, "compare"),
    (Kind::Claim, "claim"),
    (Kind::In, "in"),
    (Kind::For, "for"),
    (Kind::By, "by"),
    (Kind::From, "from"),
    (Kind::To, "to"),
    (Kind::Within, "within"),
    (Kind::About, "about"),
    (Kind::Along, "along"),
    (Kind::As, "as"),
    (Kind::Where, "where"),
    (Kind::With, "with"),
    (Kind::Varying, "varying"),
    (Kind::Using, "using"),
    (Kind::Save, "save"),
    (Kind::Matching, "matching"),
];

/// The signs, in ASCII where they have a twin.
pub const SIGNS: [(Kind, &str); 23] = [
    (Kind::Plus, "+"),
    (Kind::Minus, "-"),
    (Kind::Star, "*"),
    (Kind::Slash, "/"),
    (Kind::Caret, "^"),
    (Kind::LeftBracket, "("),
    (Kind::RightBracket, ")"),
    (Kind::LeftBrace, "{"),
    (Kind::RightBrace, "}"),
    (Kind::Comma, ","),
    (Kind::Colon, ":"),
    (Kind::Dot, "."),
    (Kind::Range, ".."),
    (Kind::Equals, "="),
    (Kind::Tilde, "~"),
    (Kind::Less, "<"),
    (Kind::Greater, ">"),
    (Kind::MuchLess, "<<"),
    (Kind::MuchGreater, ">>"),
    (Kind::PlusMinus, "+-"),
    (Kind::Arrow, "->"),
    (Kind::Partial, "\u{2202}"),
    (Kind::Nabla, "\u{2207}"),
];

/// Whether a word is reserved, so that it names nothing and is no unit.
pub fn is_reserved(word: &str) -> bool {
    RESERVED.iter().any(|&(_, reserved)| reserved == word)
}

impl Kind {
    /// Whether a statement begins with it.
    pub fn begins_statement(self) -> bool {
        self <= Kind::Claim
    }

    /// Whether it is a reserved word.
    pub fn is_reserved(self) -> bool {
        self <= Kind::Matching
    }
}

/// A set of kinds of token, and of the end of a statement.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Kinds(u128);

impl Kinds {
    /// The end of the statement.
    pub const END: Kinds = Kinds(1 << 127);

    /// One kind.
    pub const fn one(kind: Kind) -> Kinds {
        Kinds(1 << kind as u32)
    }

    /// All that are in either.
    #[must_use]
    pub const fn and(self, other: Kinds) -> Kinds {
        Kinds(self.0 | other.0)
    }

    /// Whether a kind is in it.
    pub const fn has(self, kind: Kind) -> bool {
        self.0 & Kinds::one(kind).0 != 0
    }

    /// Whether the end of the statement is in it.
    pub const fn has_end(self) -> bool {
        self.0 & Kinds::END.0 != 0
    }
}

struct Reader<'s> {
    file: FileId,
    lexer: logos::Lexer<'s, Kind>,
    out: Lexed<'s>,
    /// Behind `in`: a unit comes next, on whatever line.
    unit_wanted: bool,
}

impl<'s> Reader<'s> {
    fn read(&mut self) {
        loop {
            if self.unit_wanted {
                self.read_unit_behind_in();
            }
            match self.lexer.next() {
                None => return,
                Some(Ok(kind)) => self.take(kind),
                Some(Err(())) => self.unknown(),
            }
        }
    }

    fn take(&mut self, kind: Kind) {
        if kind == Kind::Comment {
            self.out.comments.push(Comment {
                text: self.lexer.slice().trim_end().to_owned(),
                span: self.span(self.lexer.slice().trim_end().len()),
            });
            return;
        }
        self.unit_wanted = kind == Kind::In;
        match kind {
            Kind::OpenText => self.open_text(),
            Kind::Number => self.number(),
            kind => self.push(kind),
        }
    }

    /// A text that its line ends. Where it seems to go on over lines it is taken whole, so
    /// that its words are no faults of their own.
    fn open_text(&mut self) {
        let span = self.span(self.lexer.slice().trim_end().len());
        self.out.errors.push(SyntaxError::OpenText { span });
        let more = length_to_lone_quote(self.lexer.remainder());
        self.lexer.bump(more);
        self.push(Kind::Text);
    }

    fn push(&mut self, kind: Kind) {
        let text = self.lexer.slice();
        let span = self.span(text.len());
        self.out.tokens.push(Token { kind, text, span });
    }

    /// The span of the first bytes of the token just read.
    fn span(&self, len: usize) -> Span {
        let start = self.lexer.span().start;
        Span::new(self.file, start, start + len)
    }

    /// A number, and the unit behind it on the same line.
    fn number(&mut self) {
        if self.lexer.slice() == "10" {
            let power = power_of_ten_length(self.lexer.remainder());
            self.lexer.bump(power);
        }
        self.push(Kind::Number);
        let rest = self.lexer.remainder();
        let blanks = rest.len() - rest.trim_start_matches([' ', '\t']).len();
        let len = unit_length(&rest[blanks..], StartOfUnit::BehindNumber);
        self.push_unit(blanks, len);
    }

    fn read_unit_behind_in(&mut self) {
        let rest = self.lexer.remainder();
        let blanks = rest.len()
            - rest
                .trim_start_matches([' ', '\t', '\r', '\n', '\x0c'])
                .len();
        let len = unit_length(&rest[blanks..], StartOfUnit::BehindIn);
        self.push_unit(blanks, len);
    }

    /// Takes `len` bytes behind some blanks as a unit; none if there are none.
    fn push_unit(&mut self, blanks: usize, len: usize) {
        if len == 0 {
            return;
        }
        let start = self.lexer.span().end + blanks;
        let text = &self.lexer.remainder()[blanks..blanks + len];
        self.lexer.bump(blanks + len);
        self.unit_wanted = false;
        self.out.tokens.push(Token {
            kind: Kind::Unit,
            text,
            span: Span::new(self.file, start, start + len),
        });
    }

    /// A character that no script has. Several side by side are one fault, and so is a
    /// pair of brackets or quotes.
    fn unknown(&mut self) {
        let span = self.span(self.lexer.slice().len());
        let found = self.lexer.slice().chars().next().unwrap_or_default();
        let last_token = self.out.tokens.last().map_or(0, |token| token.span.end);
        if let Some(SyntaxError::UnexpectedCharacter {
            span: before,
            found: opening,
        }) = self.out.errors.last_mut()
        {
            let between = &self.lexer.source()[before.end as usize..span.start as usize];
            if last_token <= before.start && !between.contains('\n') {
                *before = before.to(span);
                return;
            }
            if closes(*opening, found) {
                return;
            }
        }
        self.out
            .errors
            .push(SyntaxError::UnexpectedCharacter { span, found });
    }
}

/// The length up to the next quote and with it, if no other pairs with it on its line; 0
/// if one does.
fn length_to_lone_quote(rest: &str) -> usize {
    let Some(quote) = rest.find('"') else {
        return 0;
    };
    let end = rest[quote..]
        .find('\n')
        .map_or(rest.len(), |end| quote + end);
    let is_lone = rest[quote..end].matches('"').count() % 2 == 1;
    if is_lone { quote + 1 } else { 0 }
}

/// Whether a character closes another, so that the two are one fault.
fn closes(opening: char, closing: char) -> bool {
    matches!(
        (opening, closing),
        ('[', ']') | ('\u{201C}' | '\u{201E}', '\u{201D}' | '\u{201C}') | ('\u{AB}', '\u{BB}')
    )
}

/// How much of the text behind `10` belongs to the number: `^-4`, or superscripts; but no
/// exponent that is no whole number or is itself raised to a power.
fn power_of_ten_length(rest: &str) -> usize {
    let len = exponent_length(rest);
    let behind = rest[len..].trim_start_matches([' ', '\t', '\r', '\n']);
    let is_raised = behind.starts_with('^') || exponent_length(behind) > 0;
    let is_whole = !rest[..len].contains(['.', '(']) && !has_exponent(&rest[len..]);
    if is_whole && !is_raised { len } else { 0 }
}

/// Whether a text goes on as `e5` does: a decimal exponent behind digits.
fn has_exponent(text: &str) -> bool {
    text.strip_prefix(['e', 'E'])
        .map(|rest| rest.strip_prefix(['+', '-']).unwrap_or(rest))
        .is_some_and(|rest| rest.starts_with(|c: char| c.is_ascii_digit()))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn kinds(text: &str) -> Vec<(Kind, &str)> {
        let lexed = read(text, FileId::default());
        assert!(lexed.errors.is_empty(), "{text}");
        let tokens = lexed.tokens.into_iter();
        tokens.map(|token| (token.kind, token.text)).collect()
    }

    #[test]
    fn words_and_signs_are_read_as_what_they_are() {
        for (kind, text) in RESERVED.into_iter().chain(SIGNS) {
            assert_eq!(kinds(text), [(kind, text)]);
        }
        for (twin, sign) in [
            ("\u{B7}", "*"),
            ("\u{D7}", "*"),
            ("\u{226A}", "<<"),
            ("\u{226B}", ">>"),
            ("\u{B1}", "+-"),
            ("\u{2192}", "->"),
        ] {
            assert_eq!(kinds(twin)[0].0, kinds(sign)[0].0);
        }
        assert_eq!(
            kinds("scalex scale'"),
            [(Kind::Name, "scalex"), (Kind::Name, "scale'")]
        );
    }

    #[test]
    fn names_take_letters_digits_subscripts_and_primes() {
        for name in [
            "u",
            "dP",
            "\u{3C1}_0",
            "p'",
            "\u{3B8}\u{2080}",
            "u''",
            "d_x",
            "e\u{301}",
        ] {
            assert_eq!(kinds(name), [(Kind::Name, name)]);
        }
    }

    #[test]
    fn a_unit_stands_behind_its_number_on_its_line() {
        use Kind::{Name, Number, Range, Unit};
        assert_eq!(kinds("10m/s"), [(Number, "10"), (Unit, "m/s")]);
        assert_eq!(kinds("1e-4 1/s"), [(Number, "1e-4"), (Unit, "1/s")]);
        assert_eq!(kinds("10^-4 s^-1"), [(Number, "10^-4"), (Unit, "s^-1")]);
        assert_eq!(kinds("10\nm"), [(Number, "10"), (Name, "m")]);
        assert_eq!(kinds("10 within")[1].0, Kind::Within);
        assert_eq!(
            kinds("5..20 m..x"),
            [
                (Number, "5"),
                (Range, ".."),
                (Number, "20"),
                (Unit, "m"),
                (Range, ".."),
                (Name, "x")
            ]
        );
    }

    #[test]
    fn behind_in_a_unit_may_stand_on_the_next_line() {
        assert_eq!(kinds("in 1")[1], (Kind::Unit, "1"));
        assert_eq!(kinds("in # so\n  m/s")[1], (Kind::Unit, "m/s"));
    }

    #[test]
    fn a_power_of_ten_is_one_number_unless_it_is_raised_again() {
        assert_eq!(kinds("10^-4"), [(Kind::Number, "10^-4")]);
        assert_eq!(
            kinds("10\u{207B}\u{2074}"),
            [(Kind::Number, "10\u{207B}\u{2074}")]
        );
        for text in [
            "10^2^3", "10^2 ^3", "10^2.5", "10^(2)", "10 ^2", "10^2e1", "10^x",
        ] {
            assert_eq!(kinds(text)[0], (Kind::Number, "10"), "{text}");
        }
    }

    #[test]
    fn what_no_script_has_is_one_error_and_no_token() {
        let lexed = read("\u{feff}a $$ $ b [x]", FileId::default());
        let spans: Vec<_> = lexed
            .errors
            .iter()
            .map(|error| error.span().start)
            .collect();
        assert_eq!(spans, [5, 12]);
        assert_eq!(lexed.tokens.len(), 3);
    }

    #[test]
    fn comments_are_kept_apart() {
        let lexed = read("a # one \nb# two", FileId::default());
        let texts: Vec<_> = lexed
            .comments
            .iter()
            .map(|found| found.text.as_str())
            .collect();
        assert_eq!(texts, ["# one", "# two"]);
        assert_eq!(lexed.tokens.len(), 2);
    }
}
