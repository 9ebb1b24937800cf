//! What `find` says of a balance: formulas, values, neglect, names, ends, ranges.

use serde_json::json;

use super::{answer, answered, assert_close, assert_formula, candidates, codes};
use crate::harness::{list, read};

/// Flow over a plane; `momentum` is one equation for u and p.
fn plane(values: &str, equation: &str, requests: &str) -> String {
    format!(
        "{values}
        coordinate x, y ~ L   coordinate t ~ T
        field u, v(x, y, t) ~ U   field p(x, y, t) ~ dP
        velocity (u, v) along (x, y)
        equation momentum: {equation}
        {requests}"
    )
}

const WIND: &str = "scale U = 10 m/s  scale L = 1000 km  scale T = L/U  scale dP in hPa
    constant f = 1e-4 1/s  constant rho = 1.2 kg/m^3";

#[test]
fn a_rotating_stratified_flow_has_one_balance() {
    let output = answered(&read("inputs/stratified_open.scl"));
    let found = candidates(&output);
    let [only] = found.as_slice() else {
        panic!("one candidate: {found:?}")
    };
    let scales = &only["scales"];
    assert_formula(
        &scales["W"],
        "1",
        &json!({ "U": "2", "H": "-1", "f": "1", "N": "-2" }),
    );
    assert_formula(
        &scales["dP"],
        "1",
        &json!({ "U": "1", "L": "1", "f": "1", "rho_0": "1" }),
    );
    assert_formula(
        &scales["dB"],
        "1",
        &json!({ "U": "1", "L": "1", "H": "-1", "f": "1" }),
    );
    assert_close(&scales["W"]["value"]["nominal"], 8e-5);
    assert_close(&scales["dB"]["value"]["nominal"], 1e-3);
    assert_eq!(only["names"], json!(["geostrophic", "hydrostatic"]));
    assert_eq!(only["name"], "geostrophic, hydrostatic");
    assert_close(&only["largest_neglected"], 0.08);
    assert_eq!(only["neglected_term"], "∂w/∂z");
    assert_eq!(
        (&only["adopted"], &only["whole_box"]),
        (&json!(true), &json!(true))
    );
}

/// The horizontal divergence balances itself, so continuity alone leaves W free below.
#[test]
fn continuity_bounds_the_vertical_speed_or_gives_it() {
    let output = answered(
        "scale U = 10 m/s  scale L = 1000 km  scale H = 10 km  scale W in cm/s
        coordinate x, y ~ L  coordinate z ~ H
        field u, v(x, y, z) ~ U  field w(x, y, z) ~ W
        equation continuity: ∂u/∂x + ∂v/∂y + ∂w/∂z = 0
        find W
        find W where continuity: ∂u/∂x ~ ∂w/∂z
        show W",
    );
    let family = &answer(&output, "find", 0)["candidates"];
    assert_eq!(list(family).len(), 1);
    let free = &family[0]["free"][0];
    assert_eq!((&free["scale"], &free["low"]), (&json!("W"), &json!(null)));
    assert_formula(
        &free["high"],
        "1",
        &json!({ "U": "1", "L": "-1", "H": "1" }),
    );
    assert_eq!(free["high"]["equation"], "continuity");
    assert_eq!(free["high"]["joins"], json!(["∂w/∂z"]));
    assert_close(&free["high"]["value"]["nominal"], 0.1);
    assert_eq!(
        (&family[0]["scales"]["W"], &family[0]["largest_neglected"]),
        (&json!(null), &json!(null))
    );
    let point = &answer(&output, "find", 1)["candidates"][0];
    assert_formula(
        &point["scales"]["W"],
        "1",
        &json!({ "U": "1", "L": "-1", "H": "1" }),
    );
    assert_eq!(
        point["balances"]["continuity"],
        json!(["∂u/∂x", "∂v/∂y", "∂w/∂z"])
    );
    assert_close(&answer(&output, "show", 0)["value"]["nominal"], 0.1);
}

/// Tendency and advection of one `D_t` are equal by T = L/U: with a third process that tie
/// fixes nothing, so dP comes from what the two balance.
#[test]
fn what_one_material_derivative_gives_balances_not_itself() {
    let values = WIND.replace("1e-4", "1e-6");
    let output = answered(&plane(
        &values,
        "D_t(u) - f*v as coriolis = -∂p/∂x/rho as pressure",
        "find dP",
    ));
    let found = candidates(&output);
    assert_eq!(found.len(), 1);
    assert_eq!(
        found[0]["balances"]["momentum"],
        json!(["tendency", "advection", "pressure"])
    );
    assert_formula(
        &found[0]["scales"]["dP"],
        "1",
        &json!({ "U": "2", "rho": "1" }),
    );
}

