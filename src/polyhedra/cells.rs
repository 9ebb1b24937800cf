//! Cells: closed polyhedra kept by their generators, narrowed by one condition at a
//! time (the double description method).
//!
//! A point x is written with homogeneous coordinates (w, w x), w > 0, as whole numbers;
//! (0, d) is a direction. A cell is all positive sums of its rays (corners and
//! directions) plus all sums of its lines. Which conditions hold with equality at each
//! ray tells which rays are neighbours.

use super::whole::{self, Whole};
use crate::limits;

/// A nonempty polyhedron.
#[derive(Debug, Clone)]
pub(super) struct Cell {
    /// Directions in which the cell reaches to both sides without end.
    pub(super) lines: Vec<Vec<Whole>>,
    /// Corners (first coordinate above 0) and directions (first coordinate 0). One of
    /// them at least is a corner, up to the lines.
    pub(super) rays: Vec<Ray>,
    /// How many conditions count, the one that w is not negative among them.
    n_conditions: usize,
    /// At least so many rays are independent, up to the lines.
    rank: usize,
}

/// A corner or a direction of a [`Cell`].
#[derive(Debug, Clone)]
pub(super) struct Ray {
    pub(super) at: Vec<Whole>,
    /// The conditions that hold with equality here.
    tight: Bits,
}

impl Ray {
    pub(super) fn is_corner(&self) -> bool {
        !self.at[0].is_zero()
    }
}

/// How a condition compares a linear form of the coordinates with 0.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Compare {
    AtLeast,
    Equal,
}

/// What a condition does to a cell.
#[derive(Debug)]
pub(super) enum Narrowed {
    /// It holds everywhere.
    Same,
    /// It holds nowhere.
    Empty,
    /// It holds in a part.
    Part(Cell),
    /// The part would have more than `limits::CELL_RAYS` rays.
    TooLarge,
}

impl Cell {
    /// The whole space.
    pub(super) fn space(n_unknowns: usize) -> Cell {
        let unit = |place: usize| {
            let mut at = vec![Whole::ZERO; n_unknowns + 1];
            at[place] = Whole::ONE;
            at
        };
        Cell {
            lines: (1..=n_unknowns).map(unit).collect(),
            rays: vec![Ray {
                at: unit(0),
                tight: Bits::default(),
            }],
            n_conditions: 1,
            rank: 1,
        }
    }

    /// A point of the relative interior, in homogeneous coordinates.
    pub(super) fn inner_point(&self) -> Vec<Whole> {
        let mut sum = vec![Whole::ZERO; self.rays[0].at.len()];
        for ray in &self.rays {
            for (total, value) in sum.iter_mut().zip(&ray.at) {
                *total = total.plus(value);
            }
        }
        sum
    }

    /// The part of the cell where `row . (w, w x)` is at least 0, or equal to it.
    pub(super) fn narrowed(&self, row: &[Whole], compare: Compare) -> Narrowed {
        for (index, line) in self.lines.iter().enumerate() {
            let rise = dot(row, line);
            if !rise.is_zero() {
                return Narrowed::Part(self.across_line(row, compare, index, &rise));
            }
        }
        let values: Vec<Whole> = self.rays.iter().map(|ray| dot(row, &ray.at)).collect();
        let same = match compare {
            Compare::AtLeast => values.iter().all(|v| v.sign() >= 0),
            Compare::Equal => values.iter().all(Whole::is_zero),
        };
        if same {
            return Narrowed::Same;
        }
        self.across_rays(&values, compare)
    }

    /// One line pierces the border: all else is moved along it onto the border.
    fn across_line(&self, row: &[Whole], compare: Compare, index: usize, rise: &Whole) -> Cell {
        let mut line = self.lines[index].clone();
        if rise.sign() < 0 {
            line.iter_mut().for_each(|v| *v = v.negated());
        }
        let rise = rise.abs();
        let moved = |at: &[Whole]| combined(at, &rise, &line, &dot(row, at).negated());
        let others = self
            .lines
            .iter()
            .enumerate()
            .filter(|(other, _)| *other != index);
        let mut cell = Cell {
            lines: others.map(|(_, other)| moved(other)).collect(),
            rays: Vec::with_capacity(self.rays.len() + 1),
            n_conditions: self.n_conditions,
            rank: self.rank,
        };
        for ray in &self.rays {
            let tight = ray.tight.clone();
            cell.rays.push(Ray {
                at: moved(&ray.at),
                tight,
            });
        }
        if compare == Compare::AtLeast {
            cell.rays
                .iter_mut()
                .for_each(|ray| ray.tight.set(self.n_conditions));
            let tight = Bits::first(self.n_conditions);
            cell.rays.push(Ray { at: line, tight });
            cell.n_conditions += 1;
            cell.rank += 1;
        }
        cell
    }

