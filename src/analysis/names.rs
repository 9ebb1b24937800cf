//! Ratios as products of named groups, shortest first.

use std::cell::RefCell;
use std::collections::HashMap;

use num_rational::BigRational;
use num_traits::{One, Signed, Zero};

use crate::algebra::monomial::{Monomial, Symbol};
use crate::analysis::{Case, Exponents};
use crate::number::{Exponent, Number};
use crate::polyhedra::{self, Condition, Outcome, Program, Relation};

/// Sets of at most this many groups are searched for the shortest product; longer
/// products are taken as the linear program gives them.
const SEARCHED: usize = 4;

/// A product of named groups: places among the groups, with exponents.
pub type GroupProduct = Vec<(usize, Exponent)>;

/// Writes ratios of terms as products of the named groups of one case.
pub struct Namer<'c> {
    case: &'c Case,
    /// The groups that may be used, by their place among all.
    usable: Vec<usize>,
    /// What was found before, by the symbols asked for.
    found: RefCell<HashMap<String, Option<GroupProduct>>>,
}

impl<'c> Namer<'c> {
    /// For a case; a group that holds an open scale or a constant that is 0 is not used, nor
    /// one without symbols.
    pub fn new(case: &'c Case) -> Namer<'c> {
        let usable = (0..case.setting.groups.len())
            .filter(|idx| {
                let size = &case.setting.groups[*idx].size.resolved;
                !size.is_number()
                    && case.setting.is_available(size)
                    && case.setting.monomial_range(size).is_ok()
            })
            .collect();
        Namer {
            case,
            usable,
            found: RefCell::new(HashMap::new()),
        }
    }

    /// The symbols of a ratio as a product of groups; empty if no symbol is left, `None`
    /// if no product of groups gives them.
    pub fn product(&self, ratio: &Monomial) -> Option<GroupProduct> {
        if ratio.is_number() {
            return Some(Vec::new());
        }
        if self.usable.is_empty() {
            return None;
        }
        let parts: Vec<String> = ratio
            .powers()
            .iter()
            .map(|(symbol, power)| format!("{}^{power}", self.case.symbol_name(symbol)))
            .collect();
        let key = parts.join("*");
        if let Some(found) = self.found.borrow().get(&key) {
            return found.clone();
        }
        let found = self.search(ratio);
        self.found.borrow_mut().insert(key, found.clone());
        found
    }

    /// Names and exponents of a product.
    pub fn named(&self, product: &[(usize, Exponent)]) -> Exponents {
        product
            .iter()
            .map(|(idx, power)| (self.case.setting.groups[*idx].name.clone(), *power))
            .collect()
    }

    /// The number that is left of a ratio once groups stand for its symbols.
    pub fn rest(&self, ratio: &Monomial, product: &[(usize, Exponent)]) -> Option<Number> {
        let mut number = ratio.number.clone();
        for (idx, power) in product {
            let own = &self.case.setting.groups[*idx].size.resolved.number;
            number = number.over(&own.power(*power).ok()?).ok()??;
        }
        Some(number)
    }

    /// Whether a product of groups holds a symbol that cancels out of the ratio.
    pub fn has_foreign(&self, ratio: &Monomial, product: &[(usize, Exponent)]) -> bool {
        let groups = product
            .iter()
            .map(|(idx, _)| &self.case.setting.groups[*idx]);
        let mut symbols = groups.flat_map(|group| group.size.resolved.powers());
        symbols.any(|(symbol, _)| !holds(ratio, symbol))
    }

    fn search(&self, ratio: &Monomial) -> Option<GroupProduct> {
        let columns = self.columns(ratio);
        let symbols = symbols_of(ratio, &columns);
        let row = |monomial: &Monomial| -> Vec<BigRational> {
            symbols
                .iter()
                .map(|symbol| power_of(monomial, symbol))
                .collect()
        };
        let matrix: Vec<Vec<BigRational>> = columns.iter().map(|(_, group)| row(group)).collect();
        shortest(&matrix, &row(ratio))?
            .into_iter()
            .map(|(column, power)| Some((columns[column].0, Exponent::from_rational(&power).ok()?)))
            .collect()
    }

    /// The groups that can take part: no symbol of theirs stands in them alone.
    fn columns(&self, ratio: &Monomial) -> Vec<(usize, &Monomial)> {
        let mut columns: Vec<(usize, &Monomial)> = self
            .usable
            .iter()
            .map(|idx| (*idx, &self.case.setting.groups[*idx].size.resolved))
            .collect();
        loop {
            let all = columns.clone();
            columns.retain(|(idx, group)| {
                group.powers().iter().all(|(symbol, _)| {
                    holds(ratio, symbol)
                        || all
                            .iter()
                            .any(|(other, found)| other != idx && holds(found, symbol))
                })
            });
            if columns.len() == all.len() {
                return columns;
            }
        }
    }
}

fn holds(monomial: &Monomial, symbol: &Symbol) -> bool {
    monomial.powers().iter().any(|(found, _)| found == symbol)
}

fn power_of(monomial: &Monomial, symbol: &Symbol) -> BigRational {
    monomial
        .powers()
        .iter()
        .find(|(found, _)| found == symbol)
        .map_or_else(BigRational::zero, |(_, power)| power.to_rational())
}

fn symbols_of(ratio: &Monomial, columns: &[(usize, &Monomial)]) -> Vec<Symbol> {
    let groups = columns.iter().flat_map(|(_, group)| group.powers());
    let mut symbols: Vec<Symbol> = ratio
        .powers()
        .iter()
        .chain(groups)
        .map(|(symbol, _)| symbol.clone())
        .collect();
    symbols.sort();
    symbols.dedup();
    symbols
}

/// Columns with the exponents that they get in a combination.
pub type Combination = Vec<(usize, BigRational)>;

/// The combination of columns that gives the target, with the smallest sum of amounts,
/// then with the fewest columns, then the first in order.
pub fn shortest(columns: &[Vec<BigRational>], target: &[BigRational]) -> Option<Combination> {
    if target.iter().all(Zero::is_zero) {
        return Some(Vec::new());
    }
    let (length, by_program) = smallest_length(columns, target)?;
    for size in 1..=SEARCHED.min(by_program.len()) {
        let mut set: Vec<usize> = (0..size).collect();
        loop {
            if let Some(found) = combination(columns, &set, target)
                && found.iter().map(Signed::abs).sum::<BigRational>() == length
            {
                return Some(set.into_iter().zip(found).collect());
            }
            if !next_set(&mut set, columns.len()) {
                break;
            }
        }
    }
    Some(by_program)
}

/// The smallest sum of amounts, and one combination that has it.
fn smallest_length(
    columns: &[Vec<BigRational>],
    target: &[BigRational],
) -> Option<(BigRational, Combination)> {
    let n = columns.len();
    // Each column stands twice, with either sign and an amount of at least 0.
    let conditions = (0..target.len())
        .map(|row| {
            let plus = columns.iter().map(|column| column[row].clone());
            let minus = columns.iter().map(|column| -column[row].clone());
            Condition {
                coefficients: plus.chain(minus).collect(),
                relation: Relation::Equal,
                limit: target[row].clone(),
            }
        })
        .collect();
    let program = Program {
        objective: vec![-BigRational::one(); 2 * n],
        conditions,
        bounds: vec![(Some(BigRational::zero()), None); 2 * n],
    };
    match polyhedra::maximise(&program) {
        Outcome::Optimal { value, point } => {
            let powers = (0..n).map(|idx| (idx, &point[idx] - &point[n + idx]));
            Some((
                -value,
                powers.filter(|(_, power)| !power.is_zero()).collect(),
            ))
        }
        Outcome::Infeasible | Outcome::Unbounded => None,
    }
}

/// The next set of places in order; `false` after the last.
pub fn next_set(set: &mut [usize], n: usize) -> bool {
    let size = set.len();
    for place in (0..size).rev() {
        if set[place] + (size - place) < n {
            set[place] += 1;
            for later in place + 1..size {
                set[later] = set[later - 1] + 1;
            }
            return true;
        }
    }
    false
}

/// The exponents with which these columns alone give the target; `None` if they do not,
/// or not in one way only.
fn combination(
    columns: &[Vec<BigRational>],
    set: &[usize],
    target: &[BigRational],
) -> Option<Vec<BigRational>> {
    let n = set.len();
    let rows = (0..target.len())
        .map(|row| {
            let coefficients = set.iter().map(|column| columns[*column][row].clone());
            coefficients.chain([target[row].clone()]).collect()
        })
        .collect();
    let (rows, pivots) = row_echelon(rows, n);
    let is_solvable = rows.iter().skip(pivots.len()).all(|row| row[n].is_zero());
    (is_solvable && pivots.len() == n).then(|| {
        rows.into_iter()
            .take(n)
            .map(|mut row| row.swap_remove(n))
            .collect()
    })
}

/// Reduced row echelon form over the first `n` columns, with the pivot columns.
pub fn row_echelon(
    mut rows: Vec<Vec<BigRational>>,
    n: usize,
) -> (Vec<Vec<BigRational>>, Vec<usize>) {
    let mut pivots = Vec::new();
    for column in 0..n {
        let start = pivots.len();
        let Some(found) = (start..rows.len()).find(|row| !rows[*row][column].is_zero()) else {
            continue;
        };
        rows.swap(start, found);
        let pivot = rows[start][column].clone();
        rows[start].iter_mut().for_each(|entry| *entry /= &pivot);
        let lead = rows[start].clone();
        for (idx, row) in rows.iter_mut().enumerate() {
            if idx != start && !row[column].is_zero() {
                let factor = row[column].clone();
                for (entry, above) in row.iter_mut().zip(&lead) {
                    *entry -= &factor * above;
                }
            }
        }
        pivots.push(column);
    }
    (rows, pivots)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn vector(entries: &[i64]) -> Vec<BigRational> {
        let whole = |entry: &i64| BigRational::from_integer((*entry).into());
        entries.iter().map(whole).collect()
    }

    #[test]
    fn fewest_groups_win_among_equal_lengths() {
        // Symbols a, b; groups a, b, a*b; wanted a*b: length 1 by the third alone.
        let columns = [vector(&[1, 0]), vector(&[0, 1]), vector(&[1, 1])];
        let found = shortest(&columns, &vector(&[1, 1])).unwrap();
        assert_eq!(found, vec![(2, BigRational::one())]);
    }

    #[test]
    fn equal_groups_go_by_declaration() {
        let columns = [vector(&[1, -1]), vector(&[1, -1])];
        let found = shortest(&columns, &vector(&[-2, 2])).unwrap();
        assert_eq!(found, vec![(0, BigRational::from_integer((-2).into()))]);
    }

    #[test]
    fn what_groups_cannot_give_is_none() {
        assert_eq!(shortest(&[vector(&[1, 0])], &vector(&[0, 1])), None);
    }
}
