//! Equations as a system of the polyhedral core, with the conditions that stand beside
//! them written as equations too.

use num_rational::BigRational;

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::algebra::product::{Base, Factor, Sized};
use crate::analysis::balances::logs::Logs;
use crate::analysis::balances::powers::Powers;
use crate::analysis::balances::ranges::Ranged;
use crate::model::settings::Setting;
use crate::model::terms::EquationTerms;
use crate::number::Exponent;
use crate::polyhedra::prevariety::{Equation, System};

/// What is asked: which equations take part, and what is unknown in them.
pub(crate) struct Query<'c> {
    /// The setting.
    pub(crate) setting: &'c Setting,
    /// The unknowns.
    pub(crate) unknowns: Vec<SymbolId>,
    /// The equations, each of which holds an unknown.
    pub(crate) entries: Vec<Entry<'c>>,
    /// Products of unknowns and known scales that must be at least 1.
    pub(crate) at_least_one: Vec<Monomial>,
    /// How known scales compare: by their values, or as powers of a small parameter.
    pub(crate) powers: Option<Powers>,
    /// Whether ranges count, or the nominal values alone.
    pub(crate) with_ranges: bool,
}

/// An equation that takes part.
pub(crate) struct Entry<'c> {
    /// The equation.
    pub(crate) equation: &'c EquationTerms,
    /// The size of each term.
    pub(crate) sizes: Vec<Monomial>,
    /// Processes that must be among the largest.
    pub(crate) required: Vec<String>,
    /// If there are any, one of these terms must be among the largest.
    pub(crate) leaders: Vec<usize>,
}

/// Where an equation of the system comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Origin {
    /// One that takes part, by its place.
    Entry(usize),
    /// The condition that an expression with a size of its own exceeds none of its
    /// largest parts, in this term of this entry; its own size is the last term.
    Parts(usize, usize),
    /// The condition that one of some terms of an entry is among the largest.
    Leaders(usize),
}

impl Origin {
    /// The entry that it belongs to.
    pub(crate) fn entry(self) -> usize {
        match self {
            Origin::Entry(entry) | Origin::Parts(entry, _) | Origin::Leaders(entry) => entry,
        }
    }
}

/// A query made ready for the core.
pub(crate) struct Prepared {
    /// The system; its equations begin with the entries, in order.
    pub(crate) system: System,
    /// Where each of its equations comes from.
    pub(crate) origins: Vec<Origin>,
    /// For each of its equations the sizes that formulas use: near ties take that of their
    /// leader.
    pub(crate) formulas: Vec<Vec<Monomial>>,
    /// Known scales with a range, unknowns behind the open ones.
    pub(crate) ranged: Vec<Ranged>,
}

impl Prepared {
    /// Makes a query ready.
    pub(crate) fn new(query: &Query<'_>) -> Prepared {
        let logs = Logs::new(query);
        let mut prepared = Prepared {
            system: System {
                n_unknowns: query.unknowns.len() + logs.ranged.len(),
                equations: Vec::new(),
                within: Vec::new(),
            },
            origins: Vec::new(),
            formulas: Vec::new(),
            ranged: logs.ranged.clone(),
        };
        for (idx, entry) in query.entries.iter().enumerate() {
            let formulas = logs.merged(entry);
            let equation = logs.equation(entry, &formulas);
            prepared.put(Origin::Entry(idx), equation, formulas);
        }
        for (idx, entry) in query.entries.iter().enumerate() {
            prepared.conditions(idx, entry, &logs);
        }
        prepared.system.within = logs.within(&query.at_least_one);
        prepared
    }

    fn put(&mut self, origin: Origin, equation: Equation, formulas: Vec<Monomial>) {
        self.origins.push(origin);
        self.system.equations.push(equation);
        self.formulas.push(formulas);
    }

    /// Conditions that stand beside the equations, written as equations themselves.
    fn conditions(&mut self, idx: usize, entry: &Entry<'_>, logs: &Logs<'_>) {
        if !entry.leaders.is_empty() {
            let mut equation = logs.equation(entry, &entry.sizes);
            for (place, term) in equation.terms.iter_mut().enumerate() {
                let leads = entry.leaders.contains(&place);
                term.process = if leads { 0 } else { place + 1 };
            }
            equation.required = vec![0];
            self.put(Origin::Leaders(idx), equation, entry.sizes.clone());
        }
        for (place, term) in entry.equation.terms.iter().enumerate() {
            let mut sized: Vec<&Sized> = Vec::new();
            sized_in(&term.product.factors, &mut sized);
            for found in sized {
                if let Some((equation, sizes)) = logs.below_parts(found) {
                    self.put(Origin::Parts(idx, place), equation, sizes);
                }
            }
        }
    }

    /// The corners of the box of ranges.
    pub(crate) fn corners(&self) -> impl Iterator<Item = Vec<BigRational>> + '_ {
        (0..1_usize << self.ranged.len()).map(|corner| {
            let sides = self.ranged.iter().enumerate();
            sides
                .map(|(place, ranged)| match (corner >> place) & 1 {
                    0 => ranged.low.clone(),
                    _ => ranged.high.clone(),
                })
                .collect()
        })
    }
}

/// Expressions with a size of their own among some factors.
pub(super) fn sized_in<'a>(factors: &'a [Factor], found: &mut Vec<&'a Sized>) {
    for factor in factors {
        match &factor.base {
            Base::Sized(sized) => found.push(sized),
            Base::Derivative(derivative) => sized_in(&derivative.operand, found),
            Base::Absolute(inside) | Base::Mean(inside) => sized_in(inside, found),
            Base::Function(applied) => sized_in(&applied.argument.factors, found),
            Base::Symbol(_) | Base::Coordinate(_) | Base::Field(_) => {}
        }
    }
}

/// The power of a symbol; 0 if it does not occur.
pub(crate) fn power_in(monomial: &Monomial, symbol: &Symbol) -> Exponent {
    let found = monomial.powers().iter().find(|(found, _)| found == symbol);
    found.map_or(Exponent::ZERO, |(_, power)| *power)
}
