//! Places the terms of equations at powers of the small parameter and writes them as
//! parts, one for each order.

use num_bigint::BigInt;
use num_integer::Integer;
use num_rational::BigRational;
use num_traits::{Signed, ToPrimitive, Zero};

use crate::algebra::monomial::Monomial;
use crate::algebra::product::{Product, Speller};
use crate::algebra::quantities::Quantities;
use crate::analysis::Case;
use crate::analysis::hierarchy::placement::{self, Placed};
use crate::analysis::hierarchy::series::{Coefficients, SeriesFault};
use crate::analysis::hierarchy::view::View;
use crate::analysis::hierarchy::{
    Hierarchy, HierarchyFault, PlacedGroup, Solvability, Wanted, ratios, solvability,
};
use crate::analysis::names::{GroupProduct, Namer};
use crate::analysis::sizes;
use crate::limits;
use crate::model::Model;
use crate::model::errors::{self, ModelError};
use crate::model::limit::Limit;
use crate::model::terms::{EquationTerms, Side, Term};
use crate::number::{Exponent, Number, TooLarge};

/// One term with its place in the hierarchy.
struct PlacedTerm<'c> {
    term: &'c Term,
    /// Its power of the small parameter, against the largest of its equation.
    power: BigRational,
    /// Its coefficient over the largest, the small parameter taken out, and
    /// the number that is left.
    coefficient: Coefficient,
    number: Number,
}

/// What stands before a term beside its number.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Coefficient {
    /// A product of named groups.
    Groups(GroupProduct),
    /// Scales and constants, where no named groups give it.
    Scales(Monomial),
}

/// A part of a term at one order.
#[derive(Debug, Clone)]
pub(super) struct Part {
    /// Its side.
    pub side: Side,
    /// Number, symbols and fields in dimensional form.
    pub product: Product,
    /// The dimensionless number over that of the product.
    pub factor: Number,
    /// Its coefficient, the small parameter taken out.
    pub coefficient: Coefficient,
    /// The unit of its number, where that has one.
    pub unit: Option<String>,
    /// Its order, in steps.
    pub degree: u32,
}

impl Part {
    /// Its number without dimensions.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub(super) fn number(&self) -> Result<Number, TooLarge> {
        self.product.number.times(&self.factor)
    }
}

/// How the small parameter is told.
pub(super) enum Small<'a> {
    Limit(&'a Limit, Placed),
    Ratio(ratios::Ratio),
}

pub(super) struct Expander<'a> {
    pub(super) case: &'a Case,
    pub(super) wanted: &'a Wanted<'a>,
    pub(super) namer: Namer<'a>,
    pub(super) small: Small<'a>,
    /// The terms of each equation wanted.
    placed: Vec<Vec<PlacedTerm<'a>>>,
    /// The least power of a term that the expansions leave out.
    left_out: Option<BigRational>,
}

