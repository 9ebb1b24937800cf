//! Numbers, columns and wrapped lines.

use unicode_width::UnicodeWidthStr;

use crate::number::raised_digit;
use crate::units::{Range, parse_unit};

/// The width of a terminal that every report fits.
pub const WIDTH: usize = 80;

/// A number with three significant digits, as people write it.
pub fn number(value: f64) -> String {
    significant(value, 3)
}

/// A number with so many significant digits; a power of ten only where it is shorter.
pub fn significant(value: f64, digits: usize) -> String {
    if is_plain(value) {
        plain(value, digits)
    } else {
        scientific(value, digits)
    }
}

/// Whether a number reads well without a power of ten: one that it would show more exactly
/// than it is known does not.
fn is_plain(value: f64) -> bool {
    let amount = value.abs();
    value == 0.0 || (1e-3..1e4).contains(&amount) || (amount < 1e6 && amount % 1e3 == 0.0)
}

fn scientific(value: f64, digits: usize) -> String {
    if !value.is_finite() {
        return if value.is_nan() { "?" } else { "∞" }.to_owned();
    }
    let text = format!("{value:.*e}", digits - 1);
    match text.split_once('e') {
        Some((mantissa, exponent)) => format!("{}e{exponent}", trimmed(mantissa)),
        None => text,
    }
}

fn plain(value: f64, digits: usize) -> String {
    if value == 0.0 {
        return "0".to_owned();
    }
    let exponent = value.abs().log10().floor() as i32;
    let decimals = (digits as i32 - 1 - exponent).max(0) as usize;
    trimmed(&format!("{value:.decimals$}")).to_owned()
}

/// Without zeros behind the point.
fn trimmed(text: &str) -> &str {
    if text.contains('.') {
        text.trim_end_matches('0').trim_end_matches('.')
    } else {
        text
    }
}

/// A range: one number, or low, nominal and high, all written alike.
pub fn range(range: &Range) -> String {
    if range.is_exact() {
        return number(range.nominal);
    }
    let ends = [range.low, range.nominal, range.high];
    let texts = if ends.iter().all(|end| is_plain(*end)) {
        ends.map(|end| plain(end, 3))
    } else {
        ends.map(|end| scientific(end, 3))
    };
    if texts[0] == texts[1] && texts[1] == texts[2] {
        // The range is one of rounding.
        return number(range.nominal);
    }
    texts.join(" .. ")
}

/// A share in per cent: two digits, three of large ones, one of small ones.
pub fn percent(share: f64) -> String {
    let percent = 100.0 * share;
    let digits = match percent.abs() {
        amount if amount >= 10.0 => 3,
        amount if amount >= 0.1 => 2,
        _ => 1,
    };
    format!("{} %", significant(percent, digits))
}

/// The width of a text in columns.
pub fn width(text: &str) -> usize {
    UnicodeWidthStr::width(text)
}

/// Filled up with blanks to a width.
pub fn padded(text: &str, columns: usize) -> String {
    format!("{text}{}", " ".repeat(columns.saturating_sub(width(text))))
}

/// Filled up with blanks before it.
pub fn right(text: &str, columns: usize) -> String {
    format!("{}{text}", " ".repeat(columns.saturating_sub(width(text))))
}

/// Cut to a width, with `…` where something went.
pub fn cut(text: &str, columns: usize) -> String {
    if width(text) <= columns {
        return text.to_owned();
    }
    let mut kept = String::new();
    for c in text.chars() {
        kept.push(c);
        if width(&kept) + 1 > columns {
            kept.pop();
            break;
        }
    }
    kept.push('…');
    kept
}

/// A paragraph behind a label, wrapped to the width of a terminal; later lines begin
/// under the first word. A word that fits no line stands alone; ranges and per cents are
/// not torn apart.
pub fn wrapped(label: &str, text: &str) -> String {
    let mut words: Vec<String> = Vec::new();
    for word in text.split(' ').filter(|word| !word.is_empty()) {
        match words.last_mut() {
            Some(last)
                if belongs_before(word)
                    || last.ends_with(" ..")
                    || is_in_bracketed_sum(last, word) =>
            {
                last.push(' ');
                last.push_str(word);
            }
            Some(_) | None => words.push(word.to_owned()),
        }
    }
    wrapped_words(label, &words)
}

/// Whether a word stays on the line of the one before it.
fn belongs_before(word: &str) -> bool {
    word == ".." || word.starts_with('%')
}

/// Whether a word goes on with a sum in brackets, as in `(r - a)`.
fn is_in_bracketed_sum(last: &str, word: &str) -> bool {
    let is_open = last.matches('(').count() > last.matches(')').count();
    let is_sign = |text: &str| text == "-" || text == "+";
    is_open && (is_sign(word) || last.rsplit(' ').next().is_some_and(is_sign))
}

