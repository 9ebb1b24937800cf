//! Whether an equation's leading order speaks of a base state alone, as hydrostatic
//! balance does. A mean beside its fluctuation is no base state, whichever is larger.

use crate::algebra::quantities::FieldId;
use crate::analysis::Case;
use crate::analysis::reduce::Kept;
use crate::analysis::sizes::Verdict;
use crate::model::{Meaning, Model};
use crate::syntax::ast;

/// Whether the terms that lead hold fields, and base fields only: the largest parts of
/// fields that are split.
pub fn is_base_state(model: &Model, case: &Case, kept: &Kept<'_>) -> bool {
    let base = base_fields(model, case);
    if base.is_empty() {
        return false;
    }
    let leading = kept
        .equation
        .terms
        .iter()
        .zip(&kept.verdicts)
        .filter(|(_, verdict)| **verdict == Verdict::Leads);
    let fields: Vec<FieldId> = leading
        .flat_map(|(term, _)| term.product.fields())
        .collect();
    !fields.is_empty() && fields.iter().all(|field| base.contains(field))
}

/// The largest part, at the nominal values, of each field that is split into something
/// else than a mean and a fluctuation.
fn base_fields(model: &Model, case: &Case) -> Vec<FieldId> {
    let size = |name: &str| match model.meaning(name, None) {
        Some(Meaning::Field(id)) => {
            let size = &case.setting.quantities.field(id).size.resolved;
            Some((Some(id), case.setting.nominal(size)))
        }
        Some(Meaning::Symbol(id)) => {
            let size = case
                .setting
                .quantities
                .symbol_size(&crate::algebra::monomial::Symbol::Declared(id));
            Some((None, case.setting.nominal(&size.resolved)))
        }
        Some(Meaning::Coordinate(_) | Meaning::Group(_) | Meaning::Vector(_)) | None => None,
    };
    let largest = |parts: &[(ast::Sign, ast::Name)]| {
        let sizes: Vec<(Option<FieldId>, f64)> = parts
            .iter()
            .filter_map(|(_, part)| size(&part.text))
            .collect();
        let idx = crate::analysis::sizes::largest(sizes.iter().map(|(_, size)| *size))?;
        sizes[idx].0
    };
    let is_fluctuation = |part: &ast::Name| match model.meaning(&part.text, None) {
        Some(Meaning::Field(id)) => model.fields[id.0 as usize].is_fluctuation,
        Some(
            Meaning::Symbol(_) | Meaning::Coordinate(_) | Meaning::Group(_) | Meaning::Vector(_),
        )
        | None => false,
    };
    let split = model.fields.iter().filter(|info| {
        !info.parts.is_empty() && !info.parts.iter().any(|(_, part)| is_fluctuation(part))
    });
    split.filter_map(|info| largest(&info.parts)).collect()
}
