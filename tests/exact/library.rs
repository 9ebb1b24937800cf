//! The library as it is shown: every module within 80 columns, and at its end a script that
//! runs once it is given values.

use std::path::PathBuf;

use scalewright::analysis::shelf::{Shelf, Start, shelf};
use scalewright::model::library::{MODULES, Module};
use scalewright::model::modules::{Main, NoFiles};
use scalewright::report::shelf as view;
use scalewright::{Session, Status};
use unicode_width::UnicodeWidthStr;

fn gathered(module: &Module) -> Shelf {
    let main = Main {
        name: module.name.to_owned(),
        text: module.text.to_owned(),
        path: None,
        folder: PathBuf::new(),
        root: PathBuf::new(),
    };
    shelf(&main, &NoFiles).unwrap_or_else(|(errors, _)| panic!("{}: {errors:?}", module.name))
}

fn module(name: &str) -> Shelf {
    gathered(scalewright::model::library::find(name).expect("the module is bundled"))
}

/// What stands below the line: the script to begin with.
fn starter(shown: &str) -> &str {
    let line = "─".repeat(80);
    shown
        .split_once(&line)
        .expect("a line stands before the script")
        .1
}

#[test]
fn momentum_of_the_air_runs_with_five_values() {
    let shown = view::shelf(&module("atmosphere.momentum"));
    let mut script = starter(&shown).to_owned();
    assert_eq!(script.matches(view::BLANK).count(), 5, "{script}");
    for (blank, given) in [
        ("U = ___", "U = 10"),
        ("L = ___", "L = 1000"),
        ("H = ___", "H = 10e3"),
        ("dP = ___", "dP = 1200"),
        ("phi = ___", "phi = 45"),
    ] {
        script = script.replace(blank, given);
    }
    let outcome = Session::new().run("my_case.scl", &script, None);
    assert_eq!(
        outcome.status(),
        Status::Ok,
        "{}",
        outcome.drawn(false, |_| true)
    );
    assert_eq!(outcome.answers.len(), 2);
    let json = scalewright::report::json::outcome(&outcome);
    let reduced = &json["answers"][1]["equations"];
    assert_eq!(reduced[0]["balance"], "geostrophic", "{json}");
    assert_eq!(reduced[2]["balance"], "hydrostatic");
}

#[test]
fn every_module_is_shown_and_its_script_runs() {
    for bundled in MODULES {
        let gathered = gathered(bundled);
        let shown = view::shelf(&gathered);
        let Start::Values { .. } = gathered.start else {
            assert!(shown.ends_with(bundled.text), "{}", bundled.name);
            continue;
        };
        for line in shown.lines() {
            assert!(line.width() <= 80, "{}: {line}", bundled.name);
        }
        let script = starter(&shown).replace(view::BLANK, "1");
        let outcome = Session::new().run("case.scl", &script, None);
        let drawn = outcome.drawn(false, |found| found.is_error());
        assert_ne!(
            outcome.status(),
            Status::Invalid,
            "{}\n{script}\n{drawn}",
            bundled.name
        );
        assert!(!outcome.answers.is_empty(), "{}", bundled.name);
    }
}

#[test]
fn equations_are_shown_as_on_paper_with_their_processes() {
    let shown = view::shelf(&module("atmosphere.momentum"));
    for line in [
        "      Du/Dt           tendency, advection",
        "    - u v tan(φ)/a    curvature",
        "    = -(1/ρ) ∂p/∂x    pressure_gradient",
        "    + ν ∂²u/∂z²       friction",
    ] {
        let words: Vec<&str> = line.split_whitespace().collect();
        let is_there = |shown: &&str| shown.split_whitespace().eq(words.iter().copied());
        assert!(
            shown.lines().any(|shown| is_there(&shown)),
            "{line}\n{shown}"
        );
    }
    assert!(shown.contains("from base.rotation_numbers"));
}

#[test]
fn of_the_constants_of_another_module_those_in_use_are_shown() {
    let main = Main {
        name: "cooling.scl".to_owned(),
        text: "use seawater\nscale Q_f in W/m^2\nscale dT_f in K\n\
            group fall = alpha_surface_10*dT_f"
            .to_owned(),
        path: None,
        folder: PathBuf::new(),
        root: PathBuf::new(),
    };
    let gathered = shelf(&main, &NoFiles).expect("it is sound");
    let given: Vec<&str> = gathered
        .given
        .iter()
        .map(|item| item.held.name.text.as_str())
        .collect();
    assert_eq!(given, ["alpha_surface_10"]);
    let all = module("seawater").given.len();
    assert_eq!(gathered.spare, [("seawater".to_owned(), all - 1)]);
    let shown = view::shelf(&gathered);
    let counted = format!("also given  {} of seawater, ", all - 1);
    assert!(shown.contains(&counted), "{shown}");
    assert!(!shown.contains("alpha_surface_20"), "{shown}");
}

#[test]
fn the_list_has_one_line_a_module() {
    let list = view::list(MODULES);
    assert!(list.lines().all(|line| line.width() <= 80), "{list}");
    for module in MODULES {
        let named = list
            .lines()
            .filter(|line| line.split_whitespace().next() == Some(module.name));
        assert_eq!(named.count(), 1, "{}", module.name);
    }
}

#[test]
fn a_script_is_printed_in_its_canonical_form_with_comments() {
    let script = "# head\nscale U=10 m/s  # wind\n\n\nscale L  = 1 km\nshow U/L # rate";
    let outcome = Session::new().check("a.scl", script, None);
    let printed = outcome.canonical().expect("there is a script");
    assert_eq!(
        printed,
        "# head\nscale U = 10 m/s  # wind\n\nscale L = 1 km\nshow U/L  # rate\n"
    );
}

#[test]
fn a_shelf_of_declarations_can_be_checked() {
    let shelf = "scale U in m/s  scale L in m  constant nu in m^2/s  group Re = U*L/nu";
    assert_eq!(
        Session::new().check("shelf.scl", shelf, None).status(),
        Status::Ok
    );
    assert_eq!(
        Session::new().run("shelf.scl", shelf, None).status(),
        Status::Invalid
    );
}

/// The row of the tables in grammar/library.md that begins with this name.
fn has_row(table: &str, name: &str, cell: &str) -> bool {
    let start = format!("| `{name}` |");
    let mut rows = table.lines().filter(|line| line.starts_with(&start));
    rows.any(|row| row.contains(&format!("| `{cell}` |")))
}

#[test]
fn every_open_symbol_stands_in_the_table_of_the_library() {
    let table = crate::harness::read("../grammar/library.md");
    for bundled in MODULES
        .iter()
        .filter(|module| !module.name.starts_with("demo."))
    {
        let own = gathered(bundled)
            .open
            .into_iter()
            .filter(|open| open.from.is_none());
        for open in own.map(|item| item.held) {
            assert!(
                has_row(&table, &open.name, &open.unit),
                "{}: {}",
                bundled.name,
                open.name
            );
        }
    }
}
