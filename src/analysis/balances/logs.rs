//! The logarithms of sizes: of what is known exact numbers, of the rest exponents. Here
//! stand near ties, and what one `D_t` makes of its two parts.

use num_rational::BigRational;
use num_traits::{ToPrimitive, Zero};

use crate::algebra::monomial::{Monomial, Symbol};
use crate::algebra::product::Sized;
use crate::analysis::balances::ranges::{self, Pair, Ranged};
use crate::analysis::balances::system::{Entry, Query, power_in, sized_in};
use crate::analysis::sizes::same;
use crate::number::Exponent;
use crate::polyhedra::prevariety::{Equation, LinearForm, Term};

/// Logarithms of the known, linear in the unknown.
pub(super) struct Logs<'q> {
    query: &'q Query<'q>,
    /// Bounded unknowns, behind the open ones.
    pub(super) ranged: Vec<Ranged>,
    /// All other known symbols, and those with a range at their nominal values.
    known: Vec<(Symbol, BigRational)>,
}

impl<'q> Logs<'q> {
    /// For all sizes of a query.
    pub(super) fn new(query: &'q Query<'q>) -> Logs<'q> {
        let pairs = pairs(query);
        let mut logs = Logs {
            query,
            ranged: Vec::new(),
            known: Vec::new(),
        };
        for size in pairs
            .iter()
            .flat_map(|(size, other)| [Some(*size), *other])
            .flatten()
        {
            logs.take_in(size);
        }
        if query.powers.is_none() && query.with_ranges {
            logs.ranged = ranges::independent(query.setting, &query.unknowns, &pairs);
        }
        logs
    }

    fn take_in(&mut self, size: &Monomial) {
        for (symbol, _) in size.powers() {
            let is_new = self.known.iter().all(|(known, _)| known != symbol);
            if is_new && self.place(symbol).is_none() {
                let log = match &self.query.powers {
                    Some(powers) => -powers.of(symbol),
                    None => ranges::nominal_log(self.query.setting, symbol),
                };
                self.known.push((symbol.clone(), log));
            }
        }
    }

    /// The place of an open unknown.
    fn place(&self, symbol: &Symbol) -> Option<usize> {
        match symbol {
            Symbol::Declared(id) => self.query.unknowns.iter().position(|found| found == id),
            Symbol::Function(_) => None,
        }
    }

    /// The exponents of the open unknowns.
    fn open_exponents(&self, size: &Monomial) -> Vec<Exponent> {
        self.query
            .unknowns
            .iter()
            .map(|id| size.power_of(*id))
            .collect()
    }

    /// The logarithm of the known part at the nominal values.
    fn nominal(&self, size: &Monomial) -> BigRational {
        self.constant(size, false)
    }

    fn constant(&self, size: &Monomial, without_ranged: bool) -> BigRational {
        let mut sum = match &self.query.powers {
            Some(_) => BigRational::zero(),
            None => ranges::log_of(&size.number),
        };
        for (symbol, power) in size.powers() {
            let mut ranged = self.ranged.iter();
            if without_ranged && ranged.any(|ranged| ranged.symbol == *symbol) {
                continue;
            }
            if let Some((_, log)) = self.known.iter().find(|(known, _)| known == symbol) {
                sum += log * power.to_rational();
            }
        }
        sum
    }

    fn exponents(&self, size: &Monomial) -> Vec<Exponent> {
        let mut exponents = self.open_exponents(size);
        let ranged = self.ranged.iter();
        exponents.extend(ranged.map(|ranged| power_in(size, &ranged.symbol)));
        exponents
    }

    fn term(&self, size: &Monomial, process: usize) -> Term {
        Term {
            process,
            exponents: self.exponents(size),
            constant: self.constant(size, true),
        }
    }

    /// An equation of the system; its terms have these sizes.
    pub(super) fn equation(&self, entry: &Entry<'_>, formulas: &[Monomial]) -> Equation {
        let labels = self.processes(entry, formulas);
        let numbered = |label: &str| labels.iter().position(|(found, _)| found == label);
        Equation {
            terms: (entry.equation.terms.iter().zip(formulas))
                .map(|(term, size)| {
                    let place = numbered(term.label()).unwrap_or_default();
                    self.term(size, labels[place].1)
                })
                .collect(),
            required: (entry.required.iter())
                .map(|label| numbered(label).map_or(usize::MAX, |place| labels[place].1))
                .collect(),
        }
    }

    /// The processes of an equation with their numbers; tendency and advection of one
    /// `D_t` that count as equal get one number.
    fn processes(&self, entry: &Entry<'_>, formulas: &[Monomial]) -> Vec<(String, usize)> {
        let mut labels: Vec<(String, usize)> = Vec::new();
        for term in &entry.equation.terms {
            if labels.iter().all(|(label, _)| label != term.label()) {
                labels.push((term.label().to_owned(), labels.len()));
            }
        }
        let place = |wanted: &str| labels.iter().position(|(label, _)| label == wanted);
        if let (Some(tendency), Some(advection)) = (place("tendency"), place("advection"))
            && labels.len() > 2
            && is_one_derivative(entry, formulas)
        {
            labels[advection].1 = labels[tendency].1;
        }
        labels
    }

    /// The sizes of the terms, those of near ties replaced by their leader's.
    pub(super) fn merged(&self, entry: &Entry<'_>) -> Vec<Monomial> {
        let sizes = &entry.sizes;
        let mut order: Vec<(usize, BigRational)> = sizes
            .iter()
            .map(|size| self.nominal(size))
            .enumerate()
            .collect();
        // From the largest down; the first of equal ones first.
        order.sort_by(|a, b| b.1.cmp(&a.1));
        let mut formulas = sizes.clone();
        let mut taken = vec![false; sizes.len()];
        for (rank, (leader, top)) in order.iter().enumerate() {
            if taken[*leader] {
                continue;
            }
            let exponents = self.open_exponents(&sizes[*leader]);
            let set: Vec<usize> = (order[rank..].iter())
                .filter(|(idx, log)| {
                    !taken[*idx]
                        && self.open_exponents(&sizes[*idx]) == exponents
                        && self.counts_as_equal(&(top - log))
                })
                .map(|(idx, _)| *idx)
                .collect();
            let is_named = |idx: &&usize| {
                let label = entry.equation.terms[**idx].label();
                entry.required.iter().any(|wanted| wanted == label)
            };
            let chosen = set.iter().find(is_named).unwrap_or(leader);
            for idx in &set {
                taken[*idx] = true;
                formulas[*idx] = sizes[*chosen].clone();
            }
        }
        formulas
    }

    /// Within a factor of the root of 10; as powers of a small parameter, equal ones.
    fn counts_as_equal(&self, difference: &BigRational) -> bool {
        match self.query.powers {
            Some(_) => difference.is_zero(),
            None => {
                let difference = difference.to_f64().unwrap_or(f64::INFINITY);
                let limit = 10_f64.ln() / 2.0;
                difference <= limit || same(difference.exp(), limit.exp())
            }
        }
    }

    /// "Its size exceeds none of its largest parts": each part balances itself, so that
    /// any of them may be the largest; the size may not, unless it ties with one.
    pub(super) fn below_parts(&self, sized: &Sized) -> Option<(Equation, Vec<Monomial>)> {
        let size = &sized.size.resolved;
        let mut sizes: Vec<Monomial> = Vec::new();
        for part in sized.parts.iter().filter(|part| self.is_there(part)) {
            sizes.extend([part.clone(), part.clone()]);
        }
        if sizes.is_empty() {
            return None;
        }
        sizes.push(size.clone());
        let is_open = |part: &Monomial| self.open_exponents(part).iter().any(|e| !e.is_zero());
        if !sizes.iter().any(is_open) {
            return None;
        }
        let terms = sizes.iter().enumerate();
        let equation = Equation {
            terms: terms
                .map(|(process, part)| self.term(part, process))
                .collect(),
            required: Vec::new(),
        };
        Some((equation, sizes))
    }

    /// Whether no constant that is 0 takes a product out.
    fn is_there(&self, product: &Monomial) -> bool {
        let mut symbols = product.powers().iter();
        !product.number.is_zero() && !symbols.any(|(symbol, _)| self.query.setting.is_zero(symbol))
    }

    /// The bounds: those asked for, then two for each range.
    pub(super) fn within(&self, at_least_one: &[Monomial]) -> Vec<LinearForm> {
        let mut forms: Vec<LinearForm> = (at_least_one.iter())
            .map(|bound| LinearForm {
                exponents: self
                    .exponents(bound)
                    .iter()
                    .map(|e| e.to_rational())
                    .collect(),
                constant: self.constant(bound, true),
            })
            .collect();
        let n_open = self.query.unknowns.len();
        for (place, ranged) in self.ranged.iter().enumerate() {
            for (sign, end) in [(1, &ranged.low), (-1, &ranged.high)] {
                let sign = BigRational::from_integer(sign.into());
                let mut exponents = vec![BigRational::zero(); n_open + self.ranged.len()];
                exponents[n_open + place] = sign.clone();
                forms.push(LinearForm {
                    exponents,
                    constant: -sign * end,
                });
            }
        }
        forms
    }
}

