//! [`Whole`]: an exact whole number that is fast while it fits 128 bits and goes over to
//! any size when it does not.
//!
//! The tableau and the cells calculate with whole numbers only (rows are scaled), so
//! that no greatest common divisor is taken in inner loops. No operation overflows.

use std::cmp::Ordering;

use num_bigint::{BigInt, Sign};
use num_integer::Integer;
use num_rational::BigRational;
use num_traits::{One, ToPrimitive};

/// An exact whole number. `Large` is used only for what `Small` cannot hold, so equal
/// numbers are equal values; `Small` never holds `i128::MIN`, so its amount fits too.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) enum Whole {
    Small(i128),
    Large(Box<BigInt>),
}

use Whole::{Large, Small};

impl Whole {
    pub(super) const ZERO: Whole = Small(0);
    pub(super) const ONE: Whole = Small(1);

    pub(super) fn from_big(value: BigInt) -> Whole {
        match value.to_i128() {
            Some(small) if small != i128::MIN => Small(small),
            Some(_) | None => Large(Box::new(value)),
        }
    }

    pub(super) fn to_big(&self) -> BigInt {
        match self {
            Small(value) => BigInt::from(*value),
            Large(value) => (**value).clone(),
        }
    }

    /// -1, 0 or 1.
    pub(super) fn sign(&self) -> i32 {
        match self {
            Small(value) => value.signum() as i32,
            Large(value) => match value.sign() {
                Sign::Minus => -1,
                Sign::NoSign => 0,
                Sign::Plus => 1,
            },
        }
    }

    pub(super) fn is_zero(&self) -> bool {
        matches!(self, Small(0))
    }

    pub(super) fn negated(&self) -> Whole {
        match self {
            Small(value) => Small(-value),
            Large(value) => Whole::from_big(-&**value),
        }
    }

    pub(super) fn abs(&self) -> Whole {
        if self.sign() < 0 {
            self.negated()
        } else {
            self.clone()
        }
    }

    pub(super) fn plus(&self, other: &Whole) -> Whole {
        match small(self, other, i128::checked_add) {
            Some(sum) => sum,
            None => Whole::from_big(self.to_big() + other.to_big()),
        }
    }

    pub(super) fn minus(&self, other: &Whole) -> Whole {
        match small(self, other, i128::checked_sub) {
            Some(difference) => difference,
            None => Whole::from_big(self.to_big() - other.to_big()),
        }
    }

    pub(super) fn times(&self, other: &Whole) -> Whole {
        match small(self, other, small_product) {
            Some(product) => product,
            None => Whole::from_big(self.to_big() * other.to_big()),
        }
    }

    /// The quotient, rounded towards 0; `other` must not be 0.
    pub(super) fn over(&self, other: &Whole) -> Whole {
        match small(self, other, small_quotient) {
            Some(quotient) => quotient,
            None => Whole::from_big(self.to_big() / other.to_big()),
        }
    }

    /// The greatest common divisor, not negative.
    pub(super) fn gcd(&self, other: &Whole) -> Whole {
        match small(self, other, small_gcd) {
            Some(divisor) => divisor,
            None => Whole::from_big(self.to_big().gcd(&other.to_big())),
        }
    }

    /// The least common multiple of two positive numbers.
    pub(super) fn lcm(&self, other: &Whole) -> Whole {
        self.over(&self.gcd(other)).times(other)
    }

    /// `(a * b - c * d) / divisor`, where the division leaves no rest.
    pub(super) fn cross(a: &Whole, b: &Whole, c: &Whole, d: &Whole, divisor: &Whole) -> Whole {
        let difference = a.times(b).minus(&c.times(d));
        match divisor {
            Small(1) => difference,
            Small(_) | Large(_) => difference.over(divisor),
        }
    }

    /// `self / denom` as a rational number; `denom` must not be 0.
    pub(super) fn ratio(&self, denom: &Whole) -> BigRational {
        BigRational::new(self.to_big(), denom.to_big())
    }
}

impl From<i64> for Whole {
    fn from(value: i64) -> Whole {
        Small(value.into())
    }
}

impl Ord for Whole {
    fn cmp(&self, other: &Whole) -> Ordering {
        match (self, other) {
            (Small(a), Small(b)) => a.cmp(b),
            (Small(_) | Large(_), Small(_) | Large(_)) => self.to_big().cmp(&other.to_big()),
        }
    }
}

impl PartialOrd for Whole {
    fn partial_cmp(&self, other: &Whole) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}

