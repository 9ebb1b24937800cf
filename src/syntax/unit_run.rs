//! How far a unit reaches in the text: the longest run of unit characters.
//!
//! Used by the lexer behind a number and behind `in`. Whether the run is a unit that
//! exists, and whether it divides once only, is left to the units.

use crate::limits::NESTING;
use crate::syntax::token::is_reserved;

/// Where a unit begins.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum StartOfUnit {
    /// Behind a number: it begins with a symbol, or with `1/`.
    BehindNumber,
    /// Behind `in`: it may also begin with a bracket, or be `1`.
    BehindIn,
}

/// The length in bytes of the unit at the start of a text; 0 if there is none.
pub(crate) fn unit_length(text: &str, start: StartOfUnit) -> usize {
    let mut len = first_factor_length(text, start);
    while len > 0 {
        let more = joined_length(&text[len..], &['.', '\u{B7}', '/'], NESTING);
        if more == 0 {
            break;
        }
        len += more;
    }
    len
}

/// The length of the exponent at the start of a text, `^-2`, `^(2/3)` or superscripts;
/// 0 if there is none.
pub(crate) fn exponent_length(text: &str) -> usize {
    match text.strip_prefix('^') {
        None => superscript_length(text),
        Some(rest) => match rest.strip_prefix('(') {
            None => some(signed_number_length(rest), 1),
            Some(inside) => some(bracket_exponent_length(inside), 2),
        },
    }
}

fn first_factor_length(text: &str, start: StartOfUnit) -> usize {
    if let Some(rest) = text.strip_prefix('1') {
        let divided = joined_length(rest, &['/'], NESTING);
        let stands_alone = !rest.starts_with(|c: char| c.is_alphanumeric() || ".^".contains(c));
        return match start {
            StartOfUnit::BehindIn if divided == 0 && stands_alone => 1,
            StartOfUnit::BehindIn | StartOfUnit::BehindNumber => some(divided, 1),
        };
    }
    match start {
        StartOfUnit::BehindNumber if text.starts_with('(') => 0,
        StartOfUnit::BehindNumber | StartOfUnit::BehindIn => factor_length(text, NESTING),
    }
}

/// The length of a joining sign with the factor behind it.
fn joined_length(text: &str, signs: &[char], depth: usize) -> usize {
    text.strip_prefix(signs).map_or(0, |rest| {
        some(factor_length(rest, depth), text.len() - rest.len())
    })
}

fn factor_length(text: &str, depth: usize) -> usize {
    let len = match text.strip_prefix('(') {
        Some(inside) if depth > 0 => some(bracket_length(inside, depth - 1), 1),
        Some(_) => 0,
        None => symbol_length(text),
    };
    if len == 0 {
        return 0;
    }
    len + exponent_length(&text[len..])
}

/// The length of `kg.m)`, behind the opening bracket.
fn bracket_length(text: &str, depth: usize) -> usize {
    let mut len = factor_length(text, depth);
    while len > 0 {
        if text[len..].starts_with(')') {
            return len + 1;
        }
        let more = joined_length(&text[len..], &['.', '\u{B7}'], depth);
        if more == 0 {
            return 0;
        }
        len += more;
    }
    0
}

/// The length of a symbol. Subscripts and primes, which no unit has, are taken along, so
/// that `2 u'` is one unknown unit and not a unit with a stray prime.
pub(crate) fn symbol_length(text: &str) -> usize {
    let is_start = |c: char| c.is_alphabetic() || matches!(c, '%' | '\u{B0}' | '_');
    let is_part = |c: char| {
        is_start(c)
            || c.is_ascii_digit()
            || matches!(c, '\u{2080}'..='\u{2089}' | '\'' | '\u{2032}')
    };
    if !text.starts_with(is_start) {
        return 0;
    }
    let len = text.find(|c| !is_part(c)).unwrap_or(text.len());
    if is_reserved(&text[..len]) { 0 } else { len }
}

fn superscript_length(text: &str) -> usize {
    let digits = text.strip_prefix('\u{207B}').unwrap_or(text);
    let is_digit = |c: char| {
        matches!(
            c,
            '\u{2070}' | '\u{B9}' | '\u{B2}' | '\u{B3}' | '\u{2074}'..='\u{2079}'
        )
    };
    let len = digits.find(|c| !is_digit(c)).unwrap_or(digits.len());
    some(len, text.len() - digits.len())
}

/// A whole number with a sign. A decimal is taken along, so that the units can say that
/// an exponent is a rational number.
fn signed_number_length(text: &str) -> usize {
    let unsigned = text.strip_prefix(['+', '-']).unwrap_or(text);
    let mut len = digits_length(unsigned);
    if len > 0 && unsigned[len..].starts_with('.') {
        len += some(digits_length(&unsigned[len + 1..]), 1);
    }
    some(len, text.len() - unsigned.len())
}

/// The length of `2/3)`, behind the opening bracket.
fn bracket_exponent_length(text: &str) -> usize {
    let mut len = signed_number_length(text);
    if len > 0 && text[len..].starts_with('/') {
        len += some(digits_length(&text[len + 1..]), 1);
    }
    if len > 0 && text[len..].starts_with(')') {
        len + 1
    } else {
        0
    }
}

fn digits_length(text: &str) -> usize {
    text.find(|c: char| !c.is_ascii_digit())
        .unwrap_or(text.len())
}

/// `len` and what stands before it; 0 if `len` is 0.
fn some(len: usize, before: usize) -> usize {
    if len == 0 { 0 } else { before + len }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn behind_number(text: &str) -> &str {
        &text[..unit_length(text, StartOfUnit::BehindNumber)]
    }

    #[test]
    fn a_unit_is_the_longest_run_of_unit_characters() {
        for (text, unit) in [
            ("m/s + 1", "m/s"),
            ("m.s^-2*x", "m.s^-2"),
            ("m\u{B7}s\u{207B}\u{B2}", "m\u{B7}s\u{207B}\u{B2}"),
            ("J/(kg.K) within 2", "J/(kg.K)"),
            ("m^(2/3)/s", "m^(2/3)/s"),
            ("J/kg/K", "J/kg/K"),
            ("1/s", "1/s"),
            ("mmH2O", "mmH2O"),
            ("%", "%"),
            ("\u{B0}C", "\u{B0}C"),
            ("m^0.5", "m^0.5"),
            ("u'*v", "u'"),
        ] {
            assert_eq!(behind_number(text), unit, "{text}");
        }
    }

    #[test]
    fn a_unit_stops_where_an_expression_goes_on() {
        for (text, unit) in [
            ("m..20 m", "m"),
            ("m /s", "m"),
            ("m/2", "m"),
            ("m/(2*L)", "m"),
            ("m^n", "m"),
            ("m\u{B7} s", "m"),
            ("(m)", ""),
            ("within 2", ""),
            ("in km", ""),
            ("as x", ""),
            ("1/2", ""),
            ("1", ""),
            ("kg/in", "kg"),
        ] {
            assert_eq!(behind_number(text), unit, "{text}");
        }
    }

    #[test]
    fn behind_in_a_unit_may_be_one_or_a_bracket() {
        for (text, unit) in [
            ("1 \"title\"", "1"),
            ("1/s", "1/s"),
            ("(kg.m)/s", "(kg.m)/s"),
            ("10", ""),
        ] {
            let len = unit_length(text, StartOfUnit::BehindIn);
            assert_eq!(&text[..len], unit, "{text}");
        }
    }

    #[test]
    fn deep_brackets_end_at_once() {
        let deep = format!("m/{}", "(".repeat(100_000));
        assert_eq!(behind_number(&deep), "m");
    }
}
