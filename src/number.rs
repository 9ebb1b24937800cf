//! The exact numbers of the house: [`Exponent`], a small rational, and [`Number`], a
//! rational times roots of rationals times a power of π.
//!
//! Both stay within `limits`; an operation that would leave them is [`TooLarge`], so
//! nothing overflows silently.

use std::collections::BTreeMap;
use std::fmt;

use num_bigint::BigInt;
use num_integer::Integer;
use num_rational::{BigRational, Ratio};
use num_traits::{One, Signed, ToPrimitive, Zero};

use crate::limits;

/// An exact number or exponent grew beyond its limit.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct TooLarge;

/// An exact rational exponent; numerator and denominator stay within `limits::EXPONENT`.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Exponent(Ratio<i64>);

impl Exponent {
    /// The exponent 0.
    pub const ZERO: Exponent = Exponent(Ratio::new_raw(0, 1));
    /// The exponent 1.
    pub const ONE: Exponent = Exponent(Ratio::new_raw(1, 1));

    /// A whole exponent.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limit.
    pub fn whole(value: i64) -> Result<Exponent, TooLarge> {
        Exponent::within(Ratio::from_integer(value))
    }

    /// `numer/denom` in lowest terms, for constants of the program.
    ///
    /// # Panics
    /// If `denom` is 0 or either is beyond the limit: never on user input.
    pub const fn ratio(numer: i64, denom: i64) -> Exponent {
        assert!(denom > 0 && numer.unsigned_abs() <= limits::EXPONENT as u64);
        // Constants are written in lowest terms.
        Exponent(Ratio::new_raw(numer, denom))
    }

    /// From an exact rational.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limit.
    pub fn from_rational(value: &BigRational) -> Result<Exponent, TooLarge> {
        match (value.numer().to_i64(), value.denom().to_i64()) {
            (Some(numer), Some(denom)) => Exponent::within(Ratio::new(numer, denom)),
            _ => Err(TooLarge),
        }
    }

    fn within(value: Ratio<i64>) -> Result<Exponent, TooLarge> {
        let limit = limits::EXPONENT;
        if (-limit..=limit).contains(value.numer()) && *value.denom() <= limit {
            Ok(Exponent(value))
        } else {
            Err(TooLarge)
        }
    }

    /// The sum.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limit.
    pub fn plus(self, other: Exponent) -> Result<Exponent, TooLarge> {
        // Both are within the limit, so the exact sum fits 64 bits.
        Exponent::within(self.0 + other.0)
    }

    /// The product.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limit.
    pub fn times(self, other: Exponent) -> Result<Exponent, TooLarge> {
        Exponent::within(self.0 * other.0)
    }

    /// The same amount with the other sign.
    #[must_use]
    pub fn negated(self) -> Exponent {
        Exponent(-self.0)
    }

    /// Whether it is 0.
    pub fn is_zero(self) -> bool {
        self.0.is_zero()
    }

    /// Whether it is a whole number.
    pub fn is_whole(self) -> bool {
        self.0.is_integer()
    }

    /// Whether it is below 0.
    pub fn is_negative(self) -> bool {
        self.0.is_negative()
    }

    /// Numerator.
    pub fn numer(self) -> i64 {
        *self.0.numer()
    }

    /// Denominator, positive.
    pub fn denom(self) -> i64 {
        *self.0.denom()
    }

    /// As a floating-point number.
    pub fn to_f64(self) -> f64 {
        self.numer() as f64 / self.denom() as f64
    }

    /// As a rational of any size.
    pub fn to_rational(self) -> BigRational {
        BigRational::new(self.numer().into(), self.denom().into())
    }
}

impl fmt::Display for Exponent {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        self.0.fmt(f)
    }
}

impl fmt::Debug for Exponent {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        self.0.fmt(f)
    }
}

/// An exact number: `rational * π^pi * root_1^e_1 * root_2^e_2 ...`.
///
/// Roots are primes (or what is left of a number after its small primes, which then
/// stands as it is) to powers between 0 and 1, so that equal numbers are equal values as
/// long as their prime factors are below `SMALL_PRIME`.
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord)]
pub struct Number {
    rational: BigRational,
    pi: Exponent,
    roots: BTreeMap<BigInt, Exponent>,
}

