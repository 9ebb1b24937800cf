//! `compare`: phenomena side by side, and what would have to change for groups to match.

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::analysis::matching::{self, Matching};
use crate::analysis::rank;
use crate::analysis::reduce;
use crate::analysis::sizes::{self, Shares, Verdict, at_most};
use crate::analysis::{Case, LeftOut, movable};
use crate::audit;
use crate::model::Model;
use crate::model::errors::ModelError;
use crate::model::settings::Setting;
use crate::number::rational_to_f64;
use crate::syntax::ast;
use crate::units::Range;

/// Phenomena side by side; every list of values has one for each of them, in order.
#[derive(Debug, Clone)]
pub struct Comparison {
    /// Their names.
    pub phenomena: Vec<String>,
    /// Their titles.
    pub titles: Vec<Option<String>>,
    /// How far apart the values of a matching group may be: the least of the tolerances.
    pub tolerance: f64,
    /// Scales and constants.
    pub scales: Vec<ComparedScale>,
    /// Named groups that have a value in each.
    pub groups: Vec<ComparedGroup>,
    /// Equations whose scales are known in each.
    pub equations: Vec<ComparedEquation>,
    /// What matching the groups asked for takes.
    pub matching: Option<Matching>,
}

/// A scale or constant.
#[derive(Debug, Clone)]
pub struct ComparedScale {
    /// Its name.
    pub name: String,
    /// Its SI unit.
    pub unit: String,
    /// The units in which they were written.
    pub written_units: Vec<Option<String>>,
    /// Its values; `None` where it is open or does not exist.
    pub values: Vec<Option<Range>>,
}

/// A named group.
#[derive(Debug, Clone)]
pub struct ComparedGroup {
    /// Its name.
    pub name: String,
    /// Its title.
    pub title: Option<String>,
    /// Its values.
    pub values: Vec<Range>,
    /// Whether the nominal values agree within the tolerance.
    pub is_match: bool,
}

/// An equation.
#[derive(Debug, Clone)]
pub struct ComparedEquation {
    /// Its name.
    pub name: String,
    /// Its title.
    pub title: Option<String>,
    /// The SI unit of its terms.
    pub unit: String,
    /// Its processes.
    pub processes: Vec<ComparedProcess>,
    /// The balances recognised.
    pub balances: Vec<Option<String>>,
    /// The reduced equations.
    pub reduced: Vec<String>,
}

/// A process; where all its terms are gone, its size and share are 0.
#[derive(Debug, Clone)]
pub struct ComparedProcess {
    /// Its name, or the text of a term without one.
    pub process: String,
    /// Its sizes.
    pub sizes: Vec<Range>,
    /// Its shares.
    pub shares: Vec<Range>,
    /// What becomes of it.
    pub verdicts: Vec<Verdict>,
}

/// Why a matching was not answered.
pub enum Fault<'c> {
    /// A group to match holds open names in this case.
    Open(&'c Case, Vec<SymbolId>),
    /// More sets of scales than the limit.
    TooMany,
}

/// Compares cases, and leaves out equations with a scale that is open in one of them.
///
/// # Errors
/// What keeps the groups from being matched at all.
pub fn compare<'c>(
    model: &Model,
    cases: &[&'c Case],
    wanted: Option<&[ast::Name]>,
) -> Result<(Comparison, Vec<LeftOut>), Fault<'c>> {
    let names = |case: &&Case| case.setting.name.clone().unwrap_or_default();
    let tolerances = cases.iter().map(|case| &case.setting.tolerance);
    let tolerance = tolerances.min().map_or(0.0, rational_to_f64);
    let (equations, left_out) = equations(model, cases);
    let matching = match wanted {
        Some(wanted) => Some(matching::matching(model, cases, wanted, tolerance)?),
        None => None,
    };
    let comparison = Comparison {
        phenomena: cases.iter().map(names).collect(),
        titles: cases
            .iter()
            .map(|case| case.setting.title.clone())
            .collect(),
        tolerance,
        scales: scales(model, cases),
        groups: groups(cases, tolerance),
        equations,
        matching,
    };
    Ok((comparison, left_out))
}

// Scales and groups ---------------------------------------------------------------------------

