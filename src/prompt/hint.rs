//! What is said behind the text while it is typed: the value of an expression, the
//! dimension of a scale, the form of a statement.

use crate::prompt::entry::{OWN_WORDS, command};
use crate::report::layout::{quantity, unit};
use crate::session::incremental::{Page, Worth};
use crate::source::FileId;
use crate::syntax::ast::{self, RequestKind, StatementKind};
use crate::syntax::token::RESERVED;
use crate::syntax::{forms, parser};
use crate::units::Range;

/// Most phenomena whose values are hinted at.
const MOST_VALUES: usize = 3;

/// What to say behind a text with the cursor at its end.
pub fn hint(page: &Page<'_>, text: &str) -> Option<String> {
    if text.trim().is_empty() {
        return None;
    }
    if let Some(form) = rest_of_form(text) {
        return Some(form);
    }
    if command(text).is_some() {
        return None;
    }
    let (expr, errors) = parser::parse_expression(text, FileId::default());
    if errors.is_empty() {
        return worth(page, &expr);
    }
    let (script, errors) = parser::parse(text, FileId::default());
    if !errors.is_empty() {
        return None;
    }
    match &script.statements.last()?.kind {
        StatementKind::Value(decl) => match &decl.value {
            ast::Value::Given { nominal, .. } => worth(page, nominal),
            ast::Value::Open(unit) => opened(unit),
        },
        StatementKind::Group(decl) => worth(page, &decl.value),
        StatementKind::Coordinate(decl) => worth(page, &decl.size),
        StatementKind::Field(decl) => worth(page, &decl.size),
        StatementKind::Request(request) => match &request.kind {
            RequestKind::Show { expr, .. } => worth(page, expr),
            _ => None,
        },
        _ => None,
    }
}

/// Behind a lone keyword and a blank, how the statement goes on.
fn rest_of_form(text: &str) -> Option<String> {
    let word = text.trim_start().strip_suffix(' ')?;
    let kind = RESERVED.iter().find(|(_, found)| *found == word);
    let own = OWN_WORDS.iter().find(|own| own.word == word);
    let form = match (kind, own) {
        (Some((kind, _)), _) => forms::form(*kind)?,
        (None, Some(own)) => own.form,
        (None, None) => return None,
    };
    let rest = form.strip_prefix(word)?.trim_start();
    (!rest.is_empty()).then(|| rest.to_owned())
}

fn worth(page: &Page<'_>, expr: &ast::Expr) -> Option<String> {
    let worths = page.worth(expr);
    let first = worths.first()?;
    let is_literal = matches!(expr.kind, ast::ExprKind::Number(_));
    let dimension = first.dimension.and_then(|dimension| dimension.name());
    if is_literal || first.shown.is_none() {
        let name = match dimension {
            Some(name) => name.to_owned(),
            None => unit(&first.dimension?.unit_text()),
        };
        return Some(format!("  {name}"));
    }
    let mut texts: Vec<String> = worths.iter().take(MOST_VALUES).filter_map(value).collect();
    texts.dedup();
    let group = first.shown.as_ref().and_then(|shown| shown.group.as_ref());
    let is_name = matches!(&expr.kind, ast::ExprKind::Name(name) if Some(name) == group);
    let group = group.filter(|_| !is_name).map(|name| format!(", {name}"));
    Some(format!(
        "  = {}{}",
        texts.join(" | "),
        group.unwrap_or_default()
    ))
}

fn value(worth: &Worth) -> Option<String> {
    let shown = worth.shown.as_ref()?;
    Some(quantity(&Range::exact(shown.value.nominal), &shown.unit))
}

fn opened(text: &ast::UnitText) -> Option<String> {
    let unit = crate::units::parse_unit(&text.text).ok()?;
    Some(format!("  {}", unit.dimension.name()?))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::session::Session;

    fn said(text: &str) -> Option<String> {
        let mut page = Page::new(Session::new());
        let start = "scale U = 10 m/s  scale L = 1000 km  constant f = 1e-4 1/s  scale W in m/s \
                     group Ro = U/(f*L) \"Rossby number\"";
        assert!(page.take("typed", start).is_taken);
        hint(&page, text)
    }

    #[test]
    fn values_dimensions_and_forms_are_hinted_at() {
        for (text, expected) in [
            ("U/(f*L)", "  = 0.1, Ro"),
            ("Ro", "  = 0.1"),
            ("U/L", "  = 1e-5 1/s"),
            ("scale T = L/U", "  = 100000 s"),
            ("scale H = 10 km", "  length"),
            ("scale D in m^2/s", "  kinematic viscosity"),
            ("W*f", "  acceleration"),
            ("show U", "  = 10 m/s"),
            ("rank ", "[EQUATION, ...] [for PHENOMENON, ...]"),
            ("help ", "[TOPIC]"),
        ] {
            assert_eq!(said(text).as_deref(), Some(expected), "{text}");
        }
    }

    #[test]
    fn nothing_is_said_of_what_is_not_there_yet() {
        for text in [
            "",
            " ",
            "U/(",
            "U + L",
            "Ux",
            "again",
            "x.y",
            "scale",
            "scale U =",
        ] {
            assert_eq!(said(text), None, "{text}");
        }
    }
}
