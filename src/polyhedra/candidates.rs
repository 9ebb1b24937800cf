//! A cell of a prevariety written down as a candidate: formulas of the dependent
//! unknowns, irredundant conditions on the free ones, a point, directions and ranges.

use num_rational::BigRational;
use num_traits::{One, Signed, Zero};

use super::cells::{Cell, Ray, dot};
use super::contests::{Attaining, Prepared};
use super::linear::{Echelon, LinearForm};
use super::prevariety::{System, Term};
use super::whole::{self, Whole};

/// One dominant balance: a point, or a family.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Candidate {
    /// How many unknowns stay free.
    pub dimension: usize,
    /// For each equation the terms that are the largest, all over the inside of the
    /// family; none for an equation that holds no unknown.
    pub attaining: Vec<Vec<usize>>,
    /// The bounds of the system that hold with equality.
    pub tight: Vec<usize>,
    /// Each is 0 and begins with exponent 1 of an unknown that stands in no other one.
    pub equalities: Vec<LinearForm>,
    /// The unknown that each equality begins with.
    pub dependent: Vec<usize>,
    /// The other unknowns.
    pub free: Vec<usize>,
    /// What bounds the family; none is redundant.
    pub inequalities: Vec<Inequality>,
    /// The point, or some point inside the family.
    pub point: Vec<BigRational>,
    /// For each free unknown the direction in which it grows by 1 and the other free
    /// ones stay.
    pub directions: Vec<Vec<BigRational>>,
    /// The lowest and highest value of each unknown, where there is one.
    pub ranges: Vec<(Option<BigRational>, Option<BigRational>)>,
}

/// A condition on the free unknowns.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Inequality {
    /// At least 0; its exponents are whole numbers without a common divisor.
    pub form: LinearForm,
    /// What becomes equal where the form is 0.
    pub sources: Vec<Source>,
}

/// Where an [`Inequality`] comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Source {
    /// This term joins the largest ones.
    Term {
        /// The equation.
        equation: usize,
        /// The term in it.
        term: usize,
    },
    /// A bound of the system.
    Bound(usize),
}

/// Writes a cell down.
pub(super) fn describe(
    system: &System,
    prepared: &Prepared,
    attaining: &Attaining,
    cell: &Cell,
) -> Candidate {
    let mut by_equation = vec![Vec::new(); system.equations.len()];
    for (contest, terms) in prepared.contests.iter().zip(attaining) {
        by_equation[contest.equation] = terms.clone();
    }
    let tight = attaining.last().cloned().unwrap_or_default();
    let hull = hull(system, &by_equation, &tight);
    let is_free = |unknown: &usize| !hull.dependent.contains(unknown);
    let free: Vec<usize> = (0..system.n_unknowns).filter(is_free).collect();
    let writer = Writer {
        system,
        prepared,
        attaining: &by_equation,
        cell,
        hull: &hull,
    };
    let inequalities = writer.inequalities();
    Candidate {
        dimension: free.len(),
        tight,
        point: writer.point(&free, &inequalities),
        directions: free
            .iter()
            .map(|&unknown| writer.direction(unknown))
            .collect(),
        ranges: (0..system.n_unknowns)
            .map(|unknown| writer.range(unknown))
            .collect(),
        attaining: by_equation,
        equalities: hull.equations,
        dependent: hull.dependent,
        free,
        inequalities,
    }
}

/// The equations that hold all over the cell.
fn hull(system: &System, attaining: &[Vec<usize>], tight: &[usize]) -> Echelon {
    let mut hull = Echelon::default();
    for (equation, largest) in system.equations.iter().zip(attaining) {
        for pair in largest.windows(2) {
            hull.add(difference(
                &equation.terms[pair[0]],
                &equation.terms[pair[1]],
            ));
        }
    }
    for &bound in tight {
        hull.add(system.within[bound].clone());
    }
    hull
}

fn difference(a: &Term, b: &Term) -> LinearForm {
    let exponents = a.exponents.iter().zip(&b.exponents);
    LinearForm {
        exponents: exponents
            .map(|(a, b)| a.to_rational() - b.to_rational())
            .collect(),
        constant: &a.constant - &b.constant,
    }
}

struct Writer<'a> {
    system: &'a System,
    prepared: &'a Prepared,
    /// For each equation; a contest has attaining terms in every cell.
    attaining: &'a [Vec<usize>],
    cell: &'a Cell,
    hull: &'a Echelon,
}

/// An inequality with the rays where it holds with equality.
struct Face {
    inequality: Inequality,
    on: Vec<bool>,
}

