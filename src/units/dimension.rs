//! [`Dimension`]: exact rational exponents over the seven SI base quantities, and its
//! two spellings, the language's own (`kg/(m.s^2)`) and the one for people
//! (`kg m⁻¹ s⁻²`). The names of dimensions (velocity, pressure, ...) are in `names`.

use std::fmt;

use crate::number::{Exponent, TooLarge, raised_digit};

/// The SI base units, in the order in which units are written.
const BASE_UNITS: [&str; 7] = ["kg", "m", "s", "A", "K", "mol", "cd"];

/// An SI base quantity, with the place of its exponent in a [`Dimension`].
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Base {
    Mass,
    Length,
    Time,
    Current,
    Temperature,
    Amount,
    Luminosity,
}

/// The physical dimension of a quantity: exponents over kg, m, s, A, K, mol, cd.
///
/// Plane and solid angles have none: a radian is the number 1.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Dimension([Exponent; 7]);

impl Dimension {
    /// The dimension of a number.
    pub const fn one() -> Dimension {
        Dimension([Exponent::ZERO; 7])
    }

    /// The dimension of a mass, in kg.
    pub const fn mass() -> Dimension {
        Dimension::base(Base::Mass)
    }

    /// The dimension of a length, in m.
    pub const fn length() -> Dimension {
        Dimension::base(Base::Length)
    }

    /// The dimension of a time, in s.
    pub const fn time() -> Dimension {
        Dimension::base(Base::Time)
    }

    /// The dimension of an electric current, in A.
    pub const fn current() -> Dimension {
        Dimension::base(Base::Current)
    }

    /// The dimension of a temperature, in K.
    pub const fn temperature() -> Dimension {
        Dimension::base(Base::Temperature)
    }

    /// The dimension of an amount of substance, in mol.
    pub const fn amount() -> Dimension {
        Dimension::base(Base::Amount)
    }

    /// The dimension of a luminous intensity, in cd.
    pub const fn luminosity() -> Dimension {
        Dimension::base(Base::Luminosity)
    }

    const fn base(base: Base) -> Dimension {
        let mut exponents = [Exponent::ZERO; 7];
        exponents[base as usize] = Exponent::ONE;
        Dimension(exponents)
    }

    /// From whole exponents over kg, m, s, A, K, mol, cd.
    ///
    /// # Errors
    /// [`TooLarge`] if one is beyond the limit.
    pub fn from_whole(exponents: [i64; 7]) -> Result<Dimension, TooLarge> {
        let mut dimension = Dimension::one();
        for (place, value) in dimension.0.iter_mut().zip(exponents) {
            *place = Exponent::whole(value)?;
        }
        Ok(dimension)
    }

    /// The exponents over kg, m, s, A, K, mol, cd.
    pub fn exponents(&self) -> &[Exponent; 7] {
        &self.0
    }

    /// Whether it is the dimension of a number.
    pub fn is_one(&self) -> bool {
        self.0.iter().all(|exponent| exponent.is_zero())
    }

    /// The dimension of a product.
    ///
    /// # Errors
    /// [`TooLarge`] if an exponent grows beyond the limit.
    pub fn times(&self, other: &Dimension) -> Result<Dimension, TooLarge> {
        let mut product = *self;
        for (place, &exponent) in product.0.iter_mut().zip(&other.0) {
            // Most exponents are 0, and adding 0 is not worth a division.
            if !exponent.is_zero() {
                *place = place.plus(exponent)?;
            }
        }
        Ok(product)
    }

    /// The dimension of a quotient.
    ///
    /// # Errors
    /// [`TooLarge`] if an exponent grows beyond the limit.
    pub fn over(&self, other: &Dimension) -> Result<Dimension, TooLarge> {
        self.times(&Dimension(other.0.map(Exponent::negated)))
    }

    /// The dimension of a power.
    ///
    /// # Errors
    /// [`TooLarge`] if an exponent grows beyond the limit.
    pub fn power(&self, exponent: Exponent) -> Result<Dimension, TooLarge> {
        let mut power = *self;
        for place in power.0.iter_mut().filter(|place| !place.is_zero()) {
            *place = place.times(exponent)?;
        }
        Ok(power)
    }

    /// The SI unit in the language's syntax: `kg/(m^2.s^2)`, `1/s`, `m^(2/3)`, `1`.
    pub fn unit_text(&self) -> String {
        let above: Vec<String> = self
            .factors()
            .filter(|(_, exponent)| !exponent.is_negative())
            .map(|(unit, exponent)| unit_power(unit, exponent))
            .collect();
        let below: Vec<String> = self
            .factors()
            .filter(|(_, exponent)| exponent.is_negative())
            .map(|(unit, exponent)| unit_power(unit, exponent.negated()))
            .collect();
        joined_quotient(&above, &below)
    }

