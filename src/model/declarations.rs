//! Gathers the declarations of a script and its modules into a [`Model`], and finds the
//! clashes among them. Nothing is resolved here: order does not matter in a script.

use std::collections::HashMap;

use num_rational::BigRational;
use num_traits::{One, Signed};

use crate::algebra::monomial::SymbolId;
use crate::algebra::quantities::{CoordinateId, FieldId};
use crate::model::errors::{Clash, ModelError};
use crate::model::frames::FrameInfo;
use crate::model::{
    CoordinateInfo, FieldInfo, GroupId, GroupInfo, Level, Meaning, Model, PhenomenonInfo,
    SymbolInfo, ToleranceInfo, VectorId, VectorInfo, VelocityInfo, is_given, names,
};
use crate::source::Span;
use crate::syntax::ast;
use crate::units;

/// Gathers scripts in their order: modules first, the script that is run last.
pub fn gather(scripts: Vec<(Level, ast::Script)>) -> (Model, Vec<ModelError>) {
    let mut gatherer = Gatherer::default();
    for (level, script) in scripts {
        for statement in script.statements {
            gatherer.statement(level, statement);
        }
    }
    gatherer.close_phenomena();
    gatherer.tell_reopened();
    (gatherer.model, gatherer.errors)
}

#[derive(Default)]
struct Gatherer {
    model: Model,
    errors: Vec<ModelError>,
    /// Where each name of the one space was declared first.
    places: HashMap<String, Span>,
    /// What phenomena declare, taken up once all other declarations are known.
    phenomena: Vec<(usize, Vec<ast::Statement>)>,
    balance_places: HashMap<String, Span>,
}

impl Gatherer {
    fn statement(&mut self, level: Level, statement: ast::Statement) {
        use ast::StatementKind as Kind;
        let span = statement.span;
        match statement.kind {
            // Modules are brought in before, and what could not be read was reported.
            Kind::Use(_) | Kind::Error => {}
            Kind::Value(decl) => self.value(level, decl),
            Kind::Coordinate(decl) => self.coordinate(decl),
            Kind::Field(decl) => self.field(decl),
            Kind::Velocity(decl) => self.velocity(decl, span),
            Kind::Equation(decl) => self.equation(decl),
            Kind::Group(decl) => self.group(level, decl),
            Kind::Balance(decl) => self.balance(decl),
            Kind::Frame(decl) => self.frame(decl, span),
            Kind::Vector(decl) => self.vector(decl),
            Kind::Split(decl) => self.sizeless_field(decl.name, decl.parts, decl.notes),
            Kind::Tolerance(decl) if level == Level::Script => self.tolerance(&decl),
            Kind::Phenomenon(decl) if level == Level::Script => self.phenomenon(decl),
            Kind::Request(request) if level == Level::Script => {
                self.model.requests.push((None, request));
            }
            // Requests, tolerance and phenomena of a used module are not taken.
            Kind::Tolerance(_) | Kind::Phenomenon(_) | Kind::Request(_) => {}
        }
    }

    /// Takes a name into the one space; `false` and an error if it is taken.
    fn claim_name(&mut self, name: &ast::Name, meaning: Meaning) -> bool {
        if names::is_reserved_function(&name.text) {
            self.errors.push(ModelError::NameClash {
                name: name.text.clone(),
                span: name.span,
                first: None,
                what: Clash::BuiltIn,
            });
            return false;
        }
        if let Some(&first) = self.places.get(&name.text) {
            self.errors.push(ModelError::NameClash {
                name: name.text.clone(),
                span: name.span,
                first: Some(first),
                what: Clash::Name,
            });
            return false;
        }
        self.places.insert(name.text.clone(), name.span);
        self.model.names.insert(name.text.clone(), meaning);
        true
    }

    fn value(&mut self, level: Level, decl: ast::ValueDecl) {
        let Some(Meaning::Symbol(id)) = self.model.names.get(&decl.name.text).copied() else {
            let id = SymbolId(self.model.symbols.len() as u32);
            if self.claim_name(&decl.name, Meaning::Symbol(id)) {
                self.new_symbol(level, decl, None);
            }
            return;
        };
        let info = &self.model.symbols[id.idx()];
        if info.kind != decl.kind {
            self.clash(&decl.name, info.entries[0].1.name.span, Clash::Kind);
            return;
        }
        let rival = info
            .entries
            .iter()
            .find(|(found, entry)| *found == level && is_given(entry) == is_given(&decl));
        // Two modules may open one name; dimensions are compared later.
        let shares = level == Level::Module && !is_given(&decl);
        if let (Some((_, first)), false) = (rival, shares) {
            self.errors.push(ModelError::SecondValue {
                name: decl.name.text.clone(),
                span: decl.name.span,
                first: first.name.span,
            });
            return;
        }
        let below = info
            .entries
            .iter()
            .find(|(found, entry)| *found < level && is_given(entry) && is_given(&decl));
        if let Some((_, first)) = below {
            self.errors.push(ModelError::ValueOverridden {
                name: decl.name.text.clone(),
                span: decl.name.span,
                first: first.name.span,
                phenomenon: None,
                is_opened: false,
            });
        }
        self.model.symbols[id.idx()].entries.push((level, decl));
    }

