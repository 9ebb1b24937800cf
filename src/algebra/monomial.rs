//! Monomials: an exact number times symbols to rational powers.

use std::cmp::Ordering;
use std::sync::Arc;

use crate::number::{Exponent, Number, TooLarge};
use crate::units::Range;

/// A scale or constant of the model, by its place in order of declaration.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct SymbolId(pub u32);

impl SymbolId {
    /// As an index.
    pub fn idx(self) -> usize {
        self.0 as usize
    }
}

/// What a monomial may hold to a power.
#[derive(Debug, Clone)]
pub enum Symbol {
    /// A declared scale or constant.
    Declared(SymbolId),
    /// A function of constants, which counts as a symbol under its text: `tan(phi)`.
    Function(Arc<Function>),
}

/// A function of constants with its value in one setting.
#[derive(Debug, Clone)]
pub struct Function {
    /// Its text, which is its name.
    pub text: String,
    /// Its value; `None` while a constant in it is open.
    pub value: Option<Range>,
    /// Whether it is 0, exactly where that can be told.
    pub is_zero: bool,
    /// The open names in it.
    pub open: Vec<SymbolId>,
    /// The constants that it is a function of.
    pub parts: Vec<SymbolId>,
}

impl PartialEq for Symbol {
    fn eq(&self, other: &Symbol) -> bool {
        self.cmp(other) == Ordering::Equal
    }
}

impl Eq for Symbol {}

impl PartialOrd for Symbol {
    fn partial_cmp(&self, other: &Symbol) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}

impl Ord for Symbol {
    fn cmp(&self, other: &Symbol) -> Ordering {
        match (self, other) {
            (Symbol::Declared(a), Symbol::Declared(b)) => a.cmp(b),
            (Symbol::Function(a), Symbol::Function(b)) => a.text.cmp(&b.text),
            (Symbol::Declared(_), Symbol::Function(_)) => Ordering::Less,
            (Symbol::Function(_), Symbol::Declared(_)) => Ordering::Greater,
        }
    }
}

/// A number times symbols to rational powers. Powers are never 0; symbols stand in
/// order of declaration, functions behind them in order of their text.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Monomial {
    /// The exact factor, with its sign.
    pub number: Number,
    powers: Vec<(Symbol, Exponent)>,
}

impl Monomial {
    /// A pure number.
    pub fn number(number: Number) -> Monomial {
        Monomial {
            number,
            powers: Vec::new(),
        }
    }

    /// The number 1.
    pub fn one() -> Monomial {
        Monomial::number(Number::one())
    }

    /// One symbol.
    pub fn symbol(symbol: Symbol) -> Monomial {
        Monomial {
            number: Number::one(),
            powers: vec![(symbol, Exponent::ONE)],
        }
    }

    /// The symbols with their powers, in order.
    pub fn powers(&self) -> &[(Symbol, Exponent)] {
        &self.powers
    }

    /// The power of a declared symbol; 0 if it does not occur.
    pub fn power_of(&self, id: SymbolId) -> Exponent {
        self.powers
            .iter()
            .find(|(symbol, _)| matches!(symbol, Symbol::Declared(found) if *found == id))
            .map_or(Exponent::ZERO, |(_, power)| *power)
    }

    /// Whether no symbol is left.
    pub fn is_number(&self) -> bool {
        self.powers.is_empty()
    }

    /// The product.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn times(&self, other: &Monomial) -> Result<Monomial, TooLarge> {
        let mut powers = Vec::with_capacity(self.powers.len() + other.powers.len());
        let (mut left, mut right) = (
            self.powers.iter().peekable(),
            other.powers.iter().peekable(),
        );
        loop {
            match (left.peek(), right.peek()) {
                (Some((a, p)), Some((b, q))) => match a.cmp(b) {
                    Ordering::Less => powers.extend(left.next().cloned()),
                    Ordering::Greater => powers.extend(right.next().cloned()),
                    Ordering::Equal => {
                        let sum = p.plus(*q)?;
                        if !sum.is_zero() {
                            powers.push((a.clone(), sum));
                        }
                        left.next();
                        right.next();
                    }
                },
                (Some(_), None) => powers.extend(left.next().cloned()),
                (None, Some(_)) => powers.extend(right.next().cloned()),
                (None, None) => break,
            }
        }
        Ok(Monomial {
            number: self.number.times(&other.number)?,
            powers,
        })
    }

    /// The power. The number must not be 0 where the exponent is negative.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn power(&self, exponent: Exponent) -> Result<Monomial, TooLarge> {
        if exponent.is_zero() {
            return Ok(Monomial::one());
        }
        let powers = self
            .powers
            .iter()
            .map(|(symbol, power)| Ok((symbol.clone(), power.times(exponent)?)))
            .collect::<Result<_, TooLarge>>()?;
        Ok(Monomial {
            number: self.number.power(exponent)?,
            powers,
        })
    }

    /// The quotient. The number of `other` must not be 0.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn over(&self, other: &Monomial) -> Result<Monomial, TooLarge> {
        self.times(&other.power(Exponent::ONE.negated())?)
    }

    /// The same with the number's amount.
    #[must_use]
    pub fn abs(&self) -> Monomial {
        Monomial {
            number: self.number.abs(),
            powers: self.powers.clone(),
        }
    }

    /// The same symbols with the number 1.
    #[must_use]
    pub fn without_number(&self) -> Monomial {
        Monomial {
            number: Number::one(),
            powers: self.powers.clone(),
        }
    }

    /// Replaces symbols by monomials; those for which `replacement` gives none stay.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn replaced<'a>(
        &self,
        replacement: impl Fn(&Symbol) -> Option<&'a Monomial>,
    ) -> Result<Monomial, TooLarge> {
        if self
            .powers
            .iter()
            .all(|(symbol, _)| replacement(symbol).is_none())
        {
            return Ok(self.clone());
        }
        let mut result = Monomial::number(self.number.clone());
        for (symbol, power) in &self.powers {
            let factor = match replacement(symbol) {
                Some(found) => found.power(*power)?,
                None => Monomial {
                    number: Number::one(),
                    powers: vec![(symbol.clone(), *power)],
                },
            };
            result = result.times(&factor)?;
        }
        Ok(result)
    }
}
