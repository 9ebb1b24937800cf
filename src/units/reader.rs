//! Reads the text of a unit, `kg/(m.s^2)`, into its factors; what they mean is left to
//! `parse`.
//!
//! ```text
//! unit     = product [ "/" factor ] | "1" [ "/" factor ]
//! product  = factor { ( "." | "·" ) factor }
//! factor   = ( symbol | "(" product ")" ) [ exponent ]
//! exponent = "^" ( whole | "(" whole [ "/" digits ] ")" ) | superscript
//! ```
//!
//! Reading goes on after a solidus too many, so that the error can offer what was meant.

use std::ops::Range;

use num_rational::BigRational;

use super::error::{Expected, UnitError};
use crate::limits;
use crate::number::{Exponent, TooLarge};

/// A unit as its text has it.
pub(super) struct Spelling<'t> {
    /// Its symbols in order.
    pub(super) factors: Vec<Factor<'t>>,
    /// How it divides.
    pub(super) solidus: Solidus,
}

/// Reads a unit.
pub(super) fn read(text: &str) -> Result<Spelling<'_>, UnitError> {
    if text.len() > limits::UNIT_BYTES {
        return Err(UnitError::TooLarge {
            range: 0..text.len(),
        });
    }
    let mut reader = Reader::new(text);
    reader.read_unit()?;
    Ok(Spelling {
        factors: reader.factors,
        solidus: reader.solidus,
    })
}

/// A symbol to its power, as written but for brackets.
pub(super) struct Factor<'t> {
    pub(super) symbol: &'t str,
    start: usize,
    /// Without the sign that a solidus gives.
    pub(super) exponent: Exponent,
    /// Whether it stands below the line.
    pub(super) is_below: bool,
}

impl Factor<'_> {
    /// Where the symbol stands.
    pub(super) fn range(&self) -> Range<usize> {
        self.start..self.start + self.symbol.len()
    }

    /// With that sign.
    pub(super) fn signed_exponent(&self) -> Exponent {
        if self.is_below {
            self.exponent.negated()
        } else {
            self.exponent
        }
    }
}

/// How solidi were used.
pub(super) enum Solidus {
    /// Not at all, or once and in front of one factor.
    Alone,
    /// A second time, here.
    Again(Range<usize>),
    /// In front of a product without brackets, whose first sign stands here.
    BeforeProduct(Range<usize>),
    /// Inside a bracket, here.
    InBrackets(Range<usize>),
}

struct Reader<'t> {
    text: &'t str,
    at: usize,
    depth: usize,
    is_below: bool,
    factors: Vec<Factor<'t>>,
    solidus: Solidus,
}

impl<'t> Reader<'t> {
    fn new(text: &'t str) -> Reader<'t> {
        Reader {
            text,
            at: 0,
            depth: 0,
            is_below: false,
            factors: Vec::new(),
            solidus: Solidus::Alone,
        }
    }

    fn peek(&self) -> Option<char> {
        self.text[self.at..].chars().next()
    }

    /// Takes this character if it is the next one.
    fn take(&mut self, wanted: char) -> bool {
        let taken = self.peek() == Some(wanted);
        if taken {
            self.at += wanted.len_utf8();
        }
        taken
    }

    /// Takes characters as long as they fit.
    fn take_while(&mut self, fits: impl Fn(char) -> bool) -> &'t str {
        let rest = &self.text[self.at..];
        let length = rest.find(|c| !fits(c)).unwrap_or(rest.len());
        self.at += length;
        &rest[..length]
    }

    fn unexpected(&self, expected: Expected) -> UnitError {
        let length = self.peek().map_or(0, char::len_utf8);
        UnitError::Malformed {
            range: self.at..self.at + length,
            expected,
        }
    }

    fn read_unit(&mut self) -> Result<(), UnitError> {
        if !self.take('1') {
            self.read_factor()?;
        }
        while self.at < self.text.len() {
            let sign = self.at;
            if self.take('/') {
                self.meet_solidus(sign);
            } else if !self.factors.is_empty() && self.take_product_sign() {
                self.meet_product_sign(sign);
            } else {
                return Err(self.unexpected(Expected::SignOrEnd));
            }
            self.read_factor()?;
        }
        Ok(())
    }

    fn take_product_sign(&mut self) -> bool {
        self.take('.') || self.take('·')
    }

    fn meet_solidus(&mut self, sign: usize) {
        if self.is_below {
            self.fault(Solidus::Again(sign..self.at));
        }
        self.is_below = true;
    }

    fn meet_product_sign(&mut self, sign: usize) {
        if self.is_below {
            self.fault(Solidus::BeforeProduct(sign..self.at));
        }
    }

    /// Keeps the first fault, but for a product that a second solidus follows.
    fn fault(&mut self, found: Solidus) {
        let is_worse = match self.solidus {
            Solidus::Alone => true,
            Solidus::BeforeProduct(_) => !matches!(found, Solidus::BeforeProduct(_)),
            Solidus::Again(_) | Solidus::InBrackets(_) => false,
        };
        if is_worse {
            self.solidus = found;
        }
    }