    /// The SI base units for people: `m s⁻²`, `m^(2/3) s⁻¹`; `1` for a number.
    pub fn base_units(&self) -> String {
        if self.is_one() {
            return "1".to_owned();
        }
        let parts: Vec<String> = self
            .factors()
            .map(|(unit, exponent)| readable_power(unit, exponent))
            .collect();
        parts.join(" ")
    }

    fn factors(&self) -> impl Iterator<Item = (&'static str, Exponent)> {
        BASE_UNITS
            .into_iter()
            .zip(self.0)
            .filter(|(_, exponent)| !exponent.is_zero())
    }
}

impl fmt::Display for Dimension {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.base_units())
    }
}

impl fmt::Debug for Dimension {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.unit_text())
    }
}

/// A quotient in unit syntax out of its spelt factors: `a.b/(c.d)`.
pub(super) fn joined_quotient(above: &[String], below: &[String]) -> String {
    let mut text = if above.is_empty() {
        "1".to_owned()
    } else {
        above.join(".")
    };
    match below {
        [] => {}
        [single] => text.push_str(&format!("/{single}")),
        several => text.push_str(&format!("/({})", several.join("."))),
    }
    text
}

/// A power in unit syntax: `m`, `m^2`, `m^-1`, `m^(2/3)`.
pub(super) fn unit_power(unit: &str, exponent: Exponent) -> String {
    if exponent == Exponent::ONE {
        unit.to_owned()
    } else if exponent.is_whole() {
        format!("{unit}^{exponent}")
    } else {
        format!("{unit}^({exponent})")
    }
}

fn readable_power(unit: &str, exponent: Exponent) -> String {
    if exponent == Exponent::ONE || !exponent.is_whole() {
        return unit_power(unit, exponent);
    }
    let digits = exponent.numer().to_string();
    let raised: String = digits.chars().map(raised_digit).collect();
    format!("{unit}{raised}")
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::limits;

    fn dimension(exponents: [i64; 7]) -> Dimension {
        Dimension::from_whole(exponents).unwrap()
    }

    #[test]
    fn units_stand_in_the_fixed_order_with_one_solidus() {
        for (exponents, text, readable) in [
            ([0, 0, 0, 0, 0, 0, 0], "1", "1"),
            ([0, 0, -1, 0, 0, 0, 0], "1/s", "s⁻¹"),
            ([0, 2, -1, 0, 0, 0, 0], "m^2/s", "m² s⁻¹"),
            ([1, -2, -2, 0, 0, 0, 0], "kg/(m^2.s^2)", "kg m⁻² s⁻²"),
            ([0, -1, -1, 0, 0, 0, 0], "1/(m.s)", "m⁻¹ s⁻¹"),
            (
                [1, 2, -3, -1, -1, 1, 1],
                "kg.m^2.mol.cd/(s^3.A.K)",
                "kg m² s⁻³ A⁻¹ K⁻¹ mol cd",
            ),
        ] {
            assert_eq!(dimension(exponents).unit_text(), text);
            assert_eq!(dimension(exponents).base_units(), readable);
        }
    }

    #[test]
    fn rational_exponents_stand_in_brackets() {
        let root = Dimension::length().power(Exponent::ratio(2, 3)).unwrap();
        assert_eq!(root.unit_text(), "m^(2/3)");
        assert_eq!(root.base_units(), "m^(2/3)");
        let below = Dimension::time().power(Exponent::ratio(-1, 2)).unwrap();
        assert_eq!(below.unit_text(), "1/s^(1/2)");
        assert_eq!(below.base_units(), "s^(-1/2)");
        assert_eq!(root.power(Exponent::ratio(3, 2)), Ok(Dimension::length()));
    }

    #[test]
    fn products_and_quotients_cancel_exactly() {
        let velocity = Dimension::length().over(&Dimension::time()).unwrap();
        assert_eq!(velocity.times(&Dimension::time()), Ok(Dimension::length()));
        assert!(velocity.over(&velocity).unwrap().is_one());
        assert!(!velocity.is_one());
    }

    #[test]
    fn an_exponent_beyond_the_limit_is_refused() {
        let largest = Exponent::whole(limits::EXPONENT).unwrap();
        let high = Dimension::mass().power(largest).unwrap();
        assert_eq!(high.times(&Dimension::mass()), Err(TooLarge));
        assert_eq!(high.power(Exponent::ratio(2, 1)), Err(TooLarge));
    }
}
