//! The LaTeX report compiles with a plain TeX installation, and nothing runs off the page.

use std::fs;
use std::io::Write as _;
use std::path::Path;
use std::process::Command;

use scalewright::Session;
use scalewright::report::latex;

use super::scripts;

fn has_tex() -> bool {
    let found = Command::new("pdflatex").arg("--version").output();
    let is_there = found.is_ok_and(|output| output.status.success());
    if !is_there {
        // Past the capture of the test runner, so that a plain run says it.
        let _ = std::io::stderr().write_all(b"skipped: there is no pdflatex here\n");
    }
    is_there
}

/// Compiles a document and gives the log.
fn compile(folder: &Path, text: &str) -> Result<String, String> {
    fs::write(folder.join("report.tex"), text).expect("the folder can be written to");
    let output = Command::new("pdflatex")
        .args(["-interaction=nonstopmode", "-halt-on-error", "report.tex"])
        .current_dir(folder)
        .output()
        .expect("it was found before");
    let log = String::from_utf8_lossy(&output.stdout).into_owned();
    match output.status.success() {
        true => Ok(log),
        false => Err(log),
    }
}

/// Lines of the log that tell of something beside the page.
fn overfull(log: &str) -> Vec<&str> {
    let lines = log.lines();
    lines.filter(|line| line.starts_with("Overfull")).collect()
}

#[test]
fn all_stored_scripts_compile() {
    if !has_tex() {
        return;
    }
    let folder = tempfile::tempdir().expect("there is a place for it");
    let outcomes: Vec<scalewright::Outcome> = scripts()
        .iter()
        .map(|(name, script)| {
            let asking = format!("{script}\nrank\nreduce\n");
            Session::new().run(name, &asking, None)
        })
        .collect();
    let answered = outcomes
        .iter()
        .filter(|outcome| !outcome.answers.is_empty());
    assert!(answered.count() > 45);
    let log = compile(folder.path(), &latex::document(&outcomes));
    let log = log.unwrap_or_else(|log| panic!("{}", tail(&log)));
    assert_eq!(overfull(&log), [""; 0]);
}

fn tail(log: &str) -> String {
    let lines: Vec<&str> = log.lines().collect();
    lines[lines.len().saturating_sub(60)..].join("\n")
}

/// An equation far wider than the page, names of fifty letters, texts full of signs.
fn wide_script() -> String {
    let terms: Vec<String> = (1..30)
        .map(|idx| format!("k_{idx}*(u + {idx}*v)*d_x(u*v)/(a_{idx}*b_{idx})"))
        .collect();
    let factors: Vec<String> = (1..30)
        .map(|idx| format!("k_{idx}*(a_{idx}*u/b_{idx})^(1/2)"))
        .collect();
    let constants: Vec<String> = (1..30)
        .map(|idx| {
            format!("constant k_{idx} = 1  constant a_{idx} = 2 \"50 % of {idx} & #_$ ~^\\\\ {{é}} ρ 海 <b> |x|\"  constant b_{idx} = 3")
        })
        .collect();
    let long = "a_very_long_name_of_a_scale_that_nobody_can_read_at_once";
    format!(
        "{}
         scale {long} = 3 m  scale U = 1  scale verylongnamewithoutanyplacetobreakitanywhere = 2
         coordinate x ~ {long}
         field u, v(x) ~ U
         equation wide \"all_of it, 100 %\": {} = -{}*(1 1/m)
         equation names: d_x(u) = verylongnamewithoutanyplacetobreakitanywhere*u/{long} + sqrt(U*verylongnamewithoutanyplacetobreakitanywhere*U)*u/{long}
         rank\nreduce\nshow U\nclaim U << {long}/(1 m)",
        constants.join("\n"),
        terms.join(" + "),
        factors.join("*"),
    )
}

#[test]
fn wide_equations_and_odd_texts_stay_on_the_page() {
    if !has_tex() {
        return;
    }
    let folder = tempfile::tempdir().expect("there is a place for it");
    let outcome = Session::new().run("odd_$name%.scl", &wide_script(), None);
    assert!(
        !outcome.answers.is_empty(),
        "{}",
        outcome.drawn(false, |_| true)
    );
    let log = compile(folder.path(), &latex::document(&[outcome]));
    let log = log.unwrap_or_else(|log| panic!("{}", tail(&log)));
    assert_eq!(overfull(&log), [""; 0]);
}

#[test]
fn a_fragment_goes_into_a_paper() {
    if !has_tex() {
        return;
    }
    let folder = tempfile::tempdir().expect("there is a place for it");
    let module = scalewright::model::library::find("demo.winter_low").expect("it is bundled");
    let outcome = Session::new().run(module.name, module.text, None);
    let paper = format!(
        "\\documentclass{{article}}\n\\usepackage{{amsmath,longtable}}\n\\begin{{document}}\n{}\
         \\end{{document}}\n",
        latex::fragment(&outcome)
    );
    let log = compile(folder.path(), &paper);
    let log = log.unwrap_or_else(|log| panic!("{}", tail(&log)));
    assert_eq!(overfull(&log), [""; 0]);
}
