//! The report for a terminal: at most 80 columns, readable without colour. Here stand what
//! all answers share and the audit of what was given; each request has a file of its own.

mod bounds;
mod claims;
mod columns;
mod compare;
mod expand;
pub(in crate::report) mod find;
pub(in crate::report) mod groups;
pub(in crate::report) mod layers;
mod nondimensional;
mod rank;
mod reduce;
mod show;
mod sizes;

use std::fmt::Write as _;

use anstyle::{AnsiColor, Effects, Style};

use crate::analysis::claims::Held;
use crate::analysis::sizes::Verdict;
use crate::analysis::{Answer, Body};
use crate::audit::AuditRow;
use crate::report::layout::{WIDTH, cut, padded, percent, quantity, unit, width, wrapped};
use crate::report::{CAUTION, given, words};
use crate::session::Outcome;

/// Writes the whole report.
pub fn report(outcome: &Outcome, colour: bool) -> String {
    let pen = Pen { colour };
    let mut out = String::new();
    if !outcome.answers.is_empty() || !outcome.claims.is_empty() {
        audit(&outcome.symbols, &pen, &mut out);
    }
    notes(outcome, &mut out);
    write_answers(&outcome.answers, &outcome.claims, &pen, &mut out);
    if !out.is_empty() {
        out.push('\n');
        out.push_str(&wrapped("", CAUTION));
    }
    out
}

/// Writes the answers and claims alone, without what was given and without the caution:
/// what a prompt says to one request.
pub fn answers(answers: &[Answer], held: &[Held], colour: bool) -> String {
    let mut out = String::new();
    write_answers(answers, held, &Pen { colour }, &mut out);
    out
}

fn write_answers(answers: &[Answer], held: &[Held], pen: &Pen, out: &mut String) {
    for answer in answers {
        write_answer(answer, pen, out);
    }
    claims::claims(held, pen, out);
}

/// Colours, which only add.
struct Pen {
    colour: bool,
}

impl Pen {
    fn styled(&self, text: &str, style: Style) -> String {
        if self.colour {
            format!("{style}{text}{style:#}")
        } else {
            text.to_owned()
        }
    }

    fn head(&self, text: &str) -> String {
        self.styled(text, Style::new().effects(Effects::BOLD))
    }

    fn verdict(&self, verdict: Verdict, text: &str) -> String {
        let style = Style::new();
        let style = match verdict {
            Verdict::Leads => style.effects(Effects::BOLD),
            Verdict::Depends => style.fg_color(Some(AnsiColor::Yellow.into())),
            Verdict::Drops => style.effects(Effects::DIMMED),
        };
        self.styled(text, style)
    }

    fn alarm(&self, text: &str) -> String {
        self.styled(
            text,
            Style::new()
                .fg_color(Some(AnsiColor::Red.into()))
                .effects(Effects::BOLD),
        )
    }
}

// What was given ------------------------------------------------------------------------------

fn audit(rows: &[AuditRow], pen: &Pen, out: &mut String) {
    let given = given::values(rows);
    let all = given.iter().flat_map(|given| &given.rows);
    let names = all.map(|row| width(&row.name)).max().unwrap_or(0);
    for given in given {
        let title = match given.phenomenon {
            Some(name) => format!("given for {name}"),
            None => "given".to_owned(),
        };
        let _ = writeln!(out, "{}", pen.head(&title));
        for row in given.rows {
            let label = format!("  {}  ", padded(&row.name, names.min(24)));
            out.push_str(&wrapped(&label, &audit_words(row)));
        }
        out.push('\n');
    }
}

/// Notes that no answer has a place for: what was overridden, what vanishes.
fn notes(outcome: &Outcome, out: &mut String) {
    let messages = given::notes(outcome);
    if out.is_empty() || messages.is_empty() {
        return;
    }
    for message in messages {
        out.push_str(&wrapped("note  ", message));
    }
    out.push('\n');
}

fn audit_words(row: &AuditRow) -> String {
    let (value, unit_text) = row.shown_value();
    let mut text = value
        .map(|value| quantity(&value, &unit_text))
        .unwrap_or_default();
    if let Some(formula) = &row.formula {
        let _ = write!(text, " = {formula}");
    }
    if let Some(title) = &row.title {
        let _ = write!(text, ", {title}");
    }
    if let Some(source) = &row.source {
        let _ = write!(text, " ({source})");
    }
    text
}

// Answers -------------------------------------------------------------------------------------

fn write_answer(answer: &Answer, pen: &Pen, out: &mut String) {
    let title = words::heading(answer);
    if let Body::Show(shown) = &answer.body {
        show::show(&title, shown, pen, out);
        return;
    }
    let title = cut(&title, WIDTH - 6);
    let rule = "─".repeat(WIDTH.saturating_sub(width(&title) + 5));
    let _ = writeln!(out, "── {} {rule}\n", pen.head(&title));
    match &answer.body {
        Body::Show(_) => {}
        Body::Groups(found) => groups::groups(found, pen, out),
        Body::Nondimensionalize(equations) => equations
            .iter()
            .for_each(|equation| nondimensional::equation(equation, pen, out)),
        Body::Rank(equations) => equations
            .iter()
            .for_each(|equation| rank::ranked(equation, pen, out)),
        Body::Reduce(reduction) => reduce::reduce(reduction, pen, out),
        Body::Expand(hierarchy) => expand::expand(hierarchy, pen, out),
        Body::Find(balances) => find::find(balances, pen, out),
        Body::Layers(found) => layers::layers(found, pen, out),
        Body::Bounds(found) => bounds::bounds(found, pen, out),
        Body::Compare(comparison) => compare::compare(comparison, pen, out),
    }
    for left in &answer.left_out {
        let text = format!("{}: open {}", left.equation, left.open.join(", "));
        out.push_str(&wrapped("left out  ", &text));
    }
    if !answer.left_out.is_empty() {
        out.push('\n');
    }
}

/// Name, title and unit on the left, the tolerance on the right.
fn equation_head(
    name: &str,
    title: Option<&String>,
    unit_text: &str,
    tolerance: f64,
    pen: &Pen,
    out: &mut String,
) {
    let mut text = name.to_owned();
    if let Some(title) = title {
        let _ = write!(text, ", {title}");
    }
    if unit_text != "1" && !unit_text.is_empty() {
        let _ = write!(text, ", {}", unit(unit_text));
    }
    let tolerance = format!("tolerance {}", percent(tolerance));
    let room = WIDTH - width(&tolerance) - 2;
    let text = padded(&cut(&text, room), room);
    let _ = writeln!(out, "{}  {tolerance}", pen.head(&text));
}
