//! Puts a new entry into a script: what it declares again takes the place of what stood
//! there, the rest goes behind. Both the tree and the text are changed, the tree with its
//! spans kept, so that a fault in the new statement is shown where it was typed.

use crate::source::{FileId, Span};
use crate::syntax::ast::{self, RequestKind, Statement, StatementKind, Value, ValueKind};
use crate::syntax::print;

/// A script with an entry put into it.
pub(super) struct Merged {
    /// The tree of the whole.
    pub(super) script: ast::Script,
    /// The text of the whole.
    pub(super) text: String,
    /// What gave way, in order.
    pub(super) replaced: Vec<Replaced>,
}

/// A statement that gave way to another.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Replaced {
    /// What it declared: `U`; empty for a statement that names nothing.
    pub name: String,
    /// The phenomenon in which it stood.
    pub phenomenon: Option<String>,
    /// As it was, on one line.
    pub was: String,
}

/// A script as a tree and as text.
pub(super) struct Written<'s> {
    pub(super) script: ast::Script,
    pub(super) text: &'s str,
}

/// Puts an entry into a page, whose spans lie in `page_file`.
pub(super) fn merge(page: Written<'_>, entry: Written<'_>, page_file: FileId) -> Merged {
    let mut merging = Merging {
        page: page.script.statements,
        page_file,
        entry_text: entry.text,
        edits: Vec::new(),
        placed: Vec::new(),
        replaced: Vec::new(),
    };
    for statement in entry.script.statements {
        merging.statement(statement);
    }
    let mut text = edited(page.text, &merging.edits);
    append(&mut text, &without(entry.text, &merging.placed));
    Merged {
        script: ast::Script {
            statements: merging.page,
            comments: Vec::new(),
        },
        text,
        replaced: merging.replaced,
    }
}

/// What a declaration declares; two of one sort and name cannot stand side by side.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Sort {
    Use,
    OpenScale,
    OpenConstant,
    Scale,
    Constant,
    Coordinate,
    Frame,
    Vector,
    Field,
    Velocity,
    Equation,
    Group,
    Balance,
    Tolerance,
    Phenomenon,
}

/// A change of a text: these bytes become that text.
struct Edit {
    start: usize,
    end: usize,
    text: String,
}

struct Merging<'s> {
    page: Vec<Statement>,
    page_file: FileId,
    entry_text: &'s str,
    /// What changes in the text of the page.
    edits: Vec<Edit>,
    /// What of the entry has found its place there.
    placed: Vec<Span>,
    replaced: Vec<Replaced>,
}

