//! Exact terms of random equations. What comes out of one written term is compared without
//! regard to its order, written terms in theirs.

use serde_json::Value;

use crate::harness::{Tally, answers, answers_to, list, read_records, sorted_map, text};

#[test]
fn scaled_terms() {
    let mut tally = Tally::default();
    for record in read_records("reference/nondimensional.json") {
        tally.begin(&text(&record["case"]));
        compare(&mut tally, &record, &answers(&text(&record["script"])));
    }
    tally.finish("reference, scaled terms", 240, 9178);
}

fn compare(tally: &mut Tally, record: &Value, output: &Value) {
    let ranked = terms_of(output, "rank");
    let divided = terms_of(output, "nondimensionalize");
    let written = list(&record["terms"]);
    let n_terms: usize = written
        .iter()
        .map(|written| list(&written["terms"]).len())
        .sum();
    tally.same("ranked terms", ranked.len(), n_terms);
    tally.same("dimensionless terms", divided.len(), n_terms);
    if ranked.len() != n_terms || divided.len() != n_terms {
        tally.fault(format!("{}", output["diagnostics"]));
        return;
    }
    let sizes = written.iter().flat_map(|written| list(&written["terms"]));
    let largest = sizes
        .filter_map(|term| term[3].as_f64())
        .fold(0.0, f64::max);
    let mut at = 0;
    for written in written {
        let end = at + list(&written["terms"]).len();
        compare_ranked(tally, &ranked[at..end], written);
        compare_divided(tally, &divided[at..end], written, largest);
        at = end;
    }
}

fn terms_of<'a>(output: &'a Value, request: &str) -> &'a [Value] {
    let first = answers_to(output, request).first().copied();
    first.map_or(&[], |answer| list(&answer["equations"][0]["terms"]))
}

/// A term as it is compared: what is exact about it, and its size.
type Scaled = (String, f64);

fn compare_ranked(tally: &mut Tally, found: &[Value], written: &Value) {
    let of_found = |term: &Value| {
        let exact = exact(&term["process"], &term["number"], &term["exponents"]);
        (exact, term["size"]["nominal"].as_f64().unwrap_or(f64::NAN))
    };
    let of_written = |term: &Value| {
        let amount = text(&term[1]).trim_start_matches('-').to_owned();
        (
            exact(&term[0], &amount.into(), &term[2]),
            term[3].as_f64().unwrap_or(0.0),
        )
    };
    let sides_agree = found.iter().all(|term| term["side"] == written["side"]);
    tally.same("side", sides_agree, true);
    let expected = sorted(list(&written["terms"]).iter().map(of_written));
    compare_scaled(
        tally,
        "size",
        &sorted(found.iter().map(of_found)),
        &expected,
    );
}

/// With the sign that the term has on its side, and divided by the largest.
fn compare_divided(tally: &mut Tally, found: &[Value], written: &Value, largest: f64) {
    let of_found = |term: &Value| {
        let exact = exact(&term["process"], &term["number"], &term["exponents"]);
        let coefficient = term["coefficient"]["value"]["nominal"].as_f64();
        (exact, coefficient.map_or(f64::NAN, f64::abs))
    };
    let of_written = |term: &Value| {
        let size = term[3].as_f64().unwrap_or(0.0);
        (exact(&term[0], &term[1], &term[2]), size / largest)
    };
    let expected = sorted(list(&written["terms"]).iter().map(of_written));
    compare_scaled(
        tally,
        "coefficient",
        &sorted(found.iter().map(of_found)),
        &expected,
    );
}

fn exact(process: &Value, number: &Value, exponents: &Value) -> String {
    let powers: Vec<String> = sorted_map(exponents)
        .into_iter()
        .map(|(name, power)| format!("{name}^{}", text(power)))
        .collect();
    format!("{process}: {} {}", text(number), powers.join(" "))
}

fn sorted(terms: impl Iterator<Item = Scaled>) -> Vec<Scaled> {
    let mut terms: Vec<Scaled> = terms.collect();
    terms.sort_by(|a, b| a.0.cmp(&b.0).then(a.1.total_cmp(&b.1)));
    terms
}

fn compare_scaled(tally: &mut Tally, what: &str, found: &[Scaled], expected: &[Scaled]) {
    for (found, expected) in found.iter().zip(expected) {
        tally.same("term", &found.0, &expected.0);
        let what = format!("{what} of {}", expected.0);
        tally.number(&what, &found.1.into(), &expected.1.into(), 1e-9);
    }
}
