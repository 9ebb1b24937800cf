//! `find`: all dominant balances of the equations that hold open scales, with formulas,
//! values, what is neglected and what they are called.
//!
//! `system` turns equations into a system of the polyhedral core, `powers` compares known
//! scales that have no value, `formulas` solves the ties exactly, `candidates` puts each
//! balance into the terms of the script.

pub(crate) mod candidates;
pub(crate) mod formulas;
mod logs;
pub mod powers;
pub(crate) mod ranges;
pub(crate) mod system;

use std::ops::ControlFlow;

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::analysis::names::Namer;
use crate::analysis::reduce::{Inequality, Kept};
use crate::analysis::requests::process_label;
use crate::analysis::{Case, Factors, LeftOut};
use crate::limits;
use crate::model::Model;
use crate::model::terms::EquationTerms;
use crate::number::TooLarge;
use crate::polyhedra::prevariety::{self, Ending};
use crate::syntax::ast;
use crate::units::Range;

use powers::{Placing, PlacingFault, Powers};
use system::{Entry, Prepared, Query};

/// What is asked for, with its names looked up.
#[derive(Debug, Clone, Default)]
pub struct Wanted {
    /// The unknowns, in the order asked for.
    pub unknowns: Vec<SymbolId>,
    /// Processes that must be among the largest, by equation.
    pub conditions: Vec<(usize, Vec<String>)>,
    /// What known scales without a value are compared by.
    pub placing: Option<Placing>,
}

/// All balances.
#[derive(Debug, Clone)]
pub struct Balances {
    /// The unknowns.
    pub unknowns: Vec<String>,
    /// Those that fix every unknown first, in order of what they neglect, then families.
    pub candidates: Vec<Candidate>,
    /// Where there is none: equations that contradict one another.
    pub contradiction: Vec<String>,
    /// Whether so many ranges matter that balances were looked for at the nominal values.
    pub is_nominal: bool,
    /// Whether the request asks for certain processes.
    pub is_conditioned: bool,
    /// The small parameter by whose powers scales were compared.
    pub small: Option<String>,
    /// How the search ended.
    pub ending: Ending,
}

/// One balance: a point, or a family.
#[derive(Debug, Clone)]
pub struct Candidate {
    /// The declared balances that it is.
    pub names: Vec<String>,
    /// The unknowns, in the order asked for.
    pub scales: Vec<FoundScale>,
    /// Scales that stay free, with their ends.
    pub free: Vec<FreeScale>,
    /// The processes that balance, by equation.
    pub balances: Vec<(String, Vec<String>)>,
    /// Equations in which tendency and advection of one `D_t` count as one process.
    pub as_one: Vec<String>,
    /// What is neglected; none for a family.
    pub neglected: Option<Neglected>,
    /// Whether it stands over all ranges.
    pub whole_box: bool,
    /// The conditions on known scales under which it stands.
    pub conditions: Vec<Inequality>,
    /// Whether the requests that follow use it.
    pub is_adopted: bool,
}

/// An unknown that a balance gives, or leaves free.
#[derive(Debug, Clone)]
pub struct FoundScale {
    /// Its place among the symbols.
    pub id: SymbolId,
    /// Its name.
    pub name: String,
    /// Its formula; none where it stays free.
    pub formula: Option<Factors>,
    /// The same in the program's own terms.
    pub product: Option<Monomial>,
    /// Its value; none where something in the formula has none.
    pub value: Option<Range>,
    /// Its SI unit.
    pub unit: String,
    /// The unit in which it was declared.
    pub shown_in: Option<String>,
}

/// A scale that stays free, between bounds.
#[derive(Debug, Clone)]
pub struct FreeScale {
    /// Its name.
    pub name: String,
    /// Its SI unit.
    pub unit: String,
    /// The unit in which it was declared.
    pub shown_in: Option<String>,
    /// Its lower ends, the one that counts at the nominal values first.
    pub low: Vec<FamilyEnd>,
    /// Its upper ends.
    pub high: Vec<FamilyEnd>,
}

