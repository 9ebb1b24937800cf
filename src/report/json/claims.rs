//! Claims as JSON.

use serde_json::{Value, json};

use crate::analysis::claims::{Held, Measured};
use crate::report::json::{mends, range, span};
use crate::report::words;
use crate::source::Sources;

/// One claim.
pub(super) fn held(claim: &Held, sources: &Sources) -> Value {
    let value = match &claim.measured {
        Measured::Ratio { value, .. } => value.high.is_finite().then(|| range(value)),
        Measured::Value { left, .. } => Some(range(left)),
        Measured::Processes { .. } => None,
    };
    json!({
        "text": claim.text,
        "phenomenon": claim.phenomenon,
        "met": claim.met,
        "measured": words::measured(claim),
        "value": value,
        "miss": if claim.met { None } else { claim.miss },
        "mends": mends(&claim.mends),
        "span": span(claim.span, sources),
    })
}
