//! From a fault of the parser to an error with its place in the text.

use crate::source::Span;
use crate::syntax::errors::{Mend, SyntaxError};
use crate::syntax::parser::rule::{Fault, FaultKind, span_of_tokens};
use crate::syntax::parser::words::{Speller, begins_line, keyword_for};
use crate::syntax::token::{Kind, Kinds, Token};
use crate::syntax::unit_spelling;
use crate::units;

/// The tokens of a statement in the script that they come from.
pub(super) struct Place<'t, 's> {
    /// The tokens of the statement.
    pub(super) tokens: &'t [Token<'s>],
    /// Whether the script ends with them.
    pub(super) is_last: bool,
    /// The whole text.
    pub(super) text: &'s str,
}

/// The error that a fault is.
pub(super) fn explain(fault: Fault, place: &Place<'_, '_>, speller: &mut Speller) -> SyntaxError {
    let tokens = place.tokens;
    let end = fault.end.min(tokens.len());
    let span = span_of_tokens(&tokens[fault.start.min(end)..end]);
    match fault.kind {
        FaultKind::Expected(expected) => match tokens.get(fault.start) {
            None => unfinished(expected, place),
            Some(_) => unexpected(fault.start, expected, place, speller),
        },
        FaultKind::TooLarge => SyntaxError::TooLarge { span },
        FaultKind::UnitAfterQuotient => unit_after_quotient(&tokens[fault.start..end], place.text),
        FaultKind::UnlikeOrders(above, below) => SyntaxError::UnlikeOrders { span, above, below },
        FaultKind::SumAsSize => SyntaxError::SumAsSize { span },
        FaultKind::OnlyNumber(only) => SyntaxError::OnlyNumber { span, only },
    }
}

/// What a word that begins no statement may mean.
pub(super) fn mend_of_stray(token: &Token<'_>, is_expression: bool, speller: &mut Speller) -> Mend {
    if token.kind == Kind::Name {
        let near = speller.nearest(token.text, Kind::begins_statement);
        if let Some(word) = near.map(|(_, word)| word).or(keyword_for(token.text)) {
            return Mend::Word(word);
        }
    }
    match is_expression {
        true => Mend::Show,
        false => Mend::Keyword,
    }
}

fn unfinished(expected: Kinds, place: &Place<'_, '_>) -> SyntaxError {
    let (span, behind) = match place.tokens.last() {
        Some(last) => (end_of(last.span), last.text.to_owned()),
        None => (Span::default(), String::new()),
    };
    SyntaxError::Unfinished {
        span,
        behind,
        expected,
        keyword: place.tokens.first().map_or(Kind::Show, |first| first.kind),
        is_last: place.is_last,
    }
}

/// The empty span at the end of another.
pub(super) fn end_of(span: Span) -> Span {
    Span {
        start: span.end,
        ..span
    }
}

fn unexpected(
    at: usize,
    expected: Kinds,
    place: &Place<'_, '_>,
    speller: &mut Speller,
) -> SyntaxError {
    if let Some(error) = no_statement(at, expected, place, speller) {
        return error;
    }
    if let Some(error) = unit_apart(at, place) {
        return error;
    }
    let found = &place.tokens[at];
    SyntaxError::Unexpected {
        span: found.span,
        found: found.text.to_owned(),
        expected,
        mend: mend(at, expected, place, speller),
    }
}

/// A word at the beginning of a line that cannot go on with the statement above, and has
/// no operator behind it, was meant to begin a statement.
fn no_statement(
    at: usize,
    expected: Kinds,
    place: &Place<'_, '_>,
    speller: &mut Speller,
) -> Option<SyntaxError> {
    let tokens = place.tokens;
    let found = &tokens[at];
    let before = &tokens[at.checked_sub(1)?];
    if found.kind != Kind::Name
        || !expected.has_end()
        || !begins_line(tokens, at, place.text)
        || is_number(before) && units::find_unit(found.text).is_some()
    {
        return None;
    }
    let next = tokens.get(at + 1);
    let next = next.filter(|_| !begins_line(tokens, at + 1, place.text));
    let is_keyword =
        next.is_none_or(|next| matches!(next.kind, Kind::Name | Kind::Number | Kind::Text));
    is_keyword.then(|| SyntaxError::NoStatement {
        span: found.span,
        found: found.text.to_owned(),
        mend: mend_of_stray(found, next.is_none(), speller),
    })
}

