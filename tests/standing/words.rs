//! How reports speak of conditions on the ranges, against what JSON says of them.

use super::{answer, report};
use crate::harness::{entry, list, text};

/// p and q depend on the ranges, r leads; F cancels out of every ratio of two groups.
const SUMS: &str = "
scale A = 0.02 .. 4   scale B = 1   scale C = 0.5 .. 50   constant F = 3
group GA = A/F   group GB = B/F   group GC = C/F
field s ~ 1
equation e: A*s as p + B*s as q = C*s as r
";

fn joined(report: &str) -> String {
    report.split_whitespace().collect::<Vec<&str>>().join(" ")
}

#[test]
fn a_symbol_that_cancels_is_not_brought_in() {
    let told = joined(&report(&format!("{SUMS}reduce")));
    let conditions = "A*s: may go where A/C <= 0.1 (now 4e-4 .. 5.66e-2 .. 8e0) \
        or A/B <= 0.1 (now 0.02 .. 0.283 .. 4)";
    assert!(told.contains(conditions), "{told}");
    assert!(!told.contains("GA/GC"), "{told}");
    let reduction = answer(&format!("{SUMS}reduce"), "reduce");
    let kept = &list(&reduction["equations"])[0]["kept"];
    assert_eq!(
        entry(kept, "text", "A*s")["condition"],
        "GA/GC <= 0.1 or GA/GB <= 0.1"
    );
    // Two groups that hold nothing else stay.
    let within = SUMS
        .replace("GA = A/F", "GA = A^2")
        .replace("GC = C/F", "GC = A*C");
    let told = joined(&report(&format!("{within}reduce")));
    assert!(told.contains("may go where GA/GC <= 0.1"), "{told}");
}

#[test]
fn a_condition_that_is_met_nowhere_is_left_out() {
    let told = joined(&report(&format!("{SUMS}reduce bounds")));
    let condition = "B*s: may go where B/C <= 0.1 (now 0.02 .. 0.2 .. 2) dropped";
    assert!(told.contains(condition), "{told}");
    let (_, may_go) = told.split_once("more may go where").expect("q may go");
    let (may_go, _) = may_go.split_once("left out").expect("p is left out");
    assert_eq!(
        may_go.trim(),
        "B/C <= 0.1 (now 0.02 .. 0.2 .. 2) then q of e may go"
    );
    let bounds = answer(&format!("{SUMS}bounds"), "bounds");
    let texts: Vec<String> = list(&bounds["conditions"])
        .iter()
        .map(|condition| text(&condition["text"]))
        .collect();
    assert!(texts.contains(&"GB/GA <= 0.1".to_owned()), "{texts:?}");
}

#[test]
fn the_other_forms_say_the_same() {
    let outcome = scalewright::Session::new().run("case.scl", &format!("{SUMS}reduce"), None);
    let markdown = scalewright::report::markdown::report(&outcome);
    assert!(
        markdown.contains("may go where B/C ≤ 0.1 (now 0.02 .. 0.2 .. 2).\n"),
        "{markdown}"
    );
    let latex = scalewright::report::latex::fragment(&outcome);
    let told = "may go where $B/\\allowbreak C \\le 0.1$ (now $0.02$ \\dots $0.2$ \\dots $2$).\n";
    assert!(latex.contains(told), "{latex}");
}

#[test]
fn the_leading_order_says_what_else_is_kept() {
    let leading = |script: &str| {
        let told = joined(&report(&format!("{script}reduce")));
        let (_, behind) = told.split_once("leading order ").expect("it is told");
        behind.split(" A*s").next().unwrap_or("").to_owned()
    };
    let named = format!("{SUMS}balance alone: e {{ r }}\n");
    assert_eq!(
        leading(&named),
        "alone, and terms that depend on the ranges"
    );
    let exact = SUMS.replace("0.02 .. 4", "1").replace("0.5 .. 50", "1");
    assert_eq!(leading(&exact), "unnamed");
    let none = SUMS.replace("0.5 .. 50", "0.05 .. 50");
    assert_eq!(
        leading(&none),
        "no process over all ranges, only terms that depend on them"
    );
    let put_in = "
scale A = 0.02 .. 0.4   scale B = 1   scale C = 2*B
field s ~ 1
equation e: A*s as p + B*s as q = C*s as r
";
    assert_eq!(
        leading(put_in),
        "unnamed (by construction: derived scales put this balance in), \
         and terms that depend on the ranges"
    );
}

#[test]
fn the_table_of_sizes_cuts_nothing() {
    let script = "use atmosphere.vortex\nuse base.axes\n
scale V_t = 5 m/s .. 20 m/s  scale R = 2 m .. 30 m  scale H = 50 m .. 300 m
scale V_r = 0.1 m/s .. 4 m/s  scale W_v = 1 m/s .. 8 m/s  scale T = 1 min .. 20 min
scale dP = 0.3 hPa .. 3 hPa  constant phi = 35 deg  constant rho = 1.1 kg/m^3
constant nu = 0.1 m^2/s .. 3 m^2/s
rank radial_vortex
";
    let told = report(script);
    let (ruler, sizes) = told.split_once("  term ").expect("the table is there");
    assert!(ruler.contains("nu*∂(∂(r*v_r)/∂r…"), "{ruler}");
    assert!(!sizes.contains('…'), "{sizes}");
    let row = "  nu*∂(∂(r*v_r)/∂r/r)/∂r\n                nu*V_r/R^2  1.11e-5 .. 5.77e-3 .. 3e0 ";
    assert!(sizes.contains(row), "{sizes}");
}

#[test]
fn a_process_too_long_for_the_ruler_stands_below() {
    let script = "scale A = 2   field s ~ 1
        equation e: A*s as what_the_wind_does_to_the_water = s as stress   rank";
    let told = report(script);
    assert!(told.contains("  what_the_wind_does_to_t… A*s"), "{told}");
    assert!(
        told.contains("  A*s (what_the_wind_does_to_the_water)  A "),
        "{told}"
    );
}
