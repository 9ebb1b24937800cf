//! `show`: the value of an expression, and expressions as ratios of sizes for claims.

use crate::algebra::monomial::{Monomial, SymbolId};
use crate::analysis::sizes::{self, order_of_magnitude};
use crate::analysis::{Case, Factors};
use crate::model::errors::ModelError;
use crate::model::names;
use crate::model::settings::Variable;
use crate::model::values::{self, Fault, Names, Value};
use crate::model::{GroupId, Meaning, Model};
use crate::source::Span;
use crate::syntax::ast::{self, ExprKind, Operator};
use crate::units::Range;

/// What `show` found.
#[derive(Debug, Clone)]
pub struct Shown {
    /// The value in SI units.
    pub value: Range,
    /// The SI unit.
    pub unit: String,
    /// Its order of magnitude.
    pub order: Option<i32>,
    /// As number and exponents, where it is a product of powers.
    pub factors: Option<Factors>,
    /// The named group that it is.
    pub group: Option<String>,
    /// The title of that group.
    pub group_title: Option<String>,
    /// The value in the unit asked for.
    pub shown_in: Option<(String, Range)>,
    /// Whether the range is an upper bound of the true one, by interval arithmetic.
    pub is_bound: bool,
}

/// Names of one case, for evaluating what a request holds.
pub struct CaseNames<'a> {
    /// The model.
    pub model: &'a Model,
    /// The case.
    pub case: &'a Case,
}

impl Names for CaseNames<'_> {
    fn model(&self) -> &Model {
        self.model
    }

    fn phenomenon(&self) -> Option<usize> {
        self.case.setting.phenomenon
    }

    fn symbol(&self, id: SymbolId) -> Result<Value, Vec<SymbolId>> {
        match &self.case.setting.variables[id.idx()] {
            Variable::Known(value) => Ok(value.clone()),
            Variable::Open(open) => Err(open.clone()),
        }
    }

    fn group(&self, id: GroupId) -> Option<&Monomial> {
        self.case
            .setting
            .group_formulas
            .get(id.0 as usize)?
            .as_ref()
    }

    fn process(&self, equation: &ast::Name, process: &ast::ProcessName) -> Result<Range, Fault> {
        let sizes = self.process_sizes(equation, process)?;
        if sizes.is_empty() {
            return Ok(Range::exact(0.0));
        }
        for size in &sizes {
            self.case
                .setting
                .monomial_range(size)
                .map_err(Fault::Open)?;
        }
        Ok(sizes::ratio(&self.case.setting, &sizes, &[Monomial::one()]))
    }
}

impl CaseNames<'_> {
    /// The sizes of a process's terms; none where all of them are gone.
    fn process_sizes(
        &self,
        equation: &ast::Name,
        process: &ast::ProcessName,
    ) -> Result<Vec<Monomial>, Fault> {
        let Some(idx) = self.model.equation(&equation.text) else {
            return Ok(Vec::new());
        };
        let equation = &self.case.equations[idx];
        if let Some(fault) = equation.faults.first() {
            return Err(Fault::Error(fault.clone()));
        }
        let terms = equation.terms.iter();
        Ok(terms
            .filter(|term| term.label() == process.text)
            .map(|term| term.size.resolved.clone())
            .collect())
    }
}

/// A ratio of sizes: the largest of some monomials over the largest of others. An empty
/// list above is 0.
#[derive(Debug, Clone)]
pub struct Quotient {
    /// Any of these, whichever is the largest.
    pub above: Vec<Monomial>,
    /// Likewise, below the line.
    pub below: Vec<Monomial>,
}

/// A product of powers and processes as a ratio of sizes.
///
/// # Errors
/// [`Fault::NotAProduct`] for anything else.
pub fn quotient(expr: &ast::Expr, names: &CaseNames<'_>) -> Result<Quotient, Fault> {
    let span = expr.span;
    match &expr.kind {
        ExprKind::Bracket(inside) => quotient(inside, names),
        ExprKind::Process { equation, process } => Ok(Quotient {
            above: names.process_sizes(equation, process)?,
            below: vec![Monomial::one()],
        }),
        ExprKind::Product(factors) => {
            let mut result = Quotient {
                above: vec![Monomial::one()],
                below: vec![Monomial::one()],
            };
            for (operator, factor) in factors {
                let next = quotient(factor, names)?;
                let is_zero = next.above.iter().all(|size| size.number.is_zero());
                if *operator == Operator::Over && is_zero {
                    let span = factor.span;
                    return Err(Fault::Error(ModelError::DividesByZero { span }));
                }
                let (above, below) = match operator {
                    Operator::Times => (next.above, next.below),
                    Operator::Over => (next.below, next.above),
                };
                result.above = products(&result.above, &above, span)?;
                result.below = products(&result.below, &below, span)?;
            }
            Ok(result)
        }
        ExprKind::Power { base, exponent } if holds_process(base) => {
            let exponent = names::exponent(exponent)?;
            let base = quotient(base, names)?;
            let raised = |sizes: &[Monomial]| -> Result<Vec<Monomial>, Fault> {
                let amount = if exponent.is_negative() {
                    exponent.negated()
                } else {
                    exponent
                };
                sizes
                    .iter()
                    .map(|size| values::monomial_power(size, amount, span))
                    .collect()
            };
            let (above, below) = (raised(&base.above)?, raised(&base.below)?);
            Ok(if exponent.is_negative() {
                Quotient {
                    above: below,
                    below: above,
                }
            } else {
                Quotient { above, below }
            })
        }
        _ => {
            let written = values::monomial(expr, names)?;
            let resolved = resolved(&written, names, span)?;
            Ok(Quotient {
                above: vec![resolved],
                below: vec![Monomial::one()],
            })
        }
    }
}

