//! Shares over a box: cases by hand, a solver in floating point, and scans of the box.

use microlp::{ComparisonOp, OptimizationDirection, Problem};
use proptest::prelude::*;
use scalewright::number::Exponent;
use scalewright::polyhedra::{Affine, highest, highest_against, lowest, lowest_of_process};

fn term(slopes: &[i64], constant: f64) -> Affine {
    Affine {
        slopes: slopes
            .iter()
            .map(|&s| Exponent::whole(s).unwrap())
            .collect(),
        constant,
    }
}

#[track_caller]
fn assert_near(found: f64, expected: f64) {
    assert!(
        (found - expected).abs() < 1e-12,
        "{found}, expected {expected}"
    );
}

#[test]
fn the_highest_share_may_lie_inside_the_box() {
    // exp(-1.5) against x and 1/x: nearest to both at x = 1, inside 0.1 .. 10.
    let terms = [term(&[0], -1.5), term(&[1], 0.0), term(&[-1], 0.0)];
    let bounds = [(-10.0_f64.ln(), 10.0_f64.ln())];
    assert_near(highest(0, &terms, &bounds), -1.5);
    assert_near(lowest(0, &terms, &bounds), -1.5 - 10.0_f64.ln());
    // Moved apart: exp(-1.5) against e x and 1/x, nearest at x = exp(-1/2).
    let moved = [term(&[0], -1.5), term(&[1], 1.0), term(&[-1], 0.0)];
    assert_near(highest(0, &moved, &bounds), -2.0);
}

#[test]
fn two_scales_meet_inside_the_box() {
    // 1 against x, y and 1/(x y) times 3: all three ratios are equal at x = y = 3^(1/3).
    let terms = [
        term(&[0, 0], 0.0),
        term(&[1, 0], 0.0),
        term(&[0, 1], 0.0),
        term(&[-1, -1], 3.0_f64.ln()),
    ];
    let bounds = [(-2.0, 2.5), (-1.5, 3.0)];
    assert_near(highest(0, &terms, &bounds), -3.0_f64.ln() / 3.0);
}

#[test]
fn a_process_is_as_large_as_its_largest_term() {
    // A process of x and 1/x against 1: least at x = 1, where it is as large.
    let terms = [term(&[1], 0.0), term(&[-1], 0.0), term(&[0], 0.5)];
    let bounds = [(-3.0, 2.0)];
    assert_near(lowest_of_process(&[0, 1], &terms, &bounds), -0.5);
    assert_near(lowest(0, &terms, &bounds), -6.0);
    assert_near(lowest_of_process(&[0, 1, 2], &terms, &bounds), 0.0);
}

#[test]
fn a_box_without_width_is_a_point() {
    let terms = [term(&[2, 1], 0.25), term(&[0, 3], 1.0)];
    let bounds = [(0.5, 0.5), (-0.75, -0.75)];
    assert_near(highest(0, &terms, &bounds), 0.0);
    assert_near(highest(1, &terms, &bounds), -1.75);
    assert_near(lowest(1, &terms, &bounds), -1.75);
}

#[test]
fn a_lone_term_has_the_whole_share() {
    let terms = [term(&[1], -3.0)];
    assert_near(highest(0, &terms, &[(0.0, 1.0)]), 0.0);
    assert_near(lowest(0, &terms, &[(0.0, 1.0)]), 0.0);
    assert_eq!(
        highest_against(0, &[], &terms, &[(0.0, 1.0)]),
        f64::INFINITY
    );
}

#[test]
fn a_term_of_size_zero_is_no_rival_and_has_no_share() {
    let terms = [term(&[1], f64::NEG_INFINITY), term(&[0], 0.0)];
    assert_near(highest(1, &terms, &[(0.0, 1.0)]), 0.0);
    assert_eq!(highest(0, &terms, &[(0.0, 1.0)]), f64::NEG_INFINITY);
    assert_eq!(lowest(0, &terms, &[(0.0, 1.0)]), f64::NEG_INFINITY);
}

