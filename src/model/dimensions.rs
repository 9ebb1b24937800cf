//! Checks names, units and dimensions of everything declared and asked.
//!
//! Declarations are checked here, expressions in `expressions`: each is walked once in its
//! place, and what may be named there depends on the [`Place`]. A dimension travels with the span that settled it, so that a mismatch
//! points at both terms.

mod expressions;

pub use expressions::dimension;

use crate::algebra::monomial::SymbolId;
use crate::limits;
use crate::model::errors::{Alike, Clash, Missing, ModelError};
use crate::model::frames;
use crate::model::names;
use crate::model::order::order;
use crate::model::{Level, Meaning, Model, combinations, declarations, is_given};
use crate::number::Exponent;
use crate::source::Span;
use crate::syntax::ast::{self, ExprKind};
use crate::units::Dimension;

/// Where an expression stands, which decides what it may name.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Place {
    /// The value of a constant: scales, constants, any function.
    Constant,
    /// The value of a scale, the size of a field: the same.
    Size,
    /// The formula of a group: groups too.
    Group,
    /// An equation: fields, coordinates and derivatives too.
    Equation,
    /// What an equation is made of: equations too.
    Combination,
    /// A request: scales, constants, groups, processes.
    Request,
}

/// What is known of an expression's dimension.
#[derive(Debug, Clone, Copy)]
pub enum Dim {
    /// The number 0, which goes with any dimension.
    Any,
    /// This one, settled at this place.
    Known(Dimension, Span),
    /// An error was reported.
    Faulty,
}

impl Dim {
    /// The dimension, if it is known.
    pub fn known(self) -> Option<Dimension> {
        match self {
            Dim::Known(dimension, _) => Some(dimension),
            Dim::Any | Dim::Faulty => None,
        }
    }
}

/// Checks the whole model and fills in the dimensions of its names.
pub fn check(model: &mut Model) -> Vec<ModelError> {
    let mut errors = Vec::new();
    symbols(model, &mut errors);
    coordinates_and_fields(model, &mut errors);
    frames::check_dimensions(model, &mut errors);
    vectors(model, &mut errors);
    velocity(model, &mut errors);
    groups(model, &mut errors);
    derivative_clashes(model, &mut errors);
    equations(model, &mut errors);
    balances(model, &mut errors);
    errors
}

fn symbols(model: &mut Model, errors: &mut Vec<ModelError>) {
    let defining: Vec<Vec<usize>> = (0..model.symbols.len())
        .map(|idx| {
            let info = &model.symbols[idx];
            match defining_entry(&info.entries).value {
                ast::Value::Given { ref nominal, .. } => {
                    names::symbols_in(nominal, model, info.local_to)
                        .into_iter()
                        .map(SymbolId::idx)
                        .collect()
                }
                ast::Value::Open(_) => Vec::new(),
            }
        })
        .collect();
    match order(&defining) {
        Ok(order) => order.into_iter().for_each(|idx| {
            model.symbols[idx].dimension = symbol_dimension(model, idx, errors);
        }),
        Err(ring) => errors.push(circular(model, &ring)),
    }
    other_entries(model, errors);
}

/// The declaration that settles the dimension: the one that opens a name, else the first.
fn defining_entry(entries: &[(Level, ast::ValueDecl)]) -> &ast::ValueDecl {
    let open = entries.iter().find(|(_, decl)| !is_given(decl));
    let (_, decl) = open
        .or(entries.first())
        .expect("a symbol is made from its first declaration");
    decl
}

/// A ring of symbols that need one another, with the places of their names.
pub fn circular(model: &Model, ring: &[usize]) -> ModelError {
    let decl = |idx: &usize| &model.symbols[*idx].entries[0].1.name;
    ModelError::Circular {
        names: ring.iter().map(|idx| decl(idx).text.clone()).collect(),
        spans: ring.iter().map(|idx| decl(idx).span).collect(),
        is_split: false,
    }
}

fn symbol_dimension(model: &Model, idx: usize, errors: &mut Vec<ModelError>) -> Option<Dimension> {
    let info = &model.symbols[idx];
    value_dimension(model, defining_entry(&info.entries), info.local_to, errors).known()
}

