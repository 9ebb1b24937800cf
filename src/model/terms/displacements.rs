//! A coordinate about an origin less that origin, `phi - phi_0`, is its displacement.

use super::Maker;
use super::pieces::{Piece, Pieces};
use crate::algebra::product::{Base, Product};
use crate::algebra::quantities::CoordinateId;
use crate::model::errors::ModelError;
use crate::number::{Exponent, TooLarge};
use crate::source::Span;

impl Maker<'_> {
    /// A sum in which every pair of a coordinate and its origin is a displacement.
    pub(super) fn displaced(&self, sum: Vec<Piece>, span: Span) -> Pieces {
        let mut origins = self.setting.quantities.origins.iter().flatten();
        if origins.all(|origin| origin.is_zero) {
            return Ok(sum);
        }
        let mut found: Vec<Piece> = Vec::with_capacity(sum.len());
        let mut left = sum;
        while !left.is_empty() {
            let piece = left.remove(0);
            let pair = self
                .pair(&piece, &left)
                .map_err(|TooLarge| ModelError::TooLarge { span })?;
            found.push(match pair {
                Some((place, displaced)) => {
                    left.remove(place);
                    displaced
                }
                None => piece,
            });
        }
        Ok(found)
    }

    /// What takes the origin from a piece, or the coordinate from its origin, by its place,
    /// and the displacement that is left.
    fn pair(&self, piece: &Piece, others: &[Piece]) -> Result<Option<(usize, Piece)>, TooLarge> {
        for (place, other) in others.iter().enumerate() {
            let is_alike = other.degree == piece.degree && other.tag == piece.tag;
            if !is_alike {
                continue;
            }
            for (with, without) in [(piece, other), (other, piece)] {
                if let Some(product) = self.displacement(&with.product, &without.product)? {
                    return Ok(Some((place, with.with_product(product))));
                }
            }
        }
        Ok(None)
    }

    /// The sum of two products as one with a displacement, if the second takes the origin
    /// from the coordinate in the first.
    fn displacement(&self, with: &Product, without: &Product) -> Result<Option<Product>, TooLarge> {
        let quantities = &self.setting.quantities;
        for id in coordinates(with) {
            let Some(origin) = quantities.origin(id).filter(|origin| !origin.is_zero) else {
                continue;
            };
            let over = Product::base(Base::Coordinate(id)).power(Exponent::ONE.negated())?;
            let rest = with.times(&over)?;
            let level = rest.times(&Product::constants(&origin.level))?;
            let taken = level.negated().resolved(quantities)?;
            let own = without.resolved(quantities)?;
            if taken.is_like(&own) && taken.number == own.number {
                let displacement = Product::base(Base::Coordinate(origin.displacement));
                return Ok(Some(rest.times(&displacement)?));
            }
        }
        Ok(None)
    }
}

/// The coordinates that stand once in a product.
fn coordinates(product: &Product) -> impl Iterator<Item = CoordinateId> {
    product
        .factors
        .iter()
        .filter_map(|factor| match factor.base {
            Base::Coordinate(id) if factor.power == Exponent::ONE => Some(id),
            Base::Coordinate(_)
            | Base::Symbol(_)
            | Base::Field(_)
            | Base::Derivative(_)
            | Base::Absolute(_)
            | Base::Sized(_)
            | Base::Mean(_)
            | Base::Function(_) => None,
        })
}
