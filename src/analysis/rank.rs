//! `rank`: every term with its size, its share of the largest and its verdict.

use crate::algebra::product::Speller;
use crate::analysis::names::Namer;
use crate::analysis::sizes::{Shares, Verdict, order_of_magnitude};
use crate::analysis::{Case, Exponents, Factors};
use crate::model::settings::Setting;
use crate::model::spelling;
use crate::model::terms::{EquationTerms, Side};
use crate::syntax::ast;
use crate::units::Range;

/// An equation with its terms ranked.
#[derive(Debug, Clone)]
pub struct RankedEquation {
    /// Its name.
    pub name: String,
    /// Its title.
    pub title: Option<String>,
    /// The SI unit of its terms.
    pub unit: String,
    /// The tolerance.
    pub tolerance: f64,
    /// Its terms, as written.
    pub terms: Vec<RankedTerm>,
    /// Its processes, in order.
    pub processes: Vec<RankedProcess>,
}

/// A term with its size and share.
#[derive(Debug, Clone)]
pub struct RankedTerm {
    /// Its text, without sign.
    pub text: String,
    /// The same as a tree.
    pub expr: ast::Expr,
    /// Its process.
    pub process: Option<String>,
    /// Its side.
    pub side: Side,
    /// Its size in the user's own scales.
    pub scale: String,
    /// The same as a tree.
    pub scale_expr: ast::Expr,
    /// Its size as number and exponents.
    pub factors: Factors,
    /// Its size.
    pub size: Range,
    /// Its order of magnitude.
    pub order: Option<i32>,
    /// Its share of the largest.
    pub share: Range,
    /// Its ratio to the nominally largest term as a product of named groups.
    pub groups: Option<Exponents>,
    /// What becomes of it.
    pub verdict: Verdict,
    /// For an expression with a size of its own: how far below its largest part it lies.
    pub below_parts: Option<f64>,
}

/// A process with its share.
#[derive(Debug, Clone)]
pub struct RankedProcess {
    /// Its name, or the text of a term without one.
    pub process: String,
    /// The places of its terms.
    pub members: Vec<usize>,
    /// Its share.
    pub share: Range,
    /// What becomes of it.
    pub verdict: Verdict,
}

impl RankedEquation {
    /// The places of its terms, the nominally largest first.
    pub fn largest_first(&self) -> Vec<usize> {
        let mut order: Vec<usize> = (0..self.terms.len()).collect();
        let nominal = |idx: &usize| self.terms[*idx].size.nominal;
        order.sort_by(|a, b| nominal(b).total_cmp(&nominal(a)));
        order
    }
}

/// Ranks an equation; `None` while a scale of it is open or no term is left.
pub fn rank(case: &Case, equation: &EquationTerms, namer: &Namer<'_>) -> Option<RankedEquation> {
    let shares = Shares::of(&case.setting, equation)?;
    let tolerance = case.setting.tolerance();
    let terms = (0..equation.terms.len())
        .map(|idx| ranked_term(case, equation, idx, &shares, namer))
        .collect();
    Some(RankedEquation {
        name: equation.name.clone(),
        title: equation.title.clone(),
        unit: equation.unit.clone(),
        tolerance,
        terms,
        processes: processes(equation, &shares, tolerance),
    })
}

/// How a case spells the terms of an equation.
pub fn speller<'a>(setting: &'a Setting, equation: &EquationTerms) -> Speller<'a> {
    Speller {
        symbols: &setting.names,
        quantities: &setting.quantities,
        with_partials: equation.with_partials,
    }
}

fn ranked_term(
    case: &Case,
    equation: &EquationTerms,
    idx: usize,
    shares: &Shares,
    namer: &Namer<'_>,
) -> RankedTerm {
    let term = &equation.terms[idx];
    let ratio = term
        .size
        .resolved
        .over(&equation.terms[shares.largest].size.resolved);
    let groups = ratio
        .ok()
        .and_then(|ratio| namer.product(&ratio))
        .map(|product| namer.named(&product));
    let speller = speller(&case.setting, equation);
    RankedTerm {
        text: term.text.clone(),
        expr: term.expr.clone(),
        process: term.process.clone(),
        side: term.side,
        // It was computed before, so it is within the limits.
        scale: speller.scale(&term.product).unwrap_or_default(),
        scale_expr: spelling::scale(&term.product, &speller).unwrap_or_else(|_| term.expr.clone()),
        factors: case.factors(&term.size.resolved),
        size: shares.sizes[idx],
        order: order_of_magnitude(shares.sizes[idx].nominal),
        share: shares.shares[idx],
        groups,
        verdict: Verdict::of(&shares.shares[idx], case.setting.tolerance()),
        below_parts: term.below_parts,
    }
}

/// The processes of an equation with the places of their terms, in order of the first.
pub fn members(equation: &EquationTerms) -> Vec<(String, Vec<usize>)> {
    let mut found: Vec<(String, Vec<usize>)> = Vec::new();
    for (idx, term) in equation.terms.iter().enumerate() {
        match found.iter_mut().find(|(name, _)| name == term.label()) {
            Some((_, members)) => members.push(idx),
            None => found.push((term.label().to_owned(), vec![idx])),
        }
    }
    found
}

/// The processes of an equation with their shares and verdicts.
pub fn processes(equation: &EquationTerms, shares: &Shares, tolerance: f64) -> Vec<RankedProcess> {
    members(equation)
        .into_iter()
        .map(|(process, members)| {
            let share = shares.of_process(&members);
            RankedProcess {
                process,
                share,
                verdict: Verdict::of(&share, tolerance),
                members,
            }
        })
        .collect()
}
