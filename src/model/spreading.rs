//! The range of a scale or constant: what stands behind its number, `.. 20 m/s`,
//! `+- 3 m/s`, `within 2`.

use num_rational::BigRational;

use crate::model::dimensions::literal_unit;
use crate::model::errors::ModelError;
use crate::model::settings::not_positive;
use crate::model::values::{self, Fault, Names, Value};
use crate::model::{declarations, names};
use crate::number::{Number, rational_to_f64};
use crate::syntax::ast;
use crate::units::Range;

/// The range behind a number.
pub(super) struct Spreading<'a, N> {
    pub(super) decl: &'a ast::ValueDecl,
    pub(super) nominal: &'a ast::Expr,
    pub(super) names: &'a N,
}

impl<N: Names> Spreading<'_, N> {
    pub(super) fn spread(&self, value: Value, spread: &ast::Spread) -> Result<Value, Fault> {
        match spread {
            ast::Spread::None => Ok(value),
            ast::Spread::To(end) => self.to(value, end),
            ast::Spread::Margin(margin) => self.margin(value, margin),
            ast::Spread::Within(proportion) => within(&value, proportion),
        }
    }

    /// The nominal number, with the unit behind the second one where it has none.
    fn borrowed(&self, value: Value, end: &ast::Expr) -> Result<Value, Fault> {
        let is_bare = literal_unit(self.nominal).is_none()
            && !names::has_names(self.nominal)
            && is_literal(self.nominal);
        match literal_unit(end) {
            Some(text) if is_bare => {
                let unit = names::unit(text)?;
                let number = value.exact.unwrap_or_else(Number::one);
                let span = self.nominal.span;
                let number = number
                    .times(&unit.factor)
                    .map_err(|_| ModelError::TooLarge { span })?;
                Ok(Value::exact(number))
            }
            Some(_) | None => Ok(value),
        }
    }

    fn to(&self, value: Value, end: &ast::Expr) -> Result<Value, Fault> {
        let span = self.nominal.span.to(end.span);
        let low = self.borrowed(value, end)?.range.nominal;
        let high = values::evaluate(end, self.names)?.range.nominal;
        if low > high {
            return Err(Fault::Error(ModelError::RangeUpsideDown {
                span,
                is_factor: false,
            }));
        }
        if low <= 0.0 && self.decl.kind == ast::ValueKind::Scale {
            return Err(not_positive(self.decl, end, low).into());
        }
        if low <= 0.0 && high >= 0.0 {
            return Err(Fault::Error(ModelError::RangeHoldsZero {
                name: self.decl.name.text.clone(),
                span,
            }));
        }
        // One root rounds less than two, unless the product leaves the range of numbers.
        let product = low * high;
        let mean = if product.is_normal() {
            product.sqrt()
        } else {
            low.abs().sqrt() * high.abs().sqrt()
        };
        let nominal = low.signum() * mean;
        self.range(low, nominal, high)
    }

    fn range(&self, low: f64, nominal: f64, high: f64) -> Result<Value, Fault> {
        let span = self.nominal.span;
        let range = Range::new(low, nominal, high).map_err(|_| ModelError::TooLarge { span })?;
        Ok(Value { range, exact: None })
    }

    fn margin(&self, value: Value, margin: &ast::Expr) -> Result<Value, Fault> {
        let nominal = self.borrowed(value, margin)?.range.nominal;
        let margin_value = values::evaluate(margin, self.names)?.range.nominal;
        let span = margin.span;
        if margin_value < 0.0 {
            return Err(Fault::Error(ModelError::RangeUpsideDown {
                span,
                is_factor: false,
            }));
        }
        let (low, high) = (nominal - margin_value, nominal + margin_value);
        let name = self.decl.name.text.clone();
        if self.decl.kind == ast::ValueKind::Scale && nominal > 0.0 && low <= 0.0 {
            return Err(Fault::Error(ModelError::MarginTooWide { name, span }));
        }
        if low <= 0.0 && high >= 0.0 && self.decl.kind == ast::ValueKind::Constant {
            return Err(Fault::Error(ModelError::RangeHoldsZero { name, span }));
        }
        self.range(low, nominal, high)
    }
}

fn is_literal(expr: &ast::Expr) -> bool {
    match &expr.kind {
        ast::ExprKind::Number(_) => true,
        ast::ExprKind::Negate(inside) => is_literal(inside),
        _ => false,
    }
}

/// `within 2` is a factor either way, `within 20 %` the factor 1.2.
fn within(value: &Value, proportion: &ast::Proportion) -> Result<Value, Fault> {
    let factor = rational_to_f64(&factor(proportion)?);
    let nominal = value.range.nominal;
    let (near, far) = (nominal / factor, nominal * factor);
    let span = proportion.span;
    let range = Range::new(near.min(far), nominal, near.max(far))
        .map_err(|_| ModelError::TooLarge { span })?;
    Ok(Value { range, exact: None })
}

/// A proportion as a factor of at least 1: 20 % is the factor 1.2.
///
/// # Errors
/// A factor below 1, a unit that is no plain number.
pub fn factor(proportion: &ast::Proportion) -> Result<BigRational, ModelError> {
    let share = declarations::share(proportion)?;
    let one = BigRational::from_integer(1.into());
    let factor = if proportion.number.unit.is_some() {
        share + &one
    } else {
        share
    };
    if factor < one {
        return Err(ModelError::RangeUpsideDown {
            span: proportion.span,
            is_factor: true,
        });
    }
    Ok(factor)
}
