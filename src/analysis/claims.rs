//! `claim`: what CI holds a script to.

use num_traits::ToPrimitive;

use crate::algebra::monomial::{Monomial, Symbol};
use crate::analysis::reduce::Kept;
use crate::analysis::show::{self, CaseNames, Quotient};
use crate::analysis::sizes::{self, Verdict, at_most, same};
use crate::model::errors::ModelError;
use crate::model::values::Fault;
use crate::model::{declarations, requests, settings};
use crate::number::rational_to_f64;
use crate::source::Span;
use crate::syntax::ast::{self, Claim, ClaimWord, Relation};
use crate::units::Range;

/// A claim held against one phenomenon.
#[derive(Debug, Clone)]
pub struct Held {
    /// The claim as written.
    pub text: String,
    /// The phenomenon.
    pub phenomenon: Option<String>,
    /// Whether it holds.
    pub met: bool,
    /// What was measured.
    pub measured: Measured,
    /// The factor by which it fails.
    pub miss: Option<f64>,
    /// The scales that alone make it hold, each with its factor, nearest first.
    pub mends: Vec<(String, f64)>,
    /// Where it stands.
    pub span: Span,
}

/// What a claim was held against.
#[derive(Debug, Clone)]
pub enum Measured {
    /// A ratio of the two sides, against a limit.
    Ratio {
        /// The ratio left over right; infinite where the right side is 0.
        value: Range,
        /// The limit: of the ratio, of its inverse, or of the factor either way.
        limit: f64,
        /// The relation.
        relation: Relation,
    },
    /// The left side, compared with the right one.
    Value {
        /// The left side, in SI units.
        left: Range,
        /// The right side, in SI units.
        right: Range,
        /// The SI unit.
        unit: String,
        /// The relation.
        relation: Relation,
        /// Whether interval arithmetic gave the ranges.
        is_bound: bool,
    },
    /// The processes that have the verdict.
    Processes {
        /// The word of the claim.
        word: ClaimWord,
        /// The processes found; for `dropped`, those of the claim that do not drop.
        found: Vec<String>,
        /// For `dropped`: the highest share among them.
        share: Option<f64>,
    },
}

/// Holds a claim against a case. The unit is that of its left side.
///
/// # Errors
/// Open names and faults of evaluation.
pub fn hold(
    claim: &Claim,
    text: &str,
    span: Span,
    unit: String,
    names: &CaseNames<'_>,
) -> Result<Held, Fault> {
    let held = Held {
        text: text.to_owned(),
        phenomenon: names.case.setting.name.clone(),
        met: false,
        measured: Measured::Processes {
            word: ClaimWord::Kept,
            found: Vec::new(),
            share: None,
        },
        miss: None,
        mends: Vec::new(),
        span,
    };
    match claim {
        Claim::Verdict {
            word,
            equation,
            processes,
        } => verdict(*word, equation, processes, held, names),
        Claim::Relation {
            left,
            relation,
            right,
            within,
        } => match relation {
            Relation::MuchLess | Relation::MuchGreater | Relation::Similar => {
                ratio(left, *relation, right, within.as_ref(), held, names)
            }
            Relation::Less | Relation::Greater | Relation::Equal => {
                comparison(left, *relation, right, within.as_ref(), unit, held, names)
            }
        },
    }
}

// Verdicts ------------------------------------------------------------------------------------

fn verdict(
    word: ClaimWord,
    equation: &ast::Name,
    processes: &[ast::ProcessRef],
    held: Held,
    names: &CaseNames<'_>,
) -> Result<Held, Fault> {
    let case = names.case;
    let Some(idx) = names.model.equation(&equation.text) else {
        return Err(Fault::NotAProduct(equation.span));
    };
    let terms = &case.equations[idx];
    if let Some(fault) = terms.faults.first() {
        return Err(Fault::Error(fault.clone()));
    }
    let tolerance = case.setting.tolerance();
    let Some(kept) = Kept::of(case, terms, tolerance) else {
        let mut open = Vec::new();
        for term in &terms.terms {
            open.extend(
                case.setting
                    .monomial_range(&term.size.resolved)
                    .err()
                    .into_iter()
                    .flatten(),
            );
        }
        return Err(Fault::Open(open));
    };
    let wanted: Vec<String> = processes
        .iter()
        .map(|process| requests::process_label(names.model, case, idx, process))
        .collect::<Result<_, ModelError>>()?;
    let labels = |found: Vec<&crate::analysis::rank::RankedProcess>| -> Vec<String> {
        found
            .into_iter()
            .map(|process| process.process.clone())
            .collect()
    };
    Ok(match word {
        ClaimWord::Leading => exactly(word, &wanted, labels(kept.leading()), held),
        ClaimWord::Kept => exactly(word, &wanted, labels(kept.kept_processes()), held),
        ClaimWord::Dropped => dropped(&wanted, &kept, tolerance, held, names),
    })
}

