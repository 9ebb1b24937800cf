//! Terms as series: every field written in powers of the small parameter, products and
//! their derivatives multiplied out.
//!
//! The coefficient of a field at one order is a field of its own, so that all of it is
//! ordinary algebra; [`Coefficients`] tells which is which.

use crate::algebra::product::{Base, Derivative, Factor, Factors, Product};
use crate::algebra::quantities::{CoordinateId, FieldId, Quantities};
use crate::algebra::series::{self, Graded, Series};
use crate::number::{Exponent, Number, TooLarge};

/// Why a term has no series.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum SeriesFault {
    /// It holds an expression with a size of its own, an amount, or a power of a sum.
    NotAProduct,
    /// Something grows beyond the limits.
    TooLarge,
}

impl From<TooLarge> for SeriesFault {
    fn from(_: TooLarge) -> SeriesFault {
        SeriesFault::TooLarge
    }
}

/// The fields of a model, order by order.
#[derive(Debug, Clone)]
pub struct Coefficients {
    /// All of them as fields: `u_0`, `u_1`.
    pub quantities: Quantities,
    /// The orders, in steps of the small parameter, rising from 0.
    pub degrees: Vec<u32>,
    /// The highest order that is followed.
    pub highest: u32,
    n_fields: usize,
}

impl Coefficients {
    /// For fields that have coefficients at these orders; `name` spells them.
    pub fn new(
        quantities: &Quantities,
        degrees: Vec<u32>,
        highest: u32,
        name: impl Fn(&str, u32) -> String,
    ) -> Coefficients {
        let mut made = quantities.clone();
        made.fields = degrees
            .iter()
            .flat_map(|degree| {
                let name = &name;
                quantities.fields.iter().map(move |field| {
                    let mut field = field.clone();
                    field.name = name(&field.name, *degree);
                    field
                })
            })
            .collect();
        Coefficients {
            quantities: made,
            degrees,
            highest,
            n_fields: quantities.fields.len(),
        }
    }

    /// The coefficient of a field at an order, by its place among the orders.
    fn coefficient(&self, id: FieldId, place: usize) -> FieldId {
        FieldId((place * self.n_fields) as u32 + id.0)
    }

    /// The field and the order of a coefficient.
    pub fn of(&self, id: FieldId) -> (FieldId, u32) {
        let place = id.0 as usize / self.n_fields.max(1);
        let field = id.0 as usize % self.n_fields.max(1);
        let degree = self.degrees.get(place).copied().unwrap_or(0);
        (FieldId(field as u32), degree)
    }

