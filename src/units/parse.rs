//! Reads a unit, `kg/(m.s^2)`, into a dimension and an exact factor to SI.
//!
//! A unit of several symbols is multiplied up factor by factor; the text is read in
//! `reader`, the symbols are in `table`.

use num_rational::BigRational;

use super::dimension::{Dimension, joined_quotient, unit_power};
use super::error::UnitError;
use super::nearest::nearest;
use super::reader::{Factor, Solidus, read};
use super::table::{Table, table};
use crate::number::{Exponent, Number, TooLarge, rational_to_f64};

/// What a unit means.
#[derive(Debug, Clone, PartialEq)]
pub struct Unit {
    /// What it measures.
    pub dimension: Dimension,
    /// How many SI units it is.
    pub factor: Number,
    /// For a reading on a scale with an offset (`degC`, `degF`): what is added after the
    /// factor, in K.
    pub offset: Option<BigRational>,
}

/// Reads a unit.
///
/// # Errors
/// [`UnitError`], with places in bytes of `text`.
pub fn parse(text: &str) -> Result<Unit, UnitError> {
    Unit::parse_with(text, table())
}

impl Unit {
    /// The unit of a number.
    pub fn one() -> Unit {
        Unit {
            dimension: Dimension::one(),
            factor: Number::one(),
            offset: None,
        }
    }

    /// The SI value of so many of it; of a reading, where the unit has an offset.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn to_si(&self, amount: &BigRational) -> Result<Number, TooLarge> {
        let value = Number::rational(amount.clone()).times(&self.factor)?;
        match &self.offset {
            None => Ok(value),
            Some(offset) => value
                .plus(&Number::rational(offset.clone()))
                .ok_or(TooLarge),
        }
    }

    /// How many of it an SI value is; which reading, where the unit has an offset.
    pub fn from_si(&self, value: f64) -> f64 {
        let offset = self.offset.as_ref().map_or(0.0, rational_to_f64);
        (value - offset) / self.factor.to_f64()
    }

    /// Reads a unit with the symbols of a table.
    pub(super) fn parse_with(text: &str, table: &Table) -> Result<Unit, UnitError> {
        let spelling = read(text)?;
        let factors = &spelling.factors;
        let mut unit = Unit::one();
        for factor in factors {
            let is_alone = factors.len() == 1 && factor.signed_exponent() == Exponent::ONE;
            let offset = unit.take_factor(factor, table)?;
            if offset.is_some() && !is_alone {
                return Err(offset_in_compound(text, factor));
            }
            unit.offset = offset;
        }
        match spelling.solidus {
            Solidus::Alone => Ok(unit),
            Solidus::Again(range) => {
                let mend = with_one_solidus(factors);
                Err(UnitError::TwoSolidi { range, mend })
            }
            Solidus::BeforeProduct(range) => {
                let mend = with_one_solidus(factors);
                Err(UnitError::ProductBehindSolidus { range, mend })
            }
            Solidus::InBrackets(range) => {
                let mend = with_one_solidus(factors);
                Err(UnitError::SolidusInBrackets { range, mend })
            }
        }
    }

    /// Multiplies by a symbol to its power; gives the offset that the symbol has.
    fn take_factor(
        &mut self,
        factor: &Factor<'_>,
        table: &Table,
    ) -> Result<Option<BigRational>, UnitError> {
        let Some(found) = table.find(factor.symbol) else {
            return Err(UnitError::Unknown {
                symbol: factor.symbol.to_owned(),
                range: factor.range(),
                nearest: nearest(factor.symbol),
            });
        };
        let too_large = |TooLarge| UnitError::TooLarge {
            range: factor.range(),
        };
        let exponent = factor.signed_exponent();
        if let Some((_, prefix)) = found.prefix {
            self.take_power(&Dimension::one(), prefix, exponent)
                .map_err(too_large)?;
        }
        self.take_power(&found.unit.dimension, &found.unit.factor, exponent)
            .map_err(too_large)?;
        Ok(found.unit.offset.clone())
    }

    /// Multiplies by a unit of this dimension and factor to a power.
    fn take_power(
        &mut self,
        dimension: &Dimension,
        factor: &Number,
        exponent: Exponent,
    ) -> Result<(), TooLarge> {
        if exponent == Exponent::ONE {
            self.dimension = self.dimension.times(dimension)?;
        } else {
            self.dimension = self.dimension.times(&dimension.power(exponent)?)?;
        }
        // Most factors are 1, and nearly all stand to the power 1: no arithmetic for those.
        if factor.is_one() {
            return Ok(());
        }
        let power = if exponent == Exponent::ONE {
            factor.clone()
        } else {
            factor.power(exponent)?
        };
        self.factor = if self.factor.is_one() {
            power
        } else {
            self.factor.times(&power)?
        };
        Ok(())
    }
}

fn offset_in_compound(text: &str, factor: &Factor<'_>) -> UnitError {
    let range = factor.range();
    let instead = if factor.symbol.ends_with('F') {
        "degR"
    } else {
        "K"
    };
    let mut mend = text.to_owned();
    mend.replace_range(range.clone(), instead);
    UnitError::OffsetInCompound {
        symbol: factor.symbol.to_owned(),
        range,
        mend,
    }
}

/// The same factors with one solidus; all that stands behind the first one below it.
fn with_one_solidus(factors: &[Factor<'_>]) -> String {
    joined_quotient(&spelt_side(factors, false), &spelt_side(factors, true))
}

/// The factors on one side of the line, equal symbols together.
fn spelt_side(factors: &[Factor<'_>], is_below: bool) -> Vec<String> {
    let mut powers: Vec<(&str, Exponent)> = Vec::new();
    for factor in factors.iter().filter(|factor| factor.is_below == is_below) {
        let present = powers
            .iter_mut()
            .find(|(symbol, _)| *symbol == factor.symbol);
        match present.map(|(_, power)| (power.plus(factor.exponent), power)) {
            Some((Ok(total), power)) => *power = total,
            Some((Err(TooLarge), _)) | None => powers.push((factor.symbol, factor.exponent)),
        }
    }
    powers
        .into_iter()
        .filter(|(_, power)| !power.is_zero())
        .map(|(symbol, power)| unit_power(symbol, power))
        .collect()
}
