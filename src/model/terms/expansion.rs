//! Nonlinear places: powers and functions of sums expanded about their largest part, and
//! those of a coordinate about an origin expanded in its displacement.
//!
//! Sums are expanded where they stand. A power or a function of a coordinate stays as it
//! is until its term is complete, so that factors cancel exactly and derivatives go by
//! the chain rule; `resolved` expands it then.

use std::sync::Arc;

use super::expand::is_constant;
use super::pieces::{Piece, Pieces, Splits, collected, common_tag, tagged};
use super::{Maker, SmallRatio};
use crate::algebra::monomial::{self, Monomial, Symbol, SymbolId};
use crate::algebra::product::{Applied, Base, Factor, Product};
use crate::algebra::quantities::{CoordinateId, Origin};
use crate::algebra::series::{self, Elementary, Graded, Series};
use crate::model::errors::ModelError;
use crate::model::settings::Variable;
use crate::model::values::{self, Fault, Value};
use crate::number::{Exponent, Number, TooLarge};
use crate::source::Span;
use crate::units::{Function, Range};

/// The largest ratio in which is expanded: 1/√10.
fn largest_ratio() -> f64 {
    0.1_f64.sqrt() * (1.0 + 1e-12)
}

/// What is small in an expansion, for telling of a ratio that is not.
struct Small<'a> {
    part: &'a Product,
    /// `None`: beside 1.
    whole: Option<&'a Product>,
    ratio: f64,
}

