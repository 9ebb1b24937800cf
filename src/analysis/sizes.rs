//! Sizes over the box of ranges: affine forms of log-scales, shares and verdicts.
//!
//! Equality of sizes is asked here and nowhere else: two sizes within 1e-12 of one
//! another, relative, are equal.

use crate::algebra::monomial::{Monomial, Symbol};
use crate::model::settings::Setting;
use crate::model::terms::EquationTerms;
use crate::number::Exponent;
use crate::polyhedra::{self, Affine};
use crate::units::Range;

/// Sizes this near to one another, relative, are equal; so are logarithms of sizes this
/// near to one another.
pub const SAME: f64 = 1e-12;

/// Whether two sizes are equal.
pub fn same(a: f64, b: f64) -> bool {
    let largest = a.abs().max(b.abs());
    // An infinite size, of something over 0, would be near to everything.
    a == b || (largest.is_finite() && (a - b).abs() <= SAME * largest)
}

/// Whether a size lies at or below a limit.
pub fn at_most(size: f64, limit: f64) -> bool {
    size <= limit || same(size, limit)
}

/// The index of the largest size, the first of equal ones.
pub fn largest(sizes: impl IntoIterator<Item = f64>) -> Option<usize> {
    let mut best: Option<(usize, f64)> = None;
    for (idx, size) in sizes.into_iter().enumerate() {
        if best.is_none_or(|(_, found)| size > found && !same(size, found)) {
            best = Some((idx, size));
        }
    }
    best.map(|(idx, _)| idx)
}

/// What becomes of a term or process.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Verdict {
    /// Above the tolerance over the whole box: kept.
    Leads,
    /// Above it over part of the box: kept, with the condition under which it may go.
    Depends,
    /// Never above it: dropped.
    Drops,
}

impl Verdict {
    /// From the lowest and the highest share.
    pub fn of(share: &Range, tolerance: f64) -> Verdict {
        if at_most(share.high, tolerance) {
            Verdict::Drops
        } else if at_most(share.low, tolerance) {
            Verdict::Depends
        } else {
            Verdict::Leads
        }
    }

    /// The word for it.
    pub fn word(self) -> &'static str {
        match self {
            Verdict::Leads => "leads",
            Verdict::Depends => "depends",
            Verdict::Drops => "drops",
        }
    }
}

/// The box in which sizes lie: the symbols in them that have a range.
#[derive(Debug, Clone, Default)]
pub struct Space {
    symbols: Vec<Symbol>,
    bounds: Vec<(f64, f64)>,
}

impl Space {
    /// The box of monomials with known values.
    pub fn of<'a>(setting: &Setting, monomials: impl IntoIterator<Item = &'a Monomial>) -> Space {
        let mut symbols: Vec<Symbol> = Vec::new();
        let mut bounds = Vec::new();
        for (symbol, _) in monomials.into_iter().flat_map(Monomial::powers) {
            let Ok(value) = setting.symbol_value(symbol) else {
                continue;
            };
            if value.low < value.high
                && let Err(place) = symbols.binary_search(symbol)
            {
                let amount = value.abs();
                symbols.insert(place, symbol.clone());
                bounds.insert(place, (amount.low.ln(), amount.high.ln()));
            }
        }
        Space { symbols, bounds }
    }

    /// The symbols with their ranges, in natural logarithms of amounts.
    pub fn ranges(&self) -> impl Iterator<Item = (&Symbol, (f64, f64))> {
        self.symbols.iter().zip(self.bounds.iter().copied())
    }

    /// Whether it is a single point.
    pub fn is_point(&self) -> bool {
        self.symbols.is_empty()
    }

    /// The logarithm of a monomial's amount as an affine form over the box.
    pub fn affine(&self, setting: &Setting, monomial: &Monomial) -> Affine {
        let mut slopes = vec![Exponent::ZERO; self.symbols.len()];
        let mut constant = monomial.number.ln_abs();
        for (symbol, power) in monomial.powers() {
            match self.symbols.binary_search(symbol) {
                Ok(place) => slopes[place] = *power,
                Err(_) => {
                    let amount = setting
                        .symbol_value(symbol)
                        .map_or(f64::NAN, |value| value.nominal.abs());
                    constant += power.to_f64() * amount.ln();
                }
            }
        }
        Affine { slopes, constant }
    }
}

