//! `layers`: thin layers in which a dropped highest derivative comes back.
//!
//! In the equation the length along the coordinate becomes an unknown, smaller than the
//! outer one; the balances in which the derivative is among the largest give it.

use crate::algebra::calculus;
use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::algebra::product::{Base, Factor};
use crate::algebra::quantities::{CoordinateId, FieldId, Quantities};
use crate::analysis::balances::candidates::Describer;
use crate::analysis::balances::system::{Entry, Prepared, Query};
use crate::analysis::balances::{Watch, recognised};
use crate::analysis::reduce::{self, Inequality, Kept};
use crate::analysis::sizes::same;
use crate::analysis::{Case, Factors};
use crate::model::settings::{Setting, Variable};
use crate::model::terms::EquationTerms;
use crate::model::{Meaning, Model};
use crate::number::{Exponent, TooLarge};
use crate::polyhedra::prevariety::{self, Ending};
use crate::units::Range;

/// All thin layers of some equations.
#[derive(Debug, Clone)]
pub struct Layers {
    /// By equation, then by coordinate, the thickest first.
    pub layers: Vec<Layer>,
    /// How the search ended.
    pub ending: Ending,
}

/// One thin layer.
#[derive(Debug, Clone)]
pub struct Layer {
    /// The equation.
    pub equation: String,
    /// Its title.
    pub title: Option<String>,
    /// The coordinate across the layer; `t` for a fast adjustment.
    pub coordinate: String,
    /// The outer scale along it.
    pub outer: Factors,
    /// The thickness.
    pub formula: Factors,
    /// Its value.
    pub value: Range,
    /// Its SI unit.
    pub unit: String,
    /// Its ratio to the outer scale.
    pub ratio: Range,
    /// What balances inside the layer.
    pub balance: Vec<String>,
    /// What leads outside.
    pub outer_balance: Vec<String>,
    /// The declared balance that it is.
    pub name: Option<String>,
    /// The layer around it, by its place.
    pub inside: Option<usize>,
    /// Whether it stands over all ranges.
    pub whole_box: bool,
    /// The conditions on known scales under which it stands.
    pub conditions: Vec<Inequality>,
    along: CoordinateId,
    thickness: Monomial,
}

/// The layers of the equations at these places, whose scales are all known.
///
/// # Errors
/// [`TooLarge`] where exponents or numbers grow beyond the limits.
pub fn layers(
    model: &Model,
    case: &Case,
    wanted: &[usize],
    watch: Watch<'_>,
) -> Result<Layers, TooLarge> {
    let mut search = Search {
        model,
        case,
        setting: with_thickness(&case.setting),
        found: Vec::new(),
        ending: Ending::Complete,
    };
    for idx in wanted {
        let equation = &case.equations[*idx];
        if let Some(kept) = Kept::of(case, equation, case.setting.tolerance()) {
            search.equation(&kept, watch)?;
        }
    }
    let mut layers = search.found;
    nest(&mut layers);
    name(model, case, &mut layers);
    Ok(Layers {
        layers,
        ending: search.ending,
    })
}

/// The same setting with one more symbol: the thickness, open.
fn with_thickness(setting: &Setting) -> Setting {
    let mut setting = setting.clone();
    let id = SymbolId(setting.variables.len() as u32);
    setting.variables.push(Variable::Open(vec![id]));
    setting.quantities.replacements.push(None);
    setting
}

struct Search<'a> {
    model: &'a Model,
    case: &'a Case,
    /// With the thickness as its last symbol.
    setting: Setting,
    found: Vec<Layer>,
    ending: Ending,
}

