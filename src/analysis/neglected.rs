//! What a reduced equation leaves out: its dropped terms, and the first terms that its
//! expansions in small ratios leave out.

use crate::algebra::monomial::Monomial;
use crate::analysis::Case;
use crate::analysis::reduce::Kept;
use crate::analysis::sizes::{self, same};
use crate::units::Range;

/// The error of a reduced equation, in shares of its largest term.
#[derive(Debug, Clone, PartialEq)]
pub struct Neglected {
    /// The highest share of a term left out; 0 if none is.
    pub error: f64,
    /// The sum of the highest shares, an upper bound.
    pub error_sum: f64,
    /// The text of the term with the highest share.
    pub first: Option<String>,
}

/// Works out the error of leaving out the dropped terms, by their places, and whatever
/// the expansions leave out.
pub fn neglected(case: &Case, kept: &Kept<'_>, dropped: &[usize]) -> Neglected {
    let terms = &kept.equation.terms;
    let own = dropped
        .iter()
        .map(|idx| (terms[*idx].text.as_str(), kept.shares.shares[*idx]));
    let all: Vec<Monomial> = terms
        .iter()
        .map(|term| term.size.resolved.clone())
        .collect();
    let beyond = kept.equation.neglected.iter().map(|term| {
        let size = [term.size.resolved.clone()];
        (term.text.as_str(), sizes::ratio(&case.setting, &size, &all))
    });
    let left_out: Vec<(&str, Range)> = own.chain(beyond).collect();
    Neglected {
        error: left_out
            .iter()
            .map(|(_, share)| share.high)
            .fold(0.0, f64::max),
        // An empty sum of floating-point numbers would be -0.
        error_sum: left_out
            .iter()
            .fold(0.0, |sum, (_, share)| sum + share.high),
        first: left_out
            .into_iter()
            .reduce(larger)
            .map(|(text, _)| text.to_owned()),
    }
}

/// The one with the higher share; of equals the one that is nominally larger, then the
/// first.
fn larger<'t>(best: (&'t str, Range), next: (&'t str, Range)) -> (&'t str, Range) {
    let (a, b) = (best.1, next.1);
    let is_larger = if same(a.high, b.high) {
        b.nominal > a.nominal && !same(a.nominal, b.nominal)
    } else {
        b.high > a.high
    };
    if is_larger { next } else { best }
}
