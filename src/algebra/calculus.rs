//! The rules of differentiation.
//!
//! `∂/∂x` is amplitude over length. A factor that does not depend on x moves out. A
//! product whose factors all vary over the same length along x, none of them by an
//! amplitude of its own, stays whole, so that flux form is kept; any other is taken
//! apart by the product rule. A power of one field counts as a product of equal factors.
//! The rule is applied from the inside out. A function goes by the chain rule.

use crate::algebra::monomial::Monomial;
use crate::algebra::product::{Applied, Base, Derivative, Factor, Product, factors_size};
use crate::algebra::quantities::{CoordinateId, Quantities, Size, Variation};
use crate::number::{Exponent, Number, TooLarge};

/// The derivative of a product along a coordinate: a sum, empty if it vanishes.
///
/// # Errors
/// [`TooLarge`] beyond the limits.
pub fn differentiate(
    product: &Product,
    along: CoordinateId,
    quantities: &Quantities,
) -> Result<Vec<Product>, TooLarge> {
    let (inside, outside): (Vec<Factor>, Vec<Factor>) = product
        .factors
        .iter()
        .cloned()
        .partition(|factor| depends_on(&factor.base, along, quantities));
    let outside = Product {
        number: product.number.clone(),
        factors: outside,
    };
    let sum = match inside.as_slice() {
        [] => return Ok(Vec::new()),
        [factor] if factor.power == Exponent::ONE => {
            base_derivative(&factor.base, along, quantities)?
        }
        factors if stays_whole(factors, along, quantities) => vec![whole(factors, along)],
        factors => product_rule(factors, along, quantities)?,
    };
    sum.iter().map(|part| outside.times(part)).collect()
}

fn base_derivative(
    base: &Base,
    along: CoordinateId,
    quantities: &Quantities,
) -> Result<Vec<Product>, TooLarge> {
    match base {
        // It depends on itself alone.
        Base::Symbol(_) | Base::Coordinate(_) => Ok(vec![Product::number(Number::one())]),
        Base::Field(_) | Base::Absolute(_) | Base::Sized(_) | Base::Mean(_) => {
            let factor = Factor {
                base: base.clone(),
                power: Exponent::ONE,
            };
            Ok(vec![whole(&[factor], along)])
        }
        Base::Derivative(derivative) => differentiate_again(derivative, along, quantities),
        Base::Function(applied) => chain_rule(applied, along, quantities),
    }
}

fn chain_rule(
    applied: &Applied,
    along: CoordinateId,
    quantities: &Quantities,
) -> Result<Vec<Product>, TooLarge> {
    let inner = differentiate(&applied.argument, along, quantities)?;
    let mut sum = Vec::new();
    for outer in applied.derivative()? {
        for part in &inner {
            sum.push(outer.times(part)?);
        }
    }
    Ok(sum)
}

/// The derivative of a derivative: taken in where the rule allows it, else applied to the
/// inside first.
fn differentiate_again(
    derivative: &Derivative,
    along: CoordinateId,
    quantities: &Quantities,
) -> Result<Vec<Product>, TooLarge> {
    let operand = &derivative.operand;
    let all_depend = operand
        .iter()
        .all(|factor| depends_on(&factor.base, along, quantities));
    if all_depend && (is_single(operand) || stays_whole(operand, along, quantities)) {
        let mut by = derivative.by.clone();
        match by.iter_mut().find(|(found, _)| *found == along) {
            Some((_, order)) => *order += 1,
            None => by.push((along, 1)),
        }
        return Ok(vec![Product::base(Base::Derivative(Box::new(
            Derivative {
                operand: operand.clone(),
                by,
            },
        )))]);
    }
    let inside = Product {
        number: Number::one(),
        factors: operand.clone(),
    };
    let mut sum = differentiate(&inside, along, quantities)?;
    for &(coordinate, order) in &derivative.by {
        for _ in 0..order {
            sum = differentiate_sum(&sum, coordinate, quantities)?;
        }
    }
    Ok(sum)
}

