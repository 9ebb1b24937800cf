//! `expand`: the hierarchy of equations, order by order in one small parameter.
//!
//! With a `limit` every named group is a power of the small parameter (`placement`), every
//! field a series in it (`series`); what the leading order leaves open is told with its
//! solvability conditions (`solvability`). Without one the largest ratio of split parts is
//! small (`ratios`), and fields stay as they are.

pub mod placement;
pub mod ratios;
pub mod series;
pub mod solvability;

use num_rational::BigRational;
use num_traits::{Signed, ToPrimitive, Zero};

use crate::algebra::monomial::Monomial;
use crate::algebra::product::{Base, Factor, Product, Speller};
use crate::algebra::quantities::FieldId;
use crate::analysis::names::{GroupProduct, Namer};
use crate::analysis::reduce::joined;
use crate::analysis::sizes;
use crate::analysis::{Case, Exponents};
use crate::limits;
use crate::model::Model;
use crate::model::errors::ModelError;
use crate::model::limit::Limit;
use crate::model::settings::Setting;
use crate::model::terms::{self, Depth, EquationTerms, Side, Term};
use crate::number::{Exponent, Number, TooLarge};
use crate::source::Span;
use placement::{Placed, PlacementFault};
use series::{Coefficients, SeriesFault};

/// The hierarchy.
#[derive(Debug, Clone)]
pub struct Hierarchy {
    /// The small parameter.
    pub small: String,
    /// Whether a `limit` sets it.
    pub has_limit: bool,
    /// The groups with their powers.
    pub placed: Vec<(String, Exponent)>,
    /// The orders, rising.
    pub orders: Vec<Order>,
    /// What the leading order leaves open.
    pub solvability: Solvability,
}

/// One order.
#[derive(Debug, Clone)]
pub struct Order {
    /// The power of the small parameter.
    pub order: Exponent,
    /// Its equations; one that has nothing at this order is not among them.
    pub equations: Vec<OrderEquation>,
}

/// One equation at one order.
#[derive(Debug, Clone)]
pub struct OrderEquation {
    /// Its name.
    pub name: String,
    /// It in dimensionless form, coefficients as named groups.
    pub text: String,
    /// It in dimensional form.
    pub dimensional: String,
    /// Its terms.
    pub terms: Vec<OrderTerm>,
}

/// One term of it.
#[derive(Debug, Clone)]
pub struct OrderTerm {
    /// Its number, with its sign on its side.
    pub number: Number,
    /// Its side.
    pub side: Side,
    /// Its coefficient as a product of named groups, the small parameter left out; `None`
    /// where no product of groups gives it.
    pub groups: Option<Exponents>,
    /// Its fields.
    pub factors: Vec<OrderFactor>,
    /// Whether it is known from lower orders.
    pub is_forcing: bool,
}

/// A field at an order, or a coordinate, to a power.
#[derive(Debug, Clone)]
pub struct OrderFactor {
    /// Its name.
    pub field: String,
    /// Its order.
    pub order: Exponent,
    /// How often it is differentiated along which coordinates.
    pub derivatives: Vec<(String, u32)>,
    /// Its power.
    pub power: Exponent,
}

/// What the leading order leaves open.
#[derive(Debug, Clone)]
pub enum Solvability {
    /// It is not linear with constant coefficients, or no series was made: nothing was
    /// looked for.
    NotLooked,
    /// It leaves these fields open; each condition restores what it lost.
    Looked {
        /// The fields; empty if it determines all of them.
        undetermined: Vec<String>,
        /// The conditions.
        conditions: Vec<OrderEquation>,
    },
}

/// Why there is no hierarchy.
#[derive(Debug, Clone)]
pub enum HierarchyFault {
    /// Faults of the equations.
    Model(Vec<ModelError>),
    /// The limit says nothing of these groups.
    FreeGroups(Vec<String>),
    /// No named groups give these coefficients.
    NoGroups(Vec<String>),
    /// There is no limit and nothing is split.
    NothingSmall,
    /// A placement contradicts a relation between groups.
    Contradiction {
        /// The placement; `None`: the small parameter.
        place: Option<Span>,
        /// The relation, as text.
        relation: Option<String>,
    },
    /// The expansions do not end at this order.
    OrderTooHigh,
    /// A number or exponent beyond the limits.
    TooLarge,
}

