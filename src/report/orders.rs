//! What the reports of `expand` say in words, whatever they set it in.

use crate::analysis::hierarchy::{Hierarchy, Order, OrderEquation, Solvability};
use crate::report::layout::number;

/// Stands between a condition and the form that it comes from.
pub const BEFORE: &str = "before the fields that the leading order gives are put in:";

/// Stands before equations that look otherwise with dimensions.
pub const WITH_DIMENSIONS: &str = "with dimensions";

/// What is small and how the other groups go with it, each with its value:
/// `Ro -> 0 (now 0.05), Bu ~ 1 (now 0.8), Ek ~ Ro^2 (now 0.001)`.
pub fn small(hierarchy: &Hierarchy) -> String {
    let small = &hierarchy.small;
    let value = number(hierarchy.value);
    match hierarchy.has_limit {
        true => format!("{small} -> 0 (now {value}){}", others(hierarchy)),
        false => format!("{small}, the largest ratio of what is split, {value}"),
    }
}

/// That what goes to 0 is not small at these values.
pub fn not_small(hierarchy: &Hierarchy) -> Option<String> {
    let is_small = hierarchy.value < 1.0 / 10_f64.sqrt();
    (!is_small).then(|| {
        format!(
            "{} is {} at these values, which is not small: the orders are exact, but the first \
             ones are no approximation here",
            hierarchy.small,
            number(hierarchy.value)
        )
    })
}

/// What an order without series adds to the sides of an equation: `+ d_x(eta*u)`.
pub fn added(equation: &str) -> Vec<(&'static str, String)> {
    let (left, right) = equation.split_once(" = ").unwrap_or((equation, "0"));
    let sides = [("left", left), ("right", right)].into_iter();
    let sides = sides.filter(|(_, side)| *side != "0");
    sides
        .map(|(name, side)| match side.strip_prefix('-') {
            Some(side) => (name, format!("- {side}")),
            None => (name, format!("+ {side}")),
        })
        .collect()
}

/// Whether an order only adds to the equations below it.
pub fn adds(hierarchy: &Hierarchy, order: &Order) -> bool {
    !hierarchy.has_limit && !order.order.is_zero()
}

/// Equations that look otherwise with dimensions, and whether there are others.
pub fn with_dimensions(equations: &[OrderEquation]) -> (Vec<&OrderEquation>, bool) {
    let differ = |equation: &&OrderEquation| equation.dimensional != equation.text;
    let own: Vec<&OrderEquation> = equations.iter().filter(differ).collect();
    let has_others = !own.is_empty() && own.len() < equations.len();
    (own, has_others)
}

fn others(hierarchy: &Hierarchy) -> String {
    let small = &hierarchy.small;
    let base = match small.chars().all(|c| c.is_alphanumeric() || c == '_') {
        true => small.clone(),
        false => format!("({small})"),
    };
    let others = hierarchy.placed.iter().filter(|group| group.name != *small);
    let texts: Vec<String> = others
        .map(|group| {
            let like = match group.power.to_string().as_str() {
                "0" => "1".to_owned(),
                "1" => base.clone(),
                power if power.contains('/') => format!("{base}^({power})"),
                power => format!("{base}^{power}"),
            };
            format!(", {} ~ {like} (now {})", group.name, number(group.value))
        })
        .collect();
    texts.concat()
}

/// The heading of an order.
pub fn order(hierarchy: &Hierarchy, order: &Order) -> String {
    match order.order.to_string() {
        power if power == "0" => "order 0, the leading order".to_owned(),
        power if adds(hierarchy, order) => format!("order {power} adds"),
        power => format!("order {power}"),
    }
}

/// What is known of whether the leading order determines its fields, or why nothing is.
pub fn solvability(hierarchy: &Hierarchy) -> String {
    let (undetermined, conditions) = match &hierarchy.solvability {
        Solvability::NotLooked if hierarchy.has_limit => {
            return "the leading order is not linear with constant coefficients: whether it \
                 determines its fields is not looked for"
                .to_owned();
        }
        Solvability::NotLooked => {
            return "without a `limit` the fields are no series: each order adds its terms to \
                 those of the orders below it"
                .to_owned();
        }
        Solvability::Looked {
            undetermined,
            conditions,
        } => (undetermined, conditions),
    };
    let open = match undetermined.is_empty() {
        true => "the leading order of these equations determines its fields".to_owned(),
        false => format!(
            "the leading order of these equations does not determine {}",
            undetermined.join(", ")
        ),
    };
    match (undetermined.is_empty(), conditions.is_empty()) {
        (true, true) => open,
        (false, true) => format!("{open}, and the orders asked for give no condition on it"),
        (_, false) => format!("{open}; a later order can be solved only where"),
    }
}
