//! The table of `rank` in numbers: term, scale, size and share in columns. What finds no
//! room in its column stands on a line of its own above the rest of its row; nothing is cut.

use crate::analysis::rank::{RankedEquation, RankedTerm};
use crate::report::layout::{WIDTH, padded, percent, range, unit, width};
use crate::report::words;

/// Blanks before the first column and between columns.
const GAP: usize = 2;
/// So much of the term column long scales leave free.
const SHORT_TERM: usize = 10;

/// One term.
struct Row {
    term: String,
    scale: String,
    size: String,
    share: String,
    /// What is said of its parts, or nothing.
    note: String,
}

/// The widths of the columns before the last.
struct Columns {
    terms: usize,
    scales: usize,
    sizes: usize,
}

/// Every term with its scale, its size and its share over the box; a process that the
/// ruler had to cut to a width stands behind its term.
pub(super) fn size_table(
    equation: &RankedEquation,
    order: &[usize],
    processes: usize,
    out: &mut String,
) {
    let terms = order.iter().map(|idx| &equation.terms[*idx]);
    let rows: Vec<Row> = terms.map(|term| row(term, processes)).collect();
    let size_title = format!("size, {}", unit(&equation.unit));
    let head = Row {
        term: "term".to_owned(),
        scale: "scale".to_owned(),
        size: size_title.trim_end_matches(", ").to_owned(),
        share: "share".to_owned(),
        note: String::new(),
    };
    let columns = Columns::of(&head, &rows);
    for row in std::iter::once(&head).chain(&rows) {
        columns.write(row, out);
    }
}

fn row(term: &RankedTerm, processes: usize) -> Row {
    let process = term.process.as_deref().unwrap_or("");
    let process = match width(process) > processes {
        true => format!(" ({process})"),
        false => String::new(),
    };
    Row {
        term: format!("{}{process}", term.text),
        scale: term.scale.clone(),
        size: range(&term.size),
        share: words::share(&term.share),
        note: match term.below_parts {
            Some(ratio) if ratio < 1.0 => format!("{} of its parts", percent(ratio)),
            Some(_) | None => String::new(),
        },
    }
}

impl Columns {
    /// Scales find room before terms do: a term on a line of its own reads well.
    fn of(head: &Row, rows: &[Row]) -> Columns {
        let widest = |of: &dyn Fn(&Row) -> &str, most: usize| {
            let widths = rows.iter().map(|row| width(of(row)));
            let fits = widths.filter(|found| *found <= most);
            fits.max().unwrap_or(0).max(width(of(head)))
        };
        let sizes = widest(&|row| &row.size, WIDTH);
        let shares = widest(&|row| &row.share, WIDTH);
        let room = WIDTH.saturating_sub(4 * GAP + sizes + shares);
        let longest = widest(&|row| &row.term, WIDTH);
        let scales = widest(
            &|row| &row.scale,
            room.saturating_sub(longest.min(SHORT_TERM)),
        );
        let terms = widest(&|row| &row.term, room.saturating_sub(scales));
        Columns {
            terms,
            scales,
            sizes,
        }
    }

    fn write(&self, row: &Row, out: &mut String) {
        let before_sizes = GAP + self.terms + GAP + self.scales;
        let mut line = format!("{}{}", " ".repeat(GAP), row.term);
        if width(&row.term) > self.terms {
            alone(GAP, &row.term, out);
            line.clear();
        }
        let is_wide = width(&row.scale) > self.scales;
        // Without a term before it, a scale may begin further left.
        let from = match is_wide {
            true => before_sizes.saturating_sub(width(&row.scale)).max(2 * GAP),
            false => GAP + self.terms + GAP,
        };
        if is_wide && !line.is_empty() {
            alone(GAP, &row.term, out);
            line.clear();
        }
        if from + width(&row.scale) <= before_sizes {
            line = padded(&line, from) + &row.scale;
        } else {
            alone(from, &row.scale, out);
        }
        let size = padded(&row.size, self.sizes);
        let mut line = padded(&line, before_sizes + GAP) + &size + "  " + &row.share;
        if !row.note.is_empty() {
            if width(&line) + GAP + width(&row.note) <= WIDTH {
                line.push_str(&format!(", {}", row.note));
            } else {
                line.push_str(&format!(
                    ",\n{}{}",
                    padded("", before_sizes + GAP),
                    row.note
                ));
            }
        }
        out.push_str(line.trim_end());
        out.push('\n');
    }
}

