//! The bundled library in use: every module has an example, `examples/NAME.scl`, whose claims
//! hold it to something known outside the project; every demonstration holds; and modules may
//! be used together.

use std::fs;
use std::path::PathBuf;

use scalewright::model::library::{MODULES, Module};
use scalewright::{Session, report};
use serde_json::Value;
use unicode_width::UnicodeWidthStr;

use crate::harness::{answers, list, text};

fn folder() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("tests/library/examples")
}

fn example_of(module: &str) -> Option<String> {
    fs::read_to_string(folder().join(format!("{module}.scl"))).ok()
}

fn has_use(script: &str, module: &str) -> bool {
    let mut lines = script.lines().map(|line| line.split('#').next());
    lines.any(|line| line.is_some_and(|line| line.trim() == format!("use {module}")))
}

fn is_demo(module: &&Module) -> bool {
    module.name.starts_with("demo.")
}

/// What keeps a script from being a sound example: errors and warnings, claims that are not
/// met, no claim at all.
fn faults(script: &str) -> Vec<String> {
    let output = answers(script);
    let mut faults = Vec::new();
    let said = list(&output["diagnostics"]).iter();
    for found in said.filter(|found| found["severity"] != "note") {
        let (severity, message) = (text(&found["severity"]), text(&found["message"]));
        faults.push(format!(
            "{severity} {}: {message}, {}",
            found["code"], found["span"]
        ));
    }
    let claims = list(&output["claims"]);
    if claims.is_empty() {
        faults.push("no claim".to_owned());
    }
    for claim in claims
        .iter()
        .filter(|claim| claim["met"] != Value::Bool(true))
    {
        let (said, measured) = (text(&claim["text"]), &claim["measured"]);
        faults.push(format!("not met: {said} ({measured})"));
    }
    if faults.is_empty() && output["outcome"] != "ok" {
        faults.push(format!("outcome {}", output["outcome"]));
    }
    faults
}

#[test]
fn every_module_has_an_example_that_holds() {
    let mut found = Vec::new();
    let mut used = String::new();
    for module in MODULES.iter().filter(|module| !is_demo(module)) {
        let Some(script) = example_of(module.name) else {
            if !module.name.starts_with("base.") {
                found.push(format!("{}: no example", module.name));
            }
            continue;
        };
        if !has_use(&script, module.name) {
            found.push(format!("{}: its example does not use it", module.name));
        }
        let faults = faults(&script);
        found.extend(
            faults
                .iter()
                .map(|fault| format!("{}: {fault}", module.name)),
        );
        used.push_str(&script);
        used.push('\n');
    }
    for base in MODULES
        .iter()
        .filter(|module| module.name.starts_with("base."))
    {
        if !has_use(&used, base.name) {
            found.push(format!("{}: no example uses it", base.name));
        }
    }
    assert!(found.is_empty(), "{}", found.join("\n"));
}

#[test]
fn every_example_belongs_to_a_module() {
    let examples = fs::read_dir(folder()).expect("the examples are there");
    for example in examples {
        let name = example.expect("a file").file_name();
        let name = name.to_string_lossy().into_owned();
        let module = name.strip_suffix(".scl").unwrap_or_default();
        assert!(
            MODULES.iter().any(|bundled| bundled.name == module),
            "{name}"
        );
    }
}

#[test]
fn every_demonstration_holds() {
    let mut found = Vec::new();
    for demo in MODULES.iter().filter(is_demo) {
        let faults = faults(demo.text);
        found.extend(faults.iter().map(|fault| format!("{}: {fault}", demo.name)));
    }
    assert!(found.is_empty(), "{}", found.join("\n"));
}

#[test]
fn reports_of_demonstrations_fit_a_terminal() {
    for demo in MODULES.iter().filter(is_demo) {
        let outcome = Session::new().run(demo.name, demo.text, None);
        let report = report::text::report(&outcome, false);
        for line in report.lines() {
            assert!(line.width() <= 80, "{}: {line}", demo.name);
        }
    }
}