/// The same for words that may have blanks in them.
pub fn wrapped_words(label: &str, words: &[String]) -> String {
    let indent = width(label);
    let mut out = String::from(label);
    let mut column = indent;
    for (idx, word) in words.iter().enumerate() {
        let needed = width(word);
        if idx > 0 && column + 1 + needed > WIDTH {
            out.push('\n');
            out.push_str(&" ".repeat(indent));
            column = indent;
        } else if idx > 0 {
            out.push(' ');
            column += 1;
        }
        out.push_str(word);
        column += needed;
    }
    out.push('\n');
    out
}

/// An equation likewise; a line is broken before a sign, never behind it, nor inside a
/// short bracket.
pub fn wrapped_equation(label: &str, equation: &str) -> String {
    let mut glued = whole_brackets(equation);
    for sign in ["+", "-", "="] {
        glued = glued.replace(&format!(" {sign} "), &format!(" {sign}\u{a0}"));
    }
    wrapped(label, &glued).replace('\u{a0}', " ")
}

/// Brackets up to this long stay on one line.
const BRACKET: usize = 40;

/// The text with blanks that do not break inside short brackets.
fn whole_brackets(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    let mut rest = text;
    while let Some(open) = rest.find('(') {
        let inside = rest[open..].find(')').map(|close| open + close + 1);
        let Some(close) = inside.filter(|close| close - open <= BRACKET) else {
            out.push_str(&rest[..=open]);
            rest = &rest[open + 1..];
            continue;
        };
        out.push_str(&rest[..open]);
        out.push_str(&rest[open..close].replace(' ', "\u{a0}"));
        rest = &rest[close..];
    }
    out.push_str(rest);
    out
}

/// An SI unit as people write it: `m/s²`.
pub fn unit(unit: &str) -> String {
    if unit == "1" {
        return String::new();
    }
    let mut out = String::new();
    let mut is_power = false;
    for c in unit.chars() {
        let raised = match c {
            '^' => {
                is_power = true;
                continue;
            }
            // A rational exponent stays as it is written.
            '(' if is_power => return unit.to_owned(),
            '.' => '·',
            other => raised_digit(other),
        };
        let is_digit = c.is_ascii_digit() || c == '-';
        if is_digit && !is_power {
            out.push(c);
        } else {
            out.push(raised);
        }
        is_power &= is_digit;
    }
    out
}

/// SI units that have a name of their own.
const NAMED: [(&str, &str); 4] = [
    ("kg/(m.s^2)", "Pa"),
    ("kg.m/s^2", "N"),
    ("kg.m^2/s^2", "J"),
    ("kg.m^2/s^3", "W"),
];

/// A unit by the name of its own, where it has one: `Pa`.
pub fn named_unit(unit_text: &str) -> &str {
    let named = NAMED.iter().find(|(long, _)| *long == unit_text);
    named.map_or(unit_text, |(_, short)| short)
}

/// A value with its unit.
pub fn quantity(value: &Range, unit_text: &str) -> String {
    let text = unit(named_unit(unit_text));
    format!("{} {text}", range(value)).trim_end().to_owned()
}

/// A value in the unit in which it was declared, else in its SI unit.
pub fn quantity_in(value: &Range, shown_in: Option<&str>, si_unit: &str) -> String {
    let found = shown_in.and_then(|text| Some((text, parse_unit(text).ok()?)));
    match found {
        Some((text, found)) => {
            let shown = Range {
                low: found.from_si(value.low),
                nominal: found.from_si(value.nominal),
                high: found.from_si(value.high),
            };
            quantity(&shown, text)
        }
        None => quantity(value, si_unit),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_have_three_digits() {
        assert_eq!(number(0.0946317), "0.0946");
        assert_eq!(number(9.759e-5), "9.76e-5");
        assert_eq!(number(0.00412504), "0.00413");
        let mixed = Range {
            low: 5.16e-4,
            nominal: 1.03e-3,
            high: 2.06e-3,
        };
        assert_eq!(range(&mixed), "5.16e-4 .. 1.03e-3 .. 2.06e-3");
        assert_eq!(number(1024.695), "1025");
        assert_eq!(number(100.0), "100");
        assert_eq!(percent(0.0304406), "3 %");
        assert_eq!(percent(1.0), "100 %");
    }

    #[test]
    fn units_are_set_with_raised_powers() {
        assert_eq!(unit("kg/(m^2.s^2)"), "kg/(m²·s²)");
        assert_eq!(unit("1/s"), "1/s");
    }

    #[test]
    fn paragraphs_hang_and_fit() {
        let text = wrapped("  label  ", &"word ".repeat(40));
        assert!(text.lines().all(|line| width(line) <= WIDTH));
        assert!(
            text.lines()
                .skip(1)
                .all(|line| line.starts_with("         w"))
        );
    }
}
