//! The syntax tree of a script: what was written, with the place of everything.
//!
//! The tree is complete: every statement of the language has its node, and after a
//! fault an `Error` node stands where nothing could be read, so that reading goes on.
//! Brackets and spellings (`∂u/∂x` or `d_x(u)`) are kept, since reports show terms as
//! the user wrote them. Nothing here is resolved: a name is a name, a unit is its text.
//! Depth is bounded by `limits::NESTING`, so walking and dropping a tree is safe.

use num_rational::BigRational;

use crate::source::Span;

/// A whole file.
#[derive(Debug, Clone, Default)]
pub struct Script {
    /// The statements in order.
    pub statements: Vec<Statement>,
    /// The comments in order, for printing.
    pub comments: Vec<Comment>,
}

/// A comment, from `#` to the end of its line.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Comment {
    /// Its text, with the `#`, without trailing blanks.
    pub text: String,
    /// Where it stands.
    pub span: Span,
}

/// A name, normalised to NFC.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Name {
    /// The name.
    pub text: String,
    /// Where it stands.
    pub span: Span,
}

/// A text in quotes.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Text {
    /// What stands between the quotes.
    pub text: String,
    /// Where it stands, quotes included.
    pub span: Span,
}

/// A unit as written, `kg.m^-2`; `units::parse` reads it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct UnitText {
    /// The text.
    pub text: String,
    /// Where it stands.
    pub span: Span,
}

/// A title and a source: `"depth" from "chart 12"`.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Notes {
    /// What the thing is.
    pub title: Option<Text>,
    /// Where the number or the formula comes from.
    pub source: Option<Text>,
}

/// One statement.
#[derive(Debug, Clone)]
pub struct Statement {
    /// What it says.
    pub kind: StatementKind,
    /// From its keyword to its last token.
    pub span: Span,
}

/// The kinds of statement.
#[derive(Debug, Clone)]
pub enum StatementKind {
    /// `use atmosphere.momentum`, `use "shelf.scl"`.
    Use(Use),
    /// `scale ...` or `constant ...`.
    Value(ValueDecl),
    /// `coordinate x, y ~ L about x_0`.
    Coordinate(CoordinateDecl),
    /// `frame spherical (lambda, phi, r)`.
    Frame(FrameDecl),
    /// `vector V = (u, v, w)`.
    Vector(VectorDecl),
    /// `field ...` or `fluctuation ...` with a size.
    Field(FieldDecl),
    /// `field p = p_0 + p'`.
    Split(SplitDecl),
    /// `velocity (u, v, w) along (x, y, z)`.
    Velocity(VelocityDecl),
    /// `equation NAME: left = right`, `equation NAME from ...`.
    Equation(EquationDecl),
    /// `group Ro = U/(f*L)`.
    Group(GroupDecl),
    /// `balance geostrophic: x_momentum { coriolis, pressure_gradient }`.
    Balance(BalanceDecl),
    /// `tolerance 10 %`.
    Tolerance(ToleranceDecl),
    /// `phenomenon NAME { ... }`.
    Phenomenon(PhenomenonDecl),
    /// Something to answer.
    Request(Request),
    /// Nothing that could be read.
    Error,
}

/// `use ...`.
#[derive(Debug, Clone)]
pub enum Use {
    /// A bundled module, `atmosphere.momentum`; the name holds the dots.
    Module(Name),
    /// A file relative to the script.
    File(Text),
}

/// Whether a value is a scale or a constant.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum ValueKind {
    /// A characteristic size: positive, a variable of the analysis.
    Scale,
    /// A number of the setting: any sign, no variable.
    Constant,
}

/// `scale U = 10 m/s within 2`, `constant phi in deg`.
#[derive(Debug, Clone)]
pub struct ValueDecl {
    /// Scale or constant.
    pub kind: ValueKind,
    /// Its name.
    pub name: Name,
    /// Its value, or its unit while it is open.
    pub value: Value,
    /// Title and source.
    pub notes: Notes,
}

/// What a scale or constant is set to.
#[derive(Debug, Clone)]
pub enum Value {
    /// `= expression` with an optional range.
    Given {
        /// The number, or the lower end of a range.
        nominal: Expr,
        /// How far it may lie off.
        spread: Spread,
    },
    /// `in m/s`: open.
    Open(UnitText),
}

