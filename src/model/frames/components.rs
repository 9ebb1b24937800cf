//! Components of vector expressions, and scalar operations written out in the coordinates
//! of the frame: syntax tree to syntax tree. What is made carries the place of what was
//! written. A component that is 0 is none.

use crate::limits;
use crate::model::errors::ModelError;
use crate::model::frames::equations::component_name;
use crate::model::frames::{FrameInfo, build};
use crate::model::names::{self, Call};
use crate::model::{Meaning, Model, VectorEquationInfo};
use crate::source::Span;
use crate::syntax::ast::{Expr, ExprKind, Name, Operator, ProcessName};

/// A component or a scalar; none where it is 0.
type Made = Result<Option<Expr>, ModelError>;

/// Three components, or the six of a stress in the order 11 12 13 22 23 33.
type Components = Vec<Option<Expr>>;

/// Takes expressions apart. The shapes have been checked.
pub(super) struct Writer<'a> {
    model: &'a Model,
    frame: &'a FrameInfo,
    /// Whether a written name stands around, so that `D_t` names nothing.
    is_named: bool,
    /// How many nodes may still be made.
    budget: usize,
    /// Whether names of equations are meant before all others.
    combines: bool,
}

impl<'a> Writer<'a> {
    pub(super) fn new(model: &'a Model, frame: &'a FrameInfo) -> Writer<'a> {
        Writer {
            model,
            frame,
            is_named: false,
            budget: limits::VECTOR_NODES,
            combines: false,
        }
    }

    /// The same for what stands behind `from`: names are those of equations first, and a
    /// component of a vector equation is an equation.
    pub(super) fn of_equations(model: &'a Model, frame: &'a FrameInfo) -> Writer<'a> {
        Writer {
            combines: true,
            ..Writer::new(model, frame)
        }
    }

    /// One component of a vector expression.
    pub(super) fn component(&mut self, expr: &Expr, axis: usize) -> Made {
        let span = expr.span;
        self.spend(1, span)?;
        match &expr.kind {
            ExprKind::Name(name) => self.declared(name, axis, span),
            ExprKind::Tuple(parts) => match parts.get(axis) {
                Some(part) => self.given(part),
                None => Ok(None),
            },
            ExprKind::Sum(terms) => {
                let mut sum = Vec::new();
                for (sign, term) in terms {
                    sum.extend(self.component(term, axis)?.map(|term| (*sign, term)));
                }
                Ok(build::sum(sum, span))
            }
            ExprKind::Negate(inside) => Ok(self.component(inside, axis)?.map(build::negated)),
            ExprKind::Bracket(inside) => self.component(inside, axis),
            ExprKind::As { expr, process } => {
                let is_named = std::mem::replace(&mut self.is_named, true);
                let inside = self.component(expr, axis);
                self.is_named = is_named;
                Ok(inside?.map(|expr| named(expr, process.clone(), span)))
            }
            ExprKind::Product(factors) => self.product(factors, axis, span),
            ExprKind::Call {
                function,
                order,
                arguments,
            } => self.call(function, *order, arguments, axis, span),
            ExprKind::Derivative { operand, by } => {
                let components = self.components(operand)?;
                let made = self.derivative(components, by, span)?;
                Ok(made.into_iter().nth(axis).flatten())
            }
            // The number 0, and what the check of shapes refused.
            ExprKind::Number(_)
            | ExprKind::Process { .. }
            | ExprKind::Power { .. }
            | ExprKind::Sized { .. }
            | ExprKind::Error => Ok(None),
        }
    }

    /// A scalar expression in which every vector operation is written out.
    pub(super) fn scalar(&mut self, expr: &Expr) -> Made {
        let span = expr.span;
        self.spend(1, span)?;
        let inside = |made: Option<Expr>, wrap: fn(Box<Expr>) -> ExprKind| {
            made.map(|expr| Expr {
                kind: wrap(Box::new(expr)),
                span,
            })
        };
        match &expr.kind {
            ExprKind::Call {
                function,
                arguments,
                ..
            } if names::call(&function.text, self.model) == Call::Vector => {
                match self.operation(&function.text, arguments, span)? {
                    Some(made) => self.scalar(&made),
                    None => Ok(None),
                }
            }
            ExprKind::Call {
                function,
                order,
                arguments,
            } => {
                let mut made = Vec::with_capacity(arguments.len());
                for argument in arguments {
                    let argument = self.scalar(argument)?;
                    made.push(argument.unwrap_or_else(|| build::zero(span)));
                }
                let kind = ExprKind::Call {
                    function: function.clone(),
                    order: *order,
                    arguments: made,
                };
                Ok(Some(Expr { kind, span }))
            }
            ExprKind::Sum(terms) => {
                let mut sum = Vec::new();
                for (sign, term) in terms {
                    sum.extend(self.scalar(term)?.map(|term| (*sign, term)));
                }
                Ok(build::sum(sum, span))
            }
            ExprKind::Product(factors) => {
                let mut product = Vec::with_capacity(factors.len());
                for (operator, factor) in factors {
                    match self.scalar(factor)? {
                        Some(factor) => product.push((*operator, factor)),
                        None if *operator == Operator::Times => return Ok(None),
                        None => product.push((*operator, build::zero(factor.span))),
                    }
                }
                Ok(Some(build::product(product, span)))
            }
            ExprKind::Negate(inner) => Ok(self.scalar(inner)?.map(build::negated)),
            ExprKind::Bracket(inner) => Ok(inside(self.scalar(inner)?, ExprKind::Bracket)),
            ExprKind::As { expr, process } => {
                let made = self.scalar(expr)?;
                Ok(made.map(|expr| named(expr, process.clone(), span)))
            }
            ExprKind::Power { base, exponent } => {
                let base = self.scalar(base)?.unwrap_or_else(|| build::zero(span));
                let exponent = exponent.clone();
                let base = Box::new(base);
                let kind = ExprKind::Power { base, exponent };
                Ok(Some(Expr { kind, span }))
            }
            ExprKind::Derivative { operand, by } => {
                let operand = self.scalar(operand)?;
                Ok(operand.map(|operand| derived(operand, by.clone(), span)))
            }
            ExprKind::Number(_) if build::is_zero(expr) => Ok(None),
            ExprKind::Number(_)
            | ExprKind::Name(_)
            | ExprKind::Process { .. }
            | ExprKind::Tuple(_)
            | ExprKind::Sized { .. }
            | ExprKind::Error => Ok(Some(expr.clone())),
        }
    }

    /// The factor from a change of a coordinate to a length along it; none where it is 1.
    pub(super) fn metric(&mut self, axis: usize, span: Span) -> Made {
        self.rule(&format!("metric_{}", axis + 1), &Bindings::default(), span)
    }

    fn spend(&mut self, nodes: usize, span: Span) -> Result<(), ModelError> {
        match self.budget.checked_sub(nodes) {
            Some(left) => {
                self.budget = left;
                Ok(())
            }
            None => Err(ModelError::TooManyTerms { span }),
        }
    }

    /// A component as it was written, at its own place.
    fn given(&mut self, part: &Expr) -> Made {
        self.spend(size(part), part.span)?;
        Ok((!build::is_zero(part)).then(|| part.clone()))
    }

    /// A component of a declared vector, at the place where the vector is named.
    fn declared(&mut self, name: &str, axis: usize, span: Span) -> Made {
        if let Some(equation) = self.vector_equation(name) {
            let along = &self.frame.coordinates[axis].text;
            let wanted = component_name(name, along);
            let is_there = equation.components.contains(&wanted);
            let kind = ExprKind::Name(wanted);
            return Ok(is_there.then_some(Expr { kind, span }));
        }
        let Some(Meaning::Vector(id)) = self.model.meaning(name, None) else {
            return Ok(None);
        };
        match self.model.vectors[id.0 as usize].components.get(axis) {
            Some(part) if !build::is_zero(part) => {
                self.spend(size(part), span)?;
                let mut part = part.clone();
                place(&mut part, span);
                Ok(Some(part))
            }
            Some(_) | None => Ok(None),
        }
    }

    /// A vector equation, where its name means it.
    fn vector_equation(&self, name: &str) -> Option<&'a VectorEquationInfo> {
        let found = self.model.vector_equation(name);
        found.filter(|_| self.combines)
    }

    fn components(&mut self, expr: &Expr) -> Result<Components, ModelError> {
        (0..3).map(|axis| self.component(expr, axis)).collect()
    }

    fn product(&mut self, factors: &[(Operator, Expr)], axis: usize, span: Span) -> Made {
        let mut made = Vec::with_capacity(factors.len());
        for (operator, factor) in factors {
            if self.is_scalar(factor) {
                self.spend(size(factor), span)?;
                made.push((*operator, factor.clone()));
                continue;
            }
            match self.component(factor, axis)? {
                Some(factor) => made.push((*operator, factor)),
                None => return Ok(None),
            }
        }
        Ok(Some(build::product(made, span)))
    }

    /// Whether an expression is a scalar; it is known to have a shape.
    fn is_scalar(&self, expr: &Expr) -> bool {
        match &expr.kind {
            ExprKind::Name(name) if self.vector_equation(name).is_some() => false,
            ExprKind::Name(name) if self.combines && self.model.has_equation(name) => true,
            ExprKind::Name(name) => {
                !matches!(self.model.meaning(name, None), Some(Meaning::Vector(_)))
            }
            ExprKind::Sum(terms) => terms.iter().all(|(_, term)| self.is_scalar(term)),
            ExprKind::Product(factors) => factors.iter().all(|(_, factor)| self.is_scalar(factor)),
            ExprKind::Negate(inside) | ExprKind::Bracket(inside) => self.is_scalar(inside),
            ExprKind::As { expr, .. } => self.is_scalar(expr),
            ExprKind::Derivative { operand, .. } => self.is_scalar(operand),
            ExprKind::Tuple(_) => false,
            ExprKind::Call {
                function,
                arguments,
                ..
            } => match (
                names::call(&function.text, self.model),
                arguments.as_slice(),
            ) {
                (Call::Vector, [argument]) => match function.text.as_str() {
                    "grad" | "curl" => false,
                    "div" => !self.is_stress(argument),
                    _ => self.is_scalar(argument),
                },
                (Call::Vector, _) => function.text == "dot",
                (Call::Derivative(_) | Call::Material | Call::Mean, [argument]) => {
                    self.is_scalar(argument)
                }
                (Call::Derivative(_) | Call::Material | Call::Mean, _)
                | (Call::Function(_) | Call::Unknown, _) => true,
            },
            ExprKind::Number(_)
            | ExprKind::Process { .. }
            | ExprKind::Power { .. }
            | ExprKind::Sized { .. }
            | ExprKind::Error => true,
        }
    }

    /// Whether an expression is a stress: sums and products of one.
    fn is_stress(&self, expr: &Expr) -> bool {
        match &expr.kind {
            ExprKind::Name(name) => match self.model.meaning(name, None) {
                Some(Meaning::Vector(id)) => {
                    self.model.vectors[id.0 as usize].components.len() == 6
                }
                Some(
                    Meaning::Symbol(_)
                    | Meaning::Coordinate(_)
                    | Meaning::Field(_)
                    | Meaning::Group(_),
                )
                | None => false,
            },
            ExprKind::Tuple(parts) => parts.len() == 6,
            ExprKind::Sum(terms) => terms.iter().any(|(_, term)| self.is_stress(term)),
            ExprKind::Product(factors) => factors.iter().any(|(_, factor)| self.is_stress(factor)),
            ExprKind::Negate(inside) | ExprKind::Bracket(inside) => self.is_stress(inside),
            ExprKind::As { expr, .. } => self.is_stress(expr),
            ExprKind::Number(_)
            | ExprKind::Process { .. }
            | ExprKind::Power { .. }
            | ExprKind::Call { .. }
            | ExprKind::Derivative { .. }
            | ExprKind::Sized { .. }
            | ExprKind::Error => false,
        }
    }

    // Operations ------------------------------------------------------------------------------

    fn call(
        &mut self,
        function: &Name,
        order: Option<u32>,
        arguments: &[Expr],
        axis: usize,
        span: Span,
    ) -> Made {
        let [argument] = arguments else {
            return self.vector_operation(&function.text, arguments, axis, span);
        };
        match names::call(&function.text, self.model) {
            Call::Vector => self.vector_operation(&function.text, arguments, axis, span),
            Call::Material => self.material(function, argument, axis, span),
            Call::Mean => {
                let inside = self.component(argument, axis)?;
                Ok(inside.map(|inside| called(function.clone(), inside, span)))
            }
            Call::Derivative(id) => {
                let along = self.model.coordinates[id.0 as usize].name.text.clone();
                let by = [(Name { text: along, span }, order.unwrap_or(1))];
                let components = self.components(argument)?;
                let made = self.derivative(components, &by, span)?;
                Ok(made.into_iter().nth(axis).flatten())
            }
            Call::Function(_) | Call::Unknown => Ok(None),
        }
    }

    fn vector_operation(
        &mut self,
        function: &str,
        arguments: &[Expr],
        axis: usize,
        span: Span,
    ) -> Made {
        let Some(argument) = arguments.first() else {
            return Ok(None);
        };
        let mut bindings = Bindings::default();
        let rule = match function {
            "grad" => {
                bindings.scalar = self.given(argument)?;
                "grad"
            }
            "div" => {
                let stress = (0..6).map(|place| self.component(argument, place));
                bindings.stress = stress.collect::<Result<_, _>>()?;
                "stress"
            }
            "curl" if is_call(argument, "grad") => return Ok(None),
            "curl" | "laplacian" => {
                bindings.vector = self.components(argument)?;
                function
            }
            _ => {
                bindings.vector = self.components(argument)?;
                if let Some(second) = arguments.get(1) {
                    bindings.second = self.components(second)?;
                }
                "cross"
            }
        };
        self.rule(&format!("{rule}_{}", axis + 1), &bindings, span)
    }

    /// An operation that gives a scalar.
    fn operation(&mut self, function: &str, arguments: &[Expr], span: Span) -> Made {
        let Some(argument) = arguments.first() else {
            return Ok(None);
        };
        let mut bindings = Bindings::default();
        match function {
            "laplacian" => bindings.scalar = self.given(argument)?,
            // No vector that circulates has a source.
            "div" if is_call(argument, "curl") => return Ok(None),
            "div" => bindings.vector = self.components(argument)?,
            _ => {
                bindings.vector = self.components(argument)?;
                if let Some(second) = arguments.get(1) {
                    bindings.second = self.components(second)?;
                }
            }
        }
        self.rule(function, &bindings, span)
    }

    /// `D_t` of the component, and what the curved frame puts in.
    fn material(&mut self, function: &Name, argument: &Expr, axis: usize, span: Span) -> Made {
        let bindings = Bindings {
            vector: self.components(argument)?,
            velocity: self.velocity(span),
            ..Bindings::default()
        };
        let own = bindings.vector.get(axis).cloned().flatten();
        let mut sum: Vec<_> = own
            .map(|own| called(function.clone(), own, span))
            .into_iter()
            .map(|own| (crate::syntax::ast::Sign::Plus, own))
            .collect();
        let curvature = self.rule(&format!("curvature_{}", axis + 1), &bindings, span)?;
        for (sign, term) in curvature.map(terms_of).unwrap_or_default() {
            let term = if self.is_named {
                term
            } else {
                let process = ProcessName {
                    text: "curvature".to_owned(),
                    is_quoted: false,
                    span,
                };
                named(term, process, span)
            };
            sum.push((sign, term));
        }
        Ok(build::sum(sum, span))
    }

    /// The components of the velocity along the coordinates of the frame.
    fn velocity(&self, span: Span) -> Components {
        let carried = |along: &Name| {
            let velocity = self.model.velocity.as_ref()?;
            let (field, _) = velocity
                .components
                .iter()
                .find(|(_, coordinate)| coordinate.text == along.text)?;
            Some(Expr {
                kind: ExprKind::Name(field.text.clone()),
                span,
            })
        };
        self.frame.coordinates.iter().map(carried).collect()
    }

    /// Derivatives of a vector, the last coordinate first. Along a curved coordinate the
    /// unit vectors turn.
    fn derivative(
        &mut self,
        mut components: Components,
        by: &[(Name, u32)],
        span: Span,
    ) -> Result<Components, ModelError> {
        let turns = |name: &Name| self.curved(name).is_some();
        if !by.iter().any(|(name, _)| turns(name)) {
            let plain = |part: Expr| derived(part, by.to_vec(), span);
            return Ok(components.into_iter().map(|part| part.map(plain)).collect());
        }
        for (name, order) in by.iter().rev() {
            for _ in 0..*order {
                components = match self.curved(name) {
                    Some(axis) => self.along(components, axis, span)?,
                    None => {
                        let step = |part: Expr| derived(part, vec![(name.clone(), 1)], span);
                        components.into_iter().map(|part| part.map(step)).collect()
                    }
                };
            }
        }
        Ok(components)
    }

    fn along(
        &mut self,
        vector: Components,
        axis: usize,
        span: Span,
    ) -> Result<Components, ModelError> {
        let bindings = Bindings {
            vector,
            ..Bindings::default()
        };
        (1..=3)
            .map(|part| self.rule(&format!("along_{}_{part}", axis + 1), &bindings, span))
            .collect()
    }

    /// The place of a coordinate along which the unit vectors turn.
    fn curved(&self, name: &Name) -> Option<usize> {
        let mut coordinates = self.frame.coordinates.iter();
        let axis = coordinates.position(|found| found.text == name.text)?;
        let rule = format!("along_{}_1", axis + 1);
        self.frame.rules.get(&rule).map(|_| axis)
    }

    // Rules -----------------------------------------------------------------------------------

    fn rule(&mut self, name: &str, bindings: &Bindings, span: Span) -> Made {
        match self.frame.rules.get(name) {
            Some(rule) => self.filled(rule, bindings, span),
            None => Ok(None),
        }
    }

    /// A rule with its names replaced; none where nothing is left of it.
    fn filled(&mut self, rule: &Expr, bindings: &Bindings, span: Span) -> Made {
        self.spend(1, span)?;
        match &rule.kind {
            ExprKind::Name(name) => {
                let Some(found) = self.bound(name, bindings, span) else {
                    return Ok(None);
                };
                self.spend(size(&found), span)?;
                Ok(Some(found))
            }
            ExprKind::Sum(terms) => {
                let mut sum = Vec::new();
                for (sign, term) in terms {
                    sum.extend(self.filled(term, bindings, span)?.map(|term| (*sign, term)));
                }
                Ok(build::sum(sum, span))
            }
            ExprKind::Product(factors) => {
                let mut product = Vec::with_capacity(factors.len());
                for (operator, factor) in factors {
                    match self.filled(factor, bindings, span)? {
                        Some(factor) => product.push((*operator, factor)),
                        None => return Ok(None),
                    }
                }
                Ok(Some(build::product(product, span)))
            }
            ExprKind::Negate(inside) => {
                Ok(self.filled(inside, bindings, span)?.map(build::negated))
            }
            ExprKind::Bracket(inside) => self.filled(inside, bindings, span),
            ExprKind::Power { base, exponent } => {
                let base = self.filled(base, bindings, span)?;
                Ok(base.map(|base| {
                    let base = Box::new(base);
                    let mut exponent = exponent.clone();
                    place(&mut exponent, span);
                    let kind = ExprKind::Power { base, exponent };
                    Expr { kind, span }
                }))
            }
            ExprKind::Derivative { operand, by } => {
                let operand = self.filled(operand, bindings, span)?;
                let by = by
                    .iter()
                    .map(|(name, order)| (self.coordinate(name, span), *order));
                let by: Vec<(Name, u32)> = by.collect();
                Ok(operand.map(|operand| derived(operand, by, span)))
            }
            ExprKind::Call {
                function,
                order,
                arguments,
            } => {
                let argument = match arguments.first() {
                    Some(argument) => self.filled(argument, bindings, span)?,
                    None => None,
                };
                Ok(argument.map(|argument| Expr {
                    kind: ExprKind::Call {
                        function: Name {
                            text: function.text.clone(),
                            span,
                        },
                        order: *order,
                        arguments: vec![argument],
                    },
                    span,
                }))
            }
            ExprKind::Number(_)
            | ExprKind::Process { .. }
            | ExprKind::Tuple(_)
            | ExprKind::Sized { .. }
            | ExprKind::As { .. }
            | ExprKind::Error => {
                let mut copy = rule.clone();
                place(&mut copy, span);
                Ok(Some(copy))
            }
        }
    }

    /// What a name of a rule stands for.
    fn bound(&self, name: &str, bindings: &Bindings, span: Span) -> Option<Expr> {
        let (kind, places) = name.split_at(1);
        let place = |text: &str| {
            text.parse::<usize>()
                .ok()
                .and_then(|place| place.checked_sub(1))
        };
        let from = |list: &Components| list.get(place(places)?).cloned().flatten();
        match kind {
            "p" => bindings.scalar.clone(),
            "a" => from(&bindings.vector),
            "b" => from(&bindings.second),
            "v" => from(&bindings.velocity),
            "s" => {
                const ORDER: [&str; 6] = ["11", "12", "13", "22", "23", "33"];
                let place = ORDER.iter().position(|found| *found == places)?;
                bindings.stress.get(place).cloned().flatten()
            }
            _ => {
                let name = self.frame.coordinates.get(place(places)?)?;
                Some(Expr {
                    kind: ExprKind::Name(name.text.clone()),
                    span,
                })
            }
        }
    }

    fn coordinate(&self, name: &Name, span: Span) -> Name {
        let place = name.text[1..].parse::<usize>().ok();
        let found = place.and_then(|place| self.frame.coordinates.get(place.checked_sub(1)?));
        Name {
            text: found.map_or_else(|| name.text.clone(), |found| found.text.clone()),
            span,
        }
    }
}

