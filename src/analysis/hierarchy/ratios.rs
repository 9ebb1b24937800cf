//! Without a `limit`: the largest ratio of split parts, or of a displacement to its
//! origin, is the small parameter.

use num_rational::BigRational;
use num_traits::{FromPrimitive, Zero};

use crate::algebra::monomial::{Monomial, Symbol};
use crate::algebra::product::{Base, Product, Speller};
use crate::analysis::Case;
use crate::analysis::sizes::{largest as largest_of, same};
use crate::model::{Meaning, Model};
use crate::number::Exponent;

/// A small ratio.
#[derive(Debug, Clone)]
pub struct Ratio {
    /// As text: `rho'/rho_0`.
    pub text: String,
    /// What it is.
    pub size: Monomial,
}

impl Ratio {
    /// The power of it that another ratio is, up to a number; `None` if it is none.
    pub fn power_of(&self, ratio: &Monomial) -> Option<BigRational> {
        let Some((symbol, own)) = self.size.powers().first() else {
            return self.power_of_number(ratio);
        };
        let found = ratio.powers().iter().find(|(found, _)| found == symbol);
        let power = match found {
            Some((_, power)) => power.to_rational() / own.to_rational(),
            None => BigRational::zero(),
        };
        let wanted = self
            .size
            .power(Exponent::from_rational(&power).ok()?)
            .ok()?;
        (wanted.powers() == ratio.powers()).then_some(power)
    }

    /// Where it is a pure number: its whole power.
    fn power_of_number(&self, ratio: &Monomial) -> Option<BigRational> {
        if !ratio.is_number() {
            return None;
        }
        let power = (ratio.number.ln_abs() / self.size.number.ln_abs()).round();
        let power = BigRational::from_f64(power)?;
        let exponent = Exponent::from_rational(&power).ok()?;
        let is_power = self.size.number.power(exponent).ok()? == ratio.number.abs();
        is_power.then_some(power)
    }
}

/// The largest at the nominal values, the first of equals: split fields in order of
/// declaration, then what was expanded.
pub fn largest(model: &Model, case: &Case, equations: &[usize]) -> Option<Ratio> {
    let mut found = split_ratios(model, case, equations);
    let expanded = equations
        .iter()
        .flat_map(|idx| &case.equations[*idx].ratios);
    found.extend(expanded.filter_map(|ratio| {
        let one = Product::number(crate::number::Number::one());
        of_products(case, &ratio.small, ratio.large.as_ref().unwrap_or(&one))
    }));
    let sizes: Vec<f64> = found
        .iter()
        .map(|ratio| case.setting.nominal(&ratio.size))
        .collect();
    let idx = largest_of(sizes)?;
    Some(found.swap_remove(idx))
}

/// The ratios of the smaller parts to the largest of each split field that stands in the
/// equations.
fn split_ratios(model: &Model, case: &Case, equations: &[usize]) -> Vec<Ratio> {
    let fields: Vec<_> = equations
        .iter()
        .flat_map(|idx| &case.equations[*idx].terms)
        .flat_map(|term| term.product.fields())
        .collect();
    let mut found = Vec::new();
    for info in model.fields.iter().filter(|info| !info.parts.is_empty()) {
        let parts: Vec<Base> = info
            .parts
            .iter()
            .filter_map(|(_, part)| match model.meaning(&part.text, None)? {
                Meaning::Field(id) if model.fields[id.0 as usize].parts.is_empty() => {
                    Some(Base::Field(id))
                }
                Meaning::Symbol(id) => Some(Base::Symbol(Symbol::Declared(id))),
                Meaning::Field(_)
                | Meaning::Coordinate(_)
                | Meaning::Group(_)
                | Meaning::Vector(_) => None,
            })
            .collect();
        let stands = parts
            .iter()
            .any(|part| matches!(part, Base::Field(id) if fields.contains(id)));
        if stands {
            found.extend(part_ratios(case, &parts));
        }
    }
    found
}

fn part_ratios(case: &Case, parts: &[Base]) -> Vec<Ratio> {
    let products: Vec<Product> = parts.iter().cloned().map(Product::base).collect();
    let sizes = products.iter().map(|product| {
        product
            .size(&case.setting.quantities)
            .map_or(f64::NAN, |size| case.setting.nominal(&size.resolved))
    });
    let sizes: Vec<f64> = sizes.collect();
    let Some(whole) = largest_of(sizes.iter().copied()) else {
        return Vec::new();
    };
    let others = (0..products.len()).filter(|idx| *idx != whole && !same(sizes[*idx], 0.0));
    others
        .filter_map(|idx| of_products(case, &products[idx], &products[whole]))
        .collect()
}

fn of_products(case: &Case, small: &Product, large: &Product) -> Option<Ratio> {
    let quantities = &case.setting.quantities;
    let size = |product: &Product| Some(product.size(quantities).ok()?.resolved.abs());
    let speller = Speller {
        symbols: &case.setting.names,
        quantities,
        with_partials: false,
    };
    let ratio = small
        .times(&large.power(Exponent::ONE.negated()).ok()?)
        .ok()?;
    Some(Ratio {
        text: speller.product(&ratio),
        size: size(small)?.over(&size(large)?).ok()?,
    })
}
