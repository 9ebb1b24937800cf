//! What expressions amount to in one setting: exact numbers, ranges and monomials.
//!
//! Everything here has passed the dimension check. A product of powers becomes a
//! [`Monomial`]; anything else has a [`Value`] by interval arithmetic.

use std::sync::Arc;

use crate::algebra::monomial::{self, Monomial, Symbol, SymbolId};
use crate::model::dimensions::is_offset;
use crate::model::errors::{ModelError, Product};
use crate::model::names::{self, Call, Function};
use crate::model::{GroupId, Meaning, Model};
use crate::number::{Exponent, Number, TooLarge};
use crate::source::Span;
use crate::syntax::ast::{self, ExprKind, Operator, Sign};
use crate::syntax::print;
use crate::units::{self, ExactTrig, Range, RangeError, Trig};

/// A number of one setting, in SI units.
#[derive(Debug, Clone, PartialEq)]
pub struct Value {
    /// Its range; equal ends where nothing is uncertain.
    pub range: Range,
    /// The exact number, where there is one.
    pub exact: Option<Number>,
}

impl Value {
    /// An exact number.
    pub fn exact(number: Number) -> Value {
        Value {
            range: Range::exact(number.to_f64()),
            exact: Some(number),
        }
    }

    fn inexact(range: Range) -> Value {
        Value { range, exact: None }
    }

    /// Whether it is 0, exactly where that can be told.
    pub fn is_zero(&self) -> bool {
        match &self.exact {
            Some(number) => number.is_zero(),
            None => self.range.low == 0.0 && self.range.high == 0.0,
        }
    }
}

/// Why an expression has no value or no monomial.
#[derive(Debug, Clone)]
pub enum Fault {
    /// It holds these open names.
    Open(Vec<SymbolId>),
    /// It is no product of powers; the place that makes it none.
    NotAProduct(Span),
    /// Anything else.
    Error(ModelError),
}

impl Fault {
    /// As an error, where an open name is none and a product is wanted for `what`.
    pub fn error(self, what: Product) -> Option<ModelError> {
        match self {
            Fault::Open(_) => None,
            Fault::NotAProduct(span) => Some(ModelError::NotAProduct { span, what }),
            Fault::Error(error) => Some(error),
        }
    }
}

impl From<ModelError> for Fault {
    fn from(error: ModelError) -> Fault {
        Fault::Error(error)
    }
}

/// What expressions are evaluated against.
pub trait Names {
    /// The model.
    fn model(&self) -> &Model;
    /// The phenomenon whose names are seen.
    fn phenomenon(&self) -> Option<usize>;
    /// The value of a scale or constant.
    ///
    /// # Errors
    /// The open names it rests on.
    fn symbol(&self, id: SymbolId) -> Result<Value, Vec<SymbolId>>;
    /// The formula of a group in scales and constants; none where it has none.
    fn group(&self, id: GroupId) -> Option<&Monomial>;
    /// The size of a process over the box, in SI units.
    ///
    /// # Errors
    /// Where it has none.
    fn process(&self, equation: &ast::Name, process: &ast::ProcessName) -> Result<Range, Fault>;
}

fn too_large(span: Span) -> impl Fn(TooLarge) -> Fault {
    move |_| Fault::Error(ModelError::TooLarge { span })
}

fn ranged(found: Result<Range, RangeError>, span: Span) -> Result<Range, Fault> {
    found.map_err(|error| {
        Fault::Error(match error {
            RangeError::DividesByZero => ModelError::DividesByZero { span },
            RangeError::OutOfDomain => ModelError::OutOfDomain {
                span,
                what: "a value inside the domain of the function over the whole range",
            },
            RangeError::TooLarge => ModelError::TooLarge { span },
        })
    })
}

// Values ----------------------------------------------------------------------------------

