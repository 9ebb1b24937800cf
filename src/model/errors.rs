//! What can be wrong with a model, as data; `words` turns it into diagnostics.

mod words;

use crate::diagnostic::Diagnostic;
use crate::source::Span;
use crate::units::{Dimension, UnitError};

/// A fault of a model, or something worth saying about it. Fields are named for what they
/// hold: spans for places, names and texts as written, dimensions and numbers as found.
#[expect(
    missing_docs,
    reason = "the comment on the enum says what its fields are"
)]
#[derive(Debug, Clone)]
pub enum ModelError {
    /// The language has it, this version does not answer it.
    NotAvailable { what: Unavailable, span: Span },
    /// A name that nothing declares.
    UnknownName {
        name: String,
        span: Span,
        nearest: Option<String>,
        missing: Missing,
        unit: Option<String>,
    },
    /// A name with brackets behind it that is no function.
    NotAFunction {
        name: String,
        span: Span,
        is_declared: bool,
        nearest: Option<String>,
    },
    /// A function with too few or too many arguments.
    ArgumentCount {
        function: String,
        expected: &'static str,
        found: usize,
        span: Span,
    },
    /// A unit that cannot be read.
    Unit {
        error: UnitError,
        text: String,
        span: Span,
        mend: Option<String>,
    },
    /// A unit that consists of declared names only.
    UnitOrSymbol {
        number: String,
        unit: String,
        product: String,
        span: Span,
    },
    /// A reading on a scale with an offset where a difference or a product is meant.
    OffsetUnit { unit: String, span: Span },
    /// A name declared twice with two meanings.
    NameClash {
        name: String,
        span: Span,
        first: Option<Span>,
        what: Clash,
    },
    /// A second value at one level.
    SecondValue {
        name: String,
        span: Span,
        first: Span,
    },
    /// A value that replaces one of a lower level.
    ValueOverridden {
        name: String,
        span: Span,
        first: Span,
        phenomenon: Option<String>,
        is_opened: bool,
    },
    /// Two process names that meet in one product.
    TwoProcesses {
        first: (String, Span),
        second: (String, Span),
    },
    /// An `as` inside an expression with a size of its own.
    ProcessInside { span: Span },
    /// Components and coordinates of a velocity that do not pair.
    VelocityCount {
        n_fields: usize,
        n_coordinates: usize,
        span: Span,
    },
    /// A kind of name that has no place here.
    OutOfPlace {
        name: String,
        kind: &'static str,
        wanted: &'static str,
        span: Span,
    },
    /// A kind of expression that has no place here.
    WrongForm {
        found: &'static str,
        wanted: &'static str,
        span: Span,
    },
    /// Unlike dimensions of two things that must be alike.
    UnlikeDimensions {
        expected: Dimension,
        expected_at: Span,
        found: Dimension,
        found_at: Span,
        what: Alike,
    },
    /// Something that must be a plain number and is not.
    NotDimensionless {
        dimension: Dimension,
        span: Span,
        what: &'static str,
    },
    /// An exponent that is no exact rational number.
    InexactExponent { span: Span },
    /// A scale, or its lower end, at or below 0.
    NotPositive {
        name: String,
        value: f64,
        unit: String,
        span: Span,
    },
    /// A tolerance of 1 or more.
    ToleranceTooWide { span: Span },
    /// A range whose lower end lies above its upper one, or a factor below 1.
    RangeUpsideDown { span: Span, is_factor: bool },
    /// A range of a constant that holds 0.
    RangeHoldsZero { name: String, span: Span },
    /// A margin that takes a scale to 0 or below.
    MarginTooWide { name: String, span: Span },
    /// A share behind `+-`.
    ShareAsMargin { span: Span, text: String },
    /// A range behind a value that follows others.
    DerivedScale { name: String, span: Span },
    /// A derived name where one is wanted that moves by itself.
    MovesWithParts {
        name: String,
        span: Span,
        parts: Vec<String>,
    },
    /// A name that would move a symbol which is no product with it.
    MovesOthers {
        name: String,
        span: Span,
        holders: Vec<String>,
    },
    /// Something that is no product of powers where one is needed.
    NotAProduct { span: Span, what: Product },
    /// A number or exponent beyond the limits.
    TooLarge { span: Span },
    /// More scales than dimensionless groups are looked for among.
    TooManyGroups { n_symbols: usize, span: Span },
    /// A division by 0.
    DividesByZero { span: Span },
    /// A value outside the domain of a function, or not a real number.
    OutOfDomain { span: Span, what: &'static str },
    /// Declarations that need one another.
    Circular {
        names: Vec<String>,
        spans: Vec<Span>,
        is_split: bool,
    },
    /// A script with nothing to answer for.
    NothingToRank { span: Span },
    /// An equation written with one term.
    OneTerm { equation: String, span: Span },
    /// `D_t` without a velocity.
    NoVelocity { span: Span },
    /// Vectors without a frame.
    NoFrame { span: Span },
    /// A vector where a scalar is needed, or the other way round.
    WrongShape {
        wanted: Shape,
        found: Shape,
        span: Span,
        because: Option<Span>,
    },
    /// A tuple of another number than three, or six for a stress.
    ComponentCount { found: usize, span: Span },
    /// Vector operations nested beyond the limit.
    DeepVectors { span: Span },
    /// A vector expression that comes to too much.
    TooManyTerms { span: Span },
    /// A vector equation where one component is needed.
    VectorEquation {
        name: String,
        span: Span,
        components: Vec<String>,
    },
    /// Without a time coordinate `D_t` has no tendency.
    NoTime { span: Span },
    /// A function of something that varies.
    NotSplit { span: Span, function: String },
    /// A split of too many parts, or nested too deep.
    SplitTooLarge { name: String, span: Span },
    /// A field with a level and an amplitude of its own where it must be split.
    LevelNotSplit {
        name: String,
        span: Span,
        declared: Span,
    },
    /// An order beyond the limit.
    OrderTooHigh { span: Span },
    /// Parts that are too large to expand about the largest.
    RatioNotSmall {
        span: Span,
        small: String,
        large: String,
        ratio: f64,
        declared: Option<(String, Span)>,
    },
    /// An expansion about a place where it has none.
    SingularExpansion { span: Span, what: String },
    /// An expression that is no linear combination of equations, or an equation that
    /// says nothing to put in elsewhere.
    NotARelation { span: Span, what: Relation },
    /// A relation whose left side holds a field that is split.
    SplitOnTheLeft {
        relation: String,
        field: String,
        parts: Vec<String>,
        span: Span,
        declared: Span,
    },
    /// A relation whose left side does not occur in the equation it is put into.
    NothingReplaced {
        relation: String,
        left: String,
        equation: String,
        span: Span,
    },
    /// A relation whose right side holds its left one.
    HoldsItself { relation: String, span: Span },
    /// A derivative along a coordinate on which its field does not depend.
    ZeroDerivative {
        equation: String,
        texts: Vec<String>,
        span: Span,
    },
    /// A constant that is 0 takes its terms out.
    ZeroConstant {
        equation: String,
        texts: Vec<String>,
        names: Vec<String>,
        phenomenon: Option<String>,
        span: Span,
    },
    /// An expression said to be larger than its parts.
    CancelsUpwards {
        span: Span,
        size: f64,
        largest: f64,
        unit: String,
    },
    /// An equation that is not declared.
    UnknownEquation {
        name: String,
        span: Span,
        nearest: Option<String>,
    },
    /// A process that an equation does not have.
    UnknownProcess {
        name: String,
        equation: String,
        span: Span,
        known: Vec<String>,
    },
    /// A phenomenon that is not declared.
    UnknownPhenomenon {
        name: String,
        span: Span,
        nearest: Option<String>,
    },
    /// A module that the library does not have.
    UnknownModule {
        name: String,
        span: Option<Span>,
        nearest: Option<String>,
    },
    /// A file that cannot be read.
    UnreadableFile {
        path: String,
        reason: String,
        span: Option<Span>,
    },
    /// A file that is no UTF-8.
    NotUtf8 {
        path: String,
        offset: usize,
        span: Option<Span>,
    },
    /// Modules that use one another.
    UseCycle {
        names: Vec<String>,
        spans: Vec<Span>,
    },
    /// More modules than the limit.
    TooManyModules { span: Span },
    /// A file outside the folder of the script.
    OutsideFolder { path: String, span: Span },
}

/// What an expression is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Shape {
    /// One value.
    Scalar,
    /// Three components.
    Vector,
    /// A symmetric stress, of six components.
    Stress,
}