/// Whether tendency and advection come out of one `D_t` and count as equal: a term of
/// each has one size in the system. Where `where` names one of them they stay apart.
fn is_one_derivative(entry: &Entry<'_>, formulas: &[Monomial]) -> bool {
    let is_named = |label: &String| label == "tendency" || label == "advection";
    if entry.required.iter().any(is_named) {
        return false;
    }
    let of = |wanted: &'static str| {
        let terms = entry.equation.terms.iter().enumerate();
        terms.filter(move |(_, term)| term.label() == wanted)
    };
    of("tendency").any(|(a, tendency)| {
        of("advection").any(|(b, advection)| {
            tendency.summand == advection.summand
                && entry.equation.summands[tendency.summand].is_material
                && formulas[a] == formulas[b]
        })
    })
}

/// All ratios that decide which terms are the largest, and the bounds.
fn pairs<'q>(query: &'q Query<'q>) -> Vec<Pair<'q>> {
    let mut pairs: Vec<Pair<'q>> = Vec::new();
    for entry in &query.entries {
        let first = entry.sizes.first();
        pairs.extend(entry.sizes.iter().map(|size| (size, first)));
        let mut sized: Vec<&Sized> = Vec::new();
        for term in &entry.equation.terms {
            sized_in(&term.product.factors, &mut sized);
        }
        for found in sized {
            let size = &found.size.resolved;
            pairs.extend(found.parts.iter().map(|part| (part, Some(size))));
        }
    }
    pairs.extend(query.at_least_one.iter().map(|bound| (bound, None)));
    pairs
}
