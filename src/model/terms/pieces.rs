//! Products on their way to a term: what multiplying, naming and collecting them means.

use std::collections::BTreeMap;

use crate::algebra::product::{Base, Factors, Product};
use crate::algebra::quantities::FieldId;
use crate::algebra::series::Graded;
use crate::limits;
use crate::model::errors::ModelError;
use crate::model::terms::Side;
use crate::number::Number;
use crate::source::Span;
use crate::syntax::ast;

/// The process of a term on its way.
#[derive(Debug, Clone, PartialEq, Eq)]
pub(super) struct Tag {
    pub(super) name: String,
    pub(super) span: Span,
    /// Given by `D_t`, so that a name around it wins.
    pub(super) is_made: bool,
}

/// A product on its way, with its process and its order in the ratios of expansions.
#[derive(Debug, Clone)]
pub(super) struct Piece {
    pub(super) product: Product,
    /// The order in the ratios of what was expanded.
    pub(super) degree: u32,
    pub(super) tag: Option<Tag>,
    pub(super) splits: Splits,
}

/// The split fields that a product comes from.
///
/// A smaller part that stands as a factor is no order of its own. Beside an expansion of
/// the same field it tells how far the product is complete: `rho*(1/rho)` to second order
/// ends with a third power that the next order of the quotient takes away.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub(super) struct Splits {
    /// How many factors are smaller parts of a field.
    pub(super) smaller: Vec<(FieldId, u32)>,
    /// The fields that were expanded.
    pub(super) expanded: Vec<FieldId>,
}

impl Splits {
    /// A smaller part of a field.
    pub(super) fn smaller(field: FieldId) -> Splits {
        Splits {
            smaller: vec![(field, 1)],
            expanded: Vec::new(),
        }
    }

    /// Those of an expansion of a sum of such products.
    pub(super) fn of_expanded(pieces: &[Piece]) -> Splits {
        let mut expanded: Vec<FieldId> = pieces
            .iter()
            .map(|piece| &piece.splits)
            .flat_map(|own| {
                let smaller = own.smaller.iter().map(|(field, _)| *field);
                smaller.chain(own.expanded.iter().copied())
            })
            .collect();
        expanded.sort_unstable();
        expanded.dedup();
        Splits {
            smaller: Vec::new(),
            expanded,
        }
    }

    /// Those of a product of two.
    pub(super) fn and(&self, other: &Splits) -> Splits {
        let mut found = self.clone();
        for (field, n) in &other.smaller {
            match found.smaller.iter_mut().find(|(own, _)| own == field) {
                Some((_, own)) => *own = own.saturating_add(*n),
                None => found.smaller.push((*field, *n)),
            }
        }
        for field in &other.expanded {
            if !found.expanded.contains(field) {
                found.expanded.push(*field);
            }
        }
        found
    }

    /// The orders that smaller parts count for.
    fn orders(&self) -> u32 {
        let counting = self
            .smaller
            .iter()
            .filter(|(field, _)| self.expanded.contains(field));
        counting.map(|(_, n)| *n).fold(0, u32::saturating_add)
    }
}

pub(super) type Pieces = Result<Vec<Piece>, ModelError>;

impl Piece {
    /// Without process, and of order 0.
    pub(super) fn plain(product: Product) -> Piece {
        Piece {
            product,
            degree: 0,
            tag: None,
            splits: Splits::default(),
        }
    }

    /// Its order with the smaller parts that stand beside an expansion of their field: up to
    /// the order of the expansions all products of one such order are there.
    pub(super) fn whole_order(&self) -> u32 {
        self.degree.saturating_add(self.splits.orders())
    }

    /// Another product in its place.
    pub(super) fn with_product(&self, product: Product) -> Piece {
        Piece {
            product,
            degree: self.degree,
            tag: self.tag.clone(),
            splits: self.splits.clone(),
        }
    }

    pub(super) fn negated(&self) -> Piece {
        self.with_product(self.product.negated())
    }

    /// The amount of a product: what varies in it, and the constants with it.
    pub(super) fn absolute(&self) -> Piece {
        let product = &self.product;
        let varies = product
            .factors
            .iter()
            .any(|factor| !matches!(factor.base, Base::Symbol(_)));
        let mut amount = if varies {
            Product::base(Base::Absolute(Box::new(product.factors.clone())))
        } else {
            product.clone()
        };
        amount.number = product.number.abs();
        self.with_product(amount)
    }
}

