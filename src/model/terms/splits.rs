//! Which parts of a split field are the smaller ones, and how many of them a product holds.

use super::Maker;
use super::pieces::{Piece, Splits};
use crate::algebra::product::{Base, Product};
use crate::algebra::quantities::FieldId;

impl Maker<'_> {
    /// Marks all parts of a split field but the largest.
    pub(super) fn mark_smaller(&self, field: FieldId, parts: &mut [Piece]) {
        let largest = self.largest(parts);
        for (idx, part) in parts.iter_mut().enumerate() {
            if idx != largest {
                part.splits = Splits::smaller(field);
            }
        }
    }

    /// How many smaller parts are left as factors after a derivative took others.
    pub(super) fn smaller_left(&self, splits: &Splits, product: &Product) -> Vec<(FieldId, u32)> {
        let mut left = Vec::new();
        for (field, n) in &splits.smaller {
            let mut parts = Vec::new();
            self.split(*field, false, &mut parts);
            let largest = self.largest(&parts);
            let smaller: Vec<&Base> = parts
                .iter()
                .enumerate()
                .filter(|(idx, _)| *idx != largest)
                .filter_map(|(_, part)| part.product.factors.first())
                .map(|factor| &factor.base)
                .collect();
            let factors = product.factors.iter();
            let own = factors.filter(|factor| smaller.contains(&&factor.base));
            let found: i64 = own.map(|factor| factor.power.numer().max(0)).sum();
            let found = u32::try_from(found).unwrap_or(u32::MAX);
            if found > 0 {
                left.push((*field, found.min(*n)));
            }
        }
        left
    }
}