impl Writer<'_> {
    /// The conditions that belong to facets: those that are equalities at the most rays.
    fn inequalities(&self) -> Vec<Inequality> {
        let faces = self.faces();
        let smaller =
            |a: &Face, b: &Face| a.on != b.on && a.on.iter().zip(&b.on).all(|(a, b)| a <= b);
        let is_facet = |face: &&Face| !faces.iter().any(|other| smaller(face, other));
        faces
            .iter()
            .filter(is_facet)
            .map(|face| face.inequality.clone())
            .collect()
    }

    /// All conditions that touch the cell, equal ones together.
    fn faces(&self) -> Vec<Face> {
        let mut faces: Vec<Face> = Vec::new();
        for (source, row) in self.conditions() {
            let rays = self.cell.rays.iter();
            let on: Vec<bool> = rays.map(|ray| dot(&row, &ray.at).is_zero()).collect();
            let everywhere = on.iter().all(|&on| on);
            let mut corners = self
                .cell
                .rays
                .iter()
                .zip(&on)
                .filter(|(ray, _)| ray.is_corner());
            if everywhere || !corners.any(|(_, &on)| on) {
                continue;
            }
            let form = self.in_free_unknowns(source);
            match faces.iter_mut().find(|face| face.inequality.form == form) {
                Some(face) => face.inequality.sources.push(source),
                None => {
                    let inequality = Inequality {
                        form,
                        sources: vec![source],
                    };
                    faces.push(Face { inequality, on });
                }
            }
        }
        faces
    }

    /// All that is at least 0 in the cell, in homogeneous coordinates.
    fn conditions(&self) -> Vec<(Source, Vec<Whole>)> {
        let mut conditions = Vec::new();
        for contest in &self.prepared.contests {
            let equation = contest.equation;
            let largest = &contest.rows[self.attaining[equation][0]];
            for (term, row) in contest.rows.iter().enumerate() {
                let row = largest.iter().zip(row).map(|(a, b)| a.minus(b)).collect();
                conditions.push((Source::Term { equation, term }, row));
            }
        }
        let bounds = self.prepared.bounds.iter().enumerate();
        conditions.extend(bounds.map(|(bound, row)| (Source::Bound(bound), row.clone())));
        conditions
    }

    /// The condition in the free unknowns, its exponents whole and coprime.
    fn in_free_unknowns(&self, source: Source) -> LinearForm {
        let mut form = match source {
            Source::Term { equation, term } => {
                let terms = &self.system.equations[equation].terms;
                difference(&terms[self.attaining[equation][0]], &terms[term])
            }
            Source::Bound(bound) => self.system.within[bound].clone(),
        };
        self.hull.replace_dependent(&mut form);
        let Some(lead) = form.exponents.iter().position(|e| !e.is_zero()) else {
            return form;
        };
        let coprime = whole::whole_row(&form.exponents);
        let factor = coprime[lead].ratio(&Whole::ONE) / &form.exponents[lead];
        form.exponents = coprime.iter().map(|e| e.ratio(&Whole::ONE)).collect();
        form.constant *= factor;
        form
    }

    fn direction(&self, unknown: usize) -> Vec<BigRational> {
        let mut direction = vec![BigRational::zero(); self.system.n_unknowns];
        direction[unknown] = BigRational::one();
        for (equation, &lead) in self.hull.equations.iter().zip(&self.hull.dependent) {
            direction[lead] = -equation.exponents[unknown].clone();
        }
        direction
    }

    fn range(&self, unknown: usize) -> (Option<BigRational>, Option<BigRational>) {
        let place = unknown + 1;
        let both_ways = self.cell.lines.iter().any(|line| !line[place].is_zero());
        let corners = || self.cell.rays.iter().filter(|ray| ray.is_corner());
        let values = || corners().map(|ray| self.coordinate(ray, unknown));
        let endless = |sign: i32| {
            let directions = self.cell.rays.iter().filter(|ray| !ray.is_corner());
            both_ways
                || directions
                    .into_iter()
                    .any(|ray| ray.at[place].sign() == sign)
        };
        let low = if endless(-1) { None } else { values().min() };
        let high = if endless(1) { None } else { values().max() };
        (low, high)
    }

    fn coordinate(&self, corner: &Ray, unknown: usize) -> BigRational {
        corner.at[unknown + 1].ratio(&corner.at[0].times(&self.prepared.scale))
    }

    /// A point inside, of small denominators if rounding stays inside.
    fn point(&self, free: &[usize], inequalities: &[Inequality]) -> Vec<BigRational> {
        let inner = self.inner_point();
        let inside = |x: &Vec<BigRational>| inequalities.iter().all(|i| i.form.at(x).is_positive());
        for denom in [1, 2, 4, 10, 60] {
            let denom = BigRational::from_integer(denom.into());
            let mut point = inner.clone();
            for &unknown in free {
                point[unknown] = (&point[unknown] * &denom).round() / &denom;
            }
            if inside(&point) {
                self.solve_dependent(&mut point);
                return point;
            }
        }
        inner
    }

    /// The mean of the corners, moved by about 1 along each direction.
    fn inner_point(&self) -> Vec<BigRational> {
        let n_corners = self.cell.rays.iter().filter(|ray| ray.is_corner()).count();
        let weight = BigRational::new(1.into(), n_corners.into());
        let mut point = vec![BigRational::zero(); self.system.n_unknowns];
        for ray in &self.cell.rays {
            let longest = ray.at[1..].iter().map(Whole::abs).max();
            for (unknown, value) in point.iter_mut().enumerate() {
                *value += match &longest {
                    _ if ray.is_corner() => self.coordinate(ray, unknown) * &weight,
                    Some(longest) if !longest.is_zero() => ray.at[unknown + 1].ratio(longest),
                    Some(_) | None => BigRational::zero(),
                };
            }
        }
        point
    }

    fn solve_dependent(&self, point: &mut [BigRational]) {
        for (equation, &lead) in self.hull.equations.iter().zip(&self.hull.dependent) {
            point[lead] = BigRational::zero();
            point[lead] = -equation.at(point);
        }
    }
}