impl Merging<'_> {
    fn statement(&mut self, statement: Statement) {
        let Some((sort, names)) = declared(&statement) else {
            self.page.push(statement);
            return;
        };
        match statement.kind {
            StatementKind::Phenomenon(new) => self.phenomenon(new, statement.span),
            _ => self.declaration(statement, sort, &names),
        }
    }

    /// Puts a declaration in the place of the first that it replaces wholly, or behind
    /// all others.
    fn declaration(&mut self, statement: Statement, sort: Sort, names: &[String]) {
        let mut waiting = Some(statement);
        let mut at = 0;
        while at < self.page.len() {
            let Some(rest) = self.left_of(at, sort, names) else {
                at += 1;
                continue;
            };
            let was = print::statement(&self.page[at]);
            self.tell(names.join(", "), None, was);
            match (rest.is_empty(), waiting.take()) {
                (true, Some(statement)) => self.replace(at, statement),
                (true, None) => {
                    let old = self.page.remove(at).span;
                    self.edit(old, String::new());
                    continue;
                }
                (false, unplaced) => {
                    self.reduce(at, &rest);
                    waiting = unplaced;
                }
            }
            at += 1;
        }
        self.page.extend(waiting);
    }

    /// The names that a statement of the page still declares once others take these
    /// names; `None` if it declares none of them.
    fn left_of(&self, at: usize, sort: Sort, names: &[String]) -> Option<Vec<String>> {
        let (found, own) = self.of_page(&self.page[at])?;
        let rest: Vec<String> = own
            .iter()
            .filter(|name| !names.contains(name))
            .cloned()
            .collect();
        (found == sort && rest.len() < own.len()).then_some(rest)
    }

    /// What a statement declares that stood in the page before.
    fn of_page(&self, statement: &Statement) -> Option<(Sort, Vec<String>)> {
        let is_old = statement.span.file == self.page_file;
        declared(statement).filter(|_| is_old)
    }

    fn tell(&mut self, name: String, phenomenon: Option<String>, was: String) {
        self.replaced.push(Replaced {
            name,
            phenomenon,
            was,
        });
    }

    fn replace(&mut self, at: usize, statement: Statement) {
        let old = self.page[at].span;
        let text = slice(self.entry_text, statement.span).to_owned();
        self.placed.push(statement.span);
        self.edit(old, text);
        self.page[at] = statement;
    }

    /// Leaves a declaration of several names only some of them.
    fn reduce(&mut self, at: usize, rest: &[String]) {
        let statement = &mut self.page[at];
        let stays = |name: &ast::Name| rest.contains(&name.text);
        match &mut statement.kind {
            StatementKind::Coordinate(decl) => decl.names.retain(stays),
            StatementKind::Field(decl) => decl.names.retain(stays),
            // Nothing else declares several names.
            _ => {}
        }
        let (span, text) = (statement.span, print::statement(statement));
        self.edit(span, text);
    }

    fn edit(&mut self, span: Span, text: String) {
        self.edits.push(Edit {
            start: span.start as usize,
            end: span.end as usize,
            text,
        });
    }

    /// A phenomenon that stands already takes the values of the new one: those it has are
    /// replaced, the others come in.
    fn phenomenon(&mut self, new: ast::PhenomenonDecl, span: Span) {
        let found = self.page.iter_mut().find_map(|old| match &mut old.kind {
            StatementKind::Phenomenon(decl)
                if decl.name.text == new.name.text && old.span.file == self.page_file =>
            {
                Some(decl)
            }
            _ => None,
        });
        let Some(decl) = found else {
            self.page.push(Statement {
                kind: StatementKind::Phenomenon(new),
                span,
            });
            return;
        };
        let mut body = std::mem::take(&mut decl.body);
        let close = Span {
            end: decl.close.start,
            ..decl.close
        };
        for inner in new.body {
            let text = slice(self.entry_text, inner.span).to_owned();
            let old = body.iter().position(|old| {
                declared(&inner).is_some() && self.of_page(old) == declared(&inner)
            });
            match old {
                Some(old) => {
                    let name = declared(&inner).map_or(String::new(), |(_, names)| names.join(""));
                    let was = print::statement(&body[old]);
                    self.tell(name, Some(new.name.text.clone()), was);
                    self.edit(body[old].span, text);
                    body[old] = inner;
                }
                None => {
                    self.edit(close, format!("  {text}\n"));
                    body.push(inner);
                }
            }
        }
        self.placed.push(span);
        // Looked up anew, since the edits above borrow everything.
        let again = self.page.iter_mut().find_map(|old| match &mut old.kind {
            StatementKind::Phenomenon(decl) if decl.name.text == new.name.text => Some(decl),
            _ => None,
        });
        if let Some(decl) = again {
            decl.body = body;
        }
    }
}

// Texts ---------------------------------------------------------------------------------------

/// A text with edits made.
fn edited(text: &str, edits: &[Edit]) -> String {
    let mut text = text.to_owned();
    let mut order: Vec<&Edit> = edits.iter().collect();
    // From the back, so that places keep; what comes in at one place keeps its order.
    order.sort_by_key(|edit| edit.start);
    for edit in order.into_iter().rev() {
        if edit.start == edit.end {
            insert_lines(&mut text, edit);
        } else if edit.text.is_empty() {
            remove_lines(&mut text, edit);
        } else {
            text.replace_range(edit.start..edit.end, &edit.text);
        }
    }
    text
}

/// Puts a text behind another, on lines of its own.
pub(super) fn append(text: &mut String, rest: &str) {
    let rest = rest.trim();
    if rest.is_empty() {
        return;
    }
    if !text.is_empty() && !text.ends_with('\n') {
        text.push('\n');
    }
    text.push_str(rest);
    text.push('\n');
}

/// New lines before a closing brace, which gets a line of its own.
fn insert_lines(text: &mut String, edit: &Edit) {
    let line = text[..edit.start].rfind('\n').map_or(0, |at| at + 1);
    if text[line..edit.start].trim().is_empty() {
        text.insert_str(line, &edit.text);
    } else {
        let end = text[..edit.start].trim_end().len();
        text.replace_range(end..edit.start, &format!("\n{}", edit.text));
    }
}