/// A name that begins the line behind a bare number is a unit gone astray.
fn unit_apart(at: usize, place: &Place<'_, '_>) -> Option<SyntaxError> {
    let found = &place.tokens[at];
    let number = place.tokens.get(at.checked_sub(1)?)?;
    let is_apart = found.kind == Kind::Name
        && number.kind == Kind::Number
        && begins_line(place.tokens, at, place.text);
    if !is_apart {
        return None;
    }
    let start = found.span.start as usize;
    let rest = place.text.get(start..)?;
    let first = rest.find(char::is_whitespace).unwrap_or(rest.len());
    let len = first + unit_spelling::length_apart(&rest[first..]);
    let spelt = unit_spelling::spelt(&rest[..len]).filter(|_| len > first);
    Some(SyntaxError::UnitApart {
        unit: Span::new(found.span.file, start, start + len),
        text: spelt.unwrap_or_else(|| rest[..len].to_owned()),
        number: number.span,
    })
}

fn mend(at: usize, expected: Kinds, place: &Place<'_, '_>, speller: &mut Speller) -> Mend {
    let tokens = place.tokens;
    let found = &tokens[at];
    let keyword = tokens[0].kind;
    if found.kind == Kind::Name
        && let Some((_, word)) = speller.nearest(found.text, |kind| {
            expected.has(kind) || expected.has_end() && kind.begins_statement()
        })
    {
        return Mend::Word(word);
    }
    let before = at.checked_sub(1).map(|before| &tokens[before]);
    if before.is_some_and(|before| before.kind == Kind::Unit)
        && let Some(mend) = one_unit(at, place)
    {
        return mend;
    }
    if expected.has(Kind::Star) && begins_operand(found) && before.is_some_and(ends_operand) {
        return match begins_line(tokens, at, place.text) {
            true => Mend::Show,
            false => product(at, place),
        };
    }
    match (keyword, found.kind) {
        (_, Kind::Dot) if tokens.get(at + 1).is_some_and(is_number) => Mend::Digit,
        (_, Kind::RightBracket | Kind::RightBrace) if is_unopened(&tokens[..=at]) => {
            Mend::NothingOpen
        }
        (Kind::Field | Kind::Fluctuation, Kind::Comma) if expected.has(Kind::Tilde) => {
            Mend::OneBracket
        }
        (Kind::Field, _) if expected.has(Kind::Plus) && !expected.has(Kind::Star) => {
            Mend::PlainPart
        }
        (_, Kind::Caret | Kind::Superscript) if expected.has(Kind::Star) => Mend::RaisedTwice,
        _ if before.is_some_and(|before| before.kind == Kind::Nabla) => Mend::Functions,
        _ if keyword.begins_statement() => Mend::Form(keyword),
        _ => Mend::None,
    }
}