/// A monomial with derived products replaced; a fault while a name in it is open or 0.
fn resolved(written: &Monomial, names: &CaseNames<'_>, span: Span) -> Result<Monomial, Fault> {
    let setting = &names.case.setting;
    let size = setting
        .quantities
        .size(written.clone())
        .map_err(|_| Fault::Error(ModelError::TooLarge { span }))?;
    let is_zero = size.resolved.number.is_zero() && !size.resolved.is_number()
        || size
            .resolved
            .powers()
            .iter()
            .any(|(symbol, _)| setting.is_zero(symbol));
    if is_zero {
        return Err(Fault::NotAProduct(span));
    }
    setting
        .monomial_range(&size.resolved)
        .map_err(Fault::Open)?;
    Ok(size.resolved)
}

fn holds_process(expr: &ast::Expr) -> bool {
    match &expr.kind {
        ExprKind::Process { .. } => true,
        ExprKind::Bracket(inside) => holds_process(inside),
        ExprKind::Product(factors) => factors.iter().any(|(_, factor)| holds_process(factor)),
        ExprKind::Power { base, .. } => holds_process(base),
        _ => false,
    }
}

fn products(left: &[Monomial], right: &[Monomial], span: Span) -> Result<Vec<Monomial>, Fault> {
    let mut all = Vec::with_capacity(left.len() * right.len());
    for a in left {
        for b in right {
            let product = a
                .times(b)
                .map_err(|_| Fault::Error(ModelError::TooLarge { span }))?;
            if !all.contains(&product) {
                all.push(product);
            }
        }
    }
    Ok(all)
}

/// The value of an expression over the box, and whether interval arithmetic gave it.
///
/// # Errors
/// Open names, divisions by zero and the like.
pub fn value(expr: &ast::Expr, names: &CaseNames<'_>) -> Result<(Range, bool), Fault> {
    let (range, is_bound) = unchecked_value(expr, names)?;
    let is_finite = range.low.is_finite() && range.nominal.is_finite() && range.high.is_finite();
    if !is_finite {
        return Err(Fault::Error(ModelError::TooLarge { span: expr.span }));
    }
    Ok((range, is_bound))
}

fn unchecked_value(expr: &ast::Expr, names: &CaseNames<'_>) -> Result<(Range, bool), Fault> {
    let setting = &names.case.setting;
    match quotient(expr, names) {
        Ok(found) => match (found.above.as_slice(), found.below.as_slice()) {
            ([], _) => Ok((Range::exact(0.0), false)),
            (_, []) => Err(Fault::Error(ModelError::DividesByZero { span: expr.span })),
            // Alone, a monomial keeps its sign.
            ([above], [below]) => {
                let single = above
                    .over(below)
                    .map_err(|_| ModelError::TooLarge { span: expr.span })?;
                let range = setting.monomial_range(&single).map_err(Fault::Open)?;
                Ok((range, false))
            }
            (above, below) => Ok((sizes::ratio(setting, above, below), false)),
        },
        Err(Fault::NotAProduct(_)) => {
            let value = values::evaluate(expr, names)?;
            let is_exact = value.range.is_exact();
            Ok((value.range, !is_exact))
        }
        Err(fault) => Err(fault),
    }
}

/// Answers `show`.
///
/// # Errors
/// As [`value`].
pub fn show(
    expr: &ast::Expr,
    unit: Option<&ast::UnitText>,
    si_unit: String,
    names: &CaseNames<'_>,
) -> Result<Shown, Fault> {
    let (range, is_bound) = value(expr, names)?;
    let monomial = match quotient(expr, names) {
        Ok(Quotient { above, below }) => match (above.as_slice(), below.as_slice()) {
            ([above], [below]) => above.over(below).ok(),
            _ => None,
        },
        Err(_) => None,
    };
    let group = group(expr, monomial.as_ref(), names);
    let shown_in = match unit {
        Some(text) => {
            let unit = names::unit(text)?;
            let ends = [range.low, range.nominal, range.high].map(|end| unit.from_si(end));
            let range = Range {
                low: ends[0].min(ends[2]),
                nominal: ends[1],
                high: ends[0].max(ends[2]),
            };
            Some((text.text.clone(), range))
        }
        None => None,
    };
    Ok(Shown {
        value: range,
        unit: si_unit,
        order: order_of_magnitude(range.nominal),
        factors: monomial.map(|monomial| names.case.factors(&monomial)),
        group: group.map(|group| group.name.clone()),
        group_title: group.and_then(|group| group.title.clone()),
        shown_in,
        is_bound,
    })
}

/// The named group that an expression is: by name, or by its symbols and number.
fn group<'c>(
    expr: &ast::Expr,
    monomial: Option<&Monomial>,
    names: &CaseNames<'c>,
) -> Option<&'c crate::model::settings::Group> {
    let groups = &names.case.setting.groups;
    if let ExprKind::Name(name) = &expr.kind
        && let Some(Meaning::Group(_)) = names.model.meaning(name, names.phenomenon())
    {
        return groups.iter().find(|group| group.name == *name);
    }
    let monomial = monomial.filter(|monomial| !monomial.is_number())?;
    groups.iter().find(|group| group.size.resolved == *monomial)
}
