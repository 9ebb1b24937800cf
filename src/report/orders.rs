//! What the reports of `expand` say in words, whatever they set it in.

use crate::analysis::hierarchy::{Hierarchy, Order, Solvability};

/// Stands between a condition and the form that it comes from.
pub const BEFORE: &str = "before the fields that the leading order gives are put in:";

/// Stands before equations that look otherwise with dimensions.
pub const WITH_DIMENSIONS: &str = "with dimensions";

/// What is small and how the other groups go with it: `Ro -> 0, Bu ~ 1, Ek ~ Ro^2`.
pub fn small(hierarchy: &Hierarchy) -> String {
    let small = &hierarchy.small;
    match hierarchy.has_limit {
        true => format!("{small} -> 0{}", others(hierarchy)),
        false => format!("{small}, the largest ratio of what is split"),
    }
}

fn others(hierarchy: &Hierarchy) -> String {
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

/// The heading of an order.
pub fn order(order: &Order) -> String {
    match order.order.to_string() {
        power if power == "0" => "order 0, the leading order".to_owned(),
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
