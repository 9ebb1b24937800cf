//! What moved between two answers to the same request: terms with another verdict, by
//! how much shares moved, values by what factor.

use crate::analysis::claims::Held;
use crate::analysis::sizes::Verdict;
use crate::analysis::{Answer, Body};
use crate::prompt::layout::Sheet;
use crate::report::layout::{number, percent, quantity};
use crate::report::text;
use crate::units::Range;

/// A share that moves by less than this part of the largest term is not told.
const LEAST_MOVE: f64 = 5e-4;

/// Most lines of an earlier report that are shown.
const MOST_LINES: usize = 12;

/// What differs, answer by answer.
pub fn moved(before: (&[Answer], &[Held]), after: (&[Answer], &[Held]), sheet: &Sheet) -> String {
    let mut lines: Vec<(String, String)> = Vec::new();
    for (idx, new) in after.0.iter().enumerate() {
        if let Some(old) = counterpart(before.0, after.0, idx) {
            let of = new.phenomenon.clone();
            let found = answer(old, new);
            lines.extend(
                found
                    .into_iter()
                    .map(|(name, text)| (with_phenomenon(name, &of), text)),
            );
        }
    }
    for new in after.1 {
        let same = |old: &&Held| old.text == new.text && old.phenomenon == new.phenomenon;
        if let Some(old) = before.1.iter().find(same)
            && old.met != new.met
        {
            let word = |met: bool| if met { "met" } else { "not met" };
            let text = format!("{} → {}", word(old.met), word(new.met));
            lines.push((with_phenomenon(new.text.clone(), &new.phenomenon), text));
        }
    }
    if lines.is_empty() {
        return sheet.paragraph("moved  ", "nothing");
    }
    let mut out = String::from("moved\n");
    for (name, text) in lines {
        out.push_str(&sheet.paragraph("  ", &format!("{name}: {text}")));
    }
    out
}

/// The earlier answer to the same request for the same phenomenon: both lists answer the
/// same requests in the same order, however they were spelt.
fn counterpart<'a>(before: &'a [Answer], after: &[Answer], idx: usize) -> Option<&'a Answer> {
    let phenomenon = &after[idx].phenomenon;
    let is_same = |found: &&Answer| found.phenomenon == *phenomenon;
    let nth = after[..idx].iter().filter(is_same).count();
    before.iter().filter(is_same).nth(nth)
}

fn with_phenomenon(name: String, phenomenon: &Option<String>) -> String {
    match phenomenon {
        Some(phenomenon) => format!("{phenomenon}, {name}"),
        None => name,
    }
}

fn answer(old: &Answer, new: &Answer) -> Vec<(String, String)> {
    match (&old.body, &new.body) {
        (Body::Show(from), Body::Show(to)) => {
            let name = new.text.strip_prefix("show ").unwrap_or(&new.text);
            let text = value(&from.value, &to.value, &to.unit);
            text.map(|text| (name.to_owned(), text))
                .into_iter()
                .collect()
        }
        (Body::Rank(_), Body::Rank(_)) | (Body::Reduce(_), Body::Reduce(_)) => {
            terms(&standings(&old.body), &standings(&new.body))
        }
        _ => report(old, new),
    }
}

fn value(from: &Range, to: &Range, unit: &str) -> Option<String> {
    if from == to {
        return None;
    }
    let is_other = (from.nominal - to.nominal).abs() > 1e-12 * from.nominal.abs();
    let factor = to.nominal / from.nominal;
    let factor = match is_other && factor.is_finite() && factor > 0.0 {
        true => format!(", by a factor {}", number(factor)),
        false => String::new(),
    };
    Some(format!(
        "{} → {}{factor}",
        quantity(from, unit),
        quantity(to, unit)
    ))
}

/// How a term stands in its equation.
struct Standing {
    equation: String,
    text: String,
    process: Option<String>,
    share: f64,
    verdict: Verdict,
}

fn standings(body: &Body) -> Vec<Standing> {
    let mut found = Vec::new();
    if let Body::Rank(equations) = body {
        for equation in equations {
            found.extend(equation.terms.iter().map(|term| Standing {
                equation: equation.name.clone(),
                text: term.text.clone(),
                process: term.process.clone(),
                share: term.share.nominal,
                verdict: term.verdict,
            }));
        }
    }
    if let Body::Reduce(reduction) = body {
        for equation in &reduction.equations {
            found.extend(
                equation
                    .kept
                    .iter()
                    .chain(&equation.dropped)
                    .map(|term| Standing {
                        equation: equation.name.clone(),
                        text: term.text.clone(),
                        process: term.process.clone(),
                        share: term.share.nominal,
                        verdict: term.verdict,
                    }),
            );
        }
    }
    found
}

/// The terms that moved: those with another verdict first.
fn terms(old: &[Standing], new: &[Standing]) -> Vec<(String, String)> {
    let mut other_verdicts = Vec::new();
    let mut other_shares = Vec::new();
    for term in new {
        let name = match &term.process {
            Some(process) => format!("{} {process} {}", term.equation, term.text),
            None => format!("{} {}", term.equation, term.text),
        };
        let same = |old: &&Standing| {
            old.equation == term.equation && old.text == term.text && old.process == term.process
        };
        let Some(before) = old.iter().find(same) else {
            other_verdicts.push((name, format!("new, {}", term.verdict.word())));
            continue;
        };
        let shares = format!("{} → {}", percent(before.share), percent(term.share));
        if before.verdict != term.verdict {
            let verdicts = format!("{} → {}", before.verdict.word(), term.verdict.word());
            other_verdicts.push((name, format!("{verdicts}, share {shares}")));
        } else if (before.share - term.share).abs() >= LEAST_MOVE {
            other_shares.push((name, format!("share {shares}")));
        }
    }
    other_verdicts.extend(other_shares);
    other_verdicts
}

/// The lines of an earlier report that are no longer there.
fn report(old: &Answer, new: &Answer) -> Vec<(String, String)> {
    let text = |answer: &Answer| text::answers(std::slice::from_ref(answer), &[], false);
    let (old, new) = (text(old), text(new));
    let new: Vec<&str> = new.lines().map(str::trim).collect();
    old.lines()
        .map(str::trim)
        .filter(|line| !line.is_empty() && !new.contains(line))
        .take(MOST_LINES)
        .map(|line| ("was".to_owned(), line.to_owned()))
        .collect()
}
