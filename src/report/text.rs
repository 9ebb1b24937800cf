//! The report for a terminal: at most 80 columns, readable without colour.

use std::fmt::Write as _;

use anstyle::{AnsiColor, Effects, Style};

use crate::analysis::claims::Held;
use crate::analysis::rank::{RankedEquation, RankedTerm};
use crate::analysis::reduce::{Kind, ReducedEquation, ReducedTerm, Reduction};
use crate::analysis::show::Shown;
use crate::analysis::sizes::Verdict;
use crate::analysis::{Answer, Body};
use crate::audit::AuditRow;
use crate::report::layout::{WIDTH, cut, number, padded, percent, quantity, range, right, unit, width, wrapped};
use crate::report::ruler::Ruler;
use crate::report::{CAUTION, words};
use crate::session::Outcome;
use crate::units::Range;

/// Writes the whole report.
pub fn report(outcome: &Outcome, colour: bool) -> String {
    let pen = Pen { colour };
    let mut out = String::new();
    if !outcome.answers.is_empty() || !outcome.claims.is_empty() {
        audit(&outcome.symbols, &pen, &mut out);
    }
    for answer in &outcome.answers {
        write_answer(answer, &pen, &mut out);
    }
    claims(&outcome.claims, &pen, &mut out);
    if !out.is_empty() {
        out.push('\n');
        out.push_str(&wrapped("", CAUTION));
    }
    out
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
        self.styled(text, Style::new().fg_color(Some(AnsiColor::Red.into())).effects(Effects::BOLD))
    }
}

// What was given ------------------------------------------------------------------------------

fn audit(rows: &[AuditRow], pen: &Pen, out: &mut String) {
    let shown: Vec<&AuditRow> = rows
        .iter()
        .filter(|row| matches!(row.kind, "scale" | "constant") && row.value.is_some() && row.is_used)
        .collect();
    if shown.is_empty() {
        return;
    }
    let mut groups: Vec<Option<&str>> = Vec::new();
    for row in &shown {
        let phenomenon = row.phenomenon.as_deref();
        if !groups.contains(&phenomenon) {
            groups.push(phenomenon);
        }
    }
    let names = shown.iter().map(|row| width(&row.name)).max().unwrap_or(0);
    for phenomenon in groups {
        let title = match phenomenon {
            Some(name) => format!("given for {name}"),
            None => "given".to_owned(),
        };
        let _ = writeln!(out, "{}", pen.head(&title));
        let mut own: Vec<&&AuditRow> = shown.iter().filter(|row| row.phenomenon.as_deref() == phenomenon).collect();
        // As they were declared; what follows from them comes behind.
        own.sort_by_key(|row| (row.formula.is_some() && phenomenon.is_some(), row.place));
        for row in own {
            let label = format!("  {}  ", padded(&row.name, names.min(24)));
            out.push_str(&wrapped(&label, &audit_words(row)));
        }
        out.push('\n');
    }
}

fn audit_words(row: &AuditRow) -> String {
    let (value, unit_text) = row.shown_value();
    let mut text = value.map(|value| quantity(&value, &unit_text)).unwrap_or_default();
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
    let title = match (&answer.phenomenon, &answer.title) {
        (Some(name), Some(title)) => format!("{}, {name}: {title}", answer.text),
        (Some(name), None) => format!("{}, {name}", answer.text),
        (None, _) => answer.text.clone(),
    };
    if let Body::Show(shown) = &answer.body {
        show(&title, shown, pen, out);
        return;
    }
    let title = cut(&title, WIDTH - 6);
    let rule = "─".repeat(WIDTH.saturating_sub(width(&title) + 5));
    let _ = writeln!(out, "── {} {rule}\n", pen.head(&title));
    match &answer.body {
        Body::Show(_) => {}
        Body::Rank(equations) => equations.iter().for_each(|equation| ranked(equation, pen, out)),
        Body::Reduce(reduction) => reduce(reduction, pen, out),
    }
    for left in &answer.left_out {
        let text = format!("{}: open {}", left.equation, left.open.join(", "));
        out.push_str(&wrapped("left out  ", &text));
    }
    if !answer.left_out.is_empty() {
        out.push('\n');
    }
}

fn show(title: &str, shown: &Shown, pen: &Pen, out: &mut String) {
    let (value, unit_text) = match &shown.shown_in {
        Some((unit, value)) => (value, unit),
        None => (&shown.value, &shown.unit),
    };
    let bound = if shown.is_bound { "at most " } else { "" };
    let mut text = format!("{bound}{}", quantity(value, unit_text));
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
    let _ = writeln!(out, "{}", pen.head(&cut(title, WIDTH)));
    out.push_str(&wrapped("  = ", &text));
    out.push('\n');
}