impl<'a> Expander<'a> {
    pub(super) fn new(
        model: &'a Model,
        case: &'a Case,
        wanted: &'a Wanted<'a>,
    ) -> Result<Expander<'a>, HierarchyFault> {
        let namer = Namer::new(case);
        let small = match wanted.limit {
            Some(limit) => Small::Limit(limit, placement::occurring(case, wanted, limit, &namer)?),
            None => Small::Ratio(
                ratios::largest(model, case, wanted.equations)
                    .ok_or(HierarchyFault::NothingSmall)?,
            ),
        };
        let mut expander = Expander {
            case,
            wanted,
            namer,
            small,
            placed: Vec::new(),
            left_out: None,
        };
        for idx in wanted.equations {
            expander.place_terms(&case.equations[*idx])?;
        }
        Ok(expander)
    }

    /// The power of the small parameter that a ratio is.
    pub(super) fn power(
        &self,
        ratio: &Monomial,
        degree: u32,
    ) -> Result<BigRational, HierarchyFault> {
        match &self.small {
            Small::Limit(_, placed) => {
                let product = self
                    .namer
                    .product(ratio)
                    .ok_or_else(|| self.no_groups(ratio))?;
                Ok(placed.of(&product))
            }
            Small::Ratio(small) => Ok(small
                .power_of(ratio)
                .unwrap_or_else(|| BigRational::from_integer(degree.into()))),
        }
    }

    fn no_groups(&self, ratio: &Monomial) -> HierarchyFault {
        HierarchyFault::NoGroups(vec![self.monomial(ratio)])
    }

    fn monomial(&self, monomial: &Monomial) -> String {
        self.speller(&self.case.setting.quantities, false)
            .monomial(&monomial.without_number())
    }

    pub(super) fn speller<'s>(
        &'s self,
        quantities: &'s Quantities,
        with_partials: bool,
    ) -> Speller<'s> {
        Speller {
            symbols: &self.case.setting.names,
            quantities,
            with_partials,
        }
    }

    /// The largest coefficient: that of the lowest power, of those the nominally largest.
    fn reference(&self, equation: &'a EquationTerms) -> Result<Option<Monomial>, HierarchyFault> {
        let size = |term: &Term| self.case.setting.nominal(&term.size.resolved);
        let nominal = sizes::largest(equation.terms.iter().map(size));
        let Some(nominal) = nominal else {
            return Ok(None);
        };
        let first = equation.terms[nominal].size.resolved.without_number();
        let mut best = (nominal, BigRational::zero());
        for (idx, term) in equation.terms.iter().enumerate() {
            let ratio = term.size.resolved.over(&first)?;
            let power = self.power(&ratio, term.degree)?;
            let is_larger = size(term) > size(&equation.terms[best.0])
                && !sizes::same(size(term), size(&equation.terms[best.0]));
            if power < best.1 || power == best.1 && is_larger {
                best = (idx, power);
            }
        }
        Ok(Some(equation.terms[best.0].size.resolved.without_number()))
    }

    fn place_terms(&mut self, equation: &'a EquationTerms) -> Result<(), HierarchyFault> {
        let mut found = Vec::with_capacity(equation.terms.len());
        if let Some(reference) = self.reference(equation)? {
            for term in &equation.terms {
                found.push(self.place_term(term, &reference, &equation.terms)?);
            }
            for term in &equation.neglected {
                let power = self.power_of_term(term, &reference, &equation.terms)?;
                if self.left_out.as_ref().is_none_or(|least| power < *least) {
                    self.left_out = Some(power);
                }
            }
        }
        without_common_number(&mut found)?;
        self.placed.push(found);
        Ok(())
    }

    fn place_term(
        &self,
        term: &'a Term,
        reference: &Monomial,
        others: &[Term],
    ) -> Result<PlacedTerm<'a>, HierarchyFault> {
        let ratio = term.size.resolved.over(reference)?;
        let power = self.power_of_term(term, reference, others)?;
        let (coefficient, number) = self.coefficient(&ratio, &power)?;
        Ok(PlacedTerm {
            term,
            power,
            coefficient,
            number,
        })
    }

    /// The power of a term of an equation: beside the largest coefficient, or, where that
    /// is no power of a ratio of parts, beside the largest term of which it is one.
    fn power_of_term(
        &self,
        term: &Term,
        reference: &Monomial,
        others: &[Term],
    ) -> Result<BigRational, HierarchyFault> {
        let ratio = term.size.resolved.over(reference)?;
        let Small::Ratio(small) = &self.small else {
            return self.power(&ratio, term.degree);
        };
        if let Some(power) = small.power_of(&ratio) {
            return Ok(power);
        }
        let mut beside = BigRational::from_integer(term.degree.into());
        let mut farthest = BigRational::zero();
        for other in others {
            let power = small.power_of(&term.size.resolved.over(&other.size.resolved)?);
            if let Some(power) = power.filter(|power| *power > farthest) {
                beside = &power + BigRational::from_integer(other.degree.into());
                farthest = power;
            }
        }
        Ok(beside)
    }

    /// A ratio over a power of the small parameter, and the number left.
    pub(super) fn coefficient(
        &self,
        ratio: &Monomial,
        power: &BigRational,
    ) -> Result<(Coefficient, Number), HierarchyFault> {
        let exponent = Exponent::from_rational(power)?;
        match &self.small {
            Small::Limit(limit, _) => {
                let product = self
                    .namer
                    .product(ratio)
                    .ok_or_else(|| self.no_groups(ratio))?;
                let number = self.namer.rest(ratio, &product).ok_or(TooLarge)?;
                let groups = over(&product, &limit.small, exponent)?;
                Ok((Coefficient::Groups(groups), number))
            }
            Small::Ratio(small) => {
                let rest = ratio.over(&small.size.power(exponent)?)?;
                Ok(match self.namer.product(&rest) {
                    Some(product) => {
                        let number = self.namer.rest(&rest, &product).ok_or(TooLarge)?;
                        (Coefficient::Groups(product), number)
                    }
                    None => {
                        let number = rest.number.clone();
                        (Coefficient::Scales(rest.without_number()), number)
                    }
                })
            }
        }
    }

    /// Whether the expansions go as far as the order.
    pub(super) fn is_complete(&self) -> Result<bool, HierarchyFault> {
        let order = self.wanted.order.to_rational();
        Ok(self.left_out.as_ref().is_none_or(|least| *least > order))
    }

    /// The step in which orders are counted: the largest that all powers are whole
    /// multiples of.
    fn n_steps(&self) -> Result<u32, HierarchyFault> {
        let powers = self.placed.iter().flatten().map(|placed| &placed.power);
        let mut steps = BigInt::from(1);
        for power in powers {
            steps = Integer::lcm(&steps, power.denom());
        }
        steps
            .to_u32()
            .filter(|steps| *steps <= 1_000)
            .ok_or(HierarchyFault::TooLarge)
    }

    pub(super) fn hierarchy(&self) -> Result<Hierarchy, HierarchyFault> {
        let steps = self.n_steps()?;
        let in_steps = |power: &BigRational| {
            (power * BigRational::from_integer(steps.into()))
                .floor()
                .to_integer()
                .to_u32()
                .unwrap_or(u32::MAX)
        };
        let asked = in_steps(&self.wanted.order.to_rational());
        let generators: Vec<u32> = self
            .placed
            .iter()
            .flatten()
            .filter(|placed| placed.power.is_positive())
            .map(|placed| in_steps(&placed.power))
            .collect();
        // The next order after the first gives the solvability conditions.
        let next = generators.iter().copied().min().unwrap_or(0);
        let has_series = matches!(self.small, Small::Limit(..));
        let highest = if has_series { asked.max(next) } else { asked };
        let degrees = generated(&generators, highest);
        let coefficients = self.coefficients(&degrees, highest, steps, has_series)?;
        let equations: Vec<Vec<Part>> = self
            .placed
            .iter()
            .map(|terms| self.parts(terms, &coefficients, in_steps))
            .collect::<Result<_, _>>()?;
        let view = View {
            expander: self,
            coefficients: &coefficients,
            steps,
            has_series,
        };
        let equations = view.without_zeros(equations, &degrees);
        let solvability = match has_series {
            true => solvability::look(&view, &equations, &degrees)?,
            false => Solvability::NotLooked,
        };
        Ok(Hierarchy {
            small: self.small_text(),
            value: self.small_value(),
            has_limit: has_series,
            placed: self.placed_groups()?,
            orders: view.orders(
                &equations,
                degrees.iter().copied().filter(|degree| *degree <= asked),
            )?,
            solvability,
        })
    }

    fn small_text(&self) -> String {
        match &self.small {
            Small::Limit(limit, _) => limit.text.clone(),
            Small::Ratio(small) => small.text.clone(),
        }
    }

    fn small_value(&self) -> f64 {
        let setting = &self.case.setting;
        let value = |group: usize| setting.nominal(&setting.groups[group].size.resolved);
        match &self.small {
            Small::Limit(limit, _) => {
                let powers = limit.small.iter();
                let values = powers.map(|(group, power)| value(*group).powf(power.to_f64()));
                values.product()
            }
            Small::Ratio(small) => setting.nominal(&small.size),
        }
    }

    fn placed_groups(&self) -> Result<Vec<PlacedGroup>, HierarchyFault> {
        let Small::Limit(_, placed) = &self.small else {
            return Ok(Vec::new());
        };
        let powers = placed.powers.iter().map(|(group, power)| {
            let setting = &self.case.setting;
            let info = &setting.groups[*group];
            Ok(PlacedGroup {
                name: info.name.clone(),
                power: Exponent::from_rational(power)?,
                value: setting.nominal(&info.size.resolved),
            })
        });
        powers.collect()
    }

    fn coefficients(
        &self,
        degrees: &[u32],
        highest: u32,
        steps: u32,
        has_series: bool,
    ) -> Result<Coefficients, HierarchyFault> {
        let setting = &self.case.setting;
        let plain = |name: &str, degree: u32| format!("{name}_{}", order_text(degree, steps));
        let is_declared = |name: &str| {
            let mut fields = setting.quantities.fields.iter();
            setting.names.iter().any(|known| known == name)
                || fields.any(|field| field.name == name)
        };
        // A field `p_0` beside `p` leaves `p_0` no room for the order 0 of `p`.
        let clashes = setting.quantities.fields.iter().any(|field| {
            let mut degrees = degrees.iter();
            degrees.any(|degree| is_declared(&plain(&field.name, *degree)))
        });
        let spelt = |name: &str, degree: u32| {
            let order = order_text(degree, steps);
            match (has_series, clashes || order.contains('/')) {
                (false, _) => name.to_owned(),
                (true, false) => plain(name, degree),
                (true, true) => format!("{name}_({order})"),
            }
        };
        let own = match has_series {
            true => degrees.to_vec(),
            false => vec![0],
        };
        let quantities = &self.case.setting.quantities;
        if own.len().saturating_mul(quantities.fields.len()) > limits::SERIES_FIELDS {
            return Err(HierarchyFault::TooLarge);
        }
        Ok(Coefficients::new(quantities, own, highest, spelt))
    }

    fn parts(
        &self,
        terms: &[PlacedTerm<'_>],
        coefficients: &Coefficients,
        in_steps: impl Fn(&BigRational) -> u32,
    ) -> Result<Vec<Part>, HierarchyFault> {
        let mut parts: Vec<Part> = Vec::new();
        for placed in terms {
            let degree = in_steps(&placed.power);
            if degree > coefficients.highest {
                continue;
            }
            let product = &placed.term.product;
            let series = match coefficients.series(product, degree) {
                Ok(series) => series,
                Err(SeriesFault::TooLarge) => return Err(HierarchyFault::TooLarge),
                Err(SeriesFault::NotAProduct) => {
                    return Err(HierarchyFault::Model(vec![ModelError::NotAProduct {
                        span: placed.term.span,
                        what: errors::Product::Expanded,
                    }]));
                }
            };
            let own = product.number.abs();
            let factor = placed.number.abs().over(&own)?.ok_or(TooLarge)?;
            for term in series {
                add(
                    &mut parts,
                    Part {
                        side: placed.term.side,
                        product: term.product,
                        factor: factor.clone(),
                        coefficient: placed.coefficient.clone(),
                        unit: placed.term.unit.clone(),
                        degree: term.degree,
                    },
                );
            }
        }
        parts.retain(|part| !part.product.number.is_zero());
        for part in &parts {
            part.number()?;
        }
        Ok(parts)
    }
}