/// The uncertainty behind a value.
#[derive(Debug, Clone)]
pub enum Spread {
    /// None written.
    None,
    /// `.. 20 m/s`: the upper end.
    To(Expr),
    /// `+- 3 m/s`.
    Margin(Expr),
    /// `within 2`, `within 20 %`.
    Within(Proportion),
}

/// A number that stands for a share or a factor; what it means is the statement's matter.
#[derive(Debug, Clone, PartialEq)]
pub struct Proportion {
    /// The number, and its unit where one is written (only `%` and its like make sense).
    pub number: Number,
    /// Where it stands.
    pub span: Span,
}

/// A literal: a number with its unit, one thing.
#[derive(Debug, Clone, PartialEq)]
pub struct Number {
    /// Its exact value, without the unit.
    pub value: BigRational,
    /// How the number was spelt, without the unit.
    pub text: String,
    /// The unit right behind it.
    pub unit: Option<UnitText>,
}

/// `coordinate x, y ~ L about x_0`.
#[derive(Debug, Clone)]
pub struct CoordinateDecl {
    /// The coordinates.
    pub names: Vec<Name>,
    /// The length they vary over.
    pub size: Expr,
    /// The origin, where it is not 0.
    pub about: Option<Expr>,
    /// Title and source.
    pub notes: Notes,
}

/// The kinds of frame.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum FrameKind {
    /// `cartesian (east, north, up)`.
    Cartesian,
    /// `cylindrical (radius, azimuth, height)`.
    Cylindrical,
    /// `spherical (longitude, latitude, distance)`.
    Spherical,
}

/// `frame spherical (lambda, phi, r)`.
#[derive(Debug, Clone)]
pub struct FrameDecl {
    /// Which frame.
    pub kind: FrameKind,
    /// Its three coordinates in order.
    pub coordinates: Vec<Name>,
    /// Title and source.
    pub notes: Notes,
}

/// `vector V = (u, v, w)`.
#[derive(Debug, Clone)]
pub struct VectorDecl {
    /// Its name.
    pub name: Name,
    /// Its components: an [`ExprKind::Tuple`].
    pub value: Expr,
    /// Title and source.
    pub notes: Notes,
}

/// `field u, v(x, y, z, t) ~ U varying dU`, or the same as a `fluctuation`.
#[derive(Debug, Clone)]
pub struct FieldDecl {
    /// Whether its mean is zero.
    pub is_fluctuation: bool,
    /// The fields.
    pub names: Vec<Name>,
    /// What they depend on.
    pub coordinates: Vec<Dependence>,
    /// Their size, or level.
    pub size: Expr,
    /// By how much they vary, where that differs from the size.
    pub varying: Option<Expr>,
    /// Title and source.
    pub notes: Notes,
}

/// One coordinate in a field's bracket: `z ~ H varying P_0`.
#[derive(Debug, Clone)]
pub struct Dependence {
    /// The coordinate.
    pub coordinate: Name,
    /// The length over which the field varies along it, where it is the field's own.
    pub length: Option<Expr>,
    /// By how much it varies along it, where that is the field's own.
    pub varying: Option<Expr>,
}

/// `field p = p_0 + p'`.
#[derive(Debug, Clone)]
pub struct SplitDecl {
    /// The field.
    pub name: Name,
    /// Its parts, each with its sign.
    pub parts: Vec<(Sign, Name)>,
    /// Title and source.
    pub notes: Notes,
}

/// Plus or minus.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Sign {
    /// `+`
    Plus,
    /// `-`
    Minus,
}

/// `velocity (u, v, w) along (x, y, z)`, `velocity V`.
#[derive(Debug, Clone)]
pub enum VelocityDecl {
    /// Components with their coordinates, one for one.
    Components {
        /// The components.
        fields: Vec<Name>,
        /// The coordinates.
        coordinates: Vec<Name>,
        /// Title and source.
        notes: Notes,
    },
    /// A vector.
    Vector {
        /// Its name.
        name: Name,
        /// Title and source.
        notes: Notes,
    },
}

