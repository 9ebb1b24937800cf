//! Compares the orders of a hierarchy with equations written as text: up to rearrangement
//! and a common factor, products of derivatives multiplied out.

use std::collections::BTreeMap;

use num_rational::BigRational;
use num_traits::{One, Zero};
use serde_json::Value;

use super::checks::Case;
use crate::harness::{Tally, entry, list, text};

/// A sum of numbers times factors to powers. A derivative is a factor under its text:
/// `d_t^2(y_0)`.
type Sum = BTreeMap<BTreeMap<String, i64>, BigRational>;

/// One equation of a hierarchy.
pub(crate) fn compare_order(tally: &mut Tally, case: &Case, check: &Value) {
    let answer = case.answer(tally, "expand");
    let power = text(&check["power"]);
    let order = entry(&answer["orders"], "order", &power);
    let equation = entry(&order["equations"], "name", &text(&check["equation"]));
    let expected = Reader::equation(&text(&check["text"]));
    // With a limit the equation is compared in dimensionless form, without one as it is.
    let has_series = list(&equation["terms"])
        .iter()
        .flat_map(|term| list(&term["factors"]))
        .any(|factor| text(&equation["text"]).contains(&format!("{}_", text(&factor["field"]))));
    let form = if has_series { "text" } else { "dimensional" };
    let mut found = Reader::equation(&text(&equation[form]));
    // The state of rest, where the source has put it in.
    if !text(&check["text"]).contains("d_z(p_0)") {
        found = replaced(&found, "d_z(p_0)", &Reader::equation("-rho_0*g = 0"));
    }
    let what = format!("{} at order {power}", text(&check["equation"]));
    let are_same = are_proportional(&found, &expected);
    if !are_same {
        tally.fault(format!("{what}: found {}", equation[form]));
    }
    tally.same(&what, are_same, true);
}

/// A factor to the power 1 replaced by a sum.
fn replaced(sum: &Sum, factor: &str, by: &Sum) -> Sum {
    let mut found = Sum::new();
    for (factors, number) in sum {
        let mut rest = factors.clone();
        if rest.remove(factor) != Some(1) {
            add(&mut found, factors.clone(), number.clone());
            continue;
        }
        for (own, own_number) in by {
            add(&mut found, times(&rest, own), number * own_number);
        }
    }
    found
}

fn are_proportional(a: &Sum, b: &Sum) -> bool {
    let (Some((factors, number)), false) = (a.first_key_value(), a.len() != b.len()) else {
        return false;
    };
    let Some(other) = b.get(factors) else {
        return false;
    };
    let ratio = other / number;
    a.iter()
        .all(|(factors, number)| b.get(factors) == Some(&(number * &ratio)))
}

fn add(sum: &mut Sum, factors: BTreeMap<String, i64>, number: BigRational) {
    let entry = sum.entry(factors.clone()).or_default();
    *entry += number;
    if entry.is_zero() {
        sum.remove(&factors);
    }
}

fn times(a: &BTreeMap<String, i64>, b: &BTreeMap<String, i64>) -> BTreeMap<String, i64> {
    let mut product = a.clone();
    for (factor, power) in b {
        let entry = product.entry(factor.clone()).or_default();
        *entry += power;
        if *entry == 0 {
            product.remove(factor);
        }
    }
    product
}

fn multiplied(a: &Sum, b: &Sum) -> Sum {
    let mut product = Sum::new();
    for (x, number) in a {
        for (y, other) in b {
            add(&mut product, times(x, y), number * other);
        }
    }
    product
}

/// The derivative of a sum whose factors all depend on the coordinate.
fn derivative(sum: &Sum, along: &str) -> Sum {
    let mut found = Sum::new();
    for (factors, number) in sum {
        for (factor, power) in factors {
            let mut rest = factors.clone();
            let once = BTreeMap::from([(factor.clone(), -1)]);
            rest = times(&rest, &once);
            rest = times(&rest, &BTreeMap::from([(further(factor, along), 1)]));
            add(
                &mut found,
                rest,
                number * BigRational::from_integer((*power).into()),
            );
        }
    }
    found
}

/// `d_t(u)` of `u`, `d_t^2(u)` of `d_t(u)`.
fn further(factor: &str, along: &str) -> String {
    let inside = |prefix: &str| {
        let rest = factor.strip_prefix(prefix)?;
        rest.strip_suffix(')').map(str::to_owned)
    };
    match inside(&format!("d_{along}(")) {
        Some(inside) => format!("d_{along}^2({inside})"),
        None => format!("d_{along}({factor})"),
    }
}