/// Takes a statement out, with its line where nothing else stands on it.
fn remove_lines(text: &mut String, edit: &Edit) {
    let line = text[..edit.start].rfind('\n').map_or(0, |at| at + 1);
    let end = text[edit.end..]
        .find('\n')
        .map_or(text.len(), |at| edit.end + at + 1);
    let is_alone =
        text[line..edit.start].trim().is_empty() && text[edit.end..end].trim().is_empty();
    let range = match is_alone {
        true => line..end,
        false => edit.start..edit.end,
    };
    text.replace_range(range, "");
}

/// A text without some stretches of it.
fn without(text: &str, spans: &[Span]) -> String {
    let mut spans: Vec<Span> = spans.to_vec();
    spans.sort();
    let mut out = String::new();
    let mut at = 0;
    for span in spans {
        out.push_str(text.get(at..span.start as usize).unwrap_or(""));
        at = span.end as usize;
    }
    out.push_str(text.get(at..).unwrap_or(""));
    out
}

fn slice(text: &str, span: Span) -> &str {
    text.get(span.start as usize..span.end as usize)
        .unwrap_or("")
}

// Statements ----------------------------------------------------------------------------------

/// What a statement declares; `None` for a request and for what could not be read.
fn declared(statement: &Statement) -> Option<(Sort, Vec<String>)> {
    let one = |sort, name: &ast::Name| Some((sort, vec![name.text.clone()]));
    let only = |sort| Some((sort, vec![String::new()]));
    let all = |sort, names: &[ast::Name]| {
        Some((sort, names.iter().map(|name| name.text.clone()).collect()))
    };
    match &statement.kind {
        StatementKind::Use(ast::Use::Module(name)) => one(Sort::Use, name),
        StatementKind::Use(ast::Use::File(file)) => Some((Sort::Use, vec![file.text.clone()])),
        StatementKind::Value(decl) => one(sort_of_value(decl), &decl.name),
        StatementKind::Coordinate(decl) => all(Sort::Coordinate, &decl.names),
        StatementKind::Frame(_) => only(Sort::Frame),
        StatementKind::Vector(decl) => one(Sort::Vector, &decl.name),
        StatementKind::Field(decl) => all(Sort::Field, &decl.names),
        StatementKind::Split(decl) => one(Sort::Field, &decl.name),
        StatementKind::Velocity(_) => only(Sort::Velocity),
        StatementKind::Equation(decl) => one(Sort::Equation, &decl.name),
        StatementKind::Group(decl) => one(Sort::Group, &decl.name),
        StatementKind::Balance(decl) => one(Sort::Balance, &decl.name),
        StatementKind::Tolerance(_) => only(Sort::Tolerance),
        StatementKind::Phenomenon(decl) => one(Sort::Phenomenon, &decl.name),
        StatementKind::Request(_) | StatementKind::Error => None,
    }
}

fn sort_of_value(decl: &ast::ValueDecl) -> Sort {
    match (decl.kind, &decl.value) {
        (ValueKind::Scale, Value::Given { .. }) => Sort::Scale,
        (ValueKind::Scale, Value::Open(_)) => Sort::OpenScale,
        (ValueKind::Constant, Value::Given { .. }) => Sort::Constant,
        (ValueKind::Constant, Value::Open(_)) => Sort::OpenConstant,
    }
}

/// Whether a request settles something for those behind it.
pub(super) fn settles(request: &ast::Request) -> bool {
    match &request.kind {
        RequestKind::Find { .. } | RequestKind::Limit { .. } => true,
        RequestKind::Show { .. }
        | RequestKind::Rank { .. }
        | RequestKind::Nondimensionalize { .. }
        | RequestKind::Reduce { .. }
        | RequestKind::Bounds { .. }
        | RequestKind::Layers
        | RequestKind::Groups
        | RequestKind::Expand { .. }
        | RequestKind::Sweep(_)
        | RequestKind::Regimes(..)
        | RequestKind::Compare { .. }
        | RequestKind::Claim(_) => false,
    }
}

/// Drops the requests that settle nothing, and those at the places named.
pub(super) fn drop_requests(script: &mut ast::Script, dropped: &[Span]) {
    let stays = |statement: &Statement| match &statement.kind {
        StatementKind::Request(request) => settles(request) && !dropped.contains(&request.span),
        _ => true,
    };
    script.statements.retain(stays);
    for statement in &mut script.statements {
        if let StatementKind::Phenomenon(decl) = &mut statement.kind {
            decl.body.retain(stays);
        }
    }
}
