//! Tangents as sines over cosines: in an equation made of the components of a vector
//! equation, what cancels then cancels.

use crate::algebra::product::{Applied, Base, Derivative, Factor, Product};
use crate::algebra::series::Elementary;
use crate::number::{Exponent, Number, TooLarge};
use crate::units::Function;

/// A product with every tangent of something that varies as a sine over a cosine.
pub(super) fn without_tangents(product: &Product) -> Result<Product, TooLarge> {
    let mut made = Product::number(product.number.clone());
    for factor in &product.factors {
        made = made.times(&replaced(factor)?)?;
    }
    Ok(made)
}

fn replaced(factor: &Factor) -> Result<Product, TooLarge> {
    let made = match &factor.base {
        Base::Function(applied) if applied.function == Elementary::Named(Function::Tan) => {
            let sine = of_same(applied, Function::Sin);
            let cosine = of_same(applied, Function::Cos).power(Exponent::ONE.negated())?;
            sine.times(&cosine)?
        }
        Base::Derivative(derivative) => {
            let operand = without_tangents(&Product {
                number: Number::one(),
                factors: derivative.operand.clone(),
            })?;
            Product::base(Base::Derivative(Box::new(Derivative {
                operand: operand.factors,
                by: derivative.by.clone(),
            })))
        }
        Base::Symbol(_)
        | Base::Coordinate(_)
        | Base::Field(_)
        | Base::Absolute(_)
        | Base::Sized(_)
        | Base::Mean(_)
        | Base::Function(_) => Product::base(factor.base.clone()),
    };
    made.power(factor.power)
}

fn of_same(applied: &Applied, function: Function) -> Product {
    Product::base(Base::Function(Box::new(Applied {
        function: Elementary::Named(function),
        argument: applied.argument.clone(),
    })))
}
