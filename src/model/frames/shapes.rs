//! Scalar, vector or stress: which of them an expression is, and what does not fit.

use crate::limits;
use crate::model::errors::{ModelError, Shape};
use crate::model::frames::build;
use crate::model::names::{self, Call};
use crate::model::{Meaning, Model};
use crate::source::Span;
use crate::syntax::ast::{Expr, ExprKind, Operator};

/// What is known of an expression's shape.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Found {
    /// The number 0, which goes with any shape.
    Any,
    /// This one.
    Known(Shape),
    /// An error was reported.
    Faulty,
}

/// Finds shapes and collects what is wrong with them.
pub(super) struct Shapes<'a> {
    model: &'a Model,
    /// What is wrong.
    pub(super) errors: Vec<ModelError>,
    /// The first place that needs a frame.
    pub(super) frame_needed: Option<Span>,
    depth: usize,
    /// Whether names of equations are meant before all others.
    combines: bool,
}

impl<'a> Shapes<'a> {
    pub(super) fn new(model: &'a Model) -> Shapes<'a> {
        Shapes {
            model,
            errors: Vec::new(),
            frame_needed: None,
            depth: 0,
            combines: false,
        }
    }

    /// The same for what stands behind `from`: names are those of equations first.
    pub(super) fn of_equations(model: &'a Model) -> Shapes<'a> {
        Shapes {
            combines: true,
            ..Shapes::new(model)
        }
    }

    /// The shape of an expression.
    pub(super) fn shape(&mut self, expr: &Expr) -> Found {
        let span = expr.span;
        match &expr.kind {
            ExprKind::Number(_) if build::is_zero(expr) => Found::Any,
            ExprKind::Number(_) | ExprKind::Process { .. } => Found::Known(Shape::Scalar),
            ExprKind::Name(name) => self.name(name),
            ExprKind::Sum(terms) => self.alike(terms.iter().map(|(_, term)| term)),
            ExprKind::Product(factors) => self.product(factors),
            ExprKind::Negate(inside) | ExprKind::Bracket(inside) => self.shape(inside),
            ExprKind::As { expr, .. } => self.shape(expr),
            ExprKind::Power { base, .. } => self.scalar(base),
            ExprKind::Call {
                function,
                arguments,
                ..
            } => self.call(&function.text, arguments, span),
            ExprKind::Derivative { operand, .. } => self.scalar_or_vector(operand),
            ExprKind::Tuple(parts) => self.tuple(parts, span),
            ExprKind::Sized { expr, size } => {
                self.scalar(expr);
                self.scalar(size)
            }
            ExprKind::Error => Found::Faulty,
        }
    }

    /// Checks that both are of one shape, and gives it.
    pub(super) fn same(&mut self, a: (Found, Span), b: (Found, Span)) -> Found {
        match (a.0, b.0) {
            (Found::Faulty, _) | (_, Found::Faulty) => Found::Faulty,
            (Found::Any, found) | (found, Found::Any) => found,
            (Found::Known(one), Found::Known(other)) if one == other => a.0,
            (Found::Known(one), Found::Known(other)) => {
                // The scalar is what is out of place, whichever stands first.
                let (wanted, found, span, because) = if one == Shape::Scalar {
                    (other, one, a.1, b.1)
                } else {
                    (one, other, b.1, a.1)
                };
                self.fault(ModelError::WrongShape {
                    wanted,
                    found,
                    span,
                    because: Some(because),
                })
            }
        }
    }

    /// Checks that an expression is a scalar.
    pub(super) fn scalar(&mut self, expr: &Expr) -> Found {
        self.of_shape(expr, Shape::Scalar)
    }

    fn fault(&mut self, error: ModelError) -> Found {
        self.errors.push(error);
        Found::Faulty
    }

    fn name(&self, name: &str) -> Found {
        if self.combines && self.model.vector_equation(name).is_some() {
            return Found::Known(Shape::Vector);
        }
        if self.combines && self.model.has_equation(name) {
            return Found::Known(Shape::Scalar);
        }
        match self.model.meaning(name, None) {
            Some(Meaning::Vector(id)) => match self.model.vectors[id.0 as usize].shape {
                Some(shape) => Found::Known(shape),
                None => Found::Faulty,
            },
            Some(
                Meaning::Symbol(_) | Meaning::Coordinate(_) | Meaning::Field(_) | Meaning::Group(_),
            )
            | None => Found::Known(Shape::Scalar),
        }
    }

    fn alike<'e>(&mut self, exprs: impl Iterator<Item = &'e Expr>) -> Found {
        let mut settled: Option<(Found, Span)> = None;
        for expr in exprs {
            let next = (self.shape(expr), expr.span);
            settled = Some(match settled {
                None => next,
                Some(known) => match self.same(known, next) {
                    // What is 0 or faulty settles nothing; the rest is still compared.
                    Found::Faulty if known.0 == Found::Faulty => next,
                    Found::Faulty => known,
                    Found::Any => next,
                    Found::Known(_) if known.0 == Found::Any => next,
                    Found::Known(_) => known,
                },
            });
        }
        settled.map_or(Found::Any, |(found, _)| found)
    }

    fn product(&mut self, factors: &[(Operator, Expr)]) -> Found {
        let mut settled = Found::Known(Shape::Scalar);
        for (operator, factor) in factors {
            let found = match operator {
                Operator::Over => self.scalar(factor),
                Operator::Times if settled == Found::Known(Shape::Scalar) => self.shape(factor),
                // A second vector in a product has no meaning.
                Operator::Times => self.scalar(factor),
            };
            match found {
                Found::Faulty => settled = Found::Faulty,
                Found::Known(Shape::Vector | Shape::Stress) => settled = found,
                Found::Known(Shape::Scalar) | Found::Any => {}
            }
        }
        settled
    }

    fn tuple(&mut self, parts: &[Expr], span: Span) -> Found {
        self.frame_needed.get_or_insert(span);
        for part in parts {
            self.scalar(part);
        }
        match parts.len() {
            3 => Found::Known(Shape::Vector),
            6 => Found::Known(Shape::Stress),
            found => self.fault(ModelError::ComponentCount { found, span }),
        }
    }

    fn call(&mut self, function: &str, arguments: &[Expr], span: Span) -> Found {
        match names::call(function, self.model) {
            Call::Vector => self.operation(function, arguments, span),
            Call::Derivative(_) | Call::Material | Call::Mean => match arguments {
                [argument] => self.scalar_or_vector(argument),
                _ => Found::Known(Shape::Scalar),
            },
            Call::Function(_) => {
                for argument in arguments {
                    self.scalar(argument);
                }
                Found::Known(Shape::Scalar)
            }
            Call::Unknown => self.unknown_call(function, arguments, span),
        }
    }

    /// What nothing is known of counts as a scalar of scalars, which is refused where
    /// dimensions are checked; of a vector it is refused here.
    fn unknown_call(&mut self, function: &str, arguments: &[Expr], span: Span) -> Found {
        let mut found = Found::Known(Shape::Scalar);
        for argument in arguments {
            if let Found::Known(Shape::Vector | Shape::Stress) = self.shape(argument) {
                found = Found::Faulty;
            }
        }
        match found {
            Found::Faulty => self.fault(ModelError::NotAFunction {
                name: function.to_owned(),
                span,
                is_declared: self.model.meaning(function, None).is_some(),
                nearest: names::nearest_function(function),
            }),
            Found::Any | Found::Known(_) => found,
        }
    }

    fn operation(&mut self, function: &str, arguments: &[Expr], span: Span) -> Found {
        self.frame_needed.get_or_insert(span);
        let (wanted, word) = match function {
            "cross" | "dot" => (2, "two arguments"),
            _ => (1, "one argument"),
        };
        if arguments.len() != wanted {
            return self.fault(ModelError::ArgumentCount {
                function: function.to_owned(),
                expected: word,
                found: arguments.len(),
                span,
            });
        }
        self.depth += 1;
        let found = if self.depth > limits::VECTOR_NESTING {
            self.fault(ModelError::DeepVectors { span })
        } else {
            self.result(function, arguments)
        };
        self.depth -= 1;
        found
    }

    fn result(&mut self, function: &str, arguments: &[Expr]) -> Found {
        match function {
            "grad" => known(self.scalar(&arguments[0]), Shape::Vector),
            "div" => self.divergence(&arguments[0]),
            "curl" => known(self.vector(&arguments[0]), Shape::Vector),
            "laplacian" => self.scalar_or_vector(&arguments[0]),
            name => {
                let a = self.vector(&arguments[0]);
                let b = self.vector(&arguments[1]);
                let shape = if name == "dot" {
                    Shape::Scalar
                } else {
                    Shape::Vector
                };
                known(known(a, shape).and(b), shape)
            }
        }
    }

    /// The divergence of a vector is a scalar, that of a stress a vector.
    fn divergence(&mut self, argument: &Expr) -> Found {
        match self.shape(argument) {
            Found::Known(Shape::Vector) | Found::Any => Found::Known(Shape::Scalar),
            Found::Known(Shape::Stress) => Found::Known(Shape::Vector),
            Found::Faulty => Found::Faulty,
            Found::Known(Shape::Scalar) => self.fault(ModelError::WrongShape {
                wanted: Shape::Vector,
                found: Shape::Scalar,
                span: argument.span,
                because: None,
            }),
        }
    }

    fn vector(&mut self, expr: &Expr) -> Found {
        self.of_shape(expr, Shape::Vector)
    }

    fn of_shape(&mut self, expr: &Expr, wanted: Shape) -> Found {
        match self.shape(expr) {
            Found::Known(found) if found != wanted => self.fault(ModelError::WrongShape {
                wanted,
                found,
                span: expr.span,
                because: None,
            }),
            found => found,
        }
    }

    fn scalar_or_vector(&mut self, expr: &Expr) -> Found {
        match self.shape(expr) {
            Found::Known(Shape::Stress) => self.fault(ModelError::WrongShape {
                wanted: Shape::Vector,
                found: Shape::Stress,
                span: expr.span,
                because: None,
            }),
            found => found,
        }
    }
}

impl Found {
    /// The other, unless this one is faulty.
    fn and(self, other: Found) -> Found {
        match self {
            Found::Faulty => Found::Faulty,
            Found::Any | Found::Known(_) => other,
        }
    }
}

fn known(argument: Found, shape: Shape) -> Found {
    match argument {
        Found::Faulty => Found::Faulty,
        Found::Any | Found::Known(_) => Found::Known(shape),
    }
}
