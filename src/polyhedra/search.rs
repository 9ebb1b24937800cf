//! The search for the cells of a prevariety.
//!
//! It starts from one cell, the whole space. At each step it strikes out the terms that
//! are smaller than another all over the cell, gives up if an equation is left with one
//! process, and else takes the equation with the fewest ways to balance and goes into
//! the part of the cell that belongs to each way. What is left when all equations are
//! taken in is a consistent cell; it is reported if no larger one has it on its border.

use std::collections::BTreeSet;
use std::ops::ControlFlow;

use num_rational::BigRational;
use num_traits::One;

use super::cells::{Cell, Compare, Narrowed, dot};
use super::prevariety::{Ending, Equation, LinearForm, System, Term};
use super::whole::{self, Whole};
use crate::limits;

/// The attaining terms, one list for each contest, then the tight bounds.
pub(super) type Attaining = Vec<Vec<usize>>;

/// A system in whole numbers.
pub(super) struct Prepared {
    /// The equations that hold an unknown.
    pub(super) contests: Vec<Contest>,
    /// Where the cells may lie; all these rows are at least 0.
    pub(super) bounds: Vec<Vec<Whole>>,
    /// Coordinates are the unknowns times this number, which makes all constants whole
    /// and leaves the exponents small.
    pub(super) scale: Whole,
    n_unknowns: usize,
}

/// An equation: its terms compete for being the largest.
#[derive(Clone)]
pub(super) struct Contest {
    /// Its place in the system.
    pub(super) equation: usize,
    /// The size of each term as a linear form of homogeneous coordinates, all times one
    /// positive number.
    pub(super) rows: Vec<Vec<Whole>>,
    processes: Vec<usize>,
    required: Vec<usize>,
}

impl Prepared {
    pub(super) fn new(system: &System) -> Prepared {
        let terms = || system.equations.iter().flat_map(|equation| &equation.terms);
        let constants = (terms().map(|term| &term.constant))
            .chain(system.within.iter().map(|form| &form.constant));
        let scale = constants.fold(Whole::ONE, |lcm, c| {
            lcm.lcm(&Whole::from_big(c.denom().clone()))
        });
        let numbered = system.equations.iter().enumerate();
        Prepared {
            contests: numbered
                .filter(|(_, equation)| holds_unknown(equation))
                .map(|(index, equation)| Contest::new(index, equation, &scale))
                .collect(),
            bounds: system
                .within
                .iter()
                .map(|form| bound_row(form, &scale))
                .collect(),
            scale,
            n_unknowns: system.n_unknowns,
        }
    }

    /// The system of the attaining terms alone, seen from a point where they attain:
    /// a cone for each cell that touches the point.
    fn around(&self, attaining: &Attaining) -> Prepared {
        let at_origin = |row: &Vec<Whole>| [&[Whole::ZERO], &row[1..]].concat();
        let contests = self.contests.iter().zip(attaining);
        let tight = attaining.last().into_iter().flatten();
        Prepared {
            contests: contests
                .map(|(contest, terms)| Contest {
                    equation: contest.equation,
                    rows: terms
                        .iter()
                        .map(|&term| at_origin(&contest.rows[term]))
                        .collect(),
                    processes: terms.iter().map(|&term| contest.processes[term]).collect(),
                    required: contest.required.clone(),
                })
                .collect(),
            bounds: tight.map(|&bound| at_origin(&self.bounds[bound])).collect(),
            scale: Whole::ONE,
            n_unknowns: self.n_unknowns,
        }
    }

    /// The system of some of the contests.
    pub(super) fn only(&self, contests: &[usize]) -> Prepared {
        Prepared {
            contests: contests
                .iter()
                .map(|&contest| self.contests[contest].clone())
                .collect(),
            bounds: self.bounds.clone(),
            scale: self.scale.clone(),
            n_unknowns: self.n_unknowns,
        }
    }

    /// The contests that have a balance at a point.
    pub(super) fn balanced_at(&self, point: &[Whole]) -> Vec<usize> {
        let balanced = |&index: &usize| {
            let contest = &self.contests[index];
            let all: Vec<usize> = (0..contest.rows.len()).collect();
            !contest.ways(&contest.largest(&all, point)).is_empty()
        };
        (0..self.contests.len()).filter(balanced).collect()
    }

    /// Where the search starts: all that the bounds leave.
    fn start(&self) -> Option<Cell> {
        let mut cell = Cell::space(self.n_unknowns);
        for row in &self.bounds {
            match cell.narrowed(row, Compare::AtLeast) {
                Narrowed::Same => {}
                Narrowed::Empty => return None,
                Narrowed::Part(part) => cell = part,
            }
        }
        Some(cell)
    }

