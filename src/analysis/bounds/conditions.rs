//! The conditions under which a reduced system stands, as inequalities between named
//! groups, and whether it stands on the whole box of ranges.

use num_rational::BigRational;
use num_traits::{One, Zero};

use crate::algebra::monomial::Monomial;
use crate::analysis::Case;
use crate::analysis::bounds::Place;
use crate::analysis::bounds::standing::{Reduced, Threat, Why};
use crate::analysis::names::Namer;
use crate::analysis::reduce::{self, Inequality, Kept};
use crate::analysis::sizes::{SAME, Space, Verdict, at_most};
use crate::number::rational_to_f64;
use crate::polyhedra::{self, Affine, Outcome, Program, Relation};

/// An inequality on which a term's place rests.
#[derive(Debug, Clone)]
pub struct Condition {
    /// The term it is about.
    pub place: Place,
    /// What it decides.
    pub role: Role,
    /// A ratio of two sizes against its limit.
    pub inequality: Inequality,
    /// Whether it holds at the nominal values.
    pub holds: bool,
}

/// What a condition decides.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Role {
    /// While it holds, a dropped term stays out.
    StaysOut,
    /// While it holds, a kept process stays in.
    StaysIn,
    /// Where it holds, a kept term that depends on the ranges may go.
    MayGo,
    /// While it holds, a size given to an expression does not exceed its parts.
    WithinParts,
}

