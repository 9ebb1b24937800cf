//! What names mean: built-in functions, the forms that a call may take, the units of
//! literals, and the nearest spelling of an unknown name.

use num_rational::BigRational;
use num_traits::ToPrimitive;

use crate::algebra::monomial::SymbolId;
use crate::algebra::quantities::CoordinateId;
use crate::model::errors::ModelError;
use crate::model::{Meaning, Model};
use crate::number::{Exponent, Number};
use crate::source::Span;
use crate::syntax::ast::{self, ExprKind};
use crate::units::{self, Unit};

/// The functions of the language.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Function {
    /// Square root, a power 1/2.
    Sqrt,
    /// The amount.
    Abs,
    /// A function of one plain number.
    Plain(units::Function),
    /// The smallest of several.
    Min,
    /// The largest of several.
    Max,
    /// The US Standard Atmosphere 1976 at a height.
    Standard(units::StandardAtmosphere),
}

/// Every function under its name.
pub const FUNCTIONS: [(&str, Function); 19] = [
    ("sqrt", Function::Sqrt),
    ("abs", Function::Abs),
    ("exp", Function::Plain(units::Function::Exp)),
    ("log", Function::Plain(units::Function::Log)),
    ("log10", Function::Plain(units::Function::Log10)),
    ("sin", Function::Plain(units::Function::Sin)),
    ("cos", Function::Plain(units::Function::Cos)),
    ("tan", Function::Plain(units::Function::Tan)),
    ("asin", Function::Plain(units::Function::Asin)),
    ("acos", Function::Plain(units::Function::Acos)),
    ("atan", Function::Plain(units::Function::Atan)),
    ("sinh", Function::Plain(units::Function::Sinh)),
    ("cosh", Function::Plain(units::Function::Cosh)),
    ("tanh", Function::Plain(units::Function::Tanh)),
    ("min", Function::Min),
    ("max", Function::Max),
    (
        "standard_temperature",
        Function::Standard(units::StandardAtmosphere::Temperature),
    ),
    (
        "standard_pressure",
        Function::Standard(units::StandardAtmosphere::Pressure),
    ),
    (
        "standard_density",
        Function::Standard(units::StandardAtmosphere::Density),
    ),
];

/// Operations on fields and vectors, which are no functions of numbers.
pub const OPERATIONS: [&str; 8] = [
    "D_t",
    "mean",
    "grad",
    "div",
    "curl",
    "laplacian",
    "cross",
    "dot",
];

/// Whether a name is built in, so that nothing may be declared under it.
pub fn is_reserved_function(name: &str) -> bool {
    is_pi(name) || OPERATIONS.contains(&name) || FUNCTIONS.iter().any(|(found, _)| *found == name)
}

/// Whether a name is an operation on vectors, or one that needs their frame.
pub fn is_vector_operation(name: &str) -> bool {
    matches!(
        name,
        "grad" | "div" | "curl" | "laplacian" | "cross" | "dot"
    )
}

/// Whether a name is the number π.
pub fn is_pi(name: &str) -> bool {
    matches!(name, "pi" | "π")
}

/// What a name with brackets behind it means.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Call {
    /// `d_x(...)`, `d_x^2(...)`.
    Derivative(CoordinateId),
    /// `D_t(...)`.
    Material,
    /// `mean(...)`.
    Mean,
    /// `grad(...)` and the like.
    Vector,
    /// A function.
    Function(Function),
    /// Nothing known.
    Unknown,
}

/// What a call means in a model.
pub fn call(function: &str, model: &Model) -> Call {
    if let Some(&(_, found)) = FUNCTIONS.iter().find(|(name, _)| *name == function) {
        return Call::Function(found);
    }
    match function {
        "D_t" => return Call::Material,
        "mean" => return Call::Mean,
        name if is_vector_operation(name) => return Call::Vector,
        _ => {}
    }
    let along = function
        .strip_prefix("d_")
        .and_then(|name| model.meaning(name, None));
    match along {
        Some(Meaning::Coordinate(id)) => Call::Derivative(id),
        Some(Meaning::Symbol(_) | Meaning::Field(_) | Meaning::Group(_) | Meaning::Vector(_))
        | None => Call::Unknown,
    }
}

/// The literal's exact value in SI units, with its unit.
///
/// # Errors
/// A unit that cannot be read, a value beyond the limits, a unit with an offset unless
/// `may_be_reading`.
pub fn literal(
    number: &ast::Number,
    span: Span,
    may_be_reading: bool,
) -> Result<(Number, Unit), ModelError> {
    let Some(text) = &number.unit else {
        return Ok((Number::rational(number.value.clone()), Unit::one()));
    };
    let unit = unit(text)?;
    if unit.offset.is_some() && !may_be_reading {
        return Err(ModelError::OffsetUnit {
            unit: text.text.clone(),
            span: text.span,
        });
    }
    let value = unit
        .to_si(&number.value)
        .map_err(|_| ModelError::TooLarge { span })?;
    Ok((value, unit))
}

/// Reads a unit.
///
/// # Errors
/// [`ModelError::Unit`].
pub fn unit(text: &ast::UnitText) -> Result<Unit, ModelError> {
    units::parse_unit(&text.text).map_err(|error| ModelError::Unit {
        error,
        text: text.text.clone(),
        span: text.span,
        mend: None,
    })
}

