//! [`Range`]: a size known to lie between two bounds, with its nominal value, and the
//! arithmetic of such sizes.
//!
//! Bounds are those of interval arithmetic in floating point, without outward rounding;
//! the nominal value is computed at the nominal values and always lies between them.
//! Functions of a range are in `function`.

use crate::number::Exponent;

/// A size: lowest, nominal and highest value, all finite.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Range {
    /// The lowest value.
    pub low: f64,
    /// The value at the nominal values.
    pub nominal: f64,
    /// The highest value.
    pub high: f64,
}

/// Why a range has no such result.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum RangeError {
    /// The divisor is or may be 0, or the tangent may have a pole.
    DividesByZero,
    /// The function is not defined over the whole range.
    OutOfDomain,
    /// The result is too large for a floating-point number.
    TooLarge,
}

impl Range {
    /// One value, known exactly.
    pub const fn exact(value: f64) -> Range {
        Range {
            low: value,
            nominal: value,
            high: value,
        }
    }

    /// From two bounds and a nominal value between them.
    ///
    /// # Errors
    /// [`RangeError::TooLarge`] if one is not finite.
    pub fn new(low: f64, nominal: f64, high: f64) -> Result<Range, RangeError> {
        if !(low.is_finite() && nominal.is_finite() && high.is_finite()) {
            return Err(RangeError::TooLarge);
        }
        // The nominal value is computed on a way of its own and may round past a bound.
        Ok(Range {
            low: low.min(nominal),
            nominal,
            high: high.max(nominal),
        })
    }

    /// Whether it is one value.
    pub fn is_exact(&self) -> bool {
        self.low == self.high
    }

    /// Whether a value lies in it.
    pub fn contains(&self, value: f64) -> bool {
        self.low <= value && value <= self.high
    }

    /// The same amounts with the other sign.
    #[must_use]
    pub fn neg(&self) -> Range {
        Range {
            low: -self.high,
            nominal: -self.nominal,
            high: -self.low,
        }
    }

    /// The sum.
    ///
    /// # Errors
    /// [`RangeError::TooLarge`].
    pub fn plus(&self, other: &Range) -> Result<Range, RangeError> {
        Range::new(
            self.low + other.low,
            self.nominal + other.nominal,
            self.high + other.high,
        )
    }

    /// The difference of two unrelated sizes.
    ///
    /// # Errors
    /// [`RangeError::TooLarge`].
    pub fn minus(&self, other: &Range) -> Result<Range, RangeError> {
        self.plus(&other.neg())
    }

    /// The product of two unrelated sizes.
    ///
    /// # Errors
    /// [`RangeError::TooLarge`].
    pub fn times(&self, other: &Range) -> Result<Range, RangeError> {
        Range::over_corners(self, other, |a, b| a * b)
    }

    /// The quotient of two unrelated sizes.
    ///
    /// # Errors
    /// [`RangeError::DividesByZero`] if 0 lies in the divisor, [`RangeError::TooLarge`].
    pub fn over(&self, other: &Range) -> Result<Range, RangeError> {
        if other.contains(0.0) {
            return Err(RangeError::DividesByZero);
        }
        Range::over_corners(self, other, |a, b| a / b)
    }

    /// The amounts.
    #[must_use]
    pub fn abs(&self) -> Range {
        self.mapped_even(f64::abs)
    }

    /// The smaller of two sizes.
    #[must_use]
    pub fn min(&self, other: &Range) -> Range {
        Range {
            low: self.low.min(other.low),
            nominal: self.nominal.min(other.nominal),
            high: self.high.min(other.high),
        }
    }

    /// The larger of two sizes.
    #[must_use]
    pub fn max(&self, other: &Range) -> Range {
        Range {
            low: self.low.max(other.low),
            nominal: self.nominal.max(other.nominal),
            high: self.high.max(other.high),
        }
    }

    /// The power with an exact exponent. A negative size has whole powers and those with
    /// an odd denominator, as `(-8)^(1/3) = -2`.
    ///
    /// # Errors
    /// [`RangeError::DividesByZero`] for 0 to a negative power,
    /// [`RangeError::OutOfDomain`] for an even root of a negative size,
    /// [`RangeError::TooLarge`].
    pub fn power(&self, exponent: Exponent) -> Result<Range, RangeError> {
        if exponent.is_zero() {
            return Ok(Range::exact(1.0));
        }
        if exponent.is_negative() {
            return Range::exact(1.0).over(&self.power(exponent.negated())?);
        }
        if exponent.denom() % 2 == 0 && self.low < 0.0 {
            return Err(RangeError::OutOfDomain);
        }
        let amount = |value: f64| positive_power(value.abs(), exponent);
        let power = if exponent.numer() % 2 == 0 {
            self.mapped_even(amount)
        } else {
            self.mapped(|value| amount(value).copysign(value))
        };
        power.checked()
    }

