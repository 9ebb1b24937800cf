//! One phenomenon: the value and range of every symbol, as an overlay on the model, and
//! the sizes and lengths of fields that follow from them.

use std::sync::Arc;

use num_rational::BigRational;

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::algebra::quantities::{CoordinateId, Origin, Quantities, Quantity, Size, Variation};
use crate::model::dimensions::{circular, group_uses, literal_unit};
use crate::model::errors::{ModelError, Product};
use crate::model::order::order;
use crate::model::spreading::Spreading;
use crate::model::values::{self, Fault, Names, Value};
use crate::model::{CoordinateInfo, FieldInfo, GroupId, Meaning, Model, names};
use crate::number::{Exponent, Number, rational_to_f64};
use crate::source::Span;
use crate::syntax::ast;
use crate::units::Range;

/// The tolerance where none is declared: 10 %.
fn default_tolerance() -> BigRational {
    BigRational::new(1.into(), 10.into())
}

/// One phenomenon, or the script where it has none.
#[derive(Debug, Clone)]
pub struct Setting {
    /// The phenomenon, by its place in the model.
    pub phenomenon: Option<usize>,
    /// Its name.
    pub name: Option<String>,
    /// Its title.
    pub title: Option<String>,
    /// What may be dropped, relative to the largest term.
    pub tolerance: BigRational,
    /// What each scale or constant amounts to, in order of declaration.
    pub variables: Vec<Variable>,
    /// Sizes and lengths.
    pub quantities: Quantities,
    /// The named groups, in order of declaration.
    pub groups: Vec<Group>,
    /// The formula of each declared group in the user's own scales, where it has one.
    pub group_formulas: Vec<Option<Monomial>>,
    /// Names of the scales and constants.
    pub names: Arc<Vec<String>>,
}

/// A scale or constant in one setting.
#[derive(Debug, Clone)]
pub enum Variable {
    /// It has a value.
    Known(Value),
    /// It has none, for these open names (often itself).
    Open(Vec<SymbolId>),
}

/// A named group in one setting.
#[derive(Debug, Clone)]
pub struct Group {
    /// Its name.
    pub name: String,
    /// Its title.
    pub title: Option<String>,
    /// Its formula.
    pub size: Size,
}

impl Setting {
    /// The tolerance as a number.
    pub fn tolerance(&self) -> f64 {
        rational_to_f64(&self.tolerance)
    }

    /// The value of a symbol.
    ///
    /// # Errors
    /// The open names it rests on.
    pub fn symbol_value(&self, symbol: &Symbol) -> Result<Range, Vec<SymbolId>> {
        match symbol {
            Symbol::Declared(id) => match &self.variables[id.idx()] {
                Variable::Known(value) => Ok(value.range),
                Variable::Open(open) => Err(open.clone()),
            },
            Symbol::Function(function) => function.value.ok_or_else(|| function.open.clone()),
        }
    }

    /// Whether a symbol is 0, exactly where that can be told.
    pub fn is_zero(&self, symbol: &Symbol) -> bool {
        match symbol {
            Symbol::Declared(id) => match &self.variables[id.idx()] {
                Variable::Known(value) => value.is_zero(),
                Variable::Open(_) => false,
            },
            Symbol::Function(function) => function.is_zero,
        }
    }

    /// Whether no symbol of a monomial is 0, so that it and its powers amount to something.
    pub fn is_available(&self, monomial: &Monomial) -> bool {
        let mut symbols = monomial.powers().iter();
        symbols.all(|(symbol, _)| !self.is_zero(symbol))
    }

