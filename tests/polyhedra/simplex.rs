//! Exact linear programs against microlp, a solver in floating point.

use microlp::{ComparisonOp, OptimizationDirection, Problem};
use num_rational::BigRational;
use num_traits::ToPrimitive;
use proptest::prelude::*;
use scalewright::polyhedra::{Condition, Outcome, Program, Relation, maximise};

use super::ratio;

fn row(values: &[i64]) -> Vec<BigRational> {
    values.iter().map(|&v| ratio(v, 1)).collect()
}

fn at_most(coefficients: &[i64], limit: i64) -> Condition {
    Condition {
        coefficients: row(coefficients),
        relation: Relation::AtMost,
        limit: ratio(limit, 1),
    }
}

fn equal(coefficients: &[i64], limit: i64) -> Condition {
    Condition {
        relation: Relation::Equal,
        ..at_most(coefficients, limit)
    }
}

fn program(objective: &[i64], conditions: Vec<Condition>) -> Program {
    Program {
        objective: row(objective),
        conditions,
        bounds: Vec::new(),
    }
}

fn optimal(value: BigRational, point: Vec<BigRational>) -> Outcome {
    Outcome::Optimal { value, point }
}

#[test]
fn a_corner_of_two_conditions_is_found() {
    let mut lp = program(&[3, 2], vec![at_most(&[2, 1], 3), at_most(&[1, 3], 4)]);
    lp.bounds = vec![(Some(ratio(0, 1)), None); 2];
    assert_eq!(maximise(&lp), optimal(ratio(5, 1), row(&[1, 1])));
}

#[test]
fn free_variables_may_be_negative() {
    let lp = program(&[-1, 0], vec![at_most(&[-3, 0], 1), at_most(&[0, 1], 2)]);
    let Outcome::Optimal { value, point } = maximise(&lp) else {
        panic!("the program has an optimum");
    };
    assert_eq!(value, ratio(1, 3));
    assert_eq!(point[0], ratio(-1, 3));
}

#[test]
fn equalities_hold_and_may_be_redundant() {
    let conditions = vec![
        equal(&[1, 1, 1], 6),
        equal(&[2, 2, 2], 12),
        equal(&[1, -1, 0], 1),
        at_most(&[0, 0, -1], 0),
    ];
    let lp = program(&[1, 0, 0], conditions);
    let point = vec![ratio(7, 2), ratio(5, 2), ratio(0, 1)];
    assert_eq!(maximise(&lp), optimal(ratio(7, 2), point));
}

#[test]
fn contradicting_conditions_are_infeasible() {
    let apart = program(&[1], vec![at_most(&[1], 0), at_most(&[-1], -1)]);
    assert_eq!(maximise(&apart), Outcome::Infeasible);
    let equalities = program(&[0, 0], vec![equal(&[1, 2], 3), equal(&[2, 4], 7)]);
    assert_eq!(maximise(&equalities), Outcome::Infeasible);
    let nothing = program(&[], vec![at_most(&[], -1)]);
    assert_eq!(maximise(&nothing), Outcome::Infeasible);
    let mut crossed = program(&[1], Vec::new());
    crossed.bounds = vec![(Some(ratio(1, 1)), Some(ratio(0, 1)))];
    assert_eq!(maximise(&crossed), Outcome::Infeasible);
}

#[test]
fn a_variable_in_no_condition_is_unbounded_only_if_it_counts() {
    let conditions = || vec![at_most(&[1, 0], 1)];
    assert_eq!(
        maximise(&program(&[1, 1], conditions())),
        Outcome::Unbounded
    );
    assert_eq!(
        maximise(&program(&[1, 0], conditions())),
        optimal(ratio(1, 1), row(&[1, 0]))
    );
}

#[test]
fn infeasible_wins_over_unbounded() {
    let lp = program(&[1, 0], vec![at_most(&[0, 1], 0), at_most(&[0, -1], -1)]);
    assert_eq!(maximise(&lp), Outcome::Infeasible);
}

#[test]
fn the_cycle_of_beale_ends() {
    let rows = [[1, -240, -4, 36], [1, -180, -1, 6]];
    let mut conditions: Vec<Condition> = rows.iter().map(|r| at_most(r, 0)).collect();
    conditions.push(at_most(&[0, 0, 1, 0], 1));
    let mut lp = program(&[0, 0, 0, 0], conditions);
    lp.objective = vec![ratio(3, 4), ratio(-150, 1), ratio(1, 50), ratio(-6, 1)];
    lp.conditions[0].coefficients = [ratio(1, 4), ratio(-60, 1), ratio(-1, 25), ratio(9, 1)].into();
    lp.conditions[1].coefficients = [ratio(1, 2), ratio(-90, 1), ratio(-1, 50), ratio(3, 1)].into();
    lp.bounds = vec![(Some(ratio(0, 1)), None); 4];
    let Outcome::Optimal { value, .. } = maximise(&lp) else {
        panic!("the program has an optimum");
    };
    assert_eq!(value, ratio(1, 20));
}

