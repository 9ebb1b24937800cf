//! Which power of the small parameter each named group is.
//!
//! Groups are products of the same scales, so their powers are bound to one another: each
//! relation between groups is one between their powers.

use num_rational::BigRational;
use num_traits::{One, Signed, Zero};

use crate::algebra::monomial::{Monomial, Symbol};
use crate::algebra::product::Speller;
use crate::analysis::hierarchy::{HierarchyFault, Wanted};
use crate::analysis::names::{Namer, row_echelon};
use crate::analysis::{Case, sizes};
use crate::model::limit::{GroupPowers, Limit};
use crate::model::settings::Setting;
use crate::model::terms::Term;
use crate::number::Exponent;
use crate::source::Span;

/// The powers of groups in the small parameter.
#[derive(Debug, Clone, PartialEq)]
pub struct Placed {
    /// Groups, by their places, with their powers; in order.
    pub powers: Vec<(usize, BigRational)>,
}

/// Why groups cannot be placed.
#[derive(Debug, Clone, PartialEq)]
pub enum PlacementFault {
    /// The limit says nothing of these groups, by their places.
    Free(Vec<usize>),
    /// This placement contradicts what stands before it, by this relation between groups
    /// where one is at fault: a product of groups that is a pure number.
    Contradiction {
        /// The placement; `None`: the small parameter itself.
        place: Option<Span>,
        /// The relation.
        relation: Option<Vec<(usize, BigRational)>>,
    },
}

impl Placed {
    /// The power of a product of groups; all of them must be placed.
    pub fn of(&self, product: &[(usize, Exponent)]) -> BigRational {
        let power = |group: usize| {
            let found = self.powers.iter().find(|(placed, _)| *placed == group);
            found.map_or_else(BigRational::zero, |(_, power)| power.clone())
        };
        let powers = product.iter();
        powers
            .map(|(group, exponent)| power(*group) * exponent.to_rational())
            .sum()
    }
}

/// Places the groups that occur, by their places in order of declaration.
///
/// # Errors
/// Groups that stay free, and placements that contradict one another.
pub fn place(
    setting: &Setting,
    limit: &Limit,
    occurring: &[usize],
) -> Result<Placed, PlacementFault> {
    let mut groups: Vec<usize> = occurring.to_vec();
    groups.extend(limit.small.iter().map(|(group, _)| *group));
    let places = limit.places.iter();
    groups.extend(places.flat_map(|place| place.ratio.iter().map(|(group, _)| *group)));
    groups.sort_unstable();
    groups.dedup();
    let mut system = Powers::new(setting, groups);
    system.put(&limit.small, BigRational::one(), None)?;
    for place in &limit.places {
        system.put(&place.ratio, BigRational::zero(), Some(place.span))?;
    }
    if limit.others {
        for group in occurring {
            if system.power_of(*group).is_none() {
                let alone = vec![(*group, Exponent::ONE)];
                system.put(&alone, BigRational::zero(), None)?;
            }
        }
    }
    let found = occurring
        .iter()
        .map(|group| (*group, system.power_of(*group)));
    let (placed, free): (Vec<_>, Vec<_>) = found.partition(|(_, power)| power.is_some());
    if !free.is_empty() {
        return Err(PlacementFault::Free(
            free.into_iter().map(|(group, _)| group).collect(),
        ));
    }
    let powers = placed
        .into_iter()
        .filter_map(|(group, power)| Some((group, power?)));
    Ok(Placed {
        powers: powers.collect(),
    })
}

/// Places the groups that occur in the coefficients of equations.
///
/// # Errors
/// Coefficients that no named groups give, groups that stay free, and contradictions.
pub fn occurring(
    case: &Case,
    wanted: &Wanted<'_>,
    limit: &Limit,
    namer: &Namer<'_>,
) -> Result<Placed, HierarchyFault> {
    let mut occurring: Vec<usize> = Vec::new();
    let mut unnamed: Vec<String> = Vec::new();
    for idx in wanted.equations {
        let equation = &case.equations[*idx];
        let size = |term: &Term| case.setting.nominal(&term.size.resolved);
        let Some(largest) = sizes::largest(equation.terms.iter().map(size)) else {
            continue;
        };
        for term in equation.terms.iter().chain(&equation.neglected) {
            let ratio = term
                .size
                .resolved
                .over(&equation.terms[largest].size.resolved)?;
            match namer.product(&ratio) {
                Some(product) => occurring.extend(product.iter().map(|(group, _)| *group)),
                None => {
                    let speller = Speller {
                        symbols: &case.setting.names,
                        quantities: &case.setting.quantities,
                        with_partials: false,
                    };
                    let text = speller.monomial(&ratio.without_number());
                    if !unnamed.contains(&text) {
                        unnamed.push(text);
                    }
                }
            }
        }
    }
    if !unnamed.is_empty() {
        return Err(HierarchyFault::NoGroups(unnamed));
    }
    occurring.sort_unstable();
    occurring.dedup();
    let name = |group: usize| case.setting.groups[group].name.clone();
    place(&case.setting, limit, &occurring).map_err(|fault| match fault {
        PlacementFault::Free(groups) => {
            HierarchyFault::FreeGroups(groups.into_iter().map(name).collect())
        }
        PlacementFault::Contradiction { place, relation } => HierarchyFault::Contradiction {
            place,
            relation: relation.map(|relation| relation_text(&relation, name)),
        },
    })
}