/// Whether the last of some tokens closes a bracket that none of them opens.
fn is_unopened(tokens: &[Token<'_>]) -> bool {
    let mut depth = 0_isize;
    for token in tokens {
        match token.kind {
            Kind::LeftBracket | Kind::LeftBrace => depth += 1,
            Kind::RightBracket | Kind::RightBrace => depth -= 1,
            _ => {}
        }
    }
    depth < 0
}

/// The product of what stands before a token and the token; `2 sin(phi)` reads as a
/// number with the unit `sin`, so there the product sign belongs before the unit.
fn product(at: usize, place: &Place<'_, '_>) -> Mend {
    let text = |idx: usize| place.tokens[idx].text.to_owned();
    let (before, found) = (&place.tokens[at - 1], &place.tokens[at]);
    match (before.kind, found.kind) {
        (Kind::Unit, Kind::Name) if at >= 2 => {
            Mend::Product(format!("{} {}", text(at - 2), text(at - 1)), text(at))
        }
        (Kind::Unit, _) if at >= 2 => {
            let number = text(at - 2);
            match unit_alone(before.text) {
                Some((unit, operator, function)) if found.kind == Kind::LeftBracket => {
                    Mend::UnitAlone(number, unit.to_owned(), operator, function.to_owned())
                }
                _ => Mend::Product(number, text(at - 1)),
            }
        }
        (Kind::RightBracket, _) | (_, Kind::LeftBracket) => Mend::Sign,
        _ => Mend::Product(text(at - 1), text(at)),
    }
}

/// A unit behind a unit is one unit with a blank inside, as far as units stand there.
fn one_unit(at: usize, place: &Place<'_, '_>) -> Option<Mend> {
    let [before, unit, found] = [at.checked_sub(2)?, at - 1, at].map(|idx| &place.tokens[idx]);
    let (start, end) = (unit.span.start as usize, unit.span.end as usize);
    let behind = place.text.get(end..)?;
    let len = unit_spelling::length_apart(behind);
    let run = place.text.get(start..end + len)?;
    if len == 0 {
        return None;
    }
    let may_be_product = is_number(before) && behind[..len].trim() == found.text;
    let product = || format!("{} {} * {}", before.text, unit.text, found.text);
    Some(Mend::OneUnit(
        format!("{} {}", before.text, unit_spelling::spelt(run)?),
        may_be_product.then(product),
    ))
}

/// A unit that took in a function behind its last operator, as in `hPa/sqrt(x)`: the unit
/// without it, the operator that is meant, and the function. What is as short as most units
/// is taken for one.
fn unit_alone(written: &str) -> Option<(&str, char, &str)> {
    let at = written.rfind(['/', '.', '\u{B7}'])?;
    let (unit, rest) = written.split_at(at);
    let operator = if rest.starts_with('/') { '/' } else { '*' };
    let function = rest.trim_start_matches(['/', '.', '\u{B7}']);
    let is_word = function.chars().all(|c| c.is_alphanumeric() || c == '_');
    (is_word && function.len() > 2).then_some((unit, operator, function))
}

fn is_number(token: &Token<'_>) -> bool {
    token.kind == Kind::Number
}

fn begins_operand(token: &Token<'_>) -> bool {
    matches!(
        token.kind,
        Kind::Name | Kind::Number | Kind::LeftBracket | Kind::Partial | Kind::Nabla
    )
}

fn ends_operand(token: &Token<'_>) -> bool {
    matches!(
        token.kind,
        Kind::Name | Kind::Number | Kind::Unit | Kind::RightBracket | Kind::Superscript
    )
}

/// The two readings of `1/2 m`, from the tokens of the product that holds it.
fn unit_after_quotient(tokens: &[Token<'_>], text: &str) -> SyntaxError {
    let quotient = tokens.windows(4).find(|four| {
        let kinds = [four[0].kind, four[1].kind, four[2].kind, four[3].kind];
        kinds == [Kind::Number, Kind::Slash, Kind::Number, Kind::Unit]
    });
    let quotient = quotient.unwrap_or(tokens);
    let written = span_of_tokens(quotient);
    let (as_number, with_brackets) = match quotient {
        [above, _, below, unit] => (
            short_quotient(above.text, below.text).map(|number| format!("{number} {}", unit.text)),
            format!("{}/({} {})", above.text, below.text, unit.text),
        ),
        _ => (None, format!("({})", slice(text, written))),
    };
    SyntaxError::UnitAfterQuotient {
        span: written,
        as_number,
        with_brackets,
    }
}

fn slice(text: &str, span: Span) -> &str {
    text.get(span.start as usize..span.end as usize)
        .unwrap_or("")
}

/// The quotient of two small whole numbers as a decimal, where that ends soon.
fn short_quotient(above: &str, below: &str) -> Option<String> {
    let (above, below): (u32, u32) = (above.parse().ok()?, below.parse().ok()?);
    if above > 10_000 || below == 0 {
        return None;
    }
    let thousandths = above * 1_000;
    (thousandths.is_multiple_of(below))
        .then(|| f64::from(thousandths / below) / 1_000.0)
        .map(|number| number.to_string())
}
