//! The sentences about where a reduced system stands, and about matching groups, that all
//! report forms share.

use crate::analysis::bounds::conditions::{Condition, Role};
use crate::analysis::bounds::standing::Why;
use crate::analysis::bounds::{Bound, Bounds, Dropped, End, Place};
use crate::analysis::matching::Matching;
use crate::diagnostic::Diagnostic;
use crate::report::layout::significant;
use crate::report::{conditions, words};
use crate::source::Span;
use crate::units::Range;

/// A value of a scale in the unit in which it was written.
pub fn value(bound: &Bound, value: f64) -> String {
    words::in_unit(
        &Range::exact(value),
        &bound.unit,
        bound.written_unit.as_ref(),
    )
}

/// A factor of at least 1, with as many digits as tell it from 1.
pub fn factor(way: f64) -> String {
    let factor = way.abs().exp();
    let beyond = factor - 1.0;
    let digits = if beyond < 0.095 && beyond > 0.0 {
        2.0 - beyond.log10().floor()
    } else {
        3.0
    };
    significant(factor, digits.clamp(3.0, 15.0) as usize)
}

/// `× 2.3`, `÷ 1.06`: the way of an amount to an end.
pub fn factor_with_sign(way: f64) -> String {
    let sign = if way < 0.0 { '÷' } else { '×' };
    format!("{sign} {}", factor(way))
}

/// What happens at an end: `tendency, advection matter in x_momentum`.
pub fn at_end(end: &End) -> String {
    let places: Vec<&Place> = std::iter::once(&end.place).chain(&end.others).collect();
    what_happens(&places, end.why)
}

fn what_happens(places: &[&Place], why: Why) -> String {
    let alike = alike(places);
    let texts: Vec<String> = alike
        .iter()
        .map(|(terms, equations)| {
            let does = match (why, terms.len()) {
                (Why::Rises, 1) => "matters in",
                (Why::Rises, _) => "matter in",
                (Why::Falls, 1) => "falls away in",
                (Why::Falls, _) => "fall away in",
                (Why::Joins, 1) => "exceeds the balance in",
                (Why::Joins, _) => "exceed the balance in",
                (Why::ExceedsParts, 1) => "exceeds its parts in",
                (Why::ExceedsParts, _) => "exceed their parts in",
            };
            format!("{} {does} {}", terms.join(", "), equations.join(", "))
        })
        .collect();
    texts.join("; ")
}

/// Terms with the equations in which it is just these.
fn alike<'a>(places: &[&'a Place]) -> Vec<(Vec<&'a str>, Vec<&'a str>)> {
    let mut equations: Vec<(&str, Vec<&str>)> = Vec::new();
    for place in places {
        let mut known = equations.iter_mut();
        match known.find(|(equation, _)| *equation == place.equation) {
            Some((_, terms)) if !terms.contains(&place.term.as_str()) => terms.push(&place.term),
            Some(_) => {}
            None => equations.push((&place.equation, vec![&place.term])),
        }
    }
    let mut alike: Vec<(Vec<&str>, Vec<&str>)> = Vec::new();
    for (equation, terms) in equations {
        match alike.iter_mut().find(|(known, _)| *known == terms) {
            Some((_, names)) => names.push(equation),
            None => alike.push((terms, vec![equation])),
        }
    }
    alike
}

/// `U may grow by 2.3 (to 23 m/s), then advection matters in x_momentum`.
pub fn nearest(bounds: &Bounds) -> Option<String> {
    let way_out = bounds.nearest.as_ref()?;
    let bound = &bounds.scales[way_out.scale];
    let end = &way_out.end;
    let name = &bound.name;
    let direction = if end.way < 0.0 { "shrink" } else { "grow" };
    let what = at_end(end);
    if end.way == 0.0 {
        return Some(format!("{name} stands at an end: beyond it {what}"));
    }
    Some(format!(
        "{name} may {direction} by {} (to {}), then {what}",
        factor(end.way),
        value(bound, end.value)
    ))
}

/// One end of an interval, in a table: the value there, the factor to it, and what
/// happens.
pub fn end(bound: &Bound, end: Option<&End>) -> [String; 3] {
    match end {
        None => [
            "any".to_owned(),
            String::new(),
            "nothing ends it".to_owned(),
        ],
        Some(end) => [
            value(bound, end.value),
            factor_with_sign(end.way),
            at_end(end),
        ],
    }
}

/// The conditions on which the system stands, each with what happens where it fails.
pub fn needed(conditions: &[Condition]) -> Vec<(String, String)> {
    told(
        conditions
            .iter()
            .filter(|condition| condition.role != Role::MayGo),
    )
}

/// The conditions under which more terms may go somewhere in the ranges, each with those
/// terms.
pub fn may_go(found: &[Condition]) -> Vec<(String, String)> {
    let may_go = found.iter().filter(|found| found.role == Role::MayGo);
    told(may_go.filter(|found| conditions::is_reachable(&found.inequality)))
}

