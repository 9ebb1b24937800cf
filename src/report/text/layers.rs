//! `layers` for a terminal.

use crate::analysis::layers::{Layer, Layers};
use crate::report::layout::{number, padded, quantity, range, wrapped};
use crate::report::text::Pen;
use crate::report::{conditions, words};

/// Writes all thin layers, those of one thickness together.
pub(super) fn layers(found: &Layers, pen: &Pen, out: &mut String) {
    if found.layers.is_empty() {
        let text = "no thin layer: no highest derivative is dropped that a layer could bring back";
        out.push_str(&wrapped("", text));
        out.push('\n');
        return;
    }
    let groups = groups(found);
    for (idx, group) in groups.iter().enumerate() {
        write_group(group, idx, &groups, found, pen, out);
    }
    let text =
        "All other sizes are those outside; a layer in which they change is asked with `find`.";
    out.push_str(&wrapped("", text));
    out.push('\n');
}

/// Places of layers with one coordinate and one formula; adjustments in time come last.
fn groups(found: &Layers) -> Vec<Vec<usize>> {
    let mut groups: Vec<Vec<usize>> = Vec::new();
    for (idx, layer) in found.layers.iter().enumerate() {
        let alike = |group: &&mut Vec<usize>| {
            let first = &found.layers[group[0]];
            first.coordinate == layer.coordinate && first.formula == layer.formula
        };
        match groups.iter_mut().find(alike) {
            Some(group) => group.push(idx),
            None => groups.push(vec![idx]),
        }
    }
    groups.sort_by_key(|group| found.layers[group[0]].coordinate == "t");
    groups
}

fn write_group(
    group: &[usize],
    idx: usize,
    groups: &[Vec<usize>],
    found: &Layers,
    pen: &Pen,
    out: &mut String,
) {
    let first = &found.layers[group[0]];
    let is_time = first.coordinate == "t";
    let head = match first.coordinate.as_str() {
        "t" => format!("{}  fast adjustment in time", idx + 1),
        along => format!("{}  thin layer along {along}", idx + 1),
    };
    out.push_str(&format!("{}\n", pen.head(&head)));
    let size = format!(
        "{} = {}, {} of {}",
        words::formula(&first.formula),
        quantity(&first.value, &first.unit),
        range(&first.ratio),
        words::factors(&first.outer)
    );
    let word = if is_time { "time" } else { "thickness" };
    row(word, &size, out);
    if let Some(around) = first.inside {
        let outer = &found.layers[around];
        let times = number(outer.value.nominal / first.value.nominal);
        let long = if is_time { "long" } else { "thick" };
        let place = groups.iter().position(|group| group.contains(&around));
        let place = place.map_or(0, |place| place + 1);
        row("within", &format!("{place}, {times} times as {long}"), out);
    }
    for idx in group {
        write_layer(&found.layers[*idx], out);
    }
    out.push('\n');
}

fn row(word: &str, text: &str, out: &mut String) {
    out.push_str(&wrapped(&format!("  {}  ", padded(word, 9)), text));
}

fn write_layer(layer: &Layer, out: &mut String) {
    row("in", &layer.equation, out);
    let inside = layer.balance.join(" ~ ");
    match &layer.name {
        Some(name) => row("  inside", &format!("{inside} ({name})"), out),
        None => row("  inside", &inside, out),
    }
    row("  outside", &outside(layer), out);
    if !layer.whole_box {
        let texts: Vec<String> = (layer.conditions.iter())
            .map(conditions::with_value)
            .collect();
        row("  stands", &format!("where {}", texts.join(" and ")), out);
    }
}

/// What balances outside a layer.
pub(in crate::report) fn outside(layer: &Layer) -> String {
    match layer.outer_balance.as_slice() {
        [] => "no process leads over all ranges".to_owned(),
        [single] => format!("{single} alone, so it vanishes there"),
        several => several.join(" ~ "),
    }
}
