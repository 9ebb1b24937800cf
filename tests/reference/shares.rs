//! Lowest, nominal and highest shares over boxes of scales.

use serde_json::Value;

use crate::harness::{Tally, answers, answers_to, entry, list, read_records, text};

#[test]
fn shares_over_boxes() {
    let mut tally = Tally::default();
    let records = read_records("reference/shares.json");
    // Cases that corners alone would not settle.
    let n_with = |field: &str| {
        records
            .iter()
            .filter(|case| !list(&case[field]).is_empty())
            .count()
    };
    assert!(n_with("inside") >= 15 && n_with("between") >= 15);
    for record in &records {
        tally.begin(&text(&record["case"]));
        compare(&mut tally, record, &answers(&text(&record["script"])));
    }
    tally.finish("reference, shares", 140, 7260);
}

fn compare(tally: &mut Tally, record: &Value, output: &Value) {
    let Some(answer) = answers_to(output, "rank").first().copied() else {
        tally.fault(format!("not ranked: {}", output["diagnostics"]));
        return;
    };
    let equation = &answer["equations"][0];
    let (terms, expected) = (list(&equation["terms"]), list(&record["terms"]));
    tally.same("terms", terms.len(), expected.len());
    for (term, expected) in terms.iter().zip(expected) {
        compare_share(tally, &text(&term["text"]), term, expected);
    }
    let processes = record["processes"].as_object().into_iter().flatten();
    for (name, expected) in processes {
        let process = entry(&equation["processes"], "process", name);
        compare_share(tally, name, process, expected);
    }
}

fn compare_share(tally: &mut Tally, what: &str, found: &Value, expected: &Value) {
    for (i, field) in ["low", "nominal", "high"].into_iter().enumerate() {
        let what = format!("{what}, {field}");
        tally.number(&what, &found["share"][field], &expected[i], 1e-9);
    }
    tally.same(&format!("{what}, verdict"), &found["verdict"], &expected[3]);
}
