//! What the tests against stored values share: how a script is answered, how numbers are
//! compared, and how a run is counted and reported. The values stand beside the tests that
//! use them.

pub(crate) mod jets;

use std::collections::BTreeMap;
use std::fs;
use std::io::Write;
use std::path::PathBuf;
use std::sync::LazyLock;

use jsonschema::Validator;
use serde_json::Value;

/// The answers to a script, as the JSON object that the command line prints.
pub(crate) fn answers(script: &str) -> Value {
    scalewright::run_to_json("case.scl", script)
}

/// Where a whole output departs from the schema of the answers.
pub(crate) fn schema_faults(output: &Value) -> Vec<String> {
    static SCHEMA: LazyLock<Validator> = LazyLock::new(|| {
        let schema: Value = serde_json::from_str(&read("../grammar/answers.schema.json"))
            .expect("the schema is JSON");
        jsonschema::validator_for(&schema).expect("the schema is one")
    });
    let faults = SCHEMA.iter_errors(output);
    faults
        .map(|fault| format!("schema, {}: {}", fault.instance_path(), fault.masked()))
        .collect()
}

/// The answers to one request, in order.
pub(crate) fn answers_to<'a>(output: &'a Value, request: &str) -> Vec<&'a Value> {
    let of_request = |answer: &&Value| answer["request"] == request;
    list(&output["answers"]).iter().filter(of_request).collect()
}

/// The entry of a list whose field `key` holds this text; null if there is none.
pub(crate) fn entry<'a>(entries: &'a Value, key: &str, text: &str) -> &'a Value {
    let found = list(entries).iter().find(|entry| entry[key] == text);
    found.unwrap_or(&Value::Null)
}

/// The elements of a JSON list; none of anything else.
pub(crate) fn list(value: &Value) -> &[Value] {
    value.as_array().map_or(&[], Vec::as_slice)
}

/// A JSON object in the order of its keys.
pub(crate) fn sorted_map(value: &Value) -> BTreeMap<&String, &Value> {
    value.as_object().into_iter().flatten().collect()
}

/// The texts of a JSON list, sorted.
pub(crate) fn sorted_texts(value: &Value) -> Vec<String> {
    let mut texts: Vec<String> = list(value).iter().map(text).collect();
    texts.sort();
    texts
}

/// A JSON text as it is, anything else as JSON.
pub(crate) fn text(value: &Value) -> String {
    value
        .as_str()
        .map_or_else(|| value.to_string(), str::to_owned)
}

/// A file below `tests/`, read as text.
pub(crate) fn read(path: &str) -> String {
    let path = PathBuf::from(env!("CARGO_MANIFEST_DIR"))
        .join("tests")
        .join(path);
    fs::read_to_string(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
}

/// The records of a stored JSON list.
pub(crate) fn read_records(path: &str) -> Vec<Value> {
    let records: Value = serde_json::from_str(&read(path)).expect("stored records are JSON");
    list(&records).to_vec()
}

/// Counts the comparisons of a run and collects those that fail.
#[derive(Default)]
pub(crate) struct Tally {
    cases: usize,
    compared: usize,
    faults: Vec<String>,
    case: String,
}

impl Tally {
    /// Begins the next case, named in its faults.
    pub(crate) fn begin(&mut self, case: &str) {
        self.cases += 1;
        self.case = case.to_owned();
    }

    /// Records a failure of the present case.
    pub(crate) fn fault(&mut self, fault: impl AsRef<str>) {
        self.faults
            .push(format!("{}: {}", self.case, fault.as_ref()));
    }

    /// Compares two numbers to a relative margin; a number that is missing on both sides is equal.
    pub(crate) fn number(&mut self, what: &str, found: &Value, expected: &Value, within: f64) {
        self.compared += 1;
        let equal = match (found.as_f64(), expected.as_f64()) {
            (Some(found), Some(expected)) => is_close(found, expected, within),
            (None, None) => found.is_null() && expected.is_null(),
            (Some(_), None) | (None, Some(_)) => false,
        };
        if !equal {
            self.fault(format!("{what}: expected {expected}, found {found}"));
        }
    }

    /// Compares two values that must be the same.
    pub(crate) fn same<T: PartialEq + std::fmt::Debug>(
        &mut self,
        what: &str,
        found: T,
        expected: T,
    ) {
        self.compared += 1;
        if found != expected {
            self.fault(format!("{what}: expected {expected:?}, found {found:?}"));
        }
    }

    /// Says how much was compared, then fails if anything differed or too little was compared.
    pub(crate) fn finish(self, name: &str, least_cases: usize, least_compared: usize) {
        let line = format!(
            "{name}: {} cases, {} comparisons\n",
            self.cases, self.compared
        );
        // Written past the capture of the test runner, so that a plain run shows the figures.
        std::io::stderr()
            .write_all(line.as_bytes())
            .expect("the terminal takes a line");
        let n_faults = self.faults.len();
        assert!(
            n_faults == 0,
            "{name}: {n_faults} differ\n{}",
            self.faults.join("\n")
        );
        assert!(
            self.cases >= least_cases,
            "{line}at least {least_cases} cases are due"
        );
        assert!(
            self.compared >= least_compared,
            "{line}at least {least_compared} are due"
        );
    }
}

fn is_close(found: f64, expected: f64, within: f64) -> bool {
    found == expected || (found - expected).abs() <= within * expected.abs().max(found.abs())
}

#[test]
fn schema_wants_every_field() {
    let mut output = serde_json::json!({
        "format": 1, "script": "case.scl", "outcome": "ok",
        "diagnostics": [], "symbols": [], "answers": [], "claims": []
    });
    assert_eq!(schema_faults(&output), Vec::<String>::new());
    output["answers"] =
        serde_json::json!([{ "request": "layers", "phenomenon": null, "text": "" }]);
    assert!(!schema_faults(&output).is_empty());
}
