//! Vectors in frames: a vector equation is rewritten into its component equations, tree to
//! tree, so that everything behind it knows scalars only.
//!
//! `rules` holds what the operations come to in each frame, `shapes` tells scalars from
//! vectors, `components` writes components out, `build` has the bricks. Scalar operations
//! (`div`, `dot`, `laplacian` of a scalar) and `D_t` stay as they are written in an
//! equation; [`expanded`] and [`metric`] write them out where dimensions and terms are
//! made.

mod build;
mod components;
mod equations;
mod rules;
mod shapes;

use crate::algebra::quantities::CoordinateId;
use crate::model::errors::{Missing, ModelError, Shape};
use crate::model::frames::components::Writer;
use crate::model::frames::rules::Rules;
use crate::model::frames::shapes::{Found, Shapes};
use crate::model::{Meaning, Model, VelocityInfo, names};
use crate::source::Span;
use crate::syntax::ast::{self, ExprKind, FrameKind, RequestKind};
use crate::units::Dimension;

/// The frame of a model.
#[derive(Debug)]
pub struct FrameInfo {
    /// Which frame.
    pub kind: FrameKind,
    /// Its coordinates in order.
    pub coordinates: Vec<ast::Name>,
    /// Where it is declared.
    pub span: Span,
    /// What the operations come to in it.
    rules: Rules,
}

impl FrameInfo {
    /// A frame as declared.
    pub(crate) fn new(decl: ast::FrameDecl, span: Span) -> FrameInfo {
        FrameInfo {
            kind: decl.kind,
            rules: Rules::of(decl.kind),
            coordinates: decl.coordinates,
            span,
        }
    }
}

/// Resolves everything that has to do with vectors: afterwards every equation of the model
/// is a scalar one, and requests that named a vector equation name its components.
pub fn resolve(model: &mut Model) -> Vec<ModelError> {
    let mut errors = frame_names(model);
    let mut frame_needed = None;
    vectors(model, &mut frame_needed, &mut errors);
    velocity(model, &mut frame_needed, &mut errors);
    equations::resolve(model, &mut frame_needed, &mut errors);
    requests(model);
    if let (None, Some(span)) = (&model.frame, frame_needed) {
        errors.push(ModelError::NoFrame { span });
    }
    errors
}

/// A scalar vector operation, `div(V)`, with all others inside it, in the coordinates of the
/// frame. The number 0 where nothing is left.
///
/// # Errors
/// Faults that [`resolve`] has not seen, in terms that requests name.
pub fn expanded(expr: &ast::Expr, model: &Model) -> Result<ast::Expr, ModelError> {
    let span = expr.span;
    let Some(frame) = &model.frame else {
        return Err(ModelError::NoFrame { span });
    };
    let mut shapes = Shapes::new(model);
    shapes.scalar(expr);
    if let Some(error) = shapes.errors.into_iter().next() {
        return Err(error);
    }
    let made = Writer::new(model, frame).scalar(expr)?;
    Ok(made.unwrap_or_else(|| build::zero(span)))
}

/// What turns a change of a coordinate into a length along it, `1/(r*cos(phi))`; none where
/// that is 1.
pub fn metric(along: CoordinateId, model: &Model, span: Span) -> Option<ast::Expr> {
    let (frame, axis) = axis(along, model)?;
    Writer::new(model, frame).metric(axis, span).ok().flatten()
}

/// The dimension of a length along a coordinate: that of the radius for an angle of the
/// frame, its own otherwise.
pub fn length_dimension(along: CoordinateId, model: &Model) -> Option<Dimension> {
    let own = model.coordinates[along.0 as usize].dimension?;
    let Some((frame, axis)) = axis(along, model) else {
        return Some(own);
    };
    match (rules::angles(frame.kind)[axis], rules::radius(frame.kind)) {
        (true, Some(radius)) => own.times(&coordinate_dimension(frame, radius, model)?).ok(),
        (true, None) | (false, _) => Some(own),
    }
}

/// Checks that the angles of the frame are plain numbers.
pub fn check_dimensions(model: &Model, errors: &mut Vec<ModelError>) {
    let Some(frame) = &model.frame else { return };
    for (axis, is_angle) in rules::angles(frame.kind).into_iter().enumerate() {
        if let (true, Some(dimension)) = (is_angle, coordinate_dimension(frame, axis, model))
            && !dimension.is_one()
        {
            errors.push(ModelError::NotDimensionless {
                dimension,
                span: frame.coordinates[axis].span,
                what: "an angle of the frame",
            });
        }
    }
}

fn coordinate_dimension(frame: &FrameInfo, axis: usize, model: &Model) -> Option<Dimension> {
    match model.meaning(&frame.coordinates.get(axis)?.text, None) {
        Some(Meaning::Coordinate(id)) => model.coordinates[id.0 as usize].dimension,
        _ => None,
    }
}

fn axis(along: CoordinateId, model: &Model) -> Option<(&FrameInfo, usize)> {
    let frame = model.frame.as_ref()?;
    let name = &model.coordinates[along.0 as usize].name.text;
    let axis = frame
        .coordinates
        .iter()
        .position(|found| found.text == *name)?;
    Some((frame, axis))
}