#[test]
fn numbers_beyond_128_bits_stay_exact() {
    let big = BigRational::from_integer(num_bigint::BigInt::from(7).pow(90));
    let third = &big / ratio(3, 1);
    let mut lp = program(&[1, 1], vec![at_most(&[0, 0], 0), at_most(&[0, 0], 0)]);
    lp.conditions[0].coefficients = vec![big.clone(), ratio(1, 1)];
    lp.conditions[0].limit = &big * &big;
    lp.conditions[1].coefficients = vec![ratio(1, 1), big.clone()];
    lp.conditions[1].limit = third.clone();
    let Outcome::Optimal { point, .. } = maximise(&lp) else {
        panic!("the program has an optimum");
    };
    assert_eq!(&point[0] * &big + &point[1], &big * &big);
    assert_eq!(&point[0] + &point[1] * &big, third);
}

fn any_program() -> impl Strategy<Value = Program> {
    (1_usize..6, 0_usize..8).prop_flat_map(|(n_variables, n_conditions)| {
        // Quarters, which floating point holds exactly: nearly dependent rows fool it.
        let coefficient = || (-8_i64..9).prop_map(|n| ratio(n, 4));
        let coefficients = move || prop::collection::vec(coefficient(), n_variables);
        let relation = prop::bool::weighted(0.2).prop_map(|equal| match equal {
            true => Relation::Equal,
            false => Relation::AtMost,
        });
        let condition =
            (coefficients(), relation, -6_i64..13).prop_map(|(coefficients, relation, limit)| {
                Condition {
                    coefficients,
                    relation,
                    limit: ratio(limit, 2),
                }
            });
        let end = || prop::option::weighted(0.6, -5_i64..4);
        let bound = (end(), end()).prop_map(|(low, high)| {
            let high = high.map(|h| h.max(low.unwrap_or(h)));
            (low.map(|v| ratio(v, 1)), high.map(|v| ratio(v, 1)))
        });
        let bounds = prop::collection::vec(bound, n_variables);
        let conditions = prop::collection::vec(condition, n_conditions);
        (coefficients(), conditions, bounds).prop_map(|(objective, conditions, bounds)| Program {
            objective,
            conditions,
            bounds,
        })
    })
}

fn float(value: &BigRational) -> f64 {
    value.to_f64().unwrap()
}

/// The optimum in floating point, or why there is none.
fn witness(lp: &Program) -> Result<f64, microlp::Error> {
    let mut problem = Problem::new(OptimizationDirection::Maximize);
    let variables: Vec<microlp::Variable> = (lp.objective.iter().zip(&lp.bounds))
        .map(|(c, (low, high))| {
            let low = low.as_ref().map_or(f64::NEG_INFINITY, float);
            let high = high.as_ref().map_or(f64::INFINITY, float);
            problem.add_var(float(c), (low, high))
        })
        .collect();
    for condition in &lp.conditions {
        let expression: Vec<(microlp::Variable, f64)> = (variables.iter())
            .zip(&condition.coefficients)
            .map(|(&v, c)| (v, float(c)))
            .collect();
        let operation = match condition.relation {
            Relation::AtMost => ComparisonOp::Le,
            Relation::Equal => ComparisonOp::Eq,
        };
        problem.add_constraint(&expression[..], operation, float(&condition.limit));
    }
    let solution = problem
        .solve()?
        .into_solution()
        .expect("no time limit is set");
    Ok(solution.objective())
}

fn check_feasible(lp: &Program, point: &[BigRational]) {
    for condition in &lp.conditions {
        let left: BigRational = (condition.coefficients.iter().zip(point))
            .map(|(c, x)| c * x)
            .sum();
        match condition.relation {
            Relation::AtMost => assert!(left <= condition.limit),
            Relation::Equal => assert_eq!(left, condition.limit),
        }
    }
    for ((low, high), x) in lp.bounds.iter().zip(point) {
        assert!(low.as_ref().is_none_or(|low| low <= x));
        assert!(high.as_ref().is_none_or(|high| x <= high));
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(600))]

    #[test]
    fn agrees_with_a_solver_in_floating_point(lp in any_program()) {
        match (maximise(&lp), witness(&lp)) {
            (Outcome::Optimal { value, point }, Ok(other)) => {
                check_feasible(&lp, &point);
                prop_assert!((float(&value) - other).abs() < 1e-7 * (1.0 + other.abs()));
            }
            (Outcome::Infeasible, Err(microlp::Error::Infeasible)) => {}
            (Outcome::Unbounded, Err(microlp::Error::Unbounded)) => {}
            (ours, other) => prop_assert!(false, "{ours:?} against {other:?}"),
        }
    }
}