/// The sizes of one equation's terms with their shares.
#[derive(Debug, Clone)]
pub struct Shares {
    /// The size of each term.
    pub sizes: Vec<Range>,
    /// The share of each term.
    pub shares: Vec<Range>,
    /// The term that is largest at the nominal values.
    pub largest: usize,
    space: Space,
    forms: Vec<Affine>,
}

impl Shares {
    /// Works out an equation all of whose scales are known; `None` if it has no term or a
    /// scale is open.
    pub fn of(setting: &Setting, equation: &EquationTerms) -> Option<Shares> {
        let monomials: Vec<&Monomial> = equation
            .terms
            .iter()
            .map(|term| &term.size.resolved)
            .collect();
        let sizes: Vec<Range> = monomials
            .iter()
            .map(|monomial| {
                setting
                    .monomial_range(monomial)
                    .ok()
                    .map(|range| range.abs())
            })
            .collect::<Option<_>>()?;
        let largest = largest(sizes.iter().map(|size| size.nominal))?;
        let space = Space::of(setting, monomials.iter().copied());
        let forms = monomials
            .iter()
            .map(|monomial| space.affine(setting, monomial))
            .collect();
        let mut found = Shares {
            sizes,
            shares: Vec::new(),
            largest,
            space,
            forms,
        };
        found.shares = (0..found.sizes.len())
            .map(|idx| found.of_process(&[idx]))
            .collect();
        Some(found)
    }

    /// The share of a process, given the places of its terms: at each point it is as
    /// large as its largest term there.
    pub fn of_process(&self, members: &[usize]) -> Range {
        if let [single] = members
            && let Some(known) = self.shares.get(*single)
        {
            return *known;
        }
        let own = members
            .iter()
            .map(|idx| self.sizes[*idx].nominal)
            .fold(0.0, f64::max);
        let nominal = snapped(own / self.sizes[self.largest].nominal);
        if self.space.is_point() {
            return Range::exact(nominal);
        }
        let bounds = &self.space.bounds;
        let low = polyhedra::lowest_of_process(members, &self.forms, bounds);
        let high = members
            .iter()
            .map(|idx| polyhedra::highest(*idx, &self.forms, bounds))
            .fold(f64::NEG_INFINITY, f64::max);
        around(snapped(low.exp()), nominal, snapped(high.exp()))
    }

    /// The lowest share of a process over the box.
    pub fn lowest(&self, members: &[usize]) -> f64 {
        if self.space.is_point() {
            return self.of_process(members).nominal;
        }
        let low = polyhedra::lowest_of_process(members, &self.forms, &self.space.bounds);
        snapped(low.exp())
    }

    /// The highest share of a term over the box.
    pub fn highest(&self, term: usize) -> f64 {
        if self.space.is_point() {
            return self.of_process(&[term]).nominal;
        }
        let high = polyhedra::highest(term, &self.forms, &self.space.bounds);
        snapped(high.exp())
    }

    /// The nominal share of a process.
    pub fn nominal(&self, members: &[usize]) -> f64 {
        let own = members.iter().map(|idx| self.sizes[*idx].nominal);
        snapped(own.fold(0.0, f64::max) / self.sizes[self.largest].nominal)
    }

