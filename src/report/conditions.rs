//! Conditions between sizes in words: the form that all reports share, and the one of the
//! JSON answers, which speaks of named groups wherever these give the ratio.

use crate::analysis::Exponents;
use crate::analysis::reduce::{Inequality, ReducedEquation, ReducedTerm};
use crate::analysis::sizes::{Verdict, at_most};
use crate::number::Number;
use crate::report::layout::{number, range};
use crate::report::words::{factors, product};

/// Terms that depend on the ranges and may go under the same conditions.
#[derive(Debug, Clone)]
pub struct Depends<'a> {
    /// The terms.
    pub terms: Vec<&'a ReducedTerm>,
    /// Any of these is enough; those that are met nowhere in the ranges are left out.
    pub conditions: Vec<&'a Inequality>,
}

/// What is said of a term that depends on the ranges by no condition that could be met.
pub const MATTERS_IN_PART: &str = "matters in part of the ranges";

/// The terms that depend on the ranges, with the conditions under which they may go.
pub fn depends(equation: &ReducedEquation) -> Vec<Depends<'_>> {
    let mut found: Vec<(Vec<String>, Depends<'_>)> = Vec::new();
    let is_wanted = |term: &&ReducedTerm| term.verdict == Verdict::Depends;
    for term in equation.kept.iter().filter(is_wanted) {
        let reachable = term.conditions.iter().filter(|found| is_reachable(found));
        let conditions: Vec<&Inequality> = reachable.collect();
        let texts: Vec<String> = conditions.iter().copied().map(with_value).collect();
        match found.iter_mut().find(|(known, _)| *known == texts) {
            Some((_, depends)) => depends.terms.push(term),
            None => {
                let terms = vec![term];
                found.push((texts, Depends { terms, conditions }));
            }
        }
    }
    found.into_iter().map(|(_, depends)| depends).collect()
}

/// What becomes of such terms: `may go where Ro <= 0.1 (now 0.03 .. 0.09 .. 0.28)`.
pub fn fate(depends: &Depends<'_>) -> String {
    let texts: Vec<String> = depends.conditions.iter().copied().map(with_value).collect();
    match texts.as_slice() {
        [] => MATTERS_IN_PART.to_owned(),
        texts => format!("may go where {}", texts.join(" or ")),
    }
}

/// Whether a condition is met somewhere in the ranges.
pub fn is_reachable(condition: &Inequality) -> bool {
    let lowest = condition.value.low;
    lowest.is_nan() || at_most(lowest, condition.limit)
}

/// `Ro <= 0.1 (now 0.03 .. 0.09 .. 0.28)`.
pub fn with_value(condition: &Inequality) -> String {
    format!(
        "{} (now {})",
        inequality(condition),
        range(&condition.value)
    )
}

/// `Ro <= 0.1`, or in scales where groups would bring in what the ratio does not hold.
pub fn inequality(condition: &Inequality) -> String {
    let (number, exponents) = left(condition);
    at_most_limit(&product(number, exponents), condition)
}

/// The ratio of a condition as reports write it.
pub fn left(condition: &Inequality) -> (&Number, &Exponents) {
    match told_groups(condition) {
        Some((rest, groups)) => (rest, groups),
        None => (&condition.factors.number, &condition.factors.exponents),
    }
}

/// The groups in which reports write a condition; `None` of one written in scales.
pub fn told_groups(condition: &Inequality) -> Option<&(Number, Exponents)> {
    condition.groups.as_ref().filter(|_| !condition.has_foreign)
}

/// The same in named groups wherever they give it.
pub fn in_groups(condition: &Inequality) -> String {
    let left = match &condition.groups {
        Some((rest, groups)) => product(rest, groups),
        None => factors(&condition.factors),
    };
    at_most_limit(&left, condition)
}

/// The conditions of a term in named groups, any of which is enough.
pub fn all_in_groups(term: &ReducedTerm) -> Option<String> {
    let texts: Vec<String> = term.conditions.iter().map(in_groups).collect();
    (!texts.is_empty()).then(|| texts.join(" or "))
}

fn at_most_limit(left: &str, condition: &Inequality) -> String {
    format!("{left} <= {}", number(condition.limit))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::analysis::Factors;
    use crate::number::Exponent;
    use crate::units::Range;

    fn condition(low: f64, has_foreign: bool) -> Inequality {
        let power = |name: &str, power| (name.to_owned(), power);
        let (one, minus) = (Exponent::ONE, Exponent::ONE.negated());
        Inequality {
            factors: Factors {
                number: Number::one(),
                exponents: vec![power("R", one), power("V", minus), power("T", minus)],
            },
            groups: Some((Number::one(), vec![power("Ro_T", one), power("Ro", minus)])),
            has_foreign,
            value: Range {
                low,
                nominal: 4.0,
                high: 10.0,
            },
            limit: 0.1,
        }
    }

    #[test]
    fn groups_are_told_unless_they_bring_something_in() {
        let (fitting, foreign) = (condition(0.02, false), condition(0.02, true));
        assert_eq!(with_value(&fitting), "Ro_T/Ro <= 0.1 (now 0.02 .. 4 .. 10)");
        assert_eq!(inequality(&foreign), "R/(V*T) <= 0.1");
        assert_eq!(in_groups(&foreign), "Ro_T/Ro <= 0.1");
        assert!(told_groups(&foreign).is_none());
    }

    #[test]
    fn what_is_met_nowhere_is_no_condition() {
        assert!(is_reachable(&condition(0.02, false)));
        assert!(is_reachable(&condition(0.1 * (1.0 + 1e-14), false)));
        assert!(!is_reachable(&condition(0.1001, false)));
        assert!(is_reachable(&condition(f64::NAN, false)), "it is not known");
    }

    #[test]
    fn a_term_without_a_condition_is_told_of_all_the_same() {
        let depends = Depends {
            terms: Vec::new(),
            conditions: Vec::new(),
        };
        assert_eq!(fate(&depends), "matters in part of the ranges");
    }
}
