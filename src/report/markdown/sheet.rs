//! Sheets in Markdown.

use crate::report::latex::equation;
use crate::report::layout;
use crate::report::markdown::equation_head;
use crate::report::markdown::table::{Align, backticked, code, table, text};
use crate::report::sheets::{Block, Piece};

/// Writes the parts of a sheet.
pub(super) fn sheet(blocks: &[Block], out: &mut String) {
    for block in blocks {
        out.push_str(&match block {
            Block::Heading(name, title) => equation_head(name, title.as_ref()),
            Block::Equation(text) => match equation::read_one_line(text) {
                Some(math) => format!("$$\n{math}\n$$\n\n"),
                None => format!("{}\n\n", code(text)),
            },
            Block::Caption(line) | Block::Paragraph(line) => format!("{}\n\n", words(line)),
            Block::Table(head, rows) => {
                let titles: Vec<String> = head.iter().map(|(title, _)| text(title)).collect();
                let columns: Vec<(&str, Align)> = titles
                    .iter()
                    .map(|title| (title.as_str(), Align::Left))
                    .collect();
                let rows: Vec<Vec<String>> = rows
                    .iter()
                    .map(|row| row.iter().map(|line| words(line)).collect())
                    .collect();
                table(&columns, &rows)
            }
        });
    }
}

fn words(line: &[Piece]) -> String {
    let pieces = line.iter().map(|piece| match piece {
        Piece::Words(words) | Piece::Numbers(words) => text(words),
        Piece::Strong(words) => format!("**{}**", text(words)),
        Piece::Formula(formula) => code(formula),
        Piece::Unit(unit) => text(&layout::unit(unit)),
        Piece::Message(message) => backticked(message),
    });
    pieces.collect::<String>().trim().to_owned()
}