fn exactly(word: ClaimWord, wanted: &[String], found: Vec<String>, held: Held) -> Held {
    let met = wanted.iter().all(|process| found.contains(process))
        && found.iter().all(|process| wanted.contains(process));
    Held {
        met,
        measured: Measured::Processes {
            word,
            found,
            share: None,
        },
        ..held
    }
}

fn dropped(
    wanted: &[String],
    kept: &Kept<'_>,
    tolerance: f64,
    held: Held,
    names: &CaseNames<'_>,
) -> Held {
    let stays: Vec<usize> = (0..kept.verdicts.len())
        .filter(|idx| kept.verdicts[*idx] != Verdict::Drops)
        .filter(|idx| {
            wanted
                .iter()
                .any(|process| process == kept.equation.terms[*idx].label())
        })
        .collect();
    let mut found: Vec<String> = Vec::new();
    for idx in &stays {
        let label = kept.equation.terms[*idx].label();
        if !found.iter().any(|present| present == label) {
            found.push(label.to_owned());
        }
    }
    let share = stays
        .iter()
        .map(|idx| kept.shares.shares[*idx].high)
        .reduce(f64::max);
    let size = |idx: usize| kept.equation.terms[idx].size.resolved.clone();
    let quotient = Quotient {
        above: stays.iter().map(|idx| size(*idx)).collect(),
        below: (0..kept.verdicts.len())
            .filter(|idx| !stays.contains(idx))
            .map(size)
            .collect(),
    };
    let mends = if stays.is_empty() || quotient.below.is_empty() {
        Vec::new()
    } else {
        mends(&quotient, tolerance, names)
    };
    Held {
        met: stays.is_empty(),
        miss: share.map(|share| share / tolerance),
        mends,
        measured: Measured::Processes {
            word: ClaimWord::Dropped,
            found,
            share,
        },
        ..held
    }
}

// Ratios --------------------------------------------------------------------------------------

fn ratio(
    left: &ast::Expr,
    relation: Relation,
    right: &ast::Expr,
    within: Option<&ast::Proportion>,
    held: Held,
    names: &CaseNames<'_>,
) -> Result<Held, Fault> {
    let limit = match (relation, within) {
        (Relation::Similar, None) => 10f64.sqrt(),
        (Relation::Similar, Some(within)) => rational_to_f64(&settings::factor(within)?),
        (_, None) => names.case.setting.tolerance(),
        (_, Some(within)) => rational_to_f64(&declarations::share(within)?),
    };
    let (value, quotient) = quotient_of(left, right, names)?;
    let (met, miss) = match relation {
        Relation::MuchLess => (at_most(value.high, limit), value.high / limit),
        Relation::MuchGreater => (at_most(1.0 / value.low, limit), 1.0 / (value.low * limit)),
        _ => {
            let off = value.nominal.max(1.0 / value.nominal);
            (at_most(off, limit), off / limit)
        }
    };
    let mends = match quotient.filter(|_| !met) {
        None => Vec::new(),
        Some(quotient) => match relation {
            Relation::MuchLess => mends(&quotient, limit, names),
            Relation::MuchGreater => mends(&inverse(quotient), limit, names),
            _ => similar_mends(&quotient, limit, names),
        },
    };
    Ok(Held {
        met,
        miss: (!met && miss.is_finite()).then_some(miss),
        mends,
        measured: Measured::Ratio {
            value,
            limit,
            relation,
        },
        ..held
    })
}

