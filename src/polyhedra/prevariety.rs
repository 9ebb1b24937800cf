//! Dominant balances: all points of log-space where every equation has its largest size
//! attained by terms of at least two processes (the tropical prevariety of Maclagan &
//! Sturmfels, refined by processes), as a list of maximal cells, each once.
//!
//! A [`System`] comes in. `search` walks through its cells, `candidates` writes each one
//! down, `contradictions` says what is in the way where there is none. All is exact;
//! constants that come from floating-point logarithms are exact dyadic numbers here, and
//! whether two of them count as equal is decided before.

use std::ops::ControlFlow;

use num_rational::BigRational;

use super::candidates;
use super::contests::Prepared;
use super::contradictions;
use super::search::Search;
use crate::limits;
use crate::number::Exponent;

pub use super::candidates::{Candidate, Inequality, Source};
pub use super::linear::LinearForm;

/// The sizes of the terms of several equations, in logarithms.
#[derive(Debug, Clone, Default)]
pub struct System {
    /// How many scales are open.
    pub n_unknowns: usize,
    /// The equations; one that holds no unknown constrains nothing.
    pub equations: Vec<Equation>,
    /// Where the unknowns may lie: all these are at least 0.
    ///
    /// A known scale with a range may stand as one more unknown, after the open ones,
    /// within its bounds. A candidate that is tight nowhere, and whose dependent unknowns
    /// are open ones, then holds over a part of the ranges that has an inside, and its
    /// inequalities say which. (The corners of the box double with each such scale: up
    /// to eight are quick.)
    pub within: Vec<LinearForm>,
}

/// The terms of one equation.
#[derive(Debug, Clone, Default)]
pub struct Equation {
    /// In the order of the equation.
    pub terms: Vec<Term>,
    /// Processes that must be among the largest.
    pub required: Vec<usize>,
}

impl Equation {
    /// Whether any of its terms depends on an unknown.
    pub fn holds_unknown(&self) -> bool {
        let mut exponents = self.terms.iter().flat_map(|term| &term.exponents);
        exponents.any(|exponent| !exponent.is_zero())
    }
}

/// One term: its log-size is the sum of exponents times unknowns, plus the constant.
#[derive(Debug, Clone)]
pub struct Term {
    /// Terms of one number cannot balance one another; it counts within the equation.
    pub process: usize,
    /// One for each unknown.
    pub exponents: Vec<Exponent>,
    /// The logarithm of everything known.
    pub constant: BigRational,
}

/// The balances of a [`System`].
#[derive(Debug, Clone)]
pub struct Balances {
    /// Each maximal cell once, in order of dimension, then of the attaining terms. Where
    /// the search was ended early, those found until then.
    pub candidates: Vec<Candidate>,
    /// Whether these are all.
    pub ending: Ending,
}

/// How a search ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Ending {
    /// All was looked at.
    Complete,
    /// The watcher stopped it.
    Stopped,
    /// It met `limits::BALANCES`, `limits::CELLS` or `limits::CELL_RAYS`.
    TooLarge,
}

/// All balances of the system. `watch` is called at every step with the number of
/// candidates found so far, and may stop the search.
pub fn balances(system: &System, watch: &mut dyn FnMut(usize) -> ControlFlow<()>) -> Balances {
    let prepared = Prepared::new(system);
    let mut found = Vec::new();
    let mut search = Search::new(&prepared, watch);
    let ending = search.maximal_cells(&mut |cell, attaining| {
        if found.len() == limits::BALANCES {
            return ControlFlow::Break(Ending::TooLarge);
        }
        found.push((attaining, cell.clone()));
        ControlFlow::Continue(())
    });
    let mut candidates: Vec<Candidate> = (found.iter())
        .map(|(attaining, cell)| candidates::describe(system, &prepared, attaining, cell))
        .collect();
    candidates.sort_by(|a, b| (a.dimension, &a.attaining).cmp(&(b.dimension, &b.attaining)));
    Balances { candidates, ending }
}

/// A smallest set of equations that have no balance together, the first of its size in
/// their order; `None` if all have one together, or if the search was ended early.
pub fn contradiction(
    system: &System,
    watch: &mut dyn FnMut(usize) -> ControlFlow<()>,
) -> Option<Vec<usize>> {
    contradictions::smallest(system, watch)
}
