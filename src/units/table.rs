//! The table of units: what every symbol means, with and without prefix.
//!
//! It is constant data, put together once out of `uom_units` and `own_units`. A plain
//! symbol beats a prefix before a unit: `Pa min ha kt nmi ft cd yd` are no multiples.

use std::collections::BTreeMap;
use std::sync::LazyLock;

use num_rational::BigRational;
use num_traits::Pow;

use super::dimension::Dimension;
use super::own_units::DEFINITIONS;
use super::parse::Unit;
use super::prefixes::{PREFIXES, Prefix};
use super::uom_units;
use crate::number::Number;

/// Words of the language that would otherwise read as a prefix and a unit (attosecond).
const NO_UNITS: [&str; 1] = ["as"];

/// A unit that has a symbol of its own.
#[derive(Debug, Clone, PartialEq)]
pub struct UnitInfo {
    /// Its symbols; the first is the usual one.
    pub symbols: Vec<&'static str>,
    /// Its name in words.
    pub name: String,
    /// Its name in words, for more than one.
    pub plural: String,
    /// What it measures.
    pub dimension: Dimension,
    /// How many SI units it is, exactly.
    pub factor: Number,
    /// What is added to a reading in it after the factor, in K.
    pub offset: Option<BigRational>,
    /// Whether SI prefixes stand before it.
    pub takes_prefixes: bool,
    /// Where the factor is defined.
    pub source: &'static str,
}

/// What a symbol means: a unit, with a prefix or without.
#[derive(Debug, Clone, Copy)]
pub(super) struct Found<'t> {
    pub(super) unit: &'t UnitInfo,
    /// The prefix and its factor.
    pub(super) prefix: Option<&'t (Prefix, Number)>,
}

/// All units and prefixes.
pub(super) struct Table {
    units: Vec<UnitInfo>,
    by_symbol: BTreeMap<&'static str, usize>,
    prefixes: Vec<(Prefix, Number)>,
}

static TABLE: LazyLock<Table> = LazyLock::new(Table::build);

/// The units with a symbol of their own, in the order of the tables.
pub fn units() -> &'static [UnitInfo] {
    &TABLE.units
}

/// The unit and the prefix that a symbol stands for: `hPa` is the pascal with hecto.
pub fn find_unit(symbol: &str) -> Option<(&'static UnitInfo, Option<Prefix>)> {
    let found = TABLE.find(symbol)?;
    Some((found.unit, found.prefix.map(|(prefix, _)| *prefix)))
}

/// Every symbol that is a unit: the plain ones, then those with a prefix.
pub fn symbols() -> impl Iterator<Item = String> {
    let plain = TABLE.by_symbol.keys().map(|symbol| (*symbol).to_owned());
    let prefixed = units()
        .iter()
        .filter(|unit| unit.takes_prefixes)
        .flat_map(|unit| &unit.symbols)
        .flat_map(|symbol| PREFIXES.map(|prefix| format!("{}{symbol}", prefix.symbol)))
        .filter(|symbol| !TABLE.by_symbol.contains_key(symbol.as_str()))
        .filter(|symbol| TABLE.find(symbol).is_some());
    plain.chain(prefixed)
}

/// The name of a symbol in words: `hectopascal` for `hPa`.
pub fn display_name(symbol: &str) -> Option<String> {
    let (unit, prefix) = find_unit(symbol)?;
    Some(prefix.map_or(String::new(), |prefix| prefix.name.to_owned()) + &unit.name)
}

/// The table, for the rest of the room.
pub(super) fn table() -> &'static Table {
    &TABLE
}

impl Table {
    fn build() -> Table {
        let ten = BigRational::from_integer(10.into());
        let prefixes = PREFIXES
            .iter()
            .map(|prefix| (*prefix, Number::rational(Pow::pow(&ten, prefix.power))));
        let mut table = Table {
            units: Vec::new(),
            by_symbol: BTreeMap::new(),
            prefixes: prefixes.collect(),
        };
        for unit in uom_units::units() {
            table.add(unit);
        }
        for definition in DEFINITIONS {
            let of = Unit::parse_with(definition.of, &table)
                .expect("a definition uses units that stand above it");
            table.add(definition.unit_info(of.dimension, &of.factor));
        }
        table
    }

    fn add(&mut self, unit: UnitInfo) {
        let place = self.units.len();
        for &symbol in &unit.symbols {
            self.by_symbol.insert(symbol, place);
        }
        self.units.push(unit);
    }

    /// What a symbol means.
    pub(super) fn find(&self, symbol: &str) -> Option<Found<'_>> {
        if let Some(&place) = self.by_symbol.get(symbol) {
            return Some(Found {
                unit: &self.units[place],
                prefix: None,
            });
        }
        if NO_UNITS.contains(&symbol) {
            return None;
        }
        self.prefixes.iter().find_map(|prefix| {
            let rest = symbol.strip_prefix(prefix.0.symbol)?;
            let unit = &self.units[*self.by_symbol.get(rest)?];
            unit.takes_prefixes.then_some(Found {
                unit,
                prefix: Some(prefix),
            })
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn no_symbol_has_two_units() {
        let written: usize = units().iter().map(|unit| unit.symbols.len()).sum();
        assert_eq!(written, table().by_symbol.len());
    }

    #[test]
    fn only_these_plain_symbols_also_read_as_a_multiple() {
        let mut twice: Vec<&str> = Vec::new();
        for &symbol in table().by_symbol.keys() {
            let multiple = table().prefixes.iter().find_map(|(prefix, factor)| {
                let rest = symbol.strip_prefix(prefix.symbol)?;
                let unit = &table().units[*table().by_symbol.get(rest)?];
                unit.takes_prefixes
                    .then(|| (unit.dimension, unit.factor.times(factor).unwrap()))
            });
            let plain = table().find(symbol).unwrap().unit;
            let same = (plain.dimension, plain.factor.clone());
            if multiple.is_some_and(|multiple| multiple != same) {
                twice.push(symbol);
            }
        }
        assert_eq!(twice, ["PS", "at", "ct", "ft", "kt", "pt"]);
    }

    #[test]
    fn the_words_of_the_language_are_no_units() {
        let reserved = "scale constant coordinate field fluctuation velocity equation group \
            balance tolerance phenomenon use show rank nondimensionalize reduce bounds find \
            layers groups limit expand sweep regimes compare claim frame vector in for by from \
            to within about along as where with varying using save matching";
        for word in reserved.split_whitespace() {
            assert!(table().find(word).is_none(), "{word}");
        }
    }

    #[test]
    fn every_listed_symbol_is_found_once() {
        let mut listed: Vec<String> = symbols().collect();
        let count = listed.len();
        listed.sort();
        listed.dedup();
        assert_eq!(listed.len(), count);
        assert!(listed.iter().all(|symbol| find_unit(symbol).is_some()));
        for symbol in ["hPa", "km", "µm", "inHg", "mGal"] {
            assert!(listed.iter().any(|found| found == symbol), "{symbol}");
        }
    }

    #[test]
    fn a_symbol_has_its_name_in_words() {
        assert_eq!(display_name("hPa").as_deref(), Some("hectopascal"));
        assert_eq!(display_name("kt").as_deref(), Some("knot"));
        assert_eq!(display_name("km").as_deref(), Some("kilometre"));
        assert_eq!(display_name("Mt").as_deref(), Some("megatonne"));
        assert_eq!(display_name("kkt"), None);
    }
}
