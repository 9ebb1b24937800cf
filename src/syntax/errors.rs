//! What can be wrong with the form of a script, and how it is said.

use crate::diagnostic::Diagnostic;
use crate::limits;
use crate::source::Span;
use crate::syntax::forms::form;
use crate::syntax::token::{Kind, Kinds, RESERVED, SIGNS, is_reserved};

/// A fault in the form of a script.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum SyntaxError {
    /// A character that no script has; side by side, several of them.
    UnexpectedCharacter {
        /// Where.
        span: Span,
        /// The first of them.
        found: char,
    },
    /// A text whose second quote is missing on its line.
    OpenText {
        /// The text.
        span: Span,
    },
    /// Something else was expected.
    Unexpected {
        /// What stands there.
        span: Span,
        /// As it is written.
        found: String,
        /// What could stand there.
        expected: Kinds,
        /// What may be meant.
        mend: Mend,
    },
    /// A statement ends too early.
    Unfinished {
        /// The end of its last token.
        span: Span,
        /// Its last token as written.
        behind: String,
        /// What could stand there.
        expected: Kinds,
        /// The keyword of the statement.
        keyword: Kind,
        /// Whether it is the last of the script, so that more text could finish it.
        is_last: bool,
    },
    /// A statement that begins with no keyword.
    NoStatement {
        /// Its first token.
        span: Span,
        /// As it is written.
        found: String,
        /// What may be meant.
        mend: Mend,
    },
    /// `scal U = 1 m`: a word read as the keyword that it nearly is.
    Misspelt {
        /// The word.
        span: Span,
        /// As it is written.
        found: String,
        /// The keyword.
        keyword: &'static str,
    },
    /// A reserved word where a name is wanted.
    ReservedName {
        /// The word.
        span: Span,
        /// As it is written.
        word: String,
        /// Whether it stands behind `as`, where a text does as well.
        is_process: bool,
    },
    /// Brackets, signs or powers nested beyond the limit.
    TooDeep {
        /// Where the limit is passed.
        span: Span,
    },
    /// A script larger than the limit.
    LongScript {
        /// Its first character beyond the limit.
        span: Span,
    },
    /// A statement with more tokens than the limit.
    LongStatement {
        /// Its first token.
        span: Span,
    },
    /// A number beyond the limits.
    TooLarge {
        /// The number.
        span: Span,
    },
    /// A unit on the line behind its number.
    UnitApart {
        /// The unit.
        unit: Span,
        /// The unit as written.
        text: String,
        /// The number.
        number: Span,
    },
    /// `1/2 m`: a bare number divided by a number with a unit.
    UnitAfterQuotient {
        /// The whole product.
        span: Span,
        /// The quotient as one number with the unit, where it is a short one.
        as_number: Option<String>,
        /// The quotient with brackets.
        with_brackets: String,
    },
    /// `∂²u/∂x`.
    UnlikeOrders {
        /// The derivative.
        span: Span,
        /// The order behind the first `∂`.
        above: u32,
        /// The sum of the orders below.
        below: u32,
    },
    /// A sum where a product is wanted.
    SumAsSize {
        /// The sum.
        span: Span,
    },
    /// A number other than the only one allowed.
    OnlyNumber {
        /// The number.
        span: Span,
        /// The one allowed.
        only: u8,
    },
    /// A statement that a phenomenon does not hold.
    NotInPhenomenon {
        /// Its keyword.
        span: Span,
        /// The keyword.
        keyword: String,
        /// The name of the phenomenon.
        phenomenon: Span,
    },
    /// `for` in a request that a phenomenon holds.
    ForInPhenomenon {
        /// The names behind it.
        span: Span,
        /// The name of the phenomenon.
        phenomenon: Span,
    },
    /// A phenomenon without its closing brace.
    OpenPhenomenon {
        /// The end of its last token.
        span: Span,
        /// The opening brace.
        opened: Span,
        /// Whether the script ends there, so that more text could close it.
        is_last: bool,
    },
}

/// What may be meant by something that cannot be read.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Mend {
    /// Nothing comes to mind.
    None,
    /// A reserved word nearly spelt so.
    Word(&'static str),
    /// A product sign between two factors, which are as written.
    Product(String, String),
    /// A unit with a blank inside: the number with the whole unit, and the product that may
    /// be meant.
    OneUnit(String, Option<String>),
    /// A blank between a unit and the operator behind it, which took the name of a function
    /// into the unit: the number, the unit alone, the operator and the function.
    UnitAlone(String, String, char, String),
    /// A product sign before it.
    Sign,
    /// `show` before it.
    Show,
    /// A keyword at the beginning of a statement.
    Keyword,
    /// A digit before a decimal point.
    Digit,
    /// A function in place of `∇·` or `∇²`.
    Functions,
    /// A closing bracket that closes nothing.
    NothingOpen,
    /// A bracket of coordinates behind the last field alone.
    OneBracket,
    /// A plain name as a part of a split.
    PlainPart,
    /// Brackets around a power that is raised again.
    RaisedTwice,
    /// The form of the statement that begins with this keyword.
    Form(Kind),
}

