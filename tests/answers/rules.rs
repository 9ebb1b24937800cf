//! The rules of the language, each with a test of its own.

use serde_json::Value;

use crate::harness::{answers, list};

/// The value of the last `show` of a script, in SI units.
fn shown(script: &str) -> f64 {
    let output = answers(script);
    let answer = list(&output["answers"]).last();
    let value = answer.and_then(|answer| answer["value"]["nominal"].as_f64());
    value.unwrap_or_else(|| panic!("{script}\n{:#}", output["diagnostics"]))
}

fn range(script: &str) -> [f64; 3] {
    let output = answers(script);
    let value = &output["answers"][0]["value"];
    ["low", "nominal", "high"].map(|end| {
        value[end]
            .as_f64()
            .unwrap_or_else(|| panic!("{script}\n{:#}", output["diagnostics"]))
    })
}

/// The codes of a script's diagnostics.
fn codes(script: &str) -> Vec<String> {
    let output = answers(script);
    let codes = list(&output["diagnostics"]).iter();
    codes
        .map(|found| found["code"].as_str().unwrap_or("").to_owned())
        .collect()
}

fn near(found: f64, expected: f64) -> bool {
    (found - expected).abs() <= 1e-12 * expected.abs()
}

fn assert_near(script: &str, expected: f64) {
    let found = shown(script);
    assert!(
        near(found, expected),
        "{script}: {found}, expected {expected}"
    );
}

// Numbers and units ---------------------------------------------------------------------------

#[test]
fn a_unit_right_behind_a_number_belongs_to_it() {
    assert_near("show 10 m^2", 10.0);
    assert_near("show 2*10^-4 s^-1", 2e-4);
    assert_near("show 3*2 km", 6000.0);
    assert_near("show 2 m^(2/3)", 2.0);
    assert_near("show 1004 J/(kg.K)", 1004.0);
    assert_near("show 1e-4 1/s", 1e-4);
    assert_near("show 9.81 m·s⁻²", 9.81);
    assert_near("show 10⁻⁴ s^-1", 1e-4);
}

#[test]
fn one_over_a_unit_is_a_unit_behind_a_number_and_a_quotient_elsewhere() {
    assert_near("show 5 1/s", 5.0);
    assert_near("scale s = 4 m\nshow 1/s", 0.25);
}

#[test]
fn ranges_may_stand_close_to_their_numbers() {
    assert_eq!(range("scale U = 5..20 m/s\nshow U"), [5.0, 10.0, 20.0]);
    assert_eq!(range("scale L = 10 m..40 m\nshow L"), [10.0, 20.0, 40.0]);
}

#[test]
fn ten_to_a_whole_number_is_a_number_unless_another_power_follows() {
    assert_near("show 10^3", 1000.0);
    assert_near("show 10^2^3", 1e8);
}

#[test]
fn a_bare_number_over_a_number_with_a_unit_asks_for_brackets() {
    assert_eq!(codes("show 1/2 m"), ["unit-after-quotient"]);
    assert_near("show 1/(2 m)", 0.5);
    assert_near("show 1/2", 0.5);
}

#[test]
fn a_second_solidus_is_told_with_its_mend() {
    assert_eq!(codes("show 3 J/kg/K"), ["two-solidi"]);
    let output = answers("show 3 J/kg/K");
    assert_eq!(output["diagnostics"][0]["help"], "write `J/(kg.K)`");
}

#[test]
fn a_unit_on_the_next_line_is_apart() {
    assert_eq!(codes("scale U = 10\nm/s\nshow U"), ["unit-apart"]);
}

#[test]
fn trade_symbols_are_free_as_names() {
    assert_near(
        "constant g = 3 m/s^2\nscale T = 2 s\nscale H = g*T^2\nshow H",
        12.0,
    );
    assert_near("scale m = 5 kg\nshow 10*m", 50.0);
    assert_near("scale m = 5 kg\nshow 10 m", 10.0);
}

#[test]
fn an_unknown_unit_that_is_a_name_asks_for_the_product() {
    let help = |script: &str| answers(script)["diagnostics"][0]["help"].clone();
    assert_eq!(
        help("constant Omega = 1 1/s\nshow 2 Omega"),
        "write `2*Omega`"
    );
    assert_eq!(help("scale Uo = 1 m/s\nshow 10 m/Uo"), "write `10 m / Uo`");
}