/// An equation, written or made of others.
#[derive(Debug, Clone)]
pub struct EquationDecl {
    /// Its name.
    pub name: Name,
    /// What it is.
    pub title: Option<Text>,
    /// What it says.
    pub body: EquationBody,
    /// `using hydrostatic_base, no_divergence`.
    pub using: Vec<Name>,
    /// Where it comes from.
    pub source: Option<Text>,
}

/// What an equation says.
#[derive(Debug, Clone)]
pub enum EquationBody {
    /// `: left = right`.
    Written {
        /// Left of `=`.
        left: Expr,
        /// Right of it.
        right: Expr,
    },
    /// `from d_x(y_momentum) - d_y(x_momentum)`.
    Made(Expr),
}

/// `group Ro = U/(f*L) "Rossby number"`.
#[derive(Debug, Clone)]
pub struct GroupDecl {
    /// Its name.
    pub name: Name,
    /// Its formula.
    pub value: Expr,
    /// Title and source.
    pub notes: Notes,
}

/// `balance geostrophic: x_momentum { coriolis, pressure_gradient }`.
#[derive(Debug, Clone)]
pub struct BalanceDecl {
    /// Its name.
    pub name: Name,
    /// What it is.
    pub title: Option<Text>,
    /// Equation by equation, the processes that lead.
    pub parts: Vec<BalancePart>,
    /// Where it comes from.
    pub source: Option<Text>,
}

/// `x_momentum { coriolis, pressure_gradient }`.
#[derive(Debug, Clone)]
pub struct BalancePart {
    /// The equation.
    pub equation: Name,
    /// Its processes.
    pub processes: Vec<ProcessRef>,
}

/// A process wherever one is named: a name, a text, or the term itself.
#[derive(Debug, Clone)]
pub enum ProcessRef {
    /// A text in quotes.
    Text(Text),
    /// A name (a bare [`ExprKind::Name`]) or a term, matched by its tree.
    Term(Expr),
}

impl ProcessRef {
    /// Where it stands.
    pub fn span(&self) -> Span {
        match self {
            ProcessRef::Text(text) => text.span,
            ProcessRef::Term(expr) => expr.span,
        }
    }
}

/// `tolerance 10 %`.
#[derive(Debug, Clone)]
pub struct ToleranceDecl {
    /// What may be dropped.
    pub value: Proportion,
    /// Title and source.
    pub notes: Notes,
}

/// `phenomenon NAME "title" { ... }`.
#[derive(Debug, Clone)]
pub struct PhenomenonDecl {
    /// Its name.
    pub name: Name,
    /// Title and source.
    pub notes: Notes,
    /// Values, a tolerance, requests; nothing else gets here.
    pub body: Vec<Statement>,
    /// The closing brace, for printing comments before it.
    pub close: Span,
}

/// Something to answer, with the phenomena it is for.
#[derive(Debug, Clone)]
pub struct Request {
    /// What is asked.
    pub kind: RequestKind,
    /// `for A, B`; empty: all of them.
    pub phenomena: Vec<Name>,
    /// From its keyword to its last token.
    pub span: Span,
}

impl Request {
    /// Calls `visit` for every expression of the request.
    pub fn visit_expressions<'a>(&'a self, visit: &mut impl FnMut(&'a Expr)) {
        match &self.kind {
            RequestKind::Show { expr, .. } => visit(expr),
            RequestKind::Claim(Claim::Relation { left, right, .. }) => {
                visit(left);
                visit(right);
            }
            RequestKind::Limit { small, places } => {
                visit(small);
                for place in places {
                    if let LimitPlace::Group(group, power) = place {
                        visit(group);
                        visit(power);
                    }
                }
            }
            RequestKind::Sweep(axis) => {
                visit(&axis.from);
                visit(&axis.to);
            }
            RequestKind::Regimes(x, y) => [x, y].into_iter().for_each(|axis| {
                visit(&axis.from);
                visit(&axis.to);
            }),
            RequestKind::Claim(Claim::Verdict { .. })
            | RequestKind::Rank { .. }
            | RequestKind::Nondimensionalize { .. }
            | RequestKind::Reduce { .. }
            | RequestKind::Bounds { .. }
            | RequestKind::Find { .. }
            | RequestKind::Layers
            | RequestKind::Groups
            | RequestKind::Expand { .. }
            | RequestKind::Compare { .. } => {}
        }
    }
}

