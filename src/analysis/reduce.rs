//! `reduce`: the leading-order system, what it leaves out and what it is fit for.

use std::collections::BTreeSet;

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::algebra::product::{Base, Derivative, Factor};
use crate::algebra::quantities::{CoordinateId, FieldId};
use crate::analysis::base_state::is_base_state;
use crate::analysis::names::Namer;
use crate::analysis::neglected::neglected;
use crate::analysis::rank::{self, RankedProcess};
use crate::analysis::requests::process_label;
use crate::analysis::sizes::{Shares, Verdict, same};
use crate::analysis::{Case, Exponents, Factors};
use crate::model::Model;
use crate::model::spelling;
use crate::model::terms::{EquationTerms, Side};
use crate::number::Number;
use crate::syntax::ast;
use crate::units::Range;

/// The reduced system.
#[derive(Debug, Clone)]
pub struct Reduction {
    /// The equations asked for.
    pub equations: Vec<ReducedEquation>,
    /// All fields of the equations whose scales are known, in order.
    pub fields: Vec<String>,
    /// Those that the full equations determine and the reduced ones do not.
    pub undetermined: Vec<String>,
}

/// One equation of it.
#[derive(Debug, Clone)]
pub struct ReducedEquation {
    /// Its name.
    pub name: String,
    /// Its title.
    pub title: Option<String>,
    /// The tolerance.
    pub tolerance: f64,
    /// The reduced equation.
    pub reduced: String,
    /// The same, side by side: the left one and the right one.
    pub sides: [Vec<Part>; 2],
    /// Its terms.
    pub kept: Vec<ReducedTerm>,
    /// The terms left out.
    pub dropped: Vec<ReducedTerm>,
    /// The highest share of a term left out; 0 if none is.
    pub error: f64,
    /// The sum of the highest shares, an upper bound.
    pub error_sum: f64,
    /// The text of the term left out with the highest share.
    pub first_neglected: Option<String>,
    /// The processes that lead.
    pub leading: Vec<String>,
    /// Whether they hold base fields of splits only.
    pub is_base_state: bool,
    /// The declared balance that they are.
    pub balance: Option<String>,
    /// Whether derived scales put the balance in.
    pub by_construction: bool,
    /// What the equation says of its fields.
    pub kinds: Vec<(String, Kind)>,
    /// The highest derivatives that went with dropped terms.
    pub lost: Vec<LostDerivative>,
    /// Set where one term, or one process, is left.
    pub lone: Option<Lone>,
}

/// What stands between two signs of a reduced equation.
#[derive(Debug, Clone)]
pub struct Part {
    /// Whether a minus stands before it.
    pub is_negative: bool,
    /// Its text.
    pub text: String,
    /// The same as a tree, without process names.
    pub expr: ast::Expr,
    /// The same as a tree, with the names of its processes.
    pub named: ast::Expr,
}

/// A term of a reduced equation.
#[derive(Debug, Clone)]
pub struct ReducedTerm {
    /// Its text, without sign.
    pub text: String,
    /// The same as a tree.
    pub expr: ast::Expr,
    /// Its process.
    pub process: Option<String>,
    /// Its share.
    pub share: Range,
    /// What becomes of it.
    pub verdict: Verdict,
    /// Where it depends: under any of these it may go.
    pub conditions: Vec<Inequality>,
}

/// A ratio of two sizes that must not exceed a limit.
#[derive(Debug, Clone)]
pub struct Inequality {
    /// The ratio in scales and constants.
    pub factors: Factors,
    /// The ratio as a number times named groups, where they give it.
    pub groups: Option<(Number, Exponents)>,
    /// Whether these groups hold a symbol that cancels out of the ratio.
    pub has_foreign: bool,
    /// Its value.
    pub value: Range,
    /// The limit.
    pub limit: f64,
}

/// What an equation says of a field.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Kind {
    /// It steps it in time.
    Prognostic,
    /// It gives it at any time.
    Diagnostic,
}

/// A derivative of an order that no kept term has.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct LostDerivative {
    /// Along this coordinate.
    pub coordinate: String,
    /// Of this field.
    pub field: String,
    /// Of this order.
    pub order: u32,
}