/// Where a family ends.
#[derive(Debug, Clone)]
pub struct FamilyEnd {
    /// The bound as a product of known scales and other free ones.
    pub formula: Factors,
    /// Its value, where it has one.
    pub value: Option<Range>,
    /// The equation that ends it.
    pub equation: String,
    /// The processes that join the balance there.
    pub joins: Vec<String>,
}

/// What a balance neglects.
#[derive(Debug, Clone, PartialEq)]
pub struct Neglected {
    /// The largest share of a process that is not in the balance, at the nominal values;
    /// none where sizes compare as powers.
    pub share: Option<f64>,
    /// The same as a power of the small parameter.
    pub power: Option<f64>,
    /// The process, with its equation; none if nothing is neglected.
    pub term: Option<(String, String)>,
}

/// Why there is no answer.
#[derive(Debug, Clone)]
pub enum FindFault {
    /// Every equation with an unknown holds other open scales.
    Open(Vec<String>),
    /// A condition names an equation that holds none of the unknowns.
    NotInvolved(usize),
    /// A condition names an equation that holds other open scales.
    OpenCondition(usize, Vec<String>),
    /// A symbol is no product and rests on this unknown.
    NotAProduct {
        /// The symbol to take instead.
        symbol: String,
        /// The unknown.
        unknown: String,
    },
    /// These ratios are not placed by the limit.
    FreeGroups(Vec<Factors>),
    /// This placement contradicts those before it.
    Contradicting(Factors),
    /// A number or exponent grows beyond the limits.
    TooLarge,
}

impl From<TooLarge> for FindFault {
    fn from(_: TooLarge) -> FindFault {
        FindFault::TooLarge
    }
}

/// Watches a search: called at every step with the number of balances found so far.
pub type Watch<'w> = &'w mut dyn FnMut(usize) -> ControlFlow<()>;

/// All balances of the equations that hold an unknown, and the equations left out since
/// they hold other open scales.
///
/// # Errors
/// A [`FindFault`].
pub fn find(
    model: &Model,
    case: &Case,
    wanted: &Wanted,
    watch: Watch<'_>,
) -> Result<(Balances, Vec<LeftOut>), FindFault> {
    let (entries, left_out) = entries(case, wanted)?;
    let mut query = Query {
        setting: &case.setting,
        unknowns: wanted.unknowns.clone(),
        entries,
        at_least_one: Vec::new(),
        powers: None,
        with_ranges: true,
    };
    if let Some(placing) = &wanted.placing
        && has_open_symbol(&query)
    {
        let placed = Powers::place(&case.setting, placing, &query.unknowns, &query.entries);
        query.powers = Some(placed.map_err(|fault| placing_fault(case, fault))?);
    }
    let mut prepared = Prepared::new(&query);
    let is_nominal = prepared.ranged.len() > limits::RANGES;
    if is_nominal {
        query.with_ranges = false;
        prepared = Prepared::new(&query);
    }
    let (candidates, mut ending) = described(model, case, &query, &prepared, watch)?;
    let mut contradiction = Vec::new();
    if candidates.is_empty() && ending == Ending::Complete {
        let mut is_stopped = false;
        contradiction = contradicting(&mut query, &prepared, &mut |n_found| {
            let step = watch(n_found);
            is_stopped |= step.is_break();
            step
        });
        if is_stopped {
            ending = Ending::Stopped;
        }
    }
    let balances = Balances {
        unknowns: (wanted.unknowns.iter())
            .map(|id| case.setting.names[id.idx()].clone())
            .collect(),
        candidates,
        contradiction,
        is_nominal,
        is_conditioned: !wanted.conditions.is_empty(),
        small: query.powers.as_ref().map(|powers| powers.text.clone()),
        ending,
    };
    Ok((balances, left_out))
}