/// A product of groups that is a pure number, as an equation: `Bu = Ro^2/Fr^2`.
fn relation_text(relation: &[(usize, BigRational)], name: impl Fn(usize) -> String) -> String {
    let side = |is_left: bool| {
        let own = relation
            .iter()
            .filter(|(_, power)| power.is_positive() == is_left);
        let factors: Vec<String> = own
            .map(|(group, power)| match power.abs() {
                power if power == BigRational::from_integer(1.into()) => name(*group),
                power if power.is_integer() => format!("{}^{power}", name(*group)),
                power => format!("{}^({power})", name(*group)),
            })
            .collect();
        match factors.is_empty() {
            true => "1".to_owned(),
            false => factors.join("*"),
        }
    };
    format!("{} ~ {}", side(true), side(false))
}

/// Linear conditions on the powers of groups, in echelon form.
struct Powers<'s> {
    setting: &'s Setting,
    groups: Vec<usize>,
    /// The relations between the groups, then the placements so far.
    rows: Vec<Vec<BigRational>>,
    /// The groups of the placements so far.
    named: Vec<usize>,
}

impl Powers<'_> {
    fn new(setting: &Setting, groups: Vec<usize>) -> Powers<'_> {
        let relations = relations(setting, &groups);
        let with_zero = |mut row: Vec<BigRational>| {
            row.push(BigRational::zero());
            row
        };
        Powers {
            setting,
            rows: relations.into_iter().map(with_zero).collect(),
            groups,
            named: Vec::new(),
        }
    }

    fn row(&self, product: &GroupPowers) -> Vec<BigRational> {
        let power = |group: &usize| {
            let found = product.iter().find(|(named, _)| named == group);
            found.map_or_else(BigRational::zero, |(_, power)| power.to_rational())
        };
        self.groups.iter().map(power).collect()
    }

    fn put(
        &mut self,
        product: &GroupPowers,
        power: BigRational,
        place: Option<Span>,
    ) -> Result<(), PlacementFault> {
        self.named.extend(product.iter().map(|(group, _)| *group));
        let mut row = self.row(product);
        row.push(power);
        let mut rows = self.rows.clone();
        rows.push(row);
        let n = self.groups.len();
        let (rows, pivots) = row_echelon(rows, n);
        if rows.iter().skip(pivots.len()).any(|row| !row[n].is_zero()) {
            return Err(PlacementFault::Contradiction {
                place,
                relation: self.relation_of_named(),
            });
        }
        self.rows = rows.into_iter().take(pivots.len()).collect();
        Ok(())
    }

    /// The power of a group, if the conditions settle it.
    fn power_of(&self, group: usize) -> Option<BigRational> {
        let place = self.groups.iter().position(|found| *found == group)?;
        let n = self.groups.len();
        self.rows.iter().find_map(|row| {
            let is_alone = (0..n).all(|at| row[at].is_zero() != (at == place));
            is_alone.then(|| row[n].clone() / &row[place])
        })
    }

    /// A relation between the groups that are placed by name alone.
    fn relation_of_named(&self) -> Option<Vec<(usize, BigRational)>> {
        let mut named = self.named.clone();
        named.sort_unstable();
        named.dedup();
        let relation = relations(self.setting, &named).into_iter().next()?;
        let relation = whole(relation);
        let powers = named.into_iter().zip(relation);
        Some(powers.filter(|(_, power)| !power.is_zero()).collect())
    }
}

/// Products of groups that are pure numbers: vectors that span all of them.
fn relations(setting: &Setting, groups: &[usize]) -> Vec<Vec<BigRational>> {
    let size = |group: &usize| &setting.groups[*group].size.resolved;
    let mut symbols: Vec<&Symbol> = groups
        .iter()
        .flat_map(|group| size(group).powers())
        .map(|(symbol, _)| symbol)
        .collect();
    symbols.sort_unstable();
    symbols.dedup();
    let rows = symbols
        .iter()
        .map(|symbol| {
            let powers = groups.iter().map(|group| power_in(size(group), symbol));
            powers.collect()
        })
        .collect();
    let (rows, pivots) = row_echelon(rows, groups.len());
    let free = (0..groups.len()).filter(|column| !pivots.contains(column));
    free.map(|column| {
        let mut vector = vec![BigRational::zero(); groups.len()];
        vector[column] = BigRational::one();
        for (row, pivot) in rows.iter().zip(&pivots) {
            vector[*pivot] = -row[column].clone();
        }
        vector
    })
    .collect()
}

fn power_in(monomial: &Monomial, symbol: &Symbol) -> BigRational {
    let found = monomial.powers().iter().find(|(found, _)| found == symbol);
    found.map_or_else(BigRational::zero, |(_, power)| power.to_rational())
}

/// A vector in whole numbers, the first of them positive.
fn whole(vector: Vec<BigRational>) -> Vec<BigRational> {
    let mut times = BigRational::one();
    for entry in &vector {
        let entry = entry * &times;
        times *= BigRational::from_integer(entry.denom().clone());
    }
    let first = vector.iter().find(|entry| !entry.is_zero());
    if first.is_some_and(Signed::is_negative) {
        times = -times;
    }
    vector.into_iter().map(|entry| entry * &times).collect()
}