/// The kinds of request.
#[derive(Debug, Clone)]
pub enum RequestKind {
    /// `show EXPR in UNIT`.
    Show {
        /// What to show.
        expr: Expr,
        /// The unit to show it in.
        unit: Option<UnitText>,
    },
    /// `rank EQ, ...`.
    Rank {
        /// The equations; empty: all whose scales are known.
        equations: Vec<Name>,
    },
    /// `nondimensionalize EQ, ... by TERM`.
    Nondimensionalize {
        /// The equations; empty: all whose scales are known.
        equations: Vec<Name>,
        /// The term to divide by.
        by: Option<ProcessRef>,
    },
    /// `reduce EQ, ... within 5 % save "file.scl"`.
    Reduce {
        /// The equations; empty: all whose scales are known.
        equations: Vec<Name>,
        /// A tolerance of its own.
        within: Option<Proportion>,
        /// Where to write the reduced system as a module.
        save: Option<Text>,
    },
    /// `bounds S, ...`.
    Bounds {
        /// The scales and constants; empty: all that matter.
        symbols: Vec<Name>,
    },
    /// `find S, ... where EQ: P ~ Q, ...`.
    Find {
        /// The unknowns.
        unknowns: Vec<Name>,
        /// What must be among the largest.
        conditions: Vec<FindCondition>,
    },
    /// `layers`.
    Layers,
    /// `groups`.
    Groups,
    /// `limit Ro -> 0 with Bu ~ 1, others ~ 1`.
    Limit {
        /// The small parameter.
        small: Expr,
        /// Where the other groups stand.
        places: Vec<LimitPlace>,
    },
    /// `expand EQ, ... to order 1`.
    Expand {
        /// The equations; empty: all whose scales are known.
        equations: Vec<Name>,
        /// The order.
        order: BigRational,
    },
    /// `sweep L from 1 km to 1000 km`.
    Sweep(Axis),
    /// `regimes L from .. to .., U from .. to ..`.
    Regimes(Box<Axis>, Box<Axis>),
    /// `compare A, B matching Ro, Fr`.
    Compare {
        /// The phenomena.
        phenomena: Vec<Name>,
        /// The groups to match; `None`: no matching asked for.
        matching: Option<Vec<Name>>,
    },
    /// `claim ...`.
    Claim(Claim),
}

/// `EQ: P ~ Q` behind `where`.
#[derive(Debug, Clone)]
pub struct FindCondition {
    /// The equation.
    pub equation: Name,
    /// One process.
    pub left: ProcessRef,
    /// The other.
    pub right: ProcessRef,
}

/// One place behind `limit ... with`.
#[derive(Debug, Clone)]
pub enum LimitPlace {
    /// `others ~ 1`, with its place in the text.
    Others(Span),
    /// `Ek ~ Ro^2`.
    Group(Expr, Expr),
}

/// `L from 1 km to 1000 km`.
#[derive(Debug, Clone)]
pub struct Axis {
    /// The scale.
    pub scale: Name,
    /// The lower end.
    pub from: Expr,
    /// The upper end.
    pub to: Expr,
}

/// What a claim says.
#[derive(Debug, Clone)]
pub enum Claim {
    /// `leading EQ = P, Q`, `kept ...`, `dropped ...`.
    Verdict {
        /// Which of the three.
        word: ClaimWord,
        /// The equation.
        equation: Name,
        /// Its processes.
        processes: Vec<ProcessRef>,
    },
    /// `A << B within 30 %`.
    Relation {
        /// Left of the relation.
        left: Expr,
        /// The relation.
        relation: Relation,
        /// Right of it.
        right: Expr,
        /// In place of the default margin.
        within: Option<Proportion>,
    },
}

/// The words of a claim about verdicts.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ClaimWord {
    /// Exactly these lead.
    Leading,
    /// Exactly these are in the reduced equation.
    Kept,
    /// Every term of these drops.
    Dropped,
}

/// The relations of a claim.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Relation {
    /// `<<`
    MuchLess,
    /// `>>`
    MuchGreater,
    /// `~`
    Similar,
    /// `<`
    Less,
    /// `>`
    Greater,
    /// `=`
    Equal,
}

/// An expression.
#[derive(Debug, Clone, PartialEq)]
pub struct Expr {
    /// What it is.
    pub kind: ExprKind,
    /// Where it stands.
    pub span: Span,
}