impl Maker<'_> {
    // Sums ------------------------------------------------------------------------------------

    /// A power of a sum, about its largest part.
    pub(super) fn expanded_power(
        &mut self,
        pieces: Vec<Piece>,
        exponent: Exponent,
        span: Span,
    ) -> Pieces {
        let tag = common_tag(&pieces)?;
        let splits = Splits::of_expanded(&pieces);
        let (leading, small) = self.parted(pieces);
        if leading.number.is_negative() && !exponent.is_whole() {
            return Err(ModelError::OutOfDomain {
                span,
                what: "no root of a negative number",
            });
        }
        self.check_ratios(&leading, &small, span);
        let series = series::power(&leading, &small, exponent, self.highest())
            .map_err(|_| ModelError::TooLarge { span })?;
        Ok(tagged(series, tag.as_ref(), &splits))
    }

    /// The amount of a sum: the largest part has its sign.
    pub(super) fn amount(&mut self, pieces: Vec<Piece>, span: Span) -> Pieces {
        if let [single] = pieces.as_slice() {
            return Ok(vec![single.absolute()]);
        }
        if pieces.is_empty() {
            return Ok(Vec::new());
        }
        let tag = common_tag(&pieces)?;
        let splits = Splits::of_expanded(&pieces);
        let (leading, small) = self.parted(pieces);
        self.check_ratios(&leading, &small, span);
        let amount = Piece::plain(leading.clone()).absolute().product;
        let too_large = |_| ModelError::TooLarge { span };
        let per_leading = amount
            .times(&leading.power(Exponent::ONE.negated()).map_err(too_large)?)
            .map_err(too_large)?;
        let ratio = [Graded::plain(per_leading)];
        let mut series = vec![Graded::plain(amount)];
        series.extend(series::times(&ratio, &small, self.highest()).map_err(too_large)?);
        Ok(tagged(series, tag.as_ref(), &splits))
    }

    /// A function of what varies. One product stays inside the function until its term is
    /// complete; a sum is expanded about its largest part.
    pub(super) fn function(
        &mut self,
        function: Function,
        pieces: Vec<Piece>,
        span: Span,
    ) -> Pieces {
        let function = Elementary::Named(function);
        let tag = common_tag(&pieces)?;
        if let [single] = pieces.as_slice() {
            let applied = applied(function, &single.product);
            return Ok(vec![single.with_product(applied)]);
        }
        let splits = Splits::of_expanded(&pieces);
        let (leading, small) = self.parted(pieces);
        self.check_arguments(function, &leading, &small, span);
        let series = self.composed(function, Exponent::ONE, &leading, &small, span)?;
        Ok(tagged(series, tag.as_ref(), &splits))
    }

    /// The place of the largest part at the nominal values, the first of equals.
    pub(super) fn largest(&self, pieces: &[Piece]) -> usize {
        let sizes: Vec<f64> = pieces
            .iter()
            .map(|piece| self.nominal(&piece.product))
            .collect();
        // While a scale is open the first part, as it is written, is taken for the largest.
        match sizes.iter().any(|size| size.is_nan()) {
            true => 0,
            false => crate::analysis::sizes::largest(sizes).unwrap_or(0),
        }
    }

    /// The largest part at the nominal values, the first of equals; and the others, each
    /// of order 1 or more.
    fn parted(&self, pieces: Vec<Piece>) -> (Product, Series) {
        let largest = self.largest(&pieces);
        let mut leading = Product::number(Number::whole(0));
        let mut small = Vec::with_capacity(pieces.len());
        for (idx, piece) in pieces.into_iter().enumerate() {
            if idx == largest {
                leading = piece.product;
            } else {
                small.push(Graded {
                    degree: piece.degree.max(1),
                    product: piece.product,
                });
            }
        }
        (leading, small)
    }

    /// The nominal size of a product, functions in it at their levels; `NaN` while a
    /// scale is open.
    fn nominal(&self, product: &Product) -> f64 {
        let mut amount = match product.size(&self.setting.quantities) {
            Ok(size) => self.setting.nominal(&size.resolved),
            Err(TooLarge) => f64::NAN,
        };
        for factor in &product.factors {
            if let Base::Function(applied) = &factor.base {
                amount *= self.function_level(applied).powf(factor.power.to_f64());
            }
        }
        amount
    }

    fn function_level(&self, applied: &Applied) -> f64 {
        let argument = applied.argument.size(&self.setting.quantities);
        let level = argument
            .ok()
            .and_then(|size| self.setting.monomial_range(&size.resolved).ok())
            .and_then(|range| applied.function.over(&Range::exact(range.nominal)).ok());
        level.map_or(1.0, |range| range.nominal.abs())
    }

    fn check_ratios(&mut self, leading: &Product, small: &[Graded], span: Span) {
        let size = self.nominal(leading);
        for term in small {
            let ratio = self.nominal(&term.product) / size;
            let (part, whole) = (&term.product, Some(leading));
            self.check_ratio(Small { part, whole, ratio }, span);
        }
    }

    /// Of an angle the displacement must be small, of any other argument its change or
    /// the ratio to the rest, of a logarithm's the ratio.
    fn check_arguments(
        &mut self,
        function: Elementary,
        leading: &Product,
        small: &[Graded],
        span: Span,
    ) {
        let size = self.nominal(leading);
        let is_log = matches!(function, Elementary::Named(Function::Log | Function::Log10));
        for term in small.iter().filter(|term| term.degree <= 1) {
            let part = &term.product;
            let change = self.nominal(part);
            let ratio = change / size;
            let is_displacement = part
                .factors
                .iter()
                .any(|factor| matches!(factor.base, Base::Coordinate(_)));
            let is_angle = function.is_of_angle() && is_displacement;
            let (whole, ratio) = match is_log || !is_angle && ratio < change {
                true => (Some(leading), ratio),
                false => (None, change),
            };
            self.check_ratio(Small { part, whole, ratio }, span);
        }
    }

    fn check_ratio(&mut self, small: Small<'_>, span: Span) {
        let ratio = SmallRatio {
            small: small.part.clone(),
            large: small.whole.cloned(),
        };
        self.made.ratios.push(ratio);
        // An open scale is told of where it is asked for.
        if small.ratio <= largest_ratio() || small.ratio.is_nan() {
            return;
        }
        let large = small
            .whole
            .map_or_else(|| "1".to_owned(), |whole| self.speller().product(whole));
        let error = ModelError::RatioNotSmall {
            span,
            small: self.speller().product(small.part),
            large,
            ratio: small.ratio,
            declared: self.declaration(small.part),
        };
        self.made.faults.push(error);
    }

    /// Where the first field, coordinate or constant of a product is declared.
    fn declaration(&self, product: &Product) -> Option<(String, Span)> {
        let of_symbol = |id: SymbolId| {
            let (_, decl) = self.model.effective(id, self.setting.phenomenon);
            (decl.name.text.clone(), decl.name.span)
        };
        let mut symbol = None;
        for factor in &product.factors {
            match &factor.base {
                Base::Field(id) => {
                    let name = &self.model.fields[id.0 as usize].name;
                    return Some((name.text.clone(), name.span));
                }
                Base::Coordinate(id) => {
                    let declared = self.declared(*id)?;
                    let name = &self.model.coordinates[declared.0 as usize].name;
                    return Some((name.text.clone(), name.span));
                }
                Base::Symbol(Symbol::Declared(id)) => {
                    symbol.get_or_insert_with(|| of_symbol(*id));
                }
                Base::Symbol(Symbol::Function(_))
                | Base::Derivative(_)
                | Base::Absolute(_)
                | Base::Sized(_)
                | Base::Mean(_)
                | Base::Function(_) => {}
            }
        }
        symbol
    }

    /// The declared coordinate of a displacement, or the coordinate itself.
    fn declared(&self, id: CoordinateId) -> Option<CoordinateId> {
        if (id.0 as usize) < self.model.coordinates.len() {
            return Some(id);
        }
        let origins = &self.setting.quantities.origins;
        let is_own = |origin: &Option<Origin>| {
            origin
                .as_ref()
                .is_some_and(|origin| origin.displacement == id)
        };
        let idx = origins.iter().position(is_own)?;
        Some(CoordinateId(idx as u32))
    }

    // Functions -------------------------------------------------------------------------------

    /// `function(leading + small)^exponent` by Taylor's series.
    fn composed(
        &mut self,
        function: Elementary,
        exponent: Exponent,
        leading: &Product,
        small: &[Graded],
        span: Span,
    ) -> Result<Series, ModelError> {
        let too_large = |_| ModelError::TooLarge { span };
        let taylor = series::taylor(function, exponent, self.highest()).map_err(too_large)?;
        let mut coefficients = Vec::with_capacity(taylor.len());
        for terms in &taylor {
            let mut coefficient = Vec::with_capacity(terms.len());
            for term in terms {
                let mut product = Product::number(Number::rational(term.number.clone()));
                for (atom, power) in &term.powers {
                    let base = self.atom(*atom, leading, span)?;
                    let is_zero = self.is_nothing(&base);
                    if is_zero && power.is_negative() {
                        return Err(self.singular(function, leading, span));
                    }
                    product = base
                        .power(*power)
                        .and_then(|factor| product.times(&factor))
                        .map_err(too_large)?;
                }
                coefficient.push(Graded::plain(product));
            }
            coefficients.push(coefficient);
        }
        series::composed(&coefficients, small, self.highest()).map_err(too_large)
    }

    fn singular(&self, function: Elementary, leading: &Product, span: Span) -> ModelError {
        let argument = self.speller().signed(leading);
        ModelError::SingularExpansion {
            span,
            what: format!("`{}`", function.text(&argument)),
        }
    }

    fn atom(
        &self,
        atom: series::Atom,
        leading: &Product,
        span: Span,
    ) -> Result<Product, ModelError> {
        match atom {
            series::Atom::Argument => Ok(leading.clone()),
            series::Atom::Value(function) if is_constant(leading) => {
                self.level(function, leading, span)
            }
            series::Atom::Value(function) => Ok(applied(function, leading)),
            series::Atom::LogOfTen => Ok(series::log_of_ten()),
        }
    }

    /// A function of constants: a number where it is exact and holds no name, else a
    /// symbol under its text.
    fn level(
        &self,
        function: Elementary,
        argument: &Product,
        span: Span,
    ) -> Result<Product, ModelError> {
        let written = constants(argument);
        let singular = || self.singular(function, argument, span);
        let value = match self.value(&written) {
            Err(open) => Err(open),
            Ok(value) => match function {
                Elementary::Named(plain) => match values::plain_function(plain, &value, span) {
                    Ok(value) => Ok(value),
                    Err(Fault::Error(
                        ModelError::DividesByZero { .. } | ModelError::OutOfDomain { .. },
                    )) => return Err(singular()),
                    Err(fault) => return Err(fault_error(fault, span)),
                },
                Elementary::Root | Elementary::OnePlusSquare => {
                    let range = function.over(&value.range).map_err(|_| singular())?;
                    Ok(Value { range, exact: None })
                }
            },
        };
        if let (Ok(value), true) = (&value, written.is_number())
            && let Some(exact) = exact_level(&written.number, value)
        {
            return Ok(Product::number(exact));
        }
        let is_declared = |(symbol, _): &(Symbol, Exponent)| match symbol {
            Symbol::Declared(id) => vec![*id],
            Symbol::Function(inner) => inner.parts.clone(),
        };
        let symbol = monomial::Function {
            text: function.text(&self.speller().signed(argument)),
            is_zero: value.as_ref().is_ok_and(Value::is_zero),
            value: value.as_ref().ok().map(|value| value.range),
            open: value.err().unwrap_or_default(),
            parts: written.powers().iter().flat_map(is_declared).collect(),
        };
        Ok(Product::base(Base::Symbol(Symbol::Function(Arc::new(
            symbol,
        )))))
    }

    /// The value of a product of constants; the open names in it otherwise.
    fn value(&self, monomial: &Monomial) -> Result<Value, Vec<SymbolId>> {
        let range = self.setting.monomial_range(monomial)?;
        let exact = monomial.powers().iter().try_fold(
            monomial.number.clone(),
            |product, (symbol, power)| {
                let Symbol::Declared(id) = symbol else {
                    return None;
                };
                let Variable::Known(value) = &self.setting.variables[id.idx()] else {
                    return None;
                };
                let exact = value.exact.as_ref()?;
                if exact.is_negative() && !power.is_whole() {
                    return None;
                }
                product.times(&exact.power(*power).ok()?).ok()
            },
        );
        Ok(Value { range, exact })
    }

    /// Whether a product is 0 in this setting.
    fn is_nothing(&self, product: &Product) -> bool {
        let is_zero = |factor: &Factor| match &factor.base {
            Base::Symbol(symbol) => self.setting.is_zero(symbol) && !factor.power.is_negative(),
            Base::Coordinate(_)
            | Base::Field(_)
            | Base::Derivative(_)
            | Base::Absolute(_)
            | Base::Sized(_)
            | Base::Mean(_)
            | Base::Function(_) => false,
        };
        product.number.is_zero() || product.factors.iter().any(is_zero)
    }

    // Complete terms --------------------------------------------------------------------------

    /// The same with powers and functions of coordinates about an origin expanded.
    pub(super) fn resolved(&mut self, pieces: Vec<Piece>, span: Span) -> Pieces {
        let is_done = |factor: &Factor| !self.is_open(factor);
        if pieces
            .iter()
            .all(|piece| piece.product.factors.iter().all(is_done))
        {
            return Ok(pieces);
        }
        let mut found = Vec::new();
        for piece in pieces {
            let highest = self.highest().saturating_sub(piece.degree);
            let mut series = vec![Graded::plain(Product::number(piece.product.number.clone()))];
            for factor in &piece.product.factors {
                let next = self.factor_series(factor, span)?;
                series = series::times(&series, &next, highest)
                    .map_err(|_| ModelError::TooLarge { span })?;
            }
            found.extend(series.into_iter().map(|term| Piece {
                product: term.product,
                degree: term.degree + piece.degree,
                tag: piece.tag.clone(),
                splits: piece.splits.clone(),
            }));
        }
        Ok(collected(found))
    }

    /// Whether a factor is one to expand.
    fn is_open(&self, factor: &Factor) -> bool {
        match &factor.base {
            Base::Function(_) => true,
            Base::Coordinate(id) => {
                let has_origin = self.setting.quantities.origin(*id).is_some();
                has_origin && (factor.power != Exponent::ONE || self.depth.splits_levels)
            }
            Base::Absolute(inside) | Base::Mean(inside) => {
                inside.iter().any(|inner| self.is_open(inner))
            }
            Base::Symbol(_) | Base::Field(_) | Base::Derivative(_) | Base::Sized(_) => false,
        }
    }

    fn factor_series(&mut self, factor: &Factor, span: Span) -> Result<Series, ModelError> {
        if !self.is_open(factor) {
            return Ok(vec![Graded::plain(as_product(factor))]);
        }
        match &factor.base {
            Base::Coordinate(id) => self.coordinate_series(*id, factor.power, true, span),
            Base::Function(applied) => self.function_series(applied, factor.power, span),
            Base::Symbol(_)
            | Base::Field(_)
            | Base::Derivative(_)
            | Base::Absolute(_)
            | Base::Sized(_)
            | Base::Mean(_) => Err(ModelError::NotSplit {
                span,
                function: self.speller().product(&as_product(factor)),
            }),
        }
    }

    /// A power of a coordinate about an origin.
    fn coordinate_series(
        &mut self,
        id: CoordinateId,
        power: Exponent,
        checks_ratio: bool,
        span: Span,
    ) -> Result<Series, ModelError> {
        let Some(origin) = self.setting.quantities.origin(id).cloned() else {
            let product = Product::base(Base::Coordinate(id));
            return Ok(vec![Graded::plain(product)]);
        };
        let displacement = Product::base(Base::Coordinate(origin.displacement));
        let too_large = |_| ModelError::TooLarge { span };
        if origin.is_zero {
            if power.is_negative() || !power.is_whole() {
                let coordinate = Product::base(Base::Coordinate(id)).power(power);
                let text = self.speller().product(&coordinate.map_err(too_large)?);
                return Err(ModelError::SingularExpansion {
                    span,
                    what: format!("`{text}` about 0"),
                });
            }
            let degree = u32::try_from(power.numer()).unwrap_or(u32::MAX);
            let product = displacement.power(power).map_err(too_large)?;
            return Ok(vec![Graded { product, degree }]);
        }
        let level = Product::constants(&origin.level);
        let small = [Graded {
            product: displacement,
            degree: 1,
        }];
        if checks_ratio {
            self.check_ratios(&level, &small, span);
        }
        if level.number.is_negative() && !power.is_whole() {
            return Err(ModelError::OutOfDomain {
                span,
                what: "no root of a negative number",
            });
        }
        series::power(&level, &small, power, self.highest()).map_err(too_large)
    }

    /// A power of a function of a coordinate about an origin.
    fn function_series(
        &mut self,
        applied: &Applied,
        power: Exponent,
        span: Span,
    ) -> Result<Series, ModelError> {
        let too_large = |_| ModelError::TooLarge { span };
        let number = Product::number(applied.argument.number.clone());
        let mut argument = vec![Graded::plain(number)];
        for factor in &applied.argument.factors {
            let next = match &factor.base {
                Base::Symbol(_) => vec![Graded::plain(as_product(factor))],
                Base::Coordinate(id) if self.setting.quantities.origin(*id).is_some() => {
                    self.coordinate_series(*id, factor.power, false, span)?
                }
                Base::Coordinate(_)
                | Base::Field(_)
                | Base::Derivative(_)
                | Base::Absolute(_)
                | Base::Sized(_)
                | Base::Mean(_)
                | Base::Function(_) => {
                    return Err(ModelError::NotSplit {
                        span,
                        function: applied.function.text("..."),
                    });
                }
            };
            argument = series::times(&argument, &next, self.highest()).map_err(too_large)?;
        }
        let (level, small): (Series, Series) =
            argument.into_iter().partition(|term| term.degree == 0);
        let leading = match level.into_iter().next() {
            Some(term) => term.product,
            None => Product::number(Number::whole(0)),
        };
        self.check_arguments(applied.function, &leading, &small, span);
        self.composed(applied.function, power, &leading, &small, span)
    }
}

