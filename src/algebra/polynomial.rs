//! Polynomials in commuting symbols, exactly, and the null vectors of their matrices.
//!
//! A symbol is told by its place; what it stands for (a derivative, a constant) is the
//! caller's matter. Some symbols may have negative and rational powers (constants, which
//! can be divided by), others may not (derivatives, which cannot).

use std::collections::BTreeMap;

use num_rational::BigRational;
use num_traits::{One, Zero};

use crate::limits;
use crate::number::{Exponent, TooLarge};

/// The powers of all symbols, by their places.
pub type Powers = Vec<Exponent>;

/// A sum of numbers times powers of symbols. No number is 0.
#[derive(Debug, Clone, PartialEq, Eq, Default)]
pub struct Polynomial {
    terms: BTreeMap<Powers, BigRational>,
}

impl Polynomial {
    /// 0.
    pub fn zero() -> Polynomial {
        Polynomial::default()
    }

    /// A number, among `n_symbols` symbols.
    pub fn number(value: BigRational, n_symbols: usize) -> Polynomial {
        Polynomial::monomial(value, vec![Exponent::ZERO; n_symbols])
    }

    /// A number times powers.
    pub fn monomial(number: BigRational, powers: Powers) -> Polynomial {
        let mut found = Polynomial::zero();
        if !number.is_zero() {
            found.terms.insert(powers, number);
        }
        found
    }

    /// Its terms, by their powers.
    pub fn terms(&self) -> impl DoubleEndedIterator<Item = (&Powers, &BigRational)> {
        self.terms.iter()
    }

    /// Whether it is 0.
    pub fn is_zero(&self) -> bool {
        self.terms.is_empty()
    }

    /// The number of its terms.
    fn n_terms(&self) -> usize {
        self.terms.len()
    }

    fn add(&mut self, powers: Powers, number: BigRational) {
        let entry = self.terms.entry(powers).or_default();
        *entry += number;
        if entry.is_zero() {
            self.terms.retain(|_, number| !number.is_zero());
        }
    }

    /// The sum.
    #[must_use]
    pub fn plus(&self, other: &Polynomial) -> Polynomial {
        let mut sum = self.clone();
        for (powers, number) in &other.terms {
            sum.add(powers.clone(), number.clone());
        }
        sum
    }

    /// The same with the other sign.
    #[must_use]
    pub fn negated(&self) -> Polynomial {
        let terms = self.terms.iter();
        Polynomial {
            terms: terms
                .map(|(powers, number)| (powers.clone(), -number))
                .collect(),
        }
    }

    /// The product.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn times(&self, other: &Polynomial) -> Result<Polynomial, TooLarge> {
        let mut product = Polynomial::zero();
        for (a, x) in &self.terms {
            for (b, y) in &other.terms {
                product.add(added(a, b)?, x * y);
            }
            if product.n_terms() > limits::TERMS {
                return Err(TooLarge);
            }
        }
        Ok(product)
    }

    /// The quotient, if the division leaves nothing; symbols that cannot be divided by
    /// keep powers of at least 0 in it.
    fn over(&self, divisor: &Polynomial, is_free: &[bool]) -> Option<Polynomial> {
        let (lead, lead_number) = divisor.terms.last_key_value()?;
        let mut rest = self.clone();
        let mut quotient = Polynomial::zero();
        // Every step takes the last term away; a division that leaves nothing has few.
        for _ in 0..limits::TERMS {
            let Some((powers, number)) = rest.terms.last_key_value() else {
                return Some(quotient);
            };
            let ratio = added(powers, &negative(lead)).ok()?;
            let fits = ratio
                .iter()
                .zip(is_free)
                .all(|(power, is_free)| *is_free || !power.is_negative());
            if !fits {
                return None;
            }
            let step = Polynomial::monomial(number / lead_number, ratio);
            rest = rest.plus(&step.times(divisor).ok()?.negated());
            quotient = quotient.plus(&step);
        }
        None
    }
}

fn added(a: &[Exponent], b: &[Exponent]) -> Result<Powers, TooLarge> {
    a.iter().zip(b).map(|(x, y)| x.plus(*y)).collect()
}

fn negative(powers: &[Exponent]) -> Powers {
    powers.iter().map(|power| power.negated()).collect()
}