/// What the names of a rule stand for.
#[derive(Debug, Default)]
struct Bindings {
    scalar: Option<Expr>,
    vector: Components,
    second: Components,
    velocity: Components,
    stress: Components,
}

/// Whether an expression is one call of this operation.
fn is_call(expr: &Expr, wanted: &str) -> bool {
    match &expr.kind {
        ExprKind::Call { function, .. } => function.text == wanted,
        ExprKind::Bracket(inside) | ExprKind::Negate(inside) => is_call(inside, wanted),
        _ => false,
    }
}

fn named(expr: Expr, process: ProcessName, span: Span) -> Expr {
    let expr = Box::new(expr);
    Expr {
        kind: ExprKind::As { expr, process },
        span,
    }
}

fn called(function: Name, argument: Expr, span: Span) -> Expr {
    Expr {
        kind: ExprKind::Call {
            function,
            order: None,
            arguments: vec![argument],
        },
        span,
    }
}

/// A derivative; a minus goes before it.
fn derived(operand: Expr, by: Vec<(Name, u32)>, span: Span) -> Expr {
    let (operand, is_negative) = match operand.kind {
        ExprKind::Negate(inside) => (*inside, true),
        kind => (
            Expr {
                kind,
                span: operand.span,
            },
            false,
        ),
    };
    let operand = Box::new(operand);
    let made = Expr {
        kind: ExprKind::Derivative { operand, by },
        span,
    };
    if is_negative {
        build::negated(made)
    } else {
        made
    }
}