/// Prime factors up to here are split off a number under a root.
const SMALL_PRIME: u32 = 1_000;

impl Number {
    /// A rational number.
    pub fn rational(value: BigRational) -> Number {
        Number {
            rational: value,
            pi: Exponent::ZERO,
            roots: BTreeMap::new(),
        }
    }

    /// A whole number.
    pub fn whole(value: i64) -> Number {
        Number::rational(BigRational::from_integer(value.into()))
    }

    /// The number 1.
    pub fn one() -> Number {
        Number::whole(1)
    }

    /// The number π.
    pub fn pi() -> Number {
        Number {
            pi: Exponent::ONE,
            ..Number::one()
        }
    }

    /// The rational number, where it is one.
    pub fn as_rational(&self) -> Option<&BigRational> {
        (self.pi.is_zero() && self.roots.is_empty() || self.rational.is_zero())
            .then_some(&self.rational)
    }

    /// Whether it is 0.
    pub fn is_zero(&self) -> bool {
        self.rational.is_zero()
    }

    /// Whether it is 1.
    pub fn is_one(&self) -> bool {
        self.as_rational().is_some_and(One::is_one)
    }

    /// Whether it is below 0.
    pub fn is_negative(&self) -> bool {
        self.rational.is_negative()
    }

    /// The amount, without sign.
    #[must_use]
    pub fn abs(&self) -> Number {
        Number {
            rational: self.rational.abs(),
            ..self.clone()
        }
    }

    /// The same amount with the other sign.
    #[must_use]
    pub fn negated(&self) -> Number {
        Number {
            rational: -self.rational.clone(),
            ..self.clone()
        }
    }

    /// The power of π in it.
    pub fn pi_power(&self) -> Exponent {
        self.pi
    }

    /// Its roots: numbers to powers between 0 and 1, in order.
    pub fn roots(&self) -> impl Iterator<Item = (&BigInt, Exponent)> {
        self.roots.iter().map(|(root, power)| (root, *power))
    }

    /// The part without π and roots.
    pub fn rational_part(&self) -> &BigRational {
        &self.rational
    }

