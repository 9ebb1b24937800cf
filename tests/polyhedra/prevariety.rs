//! Dominant balances of random systems against the definition, point by point, and what
//! the published systems do not show: required processes, bounds, stops and limits.

use std::ops::ControlFlow;

use num_rational::BigRational;
use num_traits::{Signed, Zero};
use proptest::prelude::*;
use scalewright::limits;
use scalewright::number::Exponent;
use scalewright::polyhedra::prevariety::{
    Balances, Candidate, Ending, Equation, LinearForm, Source, System, Term, balances,
    contradiction,
};
use scalewright::polyhedra::{Condition, Outcome, Program, Relation, maximise};

use super::{largest_at, ratio};

fn all_balances(system: &System) -> Balances {
    balances(system, &mut |_| ControlFlow::Continue(()))
}

fn term(process: usize, exponents: &[i64], constant: BigRational) -> Term {
    Term {
        process,
        exponents: exponents
            .iter()
            .map(|&e| Exponent::whole(e).unwrap())
            .collect(),
        constant,
    }
}

fn equation(terms: Vec<Term>) -> Equation {
    Equation {
        terms,
        required: Vec::new(),
    }
}

fn form(exponents: &[i64], constant: i64) -> LinearForm {
    LinearForm {
        exponents: exponents.iter().map(|&e| ratio(e, 1)).collect(),
        constant: ratio(constant, 1),
    }
}

fn system(n_unknowns: usize, equations: Vec<Equation>) -> System {
    System {
        n_unknowns,
        equations,
        within: Vec::new(),
    }
}

// ------------------------------------------------------------- by the definition

/// Whether a point is a consistent balance.
fn is_balance(system: &System, point: &[BigRational]) -> bool {
    let balanced = |(equation, largest): (&Equation, Vec<usize>)| {
        let processes: Vec<usize> = largest.iter().map(|&t| equation.terms[t].process).collect();
        !equation.holds_unknown()
            || processes.iter().any(|&p| p != processes[0])
                && equation.required.iter().all(|p| processes.contains(p))
    };
    system
        .equations
        .iter()
        .zip(largest_at(system, point))
        .all(balanced)
        && system
            .within
            .iter()
            .all(|bound| !bound.at(point).is_negative())
}

fn holds(candidate: &Candidate, point: &[BigRational]) -> bool {
    candidate
        .equalities
        .iter()
        .all(|form| form.at(point).is_zero())
        && candidate
            .inequalities
            .iter()
            .all(|i| !i.form.at(point).is_negative())
}

/// The differences of any two terms of an equation, and the bounds.
fn borders(system: &System) -> Vec<LinearForm> {
    let mut borders = system.within.clone();
    for equation in &system.equations {
        for (index, a) in equation.terms.iter().enumerate() {
            for b in &equation.terms[..index] {
                let exponents = a.exponents.iter().zip(&b.exponents);
                borders.push(LinearForm {
                    exponents: exponents
                        .map(|(a, b)| a.to_rational() - b.to_rational())
                        .collect(),
                    constant: &a.constant - &b.constant,
                });
            }
        }
    }
    borders
}

/// A point where the forms are 0, if there is one.
fn solve(n_unknowns: usize, forms: &[&LinearForm]) -> Option<Vec<BigRational>> {
    let condition = |form: &&LinearForm| Condition {
        coefficients: form.exponents.clone(),
        relation: Relation::Equal,
        limit: -form.constant.clone(),
    };
    let program = Program {
        objective: vec![BigRational::zero(); n_unknowns],
        conditions: forms.iter().map(condition).collect(),
        bounds: Vec::new(),
    };
    match maximise(&program) {
        Outcome::Optimal { point, .. } => Some(point),
        Outcome::Infeasible | Outcome::Unbounded => None,
    }
}