impl SyntaxError {
    /// Where it is.
    pub fn span(&self) -> Span {
        match self {
            SyntaxError::UnexpectedCharacter { span, .. }
            | SyntaxError::OpenText { span }
            | SyntaxError::Unexpected { span, .. }
            | SyntaxError::Unfinished { span, .. }
            | SyntaxError::NoStatement { span, .. }
            | SyntaxError::Misspelt { span, .. }
            | SyntaxError::ReservedName { span, .. }
            | SyntaxError::TooDeep { span }
            | SyntaxError::LongScript { span }
            | SyntaxError::LongStatement { span }
            | SyntaxError::TooLarge { span }
            | SyntaxError::UnitApart { unit: span, .. }
            | SyntaxError::UnitAfterQuotient { span, .. }
            | SyntaxError::UnlikeOrders { span, .. }
            | SyntaxError::SumAsSize { span }
            | SyntaxError::OnlyNumber { span, .. }
            | SyntaxError::NotInPhenomenon { span, .. }
            | SyntaxError::ForInPhenomenon { span, .. }
            | SyntaxError::OpenPhenomenon { span, .. } => *span,
        }
    }

    /// Whether more text behind the script could mend it; a prompt then asks for more.
    pub fn wants_more(&self) -> bool {
        matches!(
            self,
            SyntaxError::Unfinished { is_last: true, .. }
                | SyntaxError::OpenPhenomenon { is_last: true, .. }
        )
    }

