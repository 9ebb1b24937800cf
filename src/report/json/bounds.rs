//! `bounds` as JSON.

use serde_json::{Value, json};

use crate::analysis::bounds::conditions::Condition;
use crate::analysis::bounds::{Bound, Bounds, End, Interval, Place};
use crate::report::conditions;
use crate::report::json::{exponents, list, range};

/// Its own fields.
pub(super) fn bounds(bounds: &Bounds) -> Value {
    json!({
        "scales": list(&bounds.scales, bound),
        "conditions": list(&bounds.conditions, condition),
        "nearest": bounds.nearest.as_ref().map(|way_out| json!({
            "scale": bounds.scales[way_out.scale].name,
            "factor": way_out.end.way.exp(),
            "equation": way_out.end.place.equation,
            "term": way_out.end.place.term,
        })),
        "dropped": list(&bounds.dropped, |dropped| json!({
            "equation": dropped.place.equation,
            "term": dropped.place.term,
            "text": dropped.text,
        })),
        "lone": list(&bounds.lone, place),
        "whole_box": bounds.fails_first.is_none(),
        "fails_first": bounds.fails_first.as_ref().map(|found| {
            let mut object = condition(found);
            object["range"] = range(&found.inequality.value);
            object
        }),
    })
}

fn place(place: &Place) -> Value {
    json!({ "equation": place.equation, "term": place.term })
}

fn bound(bound: &Bound) -> Value {
    let mut object = interval(&bound.stands);
    object["name"] = json!(bound.name);
    object["unit"] = json!(bound.unit);
    object["nominal"] = json!(bound.nominal);
    object["unchanged"] = interval(&bound.unchanged);
    object["balance"] = bound.balance.as_ref().map_or(Value::Null, interval);
    object
}

fn interval(interval: &Interval) -> Value {
    let value = |end: &Option<End>| end.as_ref().map(|end| end.value);
    let ender = |end: &Option<End>| end.as_ref().map(|end| place(&end.place));
    json!({
        "low": value(&interval.low),
        "high": value(&interval.high),
        "limited_by": { "low": ender(&interval.low), "high": ender(&interval.high) },
    })
}

fn condition(condition: &Condition) -> Value {
    let inequality = &condition.inequality;
    json!({
        "equation": condition.place.equation,
        "term": condition.place.term,
        "text": conditions::in_groups(inequality),
        "groups": inequality.groups.as_ref().map(|(_, groups)| exponents(groups)),
        "value": inequality.value.nominal,
        "limit": inequality.limit,
        "holds": condition.holds,
    })
}
