//! The stratified current of the Varn coast: dimensionless equations in declared groups.

use std::collections::BTreeMap;

use crate::harness::{answers, answers_to, list, read, schema_faults, sorted_map, text};

#[test]
fn coefficients_are_declared_groups_alone() {
    let output = answers(&read("inputs/stratified.scl"));
    assert_eq!(output["outcome"], "ok", "{}", output["diagnostics"]);
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    let equations = list(&answers_to(&output, "nondimensionalize")[0]["equations"]);
    let found: BTreeMap<String, String> = equations
        .iter()
        .map(|equation| (text(&equation["name"]), text(&equation["text"])))
        .collect();
    let expected = [
        (
            "x_momentum",
            "Ro*(∂u/∂t + u*∂u/∂x + v*∂u/∂y + w*∂u/∂z) - v = -∂p/∂x + Ek*∂²u/∂z²",
        ),
        (
            "y_momentum",
            "Ro*(∂v/∂t + u*∂v/∂x + v*∂v/∂y + w*∂v/∂z) + u = -∂p/∂y + Ek*∂²v/∂z²",
        ),
        (
            "z_momentum",
            "Ro*aspect^2*(∂w/∂t + u*∂w/∂x + v*∂w/∂y + w*∂w/∂z) = -∂p/∂z + b + Ek*aspect^2*∂²w/∂z²",
        ),
        (
            "heat",
            "Ro/Bu*(∂b/∂t + u*∂b/∂x + v*∂b/∂y + w*∂b/∂z) + w = Ek/(Bu*Pr)*∂²b/∂z²",
        ),
        (
            "salt",
            "∂s/∂t + u*∂s/∂x + v*∂s/∂y + w*∂s/∂z = Ek/(Ro*Pr)*∂²s/∂z²",
        ),
        ("volume", "∂u/∂x + ∂v/∂y + ∂w/∂z = 0"),
    ];
    let expected = expected.map(|(name, text)| (name.to_owned(), text.to_owned()));
    assert_eq!(found, BTreeMap::from(expected));
    for term in equations
        .iter()
        .flat_map(|equation| list(&equation["terms"]))
    {
        let coefficient = &term["coefficient"];
        let number = text(&coefficient["number"]);
        assert!(number == "1" || number == "-1", "{term}");
        let groups = sorted_map(&coefficient["groups"]);
        assert!(coefficient["groups"].is_object(), "{term}");
        let known = ["Ro", "Bu", "Ek", "Pr", "aspect"];
        assert!(
            groups.keys().all(|name| known.contains(&name.as_str())),
            "{term}"
        );
    }
}
