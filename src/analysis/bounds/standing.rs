//! A system reduced at the nominal values, and everything that can end it.
//!
//! Each way to end is a [`Threat`]: one size that must not exceed a multiple of *all* of
//! some others. In the logarithms that is a set of straight lines which must all lie
//! above 0, so that along one scale the values at which the threat comes true form an
//! interval, and its ends are crossings, solved and not sampled.

use crate::algebra::monomial::{Monomial, SymbolId};
use crate::algebra::product::{Base, Factor, Sized};
use crate::analysis::Case;
use crate::analysis::rank;
use crate::analysis::sizes::{self, SAME, Space};
use crate::model::terms::EquationTerms;
use crate::number::Exponent;

/// What happens where a reduced system ends, or changes.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Why {
    /// A dropped term rises above the tolerance.
    Rises,
    /// A kept term falls to the tolerance.
    Falls,
    /// An expression with a size of its own would exceed its largest part.
    ExceedsParts,
    /// A term grows beyond the processes whose balance gave an open scale its formula.
    Joins,
}

/// An equation reduced at the nominal values.
pub struct Reduced<'c> {
    /// The equation.
    pub equation: &'c EquationTerms,
    /// Whether each term is kept.
    pub kept: Vec<bool>,
    /// Logarithms of the nominal sizes.
    logs: Vec<f64>,
}

impl<'c> Reduced<'c> {
    /// Reduces an equation; `None` while a scale of it is open or no term is left.
    pub fn of(case: &Case, equation: &'c EquationTerms, tolerance: f64) -> Option<Reduced<'c>> {
        if !case.open_in(equation).is_empty() {
            return None;
        }
        let logs: Vec<f64> = equation
            .terms
            .iter()
            .map(|term| log(case, &term.size.resolved))
            .collect();
        let largest = logs.iter().copied().reduce(f64::max)?;
        let kept = logs
            .iter()
            .map(|log| !sizes::at_most((log - largest).exp(), tolerance))
            .collect();
        Some(Reduced {
            equation,
            kept,
            logs,
        })
    }

    /// The places of the kept terms.
    pub fn stays(&self) -> Vec<usize> {
        (0..self.kept.len()).filter(|idx| self.kept[*idx]).collect()
    }

    /// The places of the dropped terms.
    pub fn goes(&self) -> Vec<usize> {
        (0..self.kept.len())
            .filter(|idx| !self.kept[*idx])
            .collect()
    }

    /// The processes with a kept term, with the places of their kept terms.
    pub fn kept_processes(&self) -> Vec<Vec<usize>> {
        rank::members(self.equation)
            .into_iter()
            .map(|(_, mut members)| {
                members.retain(|idx| self.kept[*idx]);
                members
            })
            .filter(|members| !members.is_empty())
            .collect()
    }

    /// The largest of some terms, the first of equal ones.
    pub fn largest_of(&self, places: &[usize]) -> Option<usize> {
        places.iter().copied().reduce(|best, idx| {
            if self.logs[idx] > self.logs[best] + SAME {
                idx
            } else {
                best
            }
        })
    }

    fn form(&self, idx: usize) -> Form<'c> {
        Form {
            monomial: &self.equation.terms[idx].size.resolved,
            log: self.logs[idx],
            term: idx,
        }
    }
}

fn log(case: &Case, monomial: &Monomial) -> f64 {
    Space::default().affine(&case.setting, monomial).constant
}

/// A size with its nominal logarithm.
#[derive(Debug, Clone, Copy)]
pub struct Form<'c> {
    /// The size.
    pub monomial: &'c Monomial,
    /// The logarithm of its nominal value.
    pub log: f64,
    /// The term it is the size of, or belongs to.
    pub term: usize,
}