    /// The value of a monomial over the box, with its sign: exact at its corners, since
    /// it grows or falls with each symbol alone.
    ///
    /// # Errors
    /// The open names in it, in order of declaration.
    pub fn monomial_range(&self, monomial: &Monomial) -> Result<Range, Vec<SymbolId>> {
        let mut range = Range::exact(monomial.number.to_f64().abs());
        let mut is_negative = monomial.number.is_negative();
        let mut open = Vec::new();
        for (symbol, power) in monomial.powers() {
            let value = match self.symbol_value(symbol) {
                Ok(value) => value,
                Err(found) => {
                    open.extend(found);
                    continue;
                }
            };
            if value.nominal < 0.0 && power.numer() % 2 != 0 {
                is_negative = !is_negative;
            }
            let amount = value.abs();
            let (low, high) = if power.is_negative() {
                (amount.high, amount.low)
            } else {
                (amount.low, amount.high)
            };
            range.low *= raised(low, *power);
            range.nominal *= raised(amount.nominal, *power);
            range.high *= raised(high, *power);
        }
        if !open.is_empty() {
            open.sort_unstable();
            open.dedup();
            return Err(open);
        }
        Ok(if is_negative { range.neg() } else { range })
    }

    /// The nominal amount of a monomial; `NaN` while a name in it is open.
    pub fn nominal(&self, monomial: &Monomial) -> f64 {
        self.monomial_range(monomial)
            .map_or(f64::NAN, |range| range.nominal.abs())
    }
}

/// A power of an amount; whole ones by multiplication, which rounds least.
pub fn raised(amount: f64, power: Exponent) -> f64 {
    match (power.numer(), power.denom()) {
        (1, 1) => amount,
        (1, 2) => amount.sqrt(),
        (-1, 2) => 1.0 / amount.sqrt(),
        (numer, 1) => match i32::try_from(numer) {
            Ok(whole) => amount.powi(whole),
            Err(_) => amount.powf(numer as f64),
        },
        _ => amount.powf(power.to_f64()),
    }
}

/// Open scales with the formulas that were found for them.
pub type Adopted = Vec<(SymbolId, Monomial)>;

/// Works out a phenomenon (`None`: the script outside all of them).
pub fn build(model: &Model, phenomenon: Option<usize>) -> (Option<Setting>, Vec<ModelError>) {
    build_with(model, phenomenon, &Vec::new())
}

/// The same with open scales that follow the formulas found for them.
pub fn build_with(
    model: &Model,
    phenomenon: Option<usize>,
    adopted: &Adopted,
) -> (Option<Setting>, Vec<ModelError>) {
    let mut builder = Builder {
        model,
        adopted,
        setting: Setting {
            phenomenon,
            name: phenomenon.map(|idx| model.phenomena[idx].name.text.clone()),
            title: phenomenon
                .and_then(|idx| model.phenomena[idx].notes.title.as_ref())
                .map(|title| title.text.clone()),
            tolerance: tolerance(model, phenomenon),
            variables: vec![Variable::Open(Vec::new()); model.symbols.len()],
            quantities: Quantities {
                replacements: vec![None; model.symbols.len()],
                ..Quantities::default()
            },
            groups: Vec::new(),
            group_formulas: vec![None; model.groups.len()],
            names: Arc::new(model.symbols.iter().map(|info| info.name.clone()).collect()),
        },
        errors: Vec::new(),
    };
    builder.symbols();
    if builder.errors.is_empty() {
        builder.coordinates();
        builder.fields();
        builder.groups();
    }
    let is_sound = builder.errors.is_empty();
    (is_sound.then_some(builder.setting), builder.errors)
}

fn tolerance(model: &Model, phenomenon: Option<usize>) -> BigRational {
    phenomenon
        .and_then(|idx| model.phenomena[idx].tolerance.as_ref())
        .or(model.tolerance.as_ref())
        .map_or_else(default_tolerance, |info| info.value.clone())
}

struct Builder<'m> {
    model: &'m Model,
    adopted: &'m Adopted,
    setting: Setting,
    errors: Vec<ModelError>,
}

