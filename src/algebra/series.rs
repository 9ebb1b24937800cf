//! Expansions in small ratios: sums of products that carry their order in the ratios,
//! their products and powers up to an order, and Taylor coefficients of the functions of
//! the language. All coefficients are exact.
//!
//! What is small, and about what is expanded, is told by the caller.

use std::collections::BTreeMap;
use std::sync::Arc;

use num_rational::BigRational;
use num_traits::{One, Zero};

use crate::algebra::monomial::{self, Symbol};
use crate::algebra::product::{Applied, Base, Factor, Factors, Product};
use crate::limits;
use crate::number::{Exponent, Number, TooLarge};
use crate::units::{Function, Range, RangeError};

/// A product with its order in the small ratios.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Graded {
    /// The product.
    pub product: Product,
    /// Its order.
    pub degree: u32,
}

impl Graded {
    /// A product of order 0.
    pub fn plain(product: Product) -> Graded {
        Graded { product, degree: 0 }
    }
}

/// A sum of such products.
pub type Series = Vec<Graded>;

/// The product of two series up to an order, like terms collected.
///
/// # Errors
/// [`TooLarge`] beyond the limits.
pub fn times(left: &[Graded], right: &[Graded], highest: u32) -> Result<Series, TooLarge> {
    let mut product = Vec::new();
    for a in left {
        for b in right {
            let degree = a.degree.saturating_add(b.degree);
            if degree <= highest {
                product.push(Graded {
                    product: a.product.times(&b.product)?,
                    degree,
                });
            }
        }
        if product.len() > limits::TERMS {
            return Err(TooLarge);
        }
    }
    Ok(collected(product))
}

/// Collects like terms of one order; what cancels goes. Numbers that have no common form
/// stay apart.
pub fn collected(series: Series) -> Series {
    let mut places: BTreeMap<(u32, Factors), Vec<usize>> = BTreeMap::new();
    let mut sum: Series = Vec::with_capacity(series.len());
    for term in series {
        let key = (term.degree, term.product.likeness());
        let rivals = places.entry(key).or_default();
        let like = rivals.iter().find_map(|idx| {
            let number = sum[*idx].product.number.plus(&term.product.number)?;
            Some((*idx, number))
        });
        match like {
            Some((idx, number)) => {
                sum[idx].product.number = number;
            }
            None => {
                rivals.push(sum.len());
                sum.push(term);
            }
        }
    }
    sum.retain(|term| !term.product.number.is_zero());
    sum
}

/// `(leading + small)^exponent` by the binomial series up to an order; each term of
/// `small` has an order of at least 1.
///
/// # Errors
/// [`TooLarge`] beyond the limits.
pub fn power(
    leading: &Product,
    small: &[Graded],
    exponent: Exponent,
    highest: u32,
) -> Result<Series, TooLarge> {
    let inverse = leading.power(Exponent::ONE.negated())?;
    let ratios: Series = small
        .iter()
        .map(|term| {
            Ok(Graded {
                product: term.product.times(&inverse)?,
                degree: term.degree,
            })
        })
        .collect::<Result<_, TooLarge>>()?;
    let coefficients: Vec<Series> = binomials(exponent, highest)
        .into_iter()
        .map(|number| vec![Graded::plain(Product::number(Number::rational(number)))])
        .collect();
    let sum = composed(&coefficients, &ratios, highest)?;
    times(&[Graded::plain(leading.power(exponent)?)], &sum, highest)
}

/// `sum of coefficients[k] * small^k` up to an order.
///
/// # Errors
/// [`TooLarge`] beyond the limits.
pub fn composed(
    coefficients: &[Series],
    small: &[Graded],
    highest: u32,
) -> Result<Series, TooLarge> {
    let mut sum = Vec::new();
    let mut power = vec![Graded::plain(Product::number(Number::one()))];
    for (k, coefficient) in coefficients.iter().enumerate() {
        if k > 0 {
            power = times(&power, small, highest)?;
        }
        sum.extend(times(coefficient, &power, highest)?);
        if power.is_empty() || sum.len() > limits::TERMS {
            break;
        }
    }
    if sum.len() > limits::TERMS {
        return Err(TooLarge);
    }
    Ok(collected(sum))
}

/// The binomial coefficients of an exponent from 0 on, up to an order or the last that is
/// not 0.
pub fn binomials(exponent: Exponent, highest: u32) -> Vec<BigRational> {
    let exponent = exponent.to_rational();
    let mut found = vec![BigRational::one()];
    for k in 1..=highest {
        let whole = |k: u32| BigRational::from_integer(k.into());
        let next = &found[found.len() - 1] * (&exponent - whole(k - 1)) / whole(k);
        if next.is_zero() {
            break;
        }
        found.push(next);
    }
    found
}

// Functions ---------------------------------------------------------------------------------

