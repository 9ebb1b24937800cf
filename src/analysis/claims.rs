//! `claim`: what CI holds a script to. Here stand the relations; `verdicts` holds the
//! claims of what leads, is kept or drops, `mends` looks for scales that would make an
//! unmet claim hold.

mod mends;
mod verdicts;

use num_traits::ToPrimitive;

use crate::algebra::monomial::Monomial;
use crate::analysis::show::{self, CaseNames, Quotient};
use crate::analysis::sizes::{self, at_most, same};
use crate::model::values::Fault;
use crate::model::{declarations, dimensions, spreading};
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
        /// The unit in which the claim speaks, for reports.
        written_unit: Option<String>,
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
        /// The processes that are not as claimed.
        astray: Vec<Astray>,
    },
}

/// A process that is not as a claim has it.
#[derive(Debug, Clone, PartialEq)]
pub struct Astray {
    /// The process.
    pub process: String,
    /// Its share; `None` where all its terms are gone.
    pub share: Option<Range>,
    /// Whether the claim names it.
    pub is_claimed: bool,
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
            astray: Vec::new(),
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
        } => verdicts::verdict(*word, equation, processes, held, names),
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
        (Relation::Similar, Some(within)) => rational_to_f64(&spreading::factor(within)?),
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
            Relation::MuchLess => mends::of_ratio(&quotient, limit, names),
            Relation::MuchGreater => mends::of_ratio(&inverse(quotient), limit, names),
            _ => mends::of_nearness(&quotient, limit, names),
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
            Relation::Less => mends::of_ratio(&quotient, 1.0, names),
            Relation::Greater => mends::of_ratio(&inverse(quotient), 1.0, names),
            _ => mends::of_nearness(&quotient, limits.0.min(limits.1), names),
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
            written_unit: dimensions::literal_unit(right)
                .or(dimensions::literal_unit(left))
                .map(|unit| unit.text.clone()),
            relation,
            is_bound: a_is_bound || b_is_bound,
        },
        ..held
    })
}
