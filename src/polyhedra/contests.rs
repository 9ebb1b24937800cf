//! Equations as contests: their terms compete for being the largest.
//!
//! A system is prepared once: everything in whole numbers, so that `search` and
//! `cells` need no fractions. Here stand the questions about one equation: which terms
//! are the largest at a point, which never are in a cell, which of them would make a
//! balance, and in which parts of a cell they do.

use std::ops::ControlFlow;

use num_rational::BigRational;
use num_traits::One;

use super::cells::{Cell, Compare, Narrowed, dot};
use super::prevariety::{Ending, Equation, LinearForm, System, Term};
use super::whole::{self, Whole};

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
                .filter(|(_, equation)| equation.holds_unknown())
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
    pub(super) fn around(&self, attaining: &Attaining) -> Prepared {
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

    /// For each contest whether it has a balance at a point.
    pub(super) fn balanced_at(&self, point: &[Whole]) -> Vec<bool> {
        let balanced = |contest: &Contest| {
            let all: Vec<usize> = (0..contest.rows.len()).collect();
            !contest.ways(&contest.largest(&all, point)).is_empty()
        };
        self.contests.iter().map(balanced).collect()
    }

    /// Where the search starts: all that the bounds leave.
    pub(super) fn start(&self) -> ControlFlow<Ending, Option<Cell>> {
        let bounds = self
            .bounds
            .iter()
            .map(|row| (row.clone(), Compare::AtLeast));
        narrowed_by(&Cell::space(self.n_unknowns), bounds)
    }

    /// Whether no cell at all can have fewer attaining terms, whatever its place.
    pub(super) fn is_least(&self, attaining: &Attaining) -> bool {
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
    pub(super) fn ways(&self, terms: &[usize]) -> Vec<Vec<usize>> {
        let of = |process: usize| {
            let all = terms.iter().copied();
            all.filter(move |&term| self.processes[term] == process)
        };
        let with_other = |a: usize, others: &[usize]| -> Vec<Vec<usize>> {
            let apart = |b: &usize| self.processes[*b] != self.processes[a];
            others
                .iter()
                .copied()
                .filter(apart)
                .map(|b| vec![a, b])
                .collect()
        };
        match self.required[..] {
            [] => {
                let numbered = terms.iter().enumerate();
                numbered
                    .flat_map(|(index, &a)| with_other(a, &terms[index + 1..]))
                    .collect()
            }
            [process] => of(process).flat_map(|a| with_other(a, terms)).collect(),
            [..] => self
                .required
                .iter()
                .fold(vec![Vec::new()], |ways, &process| {
                    let longer = |way: &Vec<usize>| -> Vec<Vec<usize>> {
                        of(process)
                            .map(|term| [&way[..], &[term]].concat())
                            .collect()
                    };
                    ways.iter().flat_map(longer).collect()
                }),
        }
    }

    /// Those of the terms that are the largest at a point.
    pub(super) fn largest(&self, terms: &[usize], point: &[Whole]) -> Vec<usize> {
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
    pub(super) fn strike_out(&self, cell: &Cell, terms: &mut Vec<usize>) {
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
    pub(super) fn parts(
        &self,
        cell: &Cell,
        terms: &[usize],
        ways: &[Vec<usize>],
    ) -> ControlFlow<Ending, Vec<Cell>> {
        let mut parts: Vec<(Vec<usize>, Cell)> = Vec::new();
        for way in ways {
            let Some(part) = self.part(cell, terms, way)? else {
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
        ControlFlow::Continue(parts.into_iter().map(|(_, part)| part).collect())
    }

    /// Where the terms of `way` are equal and none of `terms` is larger.
    fn part(
        &self,
        cell: &Cell,
        terms: &[usize],
        way: &[usize],
    ) -> ControlFlow<Ending, Option<Cell>> {
        let first = &self.rows[way[0]];
        let others = terms.iter().filter(|term| !way.contains(term));
        let conditions = (way[1..].iter().map(|term| (term, Compare::Equal)))
            .chain(others.map(|term| (term, Compare::AtLeast)));
        let rows = conditions.map(|(&term, compare)| {
            let pairs = first.iter().zip(&self.rows[term]);
            (pairs.map(|(a, b)| a.minus(b)).collect(), compare)
        });
        narrowed_by(cell, rows)
    }
}

/// The part of a cell where all conditions hold, if there is one.
fn narrowed_by(
    cell: &Cell,
    conditions: impl Iterator<Item = (Vec<Whole>, Compare)>,
) -> ControlFlow<Ending, Option<Cell>> {
    let mut part: Option<Cell> = None;
    for (row, compare) in conditions {
        match part.as_ref().unwrap_or(cell).narrowed(&row, compare) {
            Narrowed::Same => {}
            Narrowed::Empty => return ControlFlow::Continue(None),
            Narrowed::Part(narrower) => part = Some(narrower),
            Narrowed::TooLarge => return ControlFlow::Break(Ending::TooLarge),
        }
    }
    ControlFlow::Continue(Some(part.unwrap_or_else(|| cell.clone())))
}
