//! Which scales of one phenomenon would have to change, and by what factor, for its groups
//! to be those of others: linear equations in the logarithms.

use num_rational::BigRational;
use num_traits::{One, Zero};

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::analysis::compare::{self, Fault};
use crate::analysis::names::{next_set, row_echelon};
use crate::analysis::{Case, movable};
use crate::limits;
use crate::model::Model;
use crate::number::rational_to_f64;
use crate::syntax::ast;

/// Logarithms this near to one another are equal: sums of several of them round more than
/// one does.
const SAME: f64 = 1e-10;

/// What matching some groups takes.
#[derive(Debug, Clone, PartialEq)]
pub struct Matching {
    /// The groups to match.
    pub groups: Vec<String>,
    /// The phenomenon whose scales would change.
    pub phenomenon: String,
    /// The scales that would change, each with its factor; none where the groups match.
    pub changes: Vec<(String, f64)>,
    /// The groups that cannot be had together; none where all can.
    pub conflict: Vec<String>,
}

impl Matching {
    /// Whether the groups can be matched.
    pub fn is_possible(&self) -> bool {
        self.conflict.is_empty()
    }
}

/// Matches groups of the first case with those of the others by changing the fewest of its
/// scales, of those the ones that change least in the logarithm in sum, of those the first
/// in order of declaration.
///
/// # Errors
/// Open names in a group, more sets of scales than the limit.
pub fn matching<'c>(
    model: &Model,
    cases: &[&'c Case],
    wanted: &[ast::Name],
    tolerance: f64,
) -> Result<Matching, Fault<'c>> {
    let mut names: Vec<&str> = Vec::new();
    for name in wanted {
        if !names.contains(&name.text.as_str()) {
            names.push(&name.text);
        }
    }
    let mut found = Matching {
        groups: names.iter().map(|name| (*name).to_owned()).collect(),
        phenomenon: cases
            .first()
            .and_then(|case| case.setting.name.clone())
            .unwrap_or_default(),
        changes: Vec::new(),
        conflict: Vec::new(),
    };
    let rows = rows(cases, &names)?;
    let Some(first) = cases.first() else {
        return Ok(found);
    };
    if rows
        .iter()
        .all(|row| compare::agree(&row.values, tolerance))
    {
        return Ok(found);
    }
    let symbols = symbols(model, first, &rows);
    let system = System::new(&rows, &symbols, tolerance);
    match system.conflict() {
        Some(conflict) => {
            found.conflict = conflict.iter().map(|row| names[*row].to_owned()).collect();
        }
        None => {
            let changes = system.least_changes().ok_or(Fault::TooMany)?;
            let name = |column: usize| first.setting.names[symbols[column].idx()].clone();
            found.changes = changes
                .into_iter()
                .map(|(column, way)| (name(column), way.exp()))
                .collect();
        }
    }
    Ok(found)
}

/// One group to match.
struct Row<'c> {
    /// What it is in the first case.
    size: &'c Monomial,
    /// Its nominal values.
    values: Vec<f64>,
}

fn rows<'c>(cases: &[&'c Case], names: &[&str]) -> Result<Vec<Row<'c>>, Fault<'c>> {
    let mut rows = Vec::new();
    for name in names {
        let mut sizes = Vec::new();
        let mut values = Vec::new();
        for case in cases {
            let groups = case.setting.groups.iter();
            let Some(group) = groups.into_iter().find(|group| group.name == *name) else {
                continue;
            };
            let size = &group.size.resolved;
            let range = case.setting.monomial_range(size);
            values.push(range.map_err(|open| Fault::Open(case, open))?.nominal);
            sizes.push(size);
        }
        rows.extend(sizes.first().map(|size| Row { size, values }));
    }
    Ok(rows)
}

