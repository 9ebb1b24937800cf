//! `bounds`: over which values of each scale alone the system reduced at the nominal
//! values stands, and over which it stays the same; what ends it; and, with ranges,
//! whether it stands on the whole box.
//!
//! `standing` holds the reduced system and what can end it, `conditions` the inequalities
//! and the box.

pub mod conditions;
pub mod standing;

use crate::algebra::monomial::{Symbol, SymbolId};
use crate::analysis::Case;
use crate::analysis::bounds::conditions::Condition;
use crate::analysis::bounds::standing::{Reduced, Threat, Why};
use crate::analysis::movable;
use crate::analysis::names::Namer;
use crate::analysis::requests;
use crate::analysis::sizes::SAME;
use crate::audit;
use crate::model::Model;
use crate::model::errors::ModelError;
use crate::model::values::Fault;
use crate::syntax::ast::{self, RequestKind};

/// Where the reduced system stands.
#[derive(Debug, Clone)]
pub struct Bounds {
    /// The tolerance.
    pub tolerance: f64,
    /// Each scale or constant alone.
    pub scales: Vec<Bound>,
    /// Under which conditions it stands, and under which more could go.
    pub conditions: Vec<Condition>,
    /// The nearest way out over all scales.
    pub nearest: Option<WayOut>,
    /// What is out at the nominal values.
    pub dropped: Vec<Dropped>,
    /// Equations left out since one term is left in them, with the term.
    pub lone: Vec<Place>,
    /// Whether a scale in the equations has a range at all.
    pub has_ranges: bool,
    /// The condition that fails first as the ranges widen from the nominal values; `None`
    /// where the system stands on the whole box.
    pub fails_first: Option<Condition>,
}

/// One scale or constant, the others at their nominal values.
#[derive(Debug, Clone)]
pub struct Bound {
    /// Its name.
    pub name: String,
    /// Its SI unit.
    pub unit: String,
    /// The unit in which it was written.
    pub written_unit: Option<String>,
    /// Its nominal value, in SI units.
    pub nominal: f64,
    /// Where the reduced system stands.
    pub stands: Interval,
    /// Where it stays the same.
    pub unchanged: Interval,
    /// Where the balance that gave open scales their formulas stands, if one did.
    pub balance: Option<Interval>,
}

/// The connected piece that holds the nominal value.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Interval {
    /// Its lower end; `None`: nothing ends it.
    pub low: Option<End>,
    /// Its upper end.
    pub high: Option<End>,
}

/// One end of an interval.
#[derive(Debug, Clone, PartialEq)]
pub struct End {
    /// The value there, in SI units.
    pub value: f64,
    /// The logarithm of its factor to the nominal value.
    pub way: f64,
    /// What ends it; of several things the first.
    pub place: Place,
    /// How.
    pub why: Why,
    /// What else does the same there.
    pub others: Vec<Place>,
}

/// A term of an equation, by its process or its text.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Place {
    /// The equation.
    pub equation: String,
    /// The term.
    pub term: String,
}

/// A dropped term.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Dropped {
    /// Its place.
    pub place: Place,
    /// Its text.
    pub text: String,
    /// Whether its whole process is out.
    pub is_whole: bool,
}

/// The nearest end of all.
#[derive(Debug, Clone, PartialEq)]
pub struct WayOut {
    /// Which of the scales.
    pub scale: usize,
    /// The end.
    pub end: End,
}

/// Checks what the `bounds` requests for a case name.
pub fn check(model: &Model, case: &Case) -> Vec<ModelError> {
    let mut errors = Vec::new();
    for (own, request) in &model.requests {
        let RequestKind::Bounds { symbols } = &request.kind else {
            continue;
        };
        if requests::targets(model, *own, request).contains(&case.setting.phenomenon) {
            let found = symbols
                .iter()
                .map(|name| movable::movable(model, case, name).err());
            errors.extend(found.flatten());
        }
    }
    errors
}

