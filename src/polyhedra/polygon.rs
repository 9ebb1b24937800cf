//! Convex polygons in the plane of two log-scales, cut exactly by straight lines.
//!
//! A map of regimes starts from a rectangle and splits it, border by border; no part
//! is lost, and no two parts overlap.

use num_rational::BigRational;
use num_traits::{Signed, Zero};

use super::linear::LinearForm;

/// A point of the plane.
pub type Point = [BigRational; 2];

/// A convex polygon with an area.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Polygon {
    /// Counterclockwise; at least three, no three on one straight line.
    corners: Vec<Point>,
}

/// The two sides of a [`Polygon`] cut by a line; a side without area is `None`.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Split {
    /// Where the form is at least 0.
    pub above: Option<Polygon>,
    /// Where the form is at most 0.
    pub below: Option<Polygon>,
}

impl Polygon {
    /// The rectangle between two opposite corners; `None` if it has no area.
    pub fn rectangle(low: &Point, high: &Point) -> Option<Polygon> {
        let [left, bottom] = low.clone();
        let [right, top] = high.clone();
        let has_area = left < right && bottom < top;
        has_area.then(|| Polygon {
            corners: vec![
                [left.clone(), bottom.clone()],
                [right.clone(), bottom],
                [right, top.clone()],
                [left, top],
            ],
        })
    }

    /// The corners, counterclockwise.
    pub fn corners(&self) -> &[Point] {
        &self.corners
    }

    /// Cuts the polygon where the form, in two unknowns, is 0. All of a form that is 0
    /// everywhere lies above.
    pub fn split(&self, form: &LinearForm) -> Split {
        let values: Vec<BigRational> = self.corners.iter().map(|corner| form.at(corner)).collect();
        let mut above = Vec::new();
        let mut below = Vec::new();
        for (index, corner) in self.corners.iter().enumerate() {
            let next = (index + 1) % self.corners.len();
            if !values[index].is_negative() {
                above.push(corner.clone());
            }
            if !values[index].is_positive() {
                below.push(corner.clone());
            }
            if crosses(&values[index], &values[next]) {
                let crossing = between(corner, &self.corners[next], &values[index], &values[next]);
                above.push(crossing.clone());
                below.push(crossing);
            }
        }
        let flat = values.iter().all(BigRational::is_zero);
        let is_above = flat || values.iter().any(BigRational::is_positive);
        let is_below = values.iter().any(BigRational::is_negative);
        Split {
            above: is_above.then_some(Polygon { corners: above }),
            below: is_below.then_some(Polygon { corners: below }),
        }
    }

    /// The area.
    pub fn area(&self) -> BigRational {
        let twice: BigRational = self.edges().map(|(a, b)| cross(a, b)).sum();
        twice / whole(2)
    }

    /// The centre of mass, always inside: a place for a label.
    pub fn centre(&self) -> Point {
        let weight = self.area() * whole(6);
        [0, 1].map(|axis| {
            let moment: BigRational = self
                .edges()
                .map(|(a, b)| (&a[axis] + &b[axis]) * cross(a, b))
                .sum();
            moment / &weight
        })
    }

    /// Each corner with the one after it.
    fn edges(&self) -> impl Iterator<Item = (&Point, &Point)> {
        self.corners.iter().zip(self.corners.iter().cycle().skip(1))
    }
}

fn crosses(a: &BigRational, b: &BigRational) -> bool {
    a.is_positive() && b.is_negative() || a.is_negative() && b.is_positive()
}

/// The point on the way from `a` to `b` where a form with these values is 0.
fn between(a: &Point, b: &Point, value_a: &BigRational, value_b: &BigRational) -> Point {
    let part = value_a / (value_a - value_b);
    [0, 1].map(|axis| &a[axis] + &part * (&b[axis] - &a[axis]))
}

fn cross(a: &Point, b: &Point) -> BigRational {
    &a[0] * &b[1] - &a[1] * &b[0]
}

fn whole(value: i64) -> BigRational {
    BigRational::from_integer(value.into())
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn form(x: i64, y: i64, constant: i64) -> LinearForm {
        LinearForm {
            exponents: vec![whole(x), whole(y)],
            constant: whole(constant),
        }
    }

    fn points(values: &[[i64; 2]]) -> Vec<Point> {
        values.iter().map(|[x, y]| [whole(*x), whole(*y)]).collect()
    }

    fn square() -> Polygon {
        let corners = points(&[[-4, -4], [4, 4]]);
        Polygon::rectangle(&corners[0], &corners[1]).unwrap()
    }

    #[test]
    fn a_diagonal_leaves_two_triangles() {
        let split = square().split(&form(1, -1, 0));
        let below = split.below.unwrap();
        assert_eq!(below.corners(), points(&[[-4, -4], [4, 4], [-4, 4]]));
        assert_eq!(below.area(), whole(32));
        assert_eq!(split.above.unwrap().area(), whole(32));
    }

    #[test]
    fn a_line_along_a_side_or_outside_cuts_nothing() {
        for constant in [4, 5] {
            let split = square().split(&form(1, 0, constant));
            assert_eq!(split.above, Some(square()));
            assert_eq!(split.below, None);
        }
    }

    #[test]
    fn a_rectangle_without_area_is_none() {
        let corners = points(&[[0, 0], [0, 3]]);
        assert_eq!(Polygon::rectangle(&corners[0], &corners[1]), None);
    }

    #[test]
    fn the_centre_of_a_triangle_is_the_mean_of_its_corners() {
        let triangle = square().split(&form(1, -1, 0)).below.unwrap();
        let third = |v: i64| BigRational::new(v.into(), 3.into());
        assert_eq!(triangle.centre(), [third(-4), third(4)]);
    }

    fn check_convex(polygon: &Polygon) {
        let n = polygon.corners.len();
        assert!(n >= 3);
        for index in 0..n {
            let [a, b, c] = [0, 1, 2].map(|step| &polygon.corners[(index + step) % n]);
            let turn = (&b[0] - &a[0]) * (&c[1] - &b[1]) - (&b[1] - &a[1]) * (&c[0] - &b[0]);
            assert!(turn.is_positive());
        }
    }

    proptest! {
        #[test]
        fn parts_are_convex_lie_on_their_sides_and_fill_the_whole(
            lines in prop::collection::vec((-3_i64..4, -3_i64..4, -9_i64..10), 1..8),
        ) {
            let mut parts = vec![square()];
            for (x, y, constant) in lines {
                let form = form(x, y, constant);
                let mut next = Vec::new();
                for part in &parts {
                    let split = part.split(&form);
                    if let Some(above) = &split.above {
                        prop_assert!(above.corners.iter().all(|c| !form.at(c).is_negative()));
                        prop_assert!(form.at(&above.centre()).is_positive() || split.below.is_none());
                    }
                    if let Some(below) = &split.below {
                        prop_assert!(below.corners.iter().all(|c| !form.at(c).is_positive()));
                    }
                    next.extend(split.above.into_iter().chain(split.below));
                }
                parts = next;
                parts.iter().for_each(check_convex);
                let total: BigRational = parts.iter().map(Polygon::area).sum();
                prop_assert_eq!(total, whole(64));
            }
        }
    }
}