fn inverse(quotient: Quotient) -> Quotient {
    Quotient {
        above: quotient.below,
        below: quotient.above,
    }
}

/// The ratio of two amounts over the box: exact for products and processes, else by
/// interval arithmetic.
fn quotient_of(
    left: &ast::Expr,
    right: &ast::Expr,
    names: &CaseNames<'_>,
) -> Result<(Range, Option<Quotient>), Fault> {
    let found = (show::quotient(left, names), show::quotient(right, names));
    if let (Ok(above), Ok(below)) = &found
        && !above.above.is_empty()
        && !below.above.is_empty()
        && !above.below.is_empty()
        && !below.below.is_empty()
    {
        let whole = Quotient {
            above: products(&above.above, &below.below),
            below: products(&above.below, &below.above),
        };
        let value = sizes::ratio(&names.case.setting, &whole.above, &whole.below);
        return Ok((value, Some(whole)));
    }
    for side in [found.0, found.1] {
        if let Err(fault @ (Fault::Open(_) | Fault::Error(_))) = side {
            return Err(fault);
        }
    }
    let above = show::value(left, names)?.0.abs();
    let below = show::value(right, names)?.0.abs();
    let over = |a: f64, b: f64| if b == 0.0 && a == 0.0 { 0.0 } else { a / b };
    let value = Range {
        low: over(above.low, below.high),
        nominal: over(above.nominal, below.nominal),
        high: over(above.high, below.low),
    };
    Ok((value, None))
}

fn products(left: &[Monomial], right: &[Monomial]) -> Vec<Monomial> {
    let pairs = left
        .iter()
        .flat_map(|a| right.iter().map(move |b| a.times(b)));
    pairs.flatten().collect()
}

// Comparisons ---------------------------------------------------------------------------------

fn comparison(
    left: &ast::Expr,
    relation: Relation,
    right: &ast::Expr,
    within: Option<&ast::Proportion>,
    unit: String,
    held: Held,
    names: &CaseNames<'_>,
) -> Result<Held, Fault> {
    let (a, a_is_bound) = show::value(left, names)?;
    let (b, b_is_bound) = show::value(right, names)?;
    let are_amounts = a.low > 0.0 && b.low > 0.0;
    let (ratio, quotient) = if are_amounts {
        quotient_of(left, right, names)?
    } else {
        (Range::exact(f64::NAN), None)
    };
    let is_less = |a: &Range, b: &Range| a.high < b.low && !same(a.high, b.low);
    let one = Range::exact(1.0);
    let (met, miss, limits) = match relation {
        Relation::Less if are_amounts => (is_less(&ratio, &one), ratio.high, (1.0, f64::INFINITY)),
        Relation::Less => (is_less(&a, &b), f64::NAN, (1.0, f64::INFINITY)),
        Relation::Greater if are_amounts => {
            (is_less(&one, &ratio), 1.0 / ratio.low, (1.0, f64::INFINITY))
        }
        Relation::Greater => (is_less(&b, &a), f64::NAN, (1.0, f64::INFINITY)),
        _ => {
            let margin = match within {
                Some(within) => declarations::share(within)?.to_f64().unwrap_or(0.0),
                None => 1e-9,
            };
            let off = (a.nominal - b.nominal).abs();
            let allowed = margin * b.nominal.abs();
            (
                at_most(off, allowed),
                off / allowed,
                (1.0 + margin, 1.0 / (1.0 - margin)),
            )
        }
    };
    let mends = match quotient.filter(|_| !met) {
        None => Vec::new(),
        Some(quotient) => match relation {
            Relation::Less => mends(&quotient, 1.0, names),
            Relation::Greater => mends(&inverse(quotient), 1.0, names),
            _ => similar_mends(&quotient, limits.0.min(limits.1), names),
        },
    };
    Ok(Held {
        met,
        miss: (!met && miss.is_finite()).then_some(miss),
        mends,
        measured: Measured::Value {
            left: a,
            right: b,
            unit,
            relation,
            is_bound: a_is_bound || b_is_bound,
        },
        ..held
    })
}