#[test]
fn a_unit_of_declared_names_only_is_read_as_a_unit_with_a_warning() {
    let script = "constant N = 0.01 1/s\nshow 2 N^2";
    assert_eq!(codes(script), ["unit-or-symbol"]);
    let output = answers(script);
    assert_eq!(output["outcome"], "ok");
    assert_eq!(output["answers"][0]["unit"], "kg^2.m^2/s^4");
    let found = &output["diagnostics"][0];
    assert_eq!(found["severity"], "warning");
    assert!(
        found["help"]
            .as_str()
            .is_some_and(|help| help.contains("2*N^2"))
    );
    // Nobody reads a product into a plain value with a plain unit.
    assert_eq!(
        codes("constant K = 3 m^2/s\nconstant T_0 = 280 K\nshow T_0*K"),
        Vec::<String>::new()
    );
}

#[test]
fn readings_with_an_offset_are_plain_values_only() {
    assert_near("constant T_0 = 15 degC\nshow T_0", 288.15);
    assert_near("constant T_0 = -15 degC\nshow T_0", 258.15);
    let output = answers("constant T_0 = 59 degF\nshow T_0 in degC");
    assert!(near(
        output["answers"][0]["in"]["value"]["nominal"]
            .as_f64()
            .unwrap(),
        15.0
    ));
    for script in [
        "scale dT = 5 degC\nshow dT",
        "constant T_0 = 5 degC .. 10 degC\nshow T_0",
        "constant T_0 = 5 degC within 2\nshow T_0",
        "constant c = 5 J/degC\nshow c",
        "constant T_0 = 288 K\nshow T_0 in degC",
        "constant T_0 = 15 degC\nshow 2*T_0 in degC",
    ] {
        assert!(
            codes(script).contains(&"offset-unit".to_owned()),
            "{script}: {:?}",
            codes(script)
        );
    }
}

#[test]
fn angles_are_plain_numbers() {
    assert_near("show 180 deg", std::f64::consts::PI);
    assert_near("constant Omega = 2 rad/s\nscale T = 3 s\nshow Omega*T", 6.0);
    assert_near("show pi", std::f64::consts::PI);
    assert_near("show π/2", std::f64::consts::FRAC_PI_2);
}

#[test]
fn sines_of_whole_multiples_of_30_and_45_deg_are_exact() {
    let number = |script: &str| answers(script)["answers"][0]["number"].clone();
    assert_eq!(number("show sin(30 deg)"), "1/2");
    assert_eq!(number("show cos(60 deg)^2"), "1/4");
    assert_eq!(number("show sin(45 deg)^2"), "1/2");
    assert_eq!(number("show tan(45 deg)"), "1");
    assert_eq!(number("show cos(90 deg)"), "0");
}

#[test]
fn literals_are_exact() {
    let number = |script: &str| answers(script)["answers"][0]["number"].clone();
    assert_eq!(number("show 0.1 + 0.2"), "3/10");
    assert_eq!(number("show 1 ft"), "381/1250");
    assert_eq!(number("show 2^(1/2)*2^(1/2)"), "2");
}

// Values --------------------------------------------------------------------------------------

#[test]
fn nominal_values_of_ranges() {
    assert_eq!(
        range("scale U = 10 m/s within 2\nshow U"),
        [5.0, 10.0, 20.0]
    );
    let [low, nominal, high] = range("scale U = 12 m/s within 20 %\nshow U");
    assert!(near(low, 10.0) && near(nominal, 12.0) && near(high, 14.4));
    assert_eq!(range("scale U = 10 +- 3 m/s\nshow U"), [7.0, 10.0, 13.0]);
    assert_eq!(range("scale U = 10 ± 3 m/s\nshow U"), [7.0, 10.0, 13.0]);
    let [low, nominal, high] = range("constant b = -4 m .. -1 m\nshow b");
    assert!(near(low, -4.0) && near(nominal, -2.0) && near(high, -1.0));
}

