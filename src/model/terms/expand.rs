//! Multiplying out: an expression as a sum of products.

use num_traits::ToPrimitive;

use super::Maker;
use super::pieces::{Piece, Pieces, collected, multiplied, named, written_tag};
use crate::algebra::monomial::Symbol;
use crate::algebra::product::{Base, Factor, Product};
use crate::algebra::quantities::FieldId;
use crate::limits;
use crate::model::errors::{ModelError, Product as Wanted};
use crate::model::frames;
use crate::model::names::{self, Call, Function};
use crate::model::{Meaning, Model, values};
use crate::number::{Exponent, Number};
use crate::source::Span;
use crate::syntax::ast::{self, ExprKind, Operator, Sign};

impl Maker<'_> {
    pub(super) fn expand(&mut self, expr: &ast::Expr) -> Pieces {
        let span = expr.span;
        let pieces = match &expr.kind {
            ExprKind::Number(number) => {
                let (value, _) = names::literal(number, span, false)?;
                vec![Piece::plain(Product::number(value))]
            }
            ExprKind::Name(name) => self.name(expr, name)?,
            ExprKind::Sum(terms) => {
                let mut sum = Vec::new();
                for (sign, term) in terms {
                    let pieces = self.expand(term)?;
                    sum.extend(pieces.into_iter().map(|piece| match sign {
                        Sign::Plus => piece,
                        Sign::Minus => piece.negated(),
                    }));
                }
                self.displaced(sum, span)?
            }
            ExprKind::Product(factors) => self.product(factors, span)?,
            ExprKind::Negate(inside) => self.expand(inside)?.iter().map(Piece::negated).collect(),
            ExprKind::Bracket(inside) => self.expand(inside)?,
            ExprKind::As { expr, process } => {
                named(self.expand(expr)?, Some(&written_tag(process)))
            }
            ExprKind::Power { base, exponent } => {
                let exponent = names::exponent(exponent)?;
                self.raised(base, exponent, span)?
            }
            ExprKind::Call {
                function,
                order,
                arguments,
            } => self.call(expr, &function.text, *order, arguments)?,
            ExprKind::Derivative { operand, by } => {
                let mut pieces = self.expand(operand)?;
                // As written, the last coordinate is the innermost.
                for (name, order) in by.iter().rev() {
                    let Some(Meaning::Coordinate(id)) = self.model.meaning(&name.text, None) else {
                        return Err(not_a_term(span));
                    };
                    pieces = self.differentiated(&pieces, id, *order, span)?;
                }
                pieces
            }
            ExprKind::Sized { expr: inside, size } => vec![self.sized(expr, inside, size)?],
            ExprKind::Process { .. } | ExprKind::Tuple(_) | ExprKind::Error => {
                return Err(not_a_term(span));
            }
        };
        if pieces.len() > limits::TERMS {
            return Err(ModelError::TooLarge { span });
        }
        Ok(pieces)
    }

    pub(super) fn name(&self, expr: &ast::Expr, name: &str) -> Pieces {
        if let Some(Meaning::Field(id)) = self.model.meaning(name, None)
            && !self.model.fields[id.0 as usize].parts.is_empty()
        {
            let mut parts = Vec::new();
            self.split(id, false, &mut parts);
            self.mark_smaller(id, &mut parts);
            return Ok(parts);
        }
        let base = match self.model.meaning(name, None) {
            Some(Meaning::Symbol(id)) => Base::Symbol(Symbol::Declared(id)),
            Some(Meaning::Coordinate(id)) => Base::Coordinate(id),
            Some(Meaning::Field(id)) => Base::Field(id),
            Some(Meaning::Group(_)) | None => return self.monomial(expr),
            Some(Meaning::Vector(_)) => return Err(not_a_term(expr.span)),
        };
        Ok(vec![Piece::plain(Product::base(base))])
    }

    /// The parts of a split field, those of split parts in their places.
    pub(super) fn split(&self, id: FieldId, is_negative: bool, found: &mut Vec<Piece>) {
        for (sign, part) in &self.model.fields[id.0 as usize].parts {
            let is_negative = is_negative != (*sign == Sign::Minus);
            let base = match self.model.meaning(&part.text, None) {
                Some(Meaning::Field(inner))
                    if !self.model.fields[inner.0 as usize].parts.is_empty() =>
                {
                    self.split(inner, is_negative, found);
                    continue;
                }
                Some(Meaning::Field(inner)) => Base::Field(inner),
                Some(Meaning::Symbol(inner)) => Base::Symbol(Symbol::Declared(inner)),
                Some(Meaning::Coordinate(_) | Meaning::Group(_) | Meaning::Vector(_)) | None => {
                    continue;
                }
            };
            let piece = Piece::plain(Product::base(base));
            found.push(if is_negative { piece.negated() } else { piece });
        }
    }

    /// A product of constants, a group or a function of constants.
    fn monomial(&self, expr: &ast::Expr) -> Pieces {
        let found = values::monomial(expr, self).map_err(|fault| {
            fault
                .error(Wanted::Term)
                .unwrap_or(ModelError::NotAProduct {
                    span: expr.span,
                    what: Wanted::Term,
                })
        })?;
        let factors = found
            .powers()
            .iter()
            .map(|(symbol, power)| Factor {
                base: Base::Symbol(symbol.clone()),
                power: *power,
            })
            .collect();
        Ok(vec![Piece::plain(Product {
            number: found.number.clone(),
            factors,
        })])
    }

    pub(super) fn product(&mut self, factors: &[(Operator, ast::Expr)], span: Span) -> Pieces {
        let mut pieces = vec![Piece::plain(Product::number(Number::one()))];
        for (operator, factor) in factors {
            let next = match operator {
                Operator::Times => self.expand(factor)?,
                Operator::Over => {
                    let inverse = Exponent::ONE.negated();
                    self.raised(factor, inverse, factor.span)?
                }
            };
            pieces = multiplied(&pieces, &next, self.highest(), span)?;
        }
        Ok(pieces)
    }

    fn call(
        &mut self,
        expr: &ast::Expr,
        function: &str,
        order: Option<u32>,
        arguments: &[ast::Expr],
    ) -> Pieces {
        let span = expr.span;
        if names::call(function, self.model) == Call::Vector {
            let written_out = frames::expanded(expr, self.model)?;
            return self.expand(&written_out);
        }
        let [argument] = arguments else {
            return self.constant_call(expr, function, arguments);
        };
        match names::call(function, self.model) {
            Call::Derivative(id) => {
                let pieces = self.expand(argument)?;
                self.differentiated(&pieces, id, order.unwrap_or(1), span)
            }
            Call::Material => {
                let pieces = self.expand(argument)?;
                self.material(&pieces, span)
            }
            Call::Mean => self.mean(argument),
            Call::Function(function_of) => {
                let pieces = collected(self.expand(argument)?);
                let is_constant = pieces.iter().all(|piece| is_constant(&piece.product));
                match function_of {
                    Function::Sqrt if !is_constant || pieces.len() == 1 => {
                        self.raised(argument, times(Exponent::ratio(1, 2), order, span)?, span)
                    }
                    Function::Abs if !is_constant || pieces.len() == 1 => {
                        let amount = self.amount(pieces, span)?;
                        self.power(amount, times(Exponent::ONE, order, span)?, span)
                    }
                    Function::Plain(plain) if !is_constant => {
                        let found = self.function(plain, pieces, span)?;
                        self.power(found, times(Exponent::ONE, order, span)?, span)
                    }
                    Function::Sqrt | Function::Abs | Function::Plain(_) => self.monomial(expr),
                    Function::Min | Function::Max | Function::Standard(_) => {
                        self.constant_call(expr, function, arguments)
                    }
                }
            }
            Call::Vector | Call::Unknown => Err(not_a_term(span)),
        }
    }

    /// A function of constants; of anything that varies it has no size by itself.
    fn constant_call(&self, expr: &ast::Expr, function: &str, arguments: &[ast::Expr]) -> Pieces {
        let varies = arguments
            .iter()
            .any(|argument| holds_varying(argument, self.model));
        if varies {
            return Err(ModelError::NotSplit {
                span: expr.span,
                function: function.to_owned(),
            });
        }
        self.monomial(expr)
    }

    /// A power of an expression. Powers of powers are taken together, so that an expansion
    /// is in the ratios of what is written: `1/(R + h)^2` in `h/R`.
    fn raised(&mut self, expr: &ast::Expr, exponent: Exponent, span: Span) -> Pieces {
        let too_large = |_| ModelError::TooLarge { span };
        match &expr.kind {
            ExprKind::Bracket(inside) => self.raised(inside, exponent, span),
            ExprKind::Power {
                base,
                exponent: inner,
            } if exponent.is_whole() => {
                let inner = names::exponent(inner)?;
                let exponent = exponent.times(inner).map_err(too_large)?;
                self.raised(base, exponent, span)
            }
            ExprKind::Product(factors) if exponent.is_whole() => {
                let mut pieces = vec![Piece::plain(Product::number(Number::one()))];
                for (operator, factor) in factors {
                    let own = match operator {
                        Operator::Times => exponent,
                        Operator::Over => exponent.negated(),
                    };
                    let next = self.raised(factor, own, span)?;
                    pieces = multiplied(&pieces, &next, self.highest(), span)?;
                }
                Ok(pieces)
            }
            ExprKind::Call {
                function,
                order,
                arguments,
            } if exponent.is_whole()
                && names::call(&function.text, self.model) == Call::Function(Function::Sqrt) =>
            {
                let half = times(Exponent::ratio(1, 2), *order, span)?;
                match arguments.as_slice() {
                    [argument] if holds_varying(argument, self.model) => {
                        let exponent = exponent.times(half).map_err(too_large)?;
                        self.raised(argument, exponent, span)
                    }
                    _ => {
                        let pieces = self.expand(expr)?;
                        self.power(pieces, exponent, span)
                    }
                }
            }
            ExprKind::Number(_)
            | ExprKind::Name(_)
            | ExprKind::Process { .. }
            | ExprKind::Sum(_)
            | ExprKind::Product(_)
            | ExprKind::Negate(_)
            | ExprKind::Power { .. }
            | ExprKind::Call { .. }
            | ExprKind::Derivative { .. }
            | ExprKind::Tuple(_)
            | ExprKind::Sized { .. }
            | ExprKind::As { .. }
            | ExprKind::Error => {
                let pieces = self.expand(expr)?;
                self.power(pieces, exponent, span)
            }
        }
    }

    /// A power: of one product exactly, a whole one of a sum multiplied out, any other
    /// expanded.
    pub(super) fn power(&mut self, pieces: Vec<Piece>, exponent: Exponent, span: Span) -> Pieces {
        let mut pieces = collected(pieces);
        if let [single] = pieces.as_slice() {
            return single_power(single, exponent, span);
        }
        if pieces.is_empty() {
            return match exponent.is_negative() {
                true => Err(ModelError::DividesByZero { span }),
                false => Ok(Vec::new()),
            };
        }
        if !exponent.is_whole() || exponent.is_negative() {
            return self.expanded_power(pieces, exponent, span);
        }
        if exponent == Exponent::ONE {
            return Ok(pieces);
        }
        if exponent.numer() > limits::SUM_POWER {
            return Err(ModelError::TooLarge { span });
        }
        let factor = std::mem::take(&mut pieces);
        let mut result = vec![Piece::plain(Product::number(Number::one()))];
        for _ in 0..exponent.numer().to_usize().unwrap_or(0) {
            result = collected(multiplied(&result, &factor, self.highest(), span)?);
        }
        Ok(result)
    }
}

