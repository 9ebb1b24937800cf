//! What a reduced system needs: every name in it, and every name that the declaration of
//! one of them needs.

use crate::algebra::monomial::SymbolId;
use crate::algebra::quantities::{CoordinateId, FieldId};
use crate::analysis::reduce::ReducedEquation;
use crate::model::{GroupId, Meaning, Model, names};
use crate::report::conditions;
use crate::report::module::Origin;
use crate::syntax::ast;

/// Which declarations are needed, each by its place in the model.
pub(super) struct Needs {
    /// Scales and constants.
    pub(super) symbols: Vec<bool>,
    /// Coordinates.
    pub(super) coordinates: Vec<bool>,
    /// Fields.
    pub(super) fields: Vec<bool>,
    /// Groups.
    pub(super) groups: Vec<bool>,
}

impl Needs {
    /// The needs of these equations.
    pub(super) fn of(origin: &Origin<'_>, equations: &[&ReducedEquation]) -> Needs {
        let model = origin.model;
        let mut search = Search {
            model,
            phenomenon: origin.case.setting.phenomenon,
            needs: Needs {
                symbols: vec![false; model.symbols.len()],
                coordinates: vec![false; model.coordinates.len()],
                fields: vec![false; model.fields.len()],
                groups: vec![false; model.groups.len()],
            },
            waiting: Vec::new(),
        };
        for equation in equations {
            let parts = equation.sides.iter().flatten();
            parts.for_each(|part| search.expr(&part.named));
            let told = equation.kept.iter().flat_map(|term| &term.conditions);
            let groups = told.filter_map(conditions::told_groups);
            for (name, _) in groups.flat_map(|(_, groups)| groups) {
                search.name(name);
            }
        }
        let frame = model.frame.iter().flat_map(|frame| &frame.coordinates);
        frame.for_each(|coordinate| search.name(&coordinate.text));
        for (field, coordinate) in model.velocity.iter().flat_map(|info| &info.components) {
            search.name(&field.text);
            search.name(&coordinate.text);
        }
        search.run();
        search.groups_at_hand();
        search.needs
    }
}

struct Search<'a> {
    model: &'a Model,
    phenomenon: Option<usize>,
    needs: Needs,
    waiting: Vec<Meaning>,
}

impl<'a> Search<'a> {
    fn expr(&mut self, expr: &'a ast::Expr) {
        let mut found: Vec<&str> = Vec::new();
        names::visit_names(expr, &mut |name, _| found.push(name));
        found.iter().for_each(|name| self.name(name));
    }

    fn name(&mut self, name: &str) {
        self.waiting
            .extend(self.model.meaning(name, self.phenomenon));
    }

    fn run(&mut self) {
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

    /// Groups of what is there anyway come along, so that answers can speak in them.
    fn groups_at_hand(&mut self) {
        for (idx, info) in self.model.groups.iter().enumerate() {
            let mut symbols = Vec::new();
            let mut is_at_hand = true;
            names::visit_names(&info.value, &mut |name, _| match self
                .model
                .meaning(name, self.phenomenon)
            {
                Some(Meaning::Symbol(id)) => symbols.push(id),
                Some(Meaning::Group(id)) => is_at_hand &= self.needs.groups[id.0 as usize],
                Some(Meaning::Coordinate(_) | Meaning::Field(_) | Meaning::Vector(_)) | None => {}
            });
            is_at_hand &= symbols.iter().all(|id| self.needs.symbols[id.idx()]);
            self.needs.groups[idx] |= is_at_hand;
        }
    }
}
