//! `layers` as a sheet.

use crate::analysis::layers::{Layer, Layers};
use crate::report::layout::{quantity, range};
use crate::report::sheets::{Block, Line, formula, head, numbers, words};
use crate::report::text;
use crate::report::{conditions, words};

/// All thin layers.
pub(super) fn layers(found: &Layers) -> Vec<Block> {
    if found.layers.is_empty() {
        return vec![Block::Paragraph(words(
            "No thin layer: no highest derivative is dropped that a layer could bring back.",
        ))];
    }
    let columns = [
        ("equation", 0.16),
        ("along", 0.08),
        ("thickness", 0.16),
        ("value", 0.2),
        ("of the outer scale", 0.14),
        ("inside, and outside", 0.26),
    ];
    let rows = found.layers.iter().map(layer_row).collect();
    vec![
        Block::Table(head(&columns), rows),
        Block::Paragraph(words(
            "All other sizes are those outside; a layer in which they change is asked with find.",
        )),
    ]
}

fn layer_row(layer: &Layer) -> Vec<Line> {
    let name = layer.name.as_ref().map(|name| format!(" ({name})"));
    let mut balance = format!(
        "{}{}; outside {}",
        layer.balance.join(" ~ "),
        name.unwrap_or_default(),
        text::layers::outside(layer)
    );
    if !layer.whole_box {
        let conditions = layer.conditions.iter();
        let texts: Vec<String> = conditions
            .map(|found| conditions::with_value(found).replace("<=", "≤"))
            .collect();
        balance.push_str(&format!("; stands where {}", texts.join(" and ")));
    }
    vec![
        words(layer.equation.clone()),
        formula(layer.coordinate.clone()),
        formula(words::formula(&layer.formula)),
        numbers(quantity(&layer.value, &layer.unit)),
        numbers(range(&layer.ratio)),
        words(balance),
    ]
}
