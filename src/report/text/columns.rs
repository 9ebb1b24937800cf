//! A table with one column a phenomenon that fits a terminal however many there are:
//! cells wrap, and columns that find no room stand in a further block.

use crate::report::layout::{WIDTH, cut, padded, width};

/// Widest label.
const LABEL: usize = 20;
/// Narrowest column before a further block begins.
const COLUMN: usize = 16;
/// Blanks between columns.
const GAP: usize = 2;

/// One row of it.
pub(super) struct Row {
    /// What it is about.
    pub(super) label: String,
    /// One text for each column.
    pub(super) cells: Vec<String>,
    /// A word behind the cells, or nothing.
    pub(super) note: String,
}

/// Writes the table under the names of its columns.
pub(super) fn columns(heads: &[String], rows: &[Row]) -> String {
    let labels = widest(rows.iter().map(|row| row.label.as_str())).min(LABEL);
    let notes = widest(rows.iter().map(|row| row.note.as_str()));
    let room = WIDTH - GAP - labels - notes - usize::from(notes > 0) * GAP;
    let in_block = (room / (COLUMN + GAP)).max(1);
    let mut out = String::new();
    let starts: Vec<usize> = (0..heads.len()).step_by(in_block).collect();
    for (idx, start) in starts.iter().enumerate() {
        if idx > 0 {
            out.push('\n');
        }
        let end = (start + in_block).min(heads.len());
        // What is said of a whole row is said where its last cells stand.
        let has_notes = end == heads.len();
        block(
            &heads[*start..end],
            rows,
            *start,
            [labels, room],
            has_notes,
            &mut out,
        );
    }
    out
}

fn widest<'a>(texts: impl Iterator<Item = &'a str>) -> usize {
    texts.map(width).max().unwrap_or(0)
}

fn block(
    heads: &[String],
    rows: &[Row],
    start: usize,
    [labels, room]: [usize; 2],
    has_notes: bool,
    out: &mut String,
) {
    let most = room / heads.len() - GAP;
    let widths: Vec<usize> = heads
        .iter()
        .enumerate()
        .map(|(idx, head)| {
            let cells = rows.iter().map(|row| row.cells[start + idx].as_str());
            widest(cells.chain([head.as_str()])).min(most)
        })
        .collect();
    line("", heads, "", labels, &widths, out);
    for row in rows {
        let cells = &row.cells[start..start + heads.len()];
        let note = if has_notes { row.note.as_str() } else { "" };
        line(&row.label, cells, note, labels, &widths, out);
    }
}

/// One row, on as many lines as its longest cell takes.
fn line(
    label: &str,
    cells: &[String],
    note: &str,
    labels: usize,
    widths: &[usize],
    out: &mut String,
) {
    let cells: Vec<Vec<String>> = cells
        .iter()
        .zip(widths)
        .map(|(cell, width)| lines(cell, *width))
        .collect();
    let n_lines = cells.iter().map(Vec::len).max().unwrap_or(1);
    for idx in 0..n_lines {
        let label = if idx == 0 {
            cut(label, labels)
        } else {
            String::new()
        };
        let mut text = format!("  {}", padded(&label, labels));
        for (cell, width) in cells.iter().zip(widths) {
            let part = cell.get(idx).map_or("", String::as_str);
            text.push_str(&" ".repeat(GAP));
            text.push_str(&padded(part, *width));
        }
        if idx == 0 && !note.is_empty() {
            text.push_str(&" ".repeat(GAP));
            text.push_str(note);
        }
        out.push_str(text.trim_end());
        out.push('\n');
    }
}

/// A text in lines of at most this width; a longer word is cut.
fn lines(text: &str, most: usize) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for word in text.split_whitespace() {
        let word = cut(word, most);
        match lines.last_mut() {
            Some(last) if width(last) + 1 + width(&word) <= most => {
                last.push(' ');
                last.push_str(&word);
            }
            _ => lines.push(word),
        }
    }
    lines
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn many_columns_stand_in_blocks_that_fit() {
        let heads: Vec<String> = (1..=7).map(|idx| format!("phenomenon_{idx}")).collect();
        let rows = [Row {
            label: "a_label_that_is_much_too_long".to_owned(),
            cells: vec!["1.23e-4 .. 5.67e-4 .. 9.99e-4 m/s".to_owned(); 7],
            note: "differ".to_owned(),
        }];
        let table = columns(&heads, &rows);
        assert!(table.lines().all(|line| width(line) <= WIDTH), "{table}");
        assert!(heads.iter().all(|head| table.contains(head)), "{table}");
        assert_eq!(table.matches("differ").count(), 1);
        assert_eq!(table.matches("9.99e-4").count(), 7);
    }

    #[test]
    fn two_columns_stand_side_by_side() {
        let rows = [Row {
            label: "U".to_owned(),
            cells: vec!["10 m/s".to_owned(), "2 cm/s".to_owned()],
            note: String::new(),
        }];
        let heads = ["bay".to_owned(), "tank".to_owned()];
        assert_eq!(
            columns(&heads, &rows),
            "     bay     tank\n  U  10 m/s  2 cm/s\n"
        );
    }
}