/// All candidates of a query, described and in order; one that is alone is adopted.
fn described(
    model: &Model,
    case: &Case,
    query: &Query<'_>,
    prepared: &Prepared,
    watch: Watch<'_>,
) -> Result<(Vec<Candidate>, Ending), FindFault> {
    let found = prevariety::balances(&prepared.system, watch);
    let describer = candidates::Describer::new(model, case, query, prepared);
    let mut all = Vec::new();
    let mut seen = Vec::new();
    for candidate in &found.candidates {
        let key = describer.attaining(candidate);
        if describer.has_inside(candidate) && !seen.contains(&key) {
            all.push(describer.describe(candidate)?);
            seen.push(key);
        }
    }
    all.sort_by(candidates::order);
    if let ([only], Ending::Complete) = (all.as_mut_slice(), found.ending) {
        only.is_adopted = true;
    }
    Ok((all, found.ending))
}

/// The equations that hold an unknown. Those that hold other open names are left out,
/// unless a limit says how they compare.
fn entries<'c>(
    case: &'c Case,
    wanted: &Wanted,
) -> Result<(Vec<Entry<'c>>, Vec<LeftOut>), FindFault> {
    let mut entries: Vec<Entry<'c>> = Vec::new();
    let mut left_out = Vec::new();
    for equation in &case.equations {
        let condition = wanted
            .conditions
            .iter()
            .find(|(idx, _)| *idx == equation.idx);
        if !holds_unknown(case, equation, &wanted.unknowns) {
            if condition.is_some() {
                return Err(FindFault::NotInvolved(equation.idx));
            }
            continue;
        }
        check_products(case, equation, &wanted.unknowns)?;
        let open = other_open(case, equation, &wanted.unknowns);
        if !open.is_empty() && wanted.placing.is_none() {
            if condition.is_some() {
                return Err(FindFault::OpenCondition(equation.idx, open));
            }
            left_out.push(LeftOut {
                equation: equation.name.clone(),
                open,
            });
            continue;
        }
        entries.push(Entry {
            equation,
            sizes: equation
                .terms
                .iter()
                .map(|term| term.size.resolved.clone())
                .collect(),
            required: condition
                .map(|(_, processes)| processes.clone())
                .unwrap_or_default(),
            leaders: Vec::new(),
        });
    }
    if entries.is_empty() && !left_out.is_empty() {
        let mut open: Vec<String> = Vec::new();
        for name in left_out.into_iter().flat_map(|left| left.open) {
            if !open.contains(&name) {
                open.push(name);
            }
        }
        return Err(FindFault::Open(open));
    }
    Ok((entries, left_out))
}

fn holds_unknown(case: &Case, equation: &EquationTerms, unknowns: &[SymbolId]) -> bool {
    let sizes = equation.terms.iter().map(|term| &term.size.resolved);
    let mut symbols = sizes.flat_map(Monomial::powers).map(|(symbol, _)| symbol);
    symbols.any(|symbol| {
        let open = case.setting.symbol_value(symbol).err().unwrap_or_default();
        open.iter().any(|id| unknowns.contains(id))
    })
}

/// A symbol that is no product of the unknowns it rests on has no exponent of them.
fn check_products(
    case: &Case,
    equation: &EquationTerms,
    unknowns: &[SymbolId],
) -> Result<(), FindFault> {
    for (symbol, _) in equation
        .terms
        .iter()
        .flat_map(|term| term.size.resolved.powers())
    {
        let is_unknown = matches!(symbol, Symbol::Declared(id) if unknowns.contains(id));
        let Err(open) = case.setting.symbol_value(symbol) else {
            continue;
        };
        if let Some(unknown) = open
            .iter()
            .find(|id| unknowns.contains(id))
            .filter(|_| !is_unknown)
        {
            return Err(FindFault::NotAProduct {
                symbol: case.symbol_name(symbol),
                unknown: case.setting.names[unknown.idx()].clone(),
            });
        }
    }
    Ok(())
}

/// The open names of an equation beside the unknowns, in order of declaration.
fn other_open(case: &Case, equation: &EquationTerms, unknowns: &[SymbolId]) -> Vec<String> {
    let names = unknowns.iter().map(|id| &case.setting.names[id.idx()]);
    let names: Vec<&String> = names.collect();
    let open = case.open_in(equation);
    open.into_iter()
        .filter(|name| !names.contains(&name))
        .collect()
}