    /// The product.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn times(&self, other: &Number) -> Result<Number, TooLarge> {
        if self.roots.is_empty() && other.roots.is_empty() {
            return Ok(Number {
                rational: bounded(&self.rational * &other.rational)?,
                pi: self.pi.plus(other.pi)?,
                roots: BTreeMap::new(),
            });
        }
        let mut product = Number {
            rational: bounded(&self.rational * &other.rational)?,
            pi: self.pi.plus(other.pi)?,
            roots: self.roots.clone(),
        };
        for (root, &power) in &other.roots {
            let power = match product.roots.remove(root) {
                Some(present) => present.plus(power)?,
                None => power,
            };
            product.put_root(root.clone(), power)?;
        }
        Ok(product)
    }

    /// The quotient; `None` if `other` is 0.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn over(&self, other: &Number) -> Result<Option<Number>, TooLarge> {
        if other.is_zero() {
            return Ok(None);
        }
        Ok(Some(self.times(&other.power(Exponent::ONE.negated())?)?))
    }

    /// The sum, where it is again such a number: of two rationals, or of two rational
    /// multiples of one number.
    pub fn plus(&self, other: &Number) -> Option<Number> {
        if self.is_zero() {
            return Some(other.clone());
        }
        if other.is_zero() {
            return Some(self.clone());
        }
        (self.pi == other.pi && self.roots == other.roots).then_some(())?;
        let rational = bounded(&self.rational + &other.rational).ok()?;
        Some(if rational.is_zero() {
            Number::whole(0)
        } else {
            Number {
                rational,
                ..self.clone()
            }
        })
    }

    /// The power; the amount of a negative number is not taken: a root of a negative
    /// number must be refused by the caller.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits, and for 0 to a negative power.
    pub fn power(&self, exponent: Exponent) -> Result<Number, TooLarge> {
        if exponent.is_zero() {
            return Ok(Number::one());
        }
        if self.is_zero() {
            return if exponent.is_negative() {
                Err(TooLarge)
            } else {
                Ok(Number::whole(0))
            };
        }
        let mut result = Number {
            rational: BigRational::one(),
            pi: self.pi.times(exponent)?,
            roots: BTreeMap::new(),
        };
        if exponent.is_whole() {
            result.rational = whole_power(&self.rational, exponent.numer())?;
        } else {
            result.put_root(self.rational.numer().abs(), exponent)?;
            result.put_root(self.rational.denom().clone(), exponent.negated())?;
            if self.is_negative() && exponent.numer().is_odd() && exponent.denom().is_odd() {
                result.rational = -result.rational;
            }
        }
        for (root, &power) in &self.roots {
            let mut factor = Number::one();
            factor.put_root(root.clone(), power.times(exponent)?)?;
            result = result.times(&factor)?;
        }
        Ok(result)
    }

    /// Multiplies by `base^power`, keeping roots between 0 and 1 and primes small.
    fn put_root(&mut self, base: BigInt, power: Exponent) -> Result<(), TooLarge> {
        if base.is_one() || power.is_zero() {
            return Ok(());
        }
        if power.is_whole() {
            let factor = whole_power(&BigRational::from_integer(base), power.numer())?;
            self.rational = bounded(&self.rational * factor)?;
            return Ok(());
        }
        let (factors, rest) = small_factors(base);
        let rest = whole_root(&rest, power.denom());
        for (factor, times) in factors.into_iter().chain(rest) {
            let total = power.times(Exponent::whole(times)?)?;
            let present = self.roots.remove(&factor).unwrap_or(Exponent::ZERO);
            let total = present.plus(total)?;
            let floor = total.numer().div_euclid(total.denom());
            let left = total.plus(Exponent::whole(-floor)?)?;
            let whole = whole_power(&BigRational::from_integer(factor.clone()), floor)?;
            self.rational = bounded(&self.rational * whole)?;
            if !left.is_zero() {
                self.roots.insert(factor, left);
            }
        }
        Ok(())
    }

    /// The nearest floating-point number.
    pub fn to_f64(&self) -> f64 {
        let mut value = rational_to_f64(&self.rational);
        if !self.pi.is_zero() {
            value *= std::f64::consts::PI.powf(self.pi.to_f64());
        }
        for (root, power) in &self.roots {
            value *= rational_to_f64(&BigRational::from_integer(root.clone())).powf(power.to_f64());
        }
        value
    }

    /// Its amount as a product of powers of positive whole numbers, primes as far as they
    /// are small; π stands apart, in `pi_power`.
    pub fn whole_powers(&self) -> Vec<(BigInt, BigRational)> {
        let mut powers: BTreeMap<BigInt, BigRational> = BTreeMap::new();
        let mut put = |base: BigInt, power: BigRational| {
            let sum = powers.remove(&base).unwrap_or_else(BigRational::zero) + power;
            if !sum.is_zero() {
                powers.insert(base, sum);
            }
        };
        let sides = [
            (self.rational.numer().abs(), 1),
            (self.rational.denom().clone(), -1),
        ];
        for (side, sign) in sides {
            let (small, rest) = small_factors(side);
            let rest = Some((rest, 1)).filter(|(rest, _)| !rest.is_one() && !rest.is_zero());
            for (base, times) in small.into_iter().chain(rest) {
                put(base, BigRational::from_integer((sign * times).into()));
            }
        }
        for (root, power) in &self.roots {
            put(root.clone(), power.to_rational());
        }
        powers.into_iter().collect()
    }

    /// The natural logarithm of the amount; minus infinity for 0.
    pub fn ln_abs(&self) -> f64 {
        self.to_f64().abs().ln()
    }
}

/// The nearest floating-point number of a rational of any size.
pub fn rational_to_f64(value: &BigRational) -> f64 {
    match (value.numer().to_i64(), value.denom().to_i64()) {
        // Both parts exact in a double: one division, correctly rounded.
        (Some(numer), Some(denom)) if numer.abs() < 1 << 53 && denom < 1 << 53 => {
            numer as f64 / denom as f64
        }
        _ => value.to_f64().unwrap_or(f64::NAN),
    }
}

fn bounded(value: BigRational) -> Result<BigRational, TooLarge> {
    if value.numer().bits() > limits::NUMBER_BITS || value.denom().bits() > limits::NUMBER_BITS {
        Err(TooLarge)
    } else {
        Ok(value)
    }
}

