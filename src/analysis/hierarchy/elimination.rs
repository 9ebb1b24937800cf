//! Puts what the leading order says of its fields into a condition on them, so that it
//! speaks of as few as can be: of the pressure alone where the current is geostrophic.

use crate::algebra::product::{Base, Factor, Product};
use crate::algebra::quantities::{CoordinateId, FieldId};
use crate::algebra::series::{self, Graded, Series};
use crate::analysis::hierarchy::HierarchyFault;
use crate::analysis::hierarchy::expander::Part;
use crate::analysis::hierarchy::series::coefficient_of;
use crate::analysis::hierarchy::view::View;
use crate::model::terms::Side;
use crate::number::{Exponent, Number, TooLarge};

/// Fields of the leading order, each as a sum of products of the others.
pub(super) struct Rules {
    rules: Vec<Rule>,
}

/// A field and what it is.
struct Rule {
    field: FieldId,
    sum: Series,
}

impl Rules {
    /// What a linear leading order gives without integrating.
    ///
    /// # Errors
    /// Something beyond the limits.
    pub(super) fn of(view: &View<'_>, equations: &[Vec<Part>]) -> Result<Rules, HierarchyFault> {
        let mut left: Vec<Series> = Vec::with_capacity(equations.len());
        for parts in equations {
            left.push(leading(view, parts)?);
        }
        let mut found = Rules { rules: Vec::new() };
        // Each pass uses up an equation.
        while let Some((place, rule)) = found.next(view, &left)? {
            left.swap_remove(place);
            let alone = Rules { rules: vec![rule] };
            for known in &mut found.rules {
                known.sum = alone.put_into(view, &known.sum)?;
            }
            found.rules.extend(alone.rules);
        }
        Ok(found)
    }

    /// The first equation that gives a field, by its place, and what it gives.
    fn next(
        &self,
        view: &View<'_>,
        equations: &[Series],
    ) -> Result<Option<(usize, Rule)>, HierarchyFault> {
        for (place, equation) in equations.iter().enumerate() {
            let equation = self.put_into(view, equation)?;
            if let Some(rule) = solved(view, &equation)? {
                return Ok(Some((place, rule)));
            }
        }
        Ok(None)
    }

    /// A sum with the fields replaced.
    ///
    /// # Errors
    /// Something beyond the limits.
    pub(super) fn put_into(&self, view: &View<'_>, sum: &[Graded]) -> Result<Series, TooLarge> {
        let mut found = Vec::new();
        for term in sum {
            let mut product = vec![Graded::plain(Product::number(term.product.number.clone()))];
            for factor in &term.product.factors {
                let next = self.factor(view, factor)?;
                product = series::times(&product, &next, u32::MAX)?;
            }
            found.extend(product);
        }
        Ok(series::collected(found))
    }

    fn factor(&self, view: &View<'_>, factor: &Factor) -> Result<Series, TooLarge> {
        let alone = || {
            vec![Graded::plain(Product {
                number: Number::one(),
                factors: vec![factor.clone()],
            })]
        };
        let rule = coefficient_of(&factor.base)
            .and_then(|field| self.rules.iter().find(|rule| rule.field == field));
        let is_whole_power = factor.power.is_whole() && !factor.power.is_negative();
        let Some(rule) = rule.filter(|_| is_whole_power) else {
            return Ok(alone());
        };
        let mut base = rule.sum.clone();
        for along in derivatives(&factor.base) {
            base = view.coefficients.differentiated(&base, along)?;
        }
        let mut power = vec![Graded::plain(Product::number(Number::one()))];
        for _ in 0..factor.power.numer() {
            power = series::times(&power, &base, u32::MAX)?;
        }
        Ok(power)
    }
}

/// Along which coordinates something is differentiated, once for each time.
fn derivatives(base: &Base) -> Vec<CoordinateId> {
    let by = match base {
        Base::Derivative(derivative) => derivative.by.as_slice(),
        Base::Symbol(_)
        | Base::Coordinate(_)
        | Base::Field(_)
        | Base::Absolute(_)
        | Base::Sized(_)
        | Base::Mean(_)
        | Base::Function(_) => &[],
    };
    let times = by
        .iter()
        .map(|(along, order)| vec![*along; *order as usize]);
    times.flatten().collect()
}

/// The leading order of an equation, all on its left side.
fn leading(view: &View<'_>, parts: &[Part]) -> Result<Series, TooLarge> {
    let quantities = &view.expander.case.setting.quantities;
    let mut sum = Vec::new();
    for part in parts.iter().filter(|part| part.degree == 0) {
        let product = part.product.resolved(quantities)?;
        sum.push(Graded::plain(match part.side {
            Side::Left => product,
            Side::Right => product.negated(),
        }));
    }
    Ok(series::collected(sum))
}

/// A field that stands once in an equation, not differentiated, by the rest of it.
fn solved(view: &View<'_>, equation: &[Graded]) -> Result<Option<Rule>, TooLarge> {
    for (place, term) in equation.iter().enumerate() {
        let Some((field, coefficient)) = field_alone(&term.product) else {
            continue;
        };
        let rest = equation
            .iter()
            .enumerate()
            .filter(|(other, _)| *other != place);
        let stands_again = rest.clone().any(|(_, term)| {
            let mut fields = view.coefficients.in_product(&term.product);
            fields.any(|(found, _)| found == field)
        });
        if stands_again {
            continue;
        }
        let over = coefficient.power(Exponent::ONE.negated())?.negated();
        let mut sum = Vec::new();
        for (_, term) in rest {
            sum.push(Graded::plain(over.times(&term.product)?));
        }
        return Ok(Some(Rule { field, sum }));
    }
    Ok(None)
}

/// The field of a product that holds nothing else that varies, and its coefficient.
fn field_alone(product: &Product) -> Option<(FieldId, Product)> {
    let (symbols, varying): (Vec<&Factor>, Vec<&Factor>) = product
        .factors
        .iter()
        .partition(|factor| matches!(factor.base, Base::Symbol(_)));
    match varying.as_slice() {
        [
            Factor {
                base: Base::Field(field),
                power,
            },
        ] if *power == Exponent::ONE => Some((
            *field,
            Product {
                number: product.number.clone(),
                factors: symbols.into_iter().cloned().collect(),
            },
        )),
        _ => None,
    }
}
