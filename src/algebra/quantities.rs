//! What fields and coordinates are made of in one setting: sizes, lengths, amplitudes.

use crate::algebra::monomial::{Monomial, Symbol};
use crate::number::TooLarge;

/// A field, by its place in order of declaration.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct FieldId(pub u32);

/// A coordinate, by its place in order of declaration.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct CoordinateId(pub u32);

/// A size twice: as the user named it, and with derived products replaced.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Size {
    /// In the user's own scales, `U/T`.
    pub written: Monomial,
    /// In scales and constants that are no derived products, `U^2/L`.
    pub resolved: Monomial,
}

/// How a quantity varies along one coordinate.
#[derive(Debug, Clone)]
pub struct Variation {
    /// The coordinate.
    pub coordinate: CoordinateId,
    /// The length over which it varies.
    pub length: Size,
    /// By how much it varies over that length.
    pub amplitude: Size,
    /// The nominal value of the amplitude, for choosing the smallest; `NaN` while open.
    pub nominal_amplitude: f64,
    /// Whether the amplitude is one of its own, not the size of the field.
    pub has_own_amplitude: bool,
}

/// A field, or a coordinate taken as a field.
#[derive(Debug, Clone)]
pub struct Quantity {
    /// Its name.
    pub name: String,
    /// Its size, or level.
    pub size: Size,
    /// How it varies; along a coordinate that is missing here it is constant.
    pub variations: Vec<Variation>,
}

impl Quantity {
    /// The length of a coordinate along itself; its size stands in where it has none.
    pub fn length(&self, along: CoordinateId) -> &Size {
        self.along(along)
            .map_or(&self.size, |variation| &variation.length)
    }

    /// How it varies along a coordinate, if it does.
    pub fn along(&self, coordinate: CoordinateId) -> Option<&Variation> {
        self.variations
            .iter()
            .find(|variation| variation.coordinate == coordinate)
    }
}

/// Where a coordinate counts from.
#[derive(Debug, Clone)]
pub struct Origin {
    /// The origin, with its sign.
    pub level: Monomial,
    /// Whether it is 0.
    pub is_zero: bool,
    /// The coordinate as it counts from there; itself where the origin is 0.
    pub displacement: CoordinateId,
}

/// All fields and coordinates of a model in one setting.
#[derive(Debug, Clone, Default)]
pub struct Quantities {
    /// The fields in order of declaration.
    pub fields: Vec<Quantity>,
    /// The coordinates in order of declaration; behind them the displacements of those
    /// about an origin, each a coordinate that varies along its own.
    pub coordinates: Vec<Quantity>,
    /// The origins of coordinates that have one, by the place of the coordinate.
    pub origins: Vec<Option<Origin>>,
    /// What each scale or constant stands for: itself, or a product of others.
    pub replacements: Vec<Option<Monomial>>,
}

impl Quantities {
    /// The product that a derived symbol stands for, with derived ones in it replaced.
    pub fn replacement(&self, symbol: &Symbol) -> Option<&Monomial> {
        match symbol {
            Symbol::Declared(id) => self.replacements.get(id.idx())?.as_ref(),
            Symbol::Function(_) => None,
        }
    }

    /// The size of a symbol.
    pub fn symbol_size(&self, symbol: &Symbol) -> Size {
        let written = Monomial::symbol(symbol.clone());
        let resolved = self.replacement(symbol).unwrap_or(&written).clone();
        Size { written, resolved }
    }

    /// A size from what was written.
    ///
    /// # Errors
    /// [`TooLarge`] beyond the limits.
    pub fn size(&self, written: Monomial) -> Result<Size, TooLarge> {
        let resolved = written.replaced(|symbol| self.replacement(symbol))?;
        Ok(Size { written, resolved })
    }

    /// A field.
    pub fn field(&self, id: FieldId) -> &Quantity {
        &self.fields[id.0 as usize]
    }

    /// The origin of a coordinate that has one.
    pub fn origin(&self, id: CoordinateId) -> Option<&Origin> {
        self.origins.get(id.0 as usize)?.as_ref()
    }

    /// A coordinate.
    pub fn coordinate(&self, id: CoordinateId) -> &Quantity {
        &self.coordinates[id.0 as usize]
    }
}