fn scales(model: &Model, cases: &[&Case]) -> Vec<ComparedScale> {
    let is_used = used(model, cases);
    let settings = || cases.iter().map(|case| &case.setting);
    (0..model.symbols.len())
        .filter(|idx| is_used[*idx])
        .map(|idx| {
            let info = &model.symbols[idx];
            let id = SymbolId(idx as u32);
            ComparedScale {
                name: info.name.clone(),
                unit: info
                    .dimension
                    .map_or_else(|| "1".to_owned(), |dimension| dimension.unit_text()),
                written_units: settings()
                    .map(|setting| {
                        let is_seen = is_seen(model, setting, idx);
                        is_seen.then(|| audit::written_unit(model, setting, id))?
                    })
                    .collect(),
                values: settings()
                    .map(|setting| setting.symbol_value(&Symbol::Declared(id)).ok())
                    .collect(),
            }
        })
        .collect()
}

fn is_seen(model: &Model, setting: &Setting, idx: usize) -> bool {
    let local_to = model.symbols[idx].local_to;
    local_to.is_none() || local_to == setting.phenomenon
}

/// The symbols on which the terms and the groups with a value rest, and those to which a
/// phenomenon gives a value of its own.
fn used(model: &Model, cases: &[&Case]) -> Vec<bool> {
    let mut used = vec![false; model.symbols.len()];
    for case in cases {
        let setting = &case.setting;
        let terms = case.equations.iter().flat_map(|equation| &equation.terms);
        let groups = setting
            .groups
            .iter()
            .map(|group| &group.size)
            .filter(|size| setting.monomial_range(&size.resolved).is_ok());
        let mut waiting: Vec<SymbolId> = terms
            .map(|term| &term.size)
            .chain(groups)
            .flat_map(|size| size.written.powers().iter().chain(size.resolved.powers()))
            .flat_map(|(symbol, _)| match symbol {
                Symbol::Declared(id) => vec![*id],
                Symbol::Function(function) => function.parts.clone(),
            })
            .collect();
        if let Some(phenomenon) = setting.phenomenon {
            let given = model.phenomena[phenomenon].values.iter();
            waiting.extend(given.map(|(id, _)| *id));
        }
        while let Some(id) = waiting.pop() {
            if is_seen(model, setting, id.idx()) {
                used[id.idx()] = true;
            }
        }
    }
    used
}

fn groups(cases: &[&Case], tolerance: f64) -> Vec<ComparedGroup> {
    let Some((first, _)) = cases.split_first() else {
        return Vec::new();
    };
    let groups = first.setting.groups.iter();
    groups
        .filter_map(|group| {
            let values = cases
                .iter()
                .map(|case| value(case, &group.name))
                .collect::<Option<Vec<Range>>>()?;
            let nominal: Vec<f64> = values.iter().map(|value| value.nominal).collect();
            Some(ComparedGroup {
                name: group.name.clone(),
                title: group.title.clone(),
                is_match: agree(&nominal, tolerance),
                values,
            })
        })
        .collect()
}

fn value(case: &Case, group: &str) -> Option<Range> {
    let setting = &case.setting;
    let group = setting.groups.iter().find(|found| found.name == group)?;
    setting.monomial_range(&group.size.resolved).ok()
}

/// Whether the largest amount is at most `1 + tolerance` times the smallest, all of one
/// sign.
pub fn agree(values: &[f64], tolerance: f64) -> bool {
    let amounts = values.iter().map(|value| value.abs());
    let smallest = amounts.clone().fold(f64::INFINITY, f64::min);
    let largest = amounts.fold(0.0, f64::max);
    let is_one_sign =
        values.iter().all(|value| *value >= 0.0) || values.iter().all(|value| *value <= 0.0);
    is_one_sign && at_most(largest, (1.0 + tolerance) * smallest)
}

// Equations -----------------------------------------------------------------------------------

