//! The ruler of decades as a LaTeX picture: marks at the powers of ten, a bar over the
//! range of a size, a dot at its nominal value.

use crate::report::ruler::Ruler;
use crate::units::Range;

/// The width of the picture, in its own units.
const WIDTH: f64 = 100.0;
/// Most labels above it.
const LABELS: i32 = 5;

/// The labels above the ruler.
pub(super) fn head(ruler: &Ruler) -> String {
    let decades = ruler.decades();
    let (low, high) = (*decades.start(), *decades.end());
    let step = (high - low + LABELS - 1) / LABELS;
    let labels: String = decades
        .step_by(step.max(1) as usize)
        .map(|decade| {
            let x = WIDTH * f64::from(decade - low) / f64::from(high - low);
            format!("\\put({x:.1},0){{\\makebox(0,0)[b]{{\\scriptsize $10^{{{decade}}}$}}}}")
        })
        .collect();
    picture(&labels)
}

/// One size on the ruler.
pub(super) fn line(ruler: &Ruler, size: &Range) -> String {
    let decades = ruler.decades();
    let n_marks = decades.end() - decades.start() + 1;
    let step = WIDTH / f64::from(n_marks - 1);
    let mut out = format!("\\multiput(0,3)({step:.3},0){{{n_marks}}}{{\\line(0,1){{1}}}}");
    let at = |size: f64| WIDTH * ruler.place(size).max(0.0);
    if ruler.place(size.high) < 0.0 {
        out.push_str("\\put(0,3.5){\\makebox(0,0){\\scriptsize$<$}}");
        return picture(&out);
    }
    if !size.is_exact() {
        let (low, high) = (at(size.low), at(size.high));
        out.push_str(&format!(
            "\\put({low:.2},3.5){{\\line(1,0){{{:.2}}}}}",
            high - low
        ));
        out.push_str(&format!("\\put({high:.2},1.5){{\\line(0,1){{4}}}}"));
        if ruler.place(size.low) >= 0.0 {
            out.push_str(&format!("\\put({low:.2},1.5){{\\line(0,1){{4}}}}"));
        }
    }
    let nominal = at(size.nominal);
    out.push_str(&format!("\\put({nominal:.2},3.5){{\\circle*{{3}}}}"));
    picture(&out)
}

fn picture(inside: &str) -> String {
    format!(
        "{{\\setlength{{\\unitlength}}{{0.0096\\linewidth}}\\begin{{picture}}(100,7){inside}\\end{{picture}}}}"
    )
}
