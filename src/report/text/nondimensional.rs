//! `nondimensionalize` for a terminal.

use crate::analysis::nondimensional::{DimensionlessEquation, DimensionlessTerm, Measure};
use crate::report::dimensionless;
use crate::report::layout::{WIDTH, cut, padded, range, width, wrapped, wrapped_equation};
use crate::report::text::Pen;

/// Writes an equation with its coefficients, and what its variables are measured by.
pub(super) fn equation(equation: &DimensionlessEquation, pen: &Pen, out: &mut String) {
    let title = match &equation.title {
        Some(title) => format!("{}, {title}", equation.name),
        None => equation.name.clone(),
    };
    out.push_str(&pen.head(&cut(&title, WIDTH)));
    out.push('\n');
    out.push_str(&wrapped_equation(
        "      ",
        &dimensionless::equation(equation),
    ));
    let divisor = if equation.by == equation.by_scale {
        equation.by.clone()
    } else {
        format!("{} ~ {}", equation.by, equation.by_scale)
    };
    out.push_str(&wrapped("  divided by   ", &divisor));
    coefficients(&equation.terms, out);
    if !equation.measures.is_empty() {
        out.push_str(&wrapped("  measured in  ", &measures(&equation.measures)));
    }
    out.push('\n');
}

/// Each coefficient once, with its value and the processes that have it.
fn coefficients(terms: &[DimensionlessTerm], out: &mut String) {
    let mut rows: Vec<(String, String, Vec<&str>)> = Vec::new();
    for term in terms {
        let amount = dimensionless::amount(&term.coefficient);
        let label = term.process.as_deref().unwrap_or(&term.text);
        match rows.iter_mut().find(|(found, ..)| *found == amount) {
            Some((_, _, labels)) if labels.contains(&label) => {}
            Some((_, _, labels)) => labels.push(label),
            None => {
                let scales = dimensionless::in_scales(&term.coefficient)
                    .filter(|scales| *scales != amount)
                    .map(|scales| format!(" = {scales}"));
                let value = range(&term.coefficient.value.abs());
                let value = if value == amount {
                    String::new()
                } else {
                    format!(" = {value}")
                };
                rows.push((amount, scales.unwrap_or_default() + &value, vec![label]));
            }
        }
    }
    let widest = rows.iter().map(|(amount, ..)| width(amount)).max();
    let widest = widest.unwrap_or(0).min(24);
    for (amount, value, labels) in rows {
        let label = match width(&amount) <= widest {
            true => format!("  {}  ", padded(&amount, widest)),
            // A long one has a line of its own.
            false => {
                out.push_str(&format!("  {amount}\n"));
                " ".repeat(widest + 4)
            }
        };
        let text = format!("{}: {}", value.trim_start_matches(" = "), labels.join(", "));
        out.push_str(&wrapped(&label, text.trim_start_matches(": ")));
    }
}

/// `x, y by L; u, v by U; T by T_0, varying by dT`.
fn measures(measures: &[Measure]) -> String {
    let mut sets: Vec<(Vec<&str>, String)> = Vec::new();
    for measure in measures {
        let text = measure_words(measure);
        match sets.iter_mut().find(|(_, found)| *found == text) {
            Some((names, _)) => names.push(&measure.name),
            None => sets.push((vec![&measure.name], text)),
        }
    }
    let texts = sets
        .iter()
        .map(|(names, text)| format!("{} by {text}", names.join(", ")));
    texts.collect::<Vec<_>>().join("; ")
}

fn measure_words(measure: &Measure) -> String {
    let mut text = measure.size.clone();
    if !measure.varying.is_empty() {
        text.push_str(&format!(", varying by {}", measure.varying.join(" or ")));
    }
    for (coordinate, length) in &measure.lengths {
        text.push_str(&format!(", over {length} along {coordinate}"));
    }
    text
}