fn terms_of(expr: Expr) -> Vec<(crate::syntax::ast::Sign, Expr)> {
    use crate::syntax::ast::Sign;
    match expr.kind {
        ExprKind::Sum(terms) => terms
            .into_iter()
            .map(|(sign, term)| match (sign, term.kind) {
                (Sign::Plus, ExprKind::Negate(inside)) => (Sign::Minus, *inside),
                (sign, kind) => (
                    sign,
                    Expr {
                        kind,
                        span: term.span,
                    },
                ),
            })
            .collect(),
        ExprKind::Negate(inside) => vec![(Sign::Minus, *inside)],
        kind => vec![(
            Sign::Plus,
            Expr {
                kind,
                span: expr.span,
            },
        )],
    }
}

/// How many nodes an expression has.
fn size(expr: &Expr) -> usize {
    1 + match &expr.kind {
        ExprKind::Number(_) | ExprKind::Name(_) | ExprKind::Process { .. } | ExprKind::Error => 0,
        ExprKind::Sum(terms) => terms.iter().map(|(_, term)| size(term)).sum(),
        ExprKind::Product(factors) => factors.iter().map(|(_, factor)| size(factor)).sum(),
        ExprKind::Negate(inside) | ExprKind::Bracket(inside) => size(inside),
        ExprKind::As { expr, .. } => size(expr),
        ExprKind::Power { base, exponent } => size(base) + size(exponent),
        ExprKind::Call { arguments, .. } | ExprKind::Tuple(arguments) => {
            arguments.iter().map(size).sum()
        }
        ExprKind::Derivative { operand, .. } => size(operand),
        ExprKind::Sized { expr, size: own } => size(expr) + size(own),
    }
}