impl Names for Builder<'_> {
    fn model(&self) -> &Model {
        self.model
    }

    fn phenomenon(&self) -> Option<usize> {
        self.setting.phenomenon
    }

    fn symbol(&self, id: SymbolId) -> Result<Value, Vec<SymbolId>> {
        match &self.setting.variables[id.idx()] {
            Variable::Known(value) => Ok(value.clone()),
            Variable::Open(open) => Err(open.clone()),
        }
    }

    fn group(&self, id: GroupId) -> Option<&Monomial> {
        self.setting.group_formulas.get(id.0 as usize)?.as_ref()
    }

    fn process(&self, _: &ast::Name, process: &ast::ProcessName) -> Result<Range, Fault> {
        Err(Fault::NotAProduct(process.span))
    }
}

impl Builder<'_> {
    /// Whether a symbol exists in this setting at all.
    fn is_seen(&self, idx: usize) -> bool {
        let local_to = self.model.symbols[idx].local_to;
        local_to.is_none() || local_to == self.setting.phenomenon
    }

    fn symbols(&mut self) {
        let needs: Vec<Vec<usize>> = (0..self.model.symbols.len())
            .map(|idx| {
                if !self.is_seen(idx) {
                    return Vec::new();
                }
                if let Some(formula) = self.found_formula(SymbolId(idx as u32)) {
                    return symbols_of(formula);
                }
                let (_, decl) = self
                    .model
                    .effective(SymbolId(idx as u32), self.setting.phenomenon);
                match &decl.value {
                    ast::Value::Open(_) => Vec::new(),
                    ast::Value::Given { nominal, .. } => {
                        let found = names::symbols_in(nominal, self.model, self.setting.phenomenon);
                        found.into_iter().map(SymbolId::idx).collect()
                    }
                }
            })
            .collect();
        match order(&needs) {
            Ok(order) => order
                .into_iter()
                .filter(|idx| self.is_seen(*idx))
                .collect::<Vec<_>>()
                .into_iter()
                .for_each(|idx| self.symbol_definition(SymbolId(idx as u32))),
            Err(ring) => self.errors.push(circular(self.model, &ring)),
        }
    }

    fn found_formula(&self, id: SymbolId) -> Option<&Monomial> {
        let found = self.adopted.iter().find(|(adopted, _)| *adopted == id);
        found.map(|(_, formula)| formula)
    }

    fn symbol_definition(&mut self, id: SymbolId) {
        let (_, decl) = self.model.effective(id, self.setting.phenomenon);
        if let Some(formula) = self.found_formula(id).cloned() {
            match self.product(id, decl.name.span, formula) {
                Ok(variable) => self.setting.variables[id.idx()] = variable,
                Err(error) => self.errors.push(error),
            }
            return;
        }
        let ast::Value::Given { nominal, spread } = &decl.value else {
            self.setting.variables[id.idx()] = Variable::Open(vec![id]);
            return;
        };
        let found = if names::has_names(nominal) {
            self.derived(id, decl, nominal, spread)
        } else {
            self.number(decl, nominal, spread).map(Variable::Known)
        };
        match found {
            Ok(variable) => self.setting.variables[id.idx()] = variable,
            Err(Fault::Open(open)) => self.setting.variables[id.idx()] = Variable::Open(open),
            Err(Fault::NotAProduct(span)) => self.errors.push(ModelError::NotAProduct {
                span,
                what: Product::Size,
            }),
            Err(Fault::Error(error)) => self.errors.push(error),
        }
    }

    /// A value written in numbers, with its range.
    fn number(
        &self,
        decl: &ast::ValueDecl,
        nominal: &ast::Expr,
        spread: &ast::Spread,
    ) -> Result<Value, Fault> {
        let value = match values::reading(nominal) {
            Some(reading) if decl.kind == ast::ValueKind::Constant => Value::exact(reading?),
            Some(_) | None => values::evaluate(nominal, self)?,
        };
        let value = Spreading {
            decl,
            nominal,
            names: self,
        }
        .spread(value, spread)?;
        if decl.kind == ast::ValueKind::Scale && value.range.low <= 0.0 {
            return Err(not_positive(decl, nominal, value.range.low).into());
        }
        Ok(value)
    }

    /// A value that follows others: replaced where it is a product of powers, else a
    /// symbol of its own.
    fn derived(
        &mut self,
        id: SymbolId,
        decl: &ast::ValueDecl,
        nominal: &ast::Expr,
        spread: &ast::Spread,
    ) -> Result<Variable, Fault> {
        if !matches!(spread, ast::Spread::None) {
            return Err(Fault::Error(ModelError::DerivedScale {
                name: decl.name.text.clone(),
                span: nominal.span,
            }));
        }
        let is_scale = decl.kind == ast::ValueKind::Scale;
        match values::monomial(nominal, self) {
            Ok(written) if is_scale || !holds_function(&written) => {
                self.replaced(id, decl, nominal, written)
            }
            Ok(_) | Err(Fault::NotAProduct(_)) => {
                let value = values::evaluate(nominal, self)?;
                if is_scale && value.range.low <= 0.0 {
                    return Err(not_positive(decl, nominal, value.range.low).into());
                }
                if !is_scale
                    && value.range.low <= 0.0
                    && value.range.high >= 0.0
                    && !value.is_zero()
                {
                    return Err(Fault::Error(ModelError::RangeHoldsZero {
                        name: decl.name.text.clone(),
                        span: nominal.span,
                    }));
                }
                Ok(Variable::Known(value))
            }
            Err(fault) => Err(fault),
        }
    }

    fn replaced(
        &mut self,
        id: SymbolId,
        decl: &ast::ValueDecl,
        nominal: &ast::Expr,
        written: Monomial,
    ) -> Result<Variable, Fault> {
        let span = nominal.span;
        let size = self
            .setting
            .quantities
            .size(written)
            .map_err(|_| ModelError::TooLarge { span })?;
        let zero = size.resolved.number.is_zero()
            || size
                .resolved
                .powers()
                .iter()
                .any(|(symbol, _)| self.setting.is_zero(symbol));
        if zero {
            // Still a number: evaluation tells a division by 0 from a product with 0.
            let value = values::evaluate(nominal, self)?;
            return if decl.kind == ast::ValueKind::Scale {
                Err(not_positive(decl, nominal, value.range.low).into())
            } else {
                Ok(Variable::Known(value))
            };
        }
        match self.setting.monomial_range(&size.resolved) {
            Ok(range) if decl.kind == ast::ValueKind::Scale && range.nominal < 0.0 => {
                Err(not_positive(decl, nominal, range.nominal).into())
            }
            Ok(_) | Err(_) => Ok(self.product(id, span, size.resolved)?),
        }
    }

    /// A symbol that stands for a product of others, from now on replaced by it.
    fn product(
        &mut self,
        id: SymbolId,
        span: Span,
        resolved: Monomial,
    ) -> Result<Variable, ModelError> {
        let variable = match self.setting.monomial_range(&resolved) {
            Ok(range) if !range.nominal.is_finite() || range.nominal == 0.0 => {
                return Err(ModelError::TooLarge { span });
            }
            Ok(range) => Variable::Known(Value {
                range,
                exact: self.exact(&resolved),
            }),
            Err(open) => Variable::Open(open),
        };
        self.setting.quantities.replacements[id.idx()] = Some(resolved);
        Ok(variable)
    }

    /// The exact value of a monomial whose symbols all have one.
    fn exact(&self, monomial: &Monomial) -> Option<Number> {
        let mut product = monomial.number.clone();
        for (symbol, power) in monomial.powers() {
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
            product = product.times(&exact.power(*power).ok()?).ok()?;
        }
        Some(product)
    }

    // Fields and coordinates --------------------------------------------------------------

    fn size(&mut self, expr: &ast::Expr) -> Option<Size> {
        let written = match values::reading(expr) {
            Some(Ok(number)) => Monomial::number(number),
            Some(Err(error)) => {
                self.errors.push(error);
                return None;
            }
            None => match values::monomial(expr, self) {
                Ok(written) => written,
                Err(fault) => {
                    self.errors.extend(fault.error(Product::Size));
                    return None;
                }
            },
        };
        if written.number.is_zero()
            || written
                .powers()
                .iter()
                .any(|(symbol, _)| self.setting.is_zero(symbol))
        {
            self.errors.push(ModelError::NotPositive {
                name: crate::syntax::print::expression(expr),
                value: 0.0,
                unit: String::new(),
                span: expr.span,
            });
            return None;
        }
        match self.setting.quantities.size(written.abs()) {
            Ok(size) => Some(size),
            Err(_) => {
                self.errors.push(ModelError::TooLarge { span: expr.span });
                None
            }
        }
    }

    fn coordinates(&mut self) {
        let n_coordinates = self.model.coordinates.len() as u32;
        let mut displacements = Vec::new();
        for (idx, info) in self.model.coordinates.iter().enumerate() {
            let id = CoordinateId(idx as u32);
            let Some(scale) = self.size(&info.size) else {
                continue;
            };
            let level = match &info.about {
                None => None,
                Some(about) => match self.level(about) {
                    Some(level) => Some(level),
                    None => continue,
                },
            };
            let is_away = |level: &(Monomial, bool)| !level.1;
            let size = match level.as_ref().filter(|level| is_away(level)) {
                Some((level, _)) => self.setting.quantities.size(level.abs()),
                None => Ok(scale.clone()),
            };
            let Ok(size) = size else {
                let span = info.size.span;
                self.errors.push(ModelError::TooLarge { span });
                continue;
            };
            let variation = Variation {
                coordinate: id,
                length: scale.clone(),
                nominal_amplitude: self.setting.nominal(&scale.resolved),
                amplitude: scale.clone(),
                has_own_amplitude: level.as_ref().is_some_and(is_away),
            };
            let displaced = CoordinateId(n_coordinates + displacements.len() as u32);
            let displacement = match level.as_ref().filter(|level| is_away(level)) {
                Some(_) => displaced,
                None => id,
            };
            if let (Some(about), true) = (&info.about, displacement != id) {
                displacements.push(displacement_of(info, about, scale, &variation));
            }
            let quantities = &mut self.setting.quantities;
            quantities.coordinates.push(Quantity {
                name: info.name.text.clone(),
                size,
                variations: vec![variation],
            });
            quantities
                .origins
                .push(level.map(|(level, is_zero)| Origin {
                    level,
                    is_zero,
                    displacement,
                }));
        }
        // A coordinate without a size was reported; the places would be off without it.
        if self.setting.quantities.coordinates.len() == self.model.coordinates.len() {
            self.setting.quantities.coordinates.extend(displacements);
        }
    }

    /// The origin of a coordinate, with whether it is 0.
    fn level(&mut self, about: &ast::Expr) -> Option<(Monomial, bool)> {
        match values::monomial(about, self) {
            Ok(level) => {
                let is_zero = level.number.is_zero()
                    || level
                        .powers()
                        .iter()
                        .any(|(symbol, _)| self.setting.is_zero(symbol));
                Some((level, is_zero))
            }
            Err(fault) => {
                self.errors.extend(fault.error(Product::Size));
                None
            }
        }
    }

    fn fields(&mut self) {
        // A coordinate without a size was reported, and its index would be off.
        if self.setting.quantities.origins.len() != self.model.coordinates.len() {
            return;
        }
        for info in &self.model.fields {
            if !info.parts.is_empty() {
                self.split_field(info);
                continue;
            }
            let Some(size) = self.size(&info.size) else {
                continue;
            };
            let varying = info.varying.as_ref().map(|expr| self.size(expr));
            let varying = match varying {
                Some(None) => continue,
                Some(Some(size)) => Some(size),
                None => None,
            };
            let variations = self.variations(info, &size, varying.as_ref());
            self.setting.quantities.fields.push(Quantity {
                name: info.name.text.clone(),
                size,
                variations,
            });
        }
    }

    /// A split field is replaced by its parts wherever it stands; only its place is kept.
    fn split_field(&mut self, info: &FieldInfo) {
        let one = Size {
            written: Monomial::one(),
            resolved: Monomial::one(),
        };
        self.setting.quantities.fields.push(Quantity {
            name: info.name.text.clone(),
            size: one,
            variations: Vec::new(),
        });
    }

    fn variations(
        &mut self,
        info: &FieldInfo,
        size: &Size,
        varying: Option<&Size>,
    ) -> Vec<Variation> {
        let mut variations = Vec::new();
        for dependence in &info.coordinates {
            let Some(Meaning::Coordinate(id)) =
                self.model.meaning(&dependence.coordinate.text, None)
            else {
                continue;
            };
            let length = match &dependence.length {
                Some(expr) => self.size(expr),
                None => Some(self.setting.quantities.coordinate(id).length(id).clone()),
            };
            let own = dependence.varying.as_ref().map(|expr| self.size(expr));
            let own = match own {
                Some(None) => continue,
                Some(Some(size)) => Some(size),
                None => varying.cloned(),
            };
            let Some(length) = length else { continue };
            let has_own_amplitude = own.is_some();
            let amplitude = own.unwrap_or_else(|| size.clone());
            variations.push(Variation {
                coordinate: id,
                length,
                nominal_amplitude: self.setting.nominal(&amplitude.resolved),
                amplitude,
                has_own_amplitude,
            });
        }
        variations
    }

    /// Groups in an order in which each comes after those it names.
    fn groups(&mut self) {
        let Ok(order) = order(&group_uses(self.model)) else {
            // A ring was reported by the check.
            return;
        };
        for idx in order {
            match values::monomial(&self.model.groups[idx].value, self) {
                Ok(written) => self.setting.group_formulas[idx] = Some(written),
                Err(fault) => self.errors.extend(fault.error(Product::Group)),
            }
        }
        for (idx, info) in self.model.groups.iter().enumerate() {
            let Some(written) = self.setting.group_formulas[idx].clone() else {
                continue;
            };
            match self.setting.quantities.size(written) {
                Ok(size) => self.setting.groups.push(Group {
                    name: info.name.text.clone(),
                    title: info.notes.title.as_ref().map(|title| title.text.clone()),
                    size,
                }),
                Err(_) => self.errors.push(ModelError::TooLarge {
                    span: info.value.span,
                }),
            }
        }
    }
}

