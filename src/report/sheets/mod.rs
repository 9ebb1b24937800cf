//! Answers as headings, paragraphs and tables, which Markdown and LaTeX set each in its
//! way: one file a request, and one for what was given. `rank`, `reduce` and `show` have views of their own there.

mod bounds;
mod compare;
mod expand;
mod find;
mod given;
mod groups;
mod layers;
mod nondimensional;

pub use given::given;

use crate::analysis::Body;
use crate::analysis::rank::RankedEquation;
use crate::analysis::reduce::Reduction;
use crate::analysis::show::Shown;

/// How an answer is shown: by a view of its own, or as a sheet.
pub enum View<'a> {
    /// `show`.
    Show(&'a Shown),
    /// `rank`.
    Rank(&'a [RankedEquation]),
    /// `reduce`.
    Reduce(&'a Reduction),
    /// Any other request.
    Sheet(Vec<Block>),
}

/// The view of an answer.
pub fn view(body: &Body) -> View<'_> {
    View::Sheet(match body {
        Body::Show(shown) => return View::Show(shown),
        Body::Rank(equations) => return View::Rank(equations),
        Body::Reduce(reduction) => return View::Reduce(reduction),
        Body::Groups(found) => groups::groups(found),
        Body::Nondimensionalize(equations) => nondimensional::nondimensional(equations),
        Body::Find(balances) => find::find(balances),
        Body::Layers(found) => layers::layers(found),
        Body::Bounds(found) => bounds::bounds(found),
        Body::Compare(comparison) => compare::compare(comparison),
        Body::Expand(hierarchy) => expand::expand(hierarchy),
    })
}

/// A part of a page.
#[derive(Debug, Clone, PartialEq)]
pub enum Block {
    /// The heading of an equation or another part: its name and its title.
    Heading(String, Option<String>),
    /// An equation in the language, `left = right`.
    Equation(String),
    /// What stands above a table.
    Caption(Line),
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
    /// A unit in the language.
    Unit(String),
    /// A message of the program, which sets names in backticks.
    Message(String),
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
