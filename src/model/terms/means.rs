//! Means: `mean` is linear, stands inside derivatives wherever it can, takes factors that
//! are means themselves out of a product, and is 0 of a fluctuation.

use super::Maker;
use super::pieces::{Piece, Pieces, collected, made_tag, multiplied, named, written_tag};
use super::written::holds_material;
use crate::algebra::product::{Base, Derivative, Factor, Product};
use crate::model::names::{self, Call};
use crate::model::{Meaning, Model};
use crate::number::{Exponent, Number};
use crate::source::Span;
use crate::syntax::ast::{self, ExprKind, Operator, Sign};

impl Maker<'_> {
    /// The mean of an expression.
    pub(super) fn mean(&mut self, expr: &ast::Expr) -> Pieces {
        let span = expr.span;
        match &expr.kind {
            ExprKind::Bracket(inside) => self.mean(inside),
            ExprKind::Negate(inside) => Ok(self.mean(inside)?.iter().map(Piece::negated).collect()),
            ExprKind::Sum(terms) => {
                let mut sum = Vec::new();
                for (sign, term) in terms {
                    let pieces = self.mean(term)?;
                    sum.extend(pieces.into_iter().map(|piece| match sign {
                        Sign::Plus => piece,
                        Sign::Minus => piece.negated(),
                    }));
                }
                Ok(sum)
            }
            ExprKind::As { expr, process } => {
                Ok(named(self.mean(expr)?, Some(&written_tag(process))))
            }
            ExprKind::Product(factors) => self.mean_of_product(factors, span),
            ExprKind::Derivative { operand, by } => {
                let mut pieces = self.mean(operand)?;
                for (name, order) in by.iter().rev() {
                    if let Some(Meaning::Coordinate(id)) = self.model.meaning(&name.text, None) {
                        pieces = self.differentiated(&pieces, id, *order, span)?;
                    }
                }
                Ok(pieces)
            }
            ExprKind::Call {
                function,
                order,
                arguments,
            } => match (
                names::call(&function.text, self.model),
                arguments.as_slice(),
            ) {
                (Call::Derivative(id), [operand]) => {
                    let pieces = self.mean(operand)?;
                    self.differentiated(&pieces, id, order.unwrap_or(1), span)
                }
                (Call::Material, [operand]) => self.mean_of_material(operand, span),
                (
                    Call::Derivative(_)
                    | Call::Material
                    | Call::Mean
                    | Call::Vector
                    | Call::Function(_)
                    | Call::Unknown,
                    _,
                ) => self.mean_of_pieces(expr),
            },
            ExprKind::Number(_)
            | ExprKind::Name(_)
            | ExprKind::Process { .. }
            | ExprKind::Power { .. }
            | ExprKind::Tuple(_)
            | ExprKind::Sized { .. }
            | ExprKind::Error => self.mean_of_pieces(expr),
        }
    }

    fn mean_of_pieces(&mut self, expr: &ast::Expr) -> Pieces {
        let pieces = self.expand(expr)?;
        self.averaged(&collected(pieces), expr.span)
    }

    /// A product of which one factor alone fluctuates is that factor's mean times the rest.
    fn mean_of_product(&mut self, factors: &[(Operator, ast::Expr)], span: Span) -> Pieces {
        let fluctuating: Vec<usize> = (0..factors.len())
            .filter(|idx| fluctuates(&factors[*idx].1, self.model))
            .collect();
        let [single] = fluctuating.as_slice() else {
            let pieces = self.product(factors, span)?;
            return self.averaged(&collected(pieces), span);
        };
        let (operator, inside) = &factors[*single];
        if *operator == Operator::Over {
            let pieces = self.product(factors, span)?;
            return self.averaged(&collected(pieces), span);
        }
        let mean = self.mean(inside)?;
        let before = self.product(&factors[..*single], span)?;
        let behind = self.product(&factors[single + 1..], span)?;
        let pieces = multiplied(&before, &mean, self.highest(), span)?;
        multiplied(&pieces, &behind, self.highest(), span)
    }

    fn mean_of_material(&mut self, operand: &ast::Expr, span: Span) -> Pieces {
        let inside = self.mean(operand)?;
        let mut sum = match self.model.meaning("t", None) {
            Some(Meaning::Coordinate(time)) => {
                let tendency = self.differentiated(&inside, time, 1, span)?;
                named(tendency, Some(&made_tag("tendency", span)))
            }
            Some(
                Meaning::Symbol(_) | Meaning::Field(_) | Meaning::Group(_) | Meaning::Vector(_),
            )
            | None => {
                self.has_no_time.get_or_insert(span);
                Vec::new()
            }
        };
        let whole = self.expand(operand)?;
        let advection = self.advection(&whole, span)?;
        sum.extend(self.averaged(&collected(advection), span)?);
        Ok(sum)
    }

    /// The mean of products.
    pub(super) fn averaged(&mut self, pieces: &[Piece], span: Span) -> Pieces {
        let mut sum = Vec::new();
        for piece in pieces {
            sum.extend(self.mean_of_piece(piece, span)?);
        }
        Ok(sum)
    }

    fn mean_of_piece(&mut self, piece: &Piece, span: Span) -> Pieces {
        let (inside, outside): (Vec<Factor>, Vec<Factor>) = piece
            .product
            .factors
            .iter()
            .cloned()
            .partition(|factor| self.has_fluctuation(&factor.base));
        let outside = piece.with_product(Product {
            number: piece.product.number.clone(),
            factors: outside,
        });
        let mean = match inside.as_slice() {
            [] => return Ok(vec![outside]),
            [
                Factor {
                    base: Base::Derivative(derivative),
                    power,
                },
            ] if *power == Exponent::ONE => self.mean_of_derivative(derivative, span)?,
            [
                Factor {
                    base: Base::Field(_),
                    power,
                },
            ] if *power == Exponent::ONE => Vec::new(),
            factors => vec![Piece::plain(Product::base(Base::Mean(Box::new(
                factors.to_vec(),
            ))))],
        };
        multiplied(&[outside], &mean, self.highest(), span)
    }

    /// The derivative stands outside the mean.
    fn mean_of_derivative(&mut self, derivative: &Derivative, span: Span) -> Pieces {
        let operand = Piece::plain(Product {
            number: Number::one(),
            factors: derivative.operand.clone(),
        });
        let mut pieces = self.mean_of_piece(&operand, span)?;
        for (along, order) in &derivative.by {
            pieces = self.differentiated(&pieces, *along, *order, span)?;
        }
        Ok(pieces)
    }

    fn has_fluctuation(&self, base: &Base) -> bool {
        let any = |factors: &[Factor]| {
            factors
                .iter()
                .any(|factor| self.has_fluctuation(&factor.base))
        };
        match base {
            Base::Field(id) => self.model.fields[id.0 as usize].is_fluctuation,
            Base::Derivative(derivative) => any(&derivative.operand),
            Base::Absolute(inside) => any(inside),
            Base::Function(applied) => any(&applied.argument.factors),
            Base::Sized(sized) => sized
                .fields
                .iter()
                .any(|id| self.model.fields[id.0 as usize].is_fluctuation),
            Base::Symbol(_) | Base::Coordinate(_) | Base::Mean(_) => false,
        }
    }
}

/// Whether an expression holds a fluctuation, or a field split into one.
fn fluctuates(expr: &ast::Expr, model: &Model) -> bool {
    let mut found = false;
    names::visit_names(expr, &mut |name, _| found |= is_fluctuating(name, model));
    // `D_t` carries with the velocity, which may fluctuate.
    found || holds_material(expr)
}

fn is_fluctuating(name: &str, model: &Model) -> bool {
    // Splits do not go in circles, and their depth is limited.
    match model.meaning(name, None) {
        Some(Meaning::Field(id)) => {
            let info = &model.fields[id.0 as usize];
            info.is_fluctuation
                || info
                    .parts
                    .iter()
                    .any(|(_, part)| is_fluctuating(&part.text, model))
        }
        Some(
            Meaning::Symbol(_) | Meaning::Coordinate(_) | Meaning::Group(_) | Meaning::Vector(_),
        )
        | None => false,
    }
}