/// One way to end: true where `upper` exceeds `limit` times every one of `lowers`.
#[derive(Debug, Clone)]
pub struct Threat<'c> {
    /// Its equation, by its place among the reduced ones.
    pub equation: usize,
    /// What happens.
    pub why: Why,
    /// What must not be so large.
    pub upper: Form<'c>,
    /// Against any of these.
    pub lowers: Vec<Form<'c>>,
    /// Times this.
    pub limit: f64,
    /// Whether it is true already at the limit.
    pub is_closed: bool,
}

impl<'c> Threat<'c> {
    /// The values of one symbol at which it is true, as logarithms of the factor to the
    /// nominal value: an interval, empty or not.
    pub fn true_along(&self, id: SymbolId) -> Option<(f64, f64)> {
        let (mut low, mut high) = (f64::NEG_INFINITY, f64::INFINITY);
        for lower in &self.lowers {
            let slope = slope(self.upper.monomial, lower.monomial, id);
            let constant = self.excess(lower);
            if slope == 0.0 {
                let is_true = constant > 0.0 || (self.is_closed && constant == 0.0);
                if !is_true {
                    return None;
                }
                continue;
            }
            // Without the sum a crossing at the nominal value could be -0.
            let crossing = -constant / slope + 0.0;
            if slope > 0.0 {
                low = low.max(crossing);
            } else {
                high = high.min(crossing);
            }
        }
        let is_some = low < high || (self.is_closed && low <= high + SAME);
        is_some.then_some((low, high))
    }

    /// Whether it is true at the nominal values.
    fn is_true(&self) -> bool {
        self.lowers.iter().all(|lower| self.excess(lower) > 0.0)
    }

    /// The logarithm of `upper` over `limit` times a lower one, at the nominal values.
    fn excess(&self, lower: &Form<'c>) -> f64 {
        let excess = self.upper.log - lower.log - self.limit.ln();
        if excess.abs() <= SAME { 0.0 } else { excess }
    }

    /// The term that it is about where it comes true: for a fall the largest of the lower
    /// ones there, which falls last.
    pub fn term_at(&self, id: SymbolId, moved: f64) -> usize {
        match self.why {
            Why::Rises | Why::ExceedsParts | Why::Joins => self.upper.term,
            Why::Falls => {
                let at = |form: &Form<'_>| form.log + form.monomial.power_of(id).to_f64() * moved;
                let lowers = self.lowers.iter();
                lowers
                    .reduce(|best, form| {
                        if at(form) > at(best) + SAME {
                            form
                        } else {
                            best
                        }
                    })
                    .map_or(self.upper.term, |form| form.term)
            }
        }
    }

    /// The lower one that is the largest at the nominal values: the condition in words is
    /// against this one.
    pub fn largest_lower(&self) -> Option<&Form<'c>> {
        self.lowers.iter().reduce(|best, form| {
            if form.log > best.log + SAME {
                form
            } else {
                best
            }
        })
    }
}

/// The slope of a ratio along one symbol; exactly 0 where it does not depend on it.
fn slope(upper: &Monomial, lower: &Monomial, id: SymbolId) -> f64 {
    let (a, b): (Exponent, Exponent) = (upper.power_of(id), lower.power_of(id));
    if a == b { 0.0 } else { a.to_f64() - b.to_f64() }
}

/// What ends a reduced system: first in order of the equations.
pub fn endings<'c>(case: &Case, systems: &'c [Reduced<'c>], tolerance: f64) -> Vec<Threat<'c>> {
    let mut threats = Vec::new();
    for (equation, reduced) in systems.iter().enumerate() {
        rises(equation, reduced, tolerance, &mut threats);
        left_alone(equation, reduced, tolerance, &mut threats);
        exceeds_parts(case, equation, reduced, &mut threats);
    }
    threats
}

/// A dropped term above the tolerance times every kept one.
fn rises<'c>(
    equation: usize,
    reduced: &'c Reduced<'c>,
    tolerance: f64,
    threats: &mut Vec<Threat<'c>>,
) {
    let kept: Vec<Form<'c>> = reduced
        .stays()
        .iter()
        .map(|idx| reduced.form(*idx))
        .collect();
    threats.extend(reduced.goes().iter().map(|idx| Threat {
        equation,
        why: Why::Rises,
        upper: reduced.form(*idx),
        lowers: kept.clone(),
        limit: tolerance,
        is_closed: false,
    }));
}