/// The derivative of a sum.
///
/// # Errors
/// [`TooLarge`] beyond the limits.
pub fn differentiate_sum(
    sum: &[Product],
    along: CoordinateId,
    quantities: &Quantities,
) -> Result<Vec<Product>, TooLarge> {
    let mut result = Vec::new();
    for product in sum {
        result.extend(differentiate(product, along, quantities)?);
    }
    Ok(result)
}

fn product_rule(
    factors: &[Factor],
    along: CoordinateId,
    quantities: &Quantities,
) -> Result<Vec<Product>, TooLarge> {
    let mut sum = Vec::new();
    for (idx, factor) in factors.iter().enumerate() {
        let mut rest = Product::number(Number::rational(factor.power.to_rational()));
        for (other_idx, other) in factors.iter().enumerate() {
            let power = if other_idx == idx {
                other.power.plus(Exponent::ONE.negated())?
            } else {
                other.power
            };
            let kept = Product::base(other.base.clone()).power(power)?;
            rest = rest.times(&kept)?;
        }
        for inner in base_derivative(&factor.base, along, quantities)? {
            sum.push(rest.times(&inner)?);
        }
    }
    Ok(sum)
}

fn whole(factors: &[Factor], along: CoordinateId) -> Product {
    Product::base(Base::Derivative(Box::new(Derivative {
        operand: factors.to_vec(),
        by: vec![(along, 1)],
    })))
}

/// One base to the power 1, whose derivative is its amplitude over its length.
fn is_single(factors: &[Factor]) -> bool {
    matches!(factors, [factor] if factor.power == Exponent::ONE)
}

/// Whether a base varies along a coordinate.
pub fn depends_on(base: &Base, along: CoordinateId, quantities: &Quantities) -> bool {
    match base {
        Base::Symbol(_) => false,
        Base::Coordinate(id) => quantities.coordinate(*id).along(along).is_some(),
        Base::Field(id) => quantities.field(*id).along(along).is_some(),
        Base::Derivative(derivative) => any_depends(&derivative.operand, along, quantities),
        Base::Absolute(inside) | Base::Mean(inside) => any_depends(inside, along, quantities),
        Base::Sized(sized) => sized
            .variations
            .iter()
            .any(|variation| variation.coordinate == along),
        Base::Function(applied) => any_depends(&applied.argument.factors, along, quantities),
    }
}

fn any_depends(factors: &[Factor], along: CoordinateId, quantities: &Quantities) -> bool {
    factors
        .iter()
        .any(|factor| depends_on(&factor.base, along, quantities))
}

/// Whether all factors vary over one length along the coordinate, none by an amplitude
/// of its own. All of them depend on it.
fn stays_whole(factors: &[Factor], along: CoordinateId, quantities: &Quantities) -> bool {
    let mut first: Option<&Size> = None;
    factors.iter().all(|factor| {
        let Some(found) = common_length(&factor.base, along, quantities) else {
            return false;
        };
        match first {
            None => {
                first = Some(found);
                true
            }
            Some(length) => length.resolved == found.resolved,
        }
    })
}

/// The one length over which a base varies along a coordinate; none if it has an
/// amplitude of its own there, or several lengths.
fn common_length<'a>(
    base: &'a Base,
    along: CoordinateId,
    quantities: &'a Quantities,
) -> Option<&'a Size> {
    let plain =
        |variation: &'a Variation| (!variation.has_own_amplitude).then_some(&variation.length);
    match base {
        Base::Symbol(_) => None,
        Base::Coordinate(id) => quantities.coordinate(*id).along(along).and_then(plain),
        Base::Field(id) => quantities.field(*id).along(along).and_then(plain),
        Base::Sized(sized) => sized
            .variations
            .iter()
            .find(|variation| variation.coordinate == along)
            .map(|variation| &variation.length),
        Base::Derivative(derivative) => common_length_of(&derivative.operand, along, quantities),
        Base::Absolute(inside) => common_length_of(inside, along, quantities),
        Base::Mean(inside) => mean_length(inside, along, quantities),
        Base::Function(_) => None,
    }
}

/// A mean varies over the coordinates' own scales, whatever lengths its factors have.
fn mean_length<'a>(
    inside: &[Factor],
    along: CoordinateId,
    quantities: &'a Quantities,
) -> Option<&'a Size> {
    any_depends(inside, along, quantities).then(|| quantities.coordinate(along).length(along))
}