impl Search<'_> {
    fn thickness(&self) -> SymbolId {
        SymbolId(self.setting.variables.len() as u32 - 1)
    }

    fn equation(&mut self, kept: &Kept<'_>, watch: Watch<'_>) -> Result<(), TooLarge> {
        for idx in 0..self.setting.quantities.coordinates.len() {
            let along = CoordinateId(idx as u32);
            let first = self.found.len();
            let orders = orders(kept.equation, along);
            let full = orders.iter().copied().max().unwrap_or(0);
            let stays = (0..orders.len()).filter(|term| kept.is_kept(*term));
            let left = stays.map(|term| orders[term]).max().unwrap_or(0);
            // Every order that is lost may come back, each in a layer of its own.
            for order in left + 1..=full {
                self.coordinate(kept, along, &orders, order, watch)?;
            }
            self.found[first..].sort_by(|a, b| b.value.nominal.total_cmp(&a.value.nominal));
            let mut known: Vec<Monomial> = Vec::new();
            let mut place = 0;
            self.found.retain(|layer| {
                place += 1;
                let is_new = place <= first || !known.contains(&layer.thickness);
                if place > first {
                    known.push(layer.thickness.clone());
                }
                is_new
            });
        }
        Ok(())
    }

    /// The layers along one coordinate in which the derivatives of one order come back.
    fn coordinate(
        &mut self,
        kept: &Kept<'_>,
        along: CoordinateId,
        orders: &[u32],
        order: u32,
        watch: Watch<'_>,
    ) -> Result<(), TooLarge> {
        let thinning = Thinning {
            along,
            outer: &self.setting.quantities.coordinate(along).size.resolved,
            carried: carried(self.model, along),
            quantities: &self.setting.quantities,
        };
        let ratio = Monomial::symbol(Symbol::Declared(self.thickness())).over(thinning.outer)?;
        let mut sizes = Vec::new();
        let mut leaders = Vec::new();
        for (idx, term) in kept.equation.terms.iter().enumerate() {
            let power = thinning.power(&term.product.factors)?;
            sizes.push(term.size.resolved.times(&ratio.power(power)?)?);
            if orders[idx] == order && power.is_negative() {
                leaders.push(idx);
            }
        }
        if leaders.is_empty() {
            return Ok(());
        }
        let query = Query {
            setting: &self.setting,
            unknowns: vec![self.thickness()],
            entries: vec![Entry {
                equation: kept.equation,
                sizes,
                required: Vec::new(),
                leaders,
            }],
            at_least_one: vec![ratio.power(Exponent::ONE.negated())?],
            powers: None,
            with_ranges: true,
        };
        let prepared = Prepared::new(&query);
        let found = prevariety::balances(&prepared.system, watch);
        if found.ending != Ending::Complete {
            self.ending = found.ending;
        }
        let describer = Describer::new(self.model, self.case, &query, &prepared);
        let mut layers = Vec::new();
        for candidate in &found.candidates {
            if describer.has_inside(candidate) {
                layers.extend(self.layer(kept, along, candidate, &describer)?);
            }
        }
        self.found.extend(layers);
        Ok(())
    }

    fn layer(
        &self,
        kept: &Kept<'_>,
        along: CoordinateId,
        candidate: &prevariety::Candidate,
        describer: &Describer<'_>,
    ) -> Result<Option<Layer>, TooLarge> {
        let solution = describer.solution(candidate)?;
        // Where the thickness stays free, nothing fixes a layer.
        let Some(thickness) = solution.formula(self.thickness()).cloned() else {
            return Ok(None);
        };
        let coordinate = self.setting.quantities.coordinate(along);
        let outer = &coordinate.size.resolved;
        let (Ok(value), Ok(ratio)) = (
            self.setting.monomial_range(&thickness),
            self.setting.monomial_range(&thickness.over(outer)?),
        ) else {
            return Ok(None);
        };
        let info = &self.model.coordinates[along.0 as usize];
        let balances = describer.balances(candidate);
        let leading = kept.leading();
        Ok(Some(Layer {
            equation: kept.equation.name.clone(),
            title: kept.equation.title.clone(),
            coordinate: coordinate.name.clone(),
            outer: self.case.factors(&coordinate.size.written),
            formula: self.case.factors(&thickness),
            value: value.abs(),
            unit: info
                .dimension
                .map_or_else(|| "1".to_owned(), |found| found.unit_text()),
            ratio: ratio.abs(),
            balance: balances
                .into_iter()
                .next()
                .map(|(_, found)| found)
                .unwrap_or_default(),
            outer_balance: leading
                .iter()
                .map(|process| process.process.clone())
                .collect(),
            name: None,
            inside: None,
            whole_box: describer.covers_box(candidate),
            conditions: describer.conditions(candidate, &solution)?,
            along,
            thickness,
        }))
    }
}