    /// Whether no cell at all can have fewer attaining terms, whatever its place.
    fn is_least(&self, attaining: &Attaining) -> bool {
        let tight = attaining.last().is_some_and(|tight| !tight.is_empty());
        let least = |(contest, terms): (&Contest, &Vec<usize>)| {
            contest
                .ways(terms)
                .iter()
                .all(|way| way.len() == terms.len())
        };
        !tight && self.contests.iter().zip(attaining).all(least)
    }
}

fn holds_unknown(equation: &Equation) -> bool {
    let holds = |term: &Term| term.exponents.iter().any(|exponent| !exponent.is_zero());
    equation.terms.iter().any(holds)
}

fn bound_row(form: &LinearForm, scale: &Whole) -> Vec<Whole> {
    let mut row = vec![&form.constant * BigRational::from_integer(scale.to_big())];
    row.extend(form.exponents.iter().cloned());
    whole::whole_row(&row)
}

impl Contest {
    fn new(index: usize, equation: &Equation, scale: &Whole) -> Contest {
        let exponents = || equation.terms.iter().flat_map(|term| &term.exponents);
        let factor = exponents().fold(Whole::ONE, |lcm, e| lcm.lcm(&Whole::from(e.denom())));
        let row = |term: &Term| {
            let constant = &term.constant * BigRational::from_integer(scale.to_big());
            debug_assert!(constant.denom().is_one());
            let mut row = vec![Whole::from_big(constant.to_integer()).times(&factor)];
            row.extend(term.exponents.iter().map(|exponent| {
                let times = factor.over(&Whole::from(exponent.denom()));
                Whole::from(exponent.numer()).times(&times)
            }));
            row
        };
        let mut required = equation.required.clone();
        required.sort_unstable();
        required.dedup();
        Contest {
            equation: index,
            rows: equation.terms.iter().map(row).collect(),
            processes: equation.terms.iter().map(|term| term.process).collect(),
            required,
        }
    }

    /// The smallest sets of these terms that are a balance when they are the largest:
    /// two terms of different processes, or one of each required process.
    fn ways(&self, terms: &[usize]) -> Vec<Vec<usize>> {
        let apart = |a: usize, b: usize| self.processes[a] != self.processes[b];
        let of = |process: usize| {
            terms
                .iter()
                .copied()
                .filter(move |&t| self.processes[t] == process)
        };
        match self.required[..] {
            [] => {
                let pairs = terms
                    .iter()
                    .flat_map(|&a| terms.iter().map(move |&b| (a, b)));
                pairs
                    .filter(|&(a, b)| a < b && apart(a, b))
                    .map(|(a, b)| vec![a, b])
                    .collect()
            }
            [process] => {
                let pairs = of(process).flat_map(|a| terms.iter().map(move |&b| (a, b)));
                pairs
                    .filter(|&(a, b)| apart(a, b))
                    .map(|(a, b)| vec![a, b])
                    .collect()
            }
            [..] => self
                .required
                .iter()
                .fold(vec![Vec::new()], |ways, &process| {
                    let longer = |way: &Vec<usize>| {
                        let way = way.clone();
                        of(process).map(move |term| [&way[..], &[term]].concat())
                    };
                    ways.iter().flat_map(longer).collect()
                }),
        }
    }
}

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
        let Some(cell) = self.prepared.start() else {
            return Ending::Complete;
        };
        let contests = &self.prepared.contests;
        let node = Node {
            cell,
            terms: contests
                .iter()
                .map(|contest| (0..contest.rows.len()).collect())
                .collect(),
            open: (0..contests.len()).collect(),
        };
        match self.explore(node, visit) {
            ControlFlow::Continue(()) => Ending::Complete,
            ControlFlow::Break(ending) => ending,
        }
    }

    fn explore(&mut self, mut node: Node, visit: &mut Visit) -> ControlFlow<Ending> {
        if (self.watch)(self.n_found).is_break() {
            return ControlFlow::Break(Ending::Stopped);
        }
        if self.seen.len() > limits::CELLS || node.cell.rays.len() > limits::CELL_RAYS {
            return ControlFlow::Break(Ending::TooLarge);
        }
        let prepared = self.prepared;
        let attaining = prepared.attaining(&node);
        if !self.seen.insert(attaining.clone()) {
            return ControlFlow::Continue(());
        }
        let mut fewest: Option<(usize, Vec<Vec<usize>>)> = None;
        for &index in &node.open {
            let contest = &prepared.contests[index];
            contest.strike_out(&node.cell, &mut node.terms[index]);
            let ways = contest.ways(&node.terms[index]);
            if fewest
                .as_ref()
                .is_none_or(|(_, fewest)| ways.len() < fewest.len())
            {
                fewest = Some((index, ways));
            }
        }
        let Some((index, ways)) = fewest else {
            return visit(self, &node.cell, attaining);
        };
        node.open.retain(|&other| other != index);
        for cell in prepared.contests[index].parts(&node.cell, &node.terms[index], &ways) {
            let child = Node {
                cell,
                terms: node.terms.clone(),
                open: node.open.clone(),
            };
            self.explore(child, visit)?;
        }
        ControlFlow::Continue(())
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
        let numbered = self.contests.iter().zip(&node.terms).enumerate();
        let mut attaining: Attaining = numbered
            .map(
                |(index, (contest, terms))| match node.open.contains(&index) {
                    true => Vec::new(),
                    false => contest.largest(terms, &point),
                },
            )
            .collect();
        let tight = |&bound: &usize| dot(&self.bounds[bound], &point).is_zero();
        attaining.push((0..self.bounds.len()).filter(tight).collect());
        attaining
    }
}

