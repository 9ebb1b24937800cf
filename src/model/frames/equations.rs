//! Vector equations, and equations made of them: each becomes its component equations, or
//! a scalar one, at its place in the order of declarations.

use crate::model::errors::{Clash, ModelError, Shape};
use crate::model::frames::components::Writer;
use crate::model::frames::shapes::{Found, Shapes};
use crate::model::frames::{FrameInfo, build};
use crate::model::{Model, VectorEquationInfo, names, order};
use crate::source::Span;
use crate::syntax::ast::{self, EquationBody, ExprKind};

/// Every equation comes out as scalar ones, at its place in the order of declarations. Those
/// made of others come when all that they are made of is known.
pub(super) fn resolve(
    model: &mut Model,
    frame_needed: &mut Option<Span>,
    errors: &mut Vec<ModelError>,
) {
    let mut declared = std::mem::take(&mut model.equations);
    let order = order_of(model, &mut declared, errors);
    let mut waiting: Vec<Option<ast::EquationDecl>> = declared.into_iter().map(Some).collect();
    let mut scalar = vec![Vec::new(); waiting.len()];
    for place in order {
        if let Some(decl) = waiting[place].take() {
            scalar[place] = scalar_equations(model, decl, frame_needed, errors);
        }
    }
    index(model, scalar.into_iter().flatten().collect(), errors);
}

/// An order in which each equation comes after those it is made of. What is made of itself
/// is told, and left out.
fn order_of(
    model: &Model,
    declared: &mut [ast::EquationDecl],
    errors: &mut Vec<ModelError>,
) -> Vec<usize> {
    let of = |decl: &ast::EquationDecl| {
        let mut found = Vec::new();
        if let EquationBody::Made(expr) = &decl.body {
            names::visit_names(expr, &mut |name, _| found.extend(model.equation(name)));
        }
        found
    };
    let mut needs: Vec<Vec<usize>> = declared.iter().map(of).collect();
    loop {
        let ring = match order::order(&needs) {
            Ok(order) => return order,
            Err(ring) => ring,
        };
        let name = |idx: &usize| &declared[*idx].name;
        errors.push(ModelError::Circular {
            names: ring.iter().map(|idx| name(idx).text.clone()).collect(),
            spans: ring.iter().map(|idx| name(idx).span).collect(),
            is_split: false,
        });
        for idx in ring {
            needs[idx].clear();
            declared[idx] = silenced(declared[idx].clone());
        }
    }
}

/// What an equation stands for: itself, or the components of a vector equation.
fn scalar_equations(
    model: &mut Model,
    decl: ast::EquationDecl,
    frame_needed: &mut Option<Span>,
    errors: &mut Vec<ModelError>,
) -> Vec<ast::EquationDecl> {
    let mut shapes = match decl.body {
        EquationBody::Written { .. } => Shapes::new(model),
        EquationBody::Made(_) => Shapes::of_equations(model),
    };
    let (found, span) = match &decl.body {
        EquationBody::Written { left, right } => {
            let sides = (shapes.shape(left), shapes.shape(right));
            let found = shapes.same((sides.0, left.span), (sides.1, right.span));
            (found, left.span)
        }
        EquationBody::Made(expr) => (shapes.shape(expr), expr.span),
    };
    if let Some(span) = shapes.frame_needed {
        frame_needed.get_or_insert(span);
    }
    let has_operations = shapes.frame_needed.is_some();
    let is_faulty = !shapes.errors.is_empty() || model.frame.is_none() && has_operations;
    errors.append(&mut shapes.errors);
    match found {
        Found::Known(Shape::Stress) => {
            errors.push(ModelError::WrongShape {
                wanted: Shape::Vector,
                found: Shape::Stress,
                span,
                because: None,
            });
            vec![silenced(decl)]
        }
        Found::Known(Shape::Vector) => match component_equations(model, &decl, is_faulty) {
            Ok(made) => {
                model.vector_equations.push(VectorEquationInfo {
                    name: decl.name,
                    components: made.iter().map(|made| made.name.text.clone()).collect(),
                });
                made
            }
            Err(error) => {
                errors.extend(error);
                vec![silenced(decl)]
            }
        },
        Found::Known(Shape::Scalar) | Found::Any if !is_faulty => {
            let mut decl = decl;
            match write_out(model, &mut decl) {
                Ok(()) => vec![decl],
                Err(error) => {
                    errors.push(error);
                    vec![silenced(decl)]
                }
            }
        }
        Found::Known(Shape::Scalar) | Found::Any | Found::Faulty => vec![silenced(decl)],
    }
}

