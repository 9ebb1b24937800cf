//! The dimension of one expression in its place: the walk over its tree.

use super::{Dim, Place, alike, coordinate, equation, out_of_place, unknown};
use crate::model::errors::{Alike, Missing, ModelError, Shape};
use crate::model::frames;
use crate::model::names::{self, Call, Function};
use crate::model::{Meaning, Model};
use crate::number::{Exponent, TooLarge};
use crate::source::Span;
use crate::syntax::ast::{self, ExprKind};
use crate::syntax::{print, unit_spelling};
use crate::units::{self, Dimension, StandardAtmosphere};

/// The dimension of an expression in its place.
pub fn dimension(
    expr: &ast::Expr,
    model: &Model,
    phenomenon: Option<usize>,
    place: Place,
    errors: &mut Vec<ModelError>,
) -> Dim {
    let mut walker = Walker {
        model,
        phenomenon,
        place,
        whole: match place {
            Place::Constant | Place::Size => Some(expr.span),
            Place::Group | Place::Equation | Place::Combination | Place::Request => None,
        },
        meant_unit: None,
        errors,
    };
    walker.dimension(expr)
}

struct Walker<'a> {
    model: &'a Model,
    phenomenon: Option<usize>,
    place: Place,
    /// The whole expression, where it is the value of a declaration.
    whole: Option<Span>,
    /// Where a factor may be meant as a unit: the number with all of it.
    meant_unit: Option<String>,
    errors: &'a mut Vec<ModelError>,
}