/// Points that tell systems apart: a grid of halves, crossings of up to `n` borders (all
/// single ones; pairs and triples as `step` picks them) and the points of candidates.
fn points(system: &System, found: &[Candidate], step: usize) -> Vec<Vec<BigRational>> {
    let n = system.n_unknowns;
    let reach = [0, 12, 5, 2][n];
    let mut points: Vec<Vec<BigRational>> = vec![Vec::new()];
    for _ in 0..n {
        let values = || (-reach..=reach).map(|half| ratio(half, 2));
        let longer = |p: Vec<BigRational>| values().map(move |v| [&p[..], &[v]].concat());
        points = points.into_iter().flat_map(longer).collect();
    }
    let borders = borders(system);
    for (index, a) in borders.iter().enumerate() {
        points.extend(solve(n, &[a]));
        for (other, b) in borders[..index].iter().enumerate().step_by(step) {
            points.extend(solve(n, &[a, b]));
            if n == 3 {
                let c = &borders[(index * 7 + other * 3) % borders.len()];
                points.extend(solve(n, &[a, b, c]));
            }
        }
    }
    points.extend(found.iter().map(|candidate| candidate.point.clone()));
    points
}

fn is_within(a: &Candidate, b: &Candidate) -> bool {
    let attaining = a.attaining.iter().zip(&b.attaining);
    attaining
        .into_iter()
        .all(|(a, b)| a.iter().all(|term| b.contains(term)))
        && a.tight.iter().all(|bound| b.tight.contains(bound))
}

// ------------------------------------------------------------------ random systems

fn any_equation(n_unknowns: usize) -> impl Strategy<Value = Equation> {
    let exponents = prop::collection::vec(
        (-2_i64..3, prop_oneof![3 => Just(1_i64), 1 => Just(2)]),
        n_unknowns,
    );
    let term = (0_usize..4, exponents, -3_i64..4).prop_map(|(process, exponents, constant)| Term {
        process,
        exponents: exponents
            .iter()
            .map(|&(n, d)| Exponent::from_rational(&ratio(n, d)).unwrap())
            .collect(),
        constant: ratio(constant, 1),
    });
    let required = prop_oneof![5 => Just(Vec::new()), 1 => prop::collection::vec(0_usize..4, 1..3)];
    let terms = prop::collection::vec(term, 1..6);
    (terms, required).prop_map(|(terms, required)| Equation { terms, required })
}