#[test]
fn derived_scales_follow_their_parts_and_stay_correlated() {
    let script = "scale U = 5 .. 20 m/s\nscale L = 1 km\nscale T = L/U\nshow U*T/L";
    assert_eq!(range(script), [1.0, 1.0, 1.0]);
}

#[test]
fn levels_override_with_a_note() {
    let script = "use atmosphere.air\nconstant rho = 1.1 kg/m^3\nshow rho";
    assert_near(script, 1.1);
    assert_eq!(codes(script), ["value-overridden"]);
    assert_near(
        "scale U = 1 m/s\nphenomenon a { scale U = 2 m/s show U }",
        2.0,
    );
    assert_eq!(
        codes("scale U = 1 m/s\nscale U = 2 m/s\nshow U"),
        ["second-value"]
    );
    // A value for an open name is none.
    assert_eq!(
        codes("scale U in m/s\nscale U = 2 m/s\nshow U"),
        Vec::<String>::new()
    );
}

#[test]
fn an_open_declaration_above_a_value_opens_the_name_again() {
    let head = "use base.planet\n";
    let script = format!("{head}constant g in m/s^2\nshow g");
    assert_eq!(codes(&script), ["value-overridden", "open-scale"]);
    // A value at the same level, or above it, stands.
    let script = format!("{head}constant g in m/s^2\nconstant g = 2 m/s^2\nshow g");
    assert_near(&script, 2.0);
    let script =
        format!("{head}constant g in m/s^2\nphenomenon a {{ constant g = 3 m/s^2 show g }}");
    assert_near(&script, 3.0);
    let script = "scale U = 1 m/s\nphenomenon a { scale U in m/s show U }";
    assert_eq!(codes(script), ["value-overridden", "open-scale"]);
    // Modules share a name that one of them opens.
    assert_near(
        "use atmosphere.vortex\nuse settings.dust_devil\nconstant nu = 0.1 m^2/s\nshow R/(1 m)",
        15f64.sqrt(),
    );
}

#[test]
fn a_scale_of_the_settings_can_be_left_to_find() {
    let script = "use atmosphere.vortex\nuse settings.dust_devil\nscale dP in Pa
constant nu = 0.1 m^2/s\nfind dP";
    let output = answers(script);
    assert_eq!(output["outcome"], "ok", "{:#}", output["diagnostics"]);
    assert_eq!(output["answers"][0]["request"], "find");
}

#[test]
fn a_name_of_a_phenomenon_exists_there_only() {
    assert_eq!(
        codes("phenomenon a { scale V = 2 m/s }\nshow 1\nequation e: V = 1 m/s"),
        ["unknown-name"]
    );
    assert_near("phenomenon a { scale V = 2 m/s show V }", 2.0);
}

#[test]
fn names_share_one_space_but_equations_have_their_own() {
    let clash = "scale T = 1 s\ncoordinate x ~ T\nfield T(x) ~ T\nshow 1";
    assert_eq!(codes(clash), ["name-clash"]);
    assert_eq!(
        codes("scale a = 1 m\nconstant a = 1 m\nshow 1"),
        ["name-clash"]
    );
    assert_eq!(codes("scale sin = 1 m\nshow 1"), ["name-clash"]);
    assert_eq!(
        codes("scale d_x = 1 m\ncoordinate x ~ d_x\nshow 1"),
        ["name-clash"]
    );
    let fine = "scale a = 1 m\ncoordinate x ~ a\nfield u, v(x) ~ a\nequation a: u = v\nrank a";
    assert_eq!(codes(fine), Vec::<String>::new());
}

#[test]
fn unlike_dimensions_point_at_both_places() {
    let script = "scale L = 1 m\nscale T = 1 s\nshow L + T";
    let output = answers(script);
    let found = &output["diagnostics"][0];
    assert_eq!(found["code"], "unlike-dimensions");
    assert_eq!(found["span"]["start"]["column"], 10);
    assert_eq!(found["related"][0]["span"]["start"]["column"], 6);
    let message = found["message"].as_str().unwrap();
    assert!(
        message.contains("length (m)") && message.contains("time (s)"),
        "{message}"
    );
    assert_eq!(codes("scale L = 1 m\nshow exp(L)"), ["not-dimensionless"]);
    assert_eq!(codes("scale L = 1 m\nshow 2^L"), ["not-dimensionless"]);
    assert_eq!(
        codes("scale L = 1 m\ngroup G = 2*L\nshow 1"),
        ["not-dimensionless"]
    );
    assert_eq!(
        codes("scale L = 1 m\nscale M = 2 m\nshow L in s"),
        ["unlike-dimensions"]
    );
}