/// The conditions of all equations: of each dropped term, of each kept one that depends on
/// the ranges, and, where just two processes are kept, of each against the other.
pub fn all(
    case: &Case,
    systems: &[Reduced<'_>],
    tolerance: f64,
    namer: &Namer<'_>,
) -> Vec<Condition> {
    let mut found = Vec::new();
    for reduced in systems {
        let mut maker = Maker {
            case,
            reduced,
            namer,
            found: &mut found,
        };
        maker.stay_out(tolerance);
        maker.stay_in(tolerance);
        maker.may_go(tolerance);
    }
    found
}

struct Maker<'a, 'c> {
    case: &'a Case,
    reduced: &'a Reduced<'c>,
    namer: &'a Namer<'a>,
    found: &'a mut Vec<Condition>,
}

impl Maker<'_, '_> {
    fn stay_out(&mut self, tolerance: f64) {
        let Some(largest) = self.reduced.largest_of(&self.reduced.stays()) else {
            return;
        };
        for idx in self.reduced.goes() {
            self.ratio(idx, largest, idx, tolerance, Role::StaysOut);
        }
    }

    fn stay_in(&mut self, tolerance: f64) {
        let processes = self.reduced.kept_processes();
        let [first, second] = processes.as_slice() else {
            return;
        };
        for (own, other) in [(first, second), (second, first)] {
            let Some(largest) = self.reduced.largest_of(own) else {
                continue;
            };
            for idx in other {
                self.ratio(*idx, largest, largest, 1.0 / tolerance, Role::StaysIn);
            }
        }
    }

    /// `above/below <= limit`, about a term; a pure number tells nothing that a scale
    /// could change.
    fn ratio(&mut self, above: usize, below: usize, about: usize, limit: f64, role: Role) {
        let size = |idx: usize| &self.reduced.equation.terms[idx].size.resolved;
        let Ok(ratio) = size(above).over(size(below)) else {
            return;
        };
        if !ratio.is_number() {
            let inequality = reduce::inequality(self.case, &ratio, limit, self.namer);
            self.push(about, role, inequality);
        }
    }

    /// What `reduce` says of the terms that depend on the ranges, where they are kept here.
    fn may_go(&mut self, tolerance: f64) {
        let Some(kept) = Kept::of(self.case, self.reduced.equation, tolerance) else {
            return;
        };
        for idx in self.reduced.stays() {
            if kept.verdicts[idx] == Verdict::Depends {
                for inequality in reduce::conditions(self.case, &kept, idx, tolerance, self.namer) {
                    self.push(idx, Role::MayGo, inequality);
                }
            }
        }
    }

    fn push(&mut self, idx: usize, role: Role, inequality: Inequality) {
        self.found.push(Condition {
            place: super::place(self.reduced, idx),
            role,
            holds: at_most(inequality.value.nominal, inequality.limit),
            inequality,
        });
    }
}

// The box -------------------------------------------------------------------------------------

fn space(case: &Case, systems: &[Reduced<'_>]) -> Space {
    let terms = systems.iter().flat_map(|reduced| &reduced.equation.terms);
    Space::of(&case.setting, terms.map(|term| &term.size.resolved))
}

/// Whether a scale in the equations has a range.
pub fn has_ranges(case: &Case, systems: &[Reduced<'_>]) -> bool {
    !space(case, systems).is_point()
}

/// The condition that fails first as all ranges widen together from the nominal values;
/// `None` where none fails on the whole box.
pub fn fails_first(
    case: &Case,
    systems: &[Reduced<'_>],
    endings: &[Threat<'_>],
    namer: &Namer<'_>,
) -> Option<Condition> {
    let mut first: Option<(f64, &Threat<'_>)> = None;
    for threat in endings {
        if let Some(widened) = comes_true(case, threat)
            && first.is_none_or(|(found, _)| widened < found - SAME)
        {
            first = Some((widened, threat));
        }
    }
    let (_, threat) = first?;
    failing(case, systems, threat, namer)
}

fn failing(
    case: &Case,
    systems: &[Reduced<'_>],
    threat: &Threat<'_>,
    namer: &Namer<'_>,
) -> Option<Condition> {
    let lower = threat.largest_lower()?;
    let ratio = threat.upper.monomial.over(lower.monomial).ok()?;
    let inequality = reduce::inequality(case, &ratio, threat.limit, namer);
    let (term, role) = match threat.why {
        Why::Rises => (threat.upper.term, Role::StaysOut),
        Why::Falls => (lower.term, Role::StaysIn),
        Why::ExceedsParts | Why::Joins => (threat.upper.term, Role::WithinParts),
    };
    Some(Condition {
        place: super::place(&systems[threat.equation], term),
        role,
        holds: at_most(inequality.value.nominal, inequality.limit),
        inequality,
    })
}

/// How far the ranges must widen, as a fraction of the box in the logarithm, until a
/// threat comes true somewhere; `None` if it does nowhere in the box.
fn comes_true(case: &Case, threat: &Threat<'_>) -> Option<f64> {
    let lowers = threat.lowers.iter().map(|lower| lower.monomial);
    let monomials: Vec<&Monomial> = std::iter::once(threat.upper.monomial)
        .chain(lowers)
        .collect();
    let space = Space::of(&case.setting, monomials.iter().copied());
    if space.is_point() {
        return None;
    }
    let forms: Vec<Affine> = monomials
        .iter()
        .map(|monomial| space.affine(&case.setting, monomial))
        .collect();
    let ranges: Vec<(f64, f64)> = space.ranges().map(|(_, range)| range).collect();
    let rivals: Vec<usize> = (1..forms.len()).collect();
    let excess = polyhedra::highest_against(0, &rivals, &forms, &ranges) - threat.limit.ln();
    let is_true = if threat.is_closed {
        excess >= -SAME
    } else {
        excess > SAME
    };
    let nominal: Vec<f64> = space
        .ranges()
        .map(|(symbol, _)| {
            let value = case.setting.symbol_value(symbol);
            value.map_or(f64::NAN, |value| value.nominal.abs().ln())
        })
        .collect();
    // Where rounding leaves no point in the box, it comes true at its border.
    is_true.then(|| least_widening(&forms, threat.limit, &ranges, &nominal).unwrap_or(1.0))
}

/// The least `t` such that a point lies in `t` times the box, measured from the nominal
/// point, at which the first form exceeds the limit times each other one.
fn least_widening(
    forms: &[Affine],
    limit: f64,
    ranges: &[(f64, f64)],
    nominal: &[f64],
) -> Option<f64> {
    let n = ranges.len();
    let exact = BigRational::from_float;
    let mut conditions = Vec::new();
    for rival in &forms[1..] {
        let mut coefficients: Vec<BigRational> = (0..n)
            .map(|idx| rival.slopes[idx].to_rational() - forms[0].slopes[idx].to_rational())
            .collect();
        coefficients.push(BigRational::zero());
        let at_nominal = forms[0].at(nominal) - rival.at(nominal) - limit.ln();
        conditions.push(polyhedra::Condition {
            coefficients,
            relation: Relation::AtMost,
            limit: exact(at_nominal)?,
        });
    }
    for (idx, (low, high)) in ranges.iter().enumerate() {
        let (below, above) = (nominal[idx] - low, high - nominal[idx]);
        for (sign, room) in [(1, above), (-1, below)] {
            let mut coefficients = vec![BigRational::zero(); n + 1];
            coefficients[idx] = BigRational::from_integer(sign.into());
            coefficients[n] = -exact(room)?;
            conditions.push(polyhedra::Condition {
                coefficients,
                relation: Relation::AtMost,
                limit: BigRational::zero(),
            });
        }
    }
    let mut objective = vec![BigRational::zero(); n + 1];
    objective[n] = -BigRational::one();
    let mut bounds = vec![(None, None); n];
    bounds.push((Some(BigRational::zero()), None));
    let program = Program {
        objective,
        conditions,
        bounds,
    };
    match polyhedra::maximise(&program) {
        Outcome::Optimal { value, .. } => Some(rational_to_f64(&-value)),
        Outcome::Infeasible | Outcome::Unbounded => None,
    }
}