/// The value of any expression, by interval arithmetic where it is not exact.
///
/// # Errors
/// Open names, divisions by zero, values out of a domain or beyond the limits.
pub fn evaluate(expr: &ast::Expr, names: &impl Names) -> Result<Value, Fault> {
    let span = expr.span;
    match &expr.kind {
        ExprKind::Number(number) => Ok(Value::exact(names::literal(number, span, false)?.0)),
        ExprKind::Name(name) => evaluate_name(name, span, names),
        ExprKind::Process { equation, process } => {
            names.process(equation, process).map(Value::inexact)
        }
        ExprKind::Sum(terms) => evaluate_sum(terms, names, span),
        ExprKind::Product(factors) => evaluate_product(factors, names),
        ExprKind::Negate(inside) => {
            let value = evaluate(inside, names)?;
            Ok(Value {
                range: value.range.neg(),
                exact: value.exact.map(|number| number.negated()),
            })
        }
        ExprKind::Bracket(inside) => evaluate(inside, names),
        ExprKind::Power { base, exponent } => evaluate_power(base, exponent, names, span),
        ExprKind::Call {
            function,
            order,
            arguments,
        } => {
            let value = evaluate_call(&function.text, arguments, names, span)?;
            match order {
                Some(order) => power(
                    &value,
                    Exponent::whole(i64::from(*order)).map_err(too_large(span))?,
                    span,
                ),
                None => Ok(value),
            }
        }
        ExprKind::Derivative { .. }
        | ExprKind::Tuple(_)
        | ExprKind::Sized { .. }
        | ExprKind::As { .. }
        | ExprKind::Error => Err(Fault::NotAProduct(span)),
    }
}

fn evaluate_name(name: &str, span: Span, names: &impl Names) -> Result<Value, Fault> {
    match names.model().meaning(name, names.phenomenon()) {
        Some(Meaning::Symbol(id)) => names.symbol(id).map_err(Fault::Open),
        Some(Meaning::Group(id)) => {
            let formula = names.group(id).ok_or(Fault::NotAProduct(span))?;
            evaluate_monomial(formula, names, span)
        }
        None if names::is_pi(name) => Ok(Value::exact(Number::pi())),
        Some(Meaning::Coordinate(_) | Meaning::Field(_) | Meaning::Vector(_)) | None => {
            Err(Fault::NotAProduct(span))
        }
    }
}

/// The value of a monomial, symbol by symbol.
fn evaluate_monomial(monomial: &Monomial, names: &impl Names, span: Span) -> Result<Value, Fault> {
    let mut product = Value::exact(monomial.number.clone());
    for (symbol, exponent) in monomial.powers() {
        let value = match symbol {
            Symbol::Declared(id) => names.symbol(*id).map_err(Fault::Open)?,
            Symbol::Function(function) => match function.value {
                Some(range) => Value::inexact(range),
                None => return Err(Fault::Open(function.open.clone())),
            },
        };
        let factor = power(&value, *exponent, span)?;
        product = match (&product.exact, &factor.exact) {
            (Some(a), Some(b)) => Value::exact(a.times(b).map_err(too_large(span))?),
            _ => Value::inexact(ranged(product.range.times(&factor.range), span)?),
        };
    }
    Ok(product)
}

fn evaluate_sum(
    terms: &[(Sign, ast::Expr)],
    names: &impl Names,
    span: Span,
) -> Result<Value, Fault> {
    let mut sum = Value::exact(Number::whole(0));
    for (sign, term) in terms {
        let value = evaluate(term, names)?;
        let value = match sign {
            Sign::Plus => value,
            Sign::Minus => Value {
                range: value.range.neg(),
                exact: value.exact.map(|number| number.negated()),
            },
        };
        let exact = match (&sum.exact, &value.exact) {
            (Some(a), Some(b)) => a.plus(b),
            (Some(_) | None, None) | (None, Some(_)) => None,
        };
        sum = match exact {
            Some(exact) => Value::exact(exact),
            None => Value::inexact(ranged(sum.range.plus(&value.range), span)?),
        };
    }
    Ok(sum)
}