/// Conditions that read alike, told once and those nearest to their limit first: the
/// inequality with its present value, and what rests on it.
fn told<'a>(conditions: impl Iterator<Item = &'a Condition>) -> Vec<(String, String)> {
    let mut order: Vec<&Condition> = conditions.collect();
    let room = |condition: &Condition| {
        let inequality = &condition.inequality;
        (inequality.value.nominal / inequality.limit).ln().abs()
    };
    order.sort_by(|a, b| room(a).total_cmp(&room(b)));
    let mut found: Vec<(String, Role, Vec<&Place>)> = Vec::new();
    for condition in order {
        let text = condition_with_value(condition);
        let mut known = found.iter_mut();
        match known.find(|(known, role, _)| *known == text && *role == condition.role) {
            Some((_, _, places)) => places.push(&condition.place),
            None => found.push((text, condition.role, vec![&condition.place])),
        }
    }
    found
        .into_iter()
        .map(|(text, role, places)| (text, rests(role, &places)))
        .collect()
}

/// `Ro <= 0.1 (now 0.0946)`.
pub fn condition_with_value(condition: &Condition) -> String {
    conditions::with_value(&condition.inequality)
}

fn rests(role: Role, places: &[&Place]) -> String {
    let why = match role {
        Role::StaysOut => Why::Rises,
        Role::StaysIn => Why::Falls,
        Role::WithinParts => Why::ExceedsParts,
        Role::MayGo => {
            let texts: Vec<String> = alike(places)
                .iter()
                .map(|(terms, equations)| {
                    format!("{} of {}", terms.join(", "), equations.join(", "))
                })
                .collect();
            return format!("then {} may go", texts.join("; "));
        }
    };
    format!("else {}", what_happens(places, why))
}

/// Whether the system stands on the whole box of ranges, or what fails first.
pub fn box_words(bounds: &Bounds) -> String {
    let Some(condition) = &bounds.fails_first else {
        return if bounds.has_ranges {
            "it stands on the whole box of ranges".to_owned()
        } else {
            "no scale has a range".to_owned()
        };
    };
    let why = match condition.role {
        Role::StaysOut | Role::MayGo => Why::Rises,
        Role::StaysIn => Why::Falls,
        Role::WithinParts => Why::ExceedsParts,
    };
    format!(
        "it does not stand on the whole box of ranges: first fails {}, and {}",
        condition_with_value(condition),
        what_happens(&[&condition.place], why)
    )
}

/// What is out at the nominal values, equation by equation; a process of which only some
/// terms are out stands by the texts of these.
pub fn left_out(dropped: &[Dropped]) -> Vec<String> {
    let mut equations: Vec<(&str, Vec<&str>)> = Vec::new();
    for found in dropped {
        let name = if found.is_whole {
            &found.place.term
        } else {
            &found.text
        };
        match equations
            .iter_mut()
            .find(|(known, _)| *known == found.place.equation)
        {
            Some((_, names)) if !names.contains(&name.as_str()) => names.push(name),
            Some(_) => {}
            None => equations.push((&found.place.equation, vec![name])),
        }
    }
    equations
        .iter()
        .map(|(equation, names)| format!("{equation}: {}", names.join(", ")))
        .collect()
}

/// Why `bounds` says nothing of an equation.
pub fn left_out_lone(place: &Place) -> String {
    format!(
        "`{}` is left with `{}` alone at the nominal values, which nothing balances: `bounds` leaves it out",
        place.equation, place.term
    )
}

// Matching ------------------------------------------------------------------------------------

/// What matching takes: `U × 2.3, L ÷ 4 in tank`.
pub fn matching(matching: &Matching) -> String {
    let groups = matching.groups.join(", ");
    let phenomenon = &matching.phenomenon;
    if !matching.is_possible() {
        return no_match(matching, "");
    }
    if matching.changes.is_empty() {
        return format!("{groups}: nothing would have to change");
    }
    let changes: Vec<String> = matching
        .changes
        .iter()
        .map(|(scale, factor)| format!("{scale} {}", factor_with_sign(factor.ln())))
        .collect();
    format!("{groups}: with {} in {phenomenon}", changes.join(", "))
}

fn no_match(matching: &Matching, quote: &str) -> String {
    let quoted = |name: &String| format!("{quote}{name}{quote}");
    let groups: Vec<String> = matching.conflict.iter().map(quoted).collect();
    let phenomenon = quoted(&matching.phenomenon);
    match groups.as_slice() {
        [single] => format!("{single} cannot be matched by scales of {phenomenon} alone"),
        several => format!(
            "{} cannot be matched together by scales of {phenomenon} alone",
            several.join(", ")
        ),
    }
}

/// The error of groups that cannot be matched.
pub fn cannot_match(matching: &Matching, span: Span) -> Option<Diagnostic> {
    (!matching.is_possible()).then(|| {
        Diagnostic::error("cannot-match", span, no_match(matching, "`")).with_help(
            "match fewer groups, or give a constant of them another value in this phenomenon",
        )
    })
}