/// A series whose terms all belong to one process and come from these fields.
pub(super) fn tagged(series: Vec<Graded>, tag: Option<&Tag>, splits: &Splits) -> Vec<Piece> {
    let piece = |term: Graded| Piece {
        product: term.product,
        degree: term.degree,
        tag: tag.cloned(),
        splits: splits.clone(),
    };
    series.into_iter().map(piece).collect()
}

pub(super) fn written_tag(process: &ast::ProcessName) -> Tag {
    Tag {
        name: process.text.clone(),
        span: process.span,
        is_made: false,
    }
}

pub(super) fn made_tag(name: &str, span: Span) -> Tag {
    Tag {
        name: name.to_owned(),
        span,
        is_made: true,
    }
}

/// Gives pieces a process: the innermost written name stays, one that `D_t` gave does not.
pub(super) fn named(pieces: Vec<Piece>, tag: Option<&Tag>) -> Vec<Piece> {
    let Some(tag) = tag else { return pieces };
    let pieces = pieces.into_iter().map(|piece| {
        let keeps = match &piece.tag {
            Some(present) => !present.is_made || tag.is_made,
            None => false,
        };
        let tag = if keeps { piece.tag } else { Some(tag.clone()) };
        Piece { tag, ..piece }
    });
    pieces.collect()
}

/// The products of two sums up to an order in the ratios of expansions.
pub(super) fn multiplied(left: &[Piece], right: &[Piece], highest: u32, span: Span) -> Pieces {
    if left.len().saturating_mul(right.len()) > limits::TERMS {
        return Err(ModelError::TooLarge { span });
    }
    let mut pieces = Vec::with_capacity(left.len() * right.len());
    for a in left {
        for b in right {
            let tag = met(a.tag.as_ref(), b.tag.as_ref())?;
            let mut piece = Piece {
                product: Product::number(Number::one()),
                degree: a.degree.saturating_add(b.degree),
                tag,
                splits: a.splits.and(&b.splits),
            };
            if piece.degree > highest {
                continue;
            }
            piece.product = a
                .product
                .times(&b.product)
                .map_err(|_| ModelError::TooLarge { span })?;
            pieces.push(piece);
        }
    }
    Ok(pieces)
}

/// The process of a product: that of the factor which has one.
pub(super) fn met(a: Option<&Tag>, b: Option<&Tag>) -> Result<Option<Tag>, ModelError> {
    match (a, b) {
        (Some(a), Some(b)) if a.name != b.name => Err(ModelError::TwoProcesses {
            first: (a.name.clone(), a.span),
            second: (b.name.clone(), b.span),
        }),
        (Some(tag), _) | (None, Some(tag)) => Ok(Some(tag.clone())),
        (None, None) => Ok(None),
    }
}

/// The one process of all pieces that have one.
pub(super) fn common_tag(pieces: &[Piece]) -> Result<Option<Tag>, ModelError> {
    pieces.iter().try_fold(None::<Tag>, |tag, piece| {
        met(tag.as_ref(), piece.tag.as_ref())
    })
}

/// Collects like terms of one process and one order; what cancels goes.
pub(super) fn collected(pieces: Vec<Piece>) -> Vec<Piece> {
    let mut places: BTreeMap<(Option<String>, u32, Factors), Vec<usize>> = BTreeMap::new();
    let mut sum: Vec<Piece> = Vec::with_capacity(pieces.len());
    for piece in pieces {
        let name = piece.tag.as_ref().map(|tag| tag.name.clone());
        let key = (name, piece.degree, piece.product.likeness());
        let rivals = places.entry(key).or_default();
        if !add(&mut sum, rivals, &piece) {
            rivals.push(sum.len());
            sum.push(piece);
        }
    }
    if sum.len() > 1 {
        sum.retain(|piece| !piece.product.number.is_zero());
    }
    sum
}

/// Collects like terms of one process whatever their orders; each has the lowest then.
pub(super) fn merged(pieces: Vec<Piece>) -> Vec<Piece> {
    // The side has no say here.
    let sided = pieces.into_iter().map(|piece| (Side::Left, piece));
    let level = leveled(sided.collect()).into_iter();
    collected(level.map(|(_, piece)| piece).collect())
}

/// Like terms at the lowest of their orders, so that they are collected together.
pub(super) fn leveled(pieces: Vec<Sided>) -> Vec<Sided> {
    let mut lowest: BTreeMap<Factors, u32> = BTreeMap::new();
    for (_, piece) in &pieces {
        let degree = lowest.entry(piece.product.likeness()).or_insert(u32::MAX);
        *degree = (*degree).min(piece.degree);
    }
    let level = |(side, piece): Sided| {
        let degree = lowest.get(&piece.product.likeness()).copied();
        let degree = degree.unwrap_or(piece.degree);
        (side, Piece { degree, ..piece })
    };
    pieces.into_iter().map(level).collect()
}