impl Expr {
    /// Calls `visit` for it and for every expression in it, the outer ones first.
    pub fn visit<'a>(&'a self, visit: &mut impl FnMut(&'a Expr)) {
        visit(self);
        match &self.kind {
            ExprKind::Number(_)
            | ExprKind::Name(_)
            | ExprKind::Process { .. }
            | ExprKind::Error => {}
            ExprKind::Sum(terms) => terms.iter().for_each(|(_, term)| term.visit(visit)),
            ExprKind::Product(factors) => {
                factors.iter().for_each(|(_, factor)| factor.visit(visit))
            }
            ExprKind::Negate(inside) | ExprKind::Bracket(inside) => inside.visit(visit),
            ExprKind::As { expr, .. } => expr.visit(visit),
            ExprKind::Power { base, exponent } => {
                base.visit(visit);
                exponent.visit(visit);
            }
            ExprKind::Call { arguments, .. } | ExprKind::Tuple(arguments) => {
                arguments.iter().for_each(|argument| argument.visit(visit));
            }
            ExprKind::Derivative { operand, .. } => operand.visit(visit),
            ExprKind::Sized { expr, size } => {
                expr.visit(visit);
                size.visit(visit);
            }
        }
    }

    /// Whether something is so of it or of an expression in it.
    pub fn any(&self, is_so: impl Fn(&Expr) -> bool) -> bool {
        let mut found = false;
        self.visit(&mut |expr| found |= is_so(expr));
        found
    }

    /// Whether a number in it has a unit.
    pub fn holds_unit(&self) -> bool {
        self.any(|expr| matches!(&expr.kind, ExprKind::Number(number) if number.unit.is_some()))
    }
}

/// The kinds of expression. Sums and products are flat, so that long ones do not nest.
#[derive(Debug, Clone, PartialEq)]
pub enum ExprKind {
    /// `10 m/s`.
    Number(Number),
    /// `U`.
    Name(String),
    /// `x_momentum.coriolis`, `x_momentum."some name"`.
    Process {
        /// The equation.
        equation: Name,
        /// The process.
        process: ProcessName,
    },
    /// `a + b - c`; the first sign is plus (a leading minus is a `Negate`).
    Sum(Vec<(Sign, Expr)>),
    /// `a*b/c`; the first operator is a product.
    Product(Vec<(Operator, Expr)>),
    /// `-a`.
    Negate(Box<Expr>),
    /// `a^(1/2)`.
    Power {
        /// What is raised.
        base: Box<Expr>,
        /// The exponent; a [`ExprKind::Number`], a negated one, or anything.
        exponent: Box<Expr>,
    },
    /// `sin^2(phi)`, `d_x(u)`, `D_t(q)`, `mean(u'*w')`; `∇(p)` is `grad(p)`.
    Call {
        /// The function's name.
        function: Name,
        /// The power between name and bracket.
        order: Option<u32>,
        /// What stands in the bracket.
        arguments: Vec<Expr>,
    },
    /// `∂²u/∂x∂z`.
    Derivative {
        /// What is differentiated; brackets and calls are kept as such.
        operand: Box<Expr>,
        /// Coordinates with their orders, as written; never empty, orders at least 1.
        by: Vec<(Name, u32)>,
    },
    /// `(u, v, w)`.
    Tuple(Vec<Expr>),
    /// `(a + b)`: brackets as written.
    Bracket(Box<Expr>),
    /// `(A + B ~ D)`: an expression with a size of its own, brackets included.
    Sized {
        /// The expression.
        expr: Box<Expr>,
        /// Its size.
        size: Box<Expr>,
    },
    /// `f*v as coriolis`.
    As {
        /// What is named.
        expr: Box<Expr>,
        /// Its process.
        process: ProcessName,
    },
    /// Nothing that could be read.
    Error,
}

/// Product or quotient.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Operator {
    /// `*`
    Times,
    /// `/`
    Over,
}

/// The name of a process: a name or a text in quotes. Equal texts are one process.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct ProcessName {
    /// The name.
    pub text: String,
    /// Whether it was written in quotes.
    pub is_quoted: bool,
    /// Where it stands.
    pub span: Span,
}