/// Writes out the scalar operations of a made equation, as `div(momentum)`.
fn write_out(model: &Model, decl: &mut ast::EquationDecl) -> Result<(), ModelError> {
    if let (EquationBody::Made(expr), Some(frame)) = (&decl.body, &model.frame) {
        let span = expr.span;
        let made = Writer::of_equations(model, frame).scalar(expr)?;
        decl.body = EquationBody::Made(made.unwrap_or_else(|| build::zero(span)));
    }
    Ok(())
}

/// An equation whose faults were told: nothing more is said of what stands in it.
fn silenced(mut decl: ast::EquationDecl) -> ast::EquationDecl {
    let error = |span| ast::Expr {
        kind: ExprKind::Error,
        span,
    };
    decl.body = EquationBody::Written {
        left: error(decl.name.span),
        right: error(decl.name.span),
    };
    decl
}

/// The name of a component equation.
pub(super) fn component_name(equation: &str, along: &str) -> String {
    format!("{equation}_{along}")
}

/// The component equations of a vector equation, those left out in which nothing stands.
fn component_equations(
    model: &Model,
    decl: &ast::EquationDecl,
    is_faulty: bool,
) -> Result<Vec<ast::EquationDecl>, Option<ModelError>> {
    let frame = model.frame.as_ref().ok_or(None)?;
    let mut made = Vec::new();
    for (axis, along) in frame.coordinates.iter().enumerate() {
        let mut component = ast::EquationDecl {
            name: ast::Name {
                text: component_name(&decl.name.text, &along.text),
                span: decl.name.span,
            },
            ..decl.clone()
        };
        if is_faulty {
            made.push(silenced(component));
            continue;
        }
        if let Some(body) = component_body(model, frame, &decl.body, axis)? {
            component.body = body;
            made.push(component);
        }
    }
    Ok(made)
}

/// One component of both sides, or of a combination; none where nothing is left.
fn component_body(
    model: &Model,
    frame: &FrameInfo,
    body: &EquationBody,
    axis: usize,
) -> Result<Option<EquationBody>, ModelError> {
    match body {
        EquationBody::Written { left, right } => {
            let mut writer = Writer::new(model, frame);
            let sides = (
                writer.component(left, axis)?,
                writer.component(right, axis)?,
            );
            Ok(match sides {
                (None, None) => None,
                (one, other) => Some(EquationBody::Written {
                    left: one.unwrap_or_else(|| build::zero(left.span)),
                    right: other.unwrap_or_else(|| build::zero(right.span)),
                }),
            })
        }
        EquationBody::Made(expr) => {
            let mut writer = Writer::of_equations(model, frame);
            let Some(made) = writer.component(expr, axis)? else {
                return Ok(None);
            };
            Ok(writer.scalar(&made)?.map(EquationBody::Made))
        }
    }
}

/// Puts the equations into the model under their names.
fn index(model: &mut Model, equations: Vec<ast::EquationDecl>, errors: &mut Vec<ModelError>) {
    model.equation_names.clear();
    for decl in equations {
        let name = decl.name.text.clone();
        if let Some(&first) = model.equation_names.get(&name) {
            errors.push(ModelError::NameClash {
                name,
                span: decl.name.span,
                first: Some(model.equations[first].name.span),
                what: Clash::Equation,
            });
            continue;
        }
        model.equation_names.insert(name, model.equations.len());
        model.equations.push(decl);
    }
}
