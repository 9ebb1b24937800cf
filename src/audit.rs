//! The audit of a script: every scale, constant, field, coordinate and group with its
//! value, range, text and source, so that a reader can check every number.

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::analysis::{self, Case};
use crate::model::settings::{Setting, Variable};
use crate::model::{FieldInfo, Meaning, Model, names};
use crate::source::Span;
use crate::syntax::{ast, print};
use crate::units::{self, Dimension, Range};

/// One row of it.
#[derive(Debug, Clone, PartialEq)]
pub struct AuditRow {
    /// Its name.
    pub name: String,
    /// What it is: `scale`, `constant`, `field`, `coordinate`, `group`.
    pub kind: &'static str,
    /// Its text.
    pub title: Option<String>,
    /// Where it comes from.
    pub source: Option<String>,
    /// The SI unit.
    pub unit: String,
    /// The unit in which it was written.
    pub written_unit: Option<String>,
    /// The phenomenon to which the value belongs; `None`: to all of them.
    pub phenomenon: Option<String>,
    /// Its value in SI units; `None` while it is open.
    pub value: Option<Range>,
    /// Its formula, where it follows others.
    pub formula: Option<String>,
    /// Of a field: by how much it varies, where that differs from its size.
    pub varying: Option<String>,
    /// Whether a term, a request or something used rests on it.
    pub is_used: bool,
    /// Where its value is declared.
    pub place: Span,
}

impl AuditRow {
    /// Its value in the unit in which it was written, with that unit.
    pub fn shown_value(&self) -> (Option<Range>, String) {
        let written = self
            .written_unit
            .as_ref()
            .and_then(|text| Some((text, units::parse_unit(text).ok()?)));
        let (Some(value), Some((text, unit))) = (&self.value, written) else {
            return (self.value, self.unit.clone());
        };
        let shown = Range {
            low: unit.from_si(value.low),
            nominal: unit.from_si(value.nominal),
            high: unit.from_si(value.high),
        };
        (Some(shown), text.clone())
    }
}

/// All rows: in order of declaration, for the script and then for each phenomenon that
/// gives another value.
pub fn rows(model: &Model, cases: &[Case]) -> Vec<AuditRow> {
    let script = analysis::case(model, None).0;
    let used = used(model, cases);
    let mut rows = Vec::new();
    let mut add = |make: &dyn Fn(&Setting) -> Option<AuditRow>| {
        let common = script.as_ref().and_then(|case| make(&case.setting));
        let own: Vec<AuditRow> = cases
            .iter()
            .filter(|case| case.setting.phenomenon.is_some())
            .filter_map(|case| {
                let row = make(&case.setting)?;
                let is_new = common.as_ref().is_none_or(|common| *common != row);
                is_new.then(|| AuditRow {
                    phenomenon: case.setting.name.clone(),
                    ..row
                })
            })
            .collect();
        let is_told =
            common.as_ref().is_some_and(|row| row.value.is_none()) && own.len() == cases.len();
        rows.extend(common.filter(|_| !is_told));
        rows.extend(own);
    };
    for (idx, is_used) in used.into_iter().enumerate() {
        add(&|setting| symbol_row(model, setting, SymbolId(idx as u32), is_used));
    }
    for idx in 0..model.coordinates.len() {
        add(&|setting| coordinate_row(model, setting, idx));
    }
    for idx in 0..model.fields.len() {
        add(&|setting| field_row(model, setting, idx));
    }
    for idx in 0..model.groups.len() {
        add(&|setting| group_row(model, setting, idx));
    }
    rows
}