/// Puts an expression and all its parts at one place.
fn place(expr: &mut Expr, span: Span) {
    expr.span = span;
    match &mut expr.kind {
        ExprKind::Number(_) | ExprKind::Name(_) | ExprKind::Error => {}
        ExprKind::Process { equation, process } => {
            equation.span = span;
            process.span = span;
        }
        ExprKind::Sum(terms) => terms.iter_mut().for_each(|(_, term)| place(term, span)),
        ExprKind::Product(factors) => {
            factors
                .iter_mut()
                .for_each(|(_, factor)| place(factor, span));
        }
        ExprKind::Negate(inside) | ExprKind::Bracket(inside) => place(inside, span),
        ExprKind::As { expr, process } => {
            process.span = span;
            place(expr, span);
        }
        ExprKind::Power { base, exponent } => {
            place(base, span);
            place(exponent, span);
        }
        ExprKind::Call {
            function,
            arguments,
            ..
        } => {
            function.span = span;
            arguments
                .iter_mut()
                .for_each(|argument| place(argument, span));
        }
        ExprKind::Tuple(parts) => parts.iter_mut().for_each(|part| place(part, span)),
        ExprKind::Derivative { operand, by } => {
            place(operand, span);
            by.iter_mut().for_each(|(name, _)| name.span = span);
        }
        ExprKind::Sized { expr, size } => {
            place(expr, span);
            place(size, span);
        }
    }
}
