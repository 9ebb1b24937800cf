//! `limit` and `expand`: orders, forcing, what the leading order leaves open, and what is
//! refused.

use serde_json::Value;

use crate::harness::{answers, answers_to, entry, list, read, schema_faults, text};

fn output(script: &str) -> Value {
    let output = answers(script);
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    output
}

/// The answer to the one `expand` of a script.
fn expanded(script: &str) -> Value {
    let output = output(script);
    let errors: Vec<String> = list(&output["diagnostics"])
        .iter()
        .filter(|found| found["severity"] == "error")
        .map(|found| text(&found["message"]))
        .collect();
    assert_eq!(errors, Vec::<String>::new(), "{script}");
    answers_to(&output, "expand")[0].clone()
}

fn texts(answer: &Value, order: &str) -> Vec<String> {
    let order = entry(&answer["orders"], "order", order);
    let equations = list(&order["equations"]).iter();
    equations.map(|equation| text(&equation["text"])).collect()
}

/// The codes of a script's errors.
fn codes(script: &str) -> Vec<String> {
    let output = output(script);
    let found = list(&output["diagnostics"]).iter();
    let errors = found.filter(|found| found["severity"] == "error");
    errors.map(|found| text(&found["code"])).collect()
}

#[test]
fn the_shelf_of_varn_is_quasi_geostrophic() {
    let answer = expanded(&read("../stdlib/demo/qg_shelf.scl"));
    assert_eq!(answer["small"], "Ro");
    assert_eq!(
        texts(&answer, "0"),
        [
            "-v_0 = -d_x(p_0)",
            "u_0 = -d_y(p_0)",
            "0 = -d_z(p_0) + b_0",
            "d_x(u_0) + d_y(v_0) + d_z(w_0) = 0",
            "w_0 = 0",
        ]
    );
    // w_0 is 0, so it is gone from order 1.
    assert_eq!(
        texts(&answer, "1"),
        [
            "d_t(u_0) + u_0*d_x(u_0) + v_0*d_y(u_0) - v_1 - beta_star*y*v_0 = -d_x(p_1)",
            "d_t(v_0) + u_0*d_x(v_0) + v_0*d_y(v_0) + u_1 + beta_star*y*u_0 = -d_y(p_1)",
            "0 = -d_z(p_1) + b_1",
            "d_x(u_1) + d_y(v_1) + d_z(w_1) = 0",
            "d_t(b_0)/Bu + u_0*d_x(b_0)/Bu + v_0*d_y(b_0)/Bu + w_1 = 0",
        ]
    );
    let mut undetermined: Vec<String> = list(&answer["undetermined"]).iter().map(text).collect();
    undetermined.sort();
    assert_eq!(undetermined, ["b", "p", "u", "v"]);
}

#[test]
fn potential_vorticity_is_the_solvability_condition() {
    let answer = expanded(&read("../stdlib/demo/qg_shelf.scl"));
    let conditions = list(&answer["solvability"]);
    assert_eq!(conditions.len(), 1);
    let mut terms: Vec<String> = list(&conditions[0]["simplified"]["terms"])
        .iter()
        .map(spelt)
        .collect();
    terms.sort();
    // Pedlosky 1987 and Vallis 2006, from memory: with the stream function p the vorticity
    // p_xx + p_yy, its change northward and the stretching p_zz/Bu are carried together,
    // d_t q + p_x*q_y - p_y*q_x = 0; here all of it times Bu.
    let mut expected = [
        "1 Bu^1 d_t1.x2(p_0)",
        "1 Bu^1 d_t1.y2(p_0)",
        "1 d_t1.z2(p_0)",
        "1 Bu^1 beta_star^1 d_x1(p_0)",
        "1 Bu^1 d_x1(p_0) d_x2.y1(p_0)",
        "1 Bu^1 d_x1(p_0) d_y3(p_0)",
        "1 d_x1(p_0) d_y1.z2(p_0)",
        "-1 Bu^1 d_y1(p_0) d_x3(p_0)",
        "-1 Bu^1 d_y1(p_0) d_x1.y2(p_0)",
        "-1 d_y1(p_0) d_x1.z2(p_0)",
    ];
    expected.sort_unstable();
    assert_eq!(terms, expected);
    // As the equations give it, it speaks of the order 0 of all fields, and of no other.
    assert!(
        list(&conditions[0]["terms"])
            .iter()
            .flat_map(|term| list(&term["factors"]))
            .all(|factor| factor["order"] == "0")
    );
}

