//! The search for the cells of a prevariety.
//!
//! It starts from one cell, the whole space. At each step it strikes out the terms that
//! are smaller than another all over the cell, gives up if an equation is left with one
//! process, and else takes the equation with the fewest ways to balance and goes into
//! the part of the cell that belongs to each way. What is left when all equations are
//! taken in is a consistent cell; it is reported if no larger one has it on its border.

use std::collections::BTreeSet;
use std::ops::ControlFlow;

use super::cells::{Cell, dot};
use super::contests::{Attaining, Prepared};
use super::prevariety::Ending;
use crate::limits;

/// A walk through the consistent cells of a prepared system.
pub(super) struct Search<'a> {
    prepared: &'a Prepared,
    watch: &'a mut dyn FnMut(usize) -> ControlFlow<()>,
    /// Every cell met, by its attaining terms; equations not yet taken in have none.
    seen: BTreeSet<Attaining>,
    n_found: usize,
}

/// What is done with a consistent cell.
type Visit<'v> = dyn FnMut(&mut Search, &Cell, Attaining) -> ControlFlow<Ending> + 'v;

/// A cell on the way, and for each contest the terms that may still be the largest.
struct Node {
    cell: Cell,
    terms: Vec<Vec<usize>>,
    /// The contests that are not taken in yet.
    open: Vec<usize>,
}

impl<'a> Search<'a> {
    pub(super) fn new(
        prepared: &'a Prepared,
        watch: &'a mut dyn FnMut(usize) -> ControlFlow<()>,
    ) -> Search<'a> {
        Search {
            prepared,
            watch,
            seen: BTreeSet::new(),
            n_found: 0,
        }
    }

    /// Calls `visit` for every maximal cell, once.
    pub(super) fn maximal_cells(
        &mut self,
        visit: &mut dyn FnMut(&Cell, Attaining) -> ControlFlow<Ending>,
    ) -> Ending {
        self.consistent_cells(&mut |search, cell, attaining| {
            if !search.is_maximal(&attaining)? {
                return ControlFlow::Continue(());
            }
            search.n_found += 1;
            visit(cell, attaining)
        })
    }

    /// Calls `visit` for consistent cells, each once, every maximal one among them.
    pub(super) fn consistent_cells(&mut self, visit: &mut Visit) -> Ending {
        let cell = match self.prepared.start() {
            ControlFlow::Continue(Some(cell)) => cell,
            ControlFlow::Continue(None) => return Ending::Complete,
            ControlFlow::Break(ending) => return ending,
        };
        let contests = &self.prepared.contests;
        let all_terms = contests
            .iter()
            .map(|contest| (0..contest.rows.len()).collect());
        let node = Node {
            cell,
            terms: all_terms.collect(),
            open: (0..contests.len()).collect(),
        };
        match self.explore(node, visit) {
            ControlFlow::Continue(()) => Ending::Complete,
            ControlFlow::Break(ending) => ending,
        }
    }

    /// Looks at a node and all below it.
    fn explore(&mut self, mut node: Node, visit: &mut Visit) -> ControlFlow<Ending> {
        if (self.watch)(self.n_found).is_break() {
            return ControlFlow::Break(Ending::Stopped);
        }
        if self.seen.len() > limits::CELLS {
            return ControlFlow::Break(Ending::TooLarge);
        }
        let attaining = self.prepared.attaining(&node);
        if !self.seen.insert(attaining.clone()) {
            return ControlFlow::Continue(());
        }
        let Some((index, ways)) = self.strike_out(&mut node) else {
            return visit(self, &node.cell, attaining);
        };
        node.open.retain(|&other| other != index);
        let contest = &self.prepared.contests[index];
        for cell in contest.parts(&node.cell, &node.terms[index], &ways)? {
            let child = Node {
                cell,
                terms: node.terms.clone(),
                open: node.open.clone(),
            };
            self.explore(child, visit)?;
        }
        ControlFlow::Continue(())
    }

    /// Strikes out terms in all open contests; gives the one with the fewest ways to
    /// balance (none, perhaps), and these.
    fn strike_out(&self, node: &mut Node) -> Option<(usize, Vec<Vec<usize>>)> {
        let mut choice: Option<(usize, Vec<Vec<usize>>)> = None;
        for &index in &node.open {
            let contest = &self.prepared.contests[index];
            contest.strike_out(&node.cell, &mut node.terms[index]);
            let ways = contest.ways(&node.terms[index]);
            if (choice.as_ref()).is_none_or(|(_, fewest)| ways.len() < fewest.len()) {
                choice = Some((index, ways));
            }
        }
        choice
    }

    /// Whether no consistent cell has this one on its border. Such a cell would show
    /// near every point of this one: as one with fewer attaining terms in the system of
    /// these terms alone.
    fn is_maximal(&mut self, attaining: &Attaining) -> ControlFlow<Ending, bool> {
        if self.prepared.is_least(attaining) {
            return ControlFlow::Continue(true);
        }
        let around = self.prepared.around(attaining);
        let all: Attaining = attaining
            .iter()
            .map(|terms| (0..terms.len()).collect())
            .collect();
        let n_found = self.n_found;
        let watch = &mut *self.watch;
        let mut found_larger = false;
        let ending =
            Search::new(&around, &mut |_| watch(n_found)).consistent_cells(&mut |_, _, near| {
                found_larger = near != all;
                match found_larger {
                    true => ControlFlow::Break(Ending::Complete),
                    false => ControlFlow::Continue(()),
                }
            });
        match ending {
            Ending::Complete => ControlFlow::Continue(!found_larger),
            Ending::Stopped | Ending::TooLarge => ControlFlow::Break(ending),
        }
    }
}

impl Prepared {
    /// The attaining terms all over the relative interior of a cell.
    fn attaining(&self, node: &Node) -> Attaining {
        let point = node.cell.inner_point();
        let largest = |index: usize| match node.open.contains(&index) {
            true => Vec::new(),
            false => self.contests[index].largest(&node.terms[index], &point),
        };
        let mut attaining: Attaining = (0..self.contests.len()).map(largest).collect();
        let tight = |&bound: &usize| dot(&self.bounds[bound], &point).is_zero();
        attaining.push((0..self.bounds.len()).filter(tight).collect());
        attaining
    }
}