    /// A symbol or a bracket, with its exponent.
    fn read_factor(&mut self) -> Result<(), UnitError> {
        let first = self.factors.len();
        if self.take('(') {
            self.read_bracket()?;
        } else {
            self.read_symbol()?;
        }
        let start = self.at;
        let exponent = self.read_exponent()?;
        if exponent == Exponent::ONE {
            return Ok(());
        }
        for factor in &mut self.factors[first..] {
            let product = factor.exponent.times(exponent);
            factor.exponent = product.map_err(|TooLarge| UnitError::TooLarge {
                range: start..self.at,
            })?;
        }
        Ok(())
    }

    /// A product, up to and with its closing bracket.
    fn read_bracket(&mut self) -> Result<(), UnitError> {
        self.depth += 1;
        if self.depth > limits::NESTING {
            return Err(UnitError::TooLarge {
                range: 0..self.text.len(),
            });
        }
        let outside = self.is_below;
        self.read_factor()?;
        while !self.take(')') {
            let sign = self.at;
            if self.take('/') {
                self.fault(Solidus::InBrackets(sign..self.at));
                self.is_below = !outside;
            } else if !self.take_product_sign() {
                return Err(self.unexpected(Expected::ClosingBracket));
            }
            self.read_factor()?;
        }
        self.is_below = outside;
        self.depth -= 1;
        Ok(())
    }

    fn read_symbol(&mut self) -> Result<(), UnitError> {
        let start = self.at;
        if !self.peek().is_some_and(starts_symbol) {
            return Err(self.unexpected(Expected::Symbol));
        }
        let symbol = self.take_while(|c| starts_symbol(c) || c == '_' || c.is_ascii_digit());
        self.factors.push(Factor {
            symbol,
            start,
            exponent: Exponent::ONE,
            is_below: self.is_below,
        });
        Ok(())
    }

    fn read_exponent(&mut self) -> Result<Exponent, UnitError> {
        let start = self.at;
        if !self.take('^') {
            return self.read_superscript();
        }
        let (numer, denom) = if self.take('(') {
            let numer = self.read_whole()?;
            let denom = if self.take('/') {
                self.read_digits()?
            } else {
                "1"
            };
            if !self.take(')') {
                return Err(self.unexpected(Expected::ClosingBracket));
            }
            (numer, denom)
        } else {
            (self.read_whole()?, "1")
        };
        self.exponent(start, numer, denom)
    }

    /// Digits with a sign or without.
    fn read_whole(&mut self) -> Result<&'t str, UnitError> {
        let start = self.at;
        if !self.take('-') {
            self.take('+');
        }
        self.read_digits()?;
        Ok(&self.text[start..self.at])
    }

    fn read_digits(&mut self) -> Result<&'t str, UnitError> {
        let digits = self.take_while(|c| c.is_ascii_digit());
        if digits.is_empty() {
            return Err(self.unexpected(Expected::WholeNumber));
        }
        Ok(digits)
    }

    /// The superscript behind a factor; 1 if there is none.
    fn read_superscript(&mut self) -> Result<Exponent, UnitError> {
        let start = self.at;
        let raised = self.take_while(|c| plain_digit(c).is_some());
        if raised.is_empty() {
            return Ok(Exponent::ONE);
        }
        let plain: String = raised.chars().filter_map(plain_digit).collect();
        if plain.ends_with('-') || plain.rfind('-').is_some_and(|at| at > 0) {
            return Err(UnitError::Malformed {
                range: start..self.at,
                expected: Expected::WholeNumber,
            });
        }
        self.exponent(start, &plain, "1")
    }

    /// The exponent spelt by digits that stand from `start` to here.
    fn exponent(&self, start: usize, numer: &str, denom: &str) -> Result<Exponent, UnitError> {
        let range = start..self.at;
        let too_large = UnitError::TooLarge {
            range: range.clone(),
        };
        let (Ok(numer), Ok(denom)) = (numer.parse::<i64>(), denom.parse::<i64>()) else {
            return Err(too_large);
        };
        if denom == 0 {
            return Err(UnitError::Malformed {
                range,
                expected: Expected::DenominatorNotZero,
            });
        }
        let value = BigRational::new(numer.into(), denom.into());
        Exponent::from_rational(&value).map_err(|TooLarge| too_large)
    }
}

fn starts_symbol(c: char) -> bool {
    c.is_alphabetic() || matches!(c, '%' | '‰' | '°')
}

/// The plain form of a superscript digit or sign.
fn plain_digit(c: char) -> Option<char> {
    Some(match c {
        '⁻' => '-',
        '⁰' => '0',
        '¹' => '1',
        '²' => '2',
        '³' => '3',
        '⁴' => '4',
        '⁵' => '5',
        '⁶' => '6',
        '⁷' => '7',
        '⁸' => '8',
        '⁹' => '9',
        _ => return None,
    })
}