/// The coordinates of the frame must be declared, and three.
fn frame_names(model: &Model) -> Vec<ModelError> {
    let Some(frame) = &model.frame else {
        return Vec::new();
    };
    let mut errors = Vec::new();
    for (place, name) in frame.coordinates.iter().enumerate() {
        match model.meaning(&name.text, None) {
            Some(Meaning::Coordinate(_)) => {}
            Some(
                Meaning::Symbol(_) | Meaning::Field(_) | Meaning::Group(_) | Meaning::Vector(_),
            )
            | None => {
                let known = model.coordinates.iter().map(|info| info.name.text.as_str());
                errors.push(ModelError::UnknownName {
                    name: name.text.clone(),
                    span: name.span,
                    nearest: names::nearest(&name.text, known),
                    missing: Missing::Coordinate,
                    unit: None,
                });
            }
        }
        let twice = frame.coordinates[..place]
            .iter()
            .find(|earlier| earlier.text == name.text);
        if let Some(first) = twice {
            errors.push(ModelError::SecondValue {
                name: name.text.clone(),
                span: name.span,
                first: first.span,
            });
        }
    }
    errors
}

/// Components of vectors are scalars, and name no vector themselves.
fn vectors(model: &mut Model, frame_needed: &mut Option<Span>, errors: &mut Vec<ModelError>) {
    for idx in 0..model.vectors.len() {
        let info = &model.vectors[idx];
        let whole = ast::Expr {
            kind: ExprKind::Tuple(info.components.clone()),
            span: info.span,
        };
        let mut inner = None;
        names::visit_names(&whole, &mut |name, span| {
            if let Some(Meaning::Vector(_)) = model.meaning(name, None) {
                inner.get_or_insert(span);
            }
        });
        let mut shapes = Shapes::new(model);
        let found = match inner {
            Some(span) => {
                shapes.errors.push(ModelError::WrongShape {
                    wanted: Shape::Scalar,
                    found: Shape::Vector,
                    span,
                    because: None,
                });
                Found::Faulty
            }
            None => shapes.shape(&whole),
        };
        frame_needed.get_or_insert(info.span);
        let is_sound = shapes.errors.is_empty();
        errors.append(&mut shapes.errors);
        model.vectors[idx].shape = match found {
            Found::Known(shape) if is_sound => Some(shape),
            Found::Known(_) | Found::Any | Found::Faulty => None,
        };
    }
}

/// `velocity V` becomes its components along the coordinates of the frame.
fn velocity(model: &mut Model, frame_needed: &mut Option<Span>, errors: &mut Vec<ModelError>) {
    let Some((name, span)) = model.vector_velocity.take() else {
        return;
    };
    frame_needed.get_or_insert(span);
    let Some(Meaning::Vector(id)) = model.meaning(&name.text, None) else {
        errors.push(match model.meaning(&name.text, None) {
            Some(_) => ModelError::WrongShape {
                wanted: Shape::Vector,
                found: Shape::Scalar,
                span: name.span,
                because: None,
            },
            None => ModelError::UnknownName {
                name: name.text.clone(),
                span: name.span,
                nearest: names::nearest(&name.text, model.visible_names(None)),
                missing: Missing::Vector,
                unit: None,
            },
        });
        model.velocity = Some(VelocityInfo {
            components: Vec::new(),
            span,
        });
        return;
    };
    let coordinates = model.frame.as_ref().map(|frame| frame.coordinates.clone());
    let mut components = Vec::new();
    for (part, along) in model.vectors[id.0 as usize]
        .components
        .iter()
        .zip(coordinates.unwrap_or_default())
    {
        match &part.kind {
            _ if build::is_zero(part) => {}
            ExprKind::Name(field) => components.push((
                ast::Name {
                    text: field.clone(),
                    span: part.span,
                },
                ast::Name {
                    text: along.text,
                    span: name.span,
                },
            )),
            _ => errors.push(ModelError::WrongForm {
                found: "an expression",
                wanted: "fields as components of the velocity",
                span: part.span,
            }),
        }
    }
    model.velocity = Some(VelocityInfo { components, span });
}

/// In a list of equations the name of a vector equation stands for its components.
fn requests(model: &mut Model) {
    let vectors = &model.vector_equations;
    for (_, request) in &mut model.requests {
        let list = match &mut request.kind {
            RequestKind::Rank { equations }
            | RequestKind::Nondimensionalize { equations, .. }
            | RequestKind::Reduce { equations, .. }
            | RequestKind::Expand { equations, .. } => equations,
            RequestKind::Show { .. }
            | RequestKind::Bounds { .. }
            | RequestKind::Find { .. }
            | RequestKind::Layers
            | RequestKind::Groups
            | RequestKind::Limit { .. }
            | RequestKind::Sweep(_)
            | RequestKind::Regimes(..)
            | RequestKind::Compare { .. }
            | RequestKind::Claim(_) => continue,
        };
        let named = std::mem::take(list);
        for name in named {
            match vectors.iter().find(|found| found.name.text == name.text) {
                Some(vector) => list.extend(vector.components.iter().map(|text| ast::Name {
                    text: text.clone(),
                    span: name.span,
                })),
                None => list.push(name),
            }
        }
    }
}
