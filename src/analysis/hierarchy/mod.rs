//! `expand`: the hierarchy of equations, order by order in one small parameter.
//!
//! With a `limit` every named group is a power of the small parameter (`placement`), every
//! field a series in it (`series`); what the leading order leaves open is told with its
//! solvability conditions (`solvability`). Without one the largest ratio of split parts is
//! small (`ratios`), and fields stay as they are. `expander` places the terms, `view`
//! shows them.

mod elimination;
mod expander;
pub mod placement;
pub mod ratios;
pub mod series;
pub mod solvability;
mod view;

use num_traits::ToPrimitive;

use crate::algebra::product::{Base, Factor};
use crate::algebra::quantities::FieldId;
use crate::analysis::{Case, Exponents};
use crate::limits;
use crate::model::Model;
use crate::model::errors::{self, ModelError};
use crate::model::limit::Limit;
use crate::model::settings::Setting;
use crate::model::terms::{self, Depth, EquationTerms, Side};
use crate::number::{Exponent, Number, TooLarge};
use crate::source::Span;
use expander::Expander;

/// The hierarchy.
#[derive(Debug, Clone)]
pub struct Hierarchy {
    /// The small parameter.
    pub small: String,
    /// Its nominal value.
    pub value: f64,
    /// Whether a `limit` sets it.
    pub has_limit: bool,
    /// The groups with their powers.
    pub placed: Vec<PlacedGroup>,
    /// The orders, rising.
    pub orders: Vec<Order>,
    /// What the leading order leaves open.
    pub solvability: Solvability,
}

/// A group of the coefficients.
#[derive(Debug, Clone)]
pub struct PlacedGroup {
    /// Its name.
    pub name: String,
    /// Which power of the small parameter it counts as.
    pub power: Exponent,
    /// Its nominal value.
    pub value: f64,
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
        conditions: Vec<Condition>,
    },
}

/// A condition on fields of lower orders, without which an order has no solution.
#[derive(Debug, Clone)]
pub struct Condition {
    /// As the equations give it.
    pub equation: OrderEquation,
    /// With the fields that the leading order gives by others replaced, where that changes
    /// anything; `0 = 0` if nothing is left.
    pub simplified: Option<OrderEquation>,
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
                what: errors::Product::Expanded,
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