    /// The coefficients and their derivatives in a product, each with its power.
    pub fn in_product<'p>(
        &self,
        product: &'p Product,
    ) -> impl Iterator<Item = (FieldId, &'p Factor)> + use<'p> {
        product
            .factors
            .iter()
            .filter_map(|factor| Some((coefficient_of(&factor.base)?, factor)))
    }

    /// A product of fields as a series.
    ///
    /// # Errors
    /// See [`SeriesFault`].
    pub fn series(&self, product: &Product, degree: u32) -> Result<Series, SeriesFault> {
        let highest = self.highest.saturating_sub(degree);
        let mut found = vec![Graded::plain(Product::number(product.number.clone()))];
        for factor in &product.factors {
            let next = self.factor_series(factor)?;
            found = series::times(&found, &next, highest)?;
        }
        for term in &mut found {
            term.degree += degree;
        }
        Ok(found)
    }

    fn factor_series(&self, factor: &Factor) -> Result<Series, SeriesFault> {
        let base = match &factor.base {
            Base::Symbol(_) | Base::Coordinate(_) => {
                return Ok(vec![Graded::plain(Product {
                    number: Number::one(),
                    factors: vec![factor.clone()],
                })]);
            }
            Base::Field(id) => self.field_series(*id),
            Base::Derivative(derivative) => self.derivative_series(derivative)?,
            Base::Mean(inside) => self.mean_series(inside)?,
            Base::Absolute(_) | Base::Sized(_) | Base::Function(_) => {
                return Err(SeriesFault::NotAProduct);
            }
        };
        self.power(base, factor.power)
    }

    fn field_series(&self, id: FieldId) -> Series {
        let places = self.degrees.iter().enumerate();
        places
            .map(|(place, degree)| Graded {
                product: Product::base(Base::Field(self.coefficient(id, place))),
                degree: *degree,
            })
            .collect()
    }

    fn mean_series(&self, inside: &Factors) -> Result<Series, SeriesFault> {
        let operand = Product {
            number: Number::one(),
            factors: inside.clone(),
        };
        let series = self.series(&operand, 0)?;
        let means = series.into_iter().map(|term| Graded {
            product: Product {
                number: term.product.number,
                factors: vec![Factor {
                    base: Base::Mean(Box::new(term.product.factors)),
                    power: Exponent::ONE,
                }],
            },
            degree: term.degree,
        });
        Ok(series::collected(means.collect()))
    }

    fn derivative_series(&self, derivative: &Derivative) -> Result<Series, SeriesFault> {
        let operand = Product {
            number: Number::one(),
            factors: derivative.operand.clone(),
        };
        let mut series = self.series(&operand, 0)?;
        for (along, order) in &derivative.by {
            for _ in 0..*order {
                series = self.differentiated(&series, *along)?;
            }
        }
        Ok(series)
    }

    fn power(&self, base: Series, exponent: Exponent) -> Result<Series, SeriesFault> {
        if exponent == Exponent::ONE {
            return Ok(base);
        }
        if !exponent.is_negative() && exponent.is_whole() {
            let mut power = vec![Graded::plain(Product::number(Number::one()))];
            for _ in 0..exponent.numer() {
                power = series::times(&power, &base, self.highest)?;
            }
            return Ok(power);
        }
        let (leading, small): (Series, Series) =
            base.into_iter().partition(|term| term.degree == 0);
        match leading.as_slice() {
            [leading] => Ok(series::power(
                &leading.product,
                &small,
                exponent,
                self.highest,
            )?),
            _ => Err(SeriesFault::NotAProduct),
        }
    }

    /// The derivative of a series, by the product rule.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn differentiated(
        &self,
        series: &[Graded],
        along: CoordinateId,
    ) -> Result<Series, TooLarge> {
        let mut sum = Vec::new();
        for term in series {
            for product in self.derivative(&term.product, along)? {
                sum.push(Graded {
                    product,
                    degree: term.degree,
                });
            }
        }
        Ok(series::collected(sum))
    }

    /// The derivative of a product, by the product rule.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn derivative(
        &self,
        product: &Product,
        along: CoordinateId,
    ) -> Result<Vec<Product>, TooLarge> {
        let mut sum = Vec::new();
        for (place, factor) in product.factors.iter().enumerate() {
            let Some(inner) = self.base_derivative(&factor.base, along) else {
                continue;
            };
            let mut rest = Product::number(product.number.clone());
            rest.number = rest
                .number
                .times(&Number::rational(factor.power.to_rational()))?;
            for (other, kept) in product.factors.iter().enumerate() {
                let power = if other == place {
                    kept.power.plus(Exponent::ONE.negated())?
                } else {
                    kept.power
                };
                rest = rest.times(&Product::base(kept.base.clone()).power(power)?)?;
                if other == place {
                    rest = rest.times(&inner)?;
                }
            }
            sum.push(rest);
        }
        Ok(sum)
    }

    fn base_derivative(&self, base: &Base, along: CoordinateId) -> Option<Product> {
        let depends = crate::algebra::calculus::depends_on(base, along, &self.quantities);
        if !depends {
            return None;
        }
        match base {
            Base::Coordinate(_) => Some(Product::number(Number::one())),
            Base::Derivative(derivative) => {
                let mut by = derivative.by.clone();
                match by.iter_mut().find(|(found, _)| *found == along) {
                    Some((_, order)) => *order += 1,
                    None => by.push((along, 1)),
                }
                by.sort_unstable();
                Some(Product::base(Base::Derivative(Box::new(Derivative {
                    operand: derivative.operand.clone(),
                    by,
                }))))
            }
            Base::Symbol(_)
            | Base::Field(_)
            | Base::Absolute(_)
            | Base::Sized(_)
            | Base::Mean(_)
            | Base::Function(_) => Some(Product::base(Base::Derivative(Box::new(Derivative {
                operand: vec![Factor {
                    base: base.clone(),
                    power: Exponent::ONE,
                }],
                by: vec![(along, 1)],
            })))),
        }
    }
}

/// The field under a factor: itself, or what is differentiated.
pub fn coefficient_of(base: &Base) -> Option<FieldId> {
    match base {
        Base::Field(id) => Some(*id),
        Base::Derivative(derivative) => match derivative.operand.as_slice() {
            [single] => coefficient_of(&single.base),
            _ => None,
        },
        Base::Symbol(_)
        | Base::Coordinate(_)
        | Base::Absolute(_)
        | Base::Sized(_)
        | Base::Mean(_)
        | Base::Function(_) => None,
    }
}