    /// The border runs between the rays: those on the right side stay, and neighbours on
    /// its two sides give new ones.
    fn across_rays(&self, values: &[Whole], compare: Compare) -> Narrowed {
        let is_above = values.iter().any(|value| value.sign() > 0);
        let is_below = values.iter().any(|value| value.sign() < 0);
        // A border that leaves one side alone may take any face of the cell; on it the
        // condition holds with equality all over, so that it does not count.
        let (counted, rank) = match compare {
            Compare::AtLeast if is_above => (Some(self.n_conditions), self.rank),
            Compare::Equal if is_above && is_below => (None, self.rank.saturating_sub(1)),
            Compare::AtLeast | Compare::Equal => (None, 1),
        };
        let mut rays = self.rays_kept(values, compare, counted);
        self.add_rays_between(&mut rays, values, counted);
        if !rays.iter().any(Ray::is_corner) {
            return Narrowed::Empty;
        }
        if rays.len() > limits::CELL_RAYS {
            return Narrowed::TooLarge;
        }
        Narrowed::Part(Cell {
            lines: self.lines.clone(),
            rays,
            n_conditions: self.n_conditions + usize::from(counted.is_some()),
            rank,
        })
    }

    /// The rays on the right side; those on the border get the number of the condition.
    fn rays_kept(&self, values: &[Whole], compare: Compare, counted: Option<usize>) -> Vec<Ray> {
        let mut rays = Vec::with_capacity(self.rays.len());
        for (ray, value) in self.rays.iter().zip(values) {
            if !value.is_zero() && (compare == Compare::Equal || value.sign() < 0) {
                continue;
            }
            let mut ray = ray.clone();
            match counted {
                Some(condition) if value.is_zero() => ray.tight.set(condition),
                Some(_) | None => {}
            }
            rays.push(ray);
        }
        rays
    }

    /// Where the edges between the two sides meet the border.
    fn add_rays_between(&self, rays: &mut Vec<Ray>, values: &[Whole], counted: Option<usize>) {
        let with_sign =
            |sign: i32| (0..values.len()).filter(move |&ray| values[ray].sign() == sign);
        for high in with_sign(1) {
            for low in with_sign(-1) {
                let (over, under) = (&self.rays[high], &self.rays[low]);
                let mut tight = over.tight.and(&under.tight);
                if !self.are_neighbours(high, low, &tight) {
                    continue;
                }
                if let Some(condition) = counted {
                    tight.set(condition);
                }
                let at = combined(&over.at, &values[low].negated(), &under.at, &values[high]);
                rays.push(Ray { at, tight });
            }
        }
    }

    /// Two rays span an edge if no third one lies on all conditions that they share.
    fn are_neighbours(&self, a: usize, b: usize, shared: &Bits) -> bool {
        // On an edge all conditions but one are used up, so that two rays are left.
        if shared.len() + 2 < self.rank {
            return false;
        }
        let third =
            |(index, ray): (usize, &Ray)| index != a && index != b && ray.tight.holds(shared);
        !self.rays.iter().enumerate().any(third)
    }
}

/// The sum of the products, place by place.
pub(super) fn dot(a: &[Whole], b: &[Whole]) -> Whole {
    let mut sum = Whole::ZERO;
    for (p, q) in a.iter().zip(b) {
        if !p.is_zero() && !q.is_zero() {
            sum = sum.plus(&p.times(q));
        }
    }
    sum
}

/// `a * times_a + b * times_b` without a common divisor.
fn combined(a: &[Whole], times_a: &Whole, b: &[Whole], times_b: &Whole) -> Vec<Whole> {
    let mut sum: Vec<Whole> = (a.iter().zip(b))
        .map(|(p, q)| p.times(times_a).plus(&q.times(times_b)))
        .collect();
    whole::make_coprime(&mut sum);
    sum
}

/// A set of small numbers; the first 64 of them take no memory of their own.
#[derive(Debug, Clone, Default)]
struct Bits {
    first: u64,
    rest: Vec<u64>,
}

impl Bits {
    /// 0 up to, not including, `end`.
    fn first(end: usize) -> Bits {
        let mut bits = Bits::default();
        (0..end).for_each(|index| bits.set(index));
        bits
    }

