//! `expand` for a terminal.

use crate::analysis::hierarchy::{Condition, Hierarchy, OrderEquation, Solvability};
use crate::report::layout::{width, wrapped, wrapped_equation, wrapped_words};
use crate::report::orders;
use crate::report::text::Pen;

/// Names up to this wide stand beside their equations.
const LABEL: usize = 16;

/// Writes a hierarchy.
pub(super) fn expand(hierarchy: &Hierarchy, pen: &Pen, out: &mut String) {
    let small = orders::small(hierarchy).replace(", ", ",\n");
    let small: Vec<String> = small.lines().map(str::to_owned).collect();
    out.push_str(&wrapped_words("small  ", &small));
    if let Some(text) = orders::not_small(hierarchy) {
        out.push_str(&wrapped("note   ", &text));
    }
    out.push('\n');
    for order in &hierarchy.orders {
        out.push_str(&pen.head(&orders::order(hierarchy, order)));
        out.push('\n');
        if order.equations.is_empty() {
            out.push_str("    nothing\n");
        }
        match orders::adds(hierarchy, order) {
            true => write_added(&order.equations, out),
            false => write_equations(&order.equations, out),
        }
        out.push('\n');
    }
    let text = orders::solvability(hierarchy);
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
    let shown = condition.simplified.as_ref().unwrap_or(&condition.equation);
    write_equations(std::slice::from_ref(shown), out);
    if condition.simplified.is_some() {
        out.push_str(&wrapped("  ", orders::BEFORE));
        out.push_str(&line(&condition.equation.name, &condition.equation.text, 0));
    }
}

/// The equations without dimensions, then those that look otherwise with them.
fn write_equations(equations: &[OrderEquation], out: &mut String) {
    let names = equations.iter().map(|equation| width(&equation.name));
    let column = names.filter(|width| *width <= LABEL).max().unwrap_or(0);
    for equation in equations {
        out.push_str(&line(&equation.name, &equation.text, column));
    }
    let (with_dimensions, has_others) = orders::with_dimensions(equations);
    if !with_dimensions.is_empty() {
        let others = if has_others {
            ", the others as above"
        } else {
            ""
        };
        out.push_str(&format!("  {}{others}\n", orders::WITH_DIMENSIONS));
    }
    for equation in with_dimensions {
        out.push_str(&line(&equation.name, &equation.dimensional, column));
    }
}

/// What an order adds to the sides of the equations.
fn write_added(equations: &[OrderEquation], out: &mut String) {
    for equation in equations {
        out.push_str(&format!("    {}\n", equation.name));
        for (side, text) in orders::added(&equation.text) {
            out.push_str(&wrapped_equation(&format!("      {side:<7}"), &text));
        }
        if equation.dimensional != equation.text {
            out.push_str(&format!("      {}\n", orders::WITH_DIMENSIONS));
            for (side, text) in orders::added(&equation.dimensional) {
                out.push_str(&wrapped_equation(&format!("      {side:<7}"), &text));
            }
        }
    }
}

/// An equation behind its name; a long name has a line of its own.
fn line(name: &str, equation: &str, column: usize) -> String {
    if width(name) > LABEL {
        return format!("    {name}\n{}", wrapped_equation("        ", equation));
    }
    let gap = " ".repeat(column.saturating_sub(width(name)) + 2);
    wrapped_equation(&format!("    {name}{gap}"), equation)
}