/// A row or column of a matrix.
pub type Vector = Vec<Polynomial>;

/// A matrix by rows, all of one length.
#[derive(Debug, Clone)]
pub struct Matrix {
    /// Its rows.
    pub rows: Vec<Vector>,
    /// For each symbol whether it can be divided by.
    pub is_free: Vec<bool>,
}

impl Matrix {
    /// The same with rows and columns changed.
    #[must_use]
    pub fn transposed(&self) -> Matrix {
        let n_columns = self.rows.first().map_or(0, Vec::len);
        let column = |place: usize| self.rows.iter().map(|row| row[place].clone()).collect();
        Matrix {
            rows: (0..n_columns).map(column).collect(),
            is_free: self.is_free.clone(),
        }
    }

    /// Vectors whose products with the matrix, from the left, are 0: independent ones that
    /// span all others, each without a common divisor that is easily seen.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn left_null_vectors(&self) -> Result<Vec<Vector>, TooLarge> {
        let n_rows = self.rows.len();
        let n_columns = self.rows.first().map_or(0, Vec::len);
        let unit = |place: usize| {
            (0..n_rows).map(move |other| match place == other {
                true => Polynomial::number(BigRational::one(), self.is_free.len()),
                false => Polynomial::zero(),
            })
        };
        // Each row carries the combination of rows that it is.
        let mut open: Vec<Vector> = (0..n_rows)
            .map(|place| {
                self.rows[place]
                    .iter()
                    .cloned()
                    .chain(unit(place))
                    .collect()
            })
            .collect();
        let mut divisors: Vec<Polynomial> = Vec::new();
        for column in 0..n_columns {
            let Some(place) = pivot(&open, column) else {
                continue;
            };
            let lead = open.remove(place);
            divisors.push(lead[column].clone());
            for row in &mut open {
                if !row[column].is_zero() {
                    *row = self.without(row, &lead, column)?;
                }
            }
        }
        Ok(open
            .into_iter()
            .map(|mut row| self.plain(row.split_off(n_columns), &divisors))
            .collect())
    }

    /// A row with its entry in a column taken out by another row.
    fn without(
        &self,
        row: &[Polynomial],
        lead: &[Polynomial],
        column: usize,
    ) -> Result<Vector, TooLarge> {
        let (own, other) = (&row[column], &lead[column]);
        // Where one divides the other nothing has to grow.
        let (times, less) = if let Some(ratio) = own.over(other, &self.is_free) {
            (
                Polynomial::number(BigRational::one(), self.is_free.len()),
                ratio,
            )
        } else if let Some(ratio) = other.over(own, &self.is_free) {
            (
                ratio,
                Polynomial::number(BigRational::one(), self.is_free.len()),
            )
        } else {
            (other.clone(), own.clone())
        };
        row.iter()
            .zip(lead)
            .map(|(a, b)| Ok(a.times(&times)?.plus(&b.times(&less)?.negated())))
            .collect()
    }

    /// A vector without what divides all its entries, its leading number positive.
    fn plain(&self, vector: Vector, divisors: &[Polynomial]) -> Vector {
        let mut vector = vector;
        loop {
            let own = vector.iter().filter(|entry| entry.n_terms() > 1);
            let candidates: Vec<Polynomial> = own
                .chain(divisors.iter().filter(|entry| entry.n_terms() > 1))
                .cloned()
                .collect();
            let smaller = candidates
                .iter()
                .find_map(|divisor| self.divided(&vector, divisor));
            match smaller {
                Some(found) => vector = found,
                None => break,
            }
        }
        let content = self.content(&vector);
        self.divided(&vector, &content).unwrap_or(vector)
    }

    fn divided(&self, vector: &[Polynomial], divisor: &Polynomial) -> Option<Vector> {
        let quotients = vector
            .iter()
            .map(|entry| entry.over(divisor, &self.is_free));
        quotients.collect()
    }

    /// The largest product of powers that divides all entries; of the symbols that can be
    /// divided by, and of the number, those of the last term of them all.
    fn content(&self, vector: &[Polynomial]) -> Polynomial {
        let terms = || vector.iter().flat_map(Polynomial::terms);
        let Some((last, number)) = terms().max_by(|a, b| a.0.cmp(b.0)) else {
            return Polynomial::number(BigRational::one(), self.is_free.len());
        };
        let powers = (0..self.is_free.len()).map(|place| match self.is_free[place] {
            true => last[place],
            false => terms()
                .map(|(powers, _)| powers[place])
                .min()
                .unwrap_or(Exponent::ZERO),
        });
        Polynomial::monomial(number.clone(), powers.collect())
    }

    /// The places at which some vector with a product of 0, from the right, has an entry.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn free_columns(&self) -> Result<Vec<usize>, TooLarge> {
        let vectors = self.transposed().left_null_vectors()?;
        let n_columns = self.rows.first().map_or(0, Vec::len);
        let is_free = |place: &usize| vectors.iter().any(|vector| !vector[*place].is_zero());
        Ok((0..n_columns).filter(is_free).collect())
    }
}

