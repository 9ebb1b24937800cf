//! Expressions with a size of their own, `(A + B ~ D)`.

use std::sync::Arc;

use super::Maker;
use super::pieces::Piece;
use super::written::unnamed;
use crate::algebra::product::{Base, Product, Sized};
use crate::algebra::quantities::{FieldId, Size, Variation};
use crate::model::errors::{ModelError, Product as Wanted};
use crate::model::{Meaning, names, values};
use crate::source::Span;
use crate::syntax::ast::{self, ExprKind};
use crate::syntax::print;

impl Maker<'_> {
    pub(super) fn sized(
        &mut self,
        whole: &ast::Expr,
        inside: &ast::Expr,
        size: &ast::Expr,
    ) -> Result<Piece, ModelError> {
        let span = size.span;
        let found = values::monomial(size, self).map_err(|fault| {
            fault
                .error(Wanted::Size)
                .unwrap_or(ModelError::NotAProduct {
                    span,
                    what: Wanted::Size,
                })
        })?;
        let found = self
            .setting
            .quantities
            .size(found.abs())
            .map_err(|_| ModelError::TooLarge { span })?;
        self.compare_with_parts(&found, inside, size.span)?;
        let fields = self.fields_in(inside);
        let variations = self.shortest_variations(&fields, &found);
        let sized = Sized {
            text: print::expression(&unnamed(whole)),
            size: found,
            variations,
            fields,
            place: whole.span.start,
        };
        Ok(Piece::plain(Product::base(Base::Sized(Arc::new(sized)))))
    }

    /// The size must not lie above the largest part; how far below is kept for reports.
    fn compare_with_parts(
        &mut self,
        size: &Size,
        inside: &ast::Expr,
        span: Span,
    ) -> Result<(), ModelError> {
        let nominal = self.setting.nominal(&size.resolved);
        let largest = self.largest_part(inside);
        let Some(largest) = largest.filter(|largest| largest.is_finite() && nominal.is_finite())
        else {
            return Ok(());
        };
        if nominal > largest * (1.0 + 1e-12) {
            let dimension = self.made.unit.clone();
            return Err(ModelError::CancelsUpwards {
                span,
                size: nominal,
                largest,
                unit: if dimension == "1" {
                    String::new()
                } else {
                    "(SI units)".to_owned()
                },
            });
        }
        self.below_parts = Some(nominal / largest);
        Ok(())
    }

    /// The nominal size of the largest part of an expression, where it can be told.
    fn largest_part(&mut self, inside: &ast::Expr) -> Option<f64> {
        let root = match &inside.kind {
            ExprKind::Call {
                function,
                order: None,
                arguments,
            } if function.text == "sqrt" => arguments.first(),
            ExprKind::Bracket(inside) => return self.largest_part(inside),
            _ => None,
        };
        if let Some(argument) = root {
            return self.largest_part(argument).map(f64::sqrt);
        }
        let (vanished, zeros) = (self.vanished.len(), self.zeros.clone());
        let pieces = self.expand(inside).ok();
        self.vanished.truncate(vanished);
        self.zeros = zeros;
        pieces?
            .iter()
            .filter_map(|piece| piece.product.size(&self.setting.quantities).ok())
            .map(|size| self.setting.nominal(&size.resolved))
            .reduce(f64::max)
    }

    fn fields_in(&self, expr: &ast::Expr) -> Vec<FieldId> {
        let mut fields = Vec::new();
        names::visit_names(expr, &mut |name, _| {
            if let Some(Meaning::Field(id)) = self.model.meaning(name, None)
                && !fields.contains(&id)
            {
                fields.push(id);
            }
        });
        fields
    }

    /// It varies as its parts do, over the shortest of their lengths.
    fn shortest_variations(&self, fields: &[FieldId], size: &Size) -> Vec<Variation> {
        let mut shortest: Vec<Variation> = Vec::new();
        let quantities = &self.setting.quantities;
        for variation in fields
            .iter()
            .flat_map(|id| &quantities.field(*id).variations)
        {
            let length = self.setting.nominal(&variation.length.resolved);
            let own = Variation {
                amplitude: size.clone(),
                nominal_amplitude: self.setting.nominal(&size.resolved),
                has_own_amplitude: false,
                ..variation.clone()
            };
            match shortest
                .iter_mut()
                .find(|found| found.coordinate == own.coordinate)
            {
                None => shortest.push(own),
                Some(found) if length < self.setting.nominal(&found.length.resolved) => {
                    *found = own
                }
                Some(_) => {}
            }
        }
        shortest
    }
}
