//! A saved module gives the leading order that it was saved from, run by itself or used.

use std::path::{Path, PathBuf};

use scalewright::analysis::reduce::{Lone, ReducedEquation, Reduction};
use scalewright::analysis::{Answer, Body};
use scalewright::model::modules::Files;
use scalewright::{Outcome, Session};

use super::scripts;
use crate::harness::Tally;

/// One file in memory.
struct OneFile {
    name: &'static str,
    text: String,
}

impl Files for OneFile {
    fn canonical(&self, path: &Path) -> Result<PathBuf, String> {
        Ok(Path::new("/memory").join(path))
    }

    fn read(&self, path: &Path) -> Result<Vec<u8>, String> {
        match path.ends_with(self.name) {
            true => Ok(self.text.clone().into_bytes()),
            false => Err("there is no such file".to_owned()),
        }
    }
}

fn reductions(outcome: &Outcome) -> Vec<(&Answer, &Reduction)> {
    let mut found = Vec::new();
    for answer in &outcome.answers {
        if let Body::Reduce(reduction) = &answer.body {
            found.push((answer, reduction));
        }
    }
    found
}

/// What must be the same.
fn essence(equation: &ReducedEquation) -> String {
    let terms: Vec<String> = equation
        .kept
        .iter()
        .map(|term| {
            format!(
                "{:?}: {} {:.9e}",
                term.process,
                term.verdict.word(),
                term.share.nominal
            )
        })
        .collect();
    format!(
        "{}: {}\n{:?} leads, {:?}, put in: {}\n{}",
        equation.name,
        equation.reduced,
        equation.leading,
        equation.balance,
        equation.by_construction,
        terms.join("\n")
    )
}

fn standing(reduction: &Reduction) -> Vec<String> {
    let equations = reduction.equations.iter();
    let stands = equations.filter(|equation| !matches!(equation.lone, Some(Lone::Term { .. })));
    stands.map(essence).collect()
}

#[test]
fn a_saved_module_gives_the_same_leading_order() {
    let mut tally = Tally::default();
    for (name, script) in scripts() {
        let plain = Session::new().run(&name, &format!("{script}\nreduce\n"), None);
        let answers = reductions(&plain);
        let n_cases = plain
            .symbols
            .iter()
            .filter_map(|row| row.phenomenon.as_ref())
            .collect::<std::collections::BTreeSet<_>>()
            .len();
        let last = answers.len().saturating_sub(n_cases.max(1));
        for (answer, reduction) in &answers[last..] {
            if standing(reduction).is_empty() {
                continue;
            }
            let whose = answer.phenomenon.as_ref();
            let whose = whose.map(|name| format!(" for {name}")).unwrap_or_default();
            tally.begin(&format!("{name}{whose}"));
            compare(&mut tally, &script, &whose, reduction);
        }
    }
    tally.finish("saved modules", 50, 100);
}

fn compare(tally: &mut Tally, script: &str, whose: &str, reduction: &Reduction) {
    let asking = format!("{script}\nreduce save \"reduced.scl\"{whose}\n");
    let outcome = Session::new().run("script.scl", &asking, None);
    let [saved] = outcome.saved.as_slice() else {
        tally.fault(outcome.drawn(false, |found| found.is_error()));
        return;
    };
    let alone = Session::new().run("reduced.scl", &saved.text, None);
    let files = OneFile {
        name: "reduced.scl",
        text: saved.text.clone(),
    };
    let tolerance = saved.text.lines().last().unwrap_or_default();
    let using = format!("use \"reduced.scl\"\n{tolerance}\nreduce\n");
    let used = Session::new()
        .with_files(&files, "")
        .run("using.scl", &using, None);
    for (what, outcome) in [("alone", &alone), ("used", &used)] {
        let found = reductions(outcome);
        let found = found.last().map(|(_, reduction)| standing(reduction));
        tally.same(what, found, Some(standing(reduction)));
        if outcome.diagnostics.iter().any(|found| found.is_error()) {
            tally.fault(format!(
                "{}\n{}",
                outcome.drawn(false, |found| found.is_error()),
                saved.text
            ));
        }
    }
}

#[test]
fn a_displacement_is_saved_as_a_difference() {
    let script = "
        constant phi_0 = 45 deg
        constant a = 6371 km
        scale L = 1500 km
        scale U = 10 m/s
        coordinate phi ~ L/a about phi_0
        field u, v(phi) ~ U
        equation turning: sin(phi)*u = v as balance_by_v
        reduce save \"turning.scl\"
    ";
    let outcome = Session::new().run("turns.scl", script, None);
    let text = &outcome.saved[0].text;
    assert!(text.contains("cos(phi_0)*(phi - phi_0)*u"), "{text}");
    let again = Session::new().run("turning.scl", text, None);
    let (first, second) = (reductions(&outcome), reductions(&again));
    assert_eq!(standing(first[0].1), standing(second[0].1));
}

#[test]
fn a_module_says_where_it_comes_from() {
    let script = "
        scale U = 10 m/s within 2 \"wind\" from \"mast V3\"
        scale L = 1000 km  scale T = L/U
        constant f = 1e-4 1/s
        coordinate x ~ L
        coordinate t ~ T
        field u, v(x, t) ~ U
        velocity (u) along (x)
        equation turning: D_t(u) = f*v as coriolis + (1e-9 1/s)*u as \"slow drag\"
        reduce within 12.5 % save \"turning.scl\"
    ";
    let outcome = Session::new().run("turns.scl", script, None);
    let text = &outcome.saved[0].text;
    for part in [
        "made from turns.scl",
        "reduce within 12.5 % save \"turning.scl\"",
        "left out  (1e-9 1/s)*u 0.001 %",
        "at most 0.001 % of the largest term",
        "scale U = 10 m/s within 2 \"wind\" from \"mast V3\"",
        "D_t(u)",
        "tolerance 12.5 %",
    ] {
        assert!(text.contains(part), "{part} in\n{text}");
    }
}

#[test]
fn two_phenomena_and_lone_terms_are_not_saved() {
    let two = "
        scale U in m/s  scale L = 1 km
        coordinate x ~ L
        field u(x) ~ U
        constant r = 1e-4 1/s
        equation decay: u*d_x(u) = -r*u
        phenomenon weak { scale U = 0.1 m/s }
        phenomenon strong { scale U = 100 m/s }
    ";
    let codes = |request: &str| -> Vec<&'static str> {
        let outcome = Session::new().run("two.scl", &format!("{two}\n{request}"), None);
        let errors = outcome.diagnostics.iter().filter(|found| found.is_error());
        errors.map(|found| found.code).collect()
    };
    assert_eq!(codes("reduce save \"both.scl\""), ["unexpected-word"]);
    assert_eq!(codes("reduce save \"one.scl\" for strong"), ["one-term"]);
    assert_eq!(codes("reduce save \"one.scl\" for weak"), [""; 0]);
}

#[test]
fn nothing_is_saved_outside_the_folder() {
    for path in ["../out.scl", "/tmp/out.scl", "a/../../out.scl"] {
        let script = format!(
            "scale U = 1 m/s  coordinate x ~ 1 m  field u(x) ~ U
             equation e: u*d_x(u) = 3 m/s^2 + u^2/(2 m)
             reduce save \"{path}\""
        );
        let outcome = Session::new().run("in.scl", &script, None);
        assert_eq!(outcome.diagnostics[0].code, "outside-folder", "{path}");
        assert!(outcome.saved.is_empty());
    }
}
