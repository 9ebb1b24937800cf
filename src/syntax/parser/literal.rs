//! Literals: numbers, units, shares.

use chumsky::prelude::*;
use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, Zero, pow};

use crate::limits;
use crate::syntax::ast::{Number, Proportion, UnitText};
use crate::syntax::parser::rule::{Fault, FaultKind, Rule, span_of, token};
use crate::syntax::token::{Kind, Token};

/// `10 m/s`, `10^-4`, `0.5 %`.
pub(super) fn number<'t, 's: 't>() -> impl Rule<'t, 's, Number> {
    bare_number()
        .then(unit().or_not())
        .map(|(number, unit)| Number { unit, ..number })
}

/// A number that no unit stands behind.
pub(super) fn bare_number<'t, 's: 't>() -> impl Rule<'t, 's, Number> {
    token(Kind::Number).validate(|token, extra, emitter| {
        let value = value(token.text).unwrap_or_else(|| {
            emitter.emit(Fault::over(extra.span(), FaultKind::TooLarge));
            BigRational::one()
        });
        Number {
            value,
            text: token.text.to_owned(),
            unit: None,
        }
    })
}

/// A unit.
pub(super) fn unit<'t, 's: 't>() -> impl Rule<'t, 's, UnitText> {
    token(Kind::Unit).map(|token| UnitText {
        text: token.text.to_owned(),
        span: token.span,
    })
}

/// `2`, `20 %`.
pub(super) fn proportion<'t, 's: 't>() -> impl Rule<'t, 's, Proportion> {
    number().map_with(|number, extra| Proportion {
        number,
        span: span_of(extra),
    })
}

/// A positive whole number without a unit, as the order of a derivative; a larger one
/// than fits is [`FaultKind::TooLarge`].
pub(super) fn order<'t, 's: 't>() -> impl Rule<'t, 's, u32> {
    token(Kind::Caret)
        .ignore_then(token(Kind::Number))
        .filter(|token| token.text.bytes().all(|byte| byte.is_ascii_digit()))
        .validate(|token, extra, emitter| {
            token.text.parse().unwrap_or_else(|_| {
                emitter.emit(Fault::over(extra.span(), FaultKind::TooLarge));
                1
            })
        })
}

/// Superscripts as a whole number in ASCII: `-2` for `⁻²`.
pub(super) fn plain_digits(superscript: &str) -> String {
    superscript
        .chars()
        .map(|c| match c {
            '\u{207B}' => '-',
            '\u{B9}' => '1',
            '\u{B2}' => '2',
            '\u{B3}' => '3',
            c => char::from_digit((c as u32).wrapping_sub(0x2070), 10).unwrap_or(c),
        })
        .collect()
}

/// A superscript without sign, as an order; a larger one than fits is
/// [`FaultKind::TooLarge`].
pub(super) fn superscript_order<'t, 's: 't>() -> impl Rule<'t, 's, u32> {
    token(Kind::Superscript)
        .filter(|token: &&Token<'_>| !token.text.starts_with('\u{207B}'))
        .validate(|token, extra, emitter| {
            plain_digits(token.text).parse().unwrap_or_else(|_| {
                emitter.emit(Fault::over(extra.span(), FaultKind::TooLarge));
                1
            })
        })
}

/// The exact value of a number as written; `None` beyond the limits.
fn value(text: &str) -> Option<BigRational> {
    if let Some(exponent) = text.strip_prefix("10^") {
        return scaled(BigInt::one(), exponent.parse().ok()?);
    }
    if !text.is_ascii() {
        return scaled(
            BigInt::one(),
            plain_digits(text.strip_prefix("10")?).parse().ok()?,
        );
    }
    let (mantissa, exponent) = text.split_once(['e', 'E']).unwrap_or((text, "0"));
    let (whole, decimals) = mantissa.split_once('.').unwrap_or((mantissa, ""));
    let digits = format!("{whole}{decimals}");
    let digits = digits.trim_start_matches('0');
    if digits.is_empty() {
        return Some(BigRational::zero());
    }
    if digits.len() as u64 > limits::NUMBER_BITS / 4 {
        return None;
    }
    let exponent: i64 = exponent.parse().ok()?;
    scaled(
        digits.parse().ok()?,
        exponent.checked_sub(decimals.len() as i64)?,
    )
}

/// `mantissa * 10^exponent`; `None` beyond the limits, and then nothing is computed.
fn scaled(mantissa: BigInt, exponent: i64) -> Option<BigRational> {
    // A factor 10 has more than 3 bits, so this is not below the number of digits.
    let digits = (mantissa.bits() / 3 + 1) as i64;
    if exponent.checked_add(digits)? < -limits::LITERAL_DECADES
        || exponent.checked_add(mantissa.bits() as i64 * 3 / 10)? > limits::LITERAL_DECADES
    {
        return None;
    }
    let power = pow(BigInt::from(10), exponent.unsigned_abs() as usize);
    Some(if exponent < 0 {
        BigRational::new(mantissa, power)
    } else {
        BigRational::from_integer(mantissa * power)
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn ratio(numer: i64, denom: i64) -> BigRational {
        BigRational::new(numer.into(), denom.into())
    }

    #[test]
    fn literals_are_exact() {
        for (text, numer, denom) in [
            ("10", 10, 1),
            ("0.1", 1, 10),
            ("1.50e3", 1500, 1),
            ("2E-3", 1, 500),
            ("10^-4", 1, 10_000),
            ("10^+2", 100, 1),
            ("10\u{207B}\u{2074}", 1, 10_000),
            ("10\u{B2}", 100, 1),
            ("0.000", 0, 1),
            ("0e999999999999999999999", 0, 1),
        ] {
            assert_eq!(value(text), Some(ratio(numer, denom)), "{text}");
        }
    }

    #[test]
    fn literals_beyond_the_limits_are_refused_at_once() {
        for text in [
            "10^1000000",
            "1e-1000000",
            "1e99999999999999999999",
            "1e302",
            "10^-302",
            &"9".repeat(400_000),
            &format!("0.{}1", "0".repeat(400_000)),
        ] {
            assert_eq!(value(text), None, "{}", &text[..10.min(text.len())]);
        }
        assert!(value("1e300").is_some() && value("1e-300").is_some());
        assert!(value(&format!("0.{}", "3".repeat(50))).is_some());
    }
}