    fn set(&mut self, index: usize) {
        let bit = 1 << (index % 64);
        match (index / 64).checked_sub(1) {
            None => self.first |= bit,
            Some(word) => {
                if self.rest.len() <= word {
                    self.rest.resize(word + 1, 0);
                }
                self.rest[word] |= bit;
            }
        }
    }

    fn and(&self, other: &Bits) -> Bits {
        Bits {
            first: self.first & other.first,
            rest: self
                .rest
                .iter()
                .zip(&other.rest)
                .map(|(a, b)| a & b)
                .collect(),
        }
    }

    fn len(&self) -> usize {
        let words = std::iter::once(&self.first).chain(&self.rest);
        words.map(|word| word.count_ones() as usize).sum()
    }

    /// Whether all of `other` is in it.
    fn holds(&self, other: &Bits) -> bool {
        other.first & !self.first == 0
            && (other.rest.iter().enumerate())
                .all(|(word, bits)| bits & !self.rest.get(word).unwrap_or(&0) == 0)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn row(values: &[i64]) -> Vec<Whole> {
        values.iter().map(|&v| Whole::from(v)).collect()
    }

    fn cut(cell: &Cell, values: &[i64]) -> Cell {
        match cell.narrowed(&row(values), Compare::AtLeast) {
            Narrowed::Part(part) => part,
            Narrowed::Same => cell.clone(),
            Narrowed::Empty | Narrowed::TooLarge => panic!("the part is not empty"),
        }
    }

    fn corners(cell: &Cell) -> Vec<Vec<Whole>> {
        let mut corners: Vec<Vec<Whole>> = cell.rays.iter().map(|ray| ray.at.clone()).collect();
        corners.sort();
        corners
    }

    #[test]
    fn a_square_is_cut_to_a_triangle() {
        let mut cell = Cell::space(2);
        for condition in [[0, 1, 0], [1, -1, 0], [0, 0, 1], [1, 0, -1]] {
            cell = cut(&cell, &condition);
        }
        assert_eq!(cell.rays.len(), 4);
        assert!(cell.lines.is_empty());
        let triangle = cut(&cell, &[1, -1, -1]);
        assert_eq!(
            corners(&triangle),
            [[1, 0, 0], [1, 0, 1], [1, 1, 0]].map(|c| row(&c))
        );
    }

    #[test]
    fn what_holds_everywhere_or_nowhere_is_seen() {
        let half = cut(&Cell::space(1), &[0, 1]);
        assert!(matches!(
            half.narrowed(&row(&[1, 1]), Compare::AtLeast),
            Narrowed::Same
        ));
        assert!(matches!(
            half.narrowed(&row(&[-1, -1]), Compare::AtLeast),
            Narrowed::Empty
        ));
        assert!(matches!(
            half.narrowed(&row(&[1, 1]), Compare::Equal),
            Narrowed::Empty
        ));
        // Parallel to the only direction, and on the wrong side of it.
        assert!(matches!(
            half.narrowed(&row(&[-1, 0]), Compare::AtLeast),
            Narrowed::Empty
        ));
    }

    #[test]
    fn an_equation_takes_a_line_away() {
        let Narrowed::Part(line) = Cell::space(2).narrowed(&row(&[-1, 1, 1]), Compare::Equal)
        else {
            panic!("the part is a line");
        };
        assert_eq!(line.lines.len(), 1);
        let point = line.inner_point();
        assert_eq!(point[1].plus(&point[2]), point[0]);
    }

    #[test]
    fn cubes_of_every_dimension_have_their_corners_and_lose_one() {
        for n in 1..=6 {
            let mut cell = Cell::space(n);
            for unknown in 1..=n {
                let mut low = vec![0; n + 1];
                low[unknown] = 1;
                let mut high = vec![0; n + 1];
                (high[0], high[unknown]) = (2, -1);
                cell = cut(&cut(&cell, &low), &high);
            }
            assert_eq!(cell.rays.len(), 1 << n);
            let mut corner = vec![1; n + 1];
            corner[0] = -1;
            let cut_off = cut(&cell, &corner);
            assert_eq!(cut_off.rays.len(), (1 << n) - 1 + n);
        }
    }

    #[test]
    fn bits_beyond_64_are_kept() {
        let mut many = Bits::first(130);
        many.set(200);
        let mut few = Bits::default();
        few.set(129);
        assert!(many.holds(&few) && !few.holds(&many));
        assert!(few.holds(&many.and(&few)));
        assert!(!Bits::first(129).holds(&few));
    }
}