fn common_length_of<'a>(
    factors: &'a [Factor],
    along: CoordinateId,
    quantities: &'a Quantities,
) -> Option<&'a Size> {
    let mut lengths = factors
        .iter()
        .filter(|factor| depends_on(&factor.base, along, quantities))
        .map(|factor| common_length(&factor.base, along, quantities));
    let first = lengths.next()??;
    lengths
        .all(|length| length.is_some_and(|length| length.resolved == first.resolved))
        .then_some(first)
}

/// The size of a derivative: amplitude over lengths. A mixed derivative takes the
/// smallest of its amplitudes, the first of equal ones.
///
/// # Errors
/// [`TooLarge`] beyond the limits.
pub fn derivative_size(derivative: &Derivative, quantities: &Quantities) -> Result<Size, TooLarge> {
    let mut size = if is_single(&derivative.operand) {
        single_amplitude(&derivative.operand[0].base, derivative, quantities)?
    } else {
        factors_size(&derivative.operand, quantities)?
    };
    for &(coordinate, order) in &derivative.by {
        let length = length_along(&derivative.operand, coordinate, quantities);
        let power = Exponent::whole(-i64::from(order))?;
        size.written = size.written.times(&length.written.power(power)?)?;
        size.resolved = size.resolved.times(&length.resolved.power(power)?)?;
    }
    Ok(size)
}

fn single_amplitude(
    base: &Base,
    derivative: &Derivative,
    quantities: &Quantities,
) -> Result<Size, TooLarge> {
    let variations: &[Variation] = match base {
        Base::Field(id) => &quantities.field(*id).variations,
        Base::Coordinate(id) => &quantities.coordinate(*id).variations,
        Base::Sized(sized) => &sized.variations,
        Base::Absolute(inside) => match inside.as_slice() {
            [Factor { base, power }] if *power == Exponent::ONE => {
                return single_amplitude(base, derivative, quantities);
            }
            factors => return factors_size(factors, quantities),
        },
        Base::Symbol(_) | Base::Derivative(_) | Base::Mean(_) | Base::Function(_) => {
            return factors_size(&derivative.operand, quantities);
        }
    };
    let mut smallest: Option<&Variation> = None;
    // Outermost first, as they are written.
    for (coordinate, _) in derivative.by.iter().rev() {
        let Some(found) = variations
            .iter()
            .find(|variation| variation.coordinate == *coordinate)
        else {
            continue;
        };
        if smallest
            .is_none_or(|best| found.nominal_amplitude < best.nominal_amplitude * (1.0 - 1e-12))
        {
            smallest = Some(found);
        }
    }
    match smallest {
        Some(variation) => Ok(variation.amplitude.clone()),
        None => factors_size(&derivative.operand, quantities),
    }
}

/// The length over which factors vary along a coordinate; the first one's where they
/// are products that vary alike.
pub(crate) fn length_along(
    factors: &[Factor],
    along: CoordinateId,
    quantities: &Quantities,
) -> Size {
    let one = || Size {
        written: Monomial::one(),
        resolved: Monomial::one(),
    };
    factors
        .iter()
        .find_map(|factor| any_length(&factor.base, along, quantities))
        .cloned()
        .unwrap_or_else(one)
}

fn any_length<'a>(
    base: &'a Base,
    along: CoordinateId,
    quantities: &'a Quantities,
) -> Option<&'a Size> {
    let of = |variations: &'a [Variation]| {
        variations
            .iter()
            .find(|variation| variation.coordinate == along)
            .map(|variation| &variation.length)
    };
    match base {
        Base::Symbol(_) => None,
        Base::Coordinate(id) => of(&quantities.coordinate(*id).variations),
        Base::Field(id) => of(&quantities.field(*id).variations),
        Base::Sized(sized) => of(&sized.variations),
        Base::Derivative(derivative) => derivative
            .operand
            .iter()
            .find_map(|factor| any_length(&factor.base, along, quantities)),
        Base::Absolute(inside) => inside
            .iter()
            .find_map(|factor| any_length(&factor.base, along, quantities)),
        Base::Mean(inside) => mean_length(inside, along, quantities),
        Base::Function(_) => None,
    }
}