/// The scales that may change: neither constants nor derived, and no part of a symbol in
/// the groups that is no product.
fn symbols(model: &Model, case: &Case, rows: &[Row<'_>]) -> Vec<SymbolId> {
    let mut found: Vec<SymbolId> = Vec::new();
    for (symbol, _) in rows.iter().flat_map(|row| row.size.powers()) {
        if let Symbol::Declared(id) = symbol
            && model.symbols[id.idx()].kind == ast::ValueKind::Scale
            && !found.contains(id)
        {
            found.push(*id);
        }
    }
    found.sort_unstable();
    found.retain(|id| {
        let sizes = rows.iter().map(|row| row.size);
        movable::parts(model, case, *id).is_empty()
            && movable::holders(model, case, *id, sizes).is_empty()
    });
    found
}

/// Exponents times ways (logarithms of factors) must give what the groups lack.
struct System {
    /// Exponents of each group.
    exponents: Vec<Vec<BigRational>>,
    /// By how much the logarithm of each group must grow; not a number where its values in
    /// the other cases contradict one another.
    lacks: Vec<f64>,
    n_columns: usize,
}

impl System {
    fn new(rows: &[Row<'_>], symbols: &[SymbolId], tolerance: f64) -> System {
        let exponents: Vec<Vec<BigRational>> = rows
            .iter()
            .map(|row| {
                let powers = symbols.iter().map(|id| row.size.power_of(*id));
                powers.map(|power| power.to_rational()).collect()
            })
            .collect();
        let lacks = rows
            .iter()
            .zip(&exponents)
            .map(|(row, exponents)| {
                // A group that nothing can change is good where it matches.
                let is_fixed = exponents.iter().all(Zero::is_zero);
                if is_fixed && compare::agree(&row.values, tolerance) {
                    0.0
                } else {
                    lack(&row.values, tolerance)
                }
            })
            .collect();
        System {
            exponents,
            lacks,
            n_columns: symbols.len(),
        }
    }

    /// A smallest set of groups that cannot be had together, the first in order.
    fn conflict(&self) -> Option<Vec<usize>> {
        let n = self.lacks.len();
        let all: Vec<usize> = (0..self.n_columns).collect();
        for size in 1..=n {
            let mut set: Vec<usize> = (0..size).collect();
            loop {
                if self.solved(&set, &all).is_none() {
                    return Some(set);
                }
                if !next_set(&mut set, n) {
                    break;
                }
            }
        }
        None
    }

    /// The fewest columns that solve the system, with their ways; `None` beyond the limit.
    fn least_changes(&self) -> Option<Vec<(usize, f64)>> {
        let rows: Vec<usize> = (0..self.lacks.len()).collect();
        let mut n_tried = 0;
        for size in 0..=self.n_columns {
            let mut best: Option<(f64, Vec<(usize, f64)>)> = None;
            let mut set: Vec<usize> = (0..size).collect();
            loop {
                n_tried += 1;
                if n_tried > limits::MATCHING_SETS {
                    return None;
                }
                if let Some(ways) = self.solved(&rows, &set).flatten() {
                    let total: f64 = ways.iter().map(|way| way.abs()).sum();
                    if best.as_ref().is_none_or(|(found, _)| total < found - SAME) {
                        best = Some((total, set.iter().copied().zip(ways).collect()));
                    }
                }
                if !next_set(&mut set, self.n_columns) {
                    break;
                }
            }
            if let Some((_, changes)) = best {
                return Some(changes);
            }
        }
        None
    }

    /// Solves some rows in some columns: `None` if that is impossible, `Some(None)` if the
    /// columns depend on one another.
    fn solved(&self, rows: &[usize], columns: &[usize]) -> Option<Option<Vec<f64>>> {
        let n = columns.len();
        // Behind the exponents stands how each row is made of the given ones.
        let augmented = rows
            .iter()
            .enumerate()
            .map(|(place, row)| {
                let own = columns
                    .iter()
                    .map(|column| self.exponents[*row][*column].clone());
                let unit = (0..rows.len()).map(|other| match other == place {
                    true => BigRational::one(),
                    false => BigRational::zero(),
                });
                own.chain(unit).collect()
            })
            .collect();
        let (made, pivots) = row_echelon(augmented, n);
        let right = |row: &[BigRational]| -> f64 {
            let parts = row[n..]
                .iter()
                .zip(rows)
                .filter(|(part, _)| !part.is_zero());
            parts
                .map(|(part, row)| rational_to_f64(part) * self.lacks[*row])
                .sum()
        };
        let is_possible = made[pivots.len()..]
            .iter()
            .all(|row| right(row).abs() <= SAME);
        // A group without an answer poisons its row, pivot or not.
        let is_finite = rows.iter().all(|row| self.lacks[*row].is_finite());
        (is_possible && is_finite)
            .then(|| (pivots.len() == n).then(|| made[..n].iter().map(|row| right(row)).collect()))
    }
}

/// By how much the logarithm of a group's amount must grow to lie in the middle of the
/// other cases' values.
fn lack(values: &[f64], tolerance: f64) -> f64 {
    let Some((own, others)) = values.split_first() else {
        return 0.0;
    };
    let Some(first) = others.first() else {
        return 0.0;
    };
    if !compare::agree(others, tolerance) || own.signum() != first.signum() {
        return f64::NAN;
    }
    let logs = others.iter().map(|value| value.abs().ln());
    let smallest = logs.clone().fold(f64::INFINITY, f64::min);
    let largest = logs.fold(f64::NEG_INFINITY, f64::max);
    0.5 * (smallest + largest) - own.abs().ln()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn system(exponents: &[&[i64]], lacks: &[f64]) -> System {
        let whole = |entry: &i64| BigRational::from_integer((*entry).into());
        System {
            exponents: exponents
                .iter()
                .map(|row| row.iter().map(whole).collect())
                .collect(),
            lacks: lacks.to_vec(),
            n_columns: exponents.first().map_or(0, |row| row.len()),
        }
    }

    #[test]
    fn the_least_change_wins_among_equally_few() {
        // One group U^1 L^-2: U by 2 in the logarithm, or L by -1.
        let found = system(&[&[1, -2]], &[2.0]).least_changes();
        assert_eq!(found, Some(vec![(1, -1.0)]));
    }

    #[test]
    fn of_equal_changes_the_first_declared_wins() {
        let found = system(&[&[1, -1]], &[2.0]).least_changes();
        assert_eq!(found, Some(vec![(0, 2.0)]));
    }

    #[test]
    fn one_scale_does_where_two_groups_agree_on_it() {
        // U/L and U^2/L^2, alike but for a power.
        let both = system(&[&[1, -1], &[2, -2]], &[1.0, 2.0]);
        assert_eq!(both.least_changes(), Some(vec![(0, 1.0)]));
        assert_eq!(both.conflict(), None);
    }

    #[test]
    fn contradicting_groups_are_named() {
        let against = system(&[&[0, 1], &[1, -1], &[2, -2]], &[0.5, 1.0, 1.0]);
        assert_eq!(against.conflict(), Some(vec![1, 2]));
        let fixed = system(&[&[1, 0], &[0, 0]], &[0.5, 1.0]);
        assert_eq!(fixed.conflict(), Some(vec![1]));
    }

    #[test]
    fn values_that_disagree_among_themselves_cannot_be_met() {
        assert!(lack(&[1.0, 2.0, 3.0], 0.1).is_nan());
        assert!(lack(&[1.0, -2.0], 0.1).is_nan());
        let middle = lack(&[1.0, 2.0, 2.1], 0.1);
        assert!((middle - (2.0f64 * 2.1).sqrt().ln()).abs() < 1e-15);
    }
}
