//! Answers as headings, paragraphs and tables, which Markdown and LaTeX set each in its
//! way: one file a request. `rank`, `reduce` and `show` have views of their own there.

mod bounds;
mod compare;
mod expand;
mod find;
mod groups;
mod layers;
mod nondimensional;

pub use bounds::bounds;
pub use compare::compare;
pub use expand::expand;
pub use find::find;
pub use groups::groups;
pub use layers::layers;
pub use nondimensional::nondimensional;

/// A part of a page.
#[derive(Debug, Clone, PartialEq)]
pub enum Block {
    /// The heading of an equation or another part: its name and its title.
    Heading(String, Option<String>),
    /// An equation in the language, `left = right`.
    Equation(String),
    /// A paragraph.
    Paragraph(Line),
    /// A table: titles of its columns with their widths, as parts of the whole, and rows.
    Table(Vec<(String, f64)>, Vec<Vec<Line>>),
}

/// What stands on one line or in one cell.
pub type Line = Vec<Piece>;

/// A piece of a line.
#[derive(Debug, Clone, PartialEq)]
pub enum Piece {
    /// Words.
    Words(String),
    /// A word that stands out.
    Strong(String),
    /// A product, a term or a name in the language.
    Formula(String),
    /// A number, a range or a quantity, as the reports print them.
    Numbers(String),
}

/// Words alone.
fn words(text: impl Into<String>) -> Line {
    vec![Piece::Words(text.into())]
}

/// A formula alone.
fn formula(text: impl Into<String>) -> Line {
    vec![Piece::Formula(text.into())]
}

/// Numbers alone.
fn numbers(text: impl Into<String>) -> Line {
    vec![Piece::Numbers(text.into())]
}

/// Words behind a word that stands out.
fn labelled(label: &str, text: impl Into<String>) -> Block {
    Block::Paragraph(vec![
        Piece::Strong(format!("{label}:")),
        Piece::Words(format!(" {}", text.into())),
    ])
}

/// The head of a table.
fn head(columns: &[(&str, f64)]) -> Vec<(String, f64)> {
    let columns = columns.iter();
    columns
        .map(|(title, width)| ((*title).to_owned(), *width))
        .collect()
}
