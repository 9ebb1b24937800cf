//! What is written behind an entry: values in one line, other answers as the reports
//! have them, and what an accepted declaration changed.

use std::fmt::Write as _;

use crate::analysis::rank::RankedEquation;
use crate::analysis::show::Shown;
use crate::analysis::{Answer, Body};
use crate::prompt::layout::Sheet;
use crate::report::layout::{number, percent, quantity, range, unit};
use crate::report::text;
use crate::session::changes::{Changes, Moved, OpenName};
use crate::session::incremental::{Replaced, Taken};
use crate::syntax::ast::ValueKind;
use crate::units::Range;

/// Most moved values that are listed.
const MOST_MOVED: usize = 12;

/// The answers to an entry.
pub fn answers(taken: &Taken, sheet: &Sheet) -> String {
    let outcome = &taken.outcome;
    let mut out = String::new();
    let is_single = taken.requests.len() == 1;
    for answer in &outcome.answers {
        out.push_str(&one_answer(answer, is_single, sheet));
    }
    if !outcome.claims.is_empty() {
        let colour = sheet.colour && !sheet.is_narrow();
        out.push_str(&sheet.folded(&text::answers(&[], &outcome.claims, colour)));
    }
    out
}

fn one_answer(answer: &Answer, is_single: bool, sheet: &Sheet) -> String {
    if let Body::Show(shown) = &answer.body {
        return value(answer, shown, is_single, sheet);
    }
    if !sheet.is_narrow() {
        return text::answers(std::slice::from_ref(answer), &[], sheet.colour);
    }
    match &answer.body {
        Body::Rank(equations) => {
            let mut out = String::new();
            if let Some(name) = &answer.phenomenon {
                out.push_str(&sheet.paragraph("", name));
            }
            for equation in equations {
                narrow_rank(equation, sheet, &mut out);
            }
            for left in &answer.left_out {
                let names = left.open.join(", ");
                out.push_str(
                    &sheet.paragraph("left out  ", &format!("{}: {names}", left.equation)),
                );
            }
            out
        }
        _ => sheet.folded(&text::answers(std::slice::from_ref(answer), &[], false)),
    }
}

/// A value on one line, `= 0.097, order 1e-1; Ro, Rossby number`.
fn value(answer: &Answer, shown: &Shown, is_single: bool, sheet: &Sheet) -> String {
    let asked = match is_single {
        true => "",
        false => answer.text.strip_prefix("show ").unwrap_or(&answer.text),
    };
    let label = match (&answer.phenomenon, asked) {
        (None, "") => "  = ".to_owned(),
        (Some(name), "") => format!("  {name} = "),
        (None, asked) => format!("  {asked} = "),
        (Some(name), asked) => format!("  {asked}, {name} = "),
    };
    sheet.paragraph(&label, &value_words(shown))
}

fn value_words(shown: &Shown) -> String {
    let (range, unit_text) = match &shown.shown_in {
        Some((unit, range)) => (range, unit),
        None => (&shown.value, &shown.unit),
    };
    let bound = if shown.is_bound { "at most " } else { "" };
    let mut text = format!("{bound}{}", quantity(range, unit_text));
    if let Some(order) = shown.order {
        let _ = write!(text, ", order 1e{order}");
        if shown.shown_in.is_some() && shown.unit != "1" {
            let _ = write!(text, " {}", unit(&shown.unit));
        }
    }
    if let Some(group) = &shown.group {
        let title = shown.group_title.as_ref().map(|title| format!(", {title}"));
        let _ = write!(text, "; {group}{}", title.unwrap_or_default());
    }
    text
}

