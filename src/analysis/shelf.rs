//! What a module holds, for showing it to whoever may use it: its equations with the
//! symbols still open, what is given and what is not, and what a script that uses it has
//! to say. Everything is gathered from the module itself.

use crate::algebra::quantities::CoordinateId;
use crate::analysis::{self, Case};
use crate::diagnostic::Diagnostic;
use crate::model::errors::ModelError;
use crate::model::modules::{self, Files, Main};
use crate::model::needs::{Needs, Search};
use crate::model::{Meaning, Model, declarations, dimensions, frames, library};
use crate::source::{FileId, Sources, Span};
use crate::syntax::ast::{self, ExprKind, StatementKind};

/// A module with everything that comes with it.
#[derive(Debug, Clone)]
pub struct Shelf {
    /// Its name, as it stands behind `use`.
    pub name: String,
    /// The paragraphs of its head comment.
    pub about: Vec<String>,
    /// The modules that it uses, in the order in which they come in.
    pub uses: Vec<String>,
    /// The names of the coordinates.
    pub coordinates: Vec<String>,
    /// Its equations.
    pub equations: Vec<Item<ast::EquationDecl>>,
    /// What varies in them.
    pub variables: Vec<Item<Variable>>,
    /// Vectors and stresses, each with its components.
    pub vectors: Vec<Item<Vector>>,
    /// Scales and constants without a value.
    pub open: Vec<Item<Open>>,
    /// Scales and constants with a value: its own, and those of other modules that
    /// equations, fields, groups or its own values need.
    pub given: Vec<Item<ast::ValueDecl>>,
    /// How many others have a value, per module that they come from.
    pub spare: Vec<(String, usize)>,
    /// Named groups.
    pub groups: Vec<Item<ast::GroupDecl>>,
    /// Balances.
    pub balances: Vec<Item<ast::BalanceDecl>>,
    /// How a script that uses it begins; a module that is a script itself stands there as
    /// it is.
    pub start: Start,
}

/// Something declared, and the module that declares it; `None`: this one.
#[derive(Debug, Clone)]
pub struct Item<T> {
    /// The other module.
    pub from: Option<String>,
    /// What is declared.
    pub held: T,
}

/// A field or a coordinate.
#[derive(Debug, Clone)]
pub struct Variable {
    /// Its name.
    pub name: String,
    /// What it is.
    pub title: Option<String>,
    /// Its size; `None` where it is split into others.
    pub size: Option<ast::Expr>,
    /// By how much it varies, where that differs.
    pub varying: Option<ast::Expr>,
    /// What it depends on; empty for a coordinate.
    pub coordinates: Vec<ast::Dependence>,
}

/// A vector or a stress.
#[derive(Debug, Clone)]
pub struct Vector {
    /// Its name.
    pub name: String,
    /// Its components, in brackets.
    pub components: ast::Expr,
    /// Title and source.
    pub notes: ast::Notes,
}

/// A scale or constant without a value.
#[derive(Debug, Clone)]
pub struct Open {
    /// Scale or constant.
    pub kind: ast::ValueKind,
    /// Its name.
    pub name: String,
    /// The unit that it prefers.
    pub unit: String,
    /// What it is.
    pub title: Option<String>,
}

/// How a script begins that uses a module.
#[derive(Debug, Clone)]
pub enum Start {
    /// It is one already.
    Script(String),
    /// Values to fill in, and what follows from them.
    Values {
        /// The module of equations that it takes besides, where this one holds values alone.
        beside: Option<String>,
        /// What needs a value.
        open: Vec<Open>,
        /// What may follow from these: a scale and its formula.
        derived: Vec<(Open, String)>,
        /// What to ask.
        requests: Vec<String>,
    },
}

