//! `groups`: a complete set of independent dimensionless groups (the Pi theorem), and each
//! named group as a product of it.
//!
//! The set is taken from the circuits of the dimension matrix: the vectors of exponents
//! with the smallest sets of symbols, in whole numbers without a common divisor.

use num_bigint::BigInt;
use num_integer::Integer;
use num_rational::BigRational;
use num_traits::{One, Signed, Zero};

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::analysis::names::row_echelon;
use crate::analysis::{Case, Exponents, Factors};
use crate::limits;
use crate::model::Model;
use crate::model::settings::Setting;
use crate::number::Exponent;
use crate::units::{Dimension, Range};

/// The answer to `groups`.
#[derive(Debug, Clone)]
pub struct Groups {
    /// The scales and constants that the groups are made of, in order of declaration.
    pub symbols: Vec<String>,
    /// A complete independent set, called Pi_1, Pi_2, ... in this order.
    pub independent: Vec<PiGroup>,
    /// Every named group.
    pub named: Vec<NamedGroup>,
    /// Named groups that are independent of one another, the first in order of declaration.
    pub spanning: Vec<String>,
}

impl Groups {
    /// Whether the named groups give every dimensionless product of the symbols.
    pub fn is_spanned(&self) -> bool {
        self.spanning.len() == self.independent.len()
    }
}

/// A dimensionless product.
#[derive(Debug, Clone)]
pub struct PiGroup {
    /// Its number and exponents.
    pub factors: Factors,
    /// Its value; `None` while a scale in it is open.
    pub value: Option<Range>,
    /// The named group that it is.
    pub name: Option<String>,
}

/// A named group beside the independent ones.
#[derive(Debug, Clone)]
pub struct NamedGroup {
    /// Its name.
    pub name: String,
    /// Its title.
    pub title: Option<String>,
    /// Its formula as number and exponents.
    pub factors: Factors,
    /// Its value; `None` while a scale in it is open, or where a constant in it is 0.
    pub value: Option<Range>,
    /// Its symbols as a product of `Pi_1`, ...; `None` where it holds other symbols.
    pub groups: Option<Exponents>,
}

/// More sets of symbols would have to be looked through than the limit allows.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct TooMany {
    /// So many symbols there are.
    pub n_symbols: usize,
}

/// Answers `groups`.
///
/// # Errors
/// [`TooMany`] beyond the limit.
pub fn groups(model: &Model, case: &Case) -> Result<Groups, TooMany> {
    let symbols = symbols(model, case);
    let columns: Vec<Vec<BigRational>> = symbols
        .iter()
        .map(|symbol| column(&dimension(model, symbol)))
        .collect();
    let basis = independent(circuits(&columns)?, symbols.len());
    let setting = &case.setting;
    let independent = basis
        .iter()
        .filter_map(|vector| pi_group(case, &product(&symbols, vector)?))
        .collect();
    let named: Vec<NamedGroup> = setting
        .groups
        .iter()
        .map(|group| NamedGroup {
            name: group.name.clone(),
            title: group.title.clone(),
            factors: case.factors(&group.size.resolved),
            value: value(setting, &group.size.resolved),
            groups: as_product(&group.size.resolved, &symbols, &basis),
        })
        .collect();
    let spanning = spanning(case, &named, &symbols);
    Ok(Groups {
        symbols: symbols
            .iter()
            .map(|symbol| case.symbol_name(symbol))
            .collect(),
        independent,
        named,
        spanning,
    })
}