fn any_system() -> impl Strategy<Value = System> {
    (1_usize..4).prop_flat_map(|n_unknowns| {
        let bound = (prop::collection::vec(-2_i64..3, n_unknowns), -2_i64..4);
        let bound = bound.prop_map(|(exponents, constant)| form(&exponents, constant));
        let within = prop_oneof![3 => Just(Vec::new()), 1 => prop::collection::vec(bound, 1..4)];
        let equations = prop::collection::vec(any_equation(n_unknowns), 1..4);
        (equations, within).prop_map(move |(equations, within)| System {
            n_unknowns,
            equations,
            within,
        })
    })
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    #[test]
    fn candidates_cover_exactly_the_points_that_are_balances(system in any_system(), step in 1_usize..4) {
        let found = all_balances(&system);
        prop_assert_eq!(found.ending, Ending::Complete);
        for point in points(&system, &found.candidates, step) {
            let covered = found.candidates.iter().any(|candidate| holds(candidate, &point));
            prop_assert_eq!(covered, is_balance(&system, &point), "at {:?}", point);
        }
    }

    #[test]
    fn a_candidate_says_what_its_inner_point_shows(system in any_system()) {
        for candidate in all_balances(&system).candidates {
            prop_assert_eq!(&largest_at(&system, &candidate.point), &candidate.attaining);
            prop_assert!(is_balance(&system, &candidate.point));
            prop_assert!(candidate.inequalities.iter().all(|i| i.form.at(&candidate.point).is_positive()));
            let tight: Vec<usize> = (0..system.within.len())
                .filter(|&bound| system.within[bound].at(&candidate.point).is_zero())
                .collect();
            prop_assert_eq!(tight, candidate.tight);
        }
    }

    #[test]
    fn no_candidate_lies_on_the_border_of_another(system in any_system()) {
        let found = all_balances(&system).candidates;
        for (index, a) in found.iter().enumerate() {
            prop_assert!(!found.iter().enumerate().any(|(other, b)| other != index && is_within(b, a)));
        }
    }

    #[test]
    fn no_inequality_is_redundant_and_sources_are_equal_on_it(system in any_system()) {
        for candidate in all_balances(&system).candidates {
            for (index, inequality) in candidate.inequalities.iter().enumerate() {
                let point = beyond(&candidate, index);
                prop_assert!(inequality.form.at(&point).is_negative());
                let border = on_facet(&candidate, index);
                let largest = largest_at(&system, &border);
                for source in &inequality.sources {
                    match *source {
                        Source::Term { equation, term } => prop_assert!(largest[equation].contains(&term)),
                        Source::Bound(bound) => prop_assert!(system.within[bound].at(&border).is_zero()),
                    }
                }
            }
        }
    }

    #[test]
    fn ranges_are_those_of_linear_programs(system in any_system()) {
        for candidate in all_balances(&system).candidates {
            for unknown in 0..system.n_unknowns {
                let highest = extreme(&candidate, unknown, 1);
                let lowest = extreme(&candidate, unknown, -1).map(|value| -value);
                prop_assert_eq!(&candidate.ranges[unknown], &(lowest, highest));
            }
        }
    }

    #[test]
    fn the_order_of_equations_and_terms_has_no_influence(system in any_system()) {
        let mut turned = system.clone();
        turned.equations.reverse();
        turned.equations.iter_mut().for_each(|equation| equation.terms.reverse());
        let mut back: Vec<Vec<Vec<usize>>> = Vec::new();
        for mut candidate in all_balances(&turned).candidates {
            candidate.attaining.reverse();
            for (equation, terms) in system.equations.iter().zip(&mut candidate.attaining) {
                terms.reverse();
                terms.iter_mut().for_each(|term| *term = equation.terms.len() - 1 - *term);
            }
            back.push(candidate.attaining);
        }
        let mut found: Vec<_> = all_balances(&system).candidates.into_iter().map(|c| c.attaining).collect();
        found.sort();
        back.sort();
        prop_assert_eq!(found, back);
    }

    #[test]
    fn a_contradiction_is_one_and_has_no_smaller_part(system in any_system()) {
        let found = contradiction(&system, &mut |_| ControlFlow::Continue(()));
        let part = |equations: &[usize]| System {
            equations: equations.iter().map(|&index| system.equations[index].clone()).collect(),
            ..system.clone()
        };
        match found {
            // With bounds that nothing meets there is no balance, whatever the equations.
            None => prop_assert!(!all_balances(&system).candidates.is_empty() || all_balances(&part(&[])).candidates.is_empty()),
            Some(equations) => {
                prop_assert!(all_balances(&part(&equations)).candidates.is_empty());
                for left_out in &equations {
                    let rest: Vec<usize> = equations.iter().copied().filter(|e| e != left_out).collect();
                    prop_assert!(!all_balances(&part(&rest)).candidates.is_empty() || rest.is_empty());
                }
            }
        }
    }

    #[test]
    fn what_was_found_before_a_stop_is_kept(system in any_system(), n_steps in 0_usize..30) {
        let all = all_balances(&system);
        let mut steps = 0;
        let some = balances(&system, &mut |_| {
            steps += 1;
            if steps > n_steps { ControlFlow::Break(()) } else { ControlFlow::Continue(()) }
        });
        prop_assert!(some.candidates.iter().all(|candidate| all.candidates.contains(candidate)));
        match some.ending {
            Ending::Complete => prop_assert_eq!(some.candidates, all.candidates),
            Ending::Stopped => prop_assert!(steps == n_steps + 1),
            Ending::TooLarge => prop_assert!(false, "no limit is near"),
        }
    }
}

fn program(candidate: &Candidate, objective: Vec<BigRational>) -> Program {
    let condition = |form: &LinearForm, relation: Relation| Condition {
        coefficients: form.exponents.iter().map(|e| -e).collect(),
        relation,
        limit: form.constant.clone(),
    };
    let equalities = candidate
        .equalities
        .iter()
        .map(|form| condition(form, Relation::Equal));
    let inequalities = candidate
        .inequalities
        .iter()
        .map(|i| condition(&i.form, Relation::AtMost));
    Program {
        objective,
        conditions: equalities.chain(inequalities).collect(),
        bounds: Vec::new(),
    }
}