/// Reads a module and gathers what it holds.
///
/// # Errors
/// What is wrong with it, with the texts that were read.
pub fn shelf(main: &Main, files: &dyn Files) -> Result<Shelf, (Vec<Diagnostic>, Sources)> {
    let mut sources = Sources::default();
    let (scripts, mut errors) = modules::load(main, files, &mut sources);
    let uses = sources
        .iter()
        .skip(1)
        .map(|(_, source)| source.name.clone());
    let uses: Vec<String> = uses.collect();
    let is_script = scripts.last().is_some_and(|(_, script)| is_script(script));
    let (mut model, found) = declarations::gather(scripts);
    errors.extend(found.iter().map(ModelError::diagnostic));
    let declared = model.equations.clone();
    let found = frames::resolve(&mut model);
    errors.extend(found.iter().map(ModelError::diagnostic));
    let found = dimensions::check(&mut model);
    errors.extend(found.iter().map(ModelError::diagnostic));
    let (case, found) = analysis::case(&model, None);
    errors.extend(found.iter().map(ModelError::diagnostic));
    let Some(case) = case.filter(|_| !errors.iter().any(Diagnostic::is_error)) else {
        return Err((errors, sources));
    };
    let own = sources.iter().next().map(|(file, _)| file);
    let gatherer = Gatherer {
        model: &model,
        declared: &declared,
        sources: &sources,
        own: own.unwrap_or_default(),
    };
    let beside = beside(&main.text);
    let start = match (is_script, beside) {
        (true, _) => Start::Script(main.text.clone()),
        (false, None) => gatherer.start(&case),
        (false, Some(equations)) => with_equations(main, files, equations)?,
    };
    Ok(gatherer.shelf(main, uses, start))
}

/// How a script begins that uses a module of values with one of equations.
fn with_equations(
    main: &Main,
    files: &dyn Files,
    equations: String,
) -> Result<Start, (Vec<Diagnostic>, Sources)> {
    let both = Main {
        text: format!("{}\nuse {equations}\n", without_head(&main.text)),
        ..main.clone()
    };
    let mut start = shelf(&both, files)?.start;
    if let Start::Values { beside, .. } = &mut start {
        *beside = Some(equations);
    }
    Ok(start)
}

fn without_head(text: &str) -> String {
    let lines = text.lines().skip_while(|line| line.starts_with('#'));
    lines.collect::<Vec<_>>().join("\n")
}

/// The first module that a head comment says its module goes with.
fn beside(text: &str) -> Option<String> {
    let mut about = library::head(text).into_iter();
    let named = about.find_map(|text| text.strip_prefix("Goes with `").map(str::to_owned))?;
    let name = named.split('`').next()?;
    library::find(name).map(|module| module.name.to_owned())
}

/// Whether a text asks for something, so that it is a script and no shelf.
fn is_script(script: &ast::Script) -> bool {
    script.statements.iter().any(|statement| {
        matches!(
            statement.kind,
            StatementKind::Request(_) | StatementKind::Phenomenon(_)
        )
    })
}

struct Gatherer<'a> {
    model: &'a Model,
    /// The equations as they are written, vector equations whole.
    declared: &'a [ast::EquationDecl],
    sources: &'a Sources,
    own: FileId,
}

