//! `expand` for a terminal.

use crate::analysis::hierarchy::{Hierarchy, OrderEquation, Solvability};
use crate::report::layout::{wrapped, wrapped_equation};
use crate::report::text::Pen;

/// Writes a hierarchy.
pub(super) fn expand(hierarchy: &Hierarchy, pen: &Pen, out: &mut String) {
    let small = &hierarchy.small;
    let line = match hierarchy.has_limit {
        true => format!("{small} -> 0{}", placed(hierarchy)),
        false => format!("{small}, the largest ratio of what is split"),
    };
    out.push_str(&wrapped("small  ", &line));
    out.push('\n');
    for order in &hierarchy.orders {
        let power = match order.order.to_string() {
            power if power == "0" => "order 0, the leading order".to_owned(),
            power => format!("order {power}"),
        };
        out.push_str(&pen.head(&power));
        out.push('\n');
        if order.equations.is_empty() {
            out.push_str("  nothing\n");
        }
        for equation in &order.equations {
            write_equation(equation, out);
        }
        out.push('\n');
    }
    solvability(hierarchy, pen, out);
}

/// The other groups with their powers: `, Bu ~ 1, Ek ~ Ro^2`.
fn placed(hierarchy: &Hierarchy) -> String {
    let small = &hierarchy.small;
    let base = match small.chars().all(|c| c.is_alphanumeric() || c == '_') {
        true => small.clone(),
        false => format!("({small})"),
    };
    let others = hierarchy.placed.iter().filter(|(name, _)| name != small);
    let texts: Vec<String> = others
        .map(|(name, power)| match power.to_string().as_str() {
            "0" => format!(", {name} ~ 1"),
            "1" => format!(", {name} ~ {base}"),
            power if power.contains('/') => format!(", {name} ~ {base}^({power})"),
            power => format!(", {name} ~ {base}^{power}"),
        })
        .collect();
    texts.concat()
}

fn write_equation(equation: &OrderEquation, out: &mut String) {
    out.push_str(&format!("  {}\n", equation.name));
    out.push_str(&wrapped_equation("      ", &equation.text));
    if equation.dimensional != equation.text {
        out.push_str(&wrapped_equation("    = ", &equation.dimensional));
    }
}

fn solvability(hierarchy: &Hierarchy, pen: &Pen, out: &mut String) {
    let text = match &hierarchy.solvability {
        Solvability::NotLooked if hierarchy.has_limit => {
            "the leading order is not linear with constant coefficients: whether it \
             determines its fields is not looked for"
        }
        Solvability::NotLooked => return,
        Solvability::Looked { undetermined, .. } if undetermined.is_empty() => {
            "the leading order determines its fields"
        }
        Solvability::Looked {
            undetermined,
            conditions,
        } => {
            let fields = undetermined.join(", ");
            let text = match conditions.is_empty() {
                true => format!(
                    "the leading order does not determine {fields}, and the next order gives \
                     no condition on it"
                ),
                false => format!(
                    "the leading order does not determine {fields}; the next order can be \
                     solved only where"
                ),
            };
            out.push_str(&pen.head("solvability"));
            out.push('\n');
            out.push_str(&wrapped("  ", &text));
            for condition in conditions {
                write_equation(condition, out);
            }
            out.push('\n');
            return;
        }
    };
    out.push_str(&wrapped("note   ", text));
    out.push('\n');
}
