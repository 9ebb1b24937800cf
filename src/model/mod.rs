//! From syntax tree to a checked model: declarations are gathered (`declarations`),
//! vector equations rewritten into components (`frames`), names resolved (`names`),
//! modules brought in (`modules`, `library`), dimensions checked (`dimensions`,
//! `combinations`), values worked out per phenomenon (`settings`, `values`) and
//! equations turned into terms (`terms`).
//!
//! Comes in: the scripts. Goes out: a [`Model`] and, per phenomenon, a
//! [`settings::Setting`] with its terms. Faults are [`errors::ModelError`]s.

pub mod combinations;
pub mod declarations;
pub mod dimensions;
pub mod errors;
pub mod frames;
pub mod library;
pub mod limit;
pub mod modules;
pub mod names;
pub mod needs;
pub mod order;
pub mod settings;
pub mod spelling;
pub mod spreading;
pub mod terms;
pub mod values;

use std::collections::HashMap;

use num_rational::BigRational;

use crate::algebra::monomial::SymbolId;
use crate::algebra::quantities::{CoordinateId, FieldId};
use crate::model::errors::Shape;
use crate::model::frames::FrameInfo;
use crate::source::Span;
use crate::syntax::ast;
use crate::units::Dimension;

/// A group, by its place in order of declaration.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct GroupId(pub u32);

/// A vector, by its place in order of declaration.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct VectorId(pub u32);

/// What a name in the one space of names stands for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Meaning {
    /// A scale or a constant.
    Symbol(SymbolId),
    /// A coordinate.
    Coordinate(CoordinateId),
    /// A field.
    Field(FieldId),
    /// A named group.
    Group(GroupId),
    /// A vector.
    Vector(VectorId),
}

/// Everything that a script and its modules declare.
#[derive(Debug, Default)]
pub struct Model {
    /// The one space of names. Looked up, never walked.
    names: HashMap<String, Meaning>,
    /// Names that exist in one phenomenon only.
    local_names: HashMap<(usize, String), SymbolId>,
    /// Equations by name. Looked up, never walked.
    equation_names: HashMap<String, usize>,
    /// Scales and constants in order of declaration.
    pub symbols: Vec<SymbolInfo>,
    /// Coordinates in order of declaration.
    pub coordinates: Vec<CoordinateInfo>,
    /// Fields in order of declaration.
    pub fields: Vec<FieldInfo>,
    /// Groups in order of declaration.
    pub groups: Vec<GroupInfo>,
    /// The frame of the vectors.
    pub frame: Option<FrameInfo>,
    /// Vectors in order of declaration.
    pub vectors: Vec<VectorInfo>,
    /// What `D_t` carries with.
    pub velocity: Option<VelocityInfo>,
    /// The vector named by `velocity V`, until it is resolved.
    vector_velocity: Option<(ast::Name, Span)>,
    /// Vector equations, whose components stand among the equations.
    pub vector_equations: Vec<VectorEquationInfo>,
    /// Equations in order of declaration.
    pub equations: Vec<ast::EquationDecl>,
    /// The dimension of each equation; `None` if both sides are 0 or an error was reported.
    pub equation_dimensions: Vec<Option<Dimension>>,
    /// Balances in order of declaration.
    pub balances: Vec<ast::BalanceDecl>,
    /// Phenomena in order of declaration.
    pub phenomena: Vec<PhenomenonInfo>,
    /// The script's tolerance.
    pub tolerance: Option<ToleranceInfo>,
    /// Requests in order, each with the phenomenon in whose braces it stands.
    pub requests: Vec<(Option<usize>, ast::Request)>,
}

/// A level at which a value is given; later ones override earlier ones.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Level {
    /// A module's.
    Module,
    /// The script's.
    Script,
    /// A phenomenon's.
    Phenomenon,
}

/// A scale or a constant.
#[derive(Debug)]
pub struct SymbolInfo {
    /// Its name.
    pub name: String,
    /// Scale or constant.
    pub kind: ast::ValueKind,
    /// Its dimension; `None` if an error was reported instead.
    pub dimension: Option<Dimension>,
    /// Its declarations outside phenomena, in order.
    pub entries: Vec<(Level, ast::ValueDecl)>,
    /// The phenomenon to which it is confined.
    pub local_to: Option<usize>,
}

impl SymbolInfo {
    /// The value of the highest level, phenomena apart.
    fn given(&self) -> Option<&(Level, ast::ValueDecl)> {
        let given = self.entries.iter().filter(|(_, decl)| is_given(decl));
        given.max_by_key(|(level, _)| *level)
    }

    /// The script's declaration that opens it, where only modules give it a value.
    fn reopened(&self) -> Option<&ast::ValueDecl> {
        let (given, _) = self.given()?;
        let mut entries = self.entries.iter();
        let opened = entries.find(|(level, decl)| level > given && !is_given(decl));
        opened.map(|(_, decl)| decl)
    }
}

/// A coordinate.
#[derive(Debug)]
pub struct CoordinateInfo {
    /// Its name.
    pub name: ast::Name,
    /// The length it varies over.
    pub size: ast::Expr,
    /// Its origin, where that is not 0.
    pub about: Option<ast::Expr>,
    /// Title and source.
    pub notes: ast::Notes,
    /// Its dimension; `None` if an error was reported instead.
    pub dimension: Option<Dimension>,
}