/// A term of an order: number, groups, fields.
fn spelt(term: &Value) -> String {
    let mut parts = vec![text(&term["number"])];
    let groups = term["groups"].as_object().into_iter().flatten();
    parts.extend(groups.map(|(name, power)| format!("{name}^{}", text(power))));
    for factor in list(&term["factors"]) {
        let mut by: Vec<String> = factor["derivatives"]
            .as_object()
            .into_iter()
            .flatten()
            .map(|(along, order)| format!("{along}{order}"))
            .collect();
        by.sort();
        let name = match factor["field"].as_str() {
            Some("y") => "y".to_owned(),
            _ => format!("{}_{}", text(&factor["field"]), text(&factor["order"])),
        };
        parts.push(match by.is_empty() {
            true => name,
            false => format!("d_{}({name})", by.join(".")),
        });
    }
    parts.join(" ")
}

#[test]
fn lower_orders_force_the_higher_ones() {
    let answer = expanded(
        "constant eps = 0.01\ncoordinate x ~ 1\nfield y(x) ~ 1\n\
         equation ode: eps*d_x^2(y) + d_x(y) + y = 0\ngroup e = eps\n\
         limit e -> 0\nexpand ode to order 1",
    );
    let order = entry(&answer["orders"], "order", "1");
    let terms = list(&order["equations"][0]["terms"]);
    let forcing: Vec<bool> = terms
        .iter()
        .map(|term| term["forcing"].as_bool().unwrap())
        .collect();
    assert_eq!(forcing, [true, false, false]);
    assert_eq!(list(&answer["undetermined"]).len(), 0);
}

#[test]
fn powers_may_be_rational() {
    // A quadratic whose roots part as the square root of eps.
    let answer = expanded(
        "constant eps = 0.01\nscale X = sqrt(eps)\nfield x ~ 1\nfield d ~ X\n\
         equation root: x^2 - 2*x + 1 + d*x = eps\ngroup e = eps\n\
         limit e -> 0\nexpand root to order 1",
    );
    let orders: Vec<String> = list(&answer["orders"])
        .iter()
        .map(|order| text(&order["order"]))
        .collect();
    assert_eq!(orders, ["0", "1/2", "1"]);
    assert_eq!(
        texts(&answer, "1/2"),
        ["2*x_0*x_(1/2) - 2*x_(1/2) + d_0*x_0 = 0"]
    );
}

#[test]
fn groups_are_placed_by_name_and_by_relation() {
    let script = "scale U = 1 m/s\nscale L = 100 km\nscale H = 100 m\nscale T = L/U\n\
                  constant f = 1e-4 1/s\nconstant N = 0.1 1/s\nconstant nu = 1e-2 m^2/s\n\
                  coordinate x ~ L\ncoordinate z ~ H\ncoordinate t ~ T\n\
                  field u, v(x, z, t) ~ U\n\
                  group Ro = U/(f*L)\ngroup Fr = U/(N*H)\ngroup Bu = (N*H/(f*L))^2\n\
                  group Ek = nu/(f*H^2)\n\
                  equation e: d_t(u) - f*v = nu*d_z^2(u) + N^2*H^2/(f*L^2)*v\n";
    let answer = expanded(&format!(
        "{script}limit Ro -> 0 with Ek ~ Ro^2, Fr ~ Ro\nexpand e to order 2"
    ));
    assert_eq!(answer["placed"]["Ro"], "1");
    assert_eq!(answer["placed"]["Ek"], "2");
    // Bu = Ro^2/Fr^2, so it is placed by the relation.
    assert_eq!(answer["placed"]["Bu"], "0");
    assert_eq!(
        codes(&format!(
            "{script}limit Ro -> 0 with Ek ~ 1, Fr ~ Ro, Bu ~ Ro\nexpand e to order 2"
        )),
        ["contradicting-limit"]
    );
    assert_eq!(
        codes(&format!(
            "{script}limit Ro -> 0 with Ek ~ 1\nexpand e to order 2"
        )),
        ["free-groups"]
    );
    let others = expanded(&format!(
        "{script}limit Ro -> 0 with others ~ 1\nexpand e to order 1"
    ));
    assert_eq!(others["placed"]["Ek"], "0");
}