/// Answers for the equations at these places, all of whose scales are known. `balances`
/// are the processes that gave open scales their formulas, by equation.
///
/// # Errors
/// Named scales and constants that have no value or cannot be moved alone.
pub fn bounds(
    model: &Model,
    case: &Case,
    wanted: &[usize],
    named: &[ast::Name],
    balances: &[(String, Vec<String>)],
) -> Result<Bounds, Fault> {
    let tolerance = case.setting.tolerance();
    let (systems, lone) = systems(case, wanted, tolerance);
    let symbols = symbols(model, case, &systems, named)?;
    let threats = Threats {
        endings: standing::endings(case, &systems, tolerance),
        changes: standing::changes(&systems, tolerance),
        balance: (!balances.is_empty()).then(|| standing::joins(&systems, balances)),
    };
    let scales: Vec<Bound> = symbols
        .iter()
        .map(|id| bound(model, case, *id, &systems, &threats))
        .collect();
    let namer = Namer::new(case);
    Ok(Bounds {
        tolerance,
        nearest: nearest(&scales),
        scales,
        conditions: conditions::all(case, &systems, tolerance, &namer),
        dropped: systems.iter().flat_map(dropped).collect(),
        lone,
        has_ranges: conditions::has_ranges(case, &systems),
        fails_first: conditions::fails_first(case, &systems, &threats.endings, &namer),
    })
}

/// The equations reduced, and those that are left with one term.
fn systems<'c>(case: &'c Case, wanted: &[usize], tolerance: f64) -> (Vec<Reduced<'c>>, Vec<Place>) {
    let all = wanted
        .iter()
        .filter_map(|idx| Reduced::of(case, &case.equations[*idx], tolerance));
    let (lone, systems): (Vec<_>, Vec<_>) = all.partition(|reduced| reduced.stays().len() < 2);
    let lone = lone
        .iter()
        .flat_map(|reduced| reduced.stays().into_iter().map(|idx| place(reduced, idx)))
        .collect();
    (systems, lone)
}

fn place(reduced: &Reduced<'_>, term: usize) -> Place {
    Place {
        equation: reduced.equation.name.clone(),
        term: reduced.equation.terms[term].label().to_owned(),
    }
}

fn dropped(reduced: &Reduced<'_>) -> Vec<Dropped> {
    let terms = &reduced.equation.terms;
    let stays = reduced.stays();
    let is_whole = |label: &str| stays.iter().all(|idx| terms[*idx].label() != label);
    let goes = reduced.goes().into_iter();
    goes.map(|idx| Dropped {
        place: place(reduced, idx),
        text: terms[idx].text.clone(),
        is_whole: is_whole(terms[idx].label()),
    })
    .collect()
}

/// The symbols asked for, or all that stand in the equations and can be moved alone.
fn symbols(
    model: &Model,
    case: &Case,
    systems: &[Reduced<'_>],
    named: &[ast::Name],
) -> Result<Vec<SymbolId>, Fault> {
    if !named.is_empty() {
        let mut found: Vec<SymbolId> = Vec::new();
        for name in named {
            // A formula found meanwhile may have made it follow others.
            let id = movable::movable(model, case, name)?;
            if !found.contains(&id) {
                found.push(id);
            }
        }
        let open: Vec<SymbolId> = found
            .iter()
            .filter_map(|id| case.setting.symbol_value(&Symbol::Declared(*id)).err())
            .flatten()
            .collect();
        return if open.is_empty() {
            Ok(found)
        } else {
            Err(Fault::Open(open))
        };
    }
    let mut found: Vec<SymbolId> = Vec::new();
    let terms = systems.iter().flat_map(|reduced| &reduced.equation.terms);
    for (symbol, _) in terms.flat_map(|term| term.size.resolved.powers()) {
        if let Symbol::Declared(id) = symbol
            && !found.contains(id)
        {
            found.push(*id);
        }
    }
    found.sort_unstable();
    found.retain(|id| {
        let terms = case.equations.iter().flat_map(|equation| &equation.terms);
        let sizes = terms.map(|term| &term.size.resolved);
        movable::holders(model, case, *id, sizes).is_empty()
    });
    Ok(found)
}

/// What may end or change the system.
struct Threats<'c> {
    endings: Vec<Threat<'c>>,
    changes: Vec<Threat<'c>>,
    balance: Option<Vec<Threat<'c>>>,
}

// One scale -----------------------------------------------------------------------------------