fn value_dimension(
    model: &Model,
    decl: &ast::ValueDecl,
    phenomenon: Option<usize>,
    errors: &mut Vec<ModelError>,
) -> Dim {
    let place = match decl.kind {
        ast::ValueKind::Scale => Place::Size,
        ast::ValueKind::Constant => Place::Constant,
    };
    match &decl.value {
        ast::Value::Open(text) => match names::unit(text) {
            Ok(unit) => Dim::Known(unit.dimension, text.span),
            Err(error) => {
                errors.push(error);
                Dim::Faulty
            }
        },
        ast::Value::Given { nominal, spread } => {
            let may_be_reading =
                decl.kind == ast::ValueKind::Constant && matches!(spread, ast::Spread::None);
            let found = match reading(nominal) {
                Some(span) if may_be_reading && is_offset(nominal) => {
                    Dim::Known(Dimension::temperature(), span)
                }
                Some(_) | None => dimension(nominal, model, phenomenon, place, errors),
            };
            spread_dimension(model, spread, found, phenomenon, place, errors);
            whole_value(found, spread)
        }
    }
}

/// The span of a plain literal, with or without a sign.
fn reading(expr: &ast::Expr) -> Option<Span> {
    match &expr.kind {
        ExprKind::Number(_) => Some(expr.span),
        ExprKind::Negate(inside) => matches!(inside.kind, ExprKind::Number(_)).then_some(expr.span),
        _ => None,
    }
}

/// Whether a plain literal is a reading on a scale with an offset.
pub fn is_offset(expr: &ast::Expr) -> bool {
    match &expr.kind {
        ExprKind::Number(number) => number
            .unit
            .as_ref()
            .and_then(|text| names::unit(text).ok())
            .is_some_and(|unit| unit.offset.is_some()),
        ExprKind::Negate(inside) => is_offset(inside),
        _ => false,
    }
}

fn spread_dimension(
    model: &Model,
    spread: &ast::Spread,
    nominal: Dim,
    phenomenon: Option<usize>,
    place: Place,
    errors: &mut Vec<ModelError>,
) {
    let end = match spread {
        ast::Spread::None => return,
        ast::Spread::Within(proportion) => {
            if let Err(error) = declarations::share(proportion) {
                errors.push(error);
            }
            return;
        }
        ast::Spread::To(end) | ast::Spread::Margin(end) => end,
    };
    if let (ast::Spread::Margin(_), Some(text)) = (spread, percentage(end)) {
        errors.push(ModelError::ShareAsMargin {
            span: end.span,
            text,
        });
        return;
    }
    if names::has_names(end) {
        errors.push(ModelError::DerivedScale {
            name: crate::syntax::print::expression(end),
            span: end.span,
        });
        return;
    }
    let found = dimension(end, model, phenomenon, place, errors);
    if borrows_unit(spread, nominal) {
        return;
    }
    alike(nominal, found, Alike::Range, errors);
}

/// A literal in per cent, as written.
fn percentage(expr: &ast::Expr) -> Option<String> {
    match &expr.kind {
        ExprKind::Number(number) if number.unit.as_ref()?.text == "%" => {
            Some(format!("{} %", number.text))
        }
        _ => None,
    }
}

/// Whether a bare number takes the unit of the end behind it: `5 .. 20 m/s`.
fn borrows_unit(spread: &ast::Spread, nominal: Dim) -> bool {
    let end = match spread {
        ast::Spread::To(end) | ast::Spread::Margin(end) => end,
        ast::Spread::None | ast::Spread::Within(_) => return false,
    };
    matches!(nominal, Dim::Any)
        || nominal.known().is_some_and(|dim| dim.is_one()) && literal_unit(end).is_some()
}

/// The unit of a literal, with or without a sign.
pub fn literal_unit(expr: &ast::Expr) -> Option<&ast::UnitText> {
    match &expr.kind {
        ExprKind::Number(number) => number.unit.as_ref(),
        ExprKind::Negate(inside) => literal_unit(inside),
        _ => None,
    }
}

