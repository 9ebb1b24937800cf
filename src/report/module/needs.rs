//! What a reduced system needs: every name in it, every name that the declaration of one
//! of them needs, and the groups of these.

use crate::analysis::reduce::ReducedEquation;
use crate::model::needs::{Needs, Search};
use crate::model::{Meaning, names};
use crate::report::conditions;
use crate::report::module::Origin;

/// The needs of these equations.
pub(super) fn of(origin: &Origin<'_>, equations: &[&ReducedEquation]) -> Needs {
    let mut search = Search::new(origin.model, origin.case.setting.phenomenon);
    for equation in equations {
        let parts = equation.sides.iter().flatten();
        parts.for_each(|part| search.expr(&part.named));
        let told = equation.kept.iter().flat_map(|term| &term.conditions);
        let groups = told.filter_map(conditions::told_groups);
        for (name, _) in groups.flat_map(|(_, groups)| groups) {
            search.name(name);
        }
    }
    search.motion();
    let mut needs = search.run();
    groups_at_hand(origin, &mut needs);
    needs
}

/// Groups of what is there anyway come along, so that answers can speak in them.
fn groups_at_hand(origin: &Origin<'_>, needs: &mut Needs) {
    let (model, phenomenon) = (origin.model, origin.case.setting.phenomenon);
    for (idx, info) in model.groups.iter().enumerate() {
        let mut symbols = Vec::new();
        let mut is_at_hand = true;
        names::visit_names(
            &info.value,
            &mut |name, _| match model.meaning(name, phenomenon) {
                Some(Meaning::Symbol(id)) => symbols.push(id),
                Some(Meaning::Group(id)) => is_at_hand &= needs.groups[id.0 as usize],
                Some(Meaning::Coordinate(_) | Meaning::Field(_) | Meaning::Vector(_)) | None => {}
            },
        );
        is_at_hand &= symbols.iter().all(|id| needs.symbols[id.idx()]);
        needs.groups[idx] |= is_at_hand;
    }
}