/// A reduced equation that nothing balances.
#[derive(Debug, Clone)]
pub enum Lone {
    /// One term is left: the scales contradict the equation.
    Term {
        /// The term.
        term: String,
        /// Whether it is a derivative, which then vanishes to leading order.
        is_derivative: bool,
        /// Scales that alone restore a balance, each with its factor, nearest first.
        mends: Vec<(String, f64)>,
    },
    /// Several terms of one process are left, which must cancel one another.
    Process {
        /// The process.
        process: String,
    },
}

/// An equation reduced, before it is put into words.
pub struct Kept<'c> {
    /// The equation.
    pub equation: &'c EquationTerms,
    /// Its sizes and shares.
    pub shares: Shares,
    /// Its processes.
    pub processes: Vec<RankedProcess>,
    /// The verdict on each term.
    pub verdicts: Vec<Verdict>,
}

impl<'c> Kept<'c> {
    /// Reduces an equation; `None` while a scale of it is open or no term is left.
    pub fn of(case: &'c Case, equation: &'c EquationTerms, tolerance: f64) -> Option<Kept<'c>> {
        let shares = Shares::of(&case.setting, equation)?;
        let verdicts = shares
            .shares
            .iter()
            .map(|share| Verdict::of(share, tolerance))
            .collect();
        Some(Kept {
            equation,
            processes: rank::processes(equation, &shares, tolerance),
            shares,
            verdicts,
        })
    }

    /// Whether a term stays.
    pub fn is_kept(&self, idx: usize) -> bool {
        self.verdicts[idx] != Verdict::Drops
    }

    /// The processes that lead, in order.
    pub fn leading(&self) -> Vec<&RankedProcess> {
        self.processes
            .iter()
            .filter(|process| process.verdict == Verdict::Leads)
            .collect()
    }

    /// The processes with a term that stays, in order.
    pub fn kept_processes(&self) -> Vec<&RankedProcess> {
        self.processes
            .iter()
            .filter(|process| process.members.iter().any(|idx| self.is_kept(*idx)))
            .collect()
    }
}

/// Reduces the equations at these places.
pub fn reduce(model: &Model, case: &Case, wanted: &[usize], tolerance: f64) -> Reduction {
    let all: Vec<Option<Kept<'_>>> = case
        .equations
        .iter()
        .map(|equation| Kept::of(case, equation, tolerance))
        .collect();
    let namer = Namer::new(case);
    let equations = wanted
        .iter()
        .filter_map(|idx| all[*idx].as_ref())
        .map(|kept| reduced_equation(model, case, kept, &all, tolerance, &namer))
        .collect();
    let (fields, undetermined) = determined(case, &all);
    Reduction {
        equations,
        fields,
        undetermined,
    }
}