/// Whether each symbol stands in a term, in a request, or in the formula of one that does.
fn used(model: &Model, cases: &[Case]) -> Vec<bool> {
    let mut used = vec![false; model.symbols.len()];
    let mut waiting: Vec<SymbolId> = Vec::new();
    for case in cases {
        for term in case.equations.iter().flat_map(|equation| &equation.terms) {
            let written = term.size.written.powers().iter();
            for (symbol, _) in written.chain(term.size.resolved.powers()) {
                match symbol {
                    Symbol::Declared(id) => waiting.push(*id),
                    Symbol::Function(function) => waiting.extend(&function.parts),
                }
            }
        }
    }
    for (own, request) in &model.requests {
        request.visit_expressions(&mut |expr| {
            waiting.extend(names::symbols_in(expr, model, *own));
        });
        match &request.kind {
            ast::RequestKind::Bounds { symbols } => {
                let meanings = symbols.iter().map(|name| model.meaning(&name.text, *own));
                waiting.extend(meanings.filter_map(|meaning| match meaning {
                    Some(Meaning::Symbol(id)) => Some(id),
                    Some(
                        Meaning::Coordinate(_)
                        | Meaning::Field(_)
                        | Meaning::Group(_)
                        | Meaning::Vector(_),
                    )
                    | None => None,
                }));
            }
            // It shows every group.
            ast::RequestKind::Compare { .. } => {
                let groups = model.groups.iter();
                waiting
                    .extend(groups.flat_map(|group| names::symbols_in(&group.value, model, None)));
            }
            _ => {}
        }
    }
    while let Some(id) = waiting.pop() {
        if std::mem::replace(&mut used[id.idx()], true) {
            continue;
        }
        let levels = std::iter::once(None).chain(cases.iter().map(|case| case.setting.phenomenon));
        for phenomenon in levels {
            if let (
                _,
                ast::ValueDecl {
                    value: ast::Value::Given { nominal, .. },
                    ..
                },
            ) = model.effective(id, phenomenon)
            {
                waiting.extend(names::symbols_in(nominal, model, phenomenon));
            }
        }
    }
    used
}

fn unit(dimension: Option<Dimension>) -> String {
    dimension.map_or_else(|| "1".to_owned(), |dimension| dimension.unit_text())
}

fn text(text: Option<&ast::Text>) -> Option<String> {
    text.map(|text| text.text.clone())
}

fn symbol_row(model: &Model, setting: &Setting, id: SymbolId, is_used: bool) -> Option<AuditRow> {
    let info = &model.symbols[id.idx()];
    if info.local_to.is_some() && info.local_to != setting.phenomenon {
        return None;
    }
    let (_, decl) = model.effective(id, setting.phenomenon);
    // A value without a text keeps the one of the declaration that opened the name.
    let opened = info
        .entries
        .iter()
        .rev()
        .find_map(|(_, entry)| entry.notes.title.as_ref());
    let formula = match &decl.value {
        ast::Value::Given { nominal, .. } => {
            names::has_names(nominal).then(|| print::expression(nominal))
        }
        ast::Value::Open(_) => None,
    };
    Some(AuditRow {
        name: info.name.clone(),
        kind: match info.kind {
            ast::ValueKind::Scale => "scale",
            ast::ValueKind::Constant => "constant",
        },
        title: text(decl.notes.title.as_ref().or(opened)),
        source: text(decl.notes.source.as_ref()),
        unit: unit(info.dimension),
        written_unit: written_unit(model, setting, id),
        phenomenon: None,
        value: match &setting.variables[id.idx()] {
            Variable::Known(value) => Some(value.range),
            Variable::Open(_) => None,
        },
        formula,
        varying: None,
        is_used,
        place: decl.name.span,
    })
}

/// The unit in which a value is written, or else the one in which its name was opened.
pub fn written_unit(model: &Model, setting: &Setting, id: SymbolId) -> Option<String> {
    let own = match &model.effective(id, setting.phenomenon).1.value {
        ast::Value::Given { nominal, spread } => display_unit(nominal, spread),
        ast::Value::Open(unit) => return Some(unit.text.clone()),
    };
    own.or_else(|| {
        let entries = &model.symbols[id.idx()].entries;
        let open = entries.iter().find_map(|(_, entry)| match &entry.value {
            ast::Value::Open(unit) => Some(unit.text.clone()),
            ast::Value::Given { .. } => None,
        });
        open.filter(|unit| unit != "1")
    })
}