    /// Says which names the script opens though a module gives them a value.
    fn tell_reopened(&mut self) {
        for info in &self.model.symbols {
            if let Some(decl) = info.reopened() {
                let first = info.entries.iter().find(|(_, entry)| is_given(entry));
                self.errors
                    .extend(first.map(|(_, first)| ModelError::ValueOverridden {
                        name: info.name.clone(),
                        span: decl.name.span,
                        first: first.name.span,
                        phenomenon: None,
                        is_opened: true,
                    }));
            }
        }
    }

    fn new_symbol(&mut self, level: Level, decl: ast::ValueDecl, local_to: Option<usize>) {
        self.model.symbols.push(SymbolInfo {
            name: decl.name.text.clone(),
            kind: decl.kind,
            dimension: None,
            entries: vec![(level, decl)],
            local_to,
        });
    }

    fn clash(&mut self, name: &ast::Name, first: Span, what: Clash) {
        self.errors.push(ModelError::NameClash {
            name: name.text.clone(),
            span: name.span,
            first: Some(first),
            what,
        });
    }

    fn coordinate(&mut self, decl: ast::CoordinateDecl) {
        for name in decl.names {
            let id = CoordinateId(self.model.coordinates.len() as u32);
            if self.claim_name(&name, Meaning::Coordinate(id)) {
                self.model.coordinates.push(CoordinateInfo {
                    name,
                    size: decl.size.clone(),
                    about: decl.about.clone(),
                    notes: decl.notes.clone(),
                    dimension: None,
                });
            }
        }
    }

    fn field(&mut self, decl: ast::FieldDecl) {
        for name in decl.names {
            let id = FieldId(self.model.fields.len() as u32);
            if self.claim_name(&name, Meaning::Field(id)) {
                self.model.fields.push(FieldInfo {
                    name,
                    size: decl.size.clone(),
                    varying: decl.varying.clone(),
                    coordinates: decl.coordinates.clone(),
                    is_fluctuation: decl.is_fluctuation,
                    parts: Vec::new(),
                    notes: decl.notes.clone(),
                    dimension: None,
                });
            }
        }
    }

    /// A field without a size of its own: split into others, or one whose declaration was
    /// refused, so that its uses are not refused too.
    fn sizeless_field(
        &mut self,
        name: ast::Name,
        parts: Vec<(ast::Sign, ast::Name)>,
        notes: ast::Notes,
    ) {
        let id = FieldId(self.model.fields.len() as u32);
        let size = ast::Expr {
            kind: ast::ExprKind::Error,
            span: name.span,
        };
        if self.claim_name(&name, Meaning::Field(id)) {
            self.model.fields.push(FieldInfo {
                name,
                size,
                varying: None,
                coordinates: Vec::new(),
                is_fluctuation: false,
                parts,
                notes,
                dimension: None,
            });
        }
    }

    fn velocity(&mut self, decl: ast::VelocityDecl, span: Span) {
        match decl {
            ast::VelocityDecl::Vector { name, .. } => self.vector_velocity(name, span),
            ast::VelocityDecl::Components {
                fields,
                coordinates,
                ..
            } => {
                if let Some(first) = self.first_velocity() {
                    self.errors.push(ModelError::SecondValue {
                        name: "velocity".to_owned(),
                        span,
                        first,
                    });
                } else if fields.len() != coordinates.len() {
                    self.errors.push(ModelError::VelocityCount {
                        n_fields: fields.len(),
                        n_coordinates: coordinates.len(),
                        span,
                    });
                } else {
                    let components = fields.into_iter().zip(coordinates).collect();
                    self.model.velocity = Some(VelocityInfo { components, span });
                }
            }
        }
    }

    fn first_velocity(&self) -> Option<Span> {
        let vector = self.model.vector_velocity.as_ref().map(|(_, span)| *span);
        let components = self.model.velocity.as_ref().map(|info| info.span);
        vector.or(components)
    }

