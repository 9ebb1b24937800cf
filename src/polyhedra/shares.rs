//! Highest and lowest shares of terms over a box of ranges.
//!
//! In the logarithms of the scales the size of a term is an affine form, and so is a
//! ratio of terms. The highest share of a term is the largest value, over the box, of
//! the least of its ratios to the others: a linear program, whose optimum may lie inside
//! the box. The lowest share of a process is the like problem turned round. All
//! logarithms are natural ones.
//!
//! Slopes are exact. Constants and ends of ranges are taken on a dyadic grid, finer than
//! what they are good for, and the program is solved exactly on it. Constants and ends
//! must be finite (a constant may be minus infinity, a term of size 0); where they are
//! not, the result is not a number.

use num_bigint::BigInt;
use num_rational::Ratio;
use num_traits::{FromPrimitive, Zero};

use super::tableau::Tableau;
use super::whole::Whole;
use crate::number::{Exponent, rational_to_f64};

/// The size of a term: the sum of slopes times log-scales, plus the constant.
#[derive(Debug, Clone, PartialEq)]
pub struct Affine {
    /// The exponent of each scale.
    pub slopes: Vec<Exponent>,
    /// The logarithm of everything else.
    pub constant: f64,
}

impl Affine {
    /// The value at a point.
    pub fn at(&self, point: &[f64]) -> f64 {
        let slopes = self.slopes.iter().zip(point);
        slopes.fold(self.constant, |sum, (slope, x)| sum + slope.to_f64() * x)
    }
}

/// The logarithm of the highest share of term `of` over the box, at most 0.
pub fn highest(of: usize, terms: &[Affine], bounds: &[(f64, f64)]) -> f64 {
    // The term is among its rivals, which keeps the share at 1 or below.
    let rivals: Vec<usize> = (0..terms.len()).collect();
    highest_against(of, &rivals, terms, bounds)
}

/// The logarithm of the highest ratio, over the box, of term `of` to the largest of the
/// terms `rivals`; plus infinity where there is none.
pub fn highest_against(
    of: usize,
    rivals: &[usize],
    terms: &[Affine],
    bounds: &[(f64, f64)],
) -> f64 {
    let own = &terms[of];
    if own.constant == f64::NEG_INFINITY {
        return own.constant;
    }
    let ratios = (rivals.iter())
        .filter(|&&rival| terms[rival].constant != f64::NEG_INFINITY)
        .map(|&rival| Form::ratio(own, &terms[rival]))
        .collect();
    highest_of_least(ratios, bounds)
}

/// The logarithm of the lowest share of term `of` over the box, at most 0.
pub fn lowest(of: usize, terms: &[Affine], bounds: &[(f64, f64)]) -> f64 {
    lowest_of_process(&[of], terms, bounds)
}

/// The logarithm of the lowest share of a process over the box, at most 0. At each point
/// the process is as large as the largest of its terms `of`.
pub fn lowest_of_process(of: &[usize], terms: &[Affine], bounds: &[(f64, f64)]) -> f64 {
    let own: Vec<&Affine> = (of.iter().map(|&own| &terms[own]))
        .filter(|own| own.constant != f64::NEG_INFINITY)
        .collect();
    let mut lowest = 0.0;
    for (index, rival) in terms.iter().enumerate() {
        if of.contains(&index) || rival.constant == f64::NEG_INFINITY {
            continue;
        }
        let ratios = own.iter().map(|own| Form::ratio(rival, own)).collect();
        lowest = smaller(lowest, -highest_of_least(ratios, bounds));
    }
    lowest
}

/// Two bounds of a result that lie nearer than this are one (a tenth of what a logarithm
/// must be good to).
const AGREE: f64 = 1e-13;

/// Steps of the dyadic grid in 1.
const GRID: f64 = (1_u64 << 50) as f64;

/// Not a number stays; `f64::min` would lose it.
fn smaller(a: f64, b: f64) -> f64 {
    if a < b { a } else { b }
}

/// A difference of two affine forms.
struct Form {
    slopes: Vec<Ratio<i64>>,
    constant: f64,
}

impl Form {
    fn ratio(over: &Affine, under: &Affine) -> Form {
        let exact = |slope: &Exponent| Ratio::new_raw(slope.numer(), slope.denom());
        Form {
            // The parts of an exponent are small: their difference fits 64 bits.
            slopes: (over.slopes.iter().zip(&under.slopes))
                .map(|(over, under)| exact(over) - exact(under))
                .collect(),
            constant: over.constant - under.constant,
        }
    }

    fn slope(&self, scale: usize) -> f64 {
        let slope = self.slopes[scale];
        *slope.numer() as f64 / *slope.denom() as f64
    }

    fn at(&self, point: &[f64]) -> f64 {
        let scales = point.iter().enumerate();
        scales.fold(self.constant, |sum, (scale, x)| sum + self.slope(scale) * x)
    }

    /// The corner of the box where the form is largest.
    fn highest_corner(&self, bounds: &[(f64, f64)]) -> Vec<f64> {
        let scales = bounds.iter().enumerate();
        scales
            .map(|(scale, &(low, high))| {
                if *self.slopes[scale].numer() > 0 {
                    high
                } else {
                    low
                }
            })
            .collect()
    }

