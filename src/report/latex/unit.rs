//! Units as LaTeX: upright, thin spaces for their dots, exponents raised.

use std::iter::Peekable;
use std::str::Chars;

use crate::number::raised_digit;
use crate::report::latex::escape;

/// What stands inside of `\mathrm{...}`.
pub(super) fn unit(unit: &str) -> String {
    let mut out = String::new();
    let mut chars = unit.chars().peekable();
    while let Some(c) = chars.next() {
        match c {
            '.' | '·' => out.push_str("\\,"),
            '%' => out.push_str("\\%"),
            '^' => out.push_str(&format!("^{{{}}}", exponent(&mut chars))),
            c if plain(c).is_some() => {
                let behind = std::iter::from_fn(|| chars.next_if(|c| plain(*c).is_some()));
                let run = std::iter::once(c).chain(behind);
                out.push_str(&format!(
                    "^{{{}}}",
                    run.filter_map(plain).collect::<String>()
                ));
            }
            c if c.is_ascii() => out.push(c),
            c => out.push_str(&escape::sign(c).unwrap_or_else(|| escape::text(&c.to_string()))),
        }
    }
    out
}

/// Takes an exponent: digits with a sign, or, in brackets, a fraction. A bracket or a
/// solidus behind bare digits belongs to the unit.
fn exponent(chars: &mut Peekable<Chars<'_>>) -> String {
    let mut found = String::new();
    if chars.next_if_eq(&'(').is_some() {
        let inside = std::iter::from_fn(|| chars.next_if(|c| *c != ')'));
        found.extend(inside);
        chars.next();
        return found;
    }
    found.extend(chars.next_if(|c| "+-".contains(*c)));
    while let Some(digit) = chars.next_if(char::is_ascii_digit) {
        found.push(digit);
    }
    found
}

/// The digit or sign that is raised here.
fn plain(raised: char) -> Option<char> {
    "-0123456789".chars().find(|c| raised_digit(*c) == raised)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::units::parse_unit;

    #[test]
    fn exponents_end_where_they_do() {
        for (text, wanted) in [
            ("m", "m"),
            ("m/s", "m/s"),
            ("m/s^2", "m/s^{2}"),
            ("s^-1", "s^{-1}"),
            ("kg/(m.s^2)", "kg/(m\\,s^{2})"),
            ("kg/(m^2.s^2)", "kg/(m^{2}\\,s^{2})"),
            ("m^2/(s^3.K)", "m^{2}/(s^{3}\\,K)"),
            ("m^2/s^3", "m^{2}/s^{3}"),
            ("kg.m^2/(s^3.A^2)", "kg\\,m^{2}/(s^{3}\\,A^{2})"),
            ("m^(1/3)/s", "m^{1/3}/s"),
            ("m^(-2/3).s^-1", "m^{-2/3}\\,s^{-1}"),
            ("1/(m^(2/3).s^2)", "1/(m^{2/3}\\,s^{2})"),
            ("kg/(m^10.s^12)", "kg/(m^{10}\\,s^{12})"),
            ("%", "\\%"),
            ("µm", "\\mu m"),
            ("m·s⁻¹", "m\\,s^{-1}"),
            ("kg/(m²·s¹²)", "kg/(m^{2}\\,s^{12})"),
        ] {
            assert_eq!(unit(text), wanted, "{text}");
        }
    }

    #[test]
    fn no_bracket_is_lost_and_no_exponent_holds_one() {
        let bases = ["kg", "m", "s", "K", "A"];
        let powers = ["", "^2", "^3", "^-1", "^12", "^(1/2)"];
        for above in powers {
            for below in powers {
                for base in bases {
                    let text = format!("m{above}/({base}{below}.K{above})");
                    assert!(parse_unit(&text).is_ok(), "{text}");
                    let set = unit(&text);
                    let raised = |power: &str| match power.trim_matches(['^', '(', ')']) {
                        "" => String::new(),
                        bare => format!("^{{{bare}}}"),
                    };
                    let (above, below) = (raised(above), raised(below));
                    assert_eq!(
                        set,
                        format!("m{above}/({base}{below}\\,K{above})"),
                        "{text}"
                    );
                }
            }
        }
    }
}