fn reduced_equation(
    model: &Model,
    case: &Case,
    kept: &Kept<'_>,
    all: &[Option<Kept<'_>>],
    tolerance: f64,
    namer: &Namer<'_>,
) -> ReducedEquation {
    let (stays, goes): (Vec<usize>, Vec<usize>) =
        (0..kept.verdicts.len()).partition(|idx| kept.is_kept(*idx));
    let term = |idx: &usize| reduced_term(case, kept, *idx, tolerance, namer);
    let left_out = neglected(case, kept, &goes);
    let leading = kept.leading();
    let sides = [Side::Left, Side::Right].map(|side| parts(kept, side));
    ReducedEquation {
        name: kept.equation.name.clone(),
        title: kept.equation.title.clone(),
        tolerance,
        reduced: text(&sides),
        sides,
        kept: stays.iter().map(term).collect(),
        dropped: goes.iter().map(term).collect(),
        error: left_out.error,
        error_sum: left_out.error_sum,
        first_neglected: left_out.first,
        is_base_state: is_base_state(model, case, kept),
        balance: balance(model, case, kept.equation.idx, all),
        by_construction: by_construction(kept, &leading),
        leading: leading
            .iter()
            .map(|process| process.process.clone())
            .collect(),
        kinds: kinds(case, kept, &stays),
        lost: lost_derivatives(case, kept, &stays),
        lone: lone(model, case, kept, &stays),
    }
}

fn reduced_term(
    case: &Case,
    kept: &Kept<'_>,
    idx: usize,
    tolerance: f64,
    namer: &Namer<'_>,
) -> ReducedTerm {
    let term = &kept.equation.terms[idx];
    let verdict = kept.verdicts[idx];
    ReducedTerm {
        text: term.text.clone(),
        expr: term.expr.clone(),
        process: term.process.clone(),
        share: kept.shares.shares[idx],
        verdict,
        conditions: match verdict {
            Verdict::Depends => conditions(case, kept, idx, tolerance, namer),
            Verdict::Leads | Verdict::Drops => Vec::new(),
        },
    }
}

/// The conditions under which a term may go: against the nominally largest term first,
/// then against each other one that is the largest somewhere.
pub fn conditions(
    case: &Case,
    kept: &Kept<'_>,
    idx: usize,
    tolerance: f64,
    namer: &Namer<'_>,
) -> Vec<Inequality> {
    let mut rivals = vec![kept.shares.largest];
    rivals.extend(kept.shares.largest_somewhere());
    let mut ratios: Vec<Monomial> = Vec::new();
    for rival in rivals {
        let terms = &kept.equation.terms;
        let Ok(ratio) = terms[idx].size.resolved.over(&terms[rival].size.resolved) else {
            continue;
        };
        // A pure number tells nothing that a scale could change.
        if rival != idx && !ratio.is_number() && !ratios.contains(&ratio) {
            ratios.push(ratio);
        }
    }
    ratios
        .iter()
        .map(|ratio| inequality(case, ratio, tolerance, namer))
        .collect()
}

/// `ratio <= limit`, with its value and its named groups.
pub fn inequality(case: &Case, ratio: &Monomial, limit: f64, namer: &Namer<'_>) -> Inequality {
    let product = namer.product(ratio);
    let has_foreign = product
        .as_ref()
        .is_some_and(|product| namer.has_foreign(ratio, product));
    let groups =
        product.and_then(|product| Some((namer.rest(ratio, &product)?, namer.named(&product))));
    Inequality {
        factors: case.factors(ratio),
        groups,
        has_foreign,
        value: case
            .setting
            .monomial_range(ratio)
            .unwrap_or(Range::exact(f64::NAN)),
        limit,
    }
}

// The text of the reduced equation ------------------------------------------------------------

fn text(sides: &[Vec<Part>; 2]) -> String {
    let [left, right] = sides.each_ref().map(|parts| {
        let parts: Vec<(bool, &str)> = parts
            .iter()
            .map(|part| (part.is_negative, part.text.as_str()))
            .collect();
        joined(&parts)
    });
    format!("{left} = {right}")
}

/// What is left of one side: a summand of which every term is kept stands as written,
/// of any other the kept terms one by one.
fn parts(kept: &Kept<'_>, side: Side) -> Vec<Part> {
    let mut parts = Vec::new();
    for (idx, summand) in kept.equation.summands.iter().enumerate() {
        if summand.side != side {
            continue;
        }
        let own: Vec<usize> = (0..kept.equation.terms.len())
            .filter(|term| kept.equation.terms[*term].summand == idx)
            .collect();
        if !own.is_empty() && summand.is_whole && own.iter().all(|term| kept.is_kept(*term)) {
            parts.push(Part {
                is_negative: summand.is_negative,
                text: summand.text.clone(),
                expr: summand.expr.clone(),
                named: summand.named.clone(),
            });
            continue;
        }
        let stay = own.into_iter().filter(|term| kept.is_kept(*term));
        parts.extend(stay.map(|term| {
            let term = &kept.equation.terms[term];
            Part {
                is_negative: term.is_negative,
                text: term.text.clone(),
                expr: term.expr.clone(),
                named: spelling::named(&term.expr, term.process.as_deref()),
            }
        }));
    }
    parts
}

/// Signed texts as one side of an equation; 0 if there is none.
pub fn joined(parts: &[(bool, &str)]) -> String {
    let mut text = String::new();
    for (place, (is_negative, part)) in parts.iter().enumerate() {
        text.push_str(match (place, is_negative) {
            (0, false) => "",
            (0, true) => "-",
            (_, false) => " + ",
            (_, true) => " - ",
        });
        text.push_str(part);
    }
    if text.is_empty() {
        "0".to_owned()
    } else {
        text
    }
}

// Balances ------------------------------------------------------------------------------------

/// The first balance that has a part for this equation and whose parts all match.
fn balance(model: &Model, case: &Case, idx: usize, all: &[Option<Kept<'_>>]) -> Option<String> {
    let matches = |balance: &&ast::BalanceDecl| {
        let mut holds_own = false;
        balance.parts.iter().all(|part| {
            let Some(found) = model.equation(&part.equation.text) else {
                return false;
            };
            holds_own |= found == idx;
            all[found]
                .as_ref()
                .is_some_and(|kept| part_matches(model, case, part, kept))
        }) && holds_own
    };
    model
        .balances
        .iter()
        .find(matches)
        .map(|balance| balance.name.text.clone())
}

fn part_matches(model: &Model, case: &Case, part: &ast::BalancePart, kept: &Kept<'_>) -> bool {
    let declared: Option<BTreeSet<String>> = part
        .processes
        .iter()
        .map(|process| process_label(model, case, kept.equation.idx, process).ok())
        .collect();
    let leading: BTreeSet<String> = kept
        .leading()
        .iter()
        .map(|process| process.process.clone())
        .collect();
    declared.is_some_and(|declared| declared == leading)
}

/// Whether the ratio of the leading processes is a pure number once derived scales are
/// replaced, so that the balance was put in, not found.
fn by_construction(kept: &Kept<'_>, leading: &[&RankedProcess]) -> bool {
    let largest = |process: &RankedProcess| {
        process.members.iter().copied().reduce(|best, idx| {
            let size = |idx: usize| kept.shares.sizes[idx].nominal;
            if size(idx) > size(best) && !same(size(idx), size(best)) {
                idx
            } else {
                best
            }
        })
    };
    let sizes: Vec<&Monomial> = leading
        .iter()
        .filter_map(|process| largest(process))
        .map(|idx| &kept.equation.terms[idx].size.resolved)
        .collect();
    sizes.len() > 1
        && sizes
            .windows(2)
            .all(|pair| pair[0].powers() == pair[1].powers())
}

// What kind of equation is left -----------------------------------------------------------------

fn kinds(case: &Case, kept: &Kept<'_>, stays: &[usize]) -> Vec<(String, Kind)> {
    let quantities = &case.setting.quantities;
    let time = quantities
        .coordinates
        .iter()
        .position(|coordinate| coordinate.name == "t")
        .map(|idx| CoordinateId(idx as u32));
    let mut stepped: Vec<FieldId> = Vec::new();
    let mut plain: Vec<FieldId> = Vec::new();
    for idx in stays {
        let product = &kept.equation.terms[*idx].product;
        for derivative in product.derivatives() {
            if derivative.by.iter().any(|(along, _)| Some(*along) == time) {
                fields_of(&derivative.operand, &mut stepped);
            }
        }
        plain_fields(&product.factors, &mut plain);
    }
    (0..quantities.fields.len())
        .map(|idx| FieldId(idx as u32))
        .filter_map(|id| {
            let kind = if stepped.contains(&id) {
                Kind::Prognostic
            } else if plain.contains(&id) {
                Kind::Diagnostic
            } else {
                return None;
            };
            Some((quantities.field(id).name.clone(), kind))
        })
        .collect()
}

fn fields_of(factors: &[Factor], found: &mut Vec<FieldId>) {
    for factor in factors {
        match &factor.base {
            Base::Field(id) => found.push(*id),
            Base::Derivative(derivative) => fields_of(&derivative.operand, found),
            Base::Absolute(inside) | Base::Mean(inside) => fields_of(inside, found),
            Base::Sized(sized) => found.extend(&sized.fields),
            Base::Function(applied) => fields_of(&applied.argument.factors, found),
            Base::Symbol(_) | Base::Coordinate(_) => {}
        }
    }
}

/// Fields that stand under no derivative.
fn plain_fields(factors: &[Factor], found: &mut Vec<FieldId>) {
    for factor in factors {
        match &factor.base {
            Base::Field(id) => found.push(*id),
            Base::Absolute(inside) => plain_fields(inside, found),
            Base::Derivative(_)
            | Base::Symbol(_)
            | Base::Coordinate(_)
            | Base::Sized(_)
            | Base::Mean(_)
            | Base::Function(_) => {}
        }
    }
}

fn lost_derivatives(case: &Case, kept: &Kept<'_>, stays: &[usize]) -> Vec<LostDerivative> {
    let quantities = &case.setting.quantities;
    let terms = &kept.equation.terms;
    let mut lost = Vec::new();
    for (idx, coordinate) in quantities.coordinates.iter().enumerate() {
        let along = CoordinateId(idx as u32);
        let highest = |places: &mut dyn Iterator<Item = usize>| -> (u32, Option<FieldId>) {
            let mut best = (0, None);
            for place in places {
                for derivative in terms[place].product.derivatives() {
                    let order = order_along(derivative, along);
                    if order > best.0 {
                        best = (order, first_field(&derivative.operand));
                    }
                }
            }
            best
        };
        let (full, field) = highest(&mut (0..terms.len()));
        let (left, _) = highest(&mut stays.iter().copied());
        if let Some(field) = field.filter(|_| left < full) {
            lost.push(LostDerivative {
                coordinate: coordinate.name.clone(),
                field: quantities.field(field).name.clone(),
                order: full,
            });
        }
    }
    lost
}

/// The order of a derivative along a coordinate, those inside it included.
pub(crate) fn order_along(derivative: &Derivative, along: CoordinateId) -> u32 {
    let own: u32 = derivative
        .by
        .iter()
        .filter(|(found, _)| *found == along)
        .map(|(_, order)| order)
        .sum();
    let inner = derivative
        .operand
        .iter()
        .filter_map(|factor| match &factor.base {
            Base::Derivative(inner) => Some(order_along(inner, along)),
            _ => None,
        })
        .max()
        .unwrap_or(0);
    own + inner
}

fn first_field(factors: &[Factor]) -> Option<FieldId> {
    let mut found = Vec::new();
    fields_of(factors, &mut found);
    found.first().copied()
}

// Lone terms --------------------------------------------------------------------------------------

fn lone(model: &Model, case: &Case, kept: &Kept<'_>, stays: &[usize]) -> Option<Lone> {
    let terms = &kept.equation.terms;
    if let [single] = stays {
        let is_derivative = matches!(
            varying(&terms[*single].product.factors).as_slice(),
            [Factor {
                base: Base::Derivative(_),
                ..
            }]
        );
        return Some(Lone::Term {
            term: terms[*single].label().to_owned(),
            is_derivative,
            mends: restoring_scales(model, case, kept.equation, *single),
        });
    }
    match kept.kept_processes().as_slice() {
        [process] => Some(Lone::Process {
            process: process.process.clone(),
        }),
        _ => None,
    }
}

fn varying(factors: &[Factor]) -> Vec<Factor> {
    factors
        .iter()
        .filter(|factor| !matches!(factor.base, Base::Symbol(_)))
        .cloned()
        .collect()
}

/// For each scale alone the smallest factor, either way, by which a second process becomes
/// as large as the lone term.
fn restoring_scales(
    model: &Model,
    case: &Case,
    equation: &EquationTerms,
    lone: usize,
) -> Vec<(String, f64)> {
    let lone_term = &equation.terms[lone];
    let top = &lone_term.size.resolved;
    let mut nearest: Vec<(SymbolId, f64)> = Vec::new();
    for term in equation
        .terms
        .iter()
        .filter(|term| term.label() != lone_term.label())
    {
        let Ok(ratio) = term.size.resolved.over(top) else {
            continue;
        };
        let gap = -case.setting.nominal(&ratio).ln();
        for (symbol, power) in ratio.powers() {
            let Symbol::Declared(id) = symbol else {
                continue;
            };
            if model.symbols[id.idx()].kind != ast::ValueKind::Scale {
                continue;
            }
            let way = gap / power.to_f64();
            match nearest.iter_mut().find(|(found, _)| found == id) {
                Some((_, best)) if way.abs() < best.abs() => *best = way,
                Some(_) => {}
                None => nearest.push((*id, way)),
            }
        }
    }
    nearest.sort_by(|a, b| a.1.abs().total_cmp(&b.1.abs()).then(a.0.cmp(&b.0)));
    nearest
        .into_iter()
        .map(|(id, way)| (case.setting.names[id.idx()].clone(), way.exp()))
        .collect()
}

// What the system determines ------------------------------------------------------------------------

/// All fields of the equations whose scales are known, and those that the reduced ones no
/// longer determine, by structural matching.
fn determined(case: &Case, all: &[Option<Kept<'_>>]) -> (Vec<String>, Vec<String>) {
    let known: Vec<&Kept<'_>> = all.iter().flatten().collect();
    let rows = |is_wanted: &dyn Fn(&Kept<'_>, usize) -> bool| -> Vec<Vec<usize>> {
        known
            .iter()
            .map(|kept| {
                let terms = kept.equation.terms.iter().enumerate();
                let fields: BTreeSet<usize> = terms
                    .filter(|(idx, _)| is_wanted(kept, *idx))
                    .flat_map(|(_, term)| term.product.fields())
                    .map(|id| id.0 as usize)
                    .collect();
                fields.into_iter().collect()
            })
            .collect()
    };
    let full = rows(&|_, _| true);
    let reduced = rows(&|kept, idx| kept.is_kept(idx));
    let fields: BTreeSet<usize> = full.iter().flatten().copied().collect();
    let n_fields = case.setting.quantities.fields.len();
    let before = well_determined(&full, n_fields);
    let after = well_determined(&reduced, n_fields);
    let name = |idx: usize| case.setting.quantities.fields[idx].name.clone();
    let undetermined = fields
        .iter()
        .copied()
        .filter(|idx| before[*idx] && !after[*idx])
        .map(name)
        .collect();
    (fields.into_iter().map(name).collect(), undetermined)
}

/// For each field, whether the equations determine it structurally: it is not reached
/// from an unmatched field by an alternating path of a largest matching (Dulmage and
/// Mendelsohn's under-determined part).
fn well_determined(equations: &[Vec<usize>], n_fields: usize) -> Vec<bool> {
    let mut by_field: Vec<Vec<usize>> = vec![Vec::new(); n_fields];
    for (equation, fields) in equations.iter().enumerate() {
        for field in fields {
            by_field[*field].push(equation);
        }
    }
    let mut owner: Vec<Option<usize>> = vec![None; n_fields];
    for equation in 0..equations.len() {
        let mut seen = vec![false; n_fields];
        augment(equation, equations, &mut owner, &mut seen);
    }
    let mut matched_to: Vec<Option<usize>> = vec![None; equations.len()];
    for (field, equation) in owner.iter().enumerate() {
        if let Some(equation) = equation {
            matched_to[*equation] = Some(field);
        }
    }
    let mut is_determined = vec![true; n_fields];
    let mut open: Vec<usize> = (0..n_fields)
        .filter(|field| owner[*field].is_none() && !by_field[*field].is_empty())
        .collect();
    // A field that stands in no equation is determined by none.
    for field in 0..n_fields {
        is_determined[field] = owner[field].is_some();
    }
    while let Some(field) = open.pop() {
        for equation in &by_field[field] {
            if let Some(next) = matched_to[*equation]
                && is_determined[next]
            {
                is_determined[next] = false;
                open.push(next);
            }
        }
    }
    is_determined
}

/// Finds an augmenting path from an equation, with a stack of its own.
fn augment(start: usize, equations: &[Vec<usize>], owner: &mut [Option<usize>], seen: &mut [bool]) {
    // Each entry: an equation, the next field to try, the field by which it was reached.
    let mut stack: Vec<(usize, usize, Option<usize>)> = vec![(start, 0, None)];
    while let Some((equation, next, _)) = stack.last_mut() {
        let equation = *equation;
        let Some(&field) = equations[equation].get(*next) else {
            stack.pop();
            continue;
        };
        *next += 1;
        if std::mem::replace(&mut seen[field], true) {
            continue;
        }
        match owner[field] {
            Some(other) => stack.push((other, 0, Some(field))),
            None => {
                let mut free = field;
                while let Some((equation, _, reached_by)) = stack.pop() {
                    owner[free] = Some(equation);
                    match reached_by {
                        Some(field) => free = field,
                        None => break,
                    }
                }
                return;
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_square_system_determines_its_fields() {
        let full = vec![vec![0, 1], vec![1, 2], vec![0, 2]];
        assert_eq!(well_determined(&full, 3), [true, true, true]);
    }

    #[test]
    fn a_repeated_equation_leaves_fields_open() {
        // Two equations for field 0, none that holds field 2 alone with field 1.
        let reduced = vec![vec![0], vec![0], vec![1, 2]];
        assert_eq!(well_determined(&reduced, 3), [true, false, false]);
    }
}