/// Compares two dimensions, and reports a difference.
fn alike(expected: Dim, found: Dim, what: Alike, errors: &mut Vec<ModelError>) {
    if let (Dim::Known(expected, expected_at), Dim::Known(found, found_at)) = (expected, found)
        && expected != found
    {
        errors.push(ModelError::UnlikeDimensions {
            expected,
            expected_at,
            found,
            found_at,
            what,
        });
    }
}

/// All declarations of a name but the one that settled its dimension.
fn other_entries(model: &Model, errors: &mut Vec<ModelError>) {
    for info in &model.symbols {
        let defining = defining_entry(&info.entries);
        let Some(expected) = effective_dimension(info.dimension, defining) else {
            continue;
        };
        for (_, decl) in &info.entries {
            if !std::ptr::eq(decl, defining) {
                let found = value_dimension(model, decl, info.local_to, errors);
                alike(expected, found, Alike::Value(info.name.clone()), errors);
            }
        }
    }
    for (idx, phenomenon) in model.phenomena.iter().enumerate() {
        for (id, decl) in &phenomenon.values {
            let info = &model.symbols[id.idx()];
            let defining = defining_entry(&info.entries);
            if info.local_to.is_some() && defining.name.span == decl.name.span {
                continue;
            }
            let found = value_dimension(model, decl, Some(idx), errors);
            if let Some(expected) = effective_dimension(info.dimension, defining) {
                alike(expected, found, Alike::Value(info.name.clone()), errors);
            }
        }
    }
}

/// A range such as `5 .. 20 m/s` has the dimension of its end.
fn whole_value(found: Dim, spread: &ast::Spread) -> Dim {
    let end = match spread {
        ast::Spread::To(end) | ast::Spread::Margin(end) => end,
        ast::Spread::None | ast::Spread::Within(_) => return found,
    };
    match literal_unit(end).map(names::unit) {
        Some(Ok(unit)) if borrows_unit(spread, found) => Dim::Known(unit.dimension, end.span),
        Some(_) | None => found,
    }
}

fn effective_dimension(dimension: Option<Dimension>, defining: &ast::ValueDecl) -> Option<Dim> {
    dimension.map(|dimension| Dim::Known(dimension, defining.name.span))
}

fn coordinates_and_fields(model: &mut Model, errors: &mut Vec<ModelError>) {
    for idx in 0..model.coordinates.len() {
        let info = &model.coordinates[idx];
        let found = dimension(&info.size, model, None, Place::Size, errors);
        if let Some(about) = &info.about {
            let origin = dimension(about, model, None, Place::Size, errors);
            alike(found, origin, Alike::Size, errors);
        }
        model.coordinates[idx].dimension = found.known();
    }
    for idx in 0..model.fields.len() {
        if model.fields[idx].parts.is_empty() {
            let found = field_dimension(model, idx, errors);
            model.fields[idx].dimension = found;
        }
    }
    splits(model, errors);
}

/// Fields that are split have the dimension of their parts.
fn splits(model: &mut Model, errors: &mut Vec<ModelError>) {
    let needs: Vec<Vec<usize>> = model
        .fields
        .iter()
        .map(|info| {
            let parts = info
                .parts
                .iter()
                .filter_map(|(_, part)| model.meaning(&part.text, None));
            let fields = parts.filter_map(|meaning| match meaning {
                Meaning::Field(id) => Some(id.0 as usize),
                Meaning::Symbol(_)
                | Meaning::Coordinate(_)
                | Meaning::Group(_)
                | Meaning::Vector(_) => None,
            });
            fields.collect()
        })
        .collect();
    match order(&needs) {
        Ok(order) => {
            split_sizes(model, &order, &needs, errors);
            for idx in order {
                if !model.fields[idx].parts.is_empty() {
                    model.fields[idx].dimension = split_dimension(model, idx, errors);
                }
            }
        }
        Err(ring) => {
            let name = |idx: &usize| &model.fields[*idx].name;
            errors.push(ModelError::Circular {
                names: ring.iter().map(|idx| name(idx).text.clone()).collect(),
                spans: ring.iter().map(|idx| name(idx).span).collect(),
                is_split: true,
            });
        }
    }
}