    fn vector_velocity(&mut self, name: ast::Name, span: Span) {
        match self.first_velocity() {
            Some(first) => self.errors.push(ModelError::SecondValue {
                name: "velocity".to_owned(),
                span,
                first,
            }),
            None => self.model.vector_velocity = Some((name, span)),
        }
    }

    fn frame(&mut self, decl: ast::FrameDecl, span: Span) {
        match &self.model.frame {
            Some(first) => self.errors.push(ModelError::SecondValue {
                name: "frame".to_owned(),
                span,
                first: first.span,
            }),
            None => self.model.frame = Some(FrameInfo::new(decl, span)),
        }
    }

    fn vector(&mut self, decl: ast::VectorDecl) {
        let id = VectorId(self.model.vectors.len() as u32);
        let span = decl.value.span;
        let components = match decl.value.kind {
            ast::ExprKind::Tuple(parts) => parts,
            // What could not be read was reported.
            _ => Vec::new(),
        };
        if self.claim_name(&decl.name, Meaning::Vector(id)) {
            self.model.vectors.push(VectorInfo {
                name: decl.name,
                components,
                span,
                notes: decl.notes,
                shape: None,
            });
        }
    }

    fn equation(&mut self, decl: ast::EquationDecl) {
        if let Some(&first) = self.model.equation_names.get(&decl.name.text) {
            let first = self.model.equations[first].name.span;
            self.clash(&decl.name, first, Clash::Equation);
            return;
        }
        let idx = self.model.equations.len();
        self.model
            .equation_names
            .insert(decl.name.text.clone(), idx);
        self.model.equations.push(decl);
    }

    fn group(&mut self, level: Level, decl: ast::GroupDecl) {
        let info = GroupInfo {
            name: decl.name,
            value: decl.value,
            notes: decl.notes,
            level,
        };
        if let Some(Meaning::Group(id)) = self.model.names.get(&info.name.text).copied()
            && self.model.groups[id.0 as usize].level < level
        {
            self.override_group(id, info);
            return;
        }
        let id = GroupId(self.model.groups.len() as u32);
        if self.claim_name(&info.name, Meaning::Group(id)) {
            self.model.groups.push(info);
        }
    }

    /// A script's group takes the place of a module's.
    fn override_group(&mut self, id: GroupId, info: GroupInfo) {
        let place = &mut self.model.groups[id.0 as usize];
        self.errors.push(ModelError::ValueOverridden {
            name: info.name.text.clone(),
            span: info.name.span,
            first: place.name.span,
            phenomenon: None,
            is_opened: false,
        });
        self.places.insert(info.name.text.clone(), info.name.span);
        *place = info;
    }

    fn balance(&mut self, decl: ast::BalanceDecl) {
        match self.balance_places.get(&decl.name.text) {
            Some(&first) => self.clash(&decl.name, first, Clash::Balance),
            None => {
                self.balance_places
                    .insert(decl.name.text.clone(), decl.name.span);
                self.model.balances.push(decl);
            }
        }
    }

    fn tolerance(&mut self, decl: &ast::ToleranceDecl) {
        if let Some(first) = &self.model.tolerance {
            self.errors.push(ModelError::SecondValue {
                name: "tolerance".to_owned(),
                span: decl.value.span,
                first: first.span,
            });
            return;
        }
        match tolerance_value(&decl.value) {
            Ok(info) => self.model.tolerance = Some(info),
            Err(error) => self.errors.push(error),
        }
    }

    fn phenomenon(&mut self, decl: ast::PhenomenonDecl) {
        if let Some(first) = self.model.phenomenon(&decl.name.text) {
            let first = self.model.phenomena[first].name.span;
            self.clash(&decl.name, first, Clash::Phenomenon);
            return;
        }
        let idx = self.model.phenomena.len();
        self.model.phenomena.push(PhenomenonInfo {
            name: decl.name,
            notes: decl.notes,
            values: Vec::new(),
            tolerance: None,
        });
        let mut body = Vec::new();
        for statement in decl.body {
            match statement.kind {
                // Requests keep their order among those of the script.
                ast::StatementKind::Request(request) => {
                    self.model.requests.push((Some(idx), request))
                }
                _ => body.push(statement),
            }
        }
        self.phenomena.push((idx, body));
    }

    fn close_phenomena(&mut self) {
        for (idx, body) in std::mem::take(&mut self.phenomena) {
            for statement in body {
                match statement.kind {
                    ast::StatementKind::Value(decl) => self.phenomenon_value(idx, decl),
                    ast::StatementKind::Tolerance(decl) => self.phenomenon_tolerance(idx, &decl),
                    // Nothing else gets into the body of a phenomenon.
                    _ => {}
                }
            }
        }
    }