impl Walker<'_> {
    fn is_in_equation(&self) -> bool {
        matches!(self.place, Place::Equation | Place::Combination)
    }

    fn fault(&mut self, error: ModelError) -> Dim {
        self.errors.push(error);
        Dim::Faulty
    }

    fn bounded(&mut self, found: Result<Dimension, TooLarge>, span: Span) -> Dim {
        match found {
            Ok(dimension) => Dim::Known(dimension, span),
            Err(TooLarge) => self.fault(ModelError::TooLarge { span }),
        }
    }

    fn dimension(&mut self, expr: &ast::Expr) -> Dim {
        let span = expr.span;
        match &expr.kind {
            ExprKind::Number(number) => self.number(number, span),
            ExprKind::Name(name) => self.name(name, span),
            ExprKind::Process { equation, process } => self.process(equation, process, span),
            ExprKind::Sum(terms) => {
                let terms: Vec<&ast::Expr> = terms.iter().map(|(_, term)| term).collect();
                self.alike_all(&terms, &Alike::Terms)
            }
            ExprKind::Product(factors) => self.product(factors, span),
            ExprKind::Negate(inside) | ExprKind::Bracket(inside) => self.dimension(inside),
            ExprKind::As { expr, .. } if self.is_in_equation() => self.dimension(expr),
            ExprKind::As { process, .. } => self.fault(ModelError::WrongForm {
                found: "a process name",
                wanted: "no `as` outside an equation",
                span: process.span,
            }),
            ExprKind::Power { base, exponent } => self.power(base, exponent, span),
            ExprKind::Call {
                function,
                order,
                arguments,
            } => self.call(expr, &function.text, *order, arguments),
            ExprKind::Derivative { operand, by } => self.derivative(operand, by, span),
            ExprKind::Tuple(_) => self.fault(ModelError::WrongShape {
                wanted: Shape::Scalar,
                found: Shape::Vector,
                span,
                because: None,
            }),
            ExprKind::Sized { expr, size } => self.sized(expr, size, span),
            ExprKind::Error => Dim::Faulty,
        }
    }

    fn number(&mut self, number: &ast::Number, span: Span) -> Dim {
        match names::literal(number, span, false) {
            Ok((value, unit)) => {
                if !self.is_plain_value(number, span) {
                    self.warn_of_unit(number);
                }
                if value.is_zero() && number.unit.is_none() {
                    Dim::Any
                } else {
                    Dim::Known(unit.dimension, span)
                }
            }
            Err(ModelError::Unit {
                error, text, span, ..
            }) => {
                let mend = self.symbol_mend(number, &text);
                self.fault(ModelError::Unit {
                    error,
                    text,
                    span,
                    mend,
                })
            }
            Err(error) => self.fault(error),
        }
    }

    /// Whether a literal is the whole value of a declaration, with a single plain unit, as in
    /// `constant T_0 = 280 K`: nobody reads a product into that.
    fn is_plain_value(&self, number: &ast::Number, span: Span) -> bool {
        let is_single = number
            .unit
            .as_ref()
            .is_some_and(|text| text.text.chars().all(|c| c.is_alphabetic() || c == '_'));
        is_single && self.whole == Some(span)
    }

    /// Where an unknown unit holds declared symbols: the product or the quotient meant.
    fn symbol_mend(&self, number: &ast::Number, text: &str) -> Option<String> {
        let is_declared = |name: &str| self.model.meaning(name, self.phenomenon).is_some();
        if is_declared(text) {
            return Some(format!("write `{}*{text}`", number.text));
        }
        let (unit, symbol) = text.rsplit_once('/')?;
        let is_unit = unit == "1" || units::parse_unit(unit).is_ok();
        (is_unit && is_declared(symbol))
            .then(|| format!("write `{} {unit} / {symbol}`", number.text))
    }

    /// A unit that consists of declared names only may have been meant as a product.
    fn warn_of_unit(&mut self, number: &ast::Number) {
        let Some(text) = &number.unit else { return };
        let mut n_names = 0;
        let all_declared = text
            .text
            .split(|c: char| !(c.is_alphabetic() || c == '_'))
            .filter(|name| !name.is_empty())
            .inspect(|_| n_names += 1)
            .all(|name| {
                matches!(
                    self.model.meaning(name, self.phenomenon),
                    Some(Meaning::Symbol(_))
                )
            });
        if n_names > 0 && all_declared {
            let factors = text.text.replace(['.', '·'], "*");
            let product = match factors.strip_prefix("1/") {
                Some(rest) => format!("{}/{rest}", number.text),
                None => format!("{}*{factors}", number.text),
            };
            self.errors.push(ModelError::UnitOrSymbol {
                number: number.text.clone(),
                unit: text.text.clone(),
                product,
                span: text.span,
            });
        }
    }

    fn name(&mut self, name: &str, span: Span) -> Dim {
        if self.place == Place::Combination
            && let Some(idx) = self.model.equation(name)
        {
            return match self.model.equation_dimensions[idx] {
                Some(dimension) => Dim::Known(dimension, span),
                None => Dim::Faulty,
            };
        }
        let Some(meaning) = self.model.meaning(name, self.phenomenon) else {
            if names::is_pi(name) {
                return Dim::Known(Dimension::one(), span);
            }
            return self.unknown(name, span);
        };
        let may_vary = self.is_in_equation();
        let may_be_group =
            self.is_in_equation() || matches!(self.place, Place::Group | Place::Request);
        let found = match meaning {
            Meaning::Symbol(id) => self.model.symbols[id.idx()].dimension,
            Meaning::Group(_) if may_be_group => Some(Dimension::one()),
            Meaning::Coordinate(id) if may_vary => self.model.coordinates[id.0 as usize].dimension,
            Meaning::Field(id) if may_vary => self.model.fields[id.0 as usize].dimension,
            Meaning::Coordinate(_) | Meaning::Field(_) | Meaning::Group(_) | Meaning::Vector(_) => {
                let wanted = if may_be_group {
                    "a scale, a constant or a group"
                } else {
                    "a scale or a constant"
                };
                return self.fault(out_of_place(name, span, meaning, self.model, wanted));
            }
        };
        // Without a dimension an error was reported at the declaration.
        found.map_or(Dim::Faulty, |dimension| Dim::Known(dimension, span))
    }

    fn unknown(&mut self, name: &str, span: Span) -> Dim {
        let missing = match self.is_in_equation() {
            true => Missing::Quantity,
            false => Missing::Value,
        };
        let mut fault = unknown(name, span, self.model, self.phenomenon, missing);
        if let ModelError::UnknownName { unit, .. } = &mut fault {
            *unit = self.meant_unit.clone();
        }
        self.fault(fault)
    }

    /// `10 m / s`, where nothing declares `s`: the number with the unit that may be meant.
    fn meant_unit(&self, factors: &[(ast::Operator, ast::Expr)], place: usize) -> Option<String> {
        let is_unit = |factor: &ast::Expr| {
            let base = match &factor.kind {
                ExprKind::Power { base, .. } => base,
                _ => factor,
            };
            matches!(&base.kind, ExprKind::Name(name)
                if units::find_unit(name).is_some()
                    && self.model.meaning(name, self.phenomenon).is_none())
        };
        if !is_unit(&factors[place].1) {
            return None;
        }
        let is_other = |(_, factor): &(ast::Operator, ast::Expr)| !is_unit(factor);
        let start = factors[..place].iter().rposition(is_other)?;
        let ExprKind::Number(number) = &factors[start].1.kind else {
            return None;
        };
        let mut written = number.unit.as_ref()?.text.clone();
        let behind = &factors[start + 1..];
        let end = behind.iter().position(is_other).unwrap_or(behind.len());
        for (operator, factor) in &behind[..end] {
            written.push(match operator {
                ast::Operator::Times => '.',
                ast::Operator::Over => '/',
            });
            written.push_str(&print::expression(factor));
        }
        Some(format!(
            "{} {}",
            number.text,
            unit_spelling::spelt(&written)?
        ))
    }

    fn process(&mut self, name: &ast::Name, process: &ast::ProcessName, span: Span) -> Dim {
        if self.place != Place::Request {
            return self.fault(ModelError::WrongForm {
                found: "the size of a process",
                wanted: "a scale, a constant or a number",
                span: process.span,
            });
        }
        match equation(self.model, name) {
            Ok(idx) => match self.model.equation_dimensions.get(idx) {
                Some(Some(dimension)) => Dim::Known(*dimension, span),
                Some(None) | None => Dim::Faulty,
            },
            Err(error) => self.fault(error),
        }
    }

    fn alike_all(&mut self, exprs: &[&ast::Expr], what: &Alike) -> Dim {
        let mut settled = Dim::Any;
        let mut is_faulty = false;
        for expr in exprs {
            let found = self.dimension(expr);
            is_faulty |= matches!(found, Dim::Faulty);
            alike(settled, found, what.clone(), self.errors);
            if let (Dim::Any, Dim::Known(..)) = (settled, found) {
                settled = found;
            }
        }
        match settled {
            Dim::Any if is_faulty => Dim::Faulty,
            settled => settled,
        }
    }

    fn product(&mut self, factors: &[(ast::Operator, ast::Expr)], span: Span) -> Dim {
        let mut product = Dimension::one();
        let mut is_faulty = false;
        for (place, (operator, factor)) in factors.iter().enumerate() {
            self.meant_unit = self.meant_unit(factors, place);
            let dimension = self.dimension(factor);
            self.meant_unit = None;
            let found = match dimension {
                Dim::Known(found, _) => found,
                // A product with 0 still has the dimension of the rest.
                Dim::Any => Dimension::one(),
                Dim::Faulty => {
                    is_faulty = true;
                    continue;
                }
            };
            let next = match operator {
                ast::Operator::Times => product.times(&found),
                ast::Operator::Over => product.over(&found),
            };
            match next {
                Ok(next) => product = next,
                Err(TooLarge) => return self.fault(ModelError::TooLarge { span }),
            }
        }
        if is_faulty {
            Dim::Faulty
        } else {
            Dim::Known(product, span)
        }
    }

    fn power(&mut self, base: &ast::Expr, exponent: &ast::Expr, span: Span) -> Dim {
        let found = self.dimension(base);
        if names::rational_exponent(exponent).is_some() {
            return match names::exponent(exponent) {
                Ok(exponent) => match found {
                    Dim::Known(found, _) => self.bounded(found.power(exponent), span),
                    Dim::Any | Dim::Faulty => found,
                },
                Err(error) => self.fault(error),
            };
        }
        if !matches!(self.place, Place::Constant | Place::Request) {
            return self.fault(ModelError::InexactExponent {
                span: exponent.span,
            });
        }
        self.plain_number(exponent, "an exponent");
        match found {
            Dim::Known(dimension, _) if !dimension.is_one() => {
                self.fault(ModelError::InexactExponent {
                    span: exponent.span,
                })
            }
            Dim::Known(..) | Dim::Any | Dim::Faulty => found,
        }
    }

    /// Checks that an expression is a plain number.
    fn plain_number(&mut self, expr: &ast::Expr, what: &'static str) {
        if let Dim::Known(dimension, span) = self.dimension(expr)
            && !dimension.is_one()
        {
            self.errors.push(ModelError::NotDimensionless {
                dimension,
                span,
                what,
            });
        }
    }

    fn call(
        &mut self,
        expr: &ast::Expr,
        function: &str,
        order: Option<u32>,
        arguments: &[ast::Expr],
    ) -> Dim {
        let span = expr.span;
        let found = names::call(function, self.model);
        match found {
            Call::Unknown => {
                let is_declared = self.model.meaning(function, self.phenomenon).is_some();
                self.fault(ModelError::NotAFunction {
                    name: function.to_owned(),
                    span,
                    is_declared,
                    nearest: names::nearest_function(function),
                })
            }
            Call::Mean => match self.operand("a mean", function, arguments, span) {
                Some(inside) => inside,
                None => Dim::Faulty,
            },
            Call::Vector => self.vector_operation(expr),
            Call::Function(found) => self.function(found, function, order, arguments, span),
            Call::Derivative(id) => {
                let Some(inside) = self.operand("a derivative", function, arguments, span) else {
                    return Dim::Faulty;
                };
                let along = self.model.coordinates[id.0 as usize].dimension;
                self.quotient(inside, along, order.unwrap_or(1), span)
            }
            Call::Material => self.material(function, arguments, span),
        }
    }

    /// A vector operation that gives a scalar, in the coordinates of the frame.
    fn vector_operation(&mut self, expr: &ast::Expr) -> Dim {
        let span = expr.span;
        if self.place != Place::Equation {
            return self.fault(ModelError::WrongForm {
                found: "a vector operation",
                wanted: "no derivative outside an equation",
                span,
            });
        }
        match frames::expanded(expr, self.model) {
            Ok(written_out) => self.dimension(&written_out),
            Err(error) => self.fault(error),
        }
    }

    /// The one argument of an operation that only an equation may hold.
    fn operand(
        &mut self,
        found: &'static str,
        function: &str,
        arguments: &[ast::Expr],
        span: Span,
    ) -> Option<Dim> {
        if !self.is_in_equation() {
            self.fault(ModelError::WrongForm {
                found,
                wanted: "no derivative and no mean outside an equation",
                span,
            });
            return None;
        }
        if !self.has_count(function, arguments, 1, span) {
            return None;
        }
        Some(self.dimension(&arguments[0]))
    }

    fn has_count(
        &mut self,
        function: &str,
        arguments: &[ast::Expr],
        wanted: usize,
        span: Span,
    ) -> bool {
        let fits = arguments.len() == wanted;
        if !fits {
            self.errors.push(ModelError::ArgumentCount {
                function: function.to_owned(),
                expected: "one argument",
                found: arguments.len(),
                span,
            });
        }
        fits
    }

    fn quotient(&mut self, inside: Dim, along: Option<Dimension>, order: u32, span: Span) -> Dim {
        match (inside, along) {
            (Dim::Known(inside, _), Some(along)) => {
                let quotient = Exponent::whole(i64::from(order))
                    .and_then(|order| along.power(order))
                    .and_then(|below| inside.over(&below));
                self.bounded(quotient, span)
            }
            (Dim::Any, _) => Dim::Any,
            (Dim::Faulty, _) | (_, None) => Dim::Faulty,
        }
    }

    fn material(&mut self, function: &str, arguments: &[ast::Expr], span: Span) -> Dim {
        let Some(inside) = self.operand("a derivative", function, arguments, span) else {
            return Dim::Faulty;
        };
        let Some(velocity) = &self.model.velocity else {
            return self.fault(ModelError::NoVelocity { span });
        };
        let rate = velocity.components.iter().find_map(|(field, along)| {
            let meanings = (
                self.model.meaning(&field.text, None)?,
                self.model.meaning(&along.text, None)?,
            );
            let (Meaning::Field(field), Meaning::Coordinate(along)) = meanings else {
                return None;
            };
            let speed = self.model.fields[field.0 as usize].dimension?;
            let length = frames::length_dimension(along, self.model)?;
            length.over(&speed).ok()
        });
        self.quotient(inside, rate, 1, span)
    }

    fn function(
        &mut self,
        found: Function,
        name: &str,
        order: Option<u32>,
        arguments: &[ast::Expr],
        span: Span,
    ) -> Dim {
        let raised = |walker: &mut Self, dim: Dim| match (dim, order) {
            (Dim::Known(dimension, _), Some(order)) => {
                let power =
                    Exponent::whole(i64::from(order)).and_then(|order| dimension.power(order));
                walker.bounded(power, span)
            }
            (dim, _) => dim,
        };
        if let Function::Min | Function::Max = found {
            let arguments: Vec<&ast::Expr> = arguments.iter().collect();
            let dim = self.alike_all(&arguments, &Alike::Arguments);
            return raised(self, dim);
        }
        if !self.has_count(name, arguments, 1, span) {
            return Dim::Faulty;
        }
        let argument = &arguments[0];
        let dim = match found {
            Function::Abs => self.dimension(argument),
            Function::Sqrt => match self.dimension(argument) {
                Dim::Known(inside, _) => self.bounded(inside.power(Exponent::ratio(1, 2)), span),
                dim => dim,
            },
            Function::Plain(_) => {
                self.plain_number(argument, "the argument of a function");
                Dim::Known(Dimension::one(), span)
            }
            Function::Standard(quantity) => self.standard(quantity, argument, span),
            Function::Min | Function::Max => Dim::Faulty,
        };
        raised(self, dim)
    }

    fn standard(&mut self, quantity: StandardAtmosphere, height: &ast::Expr, span: Span) -> Dim {
        let at = self.dimension(height);
        alike(
            Dim::Known(Dimension::length(), span),
            at,
            Alike::Arguments,
            self.errors,
        );
        let unit = match quantity {
            StandardAtmosphere::Temperature => "K",
            StandardAtmosphere::Pressure => "Pa",
            StandardAtmosphere::Density => "kg/m^3",
        };
        match units::parse_unit(unit) {
            Ok(unit) => Dim::Known(unit.dimension, span),
            Err(_) => Dim::Faulty,
        }
    }

    fn derivative(&mut self, operand: &ast::Expr, by: &[(ast::Name, u32)], span: Span) -> Dim {
        if !self.is_in_equation() {
            return self.fault(ModelError::WrongForm {
                found: "a derivative",
                wanted: "no derivative outside an equation",
                span,
            });
        }
        let mut dim = self.dimension(operand);
        for (name, order) in by {
            let along =
                coordinate(name, self.model, self.errors).and_then(|(_, dimension)| dimension);
            dim = self.quotient(dim, along, *order, span);
        }
        dim
    }

    fn sized(&mut self, expr: &ast::Expr, size: &ast::Expr, span: Span) -> Dim {
        if !self.is_in_equation() {
            return self.fault(ModelError::WrongForm {
                found: "a size behind `~`",
                wanted: "no `~` outside an equation",
                span,
            });
        }
        if let Some(process) = process_inside(expr) {
            self.errors
                .push(ModelError::ProcessInside { span: process });
        }
        let inside = self.dimension(expr);
        let place = std::mem::replace(&mut self.place, Place::Size);
        let found = self.dimension(size);
        self.place = place;
        alike(inside, found, Alike::Size, self.errors);
        match (inside, found) {
            (Dim::Known(dimension, _), _) | (_, Dim::Known(dimension, _)) => {
                Dim::Known(dimension, span)
            }
            (Dim::Any, dim) | (dim, _) => dim,
        }
    }
}

/// The place of an `as` inside an expression.
fn process_inside(expr: &ast::Expr) -> Option<Span> {
    match &expr.kind {
        ExprKind::As { process, .. } => Some(process.span),
        ExprKind::Sum(terms) => terms.iter().find_map(|(_, term)| process_inside(term)),
        ExprKind::Product(factors) => factors
            .iter()
            .find_map(|(_, factor)| process_inside(factor)),
        ExprKind::Negate(inside) | ExprKind::Bracket(inside) => process_inside(inside),
        ExprKind::Power { base, .. } => process_inside(base),
        ExprKind::Call { arguments, .. } | ExprKind::Tuple(arguments) => {
            arguments.iter().find_map(process_inside)
        }
        ExprKind::Derivative { operand, .. } => process_inside(operand),
        ExprKind::Sized { expr, .. } => process_inside(expr),
        ExprKind::Number(_) | ExprKind::Name(_) | ExprKind::Process { .. } | ExprKind::Error => {
            None
        }
    }
}