impl From<TooLarge> for HierarchyFault {
    fn from(_: TooLarge) -> HierarchyFault {
        HierarchyFault::TooLarge
    }
}

/// What a hierarchy is asked for.
#[derive(Debug, Clone, Copy)]
pub struct Wanted<'a> {
    /// The equations, by their places.
    pub equations: &'a [usize],
    /// Up to this order.
    pub order: Exponent,
    /// The limit in force.
    pub limit: Option<&'a Limit>,
}

/// Works out the hierarchy of equations in one setting.
///
/// # Errors
/// See [`HierarchyFault`].
pub fn expand(
    model: &Model,
    setting: &Setting,
    wanted: &Wanted<'_>,
) -> Result<Hierarchy, HierarchyFault> {
    let mut order = whole_above(wanted.order).max(1);
    loop {
        let depth = Depth {
            order,
            splits_levels: true,
        };
        let (equations, errors) = terms::all(model, setting, depth);
        let case = Case {
            setting: setting.clone(),
            equations,
        };
        let mut faults: Vec<ModelError> = errors
            .into_iter()
            .filter(|error| error.diagnostic().is_error())
            .collect();
        for idx in wanted.equations {
            faults.extend(case.equations[*idx].faults.iter().cloned());
            faults.extend(not_expandable(model, &case.equations[*idx], setting));
        }
        if !faults.is_empty() {
            return Err(HierarchyFault::Model(faults));
        }
        let expander = Expander::new(model, &case, wanted)?;
        if expander.is_complete()? {
            return expander.hierarchy();
        }
        order += 1;
        if order > limits::HIERARCHY_DEPTH {
            return Err(HierarchyFault::OrderTooHigh);
        }
    }
}

/// The whole number at or above.
fn whole_above(order: Exponent) -> u32 {
    let whole = order.to_rational().ceil().to_integer();
    whole.to_u32().unwrap_or(u32::MAX)
}

/// What keeps an equation from being expanded.
fn not_expandable(model: &Model, equation: &EquationTerms, setting: &Setting) -> Vec<ModelError> {
    let mut faults = Vec::new();
    let mut fields: Vec<FieldId> = Vec::new();
    for term in &equation.terms {
        if holds_sized(&term.product.factors) {
            faults.push(ModelError::NotAProduct {
                span: term.span,
                what: crate::model::errors::Product::Expanded,
            });
        }
        for field in term.product.fields() {
            if !fields.contains(&field) {
                fields.push(field);
            }
        }
    }
    for field in fields {
        let quantity = setting.quantities.field(field);
        let has_level = quantity.variations.iter().any(|variation| {
            variation.has_own_amplitude && variation.amplitude.resolved != quantity.size.resolved
        });
        if has_level {
            let name = &model.fields[field.0 as usize].name;
            faults.push(ModelError::LevelNotSplit {
                name: name.text.clone(),
                span: equation.span,
                declared: name.span,
            });
        }
    }
    faults
}

fn holds_sized(factors: &[Factor]) -> bool {
    factors.iter().any(|factor| match &factor.base {
        Base::Sized(_) | Base::Absolute(_) => true,
        Base::Derivative(derivative) => holds_sized(&derivative.operand),
        Base::Mean(_)
        | Base::Symbol(_)
        | Base::Coordinate(_)
        | Base::Field(_)
        | Base::Function(_) => false,
    })
}

/// One term with its place in the hierarchy.
struct PlacedTerm<'c> {
    term: &'c Term,
    /// Its power of the small parameter, against the largest of its equation.
    power: BigRational,
    /// Its coefficient over the largest, as groups with the small parameter taken out, and
    /// the number that is left.
    groups: Option<GroupProduct>,
    number: Number,
}