#[test]
fn what_is_not_finite_gives_no_number() {
    let terms = [term(&[1], f64::NAN), term(&[0], 0.0)];
    assert!(highest(1, &terms, &[(0.0, 1.0)]).is_nan());
    assert!(lowest(1, &terms, &[(0.0, 1.0)]).is_nan());
    let terms = [term(&[1], 0.0), term(&[0], 0.0)];
    assert!(highest(1, &terms, &[(0.0, f64::INFINITY)]).is_nan());
}

#[test]
fn a_ratio_may_exceed_one_against_chosen_rivals() {
    let terms = [term(&[1], 0.0), term(&[-1], 0.0), term(&[0], 9.0)];
    let bounds = [(-2.0, 3.0)];
    assert_near(highest_against(0, &[1], &terms, &bounds), 6.0);
    assert_near(highest_against(0, &[1, 2], &terms, &bounds), -6.0);
}

#[test]
fn steep_slopes_and_large_numbers_stay_exact() {
    // Slopes near the limit of exponents, whose common denominator leaves 64 bits.
    let slope = |n, d| Exponent::ratio(n, d);
    let terms = [
        Affine {
            slopes: vec![slope(999_983, 999_979), slope(1, 999_961)],
            constant: 0.0,
        },
        Affine {
            slopes: vec![slope(999_959, 999_983), slope(1, 999_953)],
            constant: 0.0,
        },
        Affine {
            slopes: vec![slope(1, 3), slope(5, 7)],
            constant: 400.0,
        },
    ];
    let bounds = [(-700.0, 700.0), (-700.0, 700.0)];
    let found = highest(0, &terms, &bounds);
    assert!((found - by_floating_point(0, &terms, &bounds)).abs() < 1e-8);
}

fn any_terms() -> impl Strategy<Value = (Vec<Affine>, Vec<(f64, f64)>)> {
    (1_usize..6, 1_usize..9).prop_flat_map(|(n_scales, n_terms)| {
        let slope = prop_oneof![2 => Just((0, 1)), 3 => (-3_i64..4, 1_i64..4)];
        let slopes = prop::collection::vec(slope, n_scales);
        let term = (slopes, -5.0..5.0).prop_map(|(slopes, constant)| Affine {
            slopes: slopes.iter().map(|&(n, d)| exponent(n, d)).collect(),
            constant,
        });
        let width = prop_oneof![1 => Just(0.0), 4 => 0.0..4.0];
        let bound = (-3.0..3.0, width).prop_map(|(low, width)| (low, low + width));
        let terms = prop::collection::vec(term, n_terms);
        (terms, prop::collection::vec(bound, n_scales))
    })
}

fn exponent(numer: i64, denom: i64) -> Exponent {
    Exponent::from_rational(&super::ratio(numer, denom)).unwrap()
}

/// Maximise t subject to t <= ratio to each other term, by microlp.
fn by_floating_point(of: usize, terms: &[Affine], bounds: &[(f64, f64)]) -> f64 {
    let mut problem = Problem::new(OptimizationDirection::Maximize);
    let t = problem.add_var(1.0, (f64::NEG_INFINITY, 0.0));
    let scales: Vec<microlp::Variable> = bounds
        .iter()
        .map(|&bound| problem.add_var(0.0, bound))
        .collect();
    for (rival, term) in terms.iter().enumerate().filter(|(rival, _)| *rival != of) {
        let slope = |k: usize| term.slopes[k].to_f64() - terms[of].slopes[k].to_f64();
        let mut expression = vec![(t, 1.0)];
        expression.extend(scales.iter().enumerate().map(|(k, &v)| (v, slope(k))));
        let limit = terms[of].constant - terms[rival].constant;
        problem.add_constraint(&expression[..], ComparisonOp::Le, limit);
    }
    let solution = problem.solve().unwrap().into_solution();
    solution.expect("no time limit is set").objective()
}

