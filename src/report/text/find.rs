//! `find` for a terminal.

use crate::analysis::balances::{Balances, Candidate, FamilyEnd, FreeScale, Neglected};
use crate::report::layout::{number, padded, percent, quantity_in, width, wrapped};
use crate::report::text::Pen;
use crate::report::{conditions, words};

/// Writes all balances.
pub(super) fn find(balances: &Balances, pen: &Pen, out: &mut String) {
    if balances.candidates.is_empty() {
        let text = words::no_balance(balances);
        out.push_str(&wrapped("warning   ", &text));
        out.push('\n');
        return;
    }
    out.push_str(&wrapped("", &summary(balances)));
    if balances.is_nominal {
        let text = format!(
            "more than {} ranges matter: balances are looked for at the nominal values",
            crate::limits::RANGES
        );
        out.push_str(&wrapped("", &text));
    }
    if let Some(small) = &balances.small {
        out.push_str(&wrapped("", &format!("sizes compare as powers of {small}")));
    }
    out.push('\n');
    let n_candidates = balances.candidates.len();
    for (idx, candidate) in balances.candidates.iter().enumerate() {
        let place = (n_candidates > 1).then_some(idx + 1);
        write_candidate(candidate, place, balances.small.as_deref(), pen, out);
    }
}

/// How many balances there are.
pub(in crate::report) fn summary(balances: &Balances) -> String {
    let is_family = |candidate: &&Candidate| !candidate.free.is_empty();
    let n_families = balances.candidates.iter().filter(is_family).count();
    let n_points = balances.candidates.len() - n_families;
    let count = |n: usize, one: &str, several: &str| match n {
        0 => None,
        1 => Some(format!("1 {one}")),
        n => Some(format!("{n} {several}")),
    };
    let points = count(n_points, "consistent balance", "consistent balances");
    let families = count(n_families, "family of balances", "families of balances");
    let all: Vec<String> = points.into_iter().chain(families).collect();
    let adopted = balances
        .candidates
        .iter()
        .any(|candidate| candidate.is_adopted);
    let adopted = match (adopted, n_families) {
        (false, _) => "",
        (true, 0) => "; the requests that follow use it",
        (true, _) => "; the requests that follow use it, what is free stays open",
    };
    format!("{}{adopted}", all.join(", "))
}

fn write_candidate(
    candidate: &Candidate,
    place: Option<usize>,
    small: Option<&str>,
    pen: &Pen,
    out: &mut String,
) {
    let name = match candidate.names.as_slice() {
        [] => "unnamed".to_owned(),
        names => names.join(", "),
    };
    let head = match place {
        Some(place) => format!("{place}  {name}"),
        None => name,
    };
    out.push_str(&format!("{}\n", pen.head(&head)));
    scales(candidate, out);
    let names = candidate
        .balances
        .iter()
        .map(|(name, _)| width(name))
        .max()
        .unwrap_or(0);
    for (idx, (equation, processes)) in candidate.balances.iter().enumerate() {
        let word = if idx == 0 { "balance" } else { "" };
        let label = format!(
            "  {}  {}  ",
            padded(word, 9),
            padded(equation, names.min(24))
        );
        let is_one = candidate.as_one.contains(equation);
        out.push_str(&wrapped(&label, &balance_words(processes, is_one)));
    }
    if let Some(neglected) = &candidate.neglected {
        let text = neglected_words(neglected, small);
        out.push_str(&wrapped(&format!("  {}  ", padded("neglects", 9)), &text));
    }
    stands(candidate, out);
    out.push('\n');
}

/// `tendency + advection ~ pressure_gradient` where the first two count as one process.
fn balance_words(processes: &[String], is_one: bool) -> String {
    let of_one = |process: &str| process == "tendency" || process == "advection";
    let mut text = String::new();
    for (idx, process) in processes.iter().enumerate() {
        let sign = match idx {
            0 => "",
            _ if is_one && of_one(process) && of_one(&processes[idx - 1]) => " + ",
            _ => " ~ ",
        };
        text.push_str(sign);
        text.push_str(process);
    }
    text
}

fn scales(candidate: &Candidate, out: &mut String) {
    let names = candidate
        .scales
        .iter()
        .map(|scale| width(&scale.name))
        .max()
        .unwrap_or(0);
    for scale in &candidate.scales {
        let label = format!("  {}  ", padded(&scale.name, names));
        let text = match (
            &scale.formula,
            candidate.free.iter().find(|free| free.name == scale.name),
        ) {
            (Some(formula), _) => {
                let mut text = format!("= {}", words::formula(formula));
                if let Some(value) = &scale.value {
                    let value = quantity_in(value, scale.shown_in.as_deref(), &scale.unit);
                    text = format!("{text} = {value}");
                }
                text
            }
            (None, Some(free)) => {
                out.push_str(&wrapped(&label, free_words(free)));
                ends(free, names, out);
                continue;
            }
            (None, None) => "free".to_owned(),
        };
        out.push_str(&wrapped(&label, &text));
    }
}

/// Where a scale is free.
pub(in crate::report) fn free_words(free: &FreeScale) -> &'static str {
    match (free.low.is_empty(), free.high.is_empty()) {
        (true, true) => "free, nothing bounds it",
        (false, true) => "free above",
        (true, false) => "free below",
        (false, false) => "free between",
    }
}

fn ends(free: &FreeScale, names: usize, out: &mut String) {
    let label = format!("  {}    ", " ".repeat(names));
    for end in all_ends(free) {
        out.push_str(&wrapped(&label, &end));
    }
}

/// The ends of a free scale.
pub(in crate::report) fn all_ends(free: &FreeScale) -> Vec<String> {
    let low = free.low.iter().map(|end| end_words(free, ">=", end));
    let high = free.high.iter().map(|end| end_words(free, "<=", end));
    low.chain(high).collect()
}

fn end_words(free: &FreeScale, sign: &str, end: &FamilyEnd) -> String {
    let value = end
        .value
        .map(|value| quantity_in(&value, free.shown_in.as_deref(), &free.unit));
    let value = value.map(|value| format!(" = {value}")).unwrap_or_default();
    let verb = if end.joins.len() == 1 {
        "joins"
    } else {
        "join"
    };
    format!(
        "{sign} {}{value}, where {} {verb} in {}",
        words::formula(&end.formula),
        end.joins.join(", "),
        end.equation
    )
}

/// What a balance neglects.
pub(in crate::report) fn neglected_words(neglected: &Neglected, small: Option<&str>) -> String {
    let Some((term, equation)) = &neglected.term else {
        return "nothing".to_owned();
    };
    let size = match (neglected.share, neglected.power, small) {
        (Some(share), ..) if share > 1.0 => format!(
            "{} times the balance: it does not hold at the nominal values",
            number(share)
        ),
        (Some(share), ..) => percent(share),
        (None, Some(1.0), Some(small)) => format!("of order {small}"),
        (None, Some(power), Some(small)) => format!("of order {small}^{}", number(power)),
        (None, _, _) => "unknown".to_owned(),
    };
    format!("{size}, {term} in {equation}")
}

/// Over which part of the ranges it stands.
fn stands(candidate: &Candidate, out: &mut String) {
    if candidate.whole_box {
        return;
    }
    let texts: Vec<String> = (candidate.conditions.iter())
        .map(conditions::with_value)
        .collect();
    let text = match texts.as_slice() {
        [] => "over part of the ranges only".to_owned(),
        texts => format!("where {}", texts.join(" and ")),
    };
    out.push_str(&wrapped(&format!("  {}  ", padded("stands", 9)), &text));
}
