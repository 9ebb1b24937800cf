//! `layers` for a terminal.

use crate::analysis::layers::{Layer, Layers};
use crate::report::layout::{number, padded, quantity, range, wrapped};
use crate::report::text::Pen;
use crate::report::words;

/// Writes all thin layers.
pub(super) fn layers(found: &Layers, pen: &Pen, out: &mut String) {
    if found.layers.is_empty() {
        let text = "no thin layer: no highest derivative is dropped that a layer could bring back";
        out.push_str(&wrapped("", text));
        out.push('\n');
        return;
    }
    for (idx, layer) in found.layers.iter().enumerate() {
        write_layer(layer, idx, found, pen, out);
    }
    let text =
        "All other sizes are those outside; a layer in which they change is asked with `find`.";
    out.push_str(&wrapped("", text));
    out.push('\n');
}

fn write_layer(layer: &Layer, idx: usize, found: &Layers, pen: &Pen, out: &mut String) {
    let mut head = format!("{}  {}", idx + 1, layer.equation);
    if let Some(title) = &layer.title {
        head.push_str(&format!(", {title}"));
    }
    let kind = match layer.coordinate.as_str() {
        "t" => ", fast adjustment in time".to_owned(),
        along => format!(", thin along {along}"),
    };
    head.push_str(&kind);
    out.push_str(&wrapped("", &head).replacen(&head, &pen.head(&head), 1));
    let mut row = |word: &str, text: &str| {
        out.push_str(&wrapped(&format!("  {}  ", padded(word, 9)), text));
    };
    let word = if layer.coordinate == "t" {
        "time"
    } else {
        "thickness"
    };
    let size = format!(
        "{} = {}, {} of {}",
        words::formula(&layer.formula),
        quantity(&layer.value, &layer.unit),
        range(&layer.ratio),
        words::factors(&layer.outer)
    );
    row(word, &size);
    let inside = layer.balance.join(" ~ ");
    match &layer.name {
        Some(name) => row("inside", &format!("{inside} ({name})")),
        None => row("inside", &inside),
    }
    row("outside", &outside(layer));
    if let Some(around) = layer.inside {
        let outer = &found.layers[around];
        let times = outer.value.nominal / layer.value.nominal;
        let text = format!("layer {}, {} times as thick", around + 1, number(times));
        row("within", &text);
    }
    if !layer.whole_box {
        let texts: Vec<String> = (layer.conditions.iter())
            .map(|condition| {
                format!(
                    "{} (now {})",
                    words::inequality(condition),
                    range(&condition.value)
                )
            })
            .collect();
        row("stands", &format!("where {}", texts.join(" and ")));
    }
    out.push('\n');
}

fn outside(layer: &Layer) -> String {
    match layer.outer_balance.as_slice() {
        [] => "no process leads over all ranges".to_owned(),
        [single] => format!("{single} alone, so it vanishes there"),
        several => several.join(" ~ "),
    }
}
