//! What an entry changed in a session: values that moved, names that are still open,
//! equations that came in.

use crate::analysis::Case;
use crate::model::settings::{Setting, Variable};
use crate::model::{Model, is_given};
use crate::session::Checked;
use crate::syntax::ast;
use crate::units::{Dimension, Range};

/// What is different behind an entry.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Changes {
    /// Scales, constants and groups with another value than before, in order of
    /// declaration, phenomenon by phenomenon.
    pub moved: Vec<Moved>,
    /// Equations that were not there before.
    pub equations: Vec<String>,
    /// Names without a value in the equations, if they are others than before.
    pub open: Option<Vec<OpenName>>,
    /// Phenomena whose own value hides one that the entry gave.
    pub hidden: Vec<Hidden>,
}

/// A value that moved.
#[derive(Debug, Clone, PartialEq)]
pub struct Moved {
    /// The name.
    pub name: String,
    /// The phenomenon.
    pub phenomenon: Option<String>,
    /// Its value before, in SI units.
    pub from: Range,
    /// Its value now.
    pub to: Range,
    /// The SI unit.
    pub unit: String,
}

/// A name that has no value yet.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct OpenName {
    /// Scale or constant.
    pub kind: ast::ValueKind,
    /// The name.
    pub name: String,
    /// The unit in which it was opened.
    pub unit: String,
}

/// A value that a phenomenon's own hides.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Hidden {
    /// The name.
    pub name: String,
    /// The phenomenon.
    pub phenomenon: String,
}

/// What differs between two states; `given` are the names to which the entry gave values.
pub(super) fn changes(before: &Checked, after: &Checked, given: &[String]) -> Changes {
    let known = |name: &String| before.model.equation(name).is_some();
    let equations = after
        .model
        .equations
        .iter()
        .map(|decl| decl.name.text.clone());
    let open = open_names(after);
    Changes {
        moved: after
            .cases
            .iter()
            .filter_map(|case| Some((counterpart(before, case)?, case)))
            .flat_map(|(old, new)| moved(before, after, &old.setting, &new.setting))
            .collect(),
        equations: equations.filter(|name| !known(name)).collect(),
        open: (open_names(before) != open).then_some(open),
        hidden: hidden(&after.model, given),
    }
}

fn counterpart<'c>(before: &'c Checked, case: &Case) -> Option<&'c Case> {
    let same = |old: &&Case| old.setting.name == case.setting.name;
    before.cases.iter().find(same)
}

fn moved(before: &Checked, after: &Checked, old: &Setting, new: &Setting) -> Vec<Moved> {
    let mut found = Vec::new();
    let mut add = |name: &str, pair: Option<(Range, Range)>, dimension: Option<Dimension>| {
        if let Some((from, to)) = pair.filter(|(from, to)| !is_same(from, to)) {
            found.push(Moved {
                name: name.to_owned(),
                phenomenon: new.name.clone(),
                from,
                to,
                unit: dimension.map_or("1".to_owned(), |dimension| dimension.unit_text()),
            });
        }
    };
    for (idx, info) in after.model.symbols.iter().enumerate() {
        let place = before.model.symbols.iter().position(|old| {
            old.name == info.name && old.local_to.is_some() == info.local_to.is_some()
        });
        let pair = place
            .and_then(|place| Some((known(&old.variables[place])?, known(&new.variables[idx])?)));
        add(&info.name, pair, info.dimension);
    }
    for group in &new.groups {
        let same = old.groups.iter().find(|old| old.name == group.name);
        let pair = same.and_then(|same| {
            let from = old.monomial_range(&same.size.resolved).ok()?;
            Some((from, new.monomial_range(&group.size.resolved).ok()?))
        });
        add(&group.name, pair, None);
    }
    found
}

fn known(variable: &Variable) -> Option<Range> {
    match variable {
        Variable::Known(value) => Some(value.range),
        Variable::Open(_) => None,
    }
}

fn is_same(a: &Range, b: &Range) -> bool {
    let close = |a: f64, b: f64| (a - b).abs() <= 1e-12 * a.abs().max(b.abs());
    close(a.low, b.low) && close(a.nominal, b.nominal) && close(a.high, b.high)
}

/// The names without a value in the equations, in order of declaration.
fn open_names(checked: &Checked) -> Vec<OpenName> {
    let mut names: Vec<String> = Vec::new();
    for case in &checked.cases {
        for equation in &case.equations {
            for name in case.open_in(equation) {
                if !names.contains(&name) {
                    names.push(name);
                }
            }
        }
    }
    let infos = checked.model.symbols.iter();
    infos
        .filter(|info| names.contains(&info.name))
        .map(|info| OpenName {
            kind: info.kind,
            name: info.name.clone(),
            unit: written_unit(info),
        })
        .collect()
}

fn written_unit(info: &crate::model::SymbolInfo) -> String {
    let opened = info.entries.iter().find_map(|(_, decl)| match &decl.value {
        ast::Value::Open(unit) => Some(unit.text.clone()),
        ast::Value::Given { .. } => None,
    });
    let own = info.dimension.map(|dimension| dimension.unit_text());
    opened.or(own).unwrap_or_else(|| "1".to_owned())
}

fn hidden(model: &Model, given: &[String]) -> Vec<Hidden> {
    let mut found = Vec::new();
    for phenomenon in &model.phenomena {
        for (id, decl) in &phenomenon.values {
            let name = &model.symbols[id.idx()].name;
            if given.contains(name) && is_given(decl) {
                found.push(Hidden {
                    name: name.clone(),
                    phenomenon: phenomenon.name.text.clone(),
                });
            }
        }
    }
    found
}
