//! Scales that alone, with their whole range, make an unmet claim hold.

use crate::algebra::monomial::{Monomial, Symbol};
use crate::analysis::show::{CaseNames, Quotient};
use crate::analysis::sizes::{self, at_most};
use crate::syntax::ast;

/// Scales with their factors.
pub(super) type Mends = Vec<(String, f64)>;

/// Decades within which a mend is looked for.
const MEND_DECADES: f64 = 12.0;
/// The step, in natural logarithms, of the search for the nearest mend.
const MEND_STEP: f64 = 0.25;

/// The scales that alone bring the highest value of a ratio to the limit, each with its
/// factor (the whole range of the scale moves), nearest first.
pub(super) fn of_ratio(quotient: &Quotient, limit: f64, names: &CaseNames<'_>) -> Mends {
    let highest =
        |shifted: &Quotient| sizes::ratio(&names.case.setting, &shifted.above, &shifted.below).high;
    of_quotient(quotient, names, &|shifted| highest(shifted) / limit)
}

/// The same for a nominal ratio that must lie within a factor of 1.
pub(super) fn of_nearness(quotient: &Quotient, limit: f64, names: &CaseNames<'_>) -> Mends {
    let setting = &names.case.setting;
    let nominal = |sizes: &[Monomial]| {
        let sizes = sizes.iter().map(|size| setting.nominal(size));
        sizes.fold(0.0, f64::max)
    };
    of_quotient(quotient, names, &|shifted| {
        let ratio = nominal(&shifted.above) / nominal(&shifted.below);
        ratio.max(1.0 / ratio) / limit
    })
}

/// `excess` is above 1 where the claim fails.
fn of_quotient(
    quotient: &Quotient,
    names: &CaseNames<'_>,
    excess: &dyn Fn(&Quotient) -> f64,
) -> Mends {
    let sizes = quotient.above.iter().chain(&quotient.below);
    nearest(names, sizes, &|symbol, way| {
        excess(&shifted(quotient, symbol, way))
    })
}

/// The scales in some sizes that alone bring an excess to 1, each with its factor, nearest
/// first.
pub(super) fn nearest<'a>(
    names: &CaseNames<'_>,
    sizes: impl IntoIterator<Item = &'a Monomial>,
    excess: &dyn Fn(&Symbol, f64) -> f64,
) -> Mends {
    let mut symbols: Vec<Symbol> = Vec::new();
    for (symbol, _) in sizes.into_iter().flat_map(Monomial::powers) {
        let is_scale = match symbol {
            Symbol::Declared(id) => names.model.symbols[id.idx()].kind == ast::ValueKind::Scale,
            Symbol::Function(_) => false,
        };
        if is_scale && !symbols.contains(symbol) {
            symbols.push(symbol.clone());
        }
    }
    symbols.sort();
    let mut found: Mends = symbols
        .iter()
        .filter_map(|symbol| {
            let way = nearest_way(&|way| excess(symbol, way))?;
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