/// The same tie put in by hand belongs to no `D_t`, and it does balance itself.
#[test]
fn terms_written_apart_do_balance_one_another() {
    let values = WIND.replace("1e-4", "1e-6");
    let equation =
        "∂u/∂t as tendency + u*∂u/∂x as advection - f*v as coriolis = -∂p/∂x/rho as pressure";
    let found = candidates(&answered(&plane(&values, equation, "find dP")));
    assert_eq!(found.len(), 1);
    assert_eq!(found[0]["free"][0]["high"]["joins"], json!(["pressure"]));
    assert_eq!(
        found[0]["balances"]["momentum"],
        json!(["tendency", "advection"])
    );
}

/// Inertia is a third of rotation, within the root of 10: they tie, and `where` says which
/// of them gives the formula.
#[test]
fn near_ties_count_as_equal_and_where_names_the_formula() {
    let values = WIND.replace("1e-4", "3e-5");
    let equation = "∂u/∂t as inertia - f*v as coriolis = -∂p/∂x/rho as pressure";
    let requests = "find dP where momentum: coriolis ~ pressure
        find dP where momentum: inertia ~ pressure
        find dP";
    let output = answered(&plane(&values, equation, requests));
    let of = |n: usize| answer(&output, "find", n)["candidates"][0].clone();
    let coriolis = json!({ "U": "1", "L": "1", "f": "1", "rho": "1" });
    assert_formula(&of(0)["scales"]["dP"], "1", &coriolis);
    assert_formula(
        &of(1)["scales"]["dP"],
        "1",
        &json!({ "U": "2", "rho": "1" }),
    );
    assert_eq!(of(0)["balances"], of(1)["balances"]);
    // Without it the two known terms hold one another, up to where pressure joins; the
    // larger of them says where.
    assert_formula(&of(2)["free"][0]["high"], "1", &coriolis);
}

/// Beyond the root of 10 the smaller one is neglected.
#[test]
fn a_clear_difference_is_no_tie() {
    let values = WIND.replace("1e-4", "3.2e-5");
    let equation = "∂u/∂t as inertia - f*v as coriolis = -∂p/∂x/rho as pressure";
    let found = candidates(&answered(&plane(&values, equation, "find dP")));
    assert_eq!(found.len(), 1);
    assert_eq!(
        found[0]["balances"]["momentum"],
        json!(["coriolis", "pressure"])
    );
    assert_close(&found[0]["largest_neglected"], 1.0 / 3.2);
    assert_eq!(found[0]["neglected_term"], "inertia");
}

#[test]
fn what_was_found_is_used_by_the_requests_behind_it_alone() {
    let requests = "show dP
        find dP
        rank
        claim dP = rho*f*U*L
        claim leading momentum = coriolis, pressure";
    let equation = "D_t(u) - f*v as coriolis = -∂p/∂x/rho as pressure";
    let output = answered(&plane(WIND, equation, requests));
    assert_eq!(codes(&output)[0], "open-scale");
    assert_eq!(list(&answer(&output, "rank", 0)["equations"]).len(), 1);
    assert!(
        list(&output["claims"])
            .iter()
            .all(|claim| claim["met"] == true)
    );
    assert_eq!(list(&output["claims"]).len(), 2);
}

#[test]
fn a_find_may_build_on_one_before_it() {
    let output = answered(
        "scale U = 10 m/s  scale L = 1000 km  scale dP in hPa  scale dZ in m
        constant f = 1e-4 1/s  constant rho = 1.2 kg/m^3  constant g = 9.81 m/s^2
        equation one: f*U as coriolis = dP/(rho*L) as pressure
        equation two: rho*g*dZ as weight = dP as pressure
        find dP
        find dZ
        show dZ",
    );
    let second = &answer(&output, "find", 1)["candidates"][0]["scales"]["dZ"];
    assert_formula(
        second,
        "1",
        &json!({ "U": "1", "L": "1", "f": "1", "g": "-1" }),
    );
    assert_eq!(
        answer(&output, "find", 0)["left_out"],
        json!([{ "equation": "two", "open": ["dZ"] }])
    );
    assert_close(
        &answer(&output, "show", 0)["value"]["nominal"],
        1000.0 / 9.81,
    );
}