/// An equation ranked for a terminal of less than 80 columns: largest first, a term with
/// its share and verdict on the line below it.
fn narrow_rank(equation: &RankedEquation, sheet: &Sheet, out: &mut String) {
    let tolerance = percent(equation.tolerance);
    out.push_str(&sheet.paragraph("", &format!("{}, tolerance {tolerance}", equation.name)));
    let mut order: Vec<usize> = (0..equation.terms.len()).collect();
    let nominal = |idx: &usize| equation.terms[*idx].size.nominal;
    order.sort_by(|a, b| nominal(b).total_cmp(&nominal(a)));
    for idx in order {
        let term = &equation.terms[idx];
        let process = term.process.as_ref().map(|process| format!("{process}: "));
        let text = format!("{}{}", process.unwrap_or_default(), term.text);
        out.push_str(&sheet.paragraph("  ", &text));
        let size = range(&term.size);
        let verdict = term.verdict.word();
        let figures = format!(
            "{verdict}, {}, {size} {}",
            share(&term.share),
            unit(&equation.unit)
        );
        out.push_str(&sheet.paragraph("      ", &figures));
    }
    out.push('\n');
}

fn share(share: &Range) -> String {
    match share.is_exact() {
        true => percent(share.nominal),
        false => {
            let low = percent(share.low);
            format!("{} .. {}", low.trim_end_matches(" %"), percent(share.high))
        }
    }
}

// Declarations --------------------------------------------------------------------------------

/// What an accepted entry changed.
pub fn changed(taken: &Taken, sheet: &Sheet) -> String {
    let mut out = String::new();
    for replaced in &taken.replaced {
        let place = replaced.phenomenon.as_ref().map(|name| format!("{name}: "));
        let text = format!("{}{}", place.unwrap_or_default(), replaced.was);
        out.push_str(&sheet.paragraph("  in place of  ", &text));
    }
    let Changes {
        moved,
        equations,
        open,
        hidden,
    } = &taken.changes;
    if !taken.replaced.is_empty() {
        out.push_str(&moved_values(moved, &taken.replaced, sheet));
    }
    if !equations.is_empty() && taken.requests.is_empty() {
        out.push_str(&sheet.paragraph("  equations    ", &equations.join(", ")));
    }
    for hidden in hidden {
        let text = format!(
            "{name} has its own {value}: phenomenon {name} {{ scale {value} = ... }} changes it",
            name = hidden.phenomenon,
            value = hidden.name
        );
        out.push_str(&sheet.paragraph("  but          ", &text));
    }
    match open.as_deref() {
        None => {}
        Some([]) => out.push_str(&sheet.paragraph("  open         ", "nothing more")),
        Some(open) => out.push_str(&sheet.paragraph("  open         ", &open_words(open))),
    }
    out
}

fn moved_values(moved: &[Moved], replaced: &[Replaced], sheet: &Sheet) -> String {
    let is_own = |moved: &Moved| replaced.iter().any(|replaced| replaced.name == moved.name);
    let followers: Vec<&Moved> = moved.iter().filter(|moved| !is_own(moved)).collect();
    let mut texts: Vec<String> = Vec::new();
    for moved in followers.iter().take(MOST_MOVED) {
        let place = moved.phenomenon.as_ref().map(|name| format!(" ({name})"));
        let text = format!(
            "{}{} {} → {}",
            moved.name,
            place.unwrap_or_default(),
            number(moved.from.nominal),
            quantity(&Range::exact(moved.to.nominal), &moved.unit)
        );
        texts.push(text);
    }
    if followers.len() > MOST_MOVED {
        texts.push(format!("and {} more", followers.len() - MOST_MOVED));
    }
    match texts.is_empty() {
        true => String::new(),
        false => sheet.paragraph("  follows      ", &texts.join(", ")),
    }
}

fn open_words(open: &[OpenName]) -> String {
    let mut texts: Vec<String> = Vec::new();
    for kind in [ValueKind::Scale, ValueKind::Constant] {
        let names: Vec<String> = open
            .iter()
            .filter(|name| name.kind == kind)
            .map(|name| format!("{} ({})", name.name, name.unit))
            .collect();
        let word = match kind {
            ValueKind::Scale => "scale",
            ValueKind::Constant => "constant",
        };
        if !names.is_empty() {
            texts.push(format!("{word} {}", names.join(", ")));
        }
    }
    texts.join("; ")
}