/// Refuses splits of too many parts, or nested too deep.
fn split_sizes(model: &Model, order: &[usize], needs: &[Vec<usize>], errors: &mut Vec<ModelError>) {
    let mut n_parts = vec![1usize; needs.len()];
    let mut depth = vec![0usize; needs.len()];
    for &idx in order {
        let info = &model.fields[idx];
        if info.parts.is_empty() {
            continue;
        }
        let n_constants = info.parts.len() - needs[idx].len().min(info.parts.len());
        let inner: usize = needs[idx].iter().map(|part| n_parts[*part]).sum();
        n_parts[idx] = n_constants + inner;
        depth[idx] = 1 + needs[idx]
            .iter()
            .map(|part| depth[*part])
            .max()
            .unwrap_or(0);
        if n_parts[idx] > limits::SPLIT_PARTS || depth[idx] > limits::SPLIT_DEPTH {
            errors.push(ModelError::SplitTooLarge {
                name: info.name.text.clone(),
                span: info.name.span,
            });
            // One report is enough.
            n_parts[idx] = 1;
            depth[idx] = 0;
        }
    }
}

fn split_dimension(model: &Model, idx: usize, errors: &mut Vec<ModelError>) -> Option<Dimension> {
    let mut settled = Dim::Any;
    for (_, part) in &model.fields[idx].parts {
        let found = match model.meaning(&part.text, None) {
            Some(Meaning::Field(id)) => model.fields[id.0 as usize].dimension,
            Some(Meaning::Symbol(id))
                if model.symbols[id.idx()].kind == ast::ValueKind::Constant =>
            {
                model.symbols[id.idx()].dimension
            }
            Some(other) => {
                errors.push(out_of_place(
                    &part.text,
                    part.span,
                    other,
                    model,
                    "a field or a constant",
                ));
                None
            }
            None => {
                errors.push(unknown(
                    &part.text,
                    part.span,
                    model,
                    None,
                    Missing::Quantity,
                ));
                None
            }
        };
        let found = found.map_or(Dim::Faulty, |dimension| Dim::Known(dimension, part.span));
        alike(settled, found, Alike::Terms, errors);
        if let (Dim::Any, Dim::Known(..)) = (settled, found) {
            settled = found;
        }
    }
    settled.known()
}

fn field_dimension(model: &Model, idx: usize, errors: &mut Vec<ModelError>) -> Option<Dimension> {
    let info = &model.fields[idx];
    let size = if is_offset(&info.size) {
        Dim::Known(Dimension::temperature(), info.size.span)
    } else {
        dimension(&info.size, model, None, Place::Size, errors)
    };
    if let Some(varying) = &info.varying {
        let found = dimension(varying, model, None, Place::Size, errors);
        alike(size, found, Alike::Size, errors);
    }
    for (place, dependence) in info.coordinates.iter().enumerate() {
        let name = &dependence.coordinate;
        let length = dependence
            .length
            .as_ref()
            .map(|length| dimension(length, model, None, Place::Size, errors));
        let varying = dependence
            .varying
            .as_ref()
            .map(|varying| dimension(varying, model, None, Place::Size, errors));
        if let Some(varying) = varying {
            alike(size, varying, Alike::Size, errors);
        }
        let repeated = info.coordinates[..place]
            .iter()
            .find(|earlier| earlier.coordinate.text == name.text);
        if let Some(first) = repeated {
            errors.push(ModelError::SecondValue {
                name: name.text.clone(),
                span: name.span,
                first: first.coordinate.span,
            });
        }
        match coordinate(name, model, errors) {
            Some(found) => {
                let expected = found.1.map(|dimension| Dim::Known(dimension, found.0));
                if let (Some(expected), Some(length)) = (expected, length) {
                    alike(expected, length, Alike::Size, errors);
                }
            }
            None => continue,
        }
    }
    size.known()
}