// Terms ---------------------------------------------------------------------------------------

/// Declarations for equations of a field `u` with a length of its own along y and another
/// amplitude along z.
const FIELDS: &str = "scale U = 2 m/s
scale W = 3 m/s
scale dU = 1 m/s
scale L = 100 m
scale M = 10 m
scale H = 5 m
scale T = 20 s
constant c = 7
coordinate x, y ~ L
coordinate z ~ H
coordinate t ~ T
field u(x, y ~ M, z varying dU, t) ~ U
field v(x, y, z, t) ~ U
field w(x, y, z, t) ~ W
field q(x) ~ U
velocity (u, v, w) along (x, y, z)
";

/// The ranked terms of an equation over [`FIELDS`]: text, process and nominal size.
fn terms(equation: &str) -> Vec<(String, Option<String>, f64)> {
    let output = answers(&format!("{FIELDS}equation a: {equation}\nrank"));
    let terms = &output["answers"][0]["equations"][0]["terms"];
    assert!(terms.is_array(), "{equation}\n{:#}", output["diagnostics"]);
    list(terms)
        .iter()
        .map(|term| {
            let text = |key: &str| term[key].as_str().map(str::to_owned);
            let size = term["size"]["nominal"].as_f64().unwrap();
            (text("text").unwrap(), text("process"), size)
        })
        .collect()
}

fn assert_sizes(equation: &str, expected: &[(&str, f64)]) {
    let found = terms(equation);
    assert_eq!(found.len(), expected.len(), "{equation}: {found:?}");
    for ((text, _, size), (wanted, amount)) in found.iter().zip(expected) {
        assert_eq!(text, wanted, "{equation}");
        assert!(
            near(*size, *amount),
            "{equation}, {text}: {size}, expected {amount}"
        );
    }
}

#[test]
fn a_derivative_is_amplitude_over_length() {
    assert_sizes(
        "d_x(u) + d_y(u) + d_z(u) = 0",
        &[("d_x(u)", 0.02), ("d_y(u)", 0.2), ("d_z(u)", 0.2)],
    );
    // A mixed derivative takes the smallest of its amplitudes.
    assert_sizes(
        "d_x(d_z(u)) + d_x^2(u) = 0",
        &[("d_x(d_z(u))", 0.002), ("d_x^2(u)", 2e-4)],
    );
    assert_sizes(
        "∂²u/∂x∂z + ∂²u/∂x² = 0",
        &[("∂²u/∂x∂z", 0.002), ("∂²u/∂x²", 2e-4)],
    );
}

#[test]
fn flux_form_stays_whole_where_its_factors_vary_alike() {
    assert_sizes(
        "d_x(u*v) + d_y(v*w) = 0",
        &[("d_x(u*v)", 0.04), ("d_y(v*w)", 0.06)],
    );
    // Along y and z the factors vary unlike, so the product rule takes them apart.
    assert_sizes(
        "d_y(u*v) + v^2/M = 0",
        &[("v*d_y(u)", 0.4), ("u*d_y(v)", 0.04), ("v^2/M", 0.4)],
    );
    assert_sizes("d_z(u^2) + u^2/M = 0", &[("d_z(u^2)", 0.8), ("u^2/M", 0.4)]);
    assert_sizes(
        "d_x(u^2) + u^2/M = 0",
        &[("d_x(u^2)", 0.04), ("u^2/M", 0.4)],
    );
}

#[test]
fn what_does_not_depend_on_the_coordinate_moves_out() {
    assert_sizes(
        "d_y(c*q*v) + v*q/M = 0",
        &[("d_y(c*q*v)", 0.28), ("v*q/M", 0.4)],
    );
}

