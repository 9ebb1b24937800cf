//! The bundled library for reading: the list of its modules, and one module with its
//! equations in readable mathematics and a script to begin with.

use std::fmt::Write as _;

use crate::analysis::shelf::{Item, Open, Shelf, Start, Variable, Vector};
use crate::model::library::{self, Module};
use crate::model::names;
use crate::report::layout::{WIDTH, cut, padded, width, wrapped};
use crate::report::mathematics::{Mathematics, symbol};
use crate::syntax::ast::{self, ExprKind};
use crate::syntax::print;

/// What stands for a value that is to be filled in.
pub const BLANK: &str = "___";

/// The shelves in the order of the list, with their titles; any other comes behind.
const SHELVES: [(&str, &str); 7] = [
    ("atmosphere", "atmosphere"),
    ("ocean", "ocean"),
    ("fluid", "fluids of any kind"),
    ("settings", "typical ranges, to begin with"),
    ("base", "what these share"),
    ("", "numbers and groups"),
    ("demo", "demonstrations, each a whole script"),
];

/// The modules, one a line, shelf by shelf.
pub fn list(modules: &[Module]) -> String {
    let shelf_of = |module: &Module| module.name.split_once('.').map_or("", |(shelf, _)| shelf);
    let mut shelves: Vec<(&str, &str)> = SHELVES.to_vec();
    for shelf in modules.iter().map(shelf_of) {
        if shelves.iter().all(|(known, _)| *known != shelf) {
            shelves.push((shelf, shelf));
        }
    }
    let mut out = String::new();
    for (shelf, title) in shelves {
        let own = modules.iter().filter(|module| shelf_of(module) == shelf);
        let own: Vec<&Module> = own.collect();
        let widest = own.iter().map(|module| width(module.name)).max();
        let _ = writeln!(out, "{title}");
        for module in &own {
            let name = padded(module.name, widest.unwrap_or(0));
            let headline = library::headline(module);
            let _ = writeln!(
                out,
                "  {name}  {}",
                fitting(&headline, WIDTH - width(&name) - 4)
            );
        }
        out.push('\n');
    }
    out.push_str("`scalewright library NAME` shows one, with a script to begin with.\n");
    out
}

/// A headline that fits: up to its last comma that does, else cut.
fn fitting(headline: &str, room: usize) -> String {
    if width(headline) <= room {
        return headline.to_owned();
    }
    let short = headline
        .rmatch_indices(',')
        .map(|(at, _)| &headline[..at])
        .find(|short| width(short) <= room);
    short.map_or_else(|| cut(headline, room), str::to_owned)
}

/// One module.
pub fn shelf(shelf: &Shelf) -> String {
    let mut out = format!("{}\n\n", shelf.name);
    for paragraph in &shelf.about {
        out.push_str(&wrapped("", paragraph));
        out.push('\n');
    }
    let pages = Pages {
        mathematics: Mathematics {
            coordinates: &shelf.coordinates,
        },
    };
    section("equations", &shelf.equations, &mut out, |decls, out| {
        decls.iter().for_each(|decl| pages.equation(decl, out));
    });
    section(
        "fields and coordinates",
        &shelf.variables,
        &mut out,
        |held, out| {
            pages.variables(held, out);
        },
    );
    section("vectors", &shelf.vectors, &mut out, |held, out| {
        pages.vectors(held, out);
    });
    section(
        "open: a script gives these a value",
        &shelf.open,
        &mut out,
        |held, out| {
            pages.open(held, out);
        },
    );
    section(
        "given: a script may override these",
        &shelf.given,
        &mut out,
        |held, out| {
            pages.given(held, out);
        },
    );
    spare(&shelf.spare, &mut out);
    section("named groups", &shelf.groups, &mut out, |held, out| {
        pages.groups(held, out);
    });
    section("balances", &shelf.balances, &mut out, |held, out| {
        held.iter().for_each(|decl| balance(decl, out));
    });
    if !shelf.uses.is_empty() {
        out.push_str(&wrapped("uses  ", &shelf.uses.join(", ")));
        out.push('\n');
    }
    start(shelf, &mut out);
    out
}