/// A part of a term at one order.
#[derive(Debug, Clone)]
pub(crate) struct Part {
    /// Its side.
    pub side: Side,
    /// Number, symbols and fields in dimensional form.
    pub product: Product,
    /// The dimensionless number over that of the product.
    pub factor: Number,
    /// The groups of its coefficient, the small parameter taken out.
    pub groups: Option<GroupProduct>,
    /// Its order, in steps.
    pub degree: u32,
}

/// How the small parameter is told.
enum Small<'a> {
    Limit(&'a Limit, Placed),
    Ratio(ratios::Ratio),
}

pub(crate) struct Expander<'a> {
    case: &'a Case,
    wanted: &'a Wanted<'a>,
    namer: Namer<'a>,
    small: Small<'a>,
    /// The terms of each equation wanted.
    placed: Vec<Vec<PlacedTerm<'a>>>,
    /// The least power of a term that the expansions leave out.
    left_out: Option<BigRational>,
    n_fields: usize,
}

impl<'a> Expander<'a> {
    fn new(
        model: &'a Model,
        case: &'a Case,
        wanted: &'a Wanted<'a>,
    ) -> Result<Expander<'a>, HierarchyFault> {
        let namer = Namer::new(case);
        let small = match wanted.limit {
            Some(limit) => Small::Limit(limit, placed(case, wanted, limit, &namer)?),
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
            n_fields: case.setting.quantities.fields.len(),
        };
        for idx in wanted.equations {
            expander.place_terms(&case.equations[*idx])?;
        }
        Ok(expander)
    }

    /// The power of the small parameter that a ratio is.
    fn power(&self, ratio: &Monomial, degree: u32) -> Result<BigRational, HierarchyFault> {
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

    fn speller<'s>(
        &'s self,
        quantities: &'s crate::algebra::quantities::Quantities,
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
                found.push(self.place_term(term, &reference)?);
            }
            for term in &equation.neglected {
                let ratio = term.size.resolved.over(&reference)?;
                let power = self.power(&ratio, term.degree)?;
                if self.left_out.as_ref().is_none_or(|least| power < *least) {
                    self.left_out = Some(power);
                }
            }
        }
        self.placed.push(found);
        Ok(())
    }

    fn place_term(
        &self,
        term: &'a Term,
        reference: &Monomial,
    ) -> Result<PlacedTerm<'a>, HierarchyFault> {
        let ratio = term.size.resolved.over(reference)?;
        let power = self.power(&ratio, term.degree)?;
        let (groups, number) = self.coefficient(&ratio, &power)?;
        Ok(PlacedTerm {
            term,
            power,
            groups,
            number,
        })
    }

    /// A ratio over a power of the small parameter: as groups, and the number left.
    pub(crate) fn coefficient(
        &self,
        ratio: &Monomial,
        power: &BigRational,
    ) -> Result<(Option<GroupProduct>, Number), HierarchyFault> {
        let exponent = Exponent::from_rational(power)?;
        match &self.small {
            Small::Limit(limit, _) => {
                let product = self
                    .namer
                    .product(ratio)
                    .ok_or_else(|| self.no_groups(ratio))?;
                let number = self.namer.rest(ratio, &product).ok_or(TooLarge)?;
                Ok((Some(over(&product, &limit.small, exponent)?), number))
            }
            Small::Ratio(small) => {
                let rest = ratio.over(&small.size.power(exponent)?)?;
                let product = self.namer.product(&rest);
                let number = match &product {
                    Some(product) => self.namer.rest(&rest, product).ok_or(TooLarge)?,
                    None => rest.number.clone(),
                };
                Ok((product, number))
            }
        }
    }

    /// Whether the expansions go as far as the order.
    fn is_complete(&self) -> Result<bool, HierarchyFault> {
        let order = self.wanted.order.to_rational();
        Ok(self.left_out.as_ref().is_none_or(|least| *least > order))
    }

    /// The step in which orders are counted: the largest that all powers are whole
    /// multiples of.
    fn n_steps(&self) -> Result<u32, HierarchyFault> {
        let powers = self.placed.iter().flatten().map(|placed| &placed.power);
        let mut steps = num_bigint::BigInt::from(1);
        for power in powers {
            steps = num_integer::Integer::lcm(&steps, power.denom());
        }
        steps
            .to_u32()
            .filter(|steps| *steps <= 1_000)
            .ok_or(HierarchyFault::TooLarge)
    }

    fn hierarchy(&self) -> Result<Hierarchy, HierarchyFault> {
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

    fn placed_groups(&self) -> Result<Vec<(String, Exponent)>, HierarchyFault> {
        let Small::Limit(_, placed) = &self.small else {
            return Ok(Vec::new());
        };
        let powers = placed.powers.iter().map(|(group, power)| {
            let name = self.case.setting.groups[*group].name.clone();
            Ok((name, Exponent::from_rational(power)?))
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
        let spelt = |name: &str, degree: u32| {
            let order = order_text(degree, steps);
            match (has_series, order.contains('/')) {
                (false, _) => name.to_owned(),
                (true, false) => format!("{name}_{order}"),
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
                        what: crate::model::errors::Product::Expanded,
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
                        groups: placed.groups.clone(),
                        degree: term.degree,
                    },
                );
            }
        }
        parts.retain(|part| !part.product.number.is_zero());
        Ok(parts)
    }
}