/// The functions whose derivatives of any order are products of powers of one another.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Elementary {
    /// A function of the language; `sqrt` and `abs` are powers and amounts instead.
    Named(Function),
    /// `sqrt(1 - q^2)`, in the derivatives of `asin` and `acos`.
    Root,
    /// `1 + q^2`, in the derivatives of `atan`.
    OnePlusSquare,
}

impl Elementary {
    /// Its text with an argument.
    pub fn text(self, argument: &str) -> String {
        let square = || {
            let is_name = argument
                .chars()
                .all(|c| c.is_alphanumeric() || c == '_' || c == '\'');
            if is_name {
                format!("{argument}^2")
            } else {
                format!("({argument})^2")
            }
        };
        match self {
            Elementary::Named(function) => format!("{}({argument})", function.name()),
            Elementary::Root => format!("sqrt(1 - {})", square()),
            Elementary::OnePlusSquare => format!("(1 + {})", square()),
        }
    }

    /// Its values over a range.
    ///
    /// # Errors
    /// Where it is not defined over the whole range, or too large.
    pub fn over(self, argument: &Range) -> Result<Range, RangeError> {
        let square = || argument.power(Exponent::ratio(2, 1));
        match self {
            Elementary::Named(function) => function.over(argument),
            Elementary::Root => Range::exact(1.0)
                .plus(&square()?.neg())?
                .power(Exponent::ratio(1, 2)),
            Elementary::OnePlusSquare => Range::exact(1.0).plus(&square()?),
        }
    }

    /// Whether its argument is an angle.
    pub fn is_of_angle(self) -> bool {
        matches!(
            self,
            Elementary::Named(Function::Sin | Function::Cos | Function::Tan)
        )
    }

    /// Its derivative.
    fn derivative(self) -> Vec<Term> {
        use Elementary::Named;
        let named = |function| Atom::Value(Named(function));
        let root = Atom::Value(Elementary::Root);
        let square = Atom::Value(Elementary::OnePlusSquare);
        let own = Atom::Value(self);
        match self {
            Named(Function::Exp) => vec![term(1, &[(own, 1)])],
            Named(Function::Log) => vec![term(1, &[(Atom::Argument, -1)])],
            Named(Function::Log10) => {
                vec![term(1, &[(Atom::Argument, -1), (Atom::LogOfTen, -1)])]
            }
            Named(Function::Sin) => vec![term(1, &[(named(Function::Cos), 1)])],
            Named(Function::Cos) => vec![term(-1, &[(named(Function::Sin), 1)])],
            Named(Function::Tan) => vec![term(1, &[]), term(1, &[(own, 2)])],
            Named(Function::Asin) => vec![term(1, &[(root, -1)])],
            Named(Function::Acos) => vec![term(-1, &[(root, -1)])],
            Named(Function::Atan) => vec![term(1, &[(square, -1)])],
            Named(Function::Sinh) => vec![term(1, &[(named(Function::Cosh), 1)])],
            Named(Function::Cosh) => vec![term(1, &[(named(Function::Sinh), 1)])],
            Named(Function::Tanh) => vec![term(1, &[]), term(-1, &[(own, 2)])],
            Elementary::Root => vec![term(-1, &[(Atom::Argument, 1), (own, -1)])],
            Elementary::OnePlusSquare => vec![term(2, &[(Atom::Argument, 1)])],
            // The caller makes these a power and an amount.
            Named(Function::Sqrt | Function::Abs) => Vec::new(),
        }
    }
}

/// What derivatives of functions consist of.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Atom {
    /// The argument.
    Argument,
    /// A function of the argument.
    Value(Elementary),
    /// The natural logarithm of 10.
    LogOfTen,
}

/// A number times atoms to powers.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Term {
    /// The number.
    pub number: BigRational,
    /// The atoms with their powers.
    pub powers: BTreeMap<Atom, Exponent>,
}

fn term(number: i64, powers: &[(Atom, i64)]) -> Term {
    Term {
        number: BigRational::from_integer(number.into()),
        powers: powers
            .iter()
            .map(|(atom, power)| (*atom, Exponent::ratio(*power, 1)))
            .collect(),
    }
}

/// The Taylor coefficients of `function^exponent` from 0 up to an order: derivatives over
/// factorials.
///
/// # Errors
/// [`TooLarge`] beyond the limits.
pub fn taylor(
    function: Elementary,
    exponent: Exponent,
    highest: u32,
) -> Result<Vec<Vec<Term>>, TooLarge> {
    let start = Term {
        number: BigRational::one(),
        powers: BTreeMap::from([(Atom::Value(function), exponent)]),
    };
    let mut coefficients = vec![vec![start]];
    for k in 1..=highest {
        let mut next = Vec::new();
        for term in &coefficients[coefficients.len() - 1] {
            differentiate(&mut next, term)?;
        }
        next.iter_mut()
            .for_each(|term| term.number /= BigRational::from_integer(k.into()));
        next.retain(|term| !term.number.is_zero());
        coefficients.push(next);
    }
    Ok(coefficients)
}