/// A field.
#[derive(Debug)]
pub struct FieldInfo {
    /// Its name.
    pub name: ast::Name,
    /// Its size, or level.
    pub size: ast::Expr,
    /// By how much it varies, where that differs.
    pub varying: Option<ast::Expr>,
    /// What it depends on.
    pub coordinates: Vec<ast::Dependence>,
    /// Whether its mean is zero.
    pub is_fluctuation: bool,
    /// The parts that it is split into, with their signs; empty if it is not split.
    pub parts: Vec<(ast::Sign, ast::Name)>,
    /// Title and source.
    pub notes: ast::Notes,
    /// Its dimension; `None` if an error was reported instead.
    pub dimension: Option<Dimension>,
}

/// A named group.
#[derive(Debug)]
pub struct GroupInfo {
    /// Its name.
    pub name: ast::Name,
    /// Its formula.
    pub value: ast::Expr,
    /// Title and source.
    pub notes: ast::Notes,
    /// The level at which it is declared; a script's overrides a module's.
    pub level: Level,
}

/// `vector V = (u, v, w)`, or a symmetric stress of six.
#[derive(Debug)]
pub struct VectorInfo {
    /// Its name.
    pub name: ast::Name,
    /// Its components along the coordinates of the frame; those of a stress in the order
    /// 11 12 13 22 23 33.
    pub components: Vec<ast::Expr>,
    /// Where they stand.
    pub span: Span,
    /// Title and source.
    pub notes: ast::Notes,
    /// Vector or stress; `None` if an error was reported instead.
    pub shape: Option<Shape>,
}

/// A vector equation.
#[derive(Debug)]
pub struct VectorEquationInfo {
    /// Its name.
    pub name: ast::Name,
    /// The names of its component equations.
    pub components: Vec<String>,
}

/// `velocity (u, v, w) along (x, y, z)`.
#[derive(Debug)]
pub struct VelocityInfo {
    /// Components with their coordinates.
    pub components: Vec<(ast::Name, ast::Name)>,
    /// Where it is declared.
    pub span: Span,
}

/// A tolerance as an exact share.
#[derive(Debug, Clone)]
pub struct ToleranceInfo {
    /// The share.
    pub value: BigRational,
    /// Where it is declared.
    pub span: Span,
}

/// A phenomenon.
#[derive(Debug)]
pub struct PhenomenonInfo {
    /// Its name.
    pub name: ast::Name,
    /// Title and source.
    pub notes: ast::Notes,
    /// The values it gives.
    pub values: Vec<(SymbolId, ast::ValueDecl)>,
    /// Its own tolerance.
    pub tolerance: Option<ToleranceInfo>,
}

impl Model {
    /// What a name stands for in a phenomenon (`None`: outside all of them).
    pub fn meaning(&self, name: &str, phenomenon: Option<usize>) -> Option<Meaning> {
        if let Some(idx) = phenomenon
            && !self.local_names.is_empty()
            && let Some(&id) = self.local_names.get(&(idx, name.to_owned()))
        {
            return Some(Meaning::Symbol(id));
        }
        self.names.get(name).copied()
    }

    /// The index of an equation.
    pub fn equation(&self, name: &str) -> Option<usize> {
        self.equation_names.get(name).copied()
    }

    /// Whether there is an equation of this name, whole or a component.
    pub fn has_equation(&self, name: &str) -> bool {
        self.equation_names.contains_key(name)
    }

    /// The vector equation of this name.
    pub fn vector_equation(&self, name: &str) -> Option<&VectorEquationInfo> {
        let mut vectors = self.vector_equations.iter();
        vectors.find(|found| found.name.text == name)
    }

    /// Whether an equation is a component of a vector equation.
    pub fn is_component(&self, idx: usize) -> bool {
        let name = &self.equations[idx].name.text;
        let mut vectors = self.vector_equations.iter();
        vectors.any(|vector| vector.components.contains(name))
    }

    /// The index of a phenomenon.
    pub fn phenomenon(&self, name: &str) -> Option<usize> {
        self.phenomena
            .iter()
            .position(|found| found.name.text == name)
    }

    /// The declaration that holds for a symbol in a phenomenon: the value of the highest
    /// level, or what opens it, above all values or without any.
    pub fn effective(&self, id: SymbolId, phenomenon: Option<usize>) -> (Level, &ast::ValueDecl) {
        let own = phenomenon.and_then(|idx| {
            let values = &self.phenomena[idx].values;
            values.iter().find(|(found, _)| *found == id)
        });
        if let Some((_, decl)) = own {
            return (Level::Phenomenon, decl);
        }
        let info = &self.symbols[id.idx()];
        if let Some(decl) = info.reopened() {
            return (Level::Script, decl);
        }
        let (level, decl) = info
            .given()
            .or(info.entries.first())
            .expect("a symbol is made from its first declaration");
        (*level, decl)
    }

    /// All names of the one space that a phenomenon sees, sorted.
    pub fn visible_names(&self, phenomenon: Option<usize>) -> Vec<&str> {
        let mut names: Vec<&str> = Vec::new();
        let seen = |info: &SymbolInfo| info.local_to.is_none() || info.local_to == phenomenon;
        names.extend(
            self.symbols
                .iter()
                .filter(|info| seen(info))
                .map(|info| info.name.as_str()),
        );
        names.extend(self.coordinates.iter().map(|info| info.name.text.as_str()));
        names.extend(self.fields.iter().map(|info| info.name.text.as_str()));
        names.extend(self.groups.iter().map(|info| info.name.text.as_str()));
        names.extend(self.vectors.iter().map(|info| info.name.text.as_str()));
        names.sort_unstable();
        names
    }
}

/// Whether a declaration gives a value, rather than opening a name.
pub fn is_given(decl: &ast::ValueDecl) -> bool {
    match decl.value {
        ast::Value::Given { .. } => true,
        ast::Value::Open(_) => false,
    }
}
