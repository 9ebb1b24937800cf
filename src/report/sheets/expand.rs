//! `expand` as a sheet.

use crate::analysis::hierarchy::{Condition, Hierarchy, OrderEquation, Solvability};
use crate::report::orders;
use crate::report::sheets::{Block, labelled, words};
use crate::report::words::capital;

/// Each order with its equations, then what the leading order leaves open.
pub(super) fn expand(hierarchy: &Hierarchy) -> Vec<Block> {
    let mut blocks = vec![labelled("Small", orders::small(hierarchy))];
    blocks.extend(orders::not_small(hierarchy).map(|text| labelled("Note", text)));
    for order in &hierarchy.orders {
        blocks.push(labelled(&capital(&orders::order(hierarchy, order)), ""));
        if order.equations.is_empty() {
            blocks.push(Block::Paragraph(words("nothing")));
        }
        for equation in &order.equations {
            write_equation(equation, &mut blocks);
        }
    }
    let label = match &hierarchy.solvability {
        Solvability::Looked { .. } => "Solvability",
        Solvability::NotLooked => "Note",
    };
    blocks.push(labelled(label, orders::solvability(hierarchy)));
    if let Solvability::Looked { conditions, .. } = &hierarchy.solvability {
        for condition in conditions {
            write_condition(condition, &mut blocks);
        }
    }
    blocks
}

fn write_condition(condition: &Condition, blocks: &mut Vec<Block>) {
    let Some(simplified) = &condition.simplified else {
        return write_equation(&condition.equation, blocks);
    };
    write_equation(simplified, blocks);
    blocks.push(Block::Paragraph(words(capital(orders::BEFORE))));
    blocks.push(Block::Equation(condition.equation.text.clone()));
}

fn write_equation(equation: &OrderEquation, blocks: &mut Vec<Block>) {
    blocks.push(Block::Heading(equation.name.clone(), None));
    blocks.push(Block::Equation(equation.text.clone()));
    if equation.dimensional != equation.text {
        blocks.push(Block::Paragraph(words(format!(
            "{}:",
            capital(orders::WITH_DIMENSIONS)
        ))));
        blocks.push(Block::Equation(equation.dimensional.clone()));
    }
}