    fn phenomenon_tolerance(&mut self, idx: usize, decl: &ast::ToleranceDecl) {
        if let Some(first) = &self.model.phenomena[idx].tolerance {
            let first = first.span;
            self.errors.push(ModelError::SecondValue {
                name: "tolerance".to_owned(),
                span: decl.value.span,
                first,
            });
            return;
        }
        match tolerance_value(&decl.value) {
            Ok(info) => self.model.phenomena[idx].tolerance = Some(info),
            Err(error) => self.errors.push(error),
        }
    }

    fn phenomenon_value(&mut self, idx: usize, decl: ast::ValueDecl) {
        let id = match self.model.names.get(&decl.name.text).copied() {
            Some(Meaning::Symbol(id)) => id,
            Some(
                Meaning::Coordinate(_) | Meaning::Field(_) | Meaning::Group(_) | Meaning::Vector(_),
            ) => {
                let first = self.places[&decl.name.text];
                self.clash(&decl.name, first, Clash::Name);
                return;
            }
            None => match self.local_symbol(idx, &decl) {
                Some(id) => id,
                None => return,
            },
        };
        let info = &self.model.symbols[id.idx()];
        if info.kind != decl.kind {
            let first = info.entries[0].1.name.span;
            self.clash(&decl.name, first, Clash::Kind);
            return;
        }
        let values = &self.model.phenomena[idx].values;
        if let Some((_, first)) = values.iter().find(|(found, _)| *found == id) {
            let first = first.name.span;
            self.errors.push(ModelError::SecondValue {
                name: decl.name.text.clone(),
                span: decl.name.span,
                first,
            });
            return;
        }
        let overridden = info.entries.iter().find(|(_, entry)| is_given(entry));
        if let (Some((_, first)), None) = (overridden, info.local_to) {
            self.errors.push(ModelError::ValueOverridden {
                name: decl.name.text.clone(),
                span: decl.name.span,
                first: first.name.span,
                phenomenon: Some(self.model.phenomena[idx].name.text.clone()),
                is_opened: !is_given(&decl),
            });
        }
        self.model.phenomena[idx].values.push((id, decl));
    }

    /// A symbol that exists in this phenomenon only.
    fn local_symbol(&mut self, idx: usize, decl: &ast::ValueDecl) -> Option<SymbolId> {
        if names::is_reserved_function(&decl.name.text) {
            self.errors.push(ModelError::NameClash {
                name: decl.name.text.clone(),
                span: decl.name.span,
                first: None,
                what: Clash::BuiltIn,
            });
            return None;
        }
        let key = (idx, decl.name.text.clone());
        if let Some(&id) = self.model.local_names.get(&key) {
            return Some(id);
        }
        let id = SymbolId(self.model.symbols.len() as u32);
        self.new_symbol(Level::Phenomenon, decl.clone(), Some(idx));
        self.model.local_names.insert(key, id);
        Some(id)
    }
}

/// A proportion as an exact share: `10 %` and `0.1` alike.
///
/// # Errors
/// A unit that is no plain number.
pub fn share(proportion: &ast::Proportion) -> Result<BigRational, ModelError> {
    let number = &proportion.number;
    let Some(unit_text) = &number.unit else {
        return Ok(number.value.clone());
    };
    let unit = units::parse_unit(&unit_text.text).map_err(|error| ModelError::Unit {
        error,
        text: unit_text.text.clone(),
        span: unit_text.span,
        mend: None,
    })?;
    match (unit.dimension.is_one(), unit.factor.as_rational()) {
        (true, Some(factor)) => Ok(&number.value * factor),
        (true, None) | (false, _) => Err(ModelError::NotDimensionless {
            dimension: unit.dimension,
            span: proportion.span,
            what: "a proportion",
        }),
    }
}

/// A proportion as a tolerance: above 0 and below 1.
///
/// # Errors
/// Anything else.
pub fn tolerance_value(proportion: &ast::Proportion) -> Result<ToleranceInfo, ModelError> {
    let value = share(proportion)?;
    let span = proportion.span;
    if !value.is_positive() {
        return Err(ModelError::NotPositive {
            name: "tolerance".to_owned(),
            value: crate::number::rational_to_f64(&value),
            unit: String::new(),
            span,
        });
    }
    if value >= BigRational::one() {
        return Err(ModelError::ToleranceTooWide { span });
    }
    Ok(ToleranceInfo { value, span })
}
