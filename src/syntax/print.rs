//! From the syntax tree back to text: the canonical form of a script.
//!
//! One statement a line, the statements of a phenomenon indented by two blanks, at most
//! one blank line between statements; comments stay beside the statement they stand at,
//! and those inside a statement go before it. What is printed parses to the same tree,
//! and printing it again changes nothing. This holds for scripts without errors: a
//! statement that could not be read is printed as it was written, an expression that
//! could not be read as `?`. How statements and expressions look is in `print_statement`
//! and `print_expression`.

use crate::syntax::ast::{Comment, PhenomenonDecl, Script, Statement, StatementKind};
use crate::syntax::print_statement::phenomenon_head;

pub use crate::syntax::print_expression::expression;
pub use crate::syntax::print_statement::{process, request, spread, statement};

/// The canonical text of a script; `source` is the text that it was parsed from.
pub fn print(script: &Script, source: &str) -> String {
    let mut printer = Printer {
        source,
        comments: &script.comments,
        out: String::new(),
        end: None,
    };
    printer.statements(&script.statements, 0);
    printer.own_lines(u32::MAX, 0);
    printer.out
}

struct Printer<'a> {
    source: &'a str,
    /// The comments that are not printed yet.
    comments: &'a [Comment],
    out: String,
    /// Where in the source the last thing printed ends; `None` where no blank line may
    /// follow.
    end: Option<u32>,
}

impl Printer<'_> {
    fn statements(&mut self, statements: &[Statement], indent: usize) {
        for statement in statements {
            self.own_lines(statement.span.start, indent);
            if let StatementKind::Phenomenon(phenomenon) = &statement.kind {
                self.phenomenon(phenomenon, statement, indent);
            } else if let StatementKind::Error = &statement.kind {
                self.as_written(statement, indent);
            } else {
                self.own_lines(statement.span.end, indent);
                self.line(statement.span.start, indent, &self::statement(statement));
            }
            self.end = Some(statement.span.end);
            self.trailing();
        }
    }

    fn phenomenon(&mut self, phenomenon: &PhenomenonDecl, whole: &Statement, indent: usize) {
        self.line(whole.span.start, indent, &phenomenon_head(phenomenon));
        self.end = None;
        self.statements(&phenomenon.body, indent + 2);
        self.own_lines(phenomenon.close.start, indent + 2);
        self.end = None;
        self.line(phenomenon.close.start, indent, "}");
    }

    /// A statement that could not be read, with the comments in it.
    fn as_written(&mut self, statement: &Statement, indent: usize) {
        let span = statement.span;
        let text = self.source.get(span.start as usize..span.end as usize);
        self.line(span.start, indent, text.unwrap_or(""));
        let behind = self
            .comments
            .partition_point(|comment| comment.span.start < span.end);
        self.comments = &self.comments[behind..];
    }

    /// The comments that begin before a place, each on a line of its own.
    fn own_lines(&mut self, before: u32, indent: usize) {
        while let [first, rest @ ..] = self.comments
            && first.span.start < before
        {
            self.comments = rest;
            self.line(first.span.start, indent, &first.text);
            self.end = Some(first.span.end);
        }
    }

    /// The comment behind the last statement on its line.
    fn trailing(&mut self) {
        let (Some(end), [first, rest @ ..]) = (self.end, self.comments) else {
            return;
        };
        let gap = self.source.get(end as usize..first.span.start as usize);
        if gap.is_some_and(|gap| gap.chars().all(|c| c.is_whitespace() && c != '\n')) {
            self.comments = rest;
            self.out.truncate(self.out.trim_end().len());
            self.out.push_str(&format!("  {}\n", first.text));
            self.end = Some(first.span.end);
        }
    }

    /// A line, behind a blank one if the source has one between it and what came before.
    fn line(&mut self, start: u32, indent: usize, text: &str) {
        let gap = self
            .end
            .and_then(|end| self.source.get(end as usize..start as usize));
        if gap.is_some_and(has_blank_line) {
            self.out.push('\n');
        }
        self.out.push_str(&" ".repeat(indent));
        self.out.push_str(text);
        self.out.push('\n');
    }
}

fn has_blank_line(gap: &str) -> bool {
    let mut lines = gap.split('\n');
    // The first and the last piece belong to the lines of what stands around the gap.
    lines.next();
    lines.next_back();
    lines.any(|line| line.trim().is_empty())
}
