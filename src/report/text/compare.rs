//! `compare` for a terminal.

use std::fmt::Write as _;

use crate::analysis::compare::{
    ComparedEquation, ComparedGroup, ComparedProcess, ComparedScale, Comparison,
};
use crate::report::layout::{WIDTH, cut, number, percent, quantity, unit, wrapped};
use crate::report::text::Pen;
use crate::report::text::columns::{Row, columns};
use crate::report::{standing, words};
use crate::units::Range;

/// Writes phenomena side by side.
pub(super) fn compare(comparison: &Comparison, pen: &Pen, out: &mut String) {
    for (name, title) in comparison.phenomena.iter().zip(&comparison.titles) {
        if let Some(title) = title {
            out.push_str(&wrapped("  ", &format!("{name}: {title}")));
        }
    }
    if comparison.titles.iter().any(Option::is_some) {
        out.push('\n');
    }
    let mut section = |title: &str, rows: &[Row]| {
        if !rows.is_empty() {
            let _ = writeln!(out, "{}", pen.head(title));
            out.push_str(&columns(&comparison.phenomena, rows));
            out.push('\n');
        }
    };
    let rows: Vec<Row> = comparison.scales.iter().map(scale).collect();
    section("scales and constants", &rows);
    let rows: Vec<Row> = comparison.groups.iter().map(group).collect();
    let title = format!(
        "groups (a match is within {})",
        percent(comparison.tolerance)
    );
    section(&title, &rows);
    for equation in &comparison.equations {
        section(&head(equation), &processes(equation));
    }
    for equation in &comparison.equations {
        reduced(comparison, equation, out);
    }
    if let Some(matching) = &comparison.matching {
        out.push_str(&wrapped("match    ", &standing::matching(matching)));
        out.push('\n');
    }
}

fn scale(scale: &ComparedScale) -> Row {
    let cell = |(value, written): (&Option<Range>, &Option<String>)| match value {
        Some(value) => words::in_unit(value, &scale.unit, written.as_ref()),
        None => "-".to_owned(),
    };
    let values = scale.values.iter().zip(&scale.written_units);
    Row {
        label: scale.name.clone(),
        cells: values.map(cell).collect(),
        note: String::new(),
    }
}

fn group(group: &ComparedGroup) -> Row {
    Row {
        label: group.name.clone(),
        cells: group
            .values
            .iter()
            .map(|value| quantity(value, "1"))
            .collect(),
        note: if group.is_match { "match" } else { "differ" }.to_owned(),
    }
}

fn head(equation: &ComparedEquation) -> String {
    let mut text = equation.name.clone();
    if let Some(title) = &equation.title {
        let _ = write!(text, ", {title}");
    }
    match unit(&equation.unit) {
        unit if unit.is_empty() => {}
        unit => {
            let _ = write!(text, ", {unit}");
        }
    }
    cut(&text, WIDTH)
}

fn processes(equation: &ComparedEquation) -> Vec<Row> {
    let mut rows: Vec<Row> = equation.processes.iter().map(process).collect();
    let balance = |name: &Option<String>| name.clone().unwrap_or_else(|| "unnamed".to_owned());
    rows.push(Row {
        label: "= balance".to_owned(),
        cells: equation.balances.iter().map(balance).collect(),
        note: String::new(),
    });
    rows
}

fn process(process: &ComparedProcess) -> Row {
    let cells = (0..process.sizes.len()).map(|idx| {
        if process.sizes[idx].nominal == 0.0 {
            return "not there".to_owned();
        }
        format!(
            "{} {}, size {}",
            words::shares(&process.shares[idx]),
            process.verdicts[idx].word(),
            number(process.sizes[idx].nominal)
        )
    });
    Row {
        label: process.process.clone(),
        cells: cells.collect(),
        note: String::new(),
    }
}

/// The reduced equation, once where all have the same.
fn reduced(comparison: &Comparison, equation: &ComparedEquation, out: &mut String) {
    let Some(first) = equation.reduced.first() else {
        return;
    };
    let _ = writeln!(
        out,
        "{}",
        cut(&format!("{}, reduced", equation.name), WIDTH)
    );
    if equation.reduced.iter().all(|text| text == first) {
        out.push_str(&wrapped("  for all: ", first));
    } else {
        for (name, text) in comparison.phenomena.iter().zip(&equation.reduced) {
            let label = format!("  {name}: ");
            if label.chars().count() > 24 {
                out.push_str(&wrapped(&label, ""));
                out.push_str(&wrapped("      ", text));
            } else {
                out.push_str(&wrapped(&label, text));
            }
        }
    }
    out.push('\n');
}