impl Contest {
    /// Those of the terms that are the largest at a point.
    fn largest(&self, terms: &[usize], point: &[Whole]) -> Vec<usize> {
        let sizes: Vec<Whole> = terms
            .iter()
            .map(|&term| dot(&self.rows[term], point))
            .collect();
        let largest = sizes.iter().max();
        let attains = |(_, size): &(&usize, &Whole)| Some(*size) == largest;
        terms
            .iter()
            .zip(&sizes)
            .filter(attains)
            .map(|(&term, _)| term)
            .collect()
    }

    /// Takes out the terms that are smaller than another one all over the cell.
    fn strike_out(&self, cell: &Cell, terms: &mut Vec<usize>) {
        let sizes: Vec<Vec<Whole>> = (terms.iter())
            .map(|&term| {
                let row = &self.rows[term];
                let lines = cell.lines.iter().map(|line| dot(row, line));
                lines
                    .chain(cell.rays.iter().map(|ray| dot(row, &ray.at)))
                    .collect()
            })
            .collect();
        let n_lines = cell.lines.len();
        let below = |small: &[Whole], large: &[Whole]| {
            small[..n_lines] == large[..n_lines]
                && (cell
                    .rays
                    .iter()
                    .zip(small[n_lines..].iter().zip(&large[n_lines..])))
                .all(|(ray, (small, large))| small < large || !ray.is_corner() && small == large)
        };
        let mut index = 0;
        terms.retain(|_| {
            let small = &sizes[index];
            index += 1;
            !sizes.iter().any(|large| below(small, large))
        });
    }

    /// The part of the cell for each way to balance, the ones within others left out.
    fn parts(&self, cell: &Cell, terms: &[usize], ways: &[Vec<usize>]) -> Vec<Cell> {
        let mut parts: Vec<(Vec<usize>, Cell)> = Vec::new();
        for way in ways {
            let Some(part) = self.part(cell, terms, way) else {
                continue;
            };
            let attaining = self.largest(terms, &part.inner_point());
            let within =
                |(other, _): &(Vec<usize>, Cell)| other.iter().all(|t| attaining.contains(t));
            if parts.iter().any(within) {
                continue;
            }
            parts.retain(|(other, _)| !attaining.iter().all(|t| other.contains(t)));
            parts.push((attaining, part));
        }
        parts.into_iter().map(|(_, part)| part).collect()
    }

    /// Where the terms of `way` are equal and none of `terms` is larger.
    fn part(&self, cell: &Cell, terms: &[usize], way: &[usize]) -> Option<Cell> {
        let (&first, equals) = way.split_first()?;
        let others = terms.iter().filter(|term| !way.contains(term));
        let conditions = (equals.iter().map(|term| (term, Compare::Equal)))
            .chain(others.map(|term| (term, Compare::AtLeast)));
        let mut part: Option<Cell> = None;
        for (&term, compare) in conditions {
            let row: Vec<Whole> = (self.rows[first].iter().zip(&self.rows[term]))
                .map(|(a, b)| a.minus(b))
                .collect();
            match part.as_ref().unwrap_or(cell).narrowed(&row, compare) {
                Narrowed::Same => {}
                Narrowed::Empty => return None,
                Narrowed::Part(narrower) => part = Some(narrower),
            }
        }
        Some(part.unwrap_or_else(|| cell.clone()))
    }
}