#[test]
fn what_cannot_be_expanded_is_told() {
    let given = "constant eps = 0.01\nscale U = 1\ncoordinate x ~ 1\nfield y(x) ~ 1\ngroup e = eps\n\
                 equation ode: eps*d_x^2(y) + d_x(y) + y = 0\n";
    assert_eq!(
        codes(&format!("{given}limit e -> 0\nexpand ode to order 9")),
        ["order-too-high"]
    );
    assert_eq!(
        codes(&format!("{given}limit U -> 0\nexpand ode to order 1")),
        ["not-a-product"]
    );
    assert_eq!(
        codes(&format!("{given}expand ode to order 1")),
        ["free-groups"]
    );
    assert_eq!(
        codes(
            "constant eps = 0.01\ncoordinate x ~ 1\nfield y(x) ~ 1\ngroup e = eps\n\
               equation ode: (eps*d_x^2(y) + d_x(y) ~ 0.1) + y = 0\nlimit e -> 0\nexpand ode to order 1"
        ),
        ["not-a-product"]
    );
    assert_eq!(
        codes(
            "constant eps = 0.01\ncoordinate x ~ 1\nfield T(x) ~ 300 varying 5\ngroup e = eps\n\
               equation ode: eps*d_x(T) + T = 0\nlimit e -> 0\nexpand ode to order 1"
        ),
        ["not-split"]
    );
    assert_eq!(
        codes(
            "constant eps = 0.01\nscale Y in 1\ncoordinate x ~ 1\nfield y(x) ~ Y\ngroup e = eps\n\
               equation ode: eps*d_x(y) + y^2 = 0\nlimit e -> 0\nexpand ode to order 1"
        ),
        ["open-scale"]
    );
}

#[test]
fn the_shear_of_the_geostrophic_current_is_the_thermal_wind() {
    let output = output(&read("../stdlib/demo/qg_shelf.scl"));
    // Vallis 2006, from memory: f*dv/dz = db/dx, f*du/dz = -db/dy.
    assert_eq!(
        texts(answers_to(&output, "expand")[1], "0"),
        ["-d_z(v_0) = -d_x(b_0)", "d_z(u_0) = -d_y(b_0)"]
    );
}

#[test]
fn density_off_the_state_of_rest_counts_in_the_weight_alone() {
    let answer = expanded(&read("../stdlib/demo/boussinesq.scl"));
    let dimensional = |order: &str| -> Vec<String> {
        let order = entry(&answer["orders"], "order", order);
        let equations = list(&order["equations"]).iter();
        let texts = equations.map(|equation| text(&equation["dimensional"]));
        texts.collect()
    };
    // Spiegel & Veronis 1960, from memory: the first order in the density off the state of
    // rest holds its weight; its inertia is one order smaller.
    assert_eq!(
        dimensional("0")[1],
        "rho_0*d_t(w) + rho_0*u*d_x(w) + rho_0*v*d_y(w) + rho_0*w*d_z(w) \
         = -d_z(p') - rho'*g + rho_0*nu*d_z^2(w)"
    );
    assert_eq!(
        dimensional("1")[1],
        "rho'*d_t(w) + rho'*u*d_x(w) + rho'*v*d_y(w) + rho'*w*d_z(w) = rho'*nu*d_z^2(w)"
    );
}

#[test]
fn a_limit_holds_for_the_phenomena_that_it_names() {
    let output = output(
        "constant eps = 0.01\ncoordinate x ~ 1\nfield y(x) ~ 1\ngroup e = eps\n\
         equation ode: eps*d_x^2(y) + d_x(y) + y = 0\n\
         phenomenon a { constant eps = 0.02 }\n\
         phenomenon b { constant eps = 0.03\n limit e^2 -> 0 }\n\
         limit e -> 0 for a\nexpand to order 1 for a\nexpand to order 1 for b",
    );
    let small: Vec<String> = answers_to(&output, "expand")
        .iter()
        .map(|answer| text(&answer["small"]))
        .collect();
    assert_eq!(small, ["e", "e^2"]);
}

#[test]
fn a_coefficient_that_no_group_gives_stands_in_scales() {
    let answer = expanded(
        "constant g = 9.81 m/s^2\nconstant D = 30 m\nscale a = 0.5 m\nscale L = 20 km\n\
         scale T = 1 h\nscale U = 0.3 m/s\ncoordinate x ~ L\ncoordinate t ~ T\n\
         field u(x, t) ~ U\nfield eta(x, t) ~ a\nfield h = D + eta\n\
         equation volume: d_t(h) + d_x(h*u) = 0\nexpand to order 1",
    );
    assert_eq!(texts(&answer, "0"), ["(a*L/(D*T*U))*d_t(eta) + d_x(u) = 0"]);
    let terms = list(&answer["orders"][0]["equations"][0]["terms"]);
    assert_eq!(terms[0]["groups"], Value::Null);
}