    /// The error in words.
    pub fn diagnostic(&self) -> Diagnostic {
        let at = self.span();
        match self {
            SyntaxError::UnexpectedCharacter { found, .. } => unexpected_character(at, *found),
            SyntaxError::OpenText { .. } => Diagnostic::error(
                "unfinished",
                at,
                "this text has no closing quote on its line",
            )
            .with_label("the text begins here")
            .with_help("write `\"` at its end; a text stands on one line"),
            SyntaxError::Unexpected {
                found,
                expected,
                mend,
                ..
            } => {
                let kind = if is_reserved(found) {
                    "the reserved word "
                } else {
                    ""
                };
                let message = format!(
                    "expected {}, found {kind}{}",
                    list(*expected),
                    quoted(found)
                );
                mended(Diagnostic::error("unexpected-word", at, message), mend)
            }
            SyntaxError::Unfinished {
                behind,
                expected,
                keyword,
                ..
            } => {
                let expected = list(*expected);
                let message = format!("expected {expected} behind {}", quoted(behind));
                let error = Diagnostic::error("unfinished", at, message)
                    .with_label("the statement ends here");
                mended(error, &Mend::Form(*keyword))
            }
            SyntaxError::NoStatement { found, mend, .. } => {
                let message = match found.starts_with(char::is_alphabetic) {
                    true => format!("no statement begins with {}", quoted(found)),
                    false => format!("expected a statement, found {}", quoted(found)),
                };
                mended(Diagnostic::error("unexpected-word", at, message), mend)
            }
            SyntaxError::Misspelt { found, keyword, .. } => {
                let message = format!("expected a statement, found {}", quoted(found));
                Diagnostic::error("unexpected-word", at, message)
                    .with_help(format!("did you mean `{keyword}`?"))
            }
            SyntaxError::ReservedName {
                word, is_process, ..
            } => {
                let message = format!("expected a name, found the reserved word `{word}`");
                let help = match is_process {
                    true => format!("write it as a text: `as \"{word}\"`"),
                    false => format!("choose another name, as `{word}_1`"),
                };
                Diagnostic::error("unexpected-word", at, message).with_help(help)
            }
            SyntaxError::TooDeep { .. } => {
                let message = format!("nested deeper than {} levels", limits::NESTING);
                Diagnostic::error("too-deep", at, message)
                    .with_label("the limit is passed here")
                    .with_help("give a part of it a name of its own")
            }
            SyntaxError::LongScript { .. } => {
                let message = format!("the script is longer than {} bytes", limits::SCRIPT_BYTES);
                Diagnostic::error("too-long", at, message)
                    .with_label("the limit is passed here")
                    .with_help("divide it into files and bring them in with `use`")
            }
            SyntaxError::LongStatement { .. } => {
                let limit = limits::STATEMENT_TOKENS;
                let message = format!("the statement is longer than {limit} words and signs");
                Diagnostic::error("too-long", at, message)
                    .with_label("it begins here")
                    .with_help("divide it into several statements")
            }
            SyntaxError::TooLarge { .. } => {
                let limit = limits::LITERAL_DECADES;
                Diagnostic::error("too-large", at, "this number is beyond the limits").with_help(
                    format!("write a number from 10^-{limit} to 10^{limit}, with fewer digits"),
                )
            }
            SyntaxError::UnitApart { text, number, .. } => {
                Diagnostic::error("unit-apart", at, "a unit stands on the line of its number")
                    .with_label("this stands on a line of its own")
                    .with_related(*number, "the number is here")
                    .with_help(format!("write {} right behind the number", quoted(text)))
            }
            SyntaxError::UnitAfterQuotient {
                as_number,
                with_brackets,
                ..
            } => {
                let help = match as_number {
                    Some(number) => format!("write `{number}`, or `{with_brackets}`"),
                    None => format!("write `{with_brackets}`"),
                };
                let message = "a bare number divided by a number with a unit needs brackets";
                Diagnostic::error("unit-after-quotient", at, message)
                    .with_label("which of the two numbers has the unit?")
                    .with_help(help)
            }
            SyntaxError::UnlikeOrders { above, below, .. } => {
                let message =
                    format!("the order of this derivative is {above} above and {below} below");
                Diagnostic::error("unlike-orders", at, message)
                    .with_help("make the orders below add up to the one above: `∂²q/∂x∂z`")
            }
            SyntaxError::SumAsSize { .. } => {
                Diagnostic::error("not-a-product", at, "expected a product, found a sum")
                    .with_help("give the sum a name first, as in `scale V = U_1 + U_2`")
            }
            SyntaxError::OnlyNumber { only, .. } => {
                let message = format!("expected `{only}`, found another number");
                Diagnostic::error("unexpected-word", at, message)
                    .with_help(format!("write `{only}`"))
            }
            SyntaxError::NotInPhenomenon {
                keyword,
                phenomenon,
                ..
            } => {
                let expected = "expected a value, a tolerance or a request in a phenomenon";
                let message = format!("{expected}, found {}", quoted(keyword));
                Diagnostic::error("unexpected-word", at, message)
                    .with_related(*phenomenon, "the phenomenon is here")
                    .with_help("write it outside the phenomenon")
            }
            SyntaxError::ForInPhenomenon { phenomenon, .. } => {
                let message = "a request in a phenomenon answers for this phenomenon alone";
                Diagnostic::error("unexpected-word", at, message)
                    .with_label("`for` names phenomena here")
                    .with_related(*phenomenon, "the phenomenon is here")
                    .with_help("leave out `for`, or write the request outside the phenomenon")
            }
            SyntaxError::OpenPhenomenon { opened, .. } => {
                Diagnostic::error("unfinished", at, "this phenomenon has no closing `}`")
                    .with_label("the phenomenon ends here")
                    .with_related(*opened, "it begins here")
                    .with_help("write `}` behind its last statement")
            }
        }
    }
}

fn unexpected_character(at: Span, found: char) -> Diagnostic {
    let shown = match found.is_control() || found.is_whitespace() {
        true => format!("U+{:04X}", found as u32),
        false => found.to_string(),
    };
    let message = format!("no script has the character {}", quoted(&shown));
    let error = Diagnostic::error("unexpected-character", at, message);
    match instead_of(found) {
        Some(other) => error.with_help(format!("write {other}")),
        None => error.with_help("leave it out"),
    }
}

/// What people mean by characters that look like others.
fn instead_of(found: char) -> Option<&'static str> {
    Some(match found {
        '\u{2212}' | '\u{2013}' | '\u{2014}' | '\u{2010}' | '\u{2011}' => "`-`",
        '\u{22C5}' | '\u{2219}' | '\u{2022}' => "`*`",
        '\u{2215}' | '\u{2044}' | '\u{F7}' => "`/`",
        '\u{223C}' | '\u{2248}' => "`~`",
        '\u{201C}' | '\u{201D}' | '\u{201E}' | '\u{AB}' | '\u{BB}' => "`\"`",
        '\u{2018}' | '\u{2019}' | '`' | '\u{B4}' => "`'`",
        '\u{2264}' => "`<`",
        '\u{2265}' => "`>`",
        '\u{A0}' | '\u{2009}' | '\u{202F}' | '\u{200B}' | '\u{3000}' => "a blank",
        '\'' => "a prime right behind a name, or a text in `\"`",
        '%' => "`%` right behind a number",
        '\u{B0}' => "`deg` behind a number",
        ';' => "nothing: a statement ends where the next one begins",
        '[' | ']' => "a unit without brackets, and an expression in `(` and `)`",
        '\u{221A}' => "`sqrt(...)`",
        '\u{2192}' => "`->`",
        _ => return None,
    })
}