/// The largest value of an unknown times the sign.
fn extreme(candidate: &Candidate, unknown: usize, sign: i64) -> Option<BigRational> {
    let mut objective = vec![BigRational::zero(); candidate.point.len()];
    objective[unknown] = ratio(sign, 1);
    match maximise(&program(candidate, objective)) {
        Outcome::Optimal { value, .. } => Some(value),
        Outcome::Unbounded => None,
        Outcome::Infeasible => panic!("a candidate has points"),
    }
}

/// A point that meets all conditions but one, which it fails by 1 at least.
fn beyond(candidate: &Candidate, index: usize) -> Vec<BigRational> {
    let mut program = program(candidate, vec![BigRational::zero(); candidate.point.len()]);
    let condition = &mut program.conditions[candidate.equalities.len() + index];
    condition
        .coefficients
        .iter_mut()
        .for_each(|c| *c = -c.clone());
    condition.limit = -condition.limit.clone() - ratio(1, 1_000_000);
    match maximise(&program) {
        Outcome::Optimal { point, .. } => point,
        Outcome::Infeasible | Outcome::Unbounded => panic!("the inequality is redundant"),
    }
}

/// A point of the candidate where one of its inequalities is an equality.
fn on_facet(candidate: &Candidate, index: usize) -> Vec<BigRational> {
    let mut program = program(candidate, vec![BigRational::zero(); candidate.point.len()]);
    program.conditions[candidate.equalities.len() + index].relation = Relation::Equal;
    match maximise(&program) {
        Outcome::Optimal { point, .. } => point,
        Outcome::Infeasible | Outcome::Unbounded => panic!("the inequality touches nothing"),
    }
}

// --------------------------------------------------------------------- by hand

#[test]
fn no_equation_leaves_the_whole_space() {
    let found = all_balances(&system(2, Vec::new()));
    assert_eq!(found.candidates.len(), 1);
    assert_eq!(found.candidates[0].dimension, 2);
    assert_eq!(found.candidates[0].ranges, [(None, None), (None, None)]);
}

/// W L/U against H and 1: continuity, where W = U H/L comes out of W <= U H/L only with
/// the vertical divergence among the largest.
#[test]
fn a_required_process_picks_a_point_out_of_a_family() {
    let zero = || ratio(0, 1);
    let terms = vec![
        term(0, &[0], zero()),
        term(1, &[0], zero()),
        term(2, &[1], ratio(2, 1)),
    ];
    let mut continuity = equation(terms);
    let family = all_balances(&system(1, vec![continuity.clone()]));
    assert_eq!(family.candidates.len(), 1);
    assert_eq!(family.candidates[0].ranges, [(None, Some(ratio(-2, 1)))]);
    let joins = [Source::Term {
        equation: 0,
        term: 2,
    }];
    assert_eq!(family.candidates[0].inequalities[0].sources, joins);
    continuity.required = vec![0, 2];
    let point = all_balances(&system(1, vec![continuity]));
    assert_eq!(point.candidates.len(), 1);
    assert_eq!(point.candidates[0].point, [ratio(-2, 1)]);
    assert_eq!(point.candidates[0].attaining, [[0, 1, 2]]);
}

#[test]
fn a_bound_cuts_a_family_and_is_named() {
    let terms = vec![term(0, &[1, 0], ratio(0, 1)), term(1, &[0, 1], ratio(0, 1))];
    let mut line = system(2, vec![equation(terms)]);
    line.within = vec![form(&[0, -1], 3)];
    let found = all_balances(&line);
    assert_eq!(found.candidates.len(), 1);
    assert_eq!(
        found.candidates[0].inequalities[0].sources,
        [Source::Bound(0)]
    );
    assert_eq!(
        found.candidates[0].ranges,
        [(None, Some(ratio(3, 1))), (None, Some(ratio(3, 1)))]
    );
    assert!(found.candidates[0].tight.is_empty());
    line.within.push(form(&[1, 0], -3));
    let corner = all_balances(&line);
    assert_eq!(corner.candidates[0].tight, [0, 1]);
    line.within.push(form(&[1, 0], -4));
    assert!(all_balances(&line).candidates.is_empty());
}

