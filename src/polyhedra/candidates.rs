//! A cell of a prevariety written down as a candidate: formulas of the dependent
//! unknowns, irredundant conditions on the free ones, a point, directions and ranges.

use num_rational::BigRational;
use num_traits::{One, Signed, Zero};

use super::cells::{Cell, Ray, dot};
use super::contests::{Attaining, Prepared};
use super::echelon::Echelon;
use super::prevariety::{System, Term};
use super::whole::{self, Whole};

/// Exponents times unknowns, plus the constant.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct LinearForm {
    /// One for each unknown.
    pub exponents: Vec<BigRational>,
    /// What is added.
    pub constant: BigRational,
}

impl LinearForm {
    /// The value at a point.
    pub fn at(&self, point: &[BigRational]) -> BigRational {
        let products = self.exponents.iter().zip(point).map(|(e, x)| e * x);
        products.fold(self.constant.clone(), |sum, product| sum + product)
    }
}

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
    let tight = attaining.last().cloned().unwrap_or_default();
    let writer = Writer {
        system,
        prepared,
        attaining,
        cell,
        hull: hull(system, prepared, attaining, &tight),
    };
    let inequalities = writer.inequalities();
    let mut by_equation = vec![Vec::new(); system.equations.len()];
    for (contest, terms) in prepared.contests.iter().zip(attaining) {
        by_equation[contest.equation] = terms.clone();
    }
    let free = writer.free();
    Candidate {
        dimension: free.len(),
        attaining: by_equation,
        tight,
        point: writer.point(&free, &inequalities),
        directions: free
            .iter()
            .map(|&unknown| writer.direction(unknown))
            .collect(),
        ranges: (0..system.n_unknowns)
            .map(|unknown| writer.range(unknown))
            .collect(),
        equalities: writer.hull.equations,
        dependent: writer.hull.dependent,
        free,
        inequalities,
    }
}

/// The equations that hold all over the cell.
fn hull(system: &System, prepared: &Prepared, attaining: &Attaining, tight: &[usize]) -> Echelon {
    let mut hull = Echelon::default();
    for (contest, terms) in prepared.contests.iter().zip(attaining) {
        let term = |index: &usize| &system.equations[contest.equation].terms[*index];
        for pair in terms.windows(2) {
            hull.add(difference(term(&pair[0]), term(&pair[1])));
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
    attaining: &'a Attaining,
    cell: &'a Cell,
    hull: Echelon,
}

/// An inequality with the rays where it holds with equality.
struct Face {
    inequality: Inequality,
    on: Vec<bool>,
}

impl Writer<'_> {
    fn free(&self) -> Vec<usize> {
        let is_free = |unknown: &usize| !self.hull.dependent.contains(unknown);
        (0..self.system.n_unknowns).filter(is_free).collect()
    }

    /// The conditions that belong to facets: those that are equalities at the most rays.
    /// A condition that is none at any corner bounds nothing.
    fn inequalities(&self) -> Vec<Inequality> {
        let mut faces: Vec<Face> = Vec::new();
        for (source, row) in self.conditions() {
            let on: Vec<bool> = self
                .cell
                .rays
                .iter()
                .map(|ray| dot(&row, &ray.at).is_zero())
                .collect();
            let touches = self
                .cell
                .rays
                .iter()
                .zip(&on)
                .any(|(ray, &on)| on && ray.is_corner());
            let everywhere = on.iter().all(|&on| on);
            if !touches || everywhere {
                continue;
            }
            let form = self.in_free_unknowns(source);
            match faces
                .iter_mut()
                .find(|face| face.on == on && face.inequality.form == form)
            {
                Some(face) => face.inequality.sources.push(source),
                None => faces.push(Face {
                    inequality: Inequality {
                        form,
                        sources: vec![source],
                    },
                    on,
                }),
            }
        }
        let smaller =
            |a: &Face, b: &Face| a.on != b.on && a.on.iter().zip(&b.on).all(|(a, b)| a <= b);
        let is_facet = |face: &&Face| !faces.iter().any(|other| smaller(face, other));
        faces
            .iter()
            .filter(is_facet)
            .map(|face| face.inequality.clone())
            .collect()
    }

    /// All that is at least 0 in the cell and not 0 all over it, in homogeneous
    /// coordinates.
    fn conditions(&self) -> Vec<(Source, Vec<Whole>)> {
        let mut conditions = Vec::new();
        for (contest, terms) in self.prepared.contests.iter().zip(self.attaining) {
            let Some(largest) = terms.first().map(|&first| &contest.rows[first]) else {
                continue;
            };
            for (term, row) in contest.rows.iter().enumerate() {
                if !terms.contains(&term) {
                    let row = largest.iter().zip(row).map(|(a, b)| a.minus(b)).collect();
                    let equation = contest.equation;
                    conditions.push((Source::Term { equation, term }, row));
                }
            }
        }
        for (bound, row) in self.prepared.bounds.iter().enumerate() {
            conditions.push((Source::Bound(bound), row.clone()));
        }
        conditions
    }

    fn in_free_unknowns(&self, source: Source) -> LinearForm {
        let mut form = match source {
            Source::Term { equation, term } => {
                let terms = &self.system.equations[equation].terms;
                let contests = self.prepared.contests.iter().zip(self.attaining);
                let first = contests
                    .filter(|(contest, _)| contest.equation == equation)
                    .find_map(|(_, terms)| terms.first());
                difference(&terms[*first.unwrap_or(&term)], &terms[term])
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
