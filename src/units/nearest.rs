//! What an unknown unit probably meant: a name written out, a forgotten exponent sign,
//! or a symbol that differs by a letter.

use std::sync::LazyLock;

use strsim::damerau_levenshtein;

use super::prefixes::{PREFIXES, Prefix};
use super::table::{UnitInfo, table, units};

/// Words that people write for units, where neither the unit's name nor a slip of a
/// letter leads to it.
#[rustfmt::skip]
const WRITTEN: &[(&str, &str)] = &[
    ("sec", "s"), ("secs", "s"), ("mins", "min"), ("hr", "h"), ("hrs", "h"), ("dy", "d"),
    ("wk", "week"), ("weeks", "week"), ("a", "yr"), ("year", "yr"), ("years", "yr"), ("yrs", "yr"),
    ("in", "inch"), ("inches", "inch"), ("mtr", "m"), ("mtrs", "m"), ("sm", "mi"), ("NM", "nmi"),
    ("lightyear", "ly"), ("usft", "ftUS"), ("sqm", "m^2"), ("cc", "cm^3"), ("gal", "galUS"),
    ("gallon", "galUS"), ("gallons", "galUS"), ("kts", "kt"), ("mps", "m/s"), ("kph", "km/h"),
    ("kmh", "km/h"), ("kmph", "km/h"), ("fps", "ft/s"), ("fpm", "ft/min"), ("cumec", "m^3/s"),
    ("cumecs", "m^3/s"), ("gm", "g"), ("gms", "g"), ("lbs", "lb"), ("ton", "t"), ("tons", "t"),
    ("mb", "mbar"), ("mbs", "mbar"), ("degree", "deg"), ("degs", "deg"), ("degK", "K"), ("°K", "K"),
    ("º", "deg"), ("ºC", "degC"), ("ºF", "degF"), ("celsius", "degC"), ("celcius", "degC"),
    ("centigrade", "degC"), ("degrees_C", "degC"), ("fahrenheit", "degF"), ("degrees_F", "degF"),
    ("rankine", "degR"), ("sievert", "J/kg"), ("amp", "A"), ("amps", "A"), ("percent", "%"),
    ("pct", "%"), ("ppt", "permil"), ("psu", "g/kg"), ("PSU", "g/kg"),
];

/// Prefixes that a guess may add; the others would make nearly any letter a unit.
const USUAL_PREFIXES: [&str; 9] = ["k", "c", "m", "h", "u", "n", "M", "G", "d"];

/// The unit, in unit syntax, that an unknown symbol probably meant.
pub(super) fn nearest(symbol: &str) -> Option<String> {
    written(symbol)
        .or_else(|| named(symbol))
        .or_else(|| with_exponent(symbol))
        .or_else(|| plural(symbol))
        .or_else(|| alike(symbol))
}

fn written(symbol: &str) -> Option<String> {
    let lower = symbol.to_lowercase();
    WRITTEN
        .iter()
        .find(|(word, _)| *word == symbol)
        // A word in capitals too, but no mere letter or two, which may be anything.
        .or_else(|| {
            WRITTEN
                .iter()
                .find(|(word, _)| word.len() > 2 && *word == lower)
        })
        .map(|(_, unit)| (*unit).to_owned())
}

/// A unit's name written out: `meter`, `kilometres`, `Knots`.
fn named(symbol: &str) -> Option<String> {
    let word = symbol
        .to_lowercase()
        .replace("meter", "metre")
        .replace("liter", "litre")
        .replace('_', " ");
    units().iter().find_map(|unit| {
        if is_named(unit, &word) {
            return Some(unit.symbols[0].to_owned());
        }
        let prefix = PREFIXES.iter().find(|prefix| {
            unit.takes_prefixes
                && word
                    .strip_prefix(prefix.name)
                    .is_some_and(|rest| is_named(unit, rest))
        })?;
        Some(prefixed(prefix, unit))
    })
}

fn is_named(unit: &UnitInfo, word: &str) -> bool {
    unit.name.to_lowercase() == word || unit.plural.to_lowercase() == word
}

