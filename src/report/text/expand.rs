//! `expand` for a terminal.

use crate::analysis::hierarchy::{Condition, Hierarchy, OrderEquation, Solvability};
use crate::report::layout::{wrapped, wrapped_equation};
use crate::report::orders;
use crate::report::text::Pen;

/// Writes a hierarchy.
pub(super) fn expand(hierarchy: &Hierarchy, pen: &Pen, out: &mut String) {
    out.push_str(&wrapped("small  ", &orders::small(hierarchy)));
    out.push('\n');
    for order in &hierarchy.orders {
        out.push_str(&pen.head(&orders::order(order)));
        out.push('\n');
        if order.equations.is_empty() {
            out.push_str("  nothing\n");
        }
        for equation in &order.equations {
            write_equation(equation, out);
        }
        out.push('\n');
    }
    let Some(text) = orders::solvability(hierarchy) else {
        return;
    };
    match &hierarchy.solvability {
        Solvability::Looked { conditions, .. } if !conditions.is_empty() => {
            out.push_str(&pen.head("solvability"));
            out.push('\n');
            out.push_str(&wrapped("  ", &text));
            for condition in conditions {
                write_condition(condition, out);
            }
        }
        Solvability::Looked { .. } | Solvability::NotLooked => {
            out.push_str(&wrapped("note   ", &text));
        }
    }
    out.push('\n');
}

/// The simple form first; the other shows where it comes from.
fn write_condition(condition: &Condition, out: &mut String) {
    let Some(simplified) = &condition.simplified else {
        return write_equation(&condition.equation, out);
    };
    write_equation(simplified, out);
    out.push_str(&wrapped("    ", orders::BEFORE));
    out.push_str(&wrapped_equation("      ", &condition.equation.text));
}

fn write_equation(equation: &OrderEquation, out: &mut String) {
    out.push_str(&format!("  {}\n", equation.name));
    out.push_str(&wrapped_equation("      ", &equation.text));
    if equation.dimensional != equation.text {
        out.push_str(&wrapped_equation("    = ", &equation.dimensional));
    }
}
