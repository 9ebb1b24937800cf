//! `bounds` as a sheet.

use crate::analysis::bounds::{Bound, Bounds, End};
use crate::report::layout::percent;
use crate::report::sheets::{Block, Line, Piece, formula, head, labelled, numbers, words};
use crate::report::{standing, words};

/// Where a reduced system stands.
pub(super) fn bounds(bounds: &Bounds) -> Vec<Block> {
    let nearest = standing::nearest(bounds);
    let nearest = nearest.unwrap_or_else(|| "no scale alone ends it".to_owned());
    let mut blocks = vec![labelled(
        "Nearest way out",
        format!("{nearest}. Tolerance {}.", percent(bounds.tolerance)),
    )];
    if !bounds.scales.is_empty() {
        let columns = [
            ("scale", 0.1),
            ("now", 0.16),
            ("side", 0.18),
            ("to", 0.16),
            ("factor", 0.1),
            ("then", 0.3),
        ];
        let rows = bounds.scales.iter().flat_map(ends).collect();
        blocks.push(Block::Table(head(&columns), rows));
    }
    for (title, conditions) in [
        (
            "It stands while all of these hold:",
            standing::needed(&bounds.conditions),
        ),
        (
            "Where one of these holds, more may go:",
            standing::may_go(&bounds.conditions),
        ),
    ] {
        if conditions.is_empty() {
            continue;
        }
        blocks.push(Block::Paragraph(words(title)));
        let columns = [("condition", 0.45), ("what rests on it", 0.55)];
        let rows = conditions
            .into_iter()
            .map(|(text, rests)| vec![condition(&text), words(rests)]);
        blocks.push(Block::Table(head(&columns), rows.collect()));
    }
    for text in standing::left_out(&bounds.dropped) {
        blocks.push(labelled("Left out", format!("{text}.")));
    }
    let ranges = words::capital(&standing::box_words(bounds));
    blocks.push(labelled("Ranges", format!("{ranges}.")));
    for place in &bounds.lone {
        blocks.push(labelled(
            "Warning",
            standing::left_out_lone(place).replace('`', ""),
        ));
    }
    blocks
}

fn ends(bound: &Bound) -> Vec<Vec<Line>> {
    let row = |side: &str, end: Option<&End>| {
        let [value, factor, then] = standing::end(bound, end);
        vec![
            formula(bound.name.clone()),
            numbers(standing::value(bound, bound.nominal)),
            words(side),
            numbers(value),
            numbers(factor),
            words(then),
        ]
    };
    vec![
        row("changes below", bound.unchanged.low.as_ref()),
        row("stands down to", bound.stands.low.as_ref()),
        row("changes above", bound.unchanged.high.as_ref()),
        row("stands up to", bound.stands.high.as_ref()),
    ]
}

/// `Ro <= 0.1 (now 0.05)`: its ratio as a formula, the rest as numbers.
fn condition(text: &str) -> Line {
    match text.split_once(" <= ") {
        Some((ratio, rest)) => vec![
            Piece::Formula(ratio.to_owned()),
            Piece::Numbers(format!(" ≤ {rest}")),
        ],
        None => numbers(text),
    }
}