#[test]
fn derivatives_of_what_does_not_vary_vanish_with_a_note() {
    let output = answers(&format!(
        "{FIELDS}equation a: d_y(q) + d_x(q) + q/L = 0\nrank"
    ));
    let notes: Vec<&Value> = list(&output["diagnostics"])
        .iter()
        .filter(|note| note["code"] == "zero-derivative")
        .collect();
    assert_eq!(notes.len(), 1);
    assert_eq!(
        list(&output["answers"][0]["equations"][0]["terms"]).len(),
        2
    );
}

#[test]
fn the_material_derivative_names_its_parts() {
    let found = terms("D_t(v) = u/T");
    let names: Vec<(&str, Option<&str>)> = found
        .iter()
        .map(|(text, process, _)| (text.as_str(), process.as_deref()))
        .collect();
    let expected = [
        ("d_t(v)", Some("tendency")),
        ("u*d_x(v)", Some("advection")),
        ("v*d_y(v)", Some("advection")),
        ("w*d_z(v)", Some("advection")),
        ("u/T", None),
    ];
    assert_eq!(names, expected);
    let renamed = terms("D_t(v) as motion = u/T");
    assert!(
        renamed[..4]
            .iter()
            .all(|(_, process, _)| process.as_deref() == Some("motion"))
    );
}

#[test]
fn the_innermost_process_name_stands() {
    let found = terms("(u/T as inner + v/T) as outer = w/T");
    let names: Vec<Option<&str>> = found
        .iter()
        .map(|(_, process, _)| process.as_deref())
        .collect();
    assert_eq!(names, [Some("inner"), Some("outer"), None]);
    let found = terms("u/T + v/T as last = w/T");
    assert_eq!(found[0].1, None);
    assert_eq!(found[1].1.as_deref(), Some("last"));
}

#[test]
fn two_process_names_may_not_meet_in_one_product() {
    let script = format!("{FIELDS}equation a: (u as one)*(v as two) = w^2\nrank");
    assert_eq!(codes(&script), ["name-clash"]);
}

#[test]
fn sums_inside_products_are_multiplied_out_and_like_terms_collected() {
    assert_sizes(
        "(u + v)*(u - v) = w^2",
        &[("u^2", 4.0), ("v^2", 4.0), ("w^2", 9.0)],
    );
    assert_sizes(
        "(u + v)^2 = w^2",
        &[("u^2", 4.0), ("2*u*v", 8.0), ("v^2", 4.0), ("w^2", 9.0)],
    );
    // What is written twice stays two.
    assert_sizes("u + u = w", &[("u", 2.0), ("u", 2.0), ("w", 3.0)]);
}

#[test]
fn an_expression_may_have_a_size_of_its_own() {
    let script = "scale D = 1e-3 1/s\n".to_owned() + FIELDS;
    let output = answers(&format!(
        "{script}equation a: (d_x(u) + d_y(v) ~ D) as divergence + d_z(w) = 0\nrank"
    ));
    let terms = list(&output["answers"][0]["equations"][0]["terms"]);
    assert_eq!(terms[0]["size"]["nominal"], 1e-3);
    assert_eq!(terms[0]["process"], "divergence");
    let upwards =
        format!("{FIELDS}scale D = 1 1/s\nequation a: (d_x(u) + d_y(v) ~ D) + d_z(w) = 0\nrank");
    assert_eq!(codes(&upwards), ["cancels-upwards"]);
    let root = format!("{FIELDS}equation a: (sqrt(u^2 + v^2) ~ U)*u = w^2\nrank");
    let output = answers(&root);
    assert_eq!(
        output["answers"][0]["equations"][0]["terms"][0]["size"]["nominal"],
        4.0
    );
    let inside = format!(
        "{FIELDS}scale D = 1e-3 1/s\nequation a: (d_x(u) as p + d_y(v) ~ D) + d_z(w) = 0\nrank"
    );
    assert_eq!(codes(&inside), ["unexpected-word"]);
}