/// Whether an expression names a field or a coordinate.
fn holds_varying(expr: &ast::Expr, model: &Model) -> bool {
    let mut varies = false;
    names::visit_names(expr, &mut |name, _| {
        varies |= matches!(
            model.meaning(name, None),
            Some(Meaning::Field(_) | Meaning::Coordinate(_) | Meaning::Vector(_))
        );
    });
    varies
}

/// Whether a product holds numbers and symbols only.
pub(super) fn is_constant(product: &Product) -> bool {
    product
        .factors
        .iter()
        .all(|factor| matches!(factor.base, Base::Symbol(_)))
}

/// An exponent times the power between a function's name and its bracket.
fn times(exponent: Exponent, order: Option<u32>, span: Span) -> Result<Exponent, ModelError> {
    Exponent::whole(i64::from(order.unwrap_or(1)))
        .and_then(|order| exponent.times(order))
        .map_err(|_| ModelError::TooLarge { span })
}

fn single_power(single: &Piece, exponent: Exponent, span: Span) -> Pieces {
    let number = &single.product.number;
    if number.is_zero() && exponent.is_negative() {
        return Err(ModelError::DividesByZero { span });
    }
    if number.is_negative() && !exponent.is_whole() {
        return Err(ModelError::OutOfDomain {
            span,
            what: "no root of a negative number",
        });
    }
    let product = single
        .product
        .power(exponent)
        .map_err(|_| ModelError::TooLarge { span })?;
    Ok(vec![single.with_product(product)])
}

pub(super) fn not_a_term(span: Span) -> ModelError {
    ModelError::NotAProduct {
        span,
        what: Wanted::Term,
    }
}