/// Name, title and unit on the left, the tolerance on the right.
fn equation_head(name: &str, title: Option<&String>, unit_text: &str, tolerance: f64, pen: &Pen, out: &mut String) {
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

const VERDICT_WIDTH: usize = 7;
const SHARE_WIDTH: usize = 9;

fn ranked(equation: &RankedEquation, pen: &Pen, out: &mut String) {
    equation_head(&equation.name, equation.title.as_ref(), &equation.unit, equation.tolerance, pen, out);
    let mut order: Vec<usize> = (0..equation.terms.len()).collect();
    order.sort_by(|a, b| {
        let nominal = |idx: &usize| equation.terms[*idx].size.nominal;
        nominal(b).total_cmp(&nominal(a))
    });
    let widest = |texts: Vec<&str>, most: usize| texts.into_iter().map(width).max().unwrap_or(0).min(most);
    let processes = widest(equation.terms.iter().map(|term| term.process.as_deref().unwrap_or("")).collect(), 17);
    let texts = widest(equation.terms.iter().map(|term| term.text.as_str()).collect(), 17);
    let left = 2 + processes + usize::from(processes > 0) + texts + 1;
    let room = WIDTH - left - SHARE_WIDTH - 2 - VERDICT_WIDTH;
    let sizes: Vec<Range> = equation.terms.iter().map(|term| term.size).collect();
    let ruler = Ruler::over(&sizes, room);
    let head = format!("{}{}", " ".repeat(left), ruler.head());
    let share_end = left + ruler.width() + SHARE_WIDTH;
    let share = right("share", share_end.saturating_sub(width(&head)));
    let _ = writeln!(out, "{head}{share}");
    for idx in &order {
        let term = &equation.terms[*idx];
        let process = if processes > 0 {
            padded(&cut(term.process.as_deref().unwrap_or(""), processes), processes) + " "
        } else {
            String::new()
        };
        let line = format!(
            "  {process}{} {}{}  {}",
            padded(&cut(&term.text, texts), texts),
            ruler.line(&term.size),
            right(&percent(term.share.nominal), SHARE_WIDTH),
            term.verdict.word()
        );
        let _ = writeln!(out, "{}", pen.verdict(term.verdict, &line));
    }
    out.push('\n');
    size_table(equation, &order, out);
    out.push('\n');
}

/// Every term with its scale, its size and its share over the box.
fn size_table(equation: &RankedEquation, order: &[usize], out: &mut String) {
    let rows: Vec<[String; 4]> = order
        .iter()
        .map(|idx| {
            let term = &equation.terms[*idx];
            let share = if term.share.is_exact() {
                percent(term.share.nominal)
            } else {
                format!("{} .. {}", percent(term.share.low).trim_end_matches(" %"), percent(term.share.high))
            };
            [term.text.clone(), term.scale.clone(), range(&term.size), share + &below(term)]
        })
        .collect();
    let column = |idx: usize, title: &str, most: usize| {
        rows.iter().map(|row| width(&row[idx])).max().unwrap_or(0).max(width(title)).min(most)
    };
    let size_title = format!("size, {}", unit(&equation.unit)).trim_end_matches(", ").to_owned();
    let (sizes, shares) = (column(2, &size_title, 32), column(3, "share", 24));
    let room = WIDTH.saturating_sub(2 + 2 + 2 + 2 + sizes + shares);
    let texts = column(0, "term", room.saturating_sub(8).max(8));
    let scales = column(1, "scale", room.saturating_sub(texts).max(8));
    let mut line = |row: [&str; 4]| {
        let text = format!(
            "  {}  {}  {}  {}",
            padded(&cut(row[0], texts), texts),
            padded(&cut(row[1], scales), scales),
            padded(row[2], sizes),
            row[3]
        );
        let _ = writeln!(out, "{}", text.trim_end());
    };
    line(["term", "scale", &size_title, "share"]);
    for row in &rows {
        line([&row[0], &row[1], &row[2], &row[3]]);
    }
}

fn below(term: &RankedTerm) -> String {
    match term.below_parts {
        Some(ratio) if ratio < 1.0 => format!(", {} of its parts", percent(ratio)),
        Some(_) | None => String::new(),
    }
}

// Reduced equations ---------------------------------------------------------------------------

fn reduce(reduction: &Reduction, pen: &Pen, out: &mut String) {
    for equation in &reduction.equations {
        reduced(equation, pen, out);
    }
    if !reduction.undetermined.is_empty() {
        let text = words::undetermined(&reduction.undetermined);
        out.push_str(&wrapped("warning   ", &text));
        out.push('\n');
    }
}

fn reduced(equation: &ReducedEquation, pen: &Pen, out: &mut String) {
    equation_head(&equation.name, equation.title.as_ref(), "", equation.tolerance, pen, out);
    let order = match (&equation.balance, equation.by_construction) {
        (Some(name), true) => format!("{name}, by construction: derived scales put this balance in"),
        (Some(name), false) => name.clone(),
        (None, true) => "unnamed, by construction: derived scales put this balance in".to_owned(),
        (None, false) => "unnamed".to_owned(),
    };
    out.push_str(&wrapped("  leading order  ", &order));
    out.push_str(&wrapped("      ", &equation.reduced));
    depends(equation, out);
    dropped(equation, out);
    if let Some(text) = &equation.first_neglected {
        let sum = format!(
            "at most {} of the largest term ({text}, the first neglected term), {} in all",
            percent(equation.error),
            percent(equation.error_sum)
        );
        out.push_str(&wrapped("  error    ", &sum));
    }
    kinds(equation, out);
    for warning in words::warnings(equation) {
        let label = padded(&format!("  {}", warning.severity.word()), 11);
        out.push_str(&wrapped(&label, &warning.message));
    }
    out.push('\n');
}

fn depends(equation: &ReducedEquation, out: &mut String) {
    let mut conditions: Vec<(String, Vec<&str>)> = Vec::new();
    for term in equation.kept.iter().filter(|term| term.verdict == Verdict::Depends) {
        let condition = words::condition_with_values(term);
        match conditions.iter_mut().find(|(found, _)| *found == condition) {
            Some((_, texts)) => texts.push(&term.text),
            None => conditions.push((condition, vec![&term.text])),
        }
    }
    for (condition, texts) in conditions {
        let text = match condition.as_str() {
            "" => texts.join(", "),
            condition => format!("{}: may go where {condition}", texts.join(", ")),
        };
        out.push_str(&wrapped("  depends  ", &text));
    }
}

fn dropped(equation: &ReducedEquation, out: &mut String) {
    let mut terms: Vec<&ReducedTerm> = equation.dropped.iter().collect();
    terms.sort_by(|a, b| b.share.high.total_cmp(&a.share.high));
    let texts: Vec<String> = terms
        .iter()
        .map(|term| format!("{} {}", term.text, percent(term.share.high)))
        .collect();
    let text = if texts.is_empty() { "nothing".to_owned() } else { texts.join(", ") };
    out.push_str(&wrapped("  dropped  ", &text));
}

fn kinds(equation: &ReducedEquation, out: &mut String) {
    let of = |wanted: Kind| -> Vec<&str> {
        let kinds = equation.kinds.iter().filter(|(_, kind)| *kind == wanted);
        kinds.map(|(field, _)| field.as_str()).collect()
    };
    let mut texts = Vec::new();
    for (kind, word) in [(Kind::Prognostic, "prognostic"), (Kind::Diagnostic, "diagnostic")] {
        let fields = of(kind);
        if !fields.is_empty() {
            texts.push(format!("{} {word}", fields.join(", ")));
        }
    }
    if !texts.is_empty() {
        out.push_str(&wrapped("  fields   ", &texts.join("; ")));
    }
}

// Claims --------------------------------------------------------------------------------------

fn claims(claims: &[Held], pen: &Pen, out: &mut String) {
    if claims.is_empty() {
        return;
    }
    let _ = writeln!(out, "{}", pen.head("claims"));
    for claim in claims {
        let claim_text = claim.text.strip_prefix("claim ").unwrap_or(&claim.text);
        let text = match (&claim.phenomenon, claim_text.contains(" for ")) {
            (Some(name), false) => format!("{claim_text} for {name}"),
            _ => claim_text.to_owned(),
        };
        let label = if claim.met { "  met      " } else { "  not met  " };
        let block = wrapped(label, &text);
        out.push_str(&if claim.met { block } else { pen.alarm(block.trim_end()) + "\n" });
        if !claim.met {
            out.push_str(&wrapped("           ", &unmet_words(claim)));
        }
    }
    let n_met = claims.iter().filter(|claim| claim.met).count();
    let _ = writeln!(out, "{} claims: {n_met} met, {} not met", claims.len(), claims.len() - n_met);
}

fn unmet_words(claim: &Held) -> String {
    let mut text = words::measured(claim);
    if let Some(miss) = claim.miss {
        let _ = write!(text, "; misses by a factor {}", number(miss));
    }
    if !claim.mends.is_empty() {
        let _ = write!(text, "; would hold with {}", words::mends(&claim.mends));
    }
    text
}
