//! Derivatives of products on their way, `D_t` among them.

use super::Maker;
use super::expand::not_a_term;
use super::pieces::{Piece, Pieces, made_tag, multiplied, named};
use crate::algebra::calculus;
use crate::algebra::product::{Base, Derivative, Product};
use crate::algebra::quantities::CoordinateId;
use crate::limits;
use crate::model::Meaning;
use crate::model::errors::ModelError;
use crate::model::frames;
use crate::source::Span;
use crate::syntax::ast::{self, ExprKind};

impl Maker<'_> {
    pub(super) fn differentiated(
        &mut self,
        pieces: &[Piece],
        along: CoordinateId,
        order: u32,
        span: Span,
    ) -> Pieces {
        let mut pieces = pieces.to_vec();
        for _ in 0..order {
            let mut next = Vec::new();
            for piece in &pieces {
                next.extend(self.derivative(piece, along, span)?);
            }
            pieces = next;
            if pieces.len() > limits::TERMS {
                return Err(ModelError::TooLarge { span });
            }
        }
        Ok(pieces)
    }

    fn derivative(&mut self, piece: &Piece, along: CoordinateId, span: Span) -> Pieces {
        let found = calculus::differentiate(&piece.product, along, &self.setting.quantities)
            .map_err(|_| ModelError::TooLarge { span })?;
        if found.is_empty() && !piece.product.number.is_zero() {
            let text = self.vanished_text(&piece.product, along);
            self.vanished.push(text);
        }
        let pieces = found.into_iter();
        Ok(pieces
            .map(|product| {
                let smaller = self.smaller_left(&piece.splits, &product);
                let mut piece = piece.with_product(product);
                piece.splits.smaller = smaller;
                piece
            })
            .collect())
    }

    fn vanished_text(&self, product: &Product, along: CoordinateId) -> String {
        let whole = Product::base(Base::Derivative(Box::new(Derivative {
            operand: product.factors.clone(),
            by: vec![(along, 1)],
        })));
        self.speller().product(&whole)
    }

    pub(super) fn material(&mut self, pieces: &[Piece], span: Span) -> Pieces {
        let mut sum = Vec::new();
        match self.model.meaning("t", None) {
            Some(Meaning::Coordinate(time)) => {
                let tendency = self.differentiated(pieces, time, 1, span)?;
                sum.extend(named(tendency, Some(&made_tag("tendency", span))));
            }
            Some(
                Meaning::Symbol(_) | Meaning::Field(_) | Meaning::Group(_) | Meaning::Vector(_),
            )
            | None => {
                self.has_no_time.get_or_insert(span);
            }
        }
        sum.extend(self.advection(pieces, span)?);
        Ok(sum)
    }

    /// Advection by the declared velocity.
    pub(super) fn advection(&mut self, pieces: &[Piece], span: Span) -> Pieces {
        let mut sum = Vec::new();
        let model = self.model;
        let Some(velocity) = &model.velocity else {
            return Err(ModelError::NoVelocity { span });
        };
        for (field, along) in &velocity.components {
            let Some(Meaning::Coordinate(along)) = model.meaning(&along.text, None) else {
                return Err(not_a_term(span));
            };
            let name = ast::Expr {
                kind: ExprKind::Name(field.text.clone()),
                span: field.span,
            };
            let mut carrier = self.name(&name, &field.text)?;
            if let Some(metric) = frames::metric(along, model, span) {
                carrier = multiplied(&carrier, &self.expand(&metric)?, self.highest(), span)?;
            }
            let gradient = self.differentiated(pieces, along, 1, span)?;
            let carried = multiplied(&carrier, &gradient, self.highest(), span)?;
            sum.extend(named(carried, Some(&made_tag("advection", span))));
        }
        Ok(sum)
    }
}
