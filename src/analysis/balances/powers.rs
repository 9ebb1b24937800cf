//! Known scales without a value: compared as powers of the small parameter of a `limit`.

use num_rational::BigRational;
use num_traits::{One, Zero};

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::analysis::balances::system::{Entry, power_in};
use crate::analysis::names::row_echelon;
use crate::model::settings::Setting;

/// A `limit` with its names looked up.
#[derive(Debug, Clone)]
pub struct Placing {
    /// The small parameter as written.
    pub text: String,
    /// What it is.
    pub small: Monomial,
    /// Products of groups with the powers of the small parameter that they are.
    pub places: Vec<(Monomial, BigRational)>,
    /// Whether all other groups count as 1.
    pub others: bool,
}

/// Why scales cannot be placed.
#[derive(Debug, Clone, PartialEq)]
pub enum PlacingFault {
    /// These ratios of terms are no products of placed groups.
    Free(Vec<Monomial>),
    /// This placement contradicts those before it.
    Contradiction(Monomial),
}

/// A power of the small parameter for each known symbol. Only those of ratios without a
/// dimension have a meaning; the rest is one choice of many, which no answer rests on.
#[derive(Debug, Clone)]
pub struct Powers {
    /// The small parameter as written.
    pub text: String,
    symbols: Vec<Symbol>,
    values: Vec<BigRational>,
}

impl Powers {
    /// Places the symbols of these equations.
    pub(crate) fn place(
        setting: &Setting,
        placing: &Placing,
        unknowns: &[SymbolId],
        entries: &[Entry<'_>],
    ) -> Result<Powers, PlacingFault> {
        let symbols = symbols_of(setting, placing, unknowns, entries);
        let mut placed = Placed {
            symbols: &symbols,
            rows: Vec::new(),
        };
        placed.put(&placing.small, &BigRational::one())?;
        for (group, power) in &placing.places {
            placed.put(group, power)?;
        }
        if placing.others {
            for group in &setting.groups {
                let group = &group.size.resolved;
                let is_known = group
                    .powers()
                    .iter()
                    .all(|(symbol, _)| symbols.contains(symbol));
                if is_known && !placed.spans(&placed.row(group)) {
                    placed.put(group, &BigRational::zero())?;
                }
            }
        }
        let free = placed.unplaced(unknowns, entries);
        if !free.is_empty() {
            return Err(PlacingFault::Free(free));
        }
        let values = placed.values();
        Ok(Powers {
            text: placing.text.clone(),
            symbols,
            values,
        })
    }

    /// The power of a symbol.
    pub(crate) fn of(&self, symbol: &Symbol) -> BigRational {
        let place = self.symbols.iter().position(|found| found == symbol);
        place.map_or_else(BigRational::zero, |place| self.values[place].clone())
    }

    /// The power of a product of known symbols.
    pub(crate) fn of_product(&self, product: &Monomial) -> BigRational {
        let powers = product.powers().iter();
        powers
            .map(|(symbol, power)| self.of(symbol) * power.to_rational())
            .sum()
    }
}

/// All known symbols, in order.
fn symbols_of(
    setting: &Setting,
    placing: &Placing,
    unknowns: &[SymbolId],
    entries: &[Entry<'_>],
) -> Vec<Symbol> {
    let terms = entries.iter().flat_map(|entry| &entry.sizes);
    let groups = setting.groups.iter().map(|group| &group.size.resolved);
    let places = placing.places.iter().map(|(group, _)| group);
    let all = terms.chain(groups).chain(places).chain([&placing.small]);
    let mut symbols: Vec<Symbol> = all
        .flat_map(Monomial::powers)
        .map(|(symbol, _)| symbol.clone())
        .filter(|symbol| !matches!(symbol, Symbol::Declared(id) if unknowns.contains(id)))
        .collect();
    symbols.sort();
    symbols.dedup();
    symbols
}

/// Rows of exponents with the power that each has, in echelon form.
struct Placed<'s> {
    symbols: &'s [Symbol],
    rows: Vec<Vec<BigRational>>,
}

impl Placed<'_> {
    fn row(&self, group: &Monomial) -> Vec<BigRational> {
        let powers = self.symbols.iter().map(|symbol| power_in(group, symbol));
        powers.map(|power| power.to_rational()).collect()
    }

    fn put(&mut self, group: &Monomial, power: &BigRational) -> Result<(), PlacingFault> {
        let mut row = self.row(group);
        let n_known = row.iter().filter(|entry| !entry.is_zero()).count();
        if n_known < group.powers().len() {
            // It holds an unknown, which the balances place.
            return Ok(());
        }
        row.push(power.clone());
        self.rows.push(row);
        let n = self.symbols.len();
        let (rows, pivots) = row_echelon(std::mem::take(&mut self.rows), n);
        if rows.iter().skip(pivots.len()).any(|row| !row[n].is_zero()) {
            return Err(PlacingFault::Contradiction(group.clone()));
        }
        self.rows = rows.into_iter().take(pivots.len()).collect();
        Ok(())
    }

    fn spans(&self, row: &[BigRational]) -> bool {
        let mut rows: Vec<Vec<BigRational>> = self.rows.clone();
        let mut own = row.to_vec();
        own.push(BigRational::zero());
        rows.push(own);
        row_echelon(rows, self.symbols.len()).1.len() == self.rows.len()
    }

    fn values(&self) -> Vec<BigRational> {
        let n = self.symbols.len();
        let mut values = vec![BigRational::zero(); n];
        for row in &self.rows {
            if let Some(pivot) = row.iter().take(n).position(|entry| !entry.is_zero()) {
                values[pivot] = row[n].clone();
            }
        }
        values
    }

    /// Combinations of ratios of terms that hold no unknown and are not placed.
    fn unplaced(&self, unknowns: &[SymbolId], entries: &[Entry<'_>]) -> Vec<Monomial> {
        let mut ratios: Vec<Monomial> = Vec::new();
        for entry in entries {
            let others = entry.sizes.iter().skip(1);
            ratios.extend(others.filter_map(|size| size.over(&entry.sizes[0]).ok()));
        }
        let mut done: Vec<Monomial> = ratios;
        for unknown in unknowns {
            let Some(place) = done
                .iter()
                .position(|ratio| !ratio.power_of(*unknown).is_zero())
            else {
                continue;
            };
            let pivot = done.swap_remove(place);
            let own = pivot.power_of(*unknown);
            done = (done.into_iter())
                .filter_map(|ratio| without(&ratio, &pivot, ratio.power_of(*unknown), own))
                .collect();
        }
        let mut free: Vec<Monomial> = Vec::new();
        for ratio in done {
            let ratio = ratio.without_number();
            if !ratio.is_number() && !self.spans(&self.row(&ratio)) && !free.contains(&ratio) {
                free.push(ratio);
            }
        }
        free
    }
}

/// `ratio` with the unknown of `pivot` taken out.
fn without(
    ratio: &Monomial,
    pivot: &Monomial,
    power: crate::number::Exponent,
    own: crate::number::Exponent,
) -> Option<Monomial> {
    if power.is_zero() {
        return Some(ratio.clone());
    }
    let times = power.to_rational() / own.to_rational();
    let times = crate::number::Exponent::from_rational(&times).ok()?;
    ratio.over(&pivot.power(times).ok()?).ok()
}