#[test]
fn what_is_left_of_a_split_is_spelt_by_its_part() {
    let output = output(
        "scale L = 1 km\nscale H = 100 m\nscale P = 1e6 Pa\nscale p_d = 1 kPa\nscale U = 1 m/s\n\
         constant rho = 1000 kg/m^3\ncoordinate x ~ L\ncoordinate z ~ H\nfield u(x) ~ U\n\
         field p_0(z) ~ P\nfield p'(x, z) ~ p_d\nfield p = p_0 + p'\n\
         equation alongside: u*d_x(u) = -d_x(p)/rho\nreduce",
    );
    let equation = &answers_to(&output, "reduce")[0]["equations"][0];
    assert!(
        text(&equation["reduced"]).ends_with("-d_x(p')/rho"),
        "{equation}"
    );
}

#[test]
fn a_mean_of_series_is_a_series_of_means() {
    let answer = expanded(
        "scale U = 10 m/s\nscale u_s = 1 m/s\nscale H = 1 km\nscale L = 100 km\n\
         coordinate x ~ L\ncoordinate z ~ H\nfield U_m(x, z) ~ U\n\
         fluctuation u', w'(x, z) ~ u_s\nfield u = U_m + u'\n\
         group eps = u_s/U\ngroup flat = H/L\n\
         equation flux: d_x(u*u) + d_z(w'*u) = 0\nequation mean_flux from mean(flux)\n\
         limit eps -> 0 with flat ~ eps\nexpand mean_flux to order 2",
    );
    assert_eq!(
        texts(&answer, "1"),
        ["2*d_x(U_m_0)*U_m_1 + 2*U_m_0*d_x(U_m_1) + eps*d_z(mean(w'_0*u'_0))/flat = 0"]
    );
    let second = &entry(&answer["orders"], "order", "2")["equations"][0];
    assert!(
        text(&second["text"])
            .contains("eps*d_z(mean(w'_0*u'_1))/flat + eps*d_z(mean(w'_1*u'_0))/flat"),
        "{second}"
    );
    let terms = list(&second["terms"]).iter();
    let mixed = terms.filter(|term| text(&term["factors"]).contains("mean(w'_1*u'_0)"));
    assert!(mixed.clone().count() == 1 && mixed.clone().all(|term| term["forcing"] == true));
}

#[test]
fn a_parameter_that_is_not_small_is_told() {
    let script = |eps: &str| {
        format!(
            "constant eps = {eps}\ncoordinate x ~ 1\nfield y(x) ~ 1\ngroup e = eps\n\
             equation ode: eps*d_x^2(y) + d_x(y) + y = 0\nlimit e -> 0\nexpand to order 1"
        )
    };
    let report = |eps: &str| {
        let outcome = scalewright::Session::new().run("case.scl", &script(eps), None);
        scalewright::report::text::report(&outcome, false)
    };
    assert!(report("0.01").contains("small  e -> 0 (now 0.01)"));
    assert!(!report("0.01").contains("is not small"));
    assert!(report("2").contains("e is 2 at these values, which is not small"));
    assert_eq!(expanded(&script("2"))["value"], 2.0);
}

#[test]
fn a_declared_name_is_not_taken_for_an_order() {
    let answer = expanded(
        "constant eps = 0.01\ncoordinate x ~ 1\nfield y_0(x) ~ 1\nfield y(x) ~ 1\n\
         group e = eps\nequation ode: eps*d_x(y) + y = y_0\nlimit e -> 0\nexpand to order 1",
    );
    assert_eq!(texts(&answer, "0"), ["y_(0) = y_0_(0)"]);
    assert_eq!(texts(&answer, "1"), ["d_x(y_(0)) + y_(1) = y_0_(1)"]);
}

#[test]
fn a_literal_keeps_its_unit_with_dimensions() {
    let answer = expanded(
        "constant eps = 0.01\ncoordinate t ~ 1000 s\nfield u, a, b(t) ~ 1 m/s\nfield q = a + b\n\
         group e = eps\nequation ode: d_t(u) + 0.001 1/s*eps*q = 0.002 1/s*q\n\
         limit e -> 0\nexpand to order 0",
    );
    let equation = &answer["orders"][0]["equations"][0];
    assert_eq!(
        equation["dimensional"],
        "d_t(u_0) = 0.002 1/s * a_0 + 0.002 1/s * b_0"
    );
}
