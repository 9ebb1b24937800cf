//! `groups` as a sheet.

use crate::analysis::groups::Groups;
use crate::report::layout::range;
use crate::report::sheets::{Block, Line, Piece, formula, head, numbers, words};
use crate::report::text;
use crate::report::words;
use crate::units::Range;

/// The independent groups, then the named ones over them.
pub(super) fn groups(groups: &Groups) -> Vec<Block> {
    let mut blocks = vec![Block::Paragraph(words(format!(
        "{} independent groups of {}.",
        groups.independent.len(),
        groups.symbols.join(", ")
    )))];
    if !groups.independent.is_empty() {
        let columns = [
            ("name", 0.15),
            ("group", 0.4),
            ("named", 0.15),
            ("value", 0.3),
        ];
        let rows = groups.independent.iter().enumerate();
        let rows = rows.map(|(idx, group)| {
            let known = group.name.clone().map(formula).unwrap_or_default();
            vec![
                formula(format!("Pi_{}", idx + 1)),
                formula(words::factors(&group.factors)),
                known,
                value(group.value.as_ref()),
            ]
        });
        blocks.push(Block::Table(head(&columns), rows.collect()));
    }
    named(groups, &mut blocks);
    blocks.push(Block::Paragraph(words(format!(
        "{}.",
        words::capital(&text::groups::spanned(groups))
    ))));
    blocks
}

fn named(groups: &Groups, blocks: &mut Vec<Block>) {
    if groups.named.is_empty() {
        return;
    }
    let columns = [
        ("name", 0.1),
        ("what it is", 0.32),
        ("formula", 0.2),
        ("as a product", 0.16),
        ("value", 0.22),
    ];
    let rows = groups.named.iter().map(|group| {
        let product = match &group.groups {
            Some(product) => formula(words::product(&group.factors.number, product)),
            None => words("holds others"),
        };
        vec![
            formula(group.name.clone()),
            words(group.title.clone().unwrap_or_default()),
            formula(words::factors(&group.factors)),
            product,
            value(group.value.as_ref()),
        ]
    });
    blocks.push(Block::Table(head(&columns), rows.collect()));
}

fn value(value: Option<&Range>) -> Line {
    match value {
        Some(value) => numbers(range(value)),
        None => vec![Piece::Words("open".to_owned())],
    }
}