    fn lowest(&self, bounds: &[(f64, f64)]) -> f64 {
        let scales = bounds.iter().enumerate();
        scales.fold(self.constant, |sum, (scale, &(low, high))| {
            let x = if *self.slopes[scale].numer() < 0 {
                high
            } else {
                low
            };
            sum + self.slope(scale) * x
        })
    }
}

/// The largest value over the box of the least of the forms.
///
/// Every form's own largest value bounds it from above, every corner from below; the
/// linear program is solved only where these do not meet.
fn highest_of_least(mut forms: Vec<Form>, bounds: &[(f64, f64)]) -> f64 {
    let finite = |(low, high): &(f64, f64)| low.is_finite() && high.is_finite();
    if !bounds.iter().all(finite) || forms.iter().any(|form| !form.constant.is_finite()) {
        return f64::NAN;
    }
    let mut ceiling = f64::INFINITY;
    let mut floor = f64::NEG_INFINITY;
    let mut best_corner = Vec::new();
    for form in &forms {
        let corner = form.highest_corner(bounds);
        ceiling = ceiling.min(form.at(&corner));
        let least = forms
            .iter()
            .map(|form| form.at(&corner))
            .fold(f64::INFINITY, f64::min);
        if least > floor {
            (floor, best_corner) = (least, corner);
        }
    }
    if forms.is_empty() || ceiling - floor <= AGREE {
        return ceiling;
    }
    // A form that is nowhere below the ceiling cannot press the result below it.
    forms.retain(|form| form.lowest(bounds) < ceiling);
    smaller(ceiling, solve(&forms, bounds, &best_corner))
}

/// Maximises t subject to t <= each form, the point within the box, from a corner of the
/// box and a t below all forms there: no phase one is needed.
fn solve(forms: &[Form], bounds: &[(f64, f64)], corner: &[f64]) -> f64 {
    let scales: Vec<usize> = (0..bounds.len())
        .filter(|&scale| bounds[scale].0 < bounds[scale].1)
        .filter(|&scale| forms.iter().any(|form| !form.slopes[scale].is_zero()))
        .collect();
    let scaled: Vec<ScaledForm> = (forms.iter())
        .map(|form| ScaledForm::new(form, &scales, bounds, corner))
        .collect();
    let Some(start) = scaled.iter().map(ScaledForm::below).min() else {
        return f64::INFINITY;
    };
    let mut rows: Vec<Vec<Whole>> = scaled.into_iter().map(|form| form.row(&start)).collect();
    for (index, &scale) in scales.iter().enumerate() {
        let (low, high) = bounds[scale];
        let mut row = vec![Whole::ZERO; scales.len() + 2];
        row[0] = on_grid(high).minus(&on_grid(low));
        row[index + 1] = Whole::from(-1);
        rows.push(row);
    }
    let mut goal = vec![Whole::ZERO; scales.len() + 2];
    goal[scales.len() + 1] = Whole::ONE;
    let mut tableau = Tableau::new(scales.len() + 1, rows, goal);
    tableau.rise();
    let risen = tableau.value(scales.len()).ratio(&tableau.denom);
    rational_to_f64(&(risen + start.ratio(&Whole::ONE))) / GRID
}

/// A form times a positive whole number that makes its slopes whole, written in the
/// distances from a corner of the box, in steps of the grid.
struct ScaledForm {
    factor: Whole,
    at_corner: Whole,
    slopes: Vec<Whole>,
}

impl ScaledForm {
    fn new(form: &Form, scales: &[usize], bounds: &[(f64, f64)], corner: &[f64]) -> ScaledForm {
        let factor = (form.slopes.iter()).fold(Whole::ONE, |lcm, slope| {
            lcm.lcm(&Whole::from(*slope.denom()))
        });
        let scaled = |slope: &Ratio<i64>| {
            Whole::from(*slope.numer()).times(&factor.over(&Whole::from(*slope.denom())))
        };
        let mut at_corner = on_grid(form.constant).times(&factor);
        for (slope, &x) in form.slopes.iter().zip(corner) {
            at_corner = at_corner.plus(&scaled(slope).times(&on_grid(x)));
        }
        let inwards = |&scale: &usize| {
            let slope = scaled(&form.slopes[scale]);
            if corner[scale] == bounds[scale].0 {
                slope
            } else {
                slope.negated()
            }
        };
        ScaledForm {
            at_corner,
            slopes: scales.iter().map(inwards).collect(),
            factor,
        }
    }

    /// A whole number below the form's value at the corner.
    fn below(&self) -> Whole {
        self.at_corner.over(&self.factor).minus(&Whole::ONE)
    }

    /// By how much the form exceeds `start` plus the last variable.
    fn row(self, start: &Whole) -> Vec<Whole> {
        let mut row = vec![self.at_corner.minus(&self.factor.times(start))];
        row.extend(self.slopes);
        row.push(self.factor.negated());
        row
    }
}

/// The nearest point of the grid, in steps; 0 for what is not finite.
fn on_grid(value: f64) -> Whole {
    let steps = (value * GRID).round();
    if steps.abs() < 1e38 {
        return Whole::Small(steps as i128);
    }
    BigInt::from_f64(steps).map_or(Whole::ZERO, Whole::from_big)
}