fn prefixed(prefix: &Prefix, unit: &UnitInfo) -> String {
    format!("{}{}", prefix.symbol, unit.symbols[0])
}

/// A known unit with its exponent right behind it: `m2` for `m^2`.
fn with_exponent(symbol: &str) -> Option<String> {
    let unit = symbol.trim_end_matches(|c: char| c.is_ascii_digit());
    let exponent = &symbol[unit.len()..];
    (!exponent.is_empty() && table().find(unit).is_some()).then(|| format!("{unit}^{exponent}"))
}

/// A symbol with the s of a plural: `bars`, `kgs`.
fn plural(symbol: &str) -> Option<String> {
    let single = symbol.strip_suffix('s')?;
    (single.len() > 1 && table().find(single).is_some()).then(|| single.to_owned())
}

/// A symbol to compare with.
struct Candidate {
    symbol: String,
    lower: String,
    length: usize,
}

/// What a misspelt symbol may have been: every plain symbol, then the usual multiples.
static CANDIDATES: LazyLock<Vec<Candidate>> = LazyLock::new(|| {
    let plain = units()
        .iter()
        .flat_map(|unit| unit.symbols.iter().map(|symbol| (*symbol).to_owned()));
    let multiples = units()
        .iter()
        .filter(|unit| unit.takes_prefixes)
        .flat_map(|unit| USUAL_PREFIXES.map(|prefix| format!("{prefix}{}", unit.symbols[0])));
    plain
        .chain(multiples)
        .map(|symbol| Candidate {
            lower: symbol.to_lowercase(),
            length: symbol.chars().count(),
            symbol,
        })
        .collect()
});

/// The symbol that differs least: only in case, or by one slip (two in a long one).
fn alike(symbol: &str) -> Option<String> {
    let lower = symbol.to_lowercase();
    if let Some(same) = CANDIDATES.iter().find(|known| known.lower == lower) {
        return Some(same.symbol.clone());
    }
    let length = symbol.chars().count();
    let allowed = match length {
        0..=2 => return None,
        3..=4 => 1,
        _ => 2,
    };
    CANDIDATES
        .iter()
        .filter(|known| known.length.abs_diff(length) <= allowed)
        .map(|known| (damerau_levenshtein(symbol, &known.symbol), known))
        .filter(|(slips, _)| *slips <= allowed)
        // Of equals the first: plain symbols come before multiples.
        .min_by_key(|(slips, _)| *slips)
        .map(|(_, known)| known.symbol.clone())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::units::parse_unit;

    #[test]
    fn unknown_units_lead_to_the_known_one() {
        for (symbol, expected) in [
            ("sec", "s"),
            ("mps", "m/s"),
            ("meter", "m"),
            ("metres", "m"),
            ("kilometres", "km"),
            ("hectopascals", "hPa"),
            ("knots", "kt"),
            ("feet", "ft"),
            ("degrees", "deg"),
            ("nautical_miles", "nmi"),
            ("m2", "m^2"),
            ("cm3", "cm^3"),
            ("hpa", "hPa"),
            ("KM", "km"),
            ("mbra", "mbar"),
            ("inhg", "inHg"),
            ("years", "yr"),
            ("bars", "bar"),
            ("kgs", "kg"),
            ("Celsius", "degC"),
            ("degC2", "degC^2"),
        ] {
            assert_eq!(nearest(symbol).as_deref(), Some(expected), "{symbol}");
        }
    }

    #[test]
    fn nothing_is_guessed_for_what_is_like_nothing() {
        for symbol in ["U", "Omega", "ρ", "U_0", "X"] {
            assert_eq!(nearest(symbol), None, "{symbol}");
        }
    }

    #[test]
    fn every_word_leads_to_a_unit_and_is_none() {
        for (word, unit) in WRITTEN {
            assert!(parse_unit(unit).is_ok(), "{unit}");
            assert!(table().find(word).is_none(), "{word}");
        }
    }
}
