//! Shows the parts of a hierarchy: as equations with and without dimensions, and term by
//! term.

use std::sync::Arc;

use crate::algebra::monomial::{Function, Symbol};
use crate::algebra::product::{Base, Factor, Product, Speller};
use crate::algebra::quantities::{CoordinateId, FieldId};
use crate::analysis::hierarchy::expander::{Coefficient, Expander, Part, Small, order_of};
use crate::analysis::hierarchy::series::Coefficients;
use crate::analysis::hierarchy::{HierarchyFault, Order, OrderEquation, OrderFactor, OrderTerm};
use crate::analysis::names::GroupProduct;
use crate::analysis::reduce::joined;
use crate::model::spelling;
use crate::model::terms::Side;
use crate::number::{Exponent, Number};

/// Parts as equations and terms.
pub(super) struct View<'a> {
    pub(super) expander: &'a Expander<'a>,
    pub(super) coefficients: &'a Coefficients,
    pub(super) steps: u32,
    pub(super) has_series: bool,
}

impl View<'_> {
    /// Takes fields that an order sets to zero out of the later ones.
    pub(super) fn without_zeros(
        &self,
        equations: Vec<Vec<Part>>,
        degrees: &[u32],
    ) -> Vec<Vec<Part>> {
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

    pub(super) fn orders(
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

    pub(super) fn equation(
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
            return with_unit(&part.product, part.unit.as_deref(), &speller);
        }
        let mut dimensionless = Product::number(self.number(part));
        let symbol = |symbol: Symbol, power: Exponent| Factor {
            base: Base::Symbol(symbol),
            power,
        };
        match &part.coefficient {
            Coefficient::Groups(groups) => {
                let groups = groups.iter().map(|(group, power)| {
                    let name = expander.case.setting.groups[*group].name.clone();
                    symbol(named_symbol(name), *power)
                });
                dimensionless.factors.extend(groups);
            }
            Coefficient::Scales(scales) if scales.is_number() => {}
            Coefficient::Scales(scales) => {
                let text = format!("({})", speller.monomial(scales));
                dimensionless
                    .factors
                    .push(symbol(named_symbol(text), Exponent::ONE));
            }
        }
        let varying = part
            .product
            .factors
            .iter()
            .filter(|factor| !matches!(factor.base, Base::Symbol(_)));
        dimensionless.factors.extend(varying.cloned());
        speller.product(&dimensionless)
    }

    /// The number without dimensions.
    fn number(&self, part: &Part) -> Number {
        // Whoever made the part saw that it is within the limits.
        part.number()
            .unwrap_or_else(|_| part.product.number.clone())
    }

    fn term(&self, part: &Part) -> OrderTerm {
        let expander = self.expander;
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
            number: self.number(part),
            side: part.side,
            groups: match &part.coefficient {
                Coefficient::Groups(groups) => {
                    let own = groups.iter().filter(|(group, _)| !small.contains(group));
                    let own: GroupProduct = own.copied().collect();
                    Some(expander.namer.named(&own))
                }
                Coefficient::Scales(_) => None,
            },
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
                let name = |(along, order): &(CoordinateId, u32)| {
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
                let degrees = alone.fields().into_iter();
                let highest = degrees.map(|id| self.coefficients.of(id).1).max();
                Some(OrderFactor {
                    order: order_of(highest.unwrap_or(0), self.steps),
                    ..plain(speller.product(&alone))
                })
            }
        }
    }
}

/// A product whose number has a unit; without its sign, like any product.
fn with_unit(product: &Product, unit: Option<&str>, speller: &Speller<'_>) -> String {
    let Some(unit) = unit else {
        return speller.product(product);
    };
    let number = product.number.abs();
    let mut rest = product.clone();
    let rational = number.rational_part().clone();
    let decimal = spelling::decimal(&rational);
    if let Some(decimal) = decimal.filter(|_| number == Number::rational(rational)) {
        rest.number = Number::one();
        return format!("{decimal} {unit} * {}", speller.product(&rest));
    }
    format!("1 {unit} * {}", speller.product(&rest))
}

/// A group as a symbol, for spelling.
fn named_symbol(text: String) -> Symbol {
    Symbol::Function(Arc::new(Function {
        text,
        value: None,
        is_zero: false,
        open: Vec::new(),
        parts: Vec::new(),
    }))
}
