//! Sine, cosine and tangent of whole multiples of 30 and 45 degrees, exactly.

use num_rational::BigRational;
use num_traits::ToPrimitive;

use crate::number::{Exponent, Number};

/// A function of an angle that has exact values.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Trig {
    /// The sine.
    Sin,
    /// The cosine.
    Cos,
    /// The tangent.
    Tan,
}

/// What such a function is at an angle.
#[derive(Debug, Clone, PartialEq)]
pub enum ExactTrig {
    /// This number.
    Exact(Number),
    /// Infinite: the tangent of 90 deg.
    Infinite,
    /// No multiple of 30 or 45 deg: nothing simple.
    NotExact,
}

/// Twelfths of π in a whole turn.
const TURN: i64 = 24;

/// The exact value at an angle in rad.
pub fn exact_trig(function: Trig, angle: &Number) -> ExactTrig {
    let Some(twelfths) = twelfths_of_pi(angle) else {
        return ExactTrig::NotExact;
    };
    let quarter = TURN / 4;
    match function {
        Trig::Sin => ExactTrig::Exact(sine(twelfths)),
        Trig::Cos => ExactTrig::Exact(sine(twelfths + quarter)),
        Trig::Tan => match sine(twelfths).over(&sine(twelfths + quarter)) {
            Ok(Some(tangent)) => ExactTrig::Exact(tangent),
            Ok(None) => ExactTrig::Infinite,
            Err(_) => ExactTrig::NotExact,
        },
    }
}

/// The angle in twelfths of π within a turn, if it is a multiple of 30 or 45 deg.
fn twelfths_of_pi(angle: &Number) -> Option<i64> {
    let turns = angle.over(&Number::pi()).ok()??;
    let twelfths = turns.as_rational()? * BigRational::from_integer(12.into());
    if !twelfths.is_integer() {
        return None;
    }
    let twelfths = (twelfths.to_integer() % TURN).to_i64()?;
    (twelfths % 2 == 0 || twelfths % 3 == 0).then_some(twelfths)
}

/// The sine of a multiple of 30 or 45 deg, given in twelfths of π.
fn sine(twelfths: i64) -> Number {
    let within = twelfths.rem_euclid(TURN);
    let half = TURN / 2;
    // The second half turn is the first below the axis, and a half turn is symmetric.
    let is_below = within > half;
    let within = within % half;
    let amount = match within.min(half - within) {
        0 => Number::whole(0),
        2 => root_of_quarters(1),
        3 => root_of_quarters(2),
        4 => root_of_quarters(3),
        _ => Number::one(),
    };
    if is_below { amount.negated() } else { amount }
}

/// The square root of so many quarters.
fn root_of_quarters(count: i64) -> Number {
    Number::rational(BigRational::new(count.into(), 4.into()))
        .power(Exponent::ratio(1, 2))
        .expect("the root of so small a number is within the limits")
}

#[cfg(test)]
mod tests {
    use super::*;

    fn degrees(value: i64) -> Number {
        let turn = BigRational::new(value.into(), 180.into());
        Number::pi().times(&Number::rational(turn)).unwrap()
    }

    fn root(value: i64) -> Number {
        Number::whole(value).power(Exponent::ratio(1, 2)).unwrap()
    }

    #[test]
    fn the_angles_of_the_schoolbook_are_exact() {
        let exact = |number: Number| ExactTrig::Exact(number);
        let half_power = Number::whole(2).power(Exponent::ratio(-1, 2)).unwrap();
        assert_eq!(exact_trig(Trig::Sin, &degrees(45)), exact(half_power));
        assert_eq!(exact_trig(Trig::Tan, &degrees(60)), exact(root(3)));
        assert_eq!(exact_trig(Trig::Cos, &degrees(90)), exact(Number::whole(0)));
        assert_eq!(
            exact_trig(Trig::Sin, &degrees(-90)),
            exact(Number::whole(-1))
        );
        assert_eq!(exact_trig(Trig::Tan, &degrees(90)), ExactTrig::Infinite);
        assert_eq!(exact_trig(Trig::Tan, &degrees(-270)), ExactTrig::Infinite);
        assert_eq!(
            exact_trig(Trig::Sin, &Number::whole(0)),
            exact(Number::whole(0))
        );
    }

    #[test]
    fn other_angles_are_left_to_floating_point() {
        for angle in [degrees(15), degrees(20), Number::one(), root(2)] {
            assert_eq!(exact_trig(Trig::Sin, &angle), ExactTrig::NotExact);
        }
    }

    #[test]
    fn exact_values_agree_with_floating_point_over_three_turns() {
        let mut n_exact = 0;
        for angle in (-540..=540).step_by(15) {
            let radians = f64::from(angle).to_radians();
            for (function, expected) in [
                (Trig::Sin, radians.sin()),
                (Trig::Cos, radians.cos()),
                (Trig::Tan, radians.tan()),
            ] {
                match exact_trig(function, &degrees(angle.into())) {
                    ExactTrig::Exact(number) => {
                        assert!((number.to_f64() - expected).abs() < 1e-13, "{angle}");
                        n_exact += 1;
                    }
                    ExactTrig::Infinite => assert!(expected.abs() > 1e10, "{angle}"),
                    ExactTrig::NotExact => assert!(angle % 30 != 0 && angle % 45 != 0),
                }
            }
        }
        assert_eq!(n_exact, 49 * 2 + 43);
    }
}