#[test]
fn several_balances_stand_in_order_of_what_they_neglect_and_none_is_adopted() {
    let output = answered(
        "scale X in 1
        equation e: X^2 as square + 100*X as line + 10000/X as inverse = 1000 as one
        find X
        rank",
    );
    let found = candidates(&output);
    let shares: Vec<f64> = found
        .iter()
        .filter_map(|found| found["largest_neglected"].as_f64())
        .collect();
    assert!(
        shares.len() > 1 && shares.windows(2).all(|pair| pair[0] <= pair[1]),
        "{shares:?}"
    );
    assert!(found.iter().all(|found| found["adopted"] == false));
    assert_eq!(codes(&output), ["open-scale"]);
}

/// A sum that nearly cancels may be no larger than its parts.
#[test]
fn a_sum_with_a_size_of_its_own_stays_below_its_parts() {
    let script = |w: &str| {
        format!(
            "scale U = 10 m/s  scale L = 1000 km  scale H = 10 km  scale W = {w}  scale D in 1/s
            coordinate x, y ~ L  coordinate z ~ H
            field u, v(x, y, z) ~ U  field w(x, y, z) ~ W
            equation continuity: (∂u/∂x + ∂v/∂y ~ D) as divergence + ∂w/∂z as stretching = 0
            find D"
        )
    };
    let output = answered(&script("1 cm/s"));
    assert_formula(
        &candidates(&output)[0]["scales"]["D"],
        "1",
        &json!({ "W": "1", "H": "-1" }),
    );
    let output = answered(&script("1 m/s"));
    assert_eq!(codes(&output), ["no-balance"]);
    // An open W may grow until the divergence is as large as its parts.
    let output = answered(
        &script("1 cm/s")
            .replace("scale W = 1 cm/s", "scale W in m/s")
            .replace("find D", "find D, W"),
    );
    let found = candidates(&output);
    assert_eq!(found.len(), 1);
    let high = &found[0]["free"][0]["high"];
    assert_formula(high, "1", &json!({ "U": "1", "L": "-1", "H": "1" }));
    assert_eq!(high["joins"], json!(["divergence"]));
}

/// A swirl of this radius whose pressure fall is looked for.
fn swirl(radius: &str) -> String {
    format!(
        "scale V = 40 m/s within 3  scale R = {radius}  scale dP in hPa
        constant f = 1e-4 1/s  constant rho = 1.1 kg/m^3
        group Ro = V/(f*R)
        coordinate r ~ R   field v(r) ~ V   field p(r) ~ dP
        equation radial: -v^2/r as centrifugal - f*v as coriolis = -d_r(p)/rho as pressure
        find dP"
    )
}

#[test]
fn ranges_say_where_a_balance_stands() {
    let output = answered(&swirl("30 km within 3"));
    // At the nominal values Ro is 13; over the ranges it goes from 1.5 to 120.
    let found = candidates(&output);
    assert_eq!(found.len(), 1);
    assert_eq!(found[0]["whole_box"], true);
    let value = &found[0]["scales"]["dP"]["value"];
    assert_close(&value["low"], 1.1 * 1600.0 / 9.0);
    assert_close(&value["high"], 1.1 * 1600.0 * 9.0);
}

#[test]
fn two_balances_share_the_box() {
    let output = answered(&swirl("100 km within 10"));
    let found = candidates(&output);
    let balances: Vec<_> = found
        .iter()
        .map(|found| found["balances"]["radial"].clone())
        .collect();
    assert_eq!(
        balances,
        [
            json!(["centrifugal", "pressure"]),
            json!(["coriolis", "pressure"])
        ]
    );
    assert!(found.iter().all(|found| found["whole_box"] == false));
    let conditions: Vec<_> = found
        .iter()
        .map(|found| found["conditions"][0]["text"].clone())
        .collect();
    assert_eq!(conditions, [json!("1/Ro <= 1"), json!("Ro <= 1")]);
    // At the nominal values rotation is a quarter of inertia, and inertia four times it.
    assert_close(&found[0]["largest_neglected"], 0.25);
    assert_close(&found[1]["largest_neglected"], 4.0);
}

