//! Sheets in LaTeX.

use crate::report::latex::escape::{backticked, text};
use crate::report::latex::math::{self, Style};
use crate::report::latex::table::table;
use crate::report::latex::{equation, equation_head};
use crate::report::sheets::{Block, Piece};

/// Writes the parts of a sheet.
pub(super) fn sheet(blocks: &[Block], out: &mut String) {
    for block in blocks {
        out.push_str(&match block {
            Block::Heading(name, title) => equation_head(name, title.as_ref()),
            Block::Equation(equation) => match equation::read_display(equation) {
                Some(math) => math,
                None => format!("{}\n\n", text(equation)),
            },
            Block::Caption(line) => format!("{}\\nopagebreak\n\n", words(line)),
            Block::Paragraph(line) => format!("{}\n\n", words(line)),
            Block::Table(head, rows) => {
                let titles: Vec<String> = head.iter().map(|(title, _)| text(title)).collect();
                let columns: Vec<(&str, f64)> = titles
                    .iter()
                    .zip(head)
                    .map(|(title, (_, width))| (title.as_str(), *width))
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
        Piece::Words(words) => text(words),
        Piece::Strong(words) => format!("\\textbf{{{}}}", text(words)),
        Piece::Formula(formula) => format!("${}$", math::read(formula, Style::Inline).text),
        Piece::Numbers(numbers) => math::numbers(numbers),
        Piece::Unit(unit) => format!("${}$", math::unit(unit).text),
        Piece::Message(message) => backticked(message),
    });
    pieces.collect()
}