/// Reads sums, products, quotients, whole powers, brackets and derivatives.
struct Reader<'t> {
    rest: &'t str,
}

impl Reader<'_> {
    /// Left of `=` minus right of it.
    fn equation(text: &str) -> Sum {
        let (left, right) = text.split_once('=').unwrap_or((text, "0"));
        let mut sum = Reader::whole(left);
        for (factors, number) in Reader::whole(right) {
            add(&mut sum, factors, -number);
        }
        sum
    }

    fn whole(text: &str) -> Sum {
        let text: String = text.chars().filter(|c| !c.is_whitespace()).collect();
        let mut reader = Reader { rest: &text };
        let sum = reader.sum();
        assert!(
            reader.rest.is_empty(),
            "cannot read {text} from {}",
            reader.rest
        );
        sum
    }

    fn takes(&mut self, sign: char) -> bool {
        match self.rest.strip_prefix(sign) {
            Some(rest) => {
                self.rest = rest;
                true
            }
            None => false,
        }
    }

    fn sum(&mut self) -> Sum {
        let mut sum = Sum::new();
        let mut is_negative = self.takes('-');
        loop {
            for (factors, number) in self.product() {
                add(
                    &mut sum,
                    factors,
                    if is_negative { -number } else { number },
                );
            }
            is_negative = match (self.takes('+'), self.takes('-')) {
                (true, _) => false,
                (_, true) => true,
                _ => return sum,
            };
        }
    }

    fn product(&mut self) -> Sum {
        let mut product = self.power();
        loop {
            if self.takes('*') {
                product = multiplied(&product, &self.power());
            } else if self.takes('/') {
                product = multiplied(&product, &inverse(&self.power()));
            } else {
                return product;
            }
        }
    }

    fn power(&mut self) -> Sum {
        let base = self.atom();
        if !self.takes('^') {
            return base;
        }
        let digits = self.word(|c| c.is_ascii_digit());
        let one = Sum::from([(BTreeMap::new(), BigRational::one())]);
        let times: u32 = digits.parse().expect("powers are whole");
        (0..times).fold(one, |product, _| multiplied(&product, &base))
    }

    fn word(&mut self, fits: impl Fn(char) -> bool) -> String {
        let end = self.rest.find(|c| !fits(c)).unwrap_or(self.rest.len());
        let (word, rest) = self.rest.split_at(end);
        self.rest = rest;
        word.to_owned()
    }

    fn bracket(&mut self) -> Sum {
        assert!(self.takes('('), "a bracket is due at {}", self.rest);
        let inside = self.sum();
        assert!(self.takes(')'), "a bracket is open at {}", self.rest);
        inside
    }

    fn atom(&mut self) -> Sum {
        if self.rest.starts_with('(') {
            return self.bracket();
        }
        if self.rest.starts_with(|c: char| c.is_ascii_digit()) {
            let number: i64 = self.word(|c| c.is_ascii_digit()).parse().expect("a number");
            let number = BigRational::from_integer(number.into());
            return match number.is_zero() {
                true => Sum::new(),
                false => Sum::from([(BTreeMap::new(), number)]),
            };
        }
        let name = self.word(|c| c.is_alphanumeric() || c == '_' || c == '\'');
        if let Some(along) = name.strip_prefix("d_") {
            let times = match self.takes('^') {
                true => self.word(|c| c.is_ascii_digit()).parse().expect("an order"),
                false => 1,
            };
            let inside = self.bracket();
            return (0..times).fold(inside, |sum, _| derivative(&sum, along));
        }
        Sum::from([(BTreeMap::from([(name, 1)]), BigRational::one())])
    }
}

/// One over a single product.
fn inverse(sum: &Sum) -> Sum {
    let (factors, number) = sum.first_key_value().expect("no division by 0");
    assert_eq!(sum.len(), 1, "a division by a sum");
    let factors = factors
        .iter()
        .map(|(factor, power)| (factor.clone(), -power));
    Sum::from([(factors.collect(), number.recip())])
}

#[test]
fn texts_are_read_as_sums() {
    let a = Reader::equation("F*(d_t(e) + d_x(u*e)) = 2*u/r^2");
    let b = Reader::equation("-F*d_t(e) - F*u*d_x(e) - F*e*d_x(u) + 2*u/r/r = 0");
    assert!(are_proportional(&a, &b));
    assert!(!are_proportional(&a, &Reader::equation("F*d_t(e) = 0")));
}
