//! LaTeX tables: columns as shares of the width of the text, so that a table never runs
//! off the page and breaks over pages by itself.

/// The space between columns, as a share of the width of the text.
const GAP: f64 = 0.02;

/// A table; the widths are parts of the whole, the cells LaTeX.
pub(super) fn table(head: &[(&str, f64)], rows: &[Vec<String>]) -> String {
    let whole: f64 = head.iter().map(|(_, width)| width).sum();
    let room = 0.997 - GAP * (head.len() as f64 - 1.0);
    let columns: Vec<String> = head
        .iter()
        .map(|(_, width)| format!("p{{{:.3}\\linewidth}}", room * width / whole))
        .collect();
    let titles: Vec<String> = head.iter().map(|(title, _)| (*title).to_owned()).collect();
    let titles = line(&titles);
    let mut out = format!(
        "{{\\footnotesize\\setlength{{\\tabcolsep}}{{{:.3}\\linewidth}}\n\
         \\renewcommand{{\\arraystretch}}{{1.2}}\n\
         \\begin{{longtable}}{{@{{}}{}@{{}}}}\n\\hline\n{titles}\\hline\n\\endhead\n",
        GAP / 2.0,
        columns.join("")
    );
    for row in rows {
        out.push_str(&line(row));
    }
    out.push_str("\\hline\n\\end{longtable}}\n\n");
    out
}

fn line(cells: &[String]) -> String {
    let cells: Vec<String> = cells
        .iter()
        .map(|cell| format!("\\raggedright {cell}"))
        .collect();
    format!("{}\\tabularnewline\n", cells.join(" & "))
}