fn mended(error: Diagnostic, mend: &Mend) -> Diagnostic {
    match help(mend) {
        None => error,
        Some(help) => error.with_help(help),
    }
}

fn help(mend: &Mend) -> Option<String> {
    Some(match mend {
        Mend::None => return None,
        Mend::Word(word) => format!("did you mean `{word}`?"),
        Mend::Product(left, right) => format!("write `{left}*{right}` for a product"),
        Mend::OneUnit(whole, None) => format!("a unit has no blank inside: write `{whole}`"),
        Mend::OneUnit(whole, Some(product)) => {
            format!("a unit has no blank inside: write `{whole}`, or `{product}` for a product")
        }
        Mend::UnitAlone(number, unit, operator, function) => {
            format!("a unit ends at a blank: write `{number} {unit} {operator} {function}(...)`")
        }
        Mend::Sign => "write `*` between the factors of a product".to_owned(),
        Mend::Show => "write `show` before an expression to see its value".to_owned(),
        Mend::Keyword => {
            "begin it with a keyword, as `scale`, `field`, `equation` or `show`".to_owned()
        }
        Mend::Digit => "write a digit before the point, as in `0.5`".to_owned(),
        Mend::Functions => "write `grad(q)`, `div(V)` or `laplacian(q)`".to_owned(),
        Mend::NothingOpen => "leave it out: nothing is open that it could close".to_owned(),
        Mend::OneBracket => {
            "write one bracket behind the last name, for all, or a statement each".to_owned()
        }
        Mend::PlainPart => "give the part a name of its own: a part is a plain name".to_owned(),
        Mend::RaisedTwice => "write brackets around the power that is raised: `(a²)^3`".to_owned(),
        Mend::Form(keyword) => format!("write `{}`", form(*keyword)?),
    })
}

/// A word of the script in backticks, a long one cut.
fn quoted(text: &str) -> String {
    const SHOWN: usize = 40;
    match text.char_indices().nth(SHOWN) {
        Some((cut, _)) => format!("`{}...`", &text[..cut]),
        None => format!("`{text}`"),
    }
}

/// What a reader expects at a place, in words, from the kinds of token that could stand
/// there. Operators are always possible behind an expression, so they are named only
/// where nothing else is.
fn list(expected: Kinds) -> String {
    if begins_expression(expected) {
        return match expected.has(Kind::Text) {
            true => "a term or a text in quotes".to_owned(),
            false => "an expression".to_owned(),
        };
    }
    let has_operator = expected.has(Kind::Star);
    let is_named = |kind: Kind| expected.has(kind) && !(has_operator && is_operator(kind));
    let mut words: Vec<String> = Vec::new();
    if has_operator {
        words.push("an operator".to_owned());
    }
    let kinds = KINDS.iter().filter(|(kind, _)| is_named(*kind));
    words.extend(kinds.map(|(_, text)| (*text).to_owned()));
    let written = SIGNS.iter().chain(&RESERVED);
    let written = written.filter(|(kind, _)| is_named(*kind));
    words.extend(written.map(|(_, text)| format!("`{text}`")));
    if expected.has_end() {
        words.push("the next statement".to_owned());
    }
    if words.len() > MOST_NAMED {
        // The general is said by what remains.
        words.retain(|word| word != "an operator" && word != "the next statement");
    }
    joined(&words)
}

/// How many things a reader takes in.
const MOST_NAMED: usize = 4;

/// What no fixed text writes.
const KINDS: [(Kind, &str); 5] = [
    (Kind::Name, "a name"),
    (Kind::Number, "a number"),
    (Kind::Unit, "a unit"),
    (Kind::Text, "a text in quotes"),
    (Kind::Superscript, "a superscript"),
];

fn begins_expression(expected: Kinds) -> bool {
    expected.has(Kind::Number) && expected.has(Kind::Name) && expected.has(Kind::Minus)
}

fn is_operator(kind: Kind) -> bool {
    matches!(
        kind,
        Kind::Plus
            | Kind::Minus
            | Kind::Star
            | Kind::Slash
            | Kind::Caret
            | Kind::Superscript
            | Kind::Dot
            | Kind::LeftBracket
            | Kind::Unit
            | Kind::As
    )
}

fn joined(words: &[String]) -> String {
    match words {
        [] => "something else".to_owned(),
        [only] => only.clone(),
        [first @ .., last] => format!("{} or {last}", first.join(", ")),
    }
}