/// The declaration of a coordinate by its name, with its dimension.
fn coordinate(
    name: &ast::Name,
    model: &Model,
    errors: &mut Vec<ModelError>,
) -> Option<(Span, Option<Dimension>)> {
    match model.meaning(&name.text, None) {
        Some(Meaning::Coordinate(id)) => {
            let info = &model.coordinates[id.0 as usize];
            Some((info.name.span, info.dimension))
        }
        Some(other) => {
            errors.push(out_of_place(
                &name.text,
                name.span,
                other,
                model,
                "a coordinate",
            ));
            None
        }
        None => {
            let known = model.coordinates.iter().map(|info| info.name.text.as_str());
            errors.push(ModelError::UnknownName {
                name: name.text.clone(),
                span: name.span,
                nearest: names::nearest(&name.text, known),
                missing: Missing::Coordinate,
                unit: None,
            });
            None
        }
    }
}

fn out_of_place(
    name: &str,
    span: Span,
    meaning: Meaning,
    model: &Model,
    wanted: &'static str,
) -> ModelError {
    let kind = match meaning {
        Meaning::Symbol(id) => match model.symbols[id.idx()].kind {
            ast::ValueKind::Scale => "scale",
            ast::ValueKind::Constant => "constant",
        },
        Meaning::Coordinate(_) => "coordinate",
        Meaning::Field(_) => "field",
        Meaning::Group(_) => "group",
        Meaning::Vector(_) => "vector",
    };
    ModelError::OutOfPlace {
        name: name.to_owned(),
        kind,
        wanted,
        span,
    }
}

/// Components are expressions of an equation; their dimensions need not agree.
fn vectors(model: &Model, errors: &mut Vec<ModelError>) {
    let sound = model.vectors.iter().filter(|info| info.shape.is_some());
    for part in sound.flat_map(|info| &info.components) {
        dimension(part, model, None, Place::Equation, errors);
    }
}

/// All components must carry along their coordinates at one rate, that of the time.
fn velocity(model: &Model, errors: &mut Vec<ModelError>) {
    let Some(info) = &model.velocity else { return };
    let mut rate = match model.meaning("t", None) {
        Some(Meaning::Coordinate(id)) => {
            let time = &model.coordinates[id.0 as usize];
            let inverse = time
                .dimension
                .and_then(|dim| dim.power(Exponent::ONE.negated()).ok());
            inverse.map_or(Dim::Any, |dim| Dim::Known(dim, time.name.span))
        }
        Some(_) | None => Dim::Any,
    };
    for (field, along) in &info.components {
        let place = coordinate(along, model, errors);
        let length = match model.meaning(&along.text, None) {
            Some(Meaning::Coordinate(id)) => frames::length_dimension(id, model),
            Some(_) | None => None,
        };
        let meaning = model.meaning(&field.text, None);
        let Some(Meaning::Field(id)) = meaning else {
            errors.push(match meaning {
                Some(other) => out_of_place(&field.text, field.span, other, model, "a field"),
                None => unknown(&field.text, field.span, model, None, Missing::Quantity),
            });
            continue;
        };
        let (Some(_), Some(length), Some(speed)) =
            (place, length, model.fields[id.0 as usize].dimension)
        else {
            continue;
        };
        if let Ok(found) = speed.over(&length) {
            let found = Dim::Known(found, field.span);
            alike(rate, found, Alike::Terms, errors);
            if matches!(rate, Dim::Any) {
                rate = found;
            }
        }
    }
}

fn unknown(
    name: &str,
    span: Span,
    model: &Model,
    phenomenon: Option<usize>,
    missing: Missing,
) -> ModelError {
    ModelError::UnknownName {
        name: name.to_owned(),
        span,
        nearest: names::nearest(name, model.visible_names(phenomenon)),
        missing,
        unit: None,
    }
}

fn groups(model: &Model, errors: &mut Vec<ModelError>) {
    for info in &model.groups {
        if let Dim::Known(dimension, span) =
            dimension(&info.value, model, None, Place::Group, errors)
            && !dimension.is_one()
        {
            errors.push(ModelError::NotDimensionless {
                dimension,
                span,
                what: "a group",
            });
        }
    }
    if let Err(ring) = order(&group_uses(model)) {
        let name = |idx: &usize| &model.groups[*idx].name;
        errors.push(ModelError::Circular {
            names: ring.iter().map(|idx| name(idx).text.clone()).collect(),
            spans: ring.iter().map(|idx| name(idx).span).collect(),
            is_split: false,
        });
    }
}