/// The exact value of a function of a number; of 0 it is mostly 0 or 1.
fn exact_level(argument: &Number, value: &Value) -> Option<Number> {
    if value.exact.is_some() || !argument.is_zero() {
        return value.exact.clone();
    }
    [0, 1]
        .into_iter()
        .find(|whole| value.range.nominal == f64::from(*whole as i32))
        .map(Number::whole)
}

fn applied(function: Elementary, argument: &Product) -> Product {
    Product::base(Base::Function(Box::new(Applied {
        function,
        argument: argument.clone(),
    })))
}

fn as_product(factor: &Factor) -> Product {
    Product {
        number: Number::one(),
        factors: vec![factor.clone()],
    }
}

/// The number and symbols of a product that holds nothing else.
fn constants(product: &Product) -> Monomial {
    let mut found = Monomial::number(product.number.clone());
    for factor in &product.factors {
        if let Base::Symbol(symbol) = &factor.base {
            let power = Monomial::symbol(symbol.clone()).power(factor.power);
            // No symbol stands twice in a product, so nothing can grow too large here.
            found = power.and_then(|power| found.times(&power)).unwrap_or(found);
        }
    }
    found
}

fn fault_error(fault: Fault, span: Span) -> ModelError {
    fault
        .error(crate::model::errors::Product::Term)
        .unwrap_or(ModelError::TooLarge { span })
}
