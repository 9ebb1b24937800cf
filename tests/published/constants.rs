//! The module `constants` against the published values.

use serde_json::Value;

use crate::harness::{Tally, answers, answers_to, read_records, text};

/// A published constant and what it is in the library.
#[rustfmt::skip]
const NAMES: [(&str, &str); 43] = [
    ("c",        "c_light"),
    ("G",        "G_newton"),
    ("h",        "h_planck"),
    ("k",        "k_B"),
    ("N_A",      "N_A"),
    ("R",        "R_universal"),
    ("e",        "e_charge"),
    ("sigma_SB", "sigma_SB"),
    ("b_W",      "b_Wien"),
    ("mu_0",     "mu_vacuum"),
    ("eps_0",    "eps_vacuum"),
    ("m_u",      "m_u"),
    ("g_n",      "g_n"),
    ("a",        "a_earth"),
    ("1/f",      "1/f_earth"),
    ("f",        "f_earth"),
    ("b",        "b_earth"),
    ("e^2",      "f_earth*(2 - f_earth)"),
    ("R_1",      "R_earth"),
    ("GM",       "GM_earth"),
    ("omega",    "Omega_earth"),
    ("T_sid",    "T_sidereal"),
    ("f_30",     "2*Omega_earth*sin(30 deg)"),
    ("f_45",     "2*Omega_earth*sin(45 deg)"),
    ("f_60",     "2*Omega_earth*sin(60 deg)"),
    ("f_90",     "2*Omega_earth*sin(90 deg)"),
    ("beta_0",   "2*Omega_earth*cos(0 deg)/R_earth"),
    ("beta_30",  "2*Omega_earth*cos(30 deg)/R_earth"),
    ("beta_45",  "2*Omega_earth*cos(45 deg)/R_earth"),
    ("beta_60",  "2*Omega_earth*cos(60 deg)/R_earth"),
    ("R*",       "R_std"),
    ("M_0",      "M_std"),
    ("R_d",      "R_dry"),
    ("T_0",      "T_std"),
    ("P_0",      "p_std"),
    ("rho_0",    "rho_std"),
    ("gamma",    "gamma_std"),
    ("r_0",      "r_std"),
    ("beta_S",   "beta_std"),
    ("S",        "S_std"),
    ("p_ref",    "p_ref"),
    ("S_0",      "S_solar"),
    ("rho_Boussinesq", "rho_sea"),
];

#[test]
fn constants_of_the_library() {
    let records = read_records("published/constants.json");
    let shows = records.iter().map(|record| {
        let symbol = text(&record["symbol"]);
        let name = NAMES.iter().find(|(found, _)| *found == symbol);
        let (_, name) = name.unwrap_or_else(|| panic!("no constant for {symbol}"));
        let unit = text(&record["unit"]);
        format!("show {name} in {unit}\n")
    });
    let script: String = std::iter::once("use constants\n".to_owned())
        .chain(shows)
        .collect();
    let output = answers(&script);
    let shown = answers_to(&output, "show");
    let mut tally = Tally::default();
    for (i, record) in records.iter().enumerate() {
        tally.begin(&text(&record["symbol"]));
        let found = shown
            .get(i)
            .map_or(&Value::Null, |answer| &answer["in"]["value"]["nominal"]);
        let amount: f64 = text(&record["amount"])
            .parse()
            .expect("an amount is a number");
        tally.number("amount", found, &amount.into(), 1e-14);
    }
    if shown.len() != records.len() {
        tally.fault(format!("{}", output["diagnostics"]));
    }
    tally.finish("published, constants", 43, 43);
}