/// The symbols of the equations' terms, or all of them where there is no equation; one
/// that is 0 stands in no group.
fn symbols(model: &Model, case: &Case) -> Vec<Symbol> {
    let setting = &case.setting;
    let mut symbols: Vec<Symbol> = if case.equations.is_empty() {
        (0..model.symbols.len())
            .filter(|idx| {
                let local_to = model.symbols[*idx].local_to;
                setting.quantities.replacements[*idx].is_none()
                    && (local_to.is_none() || local_to == setting.phenomenon)
            })
            .map(|idx| Symbol::Declared(SymbolId(idx as u32)))
            .collect()
    } else {
        let terms = case.equations.iter().flat_map(|equation| &equation.terms);
        terms
            .flat_map(|term| term.size.resolved.powers())
            .map(|(symbol, _)| symbol.clone())
            .collect()
    };
    symbols.retain(|symbol| !setting.is_zero(symbol));
    symbols.sort();
    symbols.dedup();
    symbols
}

/// A function of constants has no dimension.
fn dimension(model: &Model, symbol: &Symbol) -> Dimension {
    match symbol {
        Symbol::Declared(id) => model.symbols[id.idx()].dimension,
        Symbol::Function(_) => None,
    }
    .unwrap_or(Dimension::one())
}

fn column(dimension: &Dimension) -> Vec<BigRational> {
    dimension
        .exponents()
        .iter()
        .map(|power| power.to_rational())
        .collect()
}

fn product(symbols: &[Symbol], vector: &[BigInt]) -> Option<Monomial> {
    let mut product = Monomial::one();
    for (symbol, power) in symbols.iter().zip(vector) {
        let power = BigRational::from_integer(power.clone());
        let factor = Monomial::symbol(symbol.clone())
            .power(Exponent::from_rational(&power).ok()?)
            .ok()?;
        product = product.times(&factor).ok()?;
    }
    Some(product)
}

fn pi_group(case: &Case, product: &Monomial) -> Option<PiGroup> {
    let is_it = |size: &Monomial| size == product;
    let name = case
        .setting
        .groups
        .iter()
        .find(|group| is_it(&group.size.resolved));
    Some(PiGroup {
        factors: case.factors(product),
        value: value(&case.setting, product),
        name: name.map(|group| group.name.clone()),
    })
}

fn value(setting: &Setting, product: &Monomial) -> Option<Range> {
    let is_there = setting.is_available(product);
    is_there
        .then(|| setting.monomial_range(product).ok())
        .flatten()
}

// Circuits ------------------------------------------------------------------------------------

/// Whole exponents of all symbols, in order.
type Vector = Vec<BigInt>;

/// All circuits of a matrix given by its columns.
fn circuits(columns: &[Vec<BigRational>]) -> Result<Vec<Vector>, TooMany> {
    let mut search = Search {
        n_columns: columns.len(),
        n_steps: 0,
        found: Vec::new(),
    };
    let rest: Vec<Rest> = columns
        .iter()
        .enumerate()
        .map(|(idx, column)| Rest {
            idx,
            left: column.clone(),
            taken: Vec::new(),
        })
        .collect();
    search.extend(&[], &rest)?;
    Ok(search.found)
}

/// What is left of a column once the chosen ones are taken out of it.
#[derive(Debug, Clone)]
struct Rest {
    idx: usize,
    left: Vec<BigRational>,
    /// How much of each chosen column was taken out, in their order.
    taken: Vec<BigRational>,
}

struct Search {
    n_columns: usize,
    n_steps: usize,
    found: Vec<Vector>,
}

impl Search {
    /// Takes every column that may come behind the chosen, independent ones: where nothing
    /// is left of it, and something of each was taken out, they are a circuit.
    fn extend(&mut self, chosen: &[usize], rest: &[Rest]) -> Result<(), TooMany> {
        for (place, next) in rest.iter().enumerate() {
            let Some(pivot) = next.left.iter().position(|entry| !entry.is_zero()) else {
                if next.taken.iter().all(|amount| !amount.is_zero()) {
                    self.found.push(self.circuit(chosen, next));
                }
                continue;
            };
            let behind = &rest[place + 1..];
            self.n_steps += behind.len();
            if self.n_steps > limits::CIRCUIT_STEPS {
                return Err(TooMany {
                    n_symbols: self.n_columns,
                });
            }
            let behind: Vec<Rest> = behind
                .iter()
                .map(|other| other.without(next, pivot))
                .collect();
            self.extend(&[chosen, &[next.idx]].concat(), &behind)?;
        }
        Ok(())
    }

