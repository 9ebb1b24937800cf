//! Known scales with a range as bounded unknowns: as few as possible, since every one
//! doubles the corners of the box.
//!
//! What a range does to the ratios of terms may be what an unknown does: then the unknown
//! follows it, and no balance changes. Or it may be what another range does, up to such a
//! shift: then the two are one range, as wide as both.

use num_rational::BigRational;
use num_traits::{FromPrimitive, Zero};

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::analysis::balances::system::power_in;
use crate::analysis::names::row_echelon;
use crate::model::settings::{Setting, Variable};
use crate::number::Number;

/// The grid of logarithms: exact sums of rounded ones keep exact products exact.
const GRID: f64 = (1_u64 << 48) as f64;

/// A known scale with a range, in logarithms.
#[derive(Debug, Clone)]
pub(crate) struct Ranged {
    /// The scale.
    pub(crate) symbol: Symbol,
    /// Its lower end, widened by what joins it.
    pub(crate) low: BigRational,
    /// Its upper end.
    pub(crate) high: BigRational,
}

/// Two sizes whose ratio counts; one alone counts against 1.
pub(super) type Pair<'q> = (&'q Monomial, Option<&'q Monomial>);

/// The ranges that matter to the ratios of some sizes.
pub(super) fn independent(
    setting: &Setting,
    unknowns: &[SymbolId],
    pairs: &[Pair<'_>],
) -> Vec<Ranged> {
    let symbols = ranged_symbols(setting, unknowns, pairs);
    if symbols.is_empty() {
        return Vec::new();
    }
    let rows = pairs.iter().map(|pair| {
        let open = unknowns.iter().map(|id| Symbol::Declared(*id));
        let all: Vec<Symbol> = open.chain(symbols.iter().cloned()).collect();
        all.iter().map(|symbol| power(pair, symbol)).collect()
    });
    let (rows, pivots) = row_echelon(rows.collect(), unknowns.len());
    // What is left of each column once the unknowns follow as far as they can.
    let column = |place: usize| -> Vec<BigRational> {
        let rows = rows.iter().skip(pivots.len());
        rows.map(|row| row[unknowns.len() + place].clone())
            .collect()
    };
    let mut kept: Vec<(Ranged, Vec<BigRational>)> = Vec::new();
    for (place, symbol) in symbols.into_iter().enumerate() {
        let own = column(place);
        if own.iter().all(Zero::is_zero) {
            continue;
        }
        let ranged = range(setting, symbol);
        let alike = kept
            .iter_mut()
            .find_map(|(other, column)| Some((other, times(column, &own)?)));
        match alike {
            Some((other, factor)) => widen(setting, other, &ranged, &factor),
            None => kept.push((ranged, own)),
        }
    }
    kept.into_iter().map(|(ranged, _)| ranged).collect()
}

fn power((size, other): &Pair<'_>, symbol: &Symbol) -> BigRational {
    let other = other.map_or_else(BigRational::zero, |other| {
        power_in(other, symbol).to_rational()
    });
    power_in(size, symbol).to_rational() - other
}

fn ranged_symbols(setting: &Setting, unknowns: &[SymbolId], pairs: &[Pair<'_>]) -> Vec<Symbol> {
    let sizes = pairs
        .iter()
        .flat_map(|(size, other)| [Some(*size), *other])
        .flatten();
    let mut symbols: Vec<Symbol> = sizes
        .flat_map(Monomial::powers)
        .map(|(symbol, _)| symbol.clone())
        .collect();
    symbols.sort();
    symbols.dedup();
    symbols.retain(|symbol| {
        let is_open = matches!(symbol, Symbol::Declared(id) if unknowns.contains(id));
        !is_open
            && setting
                .symbol_value(symbol)
                .is_ok_and(|value| value.low < value.high)
    });
    symbols
}

fn range(setting: &Setting, symbol: Symbol) -> Ranged {
    let value = setting.symbol_value(&symbol).map(|value| value.abs());
    let (low, high) = value.map_or((1.0, 1.0), |value| (value.low, value.high));
    Ranged {
        symbol,
        low: on_grid(low.ln()),
        high: on_grid(high.ln()),
    }
}

/// The factor by which one column is another one.
fn times(column: &[BigRational], other: &[BigRational]) -> Option<BigRational> {
    let place = column.iter().position(|entry| !entry.is_zero())?;
    let factor = &other[place] / &column[place];
    let is_same = column.iter().zip(other).all(|(a, b)| a * &factor == *b);
    is_same.then_some(factor)
}

/// A range takes in another one, about its nominal value.
fn widen(setting: &Setting, ranged: &mut Ranged, other: &Ranged, factor: &BigRational) {
    let nominal = nominal_log(setting, &other.symbol);
    let ends = [&other.low - &nominal, &other.high - &nominal].map(|way| way * factor);
    let [a, b] = ends;
    ranged.low += (&a).min(&b);
    ranged.high += a.max(b);
}

/// The logarithm of a known symbol's amount at its nominal value, exact in the whole
/// powers that an exact value is made of.
pub(super) fn nominal_log(setting: &Setting, symbol: &Symbol) -> BigRational {
    if let Symbol::Declared(id) = symbol
        && let Some(Variable::Known(value)) = setting.variables.get(id.idx())
        && let Some(exact) = &value.exact
    {
        return log_of(exact);
    }
    let value = setting.symbol_value(symbol);
    value.map_or_else(
        |_| BigRational::zero(),
        |value| on_grid(value.nominal.abs().ln()),
    )
}

/// The logarithm of an exact number's amount.
pub(super) fn log_of(number: &Number) -> BigRational {
    let mut sum = number.pi_power().to_rational() * on_grid(std::f64::consts::PI.ln());
    for (base, power) in number.whole_powers() {
        sum += power * on_grid(Number::rational(BigRational::from_integer(base)).ln_abs());
    }
    sum
}

fn on_grid(log: f64) -> BigRational {
    let steps = BigRational::from_f64((log * GRID).round()).unwrap_or_default();
    steps / BigRational::from_integer((1_i64 << 48).into())
}