/// For each group, those that its formula names.
pub fn group_uses(model: &Model) -> Vec<Vec<usize>> {
    let formulas = model.groups.iter();
    formulas.map(|info| groups_in(&info.value, model)).collect()
}

fn groups_in(expr: &ast::Expr, model: &Model) -> Vec<usize> {
    let mut found = Vec::new();
    names::visit_names(expr, &mut |name, _| {
        if let Some(Meaning::Group(id)) = model.meaning(name, None) {
            found.push(id.0 as usize);
        }
    });
    found
}

/// A name `d_x` beside a coordinate `x` would spell a derivative.
fn derivative_clashes(model: &Model, errors: &mut Vec<ModelError>) {
    for coordinate in &model.coordinates {
        let spelt = format!("d_{}", coordinate.name.text);
        let span = match model.meaning(&spelt, None) {
            Some(Meaning::Symbol(id)) => model.symbols[id.idx()].entries[0].1.name.span,
            Some(Meaning::Coordinate(id)) => model.coordinates[id.0 as usize].name.span,
            Some(Meaning::Field(id)) => model.fields[id.0 as usize].name.span,
            Some(Meaning::Group(id)) => model.groups[id.0 as usize].name.span,
            Some(Meaning::Vector(id)) => model.vectors[id.0 as usize].name.span,
            None => continue,
        };
        errors.push(ModelError::NameClash {
            name: spelt,
            span,
            first: Some(coordinate.name.span),
            what: Clash::Derivative,
        });
    }
}

fn equations(model: &mut Model, errors: &mut Vec<ModelError>) {
    errors.extend(combinations::check(model));
    model.equation_dimensions = vec![None; model.equations.len()];
    let mut found = Vec::new();
    for idx in combinations::order(model) {
        let own = equation_dimension(model, idx, &mut found);
        model.equation_dimensions[idx] = own.known();
        // What is written out in components repeats its faults.
        for error in found.drain(..) {
            let diagnostic = error.diagnostic();
            if errors.iter().all(|known| known.diagnostic() != diagnostic) {
                errors.push(error);
            }
        }
    }
}

fn equation_dimension(model: &Model, idx: usize, errors: &mut Vec<ModelError>) -> Dim {
    match &model.equations[idx].body {
        ast::EquationBody::Written { left, right } => {
            let left = dimension(left, model, None, Place::Equation, errors);
            let right = dimension(right, model, None, Place::Equation, errors);
            alike(left, right, Alike::Sides, errors);
            match left {
                Dim::Known(..) => left,
                Dim::Any | Dim::Faulty => right,
            }
        }
        ast::EquationBody::Made(expr) => dimension(expr, model, None, Place::Combination, errors),
    }
}

fn balances(model: &Model, errors: &mut Vec<ModelError>) {
    for balance in &model.balances {
        for part in &balance.parts {
            if let Err(error) = equation(model, &part.equation) {
                errors.push(error);
            }
        }
    }
}

/// The index of an equation by its name.
///
/// # Errors
/// [`ModelError::UnknownEquation`].
pub fn equation(model: &Model, name: &ast::Name) -> Result<usize, ModelError> {
    let mut vectors = model.vector_equations.iter();
    let vector = vectors.find(|found| found.name.text == name.text);
    match (model.equation(&name.text), vector) {
        (Some(idx), _) => Ok(idx),
        (None, Some(vector)) => Err(ModelError::VectorEquation {
            name: name.text.clone(),
            span: name.span,
            components: vector.components.clone(),
        }),
        (None, None) => {
            let whole = model.vector_equations.iter().map(|found| &found.name);
            let known = model.equations.iter().map(|found| &found.name).chain(whole);
            Err(ModelError::UnknownEquation {
                name: name.text.clone(),
                span: name.span,
                nearest: names::nearest(&name.text, known.map(|name| name.text.as_str())),
            })
        }
    }
}