/// A text on lines of its own, broken before a sign where it is longer than one.
fn alone(indent: usize, text: &str, out: &mut String) {
    let mut rest = text;
    while !rest.is_empty() {
        let (line, behind) = rest.split_at(line_end(rest, WIDTH - indent));
        out.push_str(&format!("{}{}\n", " ".repeat(indent), line.trim_end()));
        rest = behind.trim_start();
    }
}

/// The last place in a text at which a line of this width may end.
fn line_end(text: &str, room: usize) -> usize {
    if width(text) <= room {
        return text.len();
    }
    let (mut end, mut at_sign) = (0, 0);
    for (idx, c) in text.char_indices() {
        if idx > 0 && "*/+- ".contains(c) {
            at_sign = idx;
        }
        if width(&text[..idx + c.len_utf8()]) > room {
            break;
        }
        end = idx + c.len_utf8();
    }
    match at_sign {
        0 => end.max(text.chars().next().map_or(0, char::len_utf8)),
        at_sign => at_sign,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn table(rows: &[[&str; 5]]) -> String {
        let row = |cells: &[&str; 5]| Row {
            term: cells[0].to_owned(),
            scale: cells[1].to_owned(),
            size: cells[2].to_owned(),
            share: cells[3].to_owned(),
            note: cells[4].to_owned(),
        };
        let head = row(&["term", "scale", "size", "share", ""]);
        let rows: Vec<Row> = rows.iter().map(row).collect();
        let columns = Columns::of(&head, &rows);
        let mut out = String::new();
        for row in std::iter::once(&head).chain(&rows) {
            columns.write(row, &mut out);
        }
        assert!(out.lines().all(|line| width(line) <= WIDTH), "{out}");
        out
    }

    const SIZE: &str = "1.11e-11 .. 2.22e-11 .. 3.33e-11";
    const SHARE: &str = "1.1e-5 .. 2.2e-5 %";

    #[test]
    fn what_fits_stands_on_one_line() {
        let found = table(&[["f*v", "f*U", "1 .. 2 .. 3", "100 %", "5 % of its parts"]]);
        let expected = "  term  scale  size         share\n  \
            f*v   f*U    1 .. 2 .. 3  100 %, 5 % of its parts\n";
        assert_eq!(found, expected);
    }

    #[test]
    fn a_long_term_stands_above_its_row() {
        let term = "nu*∂(∂(r*v_r)/∂r/r)/∂r";
        let found = table(&[
            ["f*v", "f*V_t", SIZE, SHARE, ""],
            [term, "nu*V_r/R^2", SIZE, SHARE, "5 % of its parts"],
        ]);
        let expected = format!(
            "  term  scale       {:32}  share\n  f*v   f*V_t       {SIZE}  {SHARE}\n  \
             {term}\n        nu*V_r/R^2  {SIZE}  {SHARE},\n{:20}5 % of its parts\n",
            "size", ""
        );
        assert_eq!(found, expected);
    }

    #[test]
    fn nothing_is_cut_however_long_it_is() {
        let term = ["nu*tan(phi_0)^2"; 9].join("*");
        let middling = "2*nu*tan(phi_0)/a^2";
        for scale in [middling.to_owned(), term.clone(), "n".repeat(200)] {
            let found = table(&[[&term, &scale, SIZE, SHARE, ""]]);
            let bare = |text: &str| text.replace(char::is_whitespace, "");
            assert!(
                bare(&found).contains(&bare(&format!("{term}{scale}{SIZE}{SHARE}"))),
                "{found}"
            );
        }
    }
}