/// Divides an equation by the number that all terms of its leading order have in common
/// through their sizes; a number that is written in all of them stays.
fn without_common_number(terms: &mut [PlacedTerm<'_>]) -> Result<(), HierarchyFault> {
    let leading = terms.iter().filter(|placed| placed.power.is_zero());
    let numbers: Vec<(Number, Number)> = leading
        .map(|placed| (placed.number.abs(), placed.term.product.number.abs()))
        .collect();
    let Some((common, written)) = numbers.first() else {
        return Ok(());
    };
    let is_common = numbers.iter().all(|(number, _)| number == common);
    if !is_common || numbers.iter().all(|(_, own)| own == written) {
        return Ok(());
    }
    for placed in terms {
        placed.number = placed.number.over(common)?.ok_or(TooLarge)?;
    }
    Ok(())
}

/// Adds a part to a like one, or behind the others.
pub(super) fn add(parts: &mut Vec<Part>, part: Part) {
    let like = parts.iter_mut().find(|found| {
        found.side == part.side
            && found.degree == part.degree
            && found.coefficient == part.coefficient
            && found.factor == part.factor
            && found.product.is_like(&part.product)
    });
    if let Some(found) = like
        && let Some(number) = found.product.number.plus(&part.product.number)
    {
        found.product.number = number;
        return;
    }
    parts.push(part);
}

/// A product of groups over a power of another.
fn over(
    product: &[(usize, Exponent)],
    divisor: &[(usize, Exponent)],
    power: Exponent,
) -> Result<GroupProduct, TooLarge> {
    let mut found: GroupProduct = product.to_vec();
    for (group, exponent) in divisor {
        let less = exponent.times(power)?.negated();
        match found.iter_mut().find(|(own, _)| own == group) {
            Some((_, own)) => *own = own.plus(less)?,
            None => found.push((*group, less)),
        }
    }
    found.retain(|(_, exponent)| !exponent.is_zero());
    found.sort_unstable();
    Ok(found)
}

/// All sums of the generators up to the highest, with 0, rising.
fn generated(generators: &[u32], highest: u32) -> Vec<u32> {
    let mut is_there = vec![false; highest as usize + 1];
    is_there[0] = true;
    for degree in 0..=highest as usize {
        let from = |generator: &u32| {
            let before = degree.checked_sub(*generator as usize);
            before.is_some_and(|before| is_there[before] && *generator > 0)
        };
        is_there[degree] = is_there[degree] || generators.iter().any(from);
    }
    let all = (0..=highest).filter(|degree| is_there[*degree as usize]);
    all.collect()
}

pub(super) fn order_of(degree: u32, steps: u32) -> Exponent {
    let order = BigRational::new(degree.into(), steps.into());
    Exponent::from_rational(&order).unwrap_or(Exponent::ZERO)
}

fn order_text(degree: u32, steps: u32) -> String {
    order_of(degree, steps).to_string()
}