/// The exact value of an exponent: numbers, their signs, products, quotients and sums.
pub fn rational_exponent(expr: &ast::Expr) -> Option<BigRational> {
    match &expr.kind {
        ExprKind::Number(number) if number.unit.is_none() => Some(number.value.clone()),
        ExprKind::Bracket(inside) => rational_exponent(inside),
        ExprKind::Negate(inside) => rational_exponent(inside).map(|value| -value),
        ExprKind::Sum(terms) => {
            terms
                .iter()
                .try_fold(BigRational::default(), |sum, (sign, term)| {
                    let value = rational_exponent(term)?;
                    Some(match sign {
                        ast::Sign::Plus => sum + value,
                        ast::Sign::Minus => sum - value,
                    })
                })
        }
        ExprKind::Product(factors) => {
            let mut product = BigRational::from_integer(1.into());
            for (operator, factor) in factors {
                let value = rational_exponent(factor)?;
                match operator {
                    ast::Operator::Times => product *= value,
                    ast::Operator::Over if value == BigRational::default() => return None,
                    ast::Operator::Over => product /= value,
                }
            }
            Some(product)
        }
        ExprKind::Power { base, exponent } => {
            let base = rational_exponent(base)?;
            let exponent = rational_exponent(exponent)?;
            let whole = exponent.is_integer().then(|| exponent.to_i64()).flatten()?;
            crate::number::whole_power(&base, whole).ok()
        }
        ExprKind::Number(_)
        | ExprKind::Name(_)
        | ExprKind::Process { .. }
        | ExprKind::Call { .. }
        | ExprKind::Derivative { .. }
        | ExprKind::Tuple(_)
        | ExprKind::Sized { .. }
        | ExprKind::As { .. }
        | ExprKind::Error => None,
    }
}

/// The same, within the limits of exponents.
///
/// # Errors
/// An inexact or too large exponent.
pub fn exponent(expr: &ast::Expr) -> Result<Exponent, ModelError> {
    let value = rational_exponent(expr).ok_or(ModelError::InexactExponent { span: expr.span })?;
    Exponent::from_rational(&value).map_err(|_| ModelError::TooLarge { span: expr.span })
}

/// Calls `visit` for every name that stands for a value in an expression, in order.
pub fn visit_names<'a>(expr: &'a ast::Expr, visit: &mut impl FnMut(&'a str, Span)) {
    expr.visit(&mut |expr| {
        if let ExprKind::Name(name) = &expr.kind {
            visit(name, expr.span);
        }
    });
}

/// Whether an expression holds a name other than π.
pub fn has_names(expr: &ast::Expr) -> bool {
    let mut found = false;
    visit_names(expr, &mut |name, _| found |= !is_pi(name));
    found
}

/// The scales and constants named in an expression, groups followed to theirs, in order,
/// each once.
pub fn symbols_in(expr: &ast::Expr, model: &Model, phenomenon: Option<usize>) -> Vec<SymbolId> {
    let mut found = Vec::new();
    // Groups may name groups, in a chain as long as a script.
    let mut seen = Vec::new();
    let mut waiting = vec![expr];
    while let Some(expr) = waiting.pop() {
        visit_names(expr, &mut |name, _| match model.meaning(name, phenomenon) {
            Some(Meaning::Symbol(id)) if !found.contains(&id) => found.push(id),
            Some(Meaning::Group(id)) if !seen.contains(&id) => {
                seen.push(id);
                waiting.push(&model.groups[id.0 as usize].value);
            }
            Some(
                Meaning::Symbol(_)
                | Meaning::Group(_)
                | Meaning::Coordinate(_)
                | Meaning::Field(_)
                | Meaning::Vector(_),
            )
            | None => {}
        });
    }
    found
}

/// The built-in function nearest to a name: spelt nearly so, or a longer or shorter form
/// of it, as `lap` is of `laplacian`.
pub fn nearest_function(name: &str) -> Option<String> {
    const SHORTEST: usize = 3;
    let known = || {
        let functions = FUNCTIONS.iter().map(|(known, _)| *known);
        functions.chain(OPERATIONS)
    };
    let is_form = |known: &&str| {
        let (short, long) = match known.len() < name.len() {
            true => (*known, name),
            false => (name, *known),
        };
        short.len() >= SHORTEST && long.starts_with(short)
    };
    nearest(name, known()).or_else(|| known().find(is_form).map(str::to_owned))
}

/// The candidate nearest to a misspelt name, if one is near.
pub fn nearest<'a>(name: &str, candidates: impl IntoIterator<Item = &'a str>) -> Option<String> {
    let allowed = match name.chars().count() {
        0..=2 => 1,
        3..=5 => 1,
        _ => 2,
    };
    candidates
        .into_iter()
        .filter(|candidate| *candidate != name)
        .map(|candidate| (strsim::damerau_levenshtein(name, candidate), candidate))
        .filter(|(distance, candidate)| {
            *distance <= allowed && *distance < candidate.chars().count()
        })
        .min()
        .map(|(_, candidate)| candidate.to_owned())
}