/// A coordinate as it counts from its origin.
fn displacement_of(
    info: &CoordinateInfo,
    about: &ast::Expr,
    scale: Size,
    variation: &Variation,
) -> Quantity {
    let origin = crate::syntax::print::expression(about);
    Quantity {
        name: match origin.strip_prefix('-') {
            Some(amount) => format!("({} + {amount})", info.name.text),
            None => format!("({} - {origin})", info.name.text),
        },
        size: scale,
        variations: vec![Variation {
            has_own_amplitude: false,
            ..variation.clone()
        }],
    }
}

/// The declared symbols that a product rests on.
fn symbols_of(monomial: &Monomial) -> Vec<usize> {
    let mut found = Vec::new();
    for (symbol, _) in monomial.powers() {
        match symbol {
            Symbol::Declared(id) => found.push(id.idx()),
            Symbol::Function(function) => found.extend(function.parts.iter().map(|id| id.idx())),
        }
    }
    found
}

fn holds_function(monomial: &Monomial) -> bool {
    monomial
        .powers()
        .iter()
        .any(|(symbol, _)| matches!(symbol, Symbol::Function(_)))
}

pub(super) fn not_positive(decl: &ast::ValueDecl, nominal: &ast::Expr, value: f64) -> ModelError {
    let unit = literal_unit(nominal)
        .map(|text| text.text.clone())
        .unwrap_or_default();
    let factor = literal_unit(nominal)
        .and_then(|text| names::unit(text).ok())
        .map_or(1.0, |unit| unit.factor.to_f64());
    ModelError::NotPositive {
        name: decl.name.text.clone(),
        value: value / factor,
        unit,
        span: nominal.span,
    }
}
