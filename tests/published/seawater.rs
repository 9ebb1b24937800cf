//! The module `seawater` against TEOS-10 (`tests/reference/seawater.py` makes the values).

use serde_json::Value;

use crate::harness::{Tally, answers, answers_to, read_records, text};

/// What stands before the state in a name, as in the table, and its unit.
const COLUMNS: [(&str, &str); 8] = [
    ("S", "g/kg"),
    ("CT", "degC"),
    ("p", "dbar"),
    ("rho", "kg/m^3"),
    ("alpha", "1/K"),
    ("beta", "kg/g"),
    ("sound", "m/s"),
    ("T", "degC"),
];

#[test]
fn sea_water_of_the_library() {
    let records = read_records("published/seawater.json");
    let mut script = "use seawater\nshow c_p_teos in J/(kg.K)\n".to_owned();
    for record in &records {
        let state = text(&record["case"]);
        for (name, unit) in COLUMNS {
            script.push_str(&format!("show {name}_{state} in {unit}\n"));
        }
    }
    let output = answers(&script);
    let shown = answers_to(&output, "show");
    assert_eq!(
        shown.len(),
        1 + 8 * records.len(),
        "{}",
        output["diagnostics"]
    );
    let amount = |answer: &Value| answer["in"]["value"]["nominal"].as_f64();
    let mut values = shown.iter().map(|answer| amount(answer));
    let mut tally = Tally::default();
    tally.begin("specific heat");
    let specific_heat = values.next().flatten().into();
    tally.number("c_p", &specific_heat, &3_991.867_957_119_63.into(), 1e-14);
    for record in &records {
        tally.begin(&text(&record["case"]));
        for (name, unit) in COLUMNS {
            // A reading in degC comes out of kelvins: its last digits are those of 273.15.
            let offset = if unit == "degC" { 273.15 } else { 0.0 };
            let found = values.next().flatten().map(|found| found + offset);
            let expected = record[name].as_f64().map(|expected| expected + offset);
            tally.number(name, &found.into(), &expected.into(), 1e-14);
        }
    }
    tally.finish("published, sea water", 16, 121);
}