/// The row to eliminate a column with: the one with the simplest entry.
fn pivot(rows: &[Vector], column: usize) -> Option<usize> {
    (0..rows.len())
        .filter(|place| !rows[*place][column].is_zero())
        .min_by_key(|place| {
            let entry = &rows[*place][column];
            let degree: Exponent = entry
                .terms()
                .map(|(powers, _)| total(powers))
                .max()
                .unwrap_or(Exponent::ZERO);
            (entry.n_terms(), degree)
        })
}

/// The sum of the amounts of powers; a large one where it grows beyond the limits.
fn total(powers: &[Exponent]) -> Exponent {
    powers.iter().fold(Exponent::ZERO, |sum, power| {
        let amount = match power.is_negative() {
            true => power.negated(),
            false => *power,
        };
        sum.plus(amount).unwrap_or(sum)
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Symbols: X and Y, which cannot be divided by, and f, which can.
    const IS_FREE: [bool; 3] = [false, false, true];

    fn term(number: i64, powers: [i64; 3]) -> Polynomial {
        let powers = powers.map(|power| Exponent::whole(power).unwrap());
        Polynomial::monomial(BigRational::from_integer(number.into()), powers.to_vec())
    }

    fn matrix(rows: Vec<Vector>) -> Matrix {
        Matrix {
            rows,
            is_free: IS_FREE.to_vec(),
        }
    }

    #[test]
    fn geostrophy_leaves_the_curl() {
        // -f v + X p, f u + Y p, X u + Y v over u, v, p.
        let zero = Polynomial::zero();
        let found = matrix(vec![
            vec![zero.clone(), term(-1, [0, 0, 1]), term(1, [1, 0, 0])],
            vec![term(1, [0, 0, 1]), zero.clone(), term(1, [0, 1, 0])],
            vec![term(1, [1, 0, 0]), term(1, [0, 1, 0]), zero],
        ]);
        let vectors = found.left_null_vectors().unwrap();
        assert_eq!(
            vectors,
            [vec![
                term(-1, [0, 1, 0]),
                term(1, [1, 0, 0]),
                term(-1, [0, 0, 1])
            ]]
        );
        assert_eq!(found.free_columns().unwrap(), [0, 1, 2]);
    }

    #[test]
    fn a_matrix_of_full_rank_has_none() {
        let found = matrix(vec![
            vec![term(1, [1, 0, 0]), term(1, [0, 1, 0])],
            vec![term(1, [0, 1, 0]).negated(), term(1, [1, 0, 0])],
        ]);
        assert_eq!(found.left_null_vectors().unwrap(), Vec::<Vector>::new());
        assert_eq!(found.free_columns().unwrap(), Vec::<usize>::new());
    }

    #[test]
    fn common_divisors_go() {
        // (X + Y) u and 2 (X + Y) X u.
        let sum = term(1, [1, 0, 0]).plus(&term(1, [0, 1, 0]));
        let product = sum.times(&term(2, [1, 0, 0])).unwrap();
        let found = matrix(vec![vec![sum], vec![product]]);
        let vectors = found.left_null_vectors().unwrap();
        assert_eq!(
            vectors,
            [vec![
                term(1, [1, 0, 0]),
                Polynomial::number(BigRational::new((-1).into(), 2.into()), 3)
            ]]
        );
    }
}