#[test]
fn of_many_dropped_terms_those_far_below_the_tolerance_are_counted() {
    let demo = scalewright::model::library::find("demo.sphere").expect("it is bundled");
    let outcome = Session::new().run(demo.name, demo.text, None);
    let report = report::text::report(&outcome, false);
    let dropped = list(&answers(demo.text)["answers"][0]["equations"][0]["dropped"]).len();
    let unwrapped = report.split_whitespace().collect::<Vec<_>>().join(" ");
    let first = unwrapped.split(" error ").next().unwrap_or_default();
    let (_, listed) = first.split_once(" dropped ").expect("terms are dropped");
    let terms: Vec<&str> = listed.split(", ").collect();
    let (last, named) = terms.split_last().expect("some are listed");
    let counted: usize = last
        .split(' ')
        .next()
        .unwrap_or_default()
        .parse()
        .expect("a count");
    assert!(last.contains("more of at most"), "{last}");
    assert_eq!(named.len() + counted, dropped);
    assert!(
        named.iter().any(|term| term.starts_with("u*w/a ")),
        "{named:?}"
    );
}

/// The errors and warnings of a script that uses these modules and asks nothing of them.
fn clashes(modules: &[&str]) -> Vec<String> {
    let uses: Vec<String> = modules.iter().map(|name| format!("use {name}\n")).collect();
    let output = answers(&format!("{}show 1\n", uses.concat()));
    let said = list(&output["diagnostics"]).iter();
    let errors = said.filter(|found| found["severity"] != "note");
    errors.map(|found| text(&found["message"])).collect()
}

/// A module with a frame has a velocity of its own, along the coordinates of the frame.
fn has_frame(module: &Module) -> bool {
    module.text.lines().any(|line| line.starts_with("frame "))
}

/// Whether a module can stand beside one with a frame: it holds values and groups alone.
fn is_of_values(module: &Module) -> bool {
    let names = [
        "constants",
        "named_groups",
        "base.latitude",
        "settings.midlatitude_cyclone",
    ];
    names.contains(&module.name)
}

fn is_setting(module: &Module) -> bool {
    module.name.starts_with("settings.")
}

/// The modules that a module of typical ranges says it goes with.
fn goes_with(setting: &Module) -> Vec<String> {
    let named = setting
        .text
        .split("# Goes with ")
        .nth(1)
        .unwrap_or_default();
    let named = named.split("#\n").next().unwrap_or_default().split('`');
    named.skip(1).step_by(2).map(str::to_owned).collect()
}

#[test]
fn typical_ranges_rank_the_equations_they_go_with() {
    for setting in MODULES.iter().filter(|module| is_setting(module)) {
        let equations = goes_with(setting);
        assert!(!equations.is_empty(), "{}", setting.name);
        for equations in equations {
            let script = format!("use {}\nuse {equations}\nrank\nreduce\n", setting.name);
            let output = answers(&script);
            let pair = format!("{} with {equations}", setting.name);
            let said = list(&output["diagnostics"]).iter();
            let grave: Vec<_> = said.filter(|found| found["severity"] != "note").collect();
            assert!(grave.is_empty(), "{pair}: {grave:?}");
            for answer in list(&output["answers"]) {
                assert_eq!(list(&answer["left_out"]).len(), 0, "{pair}: {answer}");
            }
        }
    }
}

#[test]
fn a_value_of_a_script_takes_the_place_of_a_typical_range() {
    let shared = "use settings.midlatitude_cyclone\nuse atmosphere.momentum\nshow U\n";
    for own in ["scale U = 7 m/s", "phenomenon low { scale U = 7 m/s }"] {
        let output = answers(&format!("{shared}{own}\n"));
        let said = list(&output["diagnostics"]);
        assert_eq!(said.len(), 1, "{said:?}");
        assert_eq!(said[0]["code"], "value-overridden");
        assert_eq!(said[0]["severity"], "note");
        assert_eq!(output["answers"][0]["value"]["nominal"], 7.0, "{output}");
    }
}

#[test]
fn modules_can_be_used_together() {
    let modules = || MODULES.iter().filter(|module| !is_demo(module));
    let plain = modules().filter(|module| !has_frame(module) && !is_setting(module));
    let plain: Vec<&str> = plain.map(|module| module.name).collect();
    assert_eq!(clashes(&plain), Vec::<String>::new());
    for setting in modules().filter(|module| is_setting(module)) {
        let equations = goes_with(setting);
        let mut with: Vec<&str> = equations.iter().map(String::as_str).collect();
        with.extend(["constants", "named_groups", setting.name]);
        assert_eq!(clashes(&with), Vec::<String>::new(), "{}", setting.name);
    }
    for framed in modules().filter(|module| has_frame(module)) {
        let of_values = modules().filter(|module| is_of_values(module));
        let mut names: Vec<&str> = of_values.map(|module| module.name).collect();
        names.push(framed.name);
        assert_eq!(clashes(&names), Vec::<String>::new(), "{}", framed.name);
    }
}