#[test]
fn a_constant_that_is_zero_takes_its_terms_out_with_a_note() {
    let script = format!(
        "{FIELDS}constant b = 0 1/s\nequation a: b*u as gone + v/T = w/T\nrank\nshow a.gone"
    );
    let output = answers(&script);
    assert_eq!(
        list(&output["answers"][0]["equations"][0]["terms"]).len(),
        2
    );
    assert_eq!(output["answers"][1]["value"]["nominal"], 0.0);
    assert_eq!(codes(&script), ["zero-constant"]);
}

#[test]
fn the_sign_of_a_constant_does_not_change_sizes() {
    let with = |value: &str| {
        let output = answers(&format!(
            "{FIELDS}constant b = {value}\nequation a: b*u = w/T\nrank"
        ));
        output["answers"][0]["equations"][0]["terms"][0]["size"].clone()
    };
    assert_eq!(with("-2 1/s"), with("2 1/s"));
}

#[test]
fn functions_of_what_varies_are_refused() {
    let script = format!("{FIELDS}equation a: u*exp(v/U) = w\nrank");
    assert_eq!(codes(&script), ["not-split"]);
}

#[test]
fn both_spellings_of_a_derivative_come_to_one_process() {
    let script =
        format!("{FIELDS}equation a: ∂u/∂x + v/L = 0\nbalance b: a {{ d_x(u), v/L }}\nreduce");
    let output = answers(&script);
    assert_eq!(output["answers"][0]["equations"][0]["balance"], "b");
}

#[test]
fn a_balance_under_an_invented_name_is_recognised_just_so() {
    let script = format!(
        "{FIELDS}equation a: u/T as push = v/T as pull\nbalance varn_trot: a {{ push, pull }}\nreduce"
    );
    let output = answers(&script);
    assert_eq!(output["answers"][0]["equations"][0]["balance"], "varn_trot");
}

#[test]
fn an_unknown_process_is_told_with_the_known_ones() {
    let script =
        format!("{FIELDS}equation a: u/T as push = v/T as pull\nclaim leading a = push, pul");
    let output = answers(&script);
    let found = &output["diagnostics"][0];
    assert_eq!(found["code"], "unknown-process");
    assert!(
        found["help"]
            .as_str()
            .is_some_and(|help| help.contains("`pull`"))
    );
}

// Claims --------------------------------------------------------------------------------------

#[test]
fn claims_compare_over_the_whole_range() {
    let met = |claim: &str| {
        let output = answers(&format!(
            "scale U = 5 .. 20 m/s\nscale L = 1 km\nscale V = 0.1 m/s\n{claim}"
        ));
        assert_eq!(
            list(&output["claims"]).len(),
            1,
            "{claim}\n{:#}",
            output["diagnostics"]
        );
        output["claims"][0]["met"] == true
    };
    assert!(met("claim V << U"));
    assert!(!met("claim V << U within 1 %"));
    assert!(met("claim V << U within 2 %"));
    assert!(met("claim U >> V"));
    assert!(met("claim U < 21 m/s"));
    assert!(!met("claim U < 20 m/s"));
    assert!(!met("claim U < 15 m/s"));
    assert!(met("claim U > 4 m/s"));
    assert!(met("claim U = 10 m/s"));
    assert!(met("claim U = 10.5 m/s within 5 %"));
    assert!(!met("claim U = 10.6 m/s within 5 %"));
    assert!(met("claim U ~ 30 m/s"));
    assert!(!met("claim U ~ 32 m/s"));
    assert!(!met("claim U ~ 30 m/s within 2"));
}

#[test]
fn an_unmet_claim_says_by_how_much_and_what_would_have_to_move() {
    let output = answers("scale U = 20 m/s\nscale V = 10 m/s\nclaim V << U");
    let claim = &output["claims"][0];
    assert_eq!(output["outcome"], "unmet");
    assert_eq!(claim["met"], false);
    assert!(near(claim["miss"].as_f64().unwrap(), 5.0));
    let mends = list(&claim["mends"]);
    assert_eq!(mends.len(), 2);
    for mend in mends {
        let factor = mend["factor"].as_f64().unwrap();
        let wanted = if mend["scale"] == "U" { 5.0 } else { 0.2 };
        assert!((factor / wanted - 1.0).abs() < 1e-9, "{mend}");
    }
}