/// D^-2 against 1 and K, where K ranges from 1/10 to 10: one balance for each half of
/// the range, and the tie of 1 and K, which holds at one value of K only.
#[test]
fn a_range_of_a_known_scale_falls_into_parts() {
    let zero = || ratio(0, 1);
    let terms = vec![
        term(0, &[0, 0], zero()),
        term(1, &[-2, 0], zero()),
        term(2, &[0, 1], zero()),
    ];
    let mut layer = system(2, vec![equation(terms)]);
    layer.within = vec![form(&[0, 1], 1), form(&[0, -1], 1)];
    let found = all_balances(&layer).candidates;
    let parts: Vec<&Candidate> = found.iter().filter(|c| c.dependent == [0]).collect();
    assert_eq!((found.len(), parts.len()), (3, 2));
    assert_eq!(parts[0].attaining, [[0, 1]]);
    assert_eq!(parts[0].ranges[1], (Some(ratio(-1, 1)), Some(ratio(0, 1))));
    assert_eq!(parts[1].attaining, [[1, 2]]);
    assert_eq!(parts[1].equalities[0].exponents, [ratio(1, 1), ratio(1, 2)]);
    assert_eq!(parts[1].ranges[1], (Some(ratio(0, 1)), Some(ratio(1, 1))));
    assert!(parts.iter().all(|part| part.tight.is_empty()));
}

/// Two constants that differ by the least step of a dyadic number are not equal.
#[test]
fn near_ties_are_told_apart_exactly() {
    let step = BigRational::new(1.into(), num_bigint::BigInt::from(2).pow(60));
    let terms = |constant: BigRational| {
        let tie = [
            term(0, &[0], ratio(5, 1)),
            term(1, &[0], constant),
            term(2, &[1], ratio(0, 1)),
        ];
        system(1, vec![equation(tie.to_vec())])
    };
    let equal = all_balances(&terms(ratio(5, 1)));
    assert_eq!(equal.candidates[0].attaining, [[0, 1]]);
    assert_eq!(equal.candidates[0].dimension, 1);
    let smaller = all_balances(&terms(ratio(5, 1) - &step));
    assert_eq!(smaller.candidates[0].attaining, [[0, 2]]);
    let larger = all_balances(&terms(ratio(5, 1) + &step));
    assert_eq!(larger.candidates[0].point, [ratio(5, 1) + step]);
}

/// The corners of a cube in many unknowns are too many; the search says so.
#[test]
fn a_cell_with_too_many_corners_ends_the_search() {
    let n_unknowns = 12;
    assert!(1 << n_unknowns > limits::CELL_RAYS);
    let mut cube = system(n_unknowns, Vec::new());
    for unknown in 0..n_unknowns {
        let mut exponents = vec![0; n_unknowns];
        exponents[unknown] = 1;
        cube.within.push(form(&exponents, 0));
        exponents[unknown] = -1;
        cube.within.push(form(&exponents, 1));
    }
    let found = all_balances(&cube);
    assert_eq!(found.ending, Ending::TooLarge);
    assert!(found.candidates.is_empty());
}

/// Each of eight unknowns may take four values: 65,536 balances.
#[test]
fn too_many_balances_end_the_search() {
    let n_unknowns = 8;
    let quartic = |unknown: usize| {
        let slope = |power: i64| {
            let mut exponents = vec![0; n_unknowns];
            exponents[unknown] = power;
            term(power as usize, &exponents, ratio(-power * power, 1))
        };
        equation((0..5).map(slope).collect())
    };
    let found = all_balances(&system(n_unknowns, (0..n_unknowns).map(quartic).collect()));
    assert_eq!(found.ending, Ending::TooLarge);
    assert_eq!(found.candidates.len(), limits::BALANCES);
}
