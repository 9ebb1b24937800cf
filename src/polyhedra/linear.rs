//! Linear forms, and equations between unknowns in reduced row echelon form.

use num_rational::BigRational;
use num_traits::Zero;

/// Exponents times unknowns, plus the constant.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct LinearForm {
    /// One for each unknown.
    pub exponents: Vec<BigRational>,
    /// What is added.
    pub constant: BigRational,
}

impl LinearForm {
    /// The value at a point.
    pub fn at(&self, point: &[BigRational]) -> BigRational {
        let products = self.exponents.iter().zip(point).map(|(e, x)| e * x);
        products.fold(self.constant.clone(), |sum, product| sum + product)
    }
}

/// Independent equations "form = 0": each begins with exponent 1 of an unknown that
/// stands in no other one, and these unknowns are in ascending order.
#[derive(Debug, Default)]
pub(super) struct Echelon {
    pub(super) equations: Vec<LinearForm>,
    /// The first unknown of each equation.
    pub(super) dependent: Vec<usize>,
}

impl Echelon {
    /// Takes in one more equation, which must not contradict the others.
    pub(super) fn add(&mut self, mut form: LinearForm) {
        self.replace_dependent(&mut form);
        let Some(lead) = form.exponents.iter().position(|e| !e.is_zero()) else {
            return;
        };
        let factor = form.exponents[lead].recip();
        form.exponents.iter_mut().for_each(|e| *e *= &factor);
        form.constant *= factor;
        for equation in &mut self.equations {
            let times = equation.exponents[lead].clone();
            subtract(equation, &form, &times);
        }
        let place = self.dependent.partition_point(|&other| other < lead);
        self.dependent.insert(place, lead);
        self.equations.insert(place, form);
    }

    /// Writes the form in the unknowns that lead no equation.
    pub(super) fn replace_dependent(&self, form: &mut LinearForm) {
        for (equation, &lead) in self.equations.iter().zip(&self.dependent) {
            let times = form.exponents[lead].clone();
            subtract(form, equation, &times);
        }
    }
}

fn subtract(form: &mut LinearForm, other: &LinearForm, times: &BigRational) {
    if times.is_zero() {
        return;
    }
    for (value, other) in form.exponents.iter_mut().zip(&other.exponents) {
        *value -= other * times;
    }
    form.constant -= &other.constant * times;
}

#[cfg(test)]
mod tests {
    use super::*;

    fn form(exponents: &[i64], constant: i64) -> LinearForm {
        let whole = |v: &i64| BigRational::from_integer((*v).into());
        LinearForm {
            exponents: exponents.iter().map(whole).collect(),
            constant: whole(&constant),
        }
    }

    #[test]
    fn the_order_of_equations_has_no_influence() {
        let rows = [
            form(&[0, 2, 4], 2),
            form(&[1, 1, 1], 3),
            form(&[1, 2, 3], 4),
        ];
        let expected = [form(&[1, 0, -1], 2), form(&[0, 1, 2], 1)];
        for order in [[0, 1, 2], [2, 1, 0], [1, 2, 0]] {
            let mut echelon = Echelon::default();
            order.iter().for_each(|&row| echelon.add(rows[row].clone()));
            assert_eq!(echelon.equations, expected);
            assert_eq!(echelon.dependent, [0, 1]);
        }
    }
}
