//! What some names need: every declaration that they name, and every one that the
//! declaration of one of these needs.

use crate::algebra::monomial::SymbolId;
use crate::algebra::quantities::{CoordinateId, FieldId};
use crate::model::{GroupId, Meaning, Model, names};
use crate::syntax::ast;

/// Which declarations are needed, each by its place in the model.
#[derive(Debug, Clone)]
pub struct Needs {
    /// Scales and constants.
    pub symbols: Vec<bool>,
    /// Coordinates.
    pub coordinates: Vec<bool>,
    /// Fields.
    pub fields: Vec<bool>,
    /// Groups.
    pub groups: Vec<bool>,
}

/// A search for what is needed: told the names to begin with, it follows their declarations.
pub struct Search<'a> {
    model: &'a Model,
    phenomenon: Option<usize>,
    needs: Needs,
    waiting: Vec<Meaning>,
}

impl<'a> Search<'a> {
    /// A search that nothing was told yet.
    pub fn new(model: &'a Model, phenomenon: Option<usize>) -> Search<'a> {
        Search {
            model,
            phenomenon,
            needs: Needs {
                symbols: vec![false; model.symbols.len()],
                coordinates: vec![false; model.coordinates.len()],
                fields: vec![false; model.fields.len()],
                groups: vec![false; model.groups.len()],
            },
            waiting: Vec::new(),
        }
    }

    /// Needs every name in an expression.
    pub fn expr(&mut self, expr: &ast::Expr) {
        names::visit_names(expr, &mut |name, _| self.name(name));
    }

    /// Needs a name.
    pub fn name(&mut self, name: &str) {
        self.waiting
            .extend(self.model.meaning(name, self.phenomenon));
    }

    /// Needs the velocity that `D_t` carries with, and the frame that it stands in.
    pub fn motion(&mut self) {
        let frame = self.model.frame.iter().flat_map(|frame| &frame.coordinates);
        frame.for_each(|coordinate| self.name(&coordinate.text));
        let velocity = self.model.velocity.iter();
        for (field, coordinate) in velocity.flat_map(|info| &info.components) {
            self.name(&field.text);
            self.name(&coordinate.text);
        }
    }

    /// Follows what was told to its end.
    pub fn run(mut self) -> Needs {
        while let Some(meaning) = self.waiting.pop() {
            let seen = match meaning {
                Meaning::Symbol(id) => &mut self.needs.symbols[id.idx()],
                Meaning::Coordinate(id) => &mut self.needs.coordinates[id.0 as usize],
                Meaning::Field(id) => &mut self.needs.fields[id.0 as usize],
                Meaning::Group(id) => &mut self.needs.groups[id.0 as usize],
                // Terms are written out in components.
                Meaning::Vector(_) => continue,
            };
            if !std::mem::replace(seen, true) {
                self.declaration(meaning);
            }
        }
        self.needs
    }

    fn declaration(&mut self, meaning: Meaning) {
        match meaning {
            Meaning::Symbol(id) => self.symbol(id),
            Meaning::Coordinate(id) => self.coordinate(id),
            Meaning::Field(id) => self.field(id),
            Meaning::Group(GroupId(idx)) => self.expr(&self.model.groups[idx as usize].value),
            Meaning::Vector(_) => {}
        }
    }

    fn symbol(&mut self, id: SymbolId) {
        match &self.model.effective(id, self.phenomenon).1.value {
            ast::Value::Given { nominal, .. } => self.expr(nominal),
            ast::Value::Open(_) => {}
        }
    }

    fn coordinate(&mut self, id: CoordinateId) {
        let info = &self.model.coordinates[id.0 as usize];
        self.expr(&info.size);
        if let Some(about) = &info.about {
            self.expr(about);
        }
    }

    fn field(&mut self, id: FieldId) {
        let info = &self.model.fields[id.0 as usize];
        self.expr(&info.size);
        let varying = info.varying.iter();
        varying.for_each(|varying| self.expr(varying));
        for dependence in &info.coordinates {
            self.name(&dependence.coordinate.text);
            let own = dependence.length.iter().chain(&dependence.varying);
            own.for_each(|expr| self.expr(expr));
        }
        for (_, part) in &info.parts {
            self.name(&part.text);
        }
    }
}