impl Gatherer<'_> {
    fn item<T>(&self, span: Span, held: T) -> Item<T> {
        let is_own = span.file == self.own;
        Item {
            from: (!is_own).then(|| self.sources.get(span.file).name.clone()),
            held,
        }
    }

    fn shelf(&self, main: &Main, uses: Vec<String>, start: Start) -> Shelf {
        let model = self.model;
        let equations = self.declared.iter();
        let balances = model.balances.iter();
        let (given, spare) = self.all_given();
        Shelf {
            name: main.name.clone(),
            about: library::head(&main.text),
            uses,
            coordinates: model
                .coordinates
                .iter()
                .map(|info| info.name.text.clone())
                .collect(),
            equations: equations
                .map(|decl| self.item(decl.name.span, decl.clone()))
                .collect(),
            variables: self.variables(),
            vectors: self.vectors(),
            open: (0..model.symbols.len())
                .filter_map(|idx| self.open(idx))
                .collect(),
            given,
            spare,
            groups: model
                .groups
                .iter()
                .map(|info| {
                    let decl = ast::GroupDecl {
                        name: info.name.clone(),
                        value: info.value.clone(),
                        notes: info.notes.clone(),
                    };
                    self.item(info.name.span, decl)
                })
                .collect(),
            balances: balances
                .map(|decl| self.item(decl.name.span, decl.clone()))
                .collect(),
            start,
        }
    }

    fn variables(&self) -> Vec<Item<Variable>> {
        let coordinates = self.model.coordinates.iter().map(|info| {
            let held = Variable {
                name: info.name.text.clone(),
                title: text(info.notes.title.as_ref()),
                size: Some(info.size.clone()),
                varying: None,
                coordinates: Vec::new(),
            };
            self.item(info.name.span, held)
        });
        let fields = self.model.fields.iter().map(|info| {
            let held = Variable {
                name: info.name.text.clone(),
                title: text(info.notes.title.as_ref()),
                size: info.parts.is_empty().then(|| info.size.clone()),
                varying: info.varying.clone(),
                coordinates: info.coordinates.clone(),
            };
            self.item(info.name.span, held)
        });
        coordinates.chain(fields).collect()
    }

    fn vectors(&self) -> Vec<Item<Vector>> {
        let vectors = self.model.vectors.iter();
        let held = vectors.map(|info| {
            let held = Vector {
                name: info.name.text.clone(),
                components: ast::Expr {
                    kind: ExprKind::Tuple(info.components.clone()),
                    span: info.span,
                },
                notes: info.notes.clone(),
            };
            self.item(info.name.span, held)
        });
        held.collect()
    }

    fn effective(&self, idx: usize) -> &ast::ValueDecl {
        let id = crate::algebra::monomial::SymbolId(idx as u32);
        self.model.effective(id, None).1
    }

    fn open(&self, idx: usize) -> Option<Item<Open>> {
        let info = &self.model.symbols[idx];
        let decl = self.effective(idx);
        let ast::Value::Open(unit) = &decl.value else {
            return None;
        };
        let mut titles = info.entries.iter().map(|(_, entry)| &entry.notes.title);
        let held = Open {
            kind: info.kind,
            name: info.name.clone(),
            unit: unit.text.clone(),
            title: text(titles.find_map(Option::as_ref)),
        };
        Some(self.item(decl.name.span, held))
    }

    fn given(&self, idx: usize) -> Option<Item<ast::ValueDecl>> {
        let decl = self.effective(idx);
        let is_given = crate::model::is_given(decl) && self.model.symbols[idx].local_to.is_none();
        is_given.then(|| self.item(decl.name.span, decl.clone()))
    }

    /// What has a value and is of use here, and how much else each module brings.
    fn all_given(&self) -> (Vec<Item<ast::ValueDecl>>, Vec<(String, usize)>) {
        let needs = self.needs();
        let (mut given, mut spare) = (Vec::new(), Vec::<(String, usize)>::new());
        for idx in 0..self.model.symbols.len() {
            let Some(item) = self.given(idx) else {
                continue;
            };
            match &item.from {
                Some(from) if !needs.symbols[idx] => {
                    match spare.iter_mut().find(|(module, _)| module == from) {
                        Some((_, count)) => *count += 1,
                        None => spare.push((from.clone(), 1)),
                    }
                }
                Some(_) | None => given.push(item),
            }
        }
        (given, spare)
    }

    /// What the equations, fields and groups need, and the values of the module itself.
    fn needs(&self) -> Needs {
        let model = self.model;
        let mut search = Search::new(model, None);
        for equation in &model.equations {
            match &equation.body {
                ast::EquationBody::Made(made) => search.expr(made),
                ast::EquationBody::Written { left, right } => {
                    search.expr(left);
                    search.expr(right);
                }
            }
        }
        let fields = model.fields.iter().map(|info| &info.name);
        let groups = model.groups.iter().map(|info| &info.name);
        fields
            .chain(groups)
            .for_each(|name| search.name(&name.text));
        let values = (0..model.symbols.len()).map(|idx| &self.effective(idx).name);
        values
            .filter(|name| name.span.file == self.own)
            .for_each(|name| search.name(&name.text));
        search.motion();
        search.run()
    }

    // How a script begins ---------------------------------------------------------------------

    /// What the equations need, or the first group, or everything.
    fn start(&self, case: &Case) -> Start {
        let (wanted, requests) = self.wanted(case);
        let all = (0..self.model.symbols.len()).filter_map(|idx| self.open(idx));
        let open: Vec<Open> = all
            .map(|item| item.held)
            .filter(|open| wanted.contains(&open.name))
            .collect();
        let formulas = self.formulas(&wanted);
        let formula = |open: &Open| {
            let mut formulas = formulas.iter();
            formulas.find_map(|(name, formula)| (*name == open.name).then(|| formula.clone()))
        };
        let (derived, open): (Vec<Open>, Vec<Open>) =
            open.into_iter().partition(|open| formula(open).is_some());
        Start::Values {
            beside: None,
            derived: derived
                .into_iter()
                .filter_map(|open| formula(&open).map(|formula| (open, formula)))
                .collect(),
            open,
            requests,
        }
    }

    fn wanted(&self, case: &Case) -> (Vec<String>, Vec<String>) {
        if !case.equations.is_empty() {
            let mut wanted: Vec<String> = Vec::new();
            for equation in &case.equations {
                wanted.extend(case.open_in(equation));
            }
            return (wanted, vec!["rank".to_owned(), "reduce".to_owned()]);
        }
        let own = self
            .model
            .groups
            .iter()
            .position(|info| info.name.span.file == self.own);
        let group = own.and_then(|idx| case.setting.groups.get(idx));
        if let Some(group) = group.or(case.setting.groups.first()) {
            let open = case.setting.monomial_range(&group.size.resolved);
            let open = open.err().unwrap_or_default();
            let names = open.iter().map(|id| case.setting.names[id.idx()].clone());
            return (names.collect(), vec![format!("show {}", group.name)]);
        }
        let symbols = self.model.symbols.iter();
        let all = symbols.clone().map(|info| info.name.clone()).collect();
        let own = symbols.map(|info| &info.entries[0].1.name);
        let first = own.clone().find(|name| name.span.file == self.own);
        let shown = first
            .or(own.clone().next())
            .map(|name| format!("show {}", name.text));
        (all, shown.into_iter().collect())
    }

    /// Scales that usually follow from others: the time by advection, and the size of a
    /// component of the velocity across the first by continuity. None where the script is
    /// not asked for the speed and the length that they follow from.
    fn formulas(&self, wanted: &[String]) -> Vec<(String, String)> {
        let mut found = Vec::new();
        let Some(velocity) = &self.model.velocity else {
            return found;
        };
        let sizes: Vec<(String, String)> = velocity
            .components
            .iter()
            .map_while(|(field, along)| Some((self.size_of(field)?, self.size_of(along)?)))
            .collect();
        let Some((speed, length)) = sizes.first() else {
            return found;
        };
        if self.is_left_open(speed, wanted) || self.is_left_open(length, wanted) {
            return found;
        }
        let time = match self.model.meaning("t", None) {
            Some(Meaning::Coordinate(id)) => self.coordinate_size(id),
            Some(
                Meaning::Symbol(_) | Meaning::Field(_) | Meaning::Group(_) | Meaning::Vector(_),
            )
            | None => None,
        };
        found.extend(time.map(|time| (time, format!("{length}/{speed}"))));
        for (across, depth) in &sizes[1..] {
            if across != speed && depth != length && !self.is_left_open(depth, wanted) {
                found.push((across.clone(), format!("{speed}*{depth}/{length}")));
            }
        }
        found.retain(|(name, _)| wanted.contains(name));
        found
    }

    /// Whether a symbol has no value, and the script is not asked for one.
    fn is_left_open(&self, name: &str, wanted: &[String]) -> bool {
        let mut symbols = self.model.symbols.iter();
        let at = symbols.position(|info| info.name == name);
        let is_open = at.is_some_and(|idx| self.open(idx).is_some());
        is_open && !wanted.iter().any(|wanted| wanted == name)
    }

    /// The scale that a field or coordinate is of, where it is one alone.
    fn size_of(&self, name: &ast::Name) -> Option<String> {
        match self.model.meaning(&name.text, None)? {
            Meaning::Coordinate(id) => self.coordinate_size(id),
            Meaning::Field(id) => lone_name(&self.model.fields[id.0 as usize].size),
            Meaning::Symbol(_) | Meaning::Group(_) | Meaning::Vector(_) => None,
        }
    }

    fn coordinate_size(&self, id: CoordinateId) -> Option<String> {
        lone_name(&self.model.coordinates[id.0 as usize].size)
    }
}

fn lone_name(expr: &ast::Expr) -> Option<String> {
    match &expr.kind {
        ExprKind::Name(name) => Some(name.clone()),
        _ => None,
    }
}

fn text(text: Option<&ast::Text>) -> Option<String> {
    text.map(|text| text.text.clone())
}
