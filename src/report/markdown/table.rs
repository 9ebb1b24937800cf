//! Markdown tables and texts. Cells are filled up with blanks, so that a table reads well
//! unrendered too.

use crate::report::layout::{padded, right, width};

/// Cells wider than this do not widen their whole column in the source.
const WIDEST: usize = 40;

/// Where the cells of a column stand.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Align {
    /// At its left.
    Left,
    /// At its right.
    Right,
}

/// A table; the cells are Markdown.
pub(super) fn table(head: &[(&str, Align)], rows: &[Vec<String>]) -> String {
    let columns: Vec<usize> = (0..head.len())
        .map(|idx| {
            let cells = rows.iter().map(|row| width(&row[idx]).min(WIDEST));
            cells.max().unwrap_or(0).max(width(head[idx].0)).max(4)
        })
        .collect();
    let line = |cells: Vec<String>| format!("| {} |\n", cells.join(" | "));
    let filled = |texts: &[String]| {
        let cells = texts.iter().zip(&columns).zip(head);
        let cells = cells.map(|((text, columns), (_, align))| match align {
            Align::Left => padded(text, *columns),
            Align::Right => right(text, *columns),
        });
        line(cells.collect())
    };
    let titles: Vec<String> = head.iter().map(|(title, _)| (*title).to_owned()).collect();
    let rules = head
        .iter()
        .zip(&columns)
        .map(|((_, align), columns)| match align {
            Align::Left => "-".repeat(*columns),
            Align::Right => format!("{}:", "-".repeat(columns - 1)),
        });
    let mut out = filled(&titles);
    out.push_str(&line(rules.collect()));
    for row in rows {
        out.push_str(&filled(row));
    }
    out.push('\n');
    out
}

/// A text with everything escaped that Markdown would act on.
pub(super) fn text(text: &str) -> String {
    let mut out = String::new();
    let mut before: Option<char> = None;
    let mut chars = text.chars().peekable();
    while let Some(c) = chars.next() {
        let is_inside_word = before.is_some_and(char::is_alphanumeric)
            && chars.peek().is_some_and(|next| next.is_alphanumeric());
        let is_special = match c {
            '_' => !is_inside_word,
            '\\' | '`' | '*' | '[' | ']' | '<' | '>' | '#' | '$' | '|' | '~' | '&' => true,
            _ => false,
        };
        if is_special {
            out.push('\\');
        }
        out.push(if c.is_control() { ' ' } else { c });
        before = Some(c);
    }
    out
}

/// A text set as code, in a table cell or outside.
pub(super) fn code(text: &str) -> String {
    if text.is_empty() {
        return String::new();
    }
    let plain: String = text
        .chars()
        .map(|c| if c.is_control() { ' ' } else { c })
        .collect();
    let plain = plain.replace('|', "\\|");
    match plain.contains('`') {
        true => format!("`` {plain} ``"),
        false => format!("`{plain}`"),
    }
}

/// A message of the program, which sets names in backticks itself.
pub(super) fn backticked(message: &str) -> String {
    let mut parts = message.split('`');
    let mut out = text(parts.next().unwrap_or(""));
    while let (Some(name), rest) = (parts.next(), parts.next()) {
        out.push_str(&code(name));
        out.push_str(&text(rest.unwrap_or("")));
    }
    out
}

/// Lines set as they are.
pub(super) fn block(lines: &str) -> String {
    format!("```text\n{}\n```\n\n", lines.trim_end())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_bar_in_a_cell_ends_no_cell() {
        let rows = [vec![code("abs(u)|v"), text("a|b_c *d*")]];
        let head = [("term", Align::Left), ("what", Align::Right)];
        let lines = table(&head, &rows);
        assert_eq!(
            lines.lines().nth(2),
            Some("| `abs(u)\\|v` | a\\|b_c \\*d\\* |")
        );
    }

    #[test]
    fn markup_in_a_text_is_none() {
        assert_eq!(text("<b>_x_ $5$"), "\\<b\\>\\_x\\_ \\$5\\$");
        assert_eq!(code("a`b"), "`` a`b ``");
    }
}