/// For each rival, minimise z subject to z >= ratio of each own term to it, by microlp.
fn lowest_by_floating_point(of: &[usize], terms: &[Affine], bounds: &[(f64, f64)]) -> f64 {
    let mut lowest = 0.0_f64;
    for rival in (0..terms.len()).filter(|rival| !of.contains(rival)) {
        let mut problem = Problem::new(OptimizationDirection::Minimize);
        let z = problem.add_var(1.0, (f64::NEG_INFINITY, f64::INFINITY));
        let scales: Vec<microlp::Variable> = bounds
            .iter()
            .map(|&bound| problem.add_var(0.0, bound))
            .collect();
        for &own in of {
            let slope = |k: usize| terms[rival].slopes[k].to_f64() - terms[own].slopes[k].to_f64();
            let mut expression = vec![(z, 1.0)];
            expression.extend(scales.iter().enumerate().map(|(k, &v)| (v, slope(k))));
            let limit = terms[own].constant - terms[rival].constant;
            problem.add_constraint(&expression[..], ComparisonOp::Ge, limit);
        }
        let solution = problem.solve().unwrap().into_solution();
        lowest = lowest.min(solution.expect("no time limit is set").objective());
    }
    lowest
}

fn share_at(of: &[usize], terms: &[Affine], point: &[f64]) -> f64 {
    let size = |index: usize| terms[index].at(point);
    let own = of
        .iter()
        .map(|&i| size(i))
        .fold(f64::NEG_INFINITY, f64::max);
    own - (0..terms.len()).map(size).fold(f64::NEG_INFINITY, f64::max)
}

/// Points of a grid with four steps along each scale; corners are among them.
fn grid(bounds: &[(f64, f64)]) -> Vec<Vec<f64>> {
    bounds
        .iter()
        .fold(vec![Vec::new()], |points, &(low, high)| {
            let steps = (0..=4).map(|step| low + (high - low) * f64::from(step) / 4.0);
            let grow = |x: f64| {
                points
                    .iter()
                    .map(move |p: &Vec<f64>| [&p[..], &[x]].concat())
            };
            steps.flat_map(grow).collect()
        })
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(300))]

    #[test]
    fn highest_agrees_with_floating_point_and_no_point_exceeds_it((terms, bounds) in any_terms()) {
        for of in 0..terms.len() {
            let found = highest(of, &terms, &bounds);
            prop_assert!((found - by_floating_point(of, &terms, &bounds)).abs() < 1e-8);
            for point in grid(&bounds) {
                prop_assert!(share_at(&[of], &terms, &point) <= found + 1e-12);
            }
        }
    }

    #[test]
    fn lowest_is_attained_at_a_corner((terms, bounds) in any_terms()) {
        for of in 0..terms.len() {
            let points = grid(&bounds);
            let scanned = points.iter().map(|p| share_at(&[of], &terms, p)).fold(0.0, f64::min);
            prop_assert!((lowest(of, &terms, &bounds) - scanned).abs() < 1e-12);
        }
    }

    #[test]
    fn lowest_of_a_process_bounds_every_point((terms, bounds) in any_terms()) {
        let of: Vec<usize> = (0..terms.len()).step_by(2).collect();
        let found = lowest_of_process(&of, &terms, &bounds);
        let mut scanned = 0.0_f64;
        for point in grid(&bounds) {
            scanned = scanned.min(share_at(&of, &terms, &point));
        }
        prop_assert!(found <= scanned + 1e-12);
        prop_assert!((found - lowest_by_floating_point(&of, &terms, &bounds)).abs() < 1e-8);
        let singles = of.iter().map(|&i| lowest(i, &terms, &bounds));
        prop_assert!(found >= singles.fold(f64::NEG_INFINITY, f64::max) - 1e-12);
    }
}