/// The highest order along a coordinate in each term.
fn orders(equation: &EquationTerms, along: CoordinateId) -> Vec<u32> {
    let order = |term: &crate::model::terms::Term| {
        let derivatives = term.product.derivatives().into_iter();
        let orders = derivatives.map(|derivative| reduce::order_along(derivative, along));
        orders.max().unwrap_or(0)
    };
    equation.terms.iter().map(order).collect()
}

/// The component of the velocity along a coordinate.
fn carried(model: &Model, along: CoordinateId) -> Option<FieldId> {
    let components = &model.velocity.as_ref()?.components;
    components.iter().find_map(|(field, coordinate)| {
        let coordinate = model.meaning(&coordinate.text, None);
        match (model.meaning(&field.text, None), coordinate) {
            (Some(Meaning::Field(id)), Some(Meaning::Coordinate(found))) if found == along => {
                Some(id)
            }
            _ => None,
        }
    })
}

/// How sizes change where the length along a coordinate shrinks.
struct Thinning<'q> {
    along: CoordinateId,
    outer: &'q Monomial,
    /// What flows along the coordinate shrinks with it, by continuity.
    carried: Option<FieldId>,
    quantities: &'q Quantities,
}

impl Thinning<'_> {
    /// The power of (thickness over outer scale) by which factors change.
    fn power(&self, factors: &[Factor]) -> Result<Exponent, TooLarge> {
        let mut sum = Exponent::ZERO;
        for factor in factors {
            sum = sum.plus(self.base(&factor.base)?.times(factor.power)?)?;
        }
        Ok(sum)
    }

    fn base(&self, base: &Base) -> Result<Exponent, TooLarge> {
        match base {
            Base::Symbol(_) | Base::Coordinate(_) | Base::Sized(_) => Ok(Exponent::ZERO),
            Base::Field(id) if self.carried == Some(*id) => Ok(Exponent::ONE),
            Base::Field(_) => Ok(Exponent::ZERO),
            Base::Absolute(inside) | Base::Mean(inside) => self.power(inside),
            Base::Function(applied) => self.power(&applied.argument.factors),
            Base::Derivative(derivative) => {
                let inner = self.power(&derivative.operand)?;
                let length =
                    calculus::length_along(&derivative.operand, self.along, self.quantities);
                if length.resolved != *self.outer {
                    // A field with a length of its own keeps it.
                    return Ok(inner);
                }
                let own = derivative
                    .by
                    .iter()
                    .filter(|(found, _)| *found == self.along);
                let order: u32 = own.map(|(_, order)| order).sum();
                inner.plus(Exponent::whole(-i64::from(order))?)
            }
        }
    }
}

/// Each layer lies inside the next thicker one along its coordinate.
fn nest(layers: &mut [Layer]) {
    let values: Vec<(CoordinateId, f64)> = layers
        .iter()
        .map(|layer| (layer.along, layer.value.nominal))
        .collect();
    for (idx, layer) in layers.iter_mut().enumerate() {
        let (along, own) = values[idx];
        let thicker = values
            .iter()
            .enumerate()
            .filter(|(_, (found, value))| *found == along && *value > own && !same(*value, own));
        let around = thicker.reduce(|best, other| if other.1.1 < best.1.1 { other } else { best });
        layer.inside = around.map(|(place, _)| place);
    }
}

/// Names each layer by what balances in all equations that have one of its thickness.
fn name(model: &Model, case: &Case, layers: &mut [Layer]) {
    let names: Vec<Option<String>> = (layers.iter())
        .map(|layer| {
            let alike = layers.iter().filter(|other| {
                other.along == layer.along && same(other.value.nominal, layer.value.nominal)
            });
            let balances: Vec<(String, Vec<String>)> = alike
                .map(|other| (other.equation.clone(), other.balance.clone()))
                .collect();
            let involves = |name: &String| {
                let balance = model.balances.iter().find(|found| found.name.text == *name);
                balance.is_some_and(|balance| {
                    balance
                        .parts
                        .iter()
                        .any(|part| part.equation.text == layer.equation)
                })
            };
            recognised(model, case, &balances)
                .into_iter()
                .find(involves)
        })
        .collect();
    for (layer, name) in layers.iter_mut().zip(names) {
        layer.name = name;
    }
}