    /// The power with an exponent that is a size itself.
    ///
    /// # Errors
    /// [`RangeError::DividesByZero`] for 0 to a negative power,
    /// [`RangeError::OutOfDomain`] for a negative base, [`RangeError::TooLarge`].
    pub fn power_of_range(&self, exponent: &Range) -> Result<Range, RangeError> {
        if self.low < 0.0 {
            return Err(RangeError::OutOfDomain);
        }
        if self.low == 0.0 && exponent.low < 0.0 {
            return Err(RangeError::DividesByZero);
        }
        // b^e rises or falls with b at every e, and with e at every b.
        Range::over_corners(self, exponent, f64::powf)
    }

    /// A function of two sizes that rises or falls with each of them throughout.
    fn over_corners(
        a: &Range,
        b: &Range,
        function: impl Fn(f64, f64) -> f64,
    ) -> Result<Range, RangeError> {
        let corners = [
            function(a.low, b.low),
            function(a.low, b.high),
            function(a.high, b.low),
            function(a.high, b.high),
        ];
        if corners.iter().any(|corner| !corner.is_finite()) {
            return Err(RangeError::TooLarge);
        }
        Range::new(
            corners.into_iter().fold(f64::INFINITY, f64::min),
            function(a.nominal, b.nominal),
            corners.into_iter().fold(f64::NEG_INFINITY, f64::max),
        )
    }

    /// A function that never falls.
    pub(super) fn mapped(&self, function: impl Fn(f64) -> f64) -> Range {
        Range {
            low: function(self.low),
            nominal: function(self.nominal),
            high: function(self.high),
        }
    }

    /// A function that never rises.
    pub(super) fn mapped_falling(&self, function: impl Fn(f64) -> f64) -> Range {
        let mapped = self.mapped(function);
        Range {
            low: mapped.high,
            high: mapped.low,
            ..mapped
        }
    }

    /// A function that has the same value at `-x` as at `x` and never falls for `x > 0`.
    pub(super) fn mapped_even(&self, function: impl Fn(f64) -> f64) -> Range {
        let (near, far) = if self.contains(0.0) {
            (0.0, self.low.abs().max(self.high))
        } else {
            let ends = (self.low.abs(), self.high.abs());
            (ends.0.min(ends.1), ends.0.max(ends.1))
        };
        Range {
            low: function(near),
            nominal: function(self.nominal.abs()),
            high: function(far),
        }
    }

    /// Itself, if it is finite, with the nominal value between the bounds.
    pub(super) fn checked(self) -> Result<Range, RangeError> {
        Range::new(self.low, self.nominal, self.high)
    }
}