/// A whole power, refused before it is computed where it would be too large.
pub fn whole_power(base: &BigRational, exponent: i64) -> Result<BigRational, TooLarge> {
    if base.is_one() || exponent == 0 {
        return Ok(BigRational::one());
    }
    if base.is_zero() && exponent < 0 {
        return Err(TooLarge);
    }
    let bits = base.numer().bits().max(base.denom().bits()).max(1);
    if (bits - 1).saturating_mul(exponent.unsigned_abs()) > limits::NUMBER_BITS {
        return Err(TooLarge);
    }
    let exponent = i32::try_from(exponent).map_err(|_| TooLarge)?;
    bounded(base.pow(exponent))
}

/// Splits the prime factors up to [`SMALL_PRIME`] off a positive number.
fn small_factors(mut value: BigInt) -> (Vec<(BigInt, i64)>, BigInt) {
    let mut factors = Vec::new();
    for candidate in 2..=SMALL_PRIME {
        if value.is_one() || value.is_zero() {
            break;
        }
        let mut times = 0;
        loop {
            let (quotient, remainder) = value.div_rem(&BigInt::from(candidate));
            if !remainder.is_zero() {
                break;
            }
            value = quotient;
            times += 1;
        }
        if times > 0 {
            factors.push((candidate.into(), times));
        }
    }
    (factors, value)
}

/// A number without small factors as a power: itself, or its exact root of this degree.
fn whole_root(value: &BigInt, degree: i64) -> Option<(BigInt, i64)> {
    if value.is_one() {
        return None;
    }
    let degree = u32::try_from(degree).unwrap_or(u32::MAX);
    if u64::from(degree) < value.bits() {
        let root = value.nth_root(degree);
        if root.pow(degree) == *value {
            return Some((root, i64::from(degree)));
        }
    }
    Some((value.clone(), 1))
}

impl fmt::Display for Number {
    /// As the language writes it: `2`, `1/18`, `2^(1/2)*pi`.
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let mut parts = Vec::new();
        if !self.rational.is_one() || (self.pi.is_zero() && self.roots.is_empty()) {
            parts.push(self.rational.to_string());
        }
        for (root, power) in &self.roots {
            parts.push(format!("{root}^({power})"));
        }
        if !self.pi.is_zero() {
            parts.push(match self.pi {
                power if power == Exponent::ONE => "pi".to_owned(),
                power if power.is_whole() => format!("pi^{power}"),
                power => format!("pi^({power})"),
            });
        }
        f.write_str(&parts.join("*"))
    }
}

/// A digit or minus sign as superscript; anything else as it is.
pub fn raised_digit(digit: char) -> char {
    match digit {
        '-' => '⁻',
        '0' => '⁰',
        '1' => '¹',
        '2' => '²',
        '3' => '³',
        '4' => '⁴',
        '5' => '⁵',
        '6' => '⁶',
        '7' => '⁷',
        '8' => '⁸',
        '9' => '⁹',
        other => other,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn whole(value: i64) -> Number {
        Number::whole(value)
    }

    fn exponent(numer: i64, denom: i64) -> Exponent {
        Exponent::from_rational(&BigRational::new(numer.into(), denom.into())).unwrap()
    }

    #[test]
    fn roots_meet_in_one_form() {
        let root = whole(12).power(exponent(1, 2)).unwrap();
        let other = whole(2)
            .times(&whole(3).power(exponent(1, 2)).unwrap())
            .unwrap();
        assert_eq!(root, other);
        assert_eq!(root.power(exponent(2, 1)).unwrap(), whole(12));
        let eighth = whole(8).power(exponent(-1, 3)).unwrap();
        assert_eq!(eighth.to_string(), "1/2");
    }

    #[test]
    fn huge_powers_are_refused_at_once() {
        assert_eq!(whole(10).power(exponent(1_000_000, 1)), Err(TooLarge));
        assert_eq!(Exponent::whole(limits::EXPONENT + 1), Err(TooLarge));
    }

    #[test]
    fn pi_stays_a_symbol() {
        let degrees = Number::pi().over(&whole(180)).unwrap().unwrap();
        assert_eq!(degrees.to_string(), "1/180*pi");
        let right_angle = degrees.times(&whole(90)).unwrap();
        assert_eq!(right_angle.to_string(), "1/2*pi");
    }
}