/// Adds a part to a like one, or behind the others.
pub(crate) fn add(parts: &mut Vec<Part>, part: Part) {
    let like = parts.iter_mut().find(|found| {
        found.side == part.side
            && found.degree == part.degree
            && found.groups == part.groups
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

fn order_of(degree: u32, steps: u32) -> Exponent {
    Exponent::ratio(i64::from(degree), i64::from(steps))
}

fn order_text(degree: u32, steps: u32) -> String {
    order_of(degree, steps).to_string()
}

/// Places the groups that occur in the coefficients.
fn placed(
    case: &Case,
    wanted: &Wanted<'_>,
    limit: &Limit,
    namer: &Namer<'_>,
) -> Result<Placed, HierarchyFault> {
    let mut occurring: Vec<usize> = Vec::new();
    let mut unnamed: Vec<String> = Vec::new();
    for idx in wanted.equations {
        let equation = &case.equations[*idx];
        let size = |term: &Term| case.setting.nominal(&term.size.resolved);
        let Some(largest) = sizes::largest(equation.terms.iter().map(size)) else {
            continue;
        };
        for term in equation.terms.iter().chain(&equation.neglected) {
            let ratio = term
                .size
                .resolved
                .over(&equation.terms[largest].size.resolved)?;
            match namer.product(&ratio) {
                Some(product) => occurring.extend(product.iter().map(|(group, _)| *group)),
                None => {
                    let speller = Speller {
                        symbols: &case.setting.names,
                        quantities: &case.setting.quantities,
                        with_partials: false,
                    };
                    let text = speller.monomial(&ratio.without_number());
                    if !unnamed.contains(&text) {
                        unnamed.push(text);
                    }
                }
            }
        }
    }
    if !unnamed.is_empty() {
        return Err(HierarchyFault::NoGroups(unnamed));
    }
    occurring.sort_unstable();
    occurring.dedup();
    let name = |group: usize| case.setting.groups[group].name.clone();
    placement::place(&case.setting, limit, &occurring).map_err(|fault| match fault {
        PlacementFault::Free(groups) => {
            HierarchyFault::FreeGroups(groups.into_iter().map(name).collect())
        }
        PlacementFault::Contradiction { place, relation } => HierarchyFault::Contradiction {
            place,
            relation: relation.map(|relation| relation_text(&relation, name)),
        },
    })
}

/// A product of groups that is a pure number, as an equation: `Bu = Ro^2/Fr^2`.
fn relation_text(relation: &[(usize, BigRational)], name: impl Fn(usize) -> String) -> String {
    let side = |is_left: bool| {
        let own = relation
            .iter()
            .filter(|(_, power)| power.is_positive() == is_left);
        let factors: Vec<String> = own
            .map(|(group, power)| match power.abs() {
                power if power == BigRational::from_integer(1.into()) => name(*group),
                power if power.is_integer() => format!("{}^{power}", name(*group)),
                power => format!("{}^({power})", name(*group)),
            })
            .collect();
        match factors.is_empty() {
            true => "1".to_owned(),
            false => factors.join("*"),
        }
    };
    format!("{} ~ {}", side(true), side(false))
}

// What is shown -----------------------------------------------------------------------------------

/// Parts as equations and terms.
pub(crate) struct View<'a> {
    pub(crate) expander: &'a Expander<'a>,
    pub(crate) coefficients: &'a Coefficients,
    steps: u32,
    has_series: bool,
}

impl View<'_> {
    /// Takes fields that an order sets to zero out of the later ones.
    fn without_zeros(&self, equations: Vec<Vec<Part>>, degrees: &[u32]) -> Vec<Vec<Part>> {
        let mut equations = equations;
        if !self.has_series {
            return equations;
        }
        let mut zeros: Vec<FieldId> = Vec::new();
        for degree in degrees {
            for parts in &mut equations {
                parts.retain(|part| {
                    part.degree != *degree || !self.holds_any(&part.product, &zeros)
                });
            }
            for parts in &equations {
                let own: Vec<&Part> = parts.iter().filter(|part| part.degree == *degree).collect();
                if let [single] = own.as_slice()
                    && let Some(zero) = self.field_alone(&single.product)
                    && !zeros.contains(&zero)
                {
                    zeros.push(zero);
                }
            }
        }
        equations
    }

    fn holds_any(&self, product: &Product, fields: &[FieldId]) -> bool {
        self.coefficients
            .in_product(product)
            .any(|(field, _)| fields.contains(&field))
    }

    /// The one field of a product that holds nothing else that varies.
    fn field_alone(&self, product: &Product) -> Option<FieldId> {
        let varying: Vec<&Factor> = product
            .factors
            .iter()
            .filter(|factor| !matches!(factor.base, Base::Symbol(_)))
            .collect();
        match varying.as_slice() {
            [
                Factor {
                    base: Base::Field(id),
                    power,
                },
            ] if !power.is_negative() => Some(*id),
            _ => None,
        }
    }

    fn orders(
        &self,
        equations: &[Vec<Part>],
        degrees: impl Iterator<Item = u32>,
    ) -> Result<Vec<Order>, HierarchyFault> {
        let order = |degree: u32| {
            let own = self.expander.wanted.equations.iter().zip(equations);
            let equations = own.filter_map(|(idx, parts)| {
                let own: Vec<&Part> = parts.iter().filter(|part| part.degree == degree).collect();
                let equation = &self.expander.case.equations[*idx];
                (!own.is_empty())
                    .then(|| self.equation(&equation.name, equation.with_partials, &own))
            });
            Order {
                order: order_of(degree, self.steps),
                equations: equations.collect(),
            }
        };
        Ok(degrees.map(order).collect())
    }

    pub(crate) fn equation(
        &self,
        name: &str,
        with_partials: bool,
        parts: &[&Part],
    ) -> OrderEquation {
        let text = |is_dimensional: bool| {
            let side = |side: Side| {
                let own = parts.iter().filter(|part| part.side == side);
                let texts: Vec<(bool, String)> = own
                    .map(|part| {
                        let is_negative = part.product.number.is_negative();
                        (
                            is_negative,
                            self.part_text(part, is_dimensional, with_partials),
                        )
                    })
                    .collect();
                let texts: Vec<(bool, &str)> = texts
                    .iter()
                    .map(|(is_negative, text)| (*is_negative, text.as_str()))
                    .collect();
                joined(&texts)
            };
            format!("{} = {}", side(Side::Left), side(Side::Right))
        };
        OrderEquation {
            name: name.to_owned(),
            text: text(false),
            dimensional: text(true),
            terms: parts.iter().map(|part| self.term(part)).collect(),
        }
    }

    fn part_text(&self, part: &Part, is_dimensional: bool, with_partials: bool) -> String {
        let expander = self.expander;
        let speller = expander.speller(&self.coefficients.quantities, with_partials);
        if is_dimensional {
            return speller.product(&part.product);
        }
        let number = part.product.number.times(&part.factor);
        let mut dimensionless = Product::number(number.unwrap_or_else(|_| Number::one()));
        for (group, power) in part.groups.iter().flatten() {
            let name = expander.case.setting.groups[*group].name.clone();
            dimensionless.factors.push(Factor {
                base: Base::Symbol(named_symbol(name)),
                power: *power,
            });
        }
        let varying = part
            .product
            .factors
            .iter()
            .filter(|factor| !matches!(factor.base, Base::Symbol(_)));
        dimensionless.factors.extend(varying.cloned());
        speller.product(&dimensionless)
    }

    fn term(&self, part: &Part) -> OrderTerm {
        let expander = self.expander;
        let number = part.product.number.times(&part.factor);
        let factors: Vec<OrderFactor> = part
            .product
            .factors
            .iter()
            .filter_map(|factor| self.factor(factor))
            .collect();
        let is_own = |factor: &OrderFactor| factor.order == order_of(part.degree, self.steps);
        let small: Vec<usize> = match &expander.small {
            Small::Limit(limit, _) if limit.small.len() == 1 => {
                limit.small.iter().map(|(group, _)| *group).collect()
            }
            Small::Limit(..) | Small::Ratio(_) => Vec::new(),
        };
        OrderTerm {
            number: number.unwrap_or_else(|_| part.product.number.clone()),
            side: part.side,
            groups: part.groups.as_ref().map(|product| {
                let own = product.iter().filter(|(group, _)| !small.contains(group));
                expander
                    .namer
                    .named(&own.copied().collect::<GroupProduct>())
            }),
            is_forcing: self.has_series && part.degree > 0 && !factors.iter().any(is_own),
            factors,
        }
    }

    fn factor(&self, factor: &Factor) -> Option<OrderFactor> {
        let quantities = &self.coefficients.quantities;
        let setting = &self.expander.case.setting;
        let plain = |field: String| OrderFactor {
            field,
            order: Exponent::ZERO,
            derivatives: Vec::new(),
            power: factor.power,
        };
        match &factor.base {
            Base::Symbol(_) => None,
            Base::Coordinate(id) => Some(plain(quantities.coordinate(*id).name.clone())),
            Base::Field(id) => {
                let (field, degree) = self.coefficients.of(*id);
                Some(OrderFactor {
                    order: order_of(degree, self.steps),
                    ..plain(setting.quantities.field(field).name.clone())
                })
            }
            Base::Derivative(derivative) => {
                let inner = derivative.operand.first()?;
                let inner = self.factor(inner)?;
                let name = |(along, order): &(crate::algebra::quantities::CoordinateId, u32)| {
                    (quantities.coordinate(*along).name.clone(), *order)
                };
                Some(OrderFactor {
                    derivatives: derivative.by.iter().map(name).collect(),
                    power: factor.power,
                    ..inner
                })
            }
            Base::Mean(_) | Base::Absolute(_) | Base::Sized(_) | Base::Function(_) => {
                let speller = self.expander.speller(quantities, false);
                let alone = Product::base(factor.base.clone());
                Some(plain(speller.product(&alone)))
            }
        }
    }
}

/// A group as a symbol, for spelling.
fn named_symbol(text: String) -> crate::algebra::monomial::Symbol {
    crate::algebra::monomial::Symbol::Function(std::sync::Arc::new(
        crate::algebra::monomial::Function {
            text,
            value: None,
            is_zero: false,
            open: Vec::new(),
            parts: Vec::new(),
        },
    ))
}