/// `value^exponent` of an amount, on the most exact way there is.
fn positive_power(value: f64, exponent: Exponent) -> f64 {
    match (exponent.numer(), exponent.denom()) {
        (numer, 1) => match i32::try_from(numer) {
            Ok(numer) => value.powi(numer),
            Err(_) => value.powf(exponent.to_f64()),
        },
        (1, 2) => value.sqrt(),
        (1, 3) => value.cbrt(),
        _ => value.powf(exponent.to_f64()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn range(low: f64, nominal: f64, high: f64) -> Range {
        Range::new(low, nominal, high).unwrap()
    }

    #[test]
    fn sums_and_products_take_the_worst_ends() {
        let (a, b) = (range(1.0, 2.0, 3.0), range(-1.0, 1.0, 5.0));
        assert_eq!(a.plus(&b), Ok(range(0.0, 3.0, 8.0)));
        assert_eq!(a.minus(&b), Ok(range(-4.0, 1.0, 4.0)));
        assert_eq!(a.times(&b), Ok(range(-3.0, 2.0, 15.0)));
        assert_eq!(b.over(&a), Ok(range(-1.0, 0.5, 5.0)));
        assert_eq!(a.neg(), range(-3.0, -2.0, -1.0));
        assert_eq!(a.min(&b), range(-1.0, 1.0, 3.0));
        assert_eq!(a.max(&b), range(1.0, 2.0, 5.0));
    }

    #[test]
    fn a_divisor_that_may_be_zero_is_refused() {
        let one = Range::exact(1.0);
        for divisor in [
            range(-1.0, 1.0, 2.0),
            range(0.0, 1.0, 2.0),
            Range::exact(0.0),
        ] {
            assert_eq!(one.over(&divisor), Err(RangeError::DividesByZero));
        }
        let zero = Exponent::ratio(-2, 1);
        assert_eq!(
            range(-1.0, 1.0, 1.0).power(zero),
            Err(RangeError::DividesByZero)
        );
    }

    #[test]
    fn powers_mind_signs_and_evenness() {
        let across = range(-2.0, 1.0, 1.0);
        assert_eq!(
            across.power(Exponent::ratio(2, 1)),
            Ok(range(0.0, 1.0, 4.0))
        );
        assert_eq!(
            across.power(Exponent::ratio(3, 1)),
            Ok(range(-8.0, 1.0, 1.0))
        );
        assert_eq!(
            range(-8.0, -8.0, 27.0).power(Exponent::ratio(1, 3)),
            Ok(range(-2.0, -2.0, 3.0))
        );
        assert_eq!(
            across.power(Exponent::ratio(1, 2)),
            Err(RangeError::OutOfDomain)
        );
        assert_eq!(
            range(2.0, 2.0, 4.0).power(Exponent::ratio(-1, 1)),
            Ok(range(0.25, 0.5, 0.5))
        );
    }

    #[test]
    fn a_power_with_an_uncertain_exponent_looks_at_all_corners() {
        let power = range(0.5, 1.0, 2.0).power_of_range(&range(-1.0, 1.0, 2.0));
        assert_eq!(power, Ok(range(0.25, 1.0, 4.0)));
        assert_eq!(
            range(0.0, 1.0, 2.0).power_of_range(&range(-1.0, 1.0, 2.0)),
            Err(RangeError::DividesByZero)
        );
    }

    #[test]
    fn overflow_is_an_error_and_no_infinity() {
        let huge = Range::exact(1e300);
        assert_eq!(huge.times(&huge), Err(RangeError::TooLarge));
        assert_eq!(huge.power(Exponent::ratio(2, 1)), Err(RangeError::TooLarge));
        assert_eq!(Range::new(f64::NAN, 1.0, 2.0), Err(RangeError::TooLarge));
    }

    #[test]
    fn amounts_of_a_range_across_zero_begin_at_zero() {
        assert_eq!(range(-3.0, -1.0, 2.0).abs(), range(0.0, 1.0, 3.0));
        assert_eq!(range(-3.0, -2.0, -1.0).abs(), range(1.0, 2.0, 3.0));
    }

    /// A range, and a value inside it.
    fn ranges() -> impl Strategy<Value = (Range, f64)> {
        (-9.0..9.0, 0.0..9.0, 0.0..=1.0, 0.0..=1.0).prop_map(|(low, width, nominal, inside)| {
            let range = Range::new(low, low + width * nominal, low + width).unwrap();
            (range, low + width * inside)
        })
    }

    /// Whether a result, if there is one, holds the value at a point, but for rounding.
    fn holds(result: Result<Range, RangeError>, value: f64) -> bool {
        let slack = 1e-12 * value.abs().max(1.0);
        result.is_ok_and(|range| range.low - slack <= value && value <= range.high + slack)
    }

    proptest! {
        #[test]
        fn results_hold_the_values_at_all_points((a, x) in ranges(), (b, y) in ranges()) {
            prop_assert!(holds(a.plus(&b), x + y));
            prop_assert!(holds(a.minus(&b), x - y));
            prop_assert!(holds(a.times(&b), x * y));
            prop_assert!(holds(Ok(a.min(&b)), x.min(y)) && holds(Ok(a.max(&b)), x.max(y)));
            prop_assert!(holds(Ok(a.abs()), x.abs()));
            prop_assert_eq!(holds(a.over(&b), x / y), !b.contains(0.0));
            prop_assert!(holds(a.abs().power_of_range(&b.abs()), x.abs().powf(y.abs())));
        }

        #[test]
        fn powers_hold_the_values_at_all_points((a, x) in ranges(), power in -4_i32..=4) {
            let exponent = Exponent::whole(power.into()).unwrap();
            let is_defined = power >= 0 || !a.contains(0.0);
            prop_assert_eq!(holds(a.power(exponent), x.powi(power)), is_defined);
            prop_assert!(holds(a.power(Exponent::ratio(1, 3)), x.cbrt()));
            prop_assert!(holds(a.power(Exponent::ratio(2, 3)), x.cbrt().powi(2)));
        }
    }
}