/// What this version does not answer.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Unavailable {
    /// A request, by its keyword.
    Request(&'static str),
}

/// What a name that nothing declares should be.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Missing {
    /// A scale or a constant.
    Value,
    /// A scale or a constant without a value.
    Open,
    /// What an equation may hold.
    Quantity,
    /// A coordinate.
    Coordinate,
    /// A group.
    Group,
    /// A vector.
    Vector,
}

/// What is no relation.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Relation {
    /// What stands behind `from`.
    Combination,
    /// An equation behind `using` whose left side holds nothing to replace.
    Using,
}

/// What clashes.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Clash {
    /// A name of the one space.
    Name,
    /// A scale with a constant of one name.
    Kind,
    /// A built-in function or number.
    BuiltIn,
    /// An equation.
    Equation,
    /// A balance.
    Balance,
    /// A phenomenon.
    Phenomenon,
    /// The derivative that a name would spell.
    Derivative,
}

/// Which things must have one dimension.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Alike {
    /// Terms of a sum.
    Terms,
    /// Sides of an equation.
    Sides,
    /// Sides of a relation.
    Relation,
    /// A value and the declaration of its name.
    Value(String),
    /// A size and what it is the size of.
    Size,
    /// A quantity and the unit it is shown in.
    Unit,
    /// Arguments of one function.
    Arguments,
    /// The ends of a range.
    Range,
}

/// What must be a product of powers.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Product {
    /// The size of a field or coordinate.
    Size,
    /// A named group.
    Group,
    /// A term of an equation.
    Term,
    /// A limit.
    Limit,
    /// A term of an equation that is expanded order by order.
    Expanded,
    /// The left side of an equation behind `using`.
    Using,
}

impl ModelError {
    /// Whether it is about a value or its range, which can be judged beside other faults.
    pub fn is_of_value(&self) -> bool {
        matches!(
            self,
            ModelError::NotPositive { .. }
                | ModelError::RangeUpsideDown { .. }
                | ModelError::RangeHoldsZero { .. }
                | ModelError::MarginTooWide { .. }
                | ModelError::DerivedScale { .. }
                | ModelError::DividesByZero { .. }
                | ModelError::OutOfDomain { .. }
        )
    }

    /// Puts it into words.
    pub fn diagnostic(&self) -> Diagnostic {
        words::diagnostic(self)
    }
}
