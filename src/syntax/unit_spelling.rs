//! A unit that was written with blanks inside, spelt as it should be: `m s^-1` is `m/s`.
//! Only messages use it; a script is never read so.

use crate::syntax::unit_run::{StartOfUnit, exponent_length, symbol_length, unit_length};
use crate::units;

/// How much of a text goes on with the unit right before it, if blanks may stand inside
/// and powers lack their `^`: all of ` s^-1`, ` K-1 mol-1`; 0 if nothing does.
pub(crate) fn length_apart(text: &str) -> usize {
    let mut len = 0;
    loop {
        let rest = &text[len..];
        let inside = rest.trim_start_matches([' ', '\t']);
        let part = unit_length(inside, StartOfUnit::BehindNumber);
        let is_apart = inside.len() < rest.len();
        if !is_apart || part == 0 || units::parse_unit(&inside[..part]).is_err() {
            return len;
        }
        let behind = &inside[part..];
        let power = power_length(behind);
        // `m sin(phi)`, `m s*U`: what looks like a unit is part of an expression.
        if behind[power..].starts_with(['(', '*', '/', '^']) {
            return len;
        }
        len += rest.len() - behind.len() + power;
    }
}

/// The spelling of a unit from factors with blanks or signs between them: one `/`, and a
/// product behind it in brackets. `None` for anything more involved.
pub(crate) fn spelt(written: &str) -> Option<String> {
    let (mut above, mut below) = (Vec::new(), Vec::new());
    let (mut is_below, mut is_inside) = (false, false);
    let mut rest = written.trim();
    if let Some(behind) = rest.strip_prefix('1') {
        rest = behind;
    }
    while let Some(first) = rest.chars().next() {
        let mut len = first.len_utf8();
        match first {
            ' ' | '\t' | '.' | '\u{B7}' | '*' => {}
            '/' if is_below => return None,
            '/' => is_below = true,
            '(' => is_inside = true,
            ')' => (is_below, is_inside) = (false, false),
            _ => {
                let symbol = symbol_length(rest);
                if symbol == 0 {
                    return None;
                }
                len = symbol + power_length(&rest[symbol..]);
                let (is_negative, power) = power(&rest[symbol..len]);
                let side = match is_below == is_negative {
                    true => &mut above,
                    false => &mut below,
                };
                side.push(format!("{}{power}", &rest[..symbol]));
                is_below &= is_inside;
            }
        }
        rest = &rest[len..];
    }
    let numerator = match above.is_empty() {
        true => "1".to_owned(),
        false => above.join("."),
    };
    match below.as_slice() {
        [] if above.is_empty() => None,
        [] => Some(numerator),
        [one] => Some(format!("{numerator}/{one}")),
        several => Some(format!("{numerator}/({})", several.join("."))),
    }
}

/// The length of a power, the `^` of a negative one left out or not.
fn power_length(text: &str) -> usize {
    let written = exponent_length(text);
    if written > 0 {
        return written;
    }
    let digits = text.strip_prefix('-').map_or(0, |rest| {
        rest.find(|c: char| !c.is_ascii_digit())
            .unwrap_or(rest.len())
    });
    if digits == 0 { 0 } else { 1 + digits }
}

/// Whether a power is negative, and how its amount is written.
fn power(text: &str) -> (bool, String) {
    let plain: String = text.chars().filter_map(plain_digit).collect();
    let amount = plain.trim_start_matches(['-', '+']);
    let written = match amount {
        "" | "1" => String::new(),
        amount if amount.contains('/') => format!("^({amount})"),
        amount => format!("^{amount}"),
    };
    (plain.starts_with('-'), written)
}

/// A superscript as the character it raises; none for `^` and brackets.
fn plain_digit(c: char) -> Option<char> {
    let superscripts = "\u{2070}\u{B9}\u{B2}\u{B3}\u{2074}\u{2075}\u{2076}\u{2077}\u{2078}\u{2079}";
    match c {
        '^' | '(' | ')' => None,
        '\u{207B}' => Some('-'),
        c => match superscripts.chars().position(|found| found == c) {
            Some(digit) => char::from_digit(digit as u32, 10),
            None => Some(c),
        },
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_unit_is_spelt_with_one_solidus() {
        for (written, expected) in [
            ("m s^-1", Some("m/s")),
            ("m s-1", Some("m/s")),
            ("m s\u{207B}\u{B2}", Some("m/s^2")),
            ("J kg^-1 K^-1", Some("J/(kg.K)")),
            ("J/kg/K", Some("J/(kg.K)")),
            ("J/(kg.K) m", Some("J.m/(kg.K)")),
            ("s^-1 m", Some("m/s")),
            ("s^-1", Some("1/s")),
            ("1/s m", Some("m/s")),
            ("kg m^(2/3)", Some("kg.m^(2/3)")),
            ("(kg.m)^2", None),
            ("", None),
        ] {
            assert_eq!(spelt(written).as_deref(), expected, "{written}");
        }
    }

    #[test]
    fn a_unit_goes_on_behind_blanks_as_far_as_units_stand_there() {
        for (text, run) in [
            (" s^-1 within 2", " s^-1"),
            (" s-1 \"wind\"", " s-1"),
            (" kg^-1 K^-1", " kg^-1 K^-1"),
            (" m/s", " m/s"),
            (" Umax", ""),
            (" s*U", ""),
            ("\ns", ""),
            (" from", ""),
            ("", ""),
        ] {
            assert_eq!(&text[..length_apart(text)], run, "{text}");
        }
    }
}