/// One process so large that all others, of at least two, fall to the tolerance.
fn left_alone<'c>(
    equation: usize,
    reduced: &'c Reduced<'c>,
    tolerance: f64,
    threats: &mut Vec<Threat<'c>>,
) {
    let processes = reduced.kept_processes();
    if processes.len() < 2 {
        return;
    }
    for members in &processes {
        let others = reduced.stays().into_iter();
        let lowers: Vec<Form<'c>> = others
            .filter(|idx| !members.contains(idx))
            .map(|idx| reduced.form(idx))
            .collect();
        threats.extend(members.iter().map(|idx| Threat {
            equation,
            why: Why::Falls,
            upper: reduced.form(*idx),
            lowers: lowers.clone(),
            limit: 1.0 / tolerance,
            is_closed: true,
        }));
    }
}

/// An expression with a size of its own above each of its parts.
fn exceeds_parts<'c>(
    case: &Case,
    equation: usize,
    reduced: &'c Reduced<'c>,
    threats: &mut Vec<Threat<'c>>,
) {
    for (term, found) in reduced.equation.terms.iter().enumerate() {
        let mut sized = Vec::new();
        sized_in(&found.product.factors, &mut sized);
        for sized in sized.into_iter().filter(|sized| !sized.parts.is_empty()) {
            let form = |monomial: &'c Monomial| Form {
                monomial,
                log: log(case, monomial),
                term,
            };
            threats.push(Threat {
                equation,
                why: Why::ExceedsParts,
                upper: form(&sized.size.resolved),
                lowers: sized.parts.iter().map(form).collect(),
                limit: 1.0,
                is_closed: false,
            });
        }
    }
}

fn sized_in<'c>(factors: &'c [Factor], found: &mut Vec<&'c Sized>) {
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

/// What changes a reduced system besides: a kept term falls to the tolerance of another.
pub fn changes<'c>(systems: &'c [Reduced<'c>], tolerance: f64) -> Vec<Threat<'c>> {
    let mut threats = Vec::new();
    for (equation, reduced) in systems.iter().enumerate() {
        let stays = reduced.stays();
        for falling in &stays {
            let others = stays.iter().filter(|idx| *idx != falling);
            threats.extend(others.map(|idx| Threat {
                equation,
                why: Why::Falls,
                upper: reduced.form(*idx),
                lowers: vec![reduced.form(*falling)],
                limit: 1.0 / tolerance,
                is_closed: true,
            }));
        }
    }
    threats
}

/// What ends the balances that gave open scales their formulas: a term of another process
/// above every term of theirs.
pub fn joins<'c>(
    systems: &'c [Reduced<'c>],
    balances: &[(String, Vec<String>)],
) -> Vec<Threat<'c>> {
    let mut threats = Vec::new();
    for (equation, reduced) in systems.iter().enumerate() {
        let mut balances = balances.iter();
        let Some((_, processes)) = balances.find(|(name, _)| *name == reduced.equation.name) else {
            continue;
        };
        let terms = 0..reduced.kept.len();
        let label = |idx: usize| reduced.equation.terms[idx].label();
        let (balanced, others): (Vec<usize>, Vec<usize>) =
            terms.partition(|idx| processes.iter().any(|process| process == label(*idx)));
        let lowers: Vec<Form<'c>> = balanced.iter().map(|idx| reduced.form(*idx)).collect();
        threats.extend(others.iter().map(|idx| Threat {
            equation,
            why: Why::Joins,
            upper: reduced.form(*idx),
            lowers: lowers.clone(),
            limit: 1.0,
            is_closed: false,
        }));
    }
    // Beyond already at the nominal values: the answer to `find` says so.
    threats.retain(|threat| !threat.is_true());
    threats
}