/// Adds a piece to the first of these places whose number has a common form with its own.
fn add(sum: &mut [Piece], places: &[usize], piece: &Piece) -> bool {
    for idx in places {
        let found = &mut sum[*idx];
        if let Some(number) = found.product.number.plus(&piece.product.number) {
            found.product.number = number;
            return true;
        }
    }
    false
}

/// A piece with the side on which it stands.
pub(super) type Sided = (Side, Piece);

/// Collects like terms of one order over both sides, where the first of them stands. Like
/// terms of different processes stay apart, unless they cancel exactly.
pub(super) fn gathered(pieces: Vec<Sided>) -> Vec<Sided> {
    let mut places: BTreeMap<(u32, Factors), Vec<usize>> = BTreeMap::new();
    let mut sum: Vec<Sided> = Vec::with_capacity(pieces.len());
    for (side, piece) in pieces {
        let key = (piece.degree, piece.product.likeness());
        let rivals = places.entry(key).or_default();
        let like = rivals.iter().copied().find(|idx| {
            let (_, found) = &sum[*idx];
            name_of(found) == name_of(&piece)
        });
        match like.and_then(|idx| Some((idx, total(&sum[idx], side, &piece)?))) {
            Some((idx, number)) => {
                sum[idx].1.product.number = number;
            }
            None => {
                rivals.push(sum.len());
                sum.push((side, piece));
            }
        }
    }
    for rivals in places.values() {
        cancel(&mut sum, rivals);
    }
    sum.retain(|(_, piece)| !piece.product.number.is_zero());
    sum
}

/// The number of a piece with another added to it, the other brought to its side.
fn total((side, piece): &Sided, other_side: Side, other: &Piece) -> Option<Number> {
    let number = if *side == other_side {
        other.product.number.clone()
    } else {
        other.product.number.negated()
    };
    piece.product.number.plus(&number)
}

/// Takes out like terms that cancel: all of them, or pairs.
fn cancel(sum: &mut [Sided], places: &[usize]) {
    for (place, idx) in places.iter().enumerate() {
        for other in &places[place + 1..] {
            let (side, piece) = sum[*other].clone();
            if total(&sum[*idx], side, &piece).is_some_and(|number| number.is_zero()) {
                let zero = Number::whole(0);
                sum[*idx].1.product.number = zero.clone();
                sum[*other].1.product.number = zero;
                break;
            }
        }
    }
    let all = places.iter().try_fold(None::<Sided>, |found, idx| {
        let (side, piece) = &sum[*idx];
        Some(Some(match found {
            None => (*side, piece.clone()),
            Some((first, mut found)) => {
                found.product.number = total(&(first, found.clone()), *side, piece)?;
                (first, found)
            }
        }))
    });
    if let Some(Some((_, all))) = all
        && all.product.number.is_zero()
    {
        for idx in places {
            sum[*idx].1.product.number = Number::whole(0);
        }
    }
}

fn name_of(piece: &Piece) -> Option<&str> {
    piece.tag.as_ref().map(|tag| tag.name.as_str())
}

/// Takes out what cancels over all orders, like the last power of `rho*(1/rho)`.
pub(super) fn without_cancelling(pieces: Vec<Sided>) -> Vec<Sided> {
    let mut totals: BTreeMap<(Option<String>, Factors), Option<Sided>> = BTreeMap::new();
    let key = |piece: &Piece| (name_of(piece).map(str::to_owned), piece.product.likeness());
    for (side, piece) in &pieces {
        let found = totals.entry(key(piece)).or_insert_with(|| {
            Some((*side, piece.with_product(Product::number(Number::whole(0)))))
        });
        if let Some(sum) = found {
            match total(sum, *side, piece) {
                Some(number) => sum.1.product.number = number,
                // Numbers without a common form do not cancel.
                None => *found = None,
            }
        }
    }
    let cancels = |piece: &Piece| {
        let found = totals.get(&key(piece)).and_then(Option::as_ref);
        found.is_some_and(|(_, sum)| sum.product.number.is_zero())
    };
    pieces
        .into_iter()
        .filter(|(_, piece)| piece.product.number.is_zero() || !cancels(piece))
        .collect()
}
