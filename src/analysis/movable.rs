//! Which scales and constants can be moved alone, the others held: what `bounds` varies,
//! and what `compare` may change to match which groups.
//!
//! A derived product moves with its parts, so the parts are moved instead; a part of a
//! symbol that is no product (`phi` in `f = 2*Omega*sin(phi)`) would move that symbol
//! too, along no power law, so the symbol is moved instead.

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::analysis::Case;
use crate::model::errors::{Missing, ModelError};
use crate::model::{Meaning, Model, names};
use crate::syntax::ast;

/// A name as a scale or constant that can be moved alone.
///
/// # Errors
/// The name is unknown, means something else, is derived, or is part of a symbol that
/// stands in an equation.
pub fn movable(model: &Model, case: &Case, name: &ast::Name) -> Result<SymbolId, ModelError> {
    let id = symbol(model, case, name)?;
    if let Some(parts) = case.setting.quantities.replacement(&Symbol::Declared(id)) {
        let parts = parts.powers().iter();
        return Err(ModelError::MovesWithParts {
            name: name.text.clone(),
            span: name.span,
            parts: parts.map(|(symbol, _)| case.symbol_name(symbol)).collect(),
        });
    }
    let terms = case.equations.iter().flat_map(|equation| &equation.terms);
    let holders = holders(model, case, id, terms.map(|term| &term.size.resolved));
    if holders.is_empty() {
        return Ok(id);
    }
    Err(ModelError::MovesOthers {
        name: name.text.clone(),
        span: name.span,
        holders,
    })
}

fn symbol(model: &Model, case: &Case, name: &ast::Name) -> Result<SymbolId, ModelError> {
    let phenomenon = case.setting.phenomenon;
    let kind = match model.meaning(&name.text, phenomenon) {
        Some(Meaning::Symbol(id)) => return Ok(id),
        Some(Meaning::Coordinate(_)) => "coordinate",
        Some(Meaning::Field(_)) => "field",
        Some(Meaning::Vector(_)) => "vector",
        Some(Meaning::Group(_)) => "group",
        None => {
            return Err(ModelError::UnknownName {
                name: name.text.clone(),
                span: name.span,
                nearest: names::nearest(&name.text, model.visible_names(phenomenon)),
                missing: Missing::Value,
                unit: None,
            });
        }
    };
    Err(ModelError::OutOfPlace {
        name: name.text.clone(),
        kind,
        wanted: "a scale or a constant",
        span: name.span,
    })
}

/// A name as that of a group.
///
/// # Errors
/// The name is unknown or means something else.
pub fn group(model: &Model, name: &ast::Name) -> Result<(), ModelError> {
    let kind = match model.meaning(&name.text, None) {
        Some(Meaning::Group(_)) => return Ok(()),
        Some(Meaning::Symbol(id)) => match model.symbols[id.idx()].kind {
            ast::ValueKind::Scale => "scale",
            ast::ValueKind::Constant => "constant",
        },
        Some(Meaning::Coordinate(_)) => "coordinate",
        Some(Meaning::Field(_)) => "field",
        Some(Meaning::Vector(_)) => "vector",
        None => {
            let groups = model.groups.iter().map(|group| group.name.text.as_str());
            return Err(ModelError::UnknownName {
                name: name.text.clone(),
                span: name.span,
                nearest: names::nearest(&name.text, groups),
                missing: Missing::Group,
                unit: None,
            });
        }
    };
    Err(ModelError::OutOfPlace {
        name: name.text.clone(),
        kind,
        wanted: "a named group",
        span: name.span,
    })
}

/// The symbols in some monomials that follow this one without being a product of powers
/// with it, by name, each once.
pub fn holders<'a>(
    model: &Model,
    case: &Case,
    id: SymbolId,
    monomials: impl IntoIterator<Item = &'a Monomial>,
) -> Vec<String> {
    let mut seen: Vec<&Symbol> = Vec::new();
    let mut found = Vec::new();
    for (symbol, _) in monomials.into_iter().flat_map(Monomial::powers) {
        if seen.contains(&symbol) {
            continue;
        }
        seen.push(symbol);
        if rests_on(model, case, symbol, id) {
            found.push(case.symbol_name(symbol));
        }
    }
    found
}

/// Whether the value of a symbol follows another one, at any depth.
fn rests_on(model: &Model, case: &Case, symbol: &Symbol, part: SymbolId) -> bool {
    let mut waiting = match symbol {
        Symbol::Declared(id) => parts(model, case, *id),
        Symbol::Function(function) => function.parts.clone(),
    };
    let mut seen = Vec::new();
    while let Some(id) = waiting.pop() {
        if id == part {
            return true;
        }
        if !seen.contains(&id) {
            seen.push(id);
            waiting.extend(parts(model, case, id));
        }
    }
    false
}

/// What a formula names; nothing for a plain number.
pub fn parts(model: &Model, case: &Case, id: SymbolId) -> Vec<SymbolId> {
    let phenomenon = case.setting.phenomenon;
    match &model.effective(id, phenomenon).1.value {
        ast::Value::Given { nominal, .. } => names::symbols_in(nominal, model, phenomenon),
        ast::Value::Open(_) => Vec::new(),
    }
}