fn evaluate_product(factors: &[(Operator, ast::Expr)], names: &impl Names) -> Result<Value, Fault> {
    let mut product = Value::exact(Number::one());
    for (operator, factor) in factors {
        let span = factor.span;
        let value = evaluate(factor, names)?;
        let value = match operator {
            Operator::Times => value,
            Operator::Over if value.is_zero() => {
                return Err(Fault::Error(ModelError::DividesByZero { span }));
            }
            Operator::Over => power(&value, Exponent::ONE.negated(), span)?,
        };
        product = match (&product.exact, &value.exact) {
            (Some(a), Some(b)) => Value::exact(a.times(b).map_err(too_large(span))?),
            _ => Value::inexact(ranged(product.range.times(&value.range), span)?),
        };
    }
    Ok(product)
}

fn evaluate_power(
    base: &ast::Expr,
    exponent: &ast::Expr,
    names: &impl Names,
    span: Span,
) -> Result<Value, Fault> {
    let value = evaluate(base, names)?;
    if names::rational_exponent(exponent).is_some() {
        return power(&value, names::exponent(exponent)?, span);
    }
    let exponent = evaluate(exponent, names)?;
    if let Some(Ok(exact)) = exponent
        .exact
        .as_ref()
        .and_then(Number::as_rational)
        .map(Exponent::from_rational)
    {
        return power(&value, exact, span);
    }
    let range = ranged(value.range.power_of_range(&exponent.range), span)?;
    Ok(Value::inexact(range))
}

fn power(value: &Value, exponent: Exponent, span: Span) -> Result<Value, Fault> {
    if value.is_zero() && exponent.is_negative() {
        return Err(Fault::Error(ModelError::DividesByZero { span }));
    }
    let is_root = !exponent.is_whole();
    if let Some(exact) = &value.exact
        && !(is_root && exact.is_negative())
        && let Ok(exact) = exact.power(exponent)
    {
        return Ok(Value::exact(exact));
    }
    Ok(Value::inexact(ranged(value.range.power(exponent), span)?))
}

fn evaluate_call(
    function: &str,
    arguments: &[ast::Expr],
    names: &impl Names,
    span: Span,
) -> Result<Value, Fault> {
    let Call::Function(found) = names::call(function, names.model()) else {
        return Err(Fault::NotAProduct(span));
    };
    let values: Vec<Value> = arguments
        .iter()
        .map(|argument| evaluate(argument, names))
        .collect::<Result<_, _>>()?;
    let Some(first) = values.first() else {
        return Err(Fault::NotAProduct(span));
    };
    match found {
        Function::Sqrt => power(first, Exponent::ratio(1, 2), span),
        Function::Abs => Ok(Value {
            range: first.range.abs(),
            exact: first.exact.as_ref().map(Number::abs),
        }),
        Function::Plain(plain) => plain_function(plain, first, span),
        Function::Min => Ok(extreme(&values, |a, b| a.min(&b))),
        Function::Max => Ok(extreme(&values, |a, b| a.max(&b))),
        Function::Standard(quantity) => match quantity.over(&first.range) {
            Some(range) => Ok(Value::inexact(range)),
            None => Err(Fault::Error(ModelError::OutOfDomain {
                span,
                what: "a height inside the standard atmosphere",
            })),
        },
    }
}

/// A function of one plain number.
///
/// # Errors
/// A pole, a value outside its domain or beyond the limits.
pub fn plain_function(
    function: units::Function,
    argument: &Value,
    span: Span,
) -> Result<Value, Fault> {
    let trig = match function {
        units::Function::Sin => Some(Trig::Sin),
        units::Function::Cos => Some(Trig::Cos),
        units::Function::Tan => Some(Trig::Tan),
        _ => None,
    };
    if let (Some(trig), Some(exact)) = (trig, &argument.exact) {
        match units::exact_trig(trig, exact) {
            ExactTrig::Exact(number) => return Ok(Value::exact(number)),
            ExactTrig::Infinite => return Err(Fault::Error(ModelError::DividesByZero { span })),
            ExactTrig::NotExact => {}
        }
    }
    Ok(Value::inexact(ranged(
        function.over(&argument.range),
        span,
    )?))
}

fn extreme(values: &[Value], pick: impl Fn(Range, Range) -> Range) -> Value {
    let ranges = values.iter().map(|value| value.range);
    let range = ranges.reduce(pick).unwrap_or(Range::exact(0.0));
    let exact = values
        .iter()
        .filter(|_| range.is_exact())
        .find(|value| value.range == range)
        .and_then(|value| value.exact.clone());
    Value { range, exact }
}