/// The unit of the first literal of a value.
fn display_unit(nominal: &ast::Expr, spread: &ast::Spread) -> Option<String> {
    use crate::model::dimensions::literal_unit;
    let own = literal_unit(nominal);
    let end = match spread {
        ast::Spread::To(end) | ast::Spread::Margin(end) => literal_unit(end),
        ast::Spread::None | ast::Spread::Within(_) => None,
    };
    own.or(end).map(|unit| unit.text.clone())
}

fn size(setting: &Setting, monomial: &Monomial) -> Option<Range> {
    setting
        .monomial_range(monomial)
        .ok()
        .filter(|_| setting.is_available(monomial))
        .filter(|range| range.low.is_finite() && range.high.is_finite())
}

fn coordinate_row(model: &Model, setting: &Setting, idx: usize) -> Option<AuditRow> {
    let info = &model.coordinates[idx];
    Some(AuditRow {
        name: info.name.text.clone(),
        kind: "coordinate",
        title: text(info.notes.title.as_ref()),
        source: text(info.notes.source.as_ref()),
        unit: unit(info.dimension),
        written_unit: None,
        phenomenon: None,
        value: size(
            setting,
            &setting.quantities.coordinates.get(idx)?.size.resolved,
        ),
        formula: Some(print::expression(&info.size)),
        varying: None,
        is_used: true,
        place: info.name.span,
    })
}

fn field_row(model: &Model, setting: &Setting, idx: usize) -> Option<AuditRow> {
    let info = &model.fields[idx];
    Some(AuditRow {
        name: info.name.text.clone(),
        kind: "field",
        title: text(info.notes.title.as_ref()),
        source: text(info.notes.source.as_ref()),
        unit: unit(info.dimension),
        written_unit: None,
        phenomenon: None,
        value: match info.parts.is_empty() {
            true => size(setting, &setting.quantities.fields.get(idx)?.size.resolved),
            false => None,
        },
        formula: Some(field_formula(info)),
        varying: varying(info),
        is_used: true,
        place: info.name.span,
    })
}

/// `dP; along z P_0`.
fn varying(info: &FieldInfo) -> Option<String> {
    let common = info.varying.as_ref().map(print::expression);
    let own = info.coordinates.iter().filter_map(|dependence| {
        let along = &dependence.coordinate.text;
        let amount = dependence.varying.as_ref().map(print::expression);
        let length = dependence.length.as_ref().map(print::expression);
        match (amount, length) {
            (Some(amount), Some(length)) => Some(format!("along {along} {amount} over {length}")),
            (Some(amount), None) => Some(format!("along {along} {amount}")),
            (None, Some(length)) => Some(format!("along {along} over {length}")),
            (None, None) => None,
        }
    });
    let parts: Vec<String> = common.into_iter().chain(own).collect();
    (!parts.is_empty()).then(|| parts.join("; "))
}

/// The size of a field, or the parts that it is split into.
fn field_formula(info: &FieldInfo) -> String {
    if info.parts.is_empty() {
        return print::expression(&info.size);
    }
    let parts: Vec<(bool, &str)> = info
        .parts
        .iter()
        .map(|(sign, part)| (*sign == ast::Sign::Minus, part.text.as_str()))
        .collect();
    analysis::reduce::joined(&parts)
}

fn group_row(model: &Model, setting: &Setting, idx: usize) -> Option<AuditRow> {
    let info = &model.groups[idx];
    let group = setting
        .groups
        .iter()
        .find(|group| group.name == info.name.text)?;
    Some(AuditRow {
        name: info.name.text.clone(),
        kind: "group",
        title: text(info.notes.title.as_ref()),
        source: text(info.notes.source.as_ref()),
        unit: "1".to_owned(),
        written_unit: None,
        phenomenon: None,
        value: size(setting, &group.size.resolved),
        formula: Some(print::expression(&info.value)),
        varying: None,
        is_used: true,
        place: info.name.span,
    })
}