    /// The dependence of a column on the chosen ones, in whole numbers.
    fn circuit(&self, chosen: &[usize], last: &Rest) -> Vector {
        let mut exponents = vec![BigRational::zero(); self.n_columns];
        exponents[last.idx] = BigRational::one();
        for (idx, amount) in chosen.iter().zip(&last.taken) {
            exponents[*idx] = -amount.clone();
        }
        whole(&exponents)
    }
}

impl Rest {
    fn without(&self, other: &Rest, pivot: usize) -> Rest {
        let factor = &self.left[pivot] / &other.left[pivot];
        let minus = |own: &[BigRational], others: &[BigRational]| -> Vec<BigRational> {
            if factor.is_zero() {
                return own.to_vec();
            }
            own.iter()
                .zip(others)
                .map(|(own, other)| own - &factor * other)
                .collect()
        };
        let left = minus(&self.left, &other.left);
        let mut taken = minus(&self.taken, &other.taken);
        taken.push(factor);
        Rest {
            idx: self.idx,
            left,
            taken,
        }
    }
}

/// Without denominators and common divisors, the first exponent positive.
fn whole(exponents: &[BigRational]) -> Vector {
    let common = exponents
        .iter()
        .fold(BigInt::one(), |common, power| common.lcm(power.denom()));
    let scaled: Vec<BigInt> = exponents
        .iter()
        .map(|power| power.numer() * (&common / power.denom()))
        .collect();
    let divisor = scaled
        .iter()
        .fold(BigInt::zero(), |divisor, power| divisor.gcd(power));
    let is_negative = scaled
        .iter()
        .find(|power| !power.is_zero())
        .is_some_and(Signed::is_negative);
    let divisor = if is_negative { -divisor } else { divisor };
    scaled.into_iter().map(|power| power / &divisor).collect()
}

/// The circuits in order, each kept if it is independent of those before it.
fn independent(mut circuits: Vec<Vector>, n_symbols: usize) -> Vec<Vector> {
    let length = |vector: &Vector| vector.iter().map(Signed::abs).sum::<BigInt>();
    circuits.sort_by_cached_key(|vector| (length(vector), std::cmp::Reverse(vector.clone())));
    let mut kept: Vec<Vector> = Vec::new();
    let mut reduced = Reduced::default();
    for vector in circuits {
        if kept.len() == n_symbols {
            break;
        }
        let row = vector.iter().cloned().map(BigRational::from_integer);
        if reduced.takes(row.collect()) {
            kept.push(vector);
        }
    }
    kept
}

/// Independent rows, each with a pivot that the later ones do not have.
#[derive(Default)]
struct Reduced {
    rows: Vec<(usize, Vec<BigRational>)>,
}

impl Reduced {
    /// Takes a row if it is independent of those before it.
    fn takes(&mut self, mut row: Vec<BigRational>) -> bool {
        for (pivot, lead) in &self.rows {
            if row[*pivot].is_zero() {
                continue;
            }
            let factor = &row[*pivot] / &lead[*pivot];
            for (entry, above) in row.iter_mut().zip(lead) {
                *entry -= &factor * above;
            }
        }
        let pivot = row.iter().position(|entry| !entry.is_zero());
        if let Some(pivot) = pivot {
            self.rows.push((pivot, row));
        }
        pivot.is_some()
    }
}

// Named groups --------------------------------------------------------------------------------

/// The exponents of a product over the symbols; `None` if it holds others.
fn exponents_over(product: &Monomial, symbols: &[Symbol]) -> Option<Vec<BigRational>> {
    let mut exponents = vec![BigRational::zero(); symbols.len()];
    for (symbol, power) in product.powers() {
        exponents[symbols.binary_search(symbol).ok()?] = power.to_rational();
    }
    Some(exponents)
}