/// A section: what the module declares itself, then what each module that it uses brings.
fn section<T>(
    title: &str,
    items: &[Item<T>],
    out: &mut String,
    write: impl Fn(&[&T], &mut String),
) {
    if items.is_empty() {
        return;
    }
    let _ = writeln!(out, "{title}");
    let mut origins: Vec<Option<&String>> = vec![None];
    for item in items {
        if !origins.contains(&item.from.as_ref()) {
            origins.push(item.from.as_ref());
        }
    }
    for origin in origins {
        let own = items.iter().filter(|item| item.from.as_ref() == origin);
        let own: Vec<&T> = own.map(|item| &item.held).collect();
        if own.is_empty() {
            continue;
        }
        if let Some(origin) = origin {
            let _ = writeln!(out, "  from {origin}");
        }
        write(&own, out);
    }
    out.push('\n');
}

/// What other modules bring besides, counted.
fn spare(counts: &[(String, usize)], out: &mut String) {
    let counts = counts
        .iter()
        .map(|(module, count)| format!("{count} of {module}"));
    let counts: Vec<String> = counts.collect();
    if !counts.is_empty() {
        let text = format!("{}, for which nothing here asks", counts.join(", "));
        out.push_str(&wrapped("also given  ", &text));
        out.push('\n');
    }
}

struct Pages<'a> {
    mathematics: Mathematics<'a>,
}

impl Pages<'_> {
    /// One term a line, each with its process.
    fn equation(&self, decl: &ast::EquationDecl, out: &mut String) {
        let mut title = decl.name.text.clone();
        if let Some(text) = &decl.title {
            let _ = write!(title, ", {}", text.text);
        }
        if let Some(source) = &decl.source {
            let _ = write!(title, " ({})", source.text);
        }
        out.push_str(&wrapped("  ", &title));
        match &decl.body {
            ast::EquationBody::Made(made) => {
                let text = format!("made from {}", self.mathematics.expression(made));
                out.push_str(&wrapped("      ", &text));
            }
            ast::EquationBody::Written { left, right } => {
                let mut rows = self.rows(left, false);
                rows.extend(self.rows(right, true));
                terms(&rows, out);
            }
        }
        if !decl.using.is_empty() {
            let names: Vec<&str> = decl.using.iter().map(|name| name.text.as_str()).collect();
            out.push_str(&wrapped("      ", &format!("using {}", names.join(", "))));
        }
    }

    /// The terms of a side: the sign before each, its text, its processes.
    fn rows(&self, side: &ast::Expr, is_right: bool) -> Vec<[String; 3]> {
        let summands = self.mathematics.summands(side).into_iter().enumerate();
        summands
            .map(|(idx, (is_negative, term))| {
                let sign = match (idx, is_right, is_negative) {
                    (0, true, false) => "=",
                    (0, true, true) => "= -",
                    (0, false, false) => "",
                    (_, _, true) => "-",
                    (_, _, false) => "+",
                };
                let text = self.mathematics.expression(&term);
                [sign.to_owned(), text, processes(&term).join(", ")]
            })
            .collect()
    }

    fn variables(&self, held: &[&Variable], out: &mut String) {
        let mut rows: Vec<(String, String)> = Vec::new();
        for variable in held {
            let text = self.variable(variable);
            match rows.last_mut() {
                // Declared together, they stand together.
                Some((names, last)) if *last == text => {
                    let _ = write!(names, ", {}", spelt(&variable.name));
                }
                Some(_) | None => rows.push((spelt(&variable.name), text)),
            }
        }
        table(&rows, out);
    }

    fn variable(&self, variable: &Variable) -> String {
        let set = |expr: &ast::Expr| self.mathematics.expression(expr);
        let mut parts: Vec<String> = variable.title.iter().cloned().collect();
        if !variable.coordinates.is_empty() {
            let along: Vec<String> = variable
                .coordinates
                .iter()
                .map(|along| symbol(&along.coordinate.text))
                .collect();
            parts.push(format!("of {}", along.join(", ")));
        }
        parts.extend(
            variable
                .size
                .as_ref()
                .map(|size| format!("size {}", set(size))),
        );
        let varying = variable.varying.as_ref();
        parts.extend(varying.map(|varying| format!("varying by {}", set(varying))));
        for along in &variable.coordinates {
            let name = symbol(&along.coordinate.text);
            let own = along.varying.as_ref();
            parts.extend(own.map(|own| format!("by {} along {name}", set(own))));
            let own = along.length.as_ref();
            parts.extend(own.map(|own| format!("over {} along {name}", set(own))));
        }
        parts.join(", ")
    }

    fn open(&self, held: &[&Open], out: &mut String) {
        let rows: Vec<(String, String)> = held
            .iter()
            .map(|open| {
                let title = open.title.as_deref().unwrap_or("");
                let unit = match open.unit.as_str() {
                    "1" => "a number",
                    unit => unit,
                };
                (
                    spelt(&open.name),
                    format!("{unit}, {title}").trim_end_matches(", ").to_owned(),
                )
            })
            .collect();
        table(&rows, out);
    }

    fn given(&self, held: &[&ast::ValueDecl], out: &mut String) {
        let rows: Vec<(String, String)> = held
            .iter()
            .map(|decl| {
                let mut text = match &decl.value {
                    ast::Value::Given { nominal, spread } => {
                        let value = match names::has_names(nominal) {
                            true => format!("= {}", self.mathematics.expression(nominal)),
                            false => print::expression(nominal),
                        };
                        value + &print::spread(spread)
                    }
                    ast::Value::Open(unit) => unit.text.clone(),
                };
                notes(&decl.notes, &mut text);
                (spelt(&decl.name.text), text)
            })
            .collect();
        table(&rows, out);
    }

    fn vectors(&self, held: &[&Vector], out: &mut String) {
        let rows: Vec<(String, String)> = held
            .iter()
            .map(|vector| {
                let mut text = format!("= {}", self.mathematics.expression(&vector.components));
                notes(&vector.notes, &mut text);
                (spelt(&vector.name), text)
            })
            .collect();
        table(&rows, out);
    }

    fn groups(&self, held: &[&ast::GroupDecl], out: &mut String) {
        let rows: Vec<(String, String)> = held
            .iter()
            .map(|decl| {
                let mut text = format!("= {}", self.mathematics.expression(&decl.value));
                notes(&decl.notes, &mut text);
                (decl.name.text.clone(), text)
            })
            .collect();
        table(&rows, out);
    }
}

