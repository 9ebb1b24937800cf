//! Expressions with a size of their own, `(A + B ~ D)`.

use std::sync::Arc;

use super::Maker;
use super::pieces::Piece;
use super::written::unnamed;
use crate::algebra::monomial::Monomial;
use crate::algebra::product::{Base, Product, Sized};
use crate::algebra::quantities::{FieldId, Size, Variation};
use crate::model::errors::{ModelError, Product as Wanted};
use crate::model::{Meaning, names, values};
use crate::number::Exponent;
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
        let parts = self.part_sizes(inside).unwrap_or_default();
        self.compare_with_parts(&found, &parts, size.span)?;
        let fields = self.fields_in(inside);
        let variations = self.shortest_variations(&fields, &found);
        let sized = Sized {
            text: print::expression(&unnamed(whole)),
            size: found,
            parts,
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
        parts: &[Monomial],
        span: Span,
    ) -> Result<(), ModelError> {
        let nominal = self.setting.nominal(&size.resolved);
        let sizes = parts.iter().map(|part| self.setting.nominal(part));
        let largest = sizes.reduce(f64::max);
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

    /// The sizes of the parts of an expression, where they can be told.
    fn part_sizes(&mut self, inside: &ast::Expr) -> Option<Vec<Monomial>> {
        let root = match &inside.kind {
            ExprKind::Call {
                function,
                order: None,
                arguments,
            } if function.text == "sqrt" => arguments.first(),
            ExprKind::Bracket(inside) => return self.part_sizes(inside),
            _ => None,
        };
        if let Some(argument) = root {
            let parts = self.part_sizes(argument)?;
            let roots = parts
                .iter()
                .map(|part| part.power(Exponent::ratio(1, 2)).ok());
            return roots.collect();
        }
        let (vanished, zeros) = (self.vanished.len(), self.zeros.clone());
        let pieces = self.expand(inside).ok();
        self.vanished.truncate(vanished);
        self.zeros = zeros;
        let sizes = pieces?
            .iter()
            .filter_map(|piece| piece.product.size(&self.setting.quantities).ok())
            .map(|size| size.resolved.abs())
            .collect();
        Some(sizes)
    }

    fn fields_in(&self, expr: &ast::Expr) -> Vec<FieldId> {
        let mut fields = Vec::new();
        let mut add = |name: &str| {
            if let Some(Meaning::Field(id)) = self.model.meaning(name, None)
                && !fields.contains(&id)
            {
                fields.push(id);
            }
        };
        names::visit_names(expr, &mut |name, _| match self.model.meaning(name, None) {
            Some(Meaning::Vector(id)) => {
                for part in &self.model.vectors[id.0 as usize].components {
                    names::visit_names(part, &mut |name, _| add(name));
                }
            }
            Some(_) | None => add(name),
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