// Mends ---------------------------------------------------------------------------------------

/// Decades within which a mend is looked for.
const MEND_DECADES: f64 = 12.0;
/// The step, in natural logarithms, of the search for the nearest mend.
const MEND_STEP: f64 = 0.25;

/// The scales that alone bring the highest value of a ratio to the limit, each with its
/// factor (the whole range of the scale moves), nearest first.
fn mends(quotient: &Quotient, limit: f64, names: &CaseNames<'_>) -> Vec<(String, f64)> {
    let highest =
        |shifted: &Quotient| sizes::ratio(&names.case.setting, &shifted.above, &shifted.below).high;
    nearest_mends(quotient, names, &|shifted| highest(shifted) / limit)
}

/// The same for a nominal ratio that must lie within a factor of 1.
fn similar_mends(quotient: &Quotient, limit: f64, names: &CaseNames<'_>) -> Vec<(String, f64)> {
    let setting = &names.case.setting;
    let nominal = |sizes: &[Monomial]| {
        let sizes = sizes.iter().map(|size| setting.nominal(size));
        sizes.fold(0.0, f64::max)
    };
    nearest_mends(quotient, names, &|shifted| {
        let ratio = nominal(&shifted.above) / nominal(&shifted.below);
        ratio.max(1.0 / ratio) / limit
    })
}

/// `excess` is above 1 where the claim fails.
fn nearest_mends(
    quotient: &Quotient,
    names: &CaseNames<'_>,
    excess: &dyn Fn(&Quotient) -> f64,
) -> Vec<(String, f64)> {
    let mut symbols: Vec<Symbol> = Vec::new();
    for (symbol, _) in quotient
        .above
        .iter()
        .chain(&quotient.below)
        .flat_map(Monomial::powers)
    {
        let is_scale = match symbol {
            Symbol::Declared(id) => names.model.symbols[id.idx()].kind == ast::ValueKind::Scale,
            Symbol::Function(_) => false,
        };
        if is_scale && !symbols.contains(symbol) {
            symbols.push(symbol.clone());
        }
    }
    symbols.sort();
    let mut found: Vec<(String, f64)> = symbols
        .iter()
        .filter_map(|symbol| {
            let way = nearest_way(&|way| excess(&shifted(quotient, symbol, way)))?;
            Some((names.case.symbol_name(symbol), way.exp()))
        })
        .collect();
    found.sort_by(|a, b| a.1.ln().abs().total_cmp(&b.1.ln().abs()));
    found
}

/// The same sizes with one scale multiplied by `exp(way)`.
fn shifted(quotient: &Quotient, symbol: &Symbol, way: f64) -> Quotient {
    let moved = |sizes: &[Monomial]| -> Vec<Monomial> {
        sizes
            .iter()
            .map(|size| {
                let power = size.powers().iter().find(|(found, _)| found == symbol);
                let factor = power.map_or(1.0, |(_, power)| (power.to_f64() * way).exp());
                let mut size = size.clone();
                if let Some(exact) = num_rational::BigRational::from_float(factor)
                    && let Ok(number) = size.number.times(&crate::number::Number::rational(exact))
                {
                    size.number = number;
                }
                size
            })
            .collect()
    };
    Quotient {
        above: moved(&quotient.above),
        below: moved(&quotient.below),
    }
}

/// The shortest way, up or down, at which the excess falls to 1.
fn nearest_way(excess: &dyn Fn(f64) -> f64) -> Option<f64> {
    let n_steps = (MEND_DECADES * std::f64::consts::LN_10 / MEND_STEP) as usize;
    for step in 1..=n_steps {
        for sign in [1.0, -1.0] {
            let far = sign * MEND_STEP * step as f64;
            if at_most(excess(far), 1.0) {
                return Some(bisected(excess, far - sign * MEND_STEP, far));
            }
        }
    }
    None
}

fn bisected(excess: &dyn Fn(f64) -> f64, mut fails: f64, mut holds: f64) -> f64 {
    for _ in 0..60 {
        let middle = 0.5 * (fails + holds);
        if at_most(excess(middle), 1.0) {
            holds = middle;
        } else {
            fails = middle;
        }
    }
    holds
}
