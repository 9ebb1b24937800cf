//! `show` as JSON.

use serde_json::{Value, json};

use crate::analysis::show::Shown;
use crate::report::json::{exponents, number, range};

/// Its own fields.
pub(super) fn show(shown: &Shown) -> Value {
    let mut object = json!({
        "value": range(&shown.value),
        "unit": shown.unit,
        "order": shown.order,
        "number": shown.factors.as_ref().map(|factors| number(&factors.number)),
        "exponents": shown.factors.as_ref().map(|factors| exponents(&factors.exponents)),
        "group": shown.group,
    });
    if let (Some((unit, value)), Value::Object(object)) = (&shown.shown_in, &mut object) {
        object.insert(
            "in".to_owned(),
            json!({ "unit": unit, "value": range(value) }),
        );
    }
    object
}