/// A product over the independent groups.
fn as_product(product: &Monomial, symbols: &[Symbol], basis: &[Vector]) -> Option<Exponents> {
    let wanted = exponents_over(product, symbols)?;
    let rows = (0..symbols.len())
        .map(|row| {
            let entries = basis.iter().map(|vector| vector[row].clone());
            let entries = entries.map(BigRational::from_integer);
            entries.chain([wanted[row].clone()]).collect()
        })
        .collect();
    let n = basis.len();
    let (rows, pivots) = row_echelon(rows, n);
    if rows.iter().skip(pivots.len()).any(|row| !row[n].is_zero()) {
        return None;
    }
    let powers = rows.iter().take(n).enumerate();
    powers
        .filter(|(_, row)| !row[n].is_zero())
        .map(|(idx, row)| {
            let power = Exponent::from_rational(&row[n]).ok()?;
            Some((format!("Pi_{}", idx + 1), power))
        })
        .collect()
}

/// The named groups of these symbols that are independent of those before them.
fn spanning(case: &Case, named: &[NamedGroup], symbols: &[Symbol]) -> Vec<String> {
    let mut reduced = Reduced::default();
    case.setting
        .groups
        .iter()
        .zip(named)
        .filter(|(_, named)| named.groups.is_some())
        .filter(|(group, _)| {
            let row = exponents_over(&group.size.resolved, symbols);
            row.is_some_and(|row| reduced.takes(row))
        })
        .map(|(group, _)| group.name.clone())
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn columns(rows: &[[i64; 2]]) -> Vec<Vec<BigRational>> {
        rows.iter()
            .map(|row| {
                row.map(|entry| BigRational::from_integer(entry.into()))
                    .to_vec()
            })
            .collect()
    }

    fn plain(vectors: &[Vector]) -> Vec<Vec<i64>> {
        let entry = |entry: &BigInt| i64::try_from(entry).unwrap();
        vectors
            .iter()
            .map(|vector| vector.iter().map(entry).collect())
            .collect()
    }

    #[test]
    fn circuits_have_the_smallest_sets_of_symbols() {
        // U, L, H in m/s, m, m and N in 1/s, over (m, s): every pair of lengths, every
        // speed with a length and a frequency.
        let found = circuits(&columns(&[[1, -1], [1, 0], [1, 0], [0, -1]])).unwrap();
        let mut found = plain(&found);
        found.sort();
        assert_eq!(
            found,
            [vec![0, 1, -1, 0], vec![1, -1, 0, -1], vec![1, 0, -1, -1]]
        );
    }

    #[test]
    fn shorter_circuits_come_first_then_larger_ones() {
        let found = circuits(&columns(&[[1, -1], [1, 0], [1, 0], [0, -1]])).unwrap();
        assert_eq!(
            plain(&independent(found, 4)),
            [vec![0, 1, -1, 0], vec![1, 0, -1, -1]]
        );
    }

    #[test]
    fn a_dimensionless_symbol_is_a_circuit_by_itself() {
        let found = circuits(&columns(&[[1, 0], [0, 0], [0, 1]])).unwrap();
        assert_eq!(plain(&found), [vec![0, 1, 0]]);
    }

    #[test]
    fn exponents_are_whole_without_a_common_divisor() {
        let half = BigRational::new((-1).into(), 2.into());
        let third = BigRational::new(1.into(), 3.into());
        let found = whole(&[BigRational::zero(), half, third]);
        assert_eq!(plain(&[found]), [vec![0, 3, -2]]);
    }

    #[test]
    fn too_many_symbols_are_refused() {
        let many: Vec<Vec<BigRational>> = (1..400_i64)
            .map(|n| vec![BigRational::one(), BigRational::from_integer(n.into())])
            .map(|mut row| {
                row.push(&row[1] * &row[1]);
                row
            })
            .collect();
        assert_eq!(circuits(&many), Err(TooMany { n_symbols: 399 }));
    }
}