    /// The same with the size of each term multiplied by the exponential of its way; the
    /// shares are worked out when they are asked for.
    #[must_use]
    pub fn moved(&self, ways: &[f64]) -> Shares {
        let mut moved = Shares {
            shares: Vec::new(),
            ..self.clone()
        };
        for (idx, way) in ways.iter().enumerate() {
            let factor = way.exp();
            moved.forms[idx].constant += way;
            let size = &mut moved.sizes[idx];
            size.low *= factor;
            size.nominal *= factor;
            size.high *= factor;
        }
        let nominal = moved.sizes.iter().map(|size| size.nominal);
        moved.largest = largest(nominal).unwrap_or(0);
        moved
    }

    /// The terms that are the largest somewhere in the box.
    pub fn largest_somewhere(&self) -> Vec<usize> {
        (0..self.shares.len())
            .filter(|idx| same(self.shares[*idx].high, 1.0))
            .collect()
    }
}

/// A range whose ends are equal to its nominal value within rounding is that value.
fn around(low: f64, nominal: f64, high: f64) -> Range {
    let end = |end: f64| if same(end, nominal) { nominal } else { end };
    Range {
        low: end(low).min(nominal),
        nominal,
        high: end(high).max(nominal),
    }
}

/// A share of 1 within rounding is 1.
fn snapped(share: f64) -> f64 {
    if same(share, 1.0) { 1.0 } else { share }
}

/// The nearest power of ten in the logarithm, a tie goes up; `None` for 0.
pub fn order_of_magnitude(size: f64) -> Option<i32> {
    let amount = size.abs();
    if amount == 0.0 || !amount.is_finite() {
        return None;
    }
    // Rounding may leave a tie just below the half.
    Some((amount.log10() + 0.5 + 1e-12).floor() as i32)
}

/// The range over the box of the ratio between the largest of some monomials and the
/// largest of others.
pub fn ratio(setting: &Setting, above: &[Monomial], below: &[Monomial]) -> Range {
    let space = Space::of(setting, above.iter().chain(below));
    let forms: Vec<Affine> = above
        .iter()
        .chain(below)
        .map(|monomial| space.affine(setting, monomial))
        .collect();
    let (own, rivals): (Vec<usize>, Vec<usize>) =
        (0..forms.len()).partition(|idx| *idx < above.len());
    let nominal = |monomials: &[Monomial]| {
        let sizes = monomials.iter().map(|monomial| setting.nominal(monomial));
        sizes.fold(0.0, f64::max)
    };
    let nominal = nominal(above) / nominal(below);
    if space.is_point() {
        return Range::exact(nominal);
    }
    let highest = |of: &[usize], against: &[usize]| {
        of.iter()
            .map(|idx| polyhedra::highest_against(*idx, against, &forms, &space.bounds))
            .fold(f64::NEG_INFINITY, f64::max)
    };
    around(
        (-highest(&rivals, &own)).exp(),
        nominal,
        highest(&own, &rivals).exp(),
    )
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn orders_of_magnitude_round_in_the_logarithm() {
        assert_eq!(order_of_magnitude(9.759e-5), Some(-4));
        assert_eq!(order_of_magnitude(10f64.powf(-3.5)), Some(-3));
        assert_eq!(order_of_magnitude(3.0), Some(0));
        assert_eq!(order_of_magnitude(3.2), Some(1));
        assert_eq!(order_of_magnitude(0.0), None);
    }

    #[test]
    fn nothing_finite_is_near_to_infinity() {
        assert!(same(1.0, 1.0 + 1e-13));
        assert!(!same(f64::INFINITY, 1.0));
        assert!(!at_most(f64::INFINITY, 1.0));
        assert!(same(f64::INFINITY, f64::INFINITY));
    }

    #[test]
    fn a_share_at_the_tolerance_drops() {
        let at = Range::exact(0.1 * (1.0 + 1e-13));
        assert_eq!(Verdict::of(&at, 0.1), Verdict::Drops);
        assert_eq!(Verdict::of(&Range::exact(0.1001), 0.1), Verdict::Leads);
    }
}
