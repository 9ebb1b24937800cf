//! `groups` as JSON.

use serde_json::{Value, json};

use crate::analysis::groups::{Groups, NamedGroup, PiGroup};
use crate::report::json::{exponents, list, number, range};
use crate::report::words;

/// Its own fields.
pub(super) fn groups(groups: &Groups) -> Value {
    json!({
        "independent": list(&groups.independent, independent),
        "named": list(&groups.named, named),
        "spanning": groups.spanning,
        "complete": groups.is_spanned(),
    })
}

fn independent(group: &PiGroup) -> Value {
    json!({
        "text": words::factors(&group.factors),
        "number": number(&group.factors.number),
        "exponents": exponents(&group.factors.exponents),
        "value": group.value.as_ref().map(range),
        "name": group.name,
    })
}

fn named(group: &NamedGroup) -> Value {
    json!({
        "text": words::factors(&group.factors),
        "number": number(&group.factors.number),
        "exponents": exponents(&group.factors.exponents),
        "value": group.value.as_ref().map(range),
        "name": group.name,
        "groups": group.groups.as_ref().map(exponents),
    })
}
