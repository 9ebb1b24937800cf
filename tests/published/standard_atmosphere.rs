//! The standard atmosphere against values from its definition and its printed tables.

use scalewright::units::StandardAtmosphere;
use serde_json::Value;

fn check(table: &str, tolerance: f64, at_least: usize) {
    let data: Value = serde_json::from_str(include_str!("standard_atmosphere.json")).unwrap();
    let rows = data[table].as_array().unwrap();
    assert!(rows.len() >= at_least);
    for row in rows {
        let height = row["z"].as_f64().unwrap();
        for (quantity, column) in [
            (StandardAtmosphere::Temperature, "T"),
            (StandardAtmosphere::Pressure, "p"),
            (StandardAtmosphere::Density, "rho"),
        ] {
            let expected = row[column].as_f64().unwrap();
            let found = quantity.at(height).unwrap();
            let error = (found / expected - 1.0).abs();
            assert!(
                error < tolerance,
                "{column} at {height} m: {found}, {expected}"
            );
        }
    }
}

#[test]
fn every_height_of_the_computed_table_agrees() {
    check("rows", 1e-12, 50);
}

#[test]
fn the_printed_tables_agree_to_their_digits() {
    check("printed", 1e-4, 8);
}

#[test]
fn oxygen_parts_above_80_km() {
    // 186.946 K is the molecular-scale temperature at 86 km.
    let temperature = |height| StandardAtmosphere::Temperature.at(height).unwrap();
    assert!((temperature(86_000.0) / 186.8673 - 1.0).abs() < 1e-6);
    assert!((temperature(86_000.0) / 186.946 - 0.999_579).abs() < 1e-6);
    // Below the parting nothing changes.
    assert!((temperature(80_000.0) / 198.638_576_250_868_82 - 1.0).abs() < 1e-12);
}