/// A range that an unknown follows, or that acts as another one does, adds nothing.
#[test]
fn ranges_that_change_no_ratio_change_no_balance() {
    let script = |rho: &str, g: &str| {
        format!(
            "scale V = 40 m/s within 3  scale R = 100 km within 10  scale dP in hPa  scale dZ in m
            constant f = 1e-4 1/s  constant rho = 1.1 kg/m^3{rho}  constant g = 9.81 m/s^2{g}
            group Ro = V/(f*R)
            coordinate r ~ R   field v(r) ~ V   field p(r) ~ dP
            equation radial: -v^2/r as centrifugal - f*v as coriolis = -d_r(p)/rho as pressure
            equation weight: rho*g*dZ as weight = dP as pressure
            find dP, dZ"
        )
    };
    let exact = candidates(&answered(&script("", "")));
    let ranged = candidates(&answered(&script(" within 2", " within 20 %")));
    assert_eq!(exact.len(), 2);
    for (exact, ranged) in exact.iter().zip(&ranged) {
        for field in ["balances", "conditions", "whole_box", "largest_neglected"] {
            assert_eq!(exact[field], ranged[field]);
        }
        assert_close(
            &ranged["scales"]["dP"]["value"]["high"],
            2.0 * exact["scales"]["dP"]["value"]["high"].as_f64().unwrap(),
        );
    }
}

/// Beyond ten ranges that matter balances are looked for at the nominal values; whether
/// they stand over the ranges is told all the same.
#[test]
fn very_many_ranges_are_looked_at_from_the_nominal_values() {
    let script = |last: &str| {
        let constants: String = (0..12)
            .map(|k| format!("constant c{k} = {} within 2\n", 10_i64.pow(k)))
            .collect();
        let terms: String = (0..12).map(|k| format!(" + c{k} as t{k}")).collect();
        format!(
            "scale X in 1\n{constants}constant d = {last} within 2\nequation e: X as x{terms} + d as last = 0\nfind X"
        )
    };
    let output = answered(&script("1"));
    assert_eq!(answer(&output, "find", 0)["nominal_only"], true);
    let found = candidates(&output);
    assert_eq!((found.len(), &found[0]["whole_box"]), (1, &json!(true)));
    assert_eq!(found[0]["balances"]["e"], json!(["x", "t11"]));
    let found = candidates(&answered(&script("2.8e10")));
    assert_eq!((found.len(), &found[0]["whole_box"]), (1, &json!(false)));
    assert_eq!(found[0]["conditions"][0]["text"], "d/c11 <= 1");
}

/// Known scales without values compare as powers of the small parameter of a limit.
#[test]
fn a_limit_compares_scales_without_values() {
    let script = read("inputs/stratified_open.scl");
    let open = [
        ("scale U  = 0.1 m/s", "scale U in m/s"),
        ("scale L  = 50 km", "scale L in m"),
        ("scale H  = 500 m", "scale H in m"),
        ("constant f     = 1e-4 1/s", "constant f in 1/s"),
        ("constant N     = 5e-3 1/s", "constant N in 1/s"),
        ("constant rho_0 = 1027 kg/m^3", "constant rho_0 in kg/m^3"),
    ];
    let script = open.iter().fold(script, |script, (value, name)| {
        assert!(script.contains(value));
        script.replace(value, name)
    });
    let groups = "group Ro = U/(f*L)  group Bu = (N*H/(f*L))^2  group aspect = H/L";
    assert_eq!(codes(&answered(&script)), ["open-scale"]);
    let with_limit =
        |limit: &str| answered(&script.replace("find W", &format!("{groups} {limit} find W")));
    let output = with_limit("limit Ro -> 0 with Bu ~ 1, others ~ 1");
    let found = candidates(&output);
    assert_eq!(found.len(), 1);
    assert_formula(
        &found[0]["scales"]["W"],
        "1",
        &json!({ "U": "2", "H": "-1", "f": "1", "N": "-2" }),
    );
    assert_eq!(found[0]["scales"]["W"]["value"], json!(null));
    assert_eq!(found[0]["neglected_power"], json!(1.0));
    let output = with_limit("limit Ro -> 0 with aspect ~ 1");
    assert_eq!(codes(&output), ["free-groups"]);
    let output = with_limit("limit Ro -> 0 with Bu ~ 1, others ~ 1, Ro ~ Ro^2");
    assert_eq!(codes(&output), ["contradicting-limit"]);
    // Strong stratification holds the flow down: W shrinks with Ro/Bu.
    let output = with_limit("limit Ro -> 0 with Bu ~ Ro^-1, aspect ~ 1");
    assert_eq!(
        candidates(&output)[0]["names"],
        json!(["geostrophic", "hydrostatic"])
    );
}