/// A name, with the letter that stands for it where that differs.
fn spelt(name: &str) -> String {
    let letter = symbol(name);
    if letter == name {
        letter
    } else {
        format!("{name} {letter}")
    }
}

fn notes(notes: &ast::Notes, text: &mut String) {
    if let Some(title) = &notes.title {
        let _ = write!(text, ", {}", title.text);
    }
    if let Some(source) = &notes.source {
        let _ = write!(text, " ({})", source.text);
    }
}

/// The names of the processes of one summand, those of `D_t` too.
fn processes(expr: &ast::Expr) -> Vec<String> {
    match &expr.kind {
        ExprKind::As { process, .. } => vec![process.text.clone()],
        ExprKind::Call { function, .. } if function.text == "D_t" => {
            vec!["tendency".to_owned(), "advection".to_owned()]
        }
        ExprKind::Bracket(inside) | ExprKind::Negate(inside) => processes(inside),
        ExprKind::Product(factors) => {
            let found = factors.iter().flat_map(|(_, factor)| processes(factor));
            found.collect()
        }
        ExprKind::Sum(terms) => terms.iter().flat_map(|(_, term)| processes(term)).collect(),
        ExprKind::Number(_)
        | ExprKind::Name(_)
        | ExprKind::Process { .. }
        | ExprKind::Power { .. }
        | ExprKind::Call { .. }
        | ExprKind::Derivative { .. }
        | ExprKind::Tuple(_)
        | ExprKind::Sized { .. }
        | ExprKind::Error => Vec::new(),
    }
}