// Monomials -------------------------------------------------------------------------------

/// A product of powers as a monomial, in the user's own scales.
///
/// # Errors
/// [`Fault::NotAProduct`] for a sum or a function of something that is no constant.
pub fn monomial(expr: &ast::Expr, names: &impl Names) -> Result<Monomial, Fault> {
    let span = expr.span;
    match &expr.kind {
        ExprKind::Number(number) => Ok(Monomial::number(names::literal(number, span, false)?.0)),
        ExprKind::Name(name) => monomial_name(name, span, names),
        ExprKind::Product(factors) => {
            let mut product = Monomial::one();
            for (operator, factor) in factors {
                let mut next = monomial(factor, names)?;
                if *operator == Operator::Over {
                    next = monomial_power(&next, Exponent::ONE.negated(), factor.span)?;
                }
                product = product.times(&next).map_err(too_large(span))?;
            }
            Ok(product)
        }
        ExprKind::Negate(inside) => {
            let minus = Monomial::number(Number::whole(-1));
            monomial(inside, names)?
                .times(&minus)
                .map_err(too_large(span))
        }
        ExprKind::Bracket(inside) => monomial(inside, names),
        ExprKind::Power { base, exponent } => {
            let exponent = exact_exponent(exponent, names)?;
            monomial_power(&monomial(base, names)?, exponent, span)
        }
        ExprKind::Call {
            function,
            order,
            arguments,
        } => {
            let found = monomial_call(expr, &function.text, arguments, names)?;
            match order {
                Some(order) => {
                    let order = Exponent::whole(i64::from(*order)).map_err(too_large(span))?;
                    monomial_power(&found, order, span)
                }
                None => Ok(found),
            }
        }
        ExprKind::Sum(_) if !names::has_names(expr) => match evaluate(expr, names)?.exact {
            Some(number) => Ok(Monomial::number(number)),
            None => Err(Fault::NotAProduct(span)),
        },
        ExprKind::Sum(_)
        | ExprKind::Process { .. }
        | ExprKind::Derivative { .. }
        | ExprKind::Tuple(_)
        | ExprKind::Sized { .. }
        | ExprKind::As { .. }
        | ExprKind::Error => Err(Fault::NotAProduct(span)),
    }
}

/// An exponent; in a request it may be a constant with an exact value.
fn exact_exponent(expr: &ast::Expr, names: &impl Names) -> Result<Exponent, Fault> {
    if names::rational_exponent(expr).is_some() {
        return Ok(names::exponent(expr)?);
    }
    let value = evaluate(expr, names)?;
    match value.exact.as_ref().and_then(Number::as_rational) {
        Some(exact) => Exponent::from_rational(exact).map_err(too_large(expr.span)),
        None => Err(Fault::NotAProduct(expr.span)),
    }
}

fn monomial_name(name: &str, span: Span, names: &impl Names) -> Result<Monomial, Fault> {
    match names.model().meaning(name, names.phenomenon()) {
        Some(Meaning::Symbol(id)) => Ok(Monomial::symbol(Symbol::Declared(id))),
        Some(Meaning::Group(id)) => names.group(id).cloned().ok_or(Fault::NotAProduct(span)),
        None if names::is_pi(name) => Ok(Monomial::number(Number::pi())),
        Some(Meaning::Coordinate(_) | Meaning::Field(_) | Meaning::Vector(_)) | None => {
            Err(Fault::NotAProduct(span))
        }
    }
}

/// A power of a monomial, with the faults of its number.
///
/// # Errors
/// A division by 0, the root of a negative number, a number beyond the limits.
pub fn monomial_power(base: &Monomial, exponent: Exponent, span: Span) -> Result<Monomial, Fault> {
    if base.number.is_zero() && exponent.is_negative() {
        return Err(Fault::Error(ModelError::DividesByZero { span }));
    }
    if base.number.is_negative() && !exponent.is_whole() {
        return Err(Fault::Error(ModelError::OutOfDomain {
            span,
            what: "no root of a negative number",
        }));
    }
    base.power(exponent).map_err(too_large(span))
}