fn small(a: &Whole, b: &Whole, operation: fn(i128, i128) -> Option<i128>) -> Option<Whole> {
    match (a, b) {
        (Small(a), Small(b)) => operation(*a, *b).filter(|v| *v != i128::MIN).map(Small),
        (Small(_) | Large(_), Small(_) | Large(_)) => None,
    }
}

fn small_product(a: i128, b: i128) -> Option<i128> {
    match (i64::try_from(a), i64::try_from(b)) {
        // One machine multiplication; the product of two 64-bit numbers fits.
        (Ok(a), Ok(b)) => Some(i128::from(a) * i128::from(b)),
        (Ok(_) | Err(_), Ok(_) | Err(_)) => a.checked_mul(b),
    }
}

fn small_quotient(a: i128, b: i128) -> Option<i128> {
    match (i64::try_from(a), i64::try_from(b)) {
        (Ok(a), Ok(b)) => a.checked_div(b).map(i128::from),
        (Ok(_) | Err(_), Ok(_) | Err(_)) => a.checked_div(b),
    }
}

fn small_gcd(a: i128, b: i128) -> Option<i128> {
    match (i64::try_from(a), i64::try_from(b)) {
        (Ok(a), Ok(b)) => Some(i128::from(a.unsigned_abs().gcd(&b.unsigned_abs()))),
        (Ok(_) | Err(_), Ok(_) | Err(_)) => Some(a.gcd(&b)),
    }
}

/// Makes `row` a row of whole numbers by a positive factor, the smallest that does it
/// and leaves no common divisor; a row of zeros stays.
pub(super) fn whole_row(row: &[BigRational]) -> Vec<Whole> {
    let denom = row.iter().fold(BigInt::one(), |lcm, v| lcm.lcm(v.denom()));
    let mut whole: Vec<Whole> = row
        .iter()
        .map(|v| Whole::from_big(v.numer() * (&denom / v.denom())))
        .collect();
    make_coprime(&mut whole);
    whole
}

/// Divides by the greatest common divisor, if there is one.
pub(super) fn make_coprime(row: &mut [Whole]) {
    let mut divisor = Whole::ZERO;
    for value in row.iter() {
        divisor = divisor.gcd(value);
        if divisor == Whole::ONE {
            return;
        }
    }
    if divisor.is_zero() {
        return;
    }
    for value in row.iter_mut().filter(|v| !v.is_zero()) {
        *value = value.over(&divisor);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use num_traits::{Signed, Zero};
    use proptest::prelude::*;

    fn any_whole() -> impl Strategy<Value = Whole> {
        prop_oneof![
            any::<i8>().prop_map(|v| Small(v.into())),
            any::<i64>().prop_map(|v| Small(v.into())),
            any::<i128>().prop_map(|v| Whole::from_big(v.into())),
            any::<(i128, i128)>().prop_map(|(a, b)| Whole::from_big(BigInt::from(a) * b)),
            Just(Whole::from_big(i128::MIN.into())),
        ]
    }

    proptest! {
        #[test]
        fn calculates_as_big_integers_do(a in any_whole(), b in any_whole()) {
            let (p, q) = (a.to_big(), b.to_big());
            prop_assert_eq!(a.plus(&b), Whole::from_big(&p + &q));
            prop_assert_eq!(a.minus(&b), Whole::from_big(&p - &q));
            prop_assert_eq!(a.times(&b), Whole::from_big(&p * &q));
            prop_assert_eq!(a.gcd(&b), Whole::from_big(p.gcd(&q)));
            prop_assert_eq!(a.negated(), Whole::from_big(-&p));
            prop_assert_eq!(a.cmp(&b), p.cmp(&q));
            prop_assert_eq!(a.abs().to_big(), p.abs());
            if !b.is_zero() {
                prop_assert_eq!(a.over(&b), Whole::from_big(&p / &q));
                prop_assert_eq!(a.times(&b).over(&b), a.clone());
            }
            prop_assert_eq!(Whole::cross(&a, &b, &b, &a, &Whole::ONE), Whole::ZERO);
        }
    }

    #[test]
    fn rows_become_whole_and_coprime() {
        let row = [(1, 2), (-2, 3), (0, 1)]
            .map(|(n, d): (i64, i64)| BigRational::new(n.into(), d.into()));
        assert_eq!(whole_row(&row), [3, -4, 0].map(Whole::from));
        assert_eq!(whole_row(&[BigRational::zero()]), [Whole::ZERO]);
    }
}