fn bound(
    model: &Model,
    case: &Case,
    id: SymbolId,
    systems: &[Reduced<'_>],
    threats: &Threats<'_>,
) -> Bound {
    let nominal = case
        .setting
        .symbol_value(&Symbol::Declared(id))
        .map_or(f64::NAN, |value| value.nominal);
    let info = &model.symbols[id.idx()];
    let interval = |threats: &mut dyn Iterator<Item = &Threat<'_>>| {
        Exits::of(id, threats).interval(id, nominal, systems)
    };
    Bound {
        name: info.name.clone(),
        unit: info
            .dimension
            .map_or_else(|| "1".to_owned(), |dimension| dimension.unit_text()),
        written_unit: audit::written_unit(model, &case.setting, id),
        nominal,
        stands: interval(&mut threats.endings.iter()),
        unchanged: interval(&mut threats.endings.iter().chain(&threats.changes)),
        balance: threats
            .balance
            .as_ref()
            .map(|joins| interval(&mut joins.iter())),
    }
}

/// The nearest threats on both sides of the nominal value, with those just as near.
#[derive(Default)]
struct Exits<'t, 'c> {
    down: Vec<(f64, &'t Threat<'c>)>,
    up: Vec<(f64, &'t Threat<'c>)>,
}

impl<'t, 'c> Exits<'t, 'c> {
    fn of(id: SymbolId, threats: &mut dyn Iterator<Item = &'t Threat<'c>>) -> Exits<'t, 'c> {
        let mut exits = Exits::default();
        for threat in threats {
            let Some((low, high)) = threat.true_along(id) else {
                continue;
            };
            // At the nominal value the system stands, so the interval lies to one side; by
            // rounding alone it could reach over.
            if low >= 0.0 || high > 0.0 {
                nearer(&mut exits.up, low.max(0.0), threat);
            }
            if low < 0.0 {
                nearer(&mut exits.down, high.min(0.0), threat);
            }
        }
        exits
    }

    fn interval(&self, id: SymbolId, nominal: f64, systems: &[Reduced<'_>]) -> Interval {
        let (down, up) = (
            end(id, nominal, systems, &self.down),
            end(id, nominal, systems, &self.up),
        );
        // The amount of a negative constant grows downwards.
        if nominal < 0.0 {
            Interval {
                low: up,
                high: down,
            }
        } else {
            Interval {
                low: down,
                high: up,
            }
        }
    }
}

/// Takes a nearer threat, or one that is as near behind those.
fn nearer<'t, 'c>(best: &mut Vec<(f64, &'t Threat<'c>)>, way: f64, threat: &'t Threat<'c>) {
    match best.first() {
        Some((found, _)) if way.abs() > found.abs() + SAME => {}
        Some((found, _)) if way.abs() >= found.abs() - SAME => best.push((way, threat)),
        Some(_) | None => *best = vec![(way, threat)],
    }
}

fn end(
    id: SymbolId,
    nominal: f64,
    systems: &[Reduced<'_>],
    exits: &[(f64, &Threat<'_>)],
) -> Option<End> {
    let (way, first) = exits.first()?;
    let at = |threat: &Threat<'_>| place(&systems[threat.equation], threat.term_at(id, *way));
    let own = at(first);
    let mut others: Vec<Place> = Vec::new();
    for (_, threat) in &exits[1..] {
        let other = at(threat);
        if threat.why == first.why && other != own && !others.contains(&other) {
            others.push(other);
        }
    }
    Some(End {
        value: nominal * way.exp(),
        way: *way,
        place: own,
        why: first.why,
        others,
    })
}

/// The end with the smallest factor; of equal ones the first listed.
fn nearest(scales: &[Bound]) -> Option<WayOut> {
    let mut best: Option<WayOut> = None;
    for (scale, bound) in scales.iter().enumerate() {
        for end in [&bound.stands.low, &bound.stands.high]
            .into_iter()
            .flatten()
        {
            let is_nearer = best
                .as_ref()
                .is_none_or(|found| end.way.abs() < found.end.way.abs() - SAME);
            if is_nearer {
                best = Some(WayOut {
                    scale,
                    end: end.clone(),
                });
            }
        }
    }
    best
}