fn monomial_call(
    expr: &ast::Expr,
    function: &str,
    arguments: &[ast::Expr],
    names: &impl Names,
) -> Result<Monomial, Fault> {
    let span = expr.span;
    let Call::Function(found) = names::call(function, names.model()) else {
        return Err(Fault::NotAProduct(span));
    };
    let inside = match (found, arguments) {
        (Function::Sqrt | Function::Abs, [argument]) => monomial(argument, names),
        _ => Err(Fault::NotAProduct(span)),
    };
    match (found, inside) {
        (Function::Sqrt, Ok(inside)) => {
            return monomial_power(&inside, Exponent::ratio(1, 2), span);
        }
        (Function::Abs, Ok(inside)) => return Ok(inside.abs()),
        (_, Err(Fault::Error(error))) => return Err(Fault::Error(error)),
        (_, Ok(_) | Err(Fault::Open(_) | Fault::NotAProduct(_))) => {}
    }
    function_symbol(function, arguments, names, span)
}

/// A function of constants: a number where it is exact and holds no name, else a symbol
/// under its text.
fn function_symbol(
    function: &str,
    arguments: &[ast::Expr],
    names: &impl Names,
    span: Span,
) -> Result<Monomial, Fault> {
    let mut symbols = Vec::new();
    for argument in arguments {
        if !holds_constants_only(argument, names) {
            return Err(Fault::NotAProduct(span));
        }
        symbols.extend(names::symbols_in(
            argument,
            names.model(),
            names.phenomenon(),
        ));
    }
    let value = match evaluate_call(function, arguments, names, span) {
        Ok(value) => value,
        Err(Fault::Open(open)) => {
            return Ok(function_under_text(
                function, arguments, None, open, symbols,
            ));
        }
        Err(fault) => return Err(fault),
    };
    match &value.exact {
        Some(number) if symbols.is_empty() => Ok(Monomial::number(number.clone())),
        Some(_) | None => Ok(function_under_text(
            function,
            arguments,
            Some(&value),
            Vec::new(),
            symbols,
        )),
    }
}

fn function_under_text(
    function: &str,
    arguments: &[ast::Expr],
    value: Option<&Value>,
    open: Vec<SymbolId>,
    parts: Vec<SymbolId>,
) -> Monomial {
    let arguments: Vec<String> = arguments.iter().map(print::expression).collect();
    Monomial::symbol(Symbol::Function(Arc::new(monomial::Function {
        text: format!("{function}({})", arguments.join(", ")),
        value: value.map(|value| value.range),
        is_zero: value.is_some_and(Value::is_zero),
        open,
        parts,
    })))
}

fn holds_constants_only(expr: &ast::Expr, names: &impl Names) -> bool {
    let model = names.model();
    let mut fits = true;
    names::visit_names(expr, &mut |name, _| {
        fits &= match model.meaning(name, names.phenomenon()) {
            Some(Meaning::Symbol(id)) => model.symbols[id.idx()].kind == ast::ValueKind::Constant,
            Some(
                Meaning::Coordinate(_) | Meaning::Field(_) | Meaning::Group(_) | Meaning::Vector(_),
            ) => false,
            None => names::is_pi(name),
        };
    });
    fits
}

/// A literal that may be a reading on a scale with an offset: `15 degC`.
///
/// # Errors
/// As [`names::literal`].
pub fn reading(expr: &ast::Expr) -> Option<Result<Number, ModelError>> {
    if !is_offset(expr) {
        return None;
    }
    match &expr.kind {
        ExprKind::Number(number) => {
            Some(names::literal(number, expr.span, true).map(|(value, _)| value))
        }
        ExprKind::Negate(inside) => match &inside.kind {
            ExprKind::Number(number) => {
                let negative = ast::Number {
                    value: -number.value.clone(),
                    ..number.clone()
                };
                Some(names::literal(&negative, expr.span, true).map(|(value, _)| value))
            }
            _ => None,
        },
        _ => None,
    }
}