fn equations(model: &Model, cases: &[&Case]) -> (Vec<ComparedEquation>, Vec<LeftOut>) {
    let mut known = Vec::new();
    let mut left_out = Vec::new();
    for (idx, equation) in model.equations.iter().enumerate() {
        let mut open: Vec<String> = Vec::new();
        for name in cases
            .iter()
            .flat_map(|case| case.open_in(&case.equations[idx]))
        {
            if !open.contains(&name) {
                open.push(name);
            }
        }
        if !open.is_empty() {
            let equation = equation.name.text.clone();
            left_out.push(LeftOut { equation, open });
        } else if cases
            .iter()
            .any(|case| !case.equations[idx].terms.is_empty())
        {
            known.push(idx);
        }
    }
    let reductions: Vec<reduce::Reduction> = cases
        .iter()
        .map(|case| reduce::reduce(model, case, &known, case.setting.tolerance()))
        .collect();
    let compared = known
        .iter()
        .map(|idx| compared(cases, *idx, &reductions))
        .collect();
    (compared, left_out)
}

fn compared(cases: &[&Case], idx: usize, reductions: &[reduce::Reduction]) -> ComparedEquation {
    let views: Vec<View> = cases.iter().map(|case| View::of(case, idx)).collect();
    let mut names: Vec<&String> = Vec::new();
    for (name, _) in views.iter().flat_map(|view| &view.processes) {
        if !names.contains(&name) {
            names.push(name);
        }
    }
    let equation = &cases[0].equations[idx];
    let of_name = |reduction: &'_ reduce::Reduction| {
        let mut equations = reduction.equations.iter();
        equations.find(|found| found.name == equation.name).cloned()
    };
    let reduced: Vec<Option<reduce::ReducedEquation>> = reductions.iter().map(of_name).collect();
    ComparedEquation {
        name: equation.name.clone(),
        title: equation.title.clone(),
        unit: equation.unit.clone(),
        processes: names.iter().map(|name| process(&views, name)).collect(),
        balances: reduced
            .iter()
            .map(|found| found.as_ref().and_then(|found| found.balance.clone()))
            .collect(),
        reduced: reduced
            .iter()
            .map(|found| match found {
                Some(found) => found.reduced.clone(),
                None => "0 = 0".to_owned(),
            })
            .collect(),
    }
}

/// The processes of one equation in one case, with size, share and verdict.
struct View {
    processes: Vec<(String, (Range, Range, Verdict))>,
}

impl View {
    fn of(case: &Case, idx: usize) -> View {
        let equation = &case.equations[idx];
        let Some(shares) = Shares::of(&case.setting, equation) else {
            return View {
                processes: Vec::new(),
            };
        };
        let ranked = rank::processes(equation, &shares, case.setting.tolerance());
        let processes = ranked.into_iter().map(|found| {
            let sizes: Vec<Monomial> = found
                .members
                .iter()
                .map(|term| equation.terms[*term].size.resolved.clone())
                .collect();
            let size = sizes::ratio(&case.setting, &sizes, &[Monomial::one()]);
            (found.process, (size, found.share, found.verdict))
        });
        View {
            processes: processes.collect(),
        }
    }
}

fn process(views: &[View], name: &str) -> ComparedProcess {
    let nothing = (Range::exact(0.0), Range::exact(0.0), Verdict::Drops);
    let found: Vec<(Range, Range, Verdict)> = views
        .iter()
        .map(|view| {
            let mut processes = view.processes.iter();
            let found = processes.find(|(process, _)| process == name);
            found.map_or(nothing, |(_, found)| *found)
        })
        .collect();
    ComparedProcess {
        process: name.to_owned(),
        sizes: found.iter().map(|(size, _, _)| *size).collect(),
        shares: found.iter().map(|(_, share, _)| *share).collect(),
        verdicts: found.iter().map(|(_, _, verdict)| *verdict).collect(),
    }
}

/// Checks what a `compare` request names.
pub fn check(model: &Model, request: &ast::Request) -> Vec<ModelError> {
    let ast::RequestKind::Compare {
        phenomena,
        matching,
    } = &request.kind
    else {
        return Vec::new();
    };
    let phenomena = phenomena
        .iter()
        .filter_map(|name| crate::analysis::requests::phenomenon(model, name).err());
    let groups = matching
        .iter()
        .flatten()
        .filter_map(|name| movable::group(model, name).err());
    phenomena.chain(groups).collect()
}