fn terms(rows: &[[String; 3]], out: &mut String) {
    // The sign behind `=` stands at the term.
    let rows: Vec<(&str, String, &String)> = rows
        .iter()
        .map(|[sign, text, processes]| match sign.strip_prefix("= ") {
            Some(minus) => ("=", format!("{minus}{text}"), processes),
            None => (sign.as_str(), text.clone(), processes),
        })
        .collect();
    let widest = rows.iter().map(|(_, text, _)| width(text)).max();
    let widest = widest.unwrap_or(0).min(44);
    for (sign, text, processes) in rows {
        let (sign, text) = (padded(sign, 1), padded(&text, widest));
        let line = format!("    {sign} {text}  {processes}");
        let _ = writeln!(out, "{}", line.trim_end());
    }
}

fn balance(decl: &ast::BalanceDecl, out: &mut String) {
    let mut title = decl.name.text.clone();
    if let Some(text) = &decl.title {
        let _ = write!(title, ", {}", text.text);
    }
    if let Some(source) = &decl.source {
        let _ = write!(title, " ({})", source.text);
    }
    out.push_str(&wrapped("  ", &title));
    for part in &decl.parts {
        let processes: Vec<String> = part.processes.iter().map(print::process).collect();
        let label = format!("      {}  ", part.equation.text);
        out.push_str(&wrapped(&label, &processes.join(", ")));
    }
}

fn table(rows: &[(String, String)], out: &mut String) {
    let widest = rows.iter().map(|(name, _)| width(name)).max().unwrap_or(0);
    for (name, text) in rows {
        let label = format!("    {}  ", padded(name, widest.min(20)));
        out.push_str(&wrapped(&label, text));
    }
}

// The script to begin with --------------------------------------------------------------------

fn start(shelf: &Shelf, out: &mut String) {
    match &shelf.start {
        Start::Script(text) => {
            let _ = writeln!(out, "the script\n{}\n", "─".repeat(WIDTH));
            out.push_str(text);
        }
        Start::Values {
            beside,
            open,
            derived,
            requests,
        } => {
            let to_fill = match open.is_empty() {
                true => String::new(),
                false => format!(": put a number in place of each {BLANK}"),
            };
            let line = "─".repeat(WIDTH);
            let _ = writeln!(out, "a script to begin with{to_fill}\n{line}\n");
            let beside = beside.iter().map(|name| format!("use {name}\n"));
            let used = used(&shelf.name) + &beside.collect::<String>();
            out.push_str(&script(&used, open, derived, requests));
        }
    }
}

fn used(module: &str) -> String {
    match module.contains('/') || module.ends_with(".scl") {
        true => format!("use \"{module}\"\n"),
        false => format!("use {module}\n"),
    }
}

fn script(used: &str, open: &[Open], derived: &[(Open, String)], requests: &[String]) -> String {
    let mut out = format!("{used}\n");
    let lines: Vec<(String, String)> = open
        .iter()
        .map(|open| {
            let unit = match open.unit.as_str() {
                "1" => String::new(),
                unit => format!(" {unit}"),
            };
            let title = open.title.clone().unwrap_or_default();
            (declared(open, &format!("{BLANK}{unit}")), title)
        })
        .chain(derived.iter().map(|(open, formula)| {
            let title = open.title.as_deref().unwrap_or("");
            let title = format!("{title}: or a number, in {}", open.unit);
            (declared(open, formula), title)
        }))
        .collect();
    if !lines.is_empty() {
        out.push_str("phenomenon my_case \"what it is\" {\n");
        let widest = lines.iter().map(|(line, _)| width(line)).max().unwrap_or(0);
        for (line, title) in &lines {
            let line = format!("  {}  # {title}", padded(line, widest));
            let line = line.trim_end_matches([' ', '#']);
            let _ = writeln!(out, "{}", cut(line, WIDTH));
        }
        out.push_str("}\n\n");
    }
    for request in requests {
        let _ = writeln!(out, "{request}");
    }
    out
}

fn declared(open: &Open, value: &str) -> String {
    let keyword = match open.kind {
        ast::ValueKind::Scale => "scale",
        ast::ValueKind::Constant => "constant",
    };
    format!("{keyword} {} = {value}", open.name)
}