/// Adds the derivative of a term to a sum.
fn differentiate(sum: &mut Vec<Term>, term: &Term) -> Result<(), TooLarge> {
    for (atom, power) in &term.powers {
        let inner = match atom {
            Atom::Argument => vec![self::term(1, &[])],
            Atom::Value(function) => function.derivative(),
            Atom::LogOfTen => continue,
        };
        for inner in inner {
            let mut powers = term.powers.clone();
            let lowered = [(*atom, Exponent::ONE.negated())];
            for (atom, power) in lowered.into_iter().chain(inner.powers) {
                let total = powers.get(&atom).copied().unwrap_or(Exponent::ZERO);
                let total = total.plus(power)?;
                if total.is_zero() {
                    powers.remove(&atom);
                } else {
                    powers.insert(atom, total);
                }
            }
            let number = &term.number * power.to_rational() * inner.number;
            match sum.iter_mut().find(|found| found.powers == powers) {
                Some(found) => found.number += number,
                None => sum.push(Term { number, powers }),
            }
        }
    }
    Ok(())
}

impl Applied {
    /// The derivative with respect to the argument, as a sum.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn derivative(&self) -> Result<Vec<Product>, TooLarge> {
        let value = |function| {
            Product::base(Base::Function(Box::new(Applied {
                function,
                argument: self.argument.clone(),
            })))
        };
        let found = self.function.derivative();
        found
            .iter()
            .map(|term| evaluated(term, &self.argument, value))
            .collect()
    }
}

/// A term with its atoms put in.
///
/// # Errors
/// [`TooLarge`] beyond the limits.
pub fn evaluated(
    term: &Term,
    argument: &Product,
    value: impl Fn(Elementary) -> Product,
) -> Result<Product, TooLarge> {
    let mut product = Product::number(Number::rational(term.number.clone()));
    for (atom, power) in &term.powers {
        let base = match atom {
            Atom::Argument => argument.clone(),
            Atom::Value(function) => value(*function),
            Atom::LogOfTen => log_of_ten(),
        };
        product = product.times(&base.power(*power)?)?;
    }
    Ok(product)
}

/// The natural logarithm of 10, which is a symbol of its own.
pub fn log_of_ten() -> Product {
    let function = monomial::Function {
        text: "log(10)".to_owned(),
        value: Some(Range::exact(std::f64::consts::LN_10)),
        is_zero: false,
        open: Vec::new(),
        parts: Vec::new(),
    };
    Product {
        number: Number::one(),
        factors: vec![Factor {
            base: Base::Symbol(Symbol::Function(Arc::new(function))),
            power: Exponent::ONE,
        }],
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::algebra::monomial::SymbolId;

    fn symbol(idx: u32) -> Product {
        Product::base(Base::Symbol(Symbol::Declared(SymbolId(idx))))
    }

    fn numbers(series: &[Graded]) -> Vec<(u32, String)> {
        series
            .iter()
            .map(|term| (term.degree, term.product.number.to_string()))
            .collect()
    }

    #[test]
    fn an_inverse_has_alternating_signs() {
        let small = vec![Graded {
            product: symbol(1),
            degree: 1,
        }];
        let series = power(&symbol(0), &small, Exponent::ONE.negated(), 3).unwrap();
        let expected: Vec<(u32, String)> = [(0, "1"), (1, "-1"), (2, "1"), (3, "-1")]
            .map(|(degree, number)| (degree, number.to_owned()))
            .into();
        assert_eq!(numbers(&series), expected);
        assert_eq!(
            series[2].product,
            symbol(0)
                .power(Exponent::whole(-3).unwrap())
                .unwrap()
                .times(&symbol(1).power(Exponent::whole(2).unwrap()).unwrap())
                .unwrap()
        );
    }

    #[test]
    fn what_times_its_inverse_is_one_where_all_of_it_counts() {
        let small = vec![
            Graded {
                product: symbol(1),
                degree: 1,
            },
            Graded {
                product: symbol(2),
                degree: 1,
            },
        ];
        let inverse = power(&symbol(0), &small, Exponent::ONE.negated(), 4).unwrap();
        let mut whole = vec![Graded::plain(symbol(0))];
        whole.extend(small);
        let product = times(&whole, &inverse, 4).unwrap();
        assert_eq!(numbers(&product), [(0, "1".to_owned())]);
    }

    #[test]
    fn whole_powers_end() {
        assert_eq!(binomials(Exponent::whole(2).unwrap(), 7).len(), 3);
    }

    #[test]
    fn the_tangent_has_its_coefficients() {
        // tan(a + x): a*tan'' / 2 = tan*(1 + tan^2).
        let tangent = Elementary::Named(Function::Tan);
        let coefficients = taylor(tangent, Exponent::ONE, 2).unwrap();
        let at_one: BigRational = coefficients[2].iter().map(|term| &term.number).sum();
        assert_eq!(at_one, BigRational::from_integer(2.into()));
        assert_eq!(coefficients[2].len(), 2);
    }
}