fn has_open_symbol(query: &Query<'_>) -> bool {
    let sizes = query.entries.iter().flat_map(|entry| &entry.sizes);
    let mut symbols = sizes.flat_map(Monomial::powers).map(|(symbol, _)| symbol);
    symbols.any(|symbol| {
        let is_unknown = matches!(symbol, Symbol::Declared(id) if query.unknowns.contains(id));
        !is_unknown && query.setting.symbol_value(symbol).is_err()
    })
}

fn placing_fault(case: &Case, fault: PlacingFault) -> FindFault {
    match fault {
        PlacingFault::Free(ratios) => {
            FindFault::FreeGroups(ratios.iter().map(|ratio| case.factors(ratio)).collect())
        }
        PlacingFault::Contradiction(group) => FindFault::Contradicting(case.factors(&group)),
    }
}

/// A smallest set of equations without a common balance, at the nominal values where the
/// ranges have one that is no part of them.
fn contradicting(query: &mut Query<'_>, prepared: &Prepared, watch: Watch<'_>) -> Vec<String> {
    let mut found = prevariety::contradiction(&prepared.system, watch);
    if found.is_none() && !prepared.ranged.is_empty() {
        query.with_ranges = false;
        found = prevariety::contradiction(&Prepared::new(query).system, watch);
    }
    let mut places: Vec<usize> = match found {
        Some(places) => places
            .iter()
            .map(|place| prepared.origins[*place].entry())
            .collect(),
        None => (0..query.entries.len()).collect(),
    };
    places.sort_unstable();
    places.dedup();
    let name = |place: usize| query.entries[place].equation.name.clone();
    places.into_iter().map(name).collect()
}

/// The declared balances that this is, of two for the same equations the first: those
/// whose processes are exactly the balancing ones. An equation that does not take part
/// is judged by what leads in it.
pub(crate) fn recognised(
    model: &Model,
    case: &Case,
    balances: &[(String, Vec<String>)],
) -> Vec<String> {
    let mut named: Vec<(Vec<&str>, String)> = Vec::new();
    for balance in &model.balances {
        let mut equations: Vec<&str> = balance
            .parts
            .iter()
            .map(|part| part.equation.text.as_str())
            .collect();
        equations.sort_unstable();
        let takes_part = balances
            .iter()
            .any(|(name, _)| equations.contains(&name.as_str()));
        let is_new = named.iter().all(|(known, _)| *known != equations);
        let mut parts = balance.parts.iter();
        if takes_part && is_new && parts.all(|part| part_matches(model, case, part, balances)) {
            named.push((equations, balance.name.text.clone()));
        }
    }
    named.into_iter().map(|(_, name)| name).collect()
}

fn part_matches(
    model: &Model,
    case: &Case,
    part: &ast::BalancePart,
    balances: &[(String, Vec<String>)],
) -> bool {
    let Some(idx) = model.equation(&part.equation.text) else {
        return false;
    };
    let own = balances
        .iter()
        .find(|(name, _)| *name == part.equation.text);
    let found = match own {
        Some((_, processes)) => Some(processes.clone()),
        None => leading(case, idx),
    };
    let declared: Option<Vec<String>> = (part.processes.iter())
        .map(|process| process_label(model, case, idx, process).ok())
        .collect();
    match (found, declared) {
        (Some(found), Some(declared)) => same_processes(&found, &declared),
        (Some(_), None) | (None, _) => false,
    }
}

fn leading(case: &Case, idx: usize) -> Option<Vec<String>> {
    let kept = Kept::of(case, &case.equations[idx], case.setting.tolerance())?;
    let leading = kept.leading();
    Some(
        leading
            .iter()
            .map(|process| process.process.clone())
            .collect(),
    )
}

fn same_processes(a: &[String], b: &[String]) -> bool {
    a.iter().all(|process| b.contains(process)) && b.iter().all(|process| a.contains(process))
}

/// A ratio of known scales that must not exceed 1.
fn condition(case: &Case, ratio: &Monomial, namer: &Namer<'_>) -> Inequality {
    crate::analysis::reduce::inequality(case, ratio, 1.0, namer)
}
