//! The canonical form of a statement, on one line.

use crate::syntax::ast::{
    Axis, BalanceDecl, Claim, ClaimWord, CoordinateDecl, Dependence, EquationBody, EquationDecl,
    Expr, FieldDecl, FrameDecl, FrameKind, LimitPlace, Name, Notes, PhenomenonDecl, ProcessRef,
    Proportion, Relation, Request, RequestKind, Sign, SplitDecl, Spread, Statement, StatementKind,
    Text, Use, Value, ValueDecl, ValueKind, VelocityDecl,
};
use crate::syntax::print_expression::{expression, number};

/// The text of a statement. A phenomenon stands on one line with its body; a statement
/// that could not be read is empty.
pub fn statement(statement: &Statement) -> String {
    match &statement.kind {
        StatementKind::Use(Use::Module(module)) => format!("use {}", module.text),
        StatementKind::Use(Use::File(file)) => format!("use {}", text(file)),
        StatementKind::Value(decl) => value_decl(decl),
        StatementKind::Coordinate(decl) => coordinate(decl),
        StatementKind::Frame(decl) => frame(decl),
        StatementKind::Vector(decl) => {
            let value = expression(&decl.value);
            format!("vector {} = {value}{}", decl.name.text, notes(&decl.notes))
        }
        StatementKind::Field(decl) => field(decl),
        StatementKind::Split(decl) => split(decl),
        StatementKind::Velocity(decl) => velocity(decl),
        StatementKind::Equation(decl) => equation(decl),
        StatementKind::Group(decl) => {
            let value = expression(&decl.value);
            format!("group {} = {value}{}", decl.name.text, notes(&decl.notes))
        }
        StatementKind::Balance(decl) => balance(decl),
        StatementKind::Tolerance(decl) => {
            format!(
                "tolerance {}{}",
                proportion(&decl.value),
                notes(&decl.notes)
            )
        }
        StatementKind::Phenomenon(decl) => {
            let body: Vec<String> = decl.body.iter().map(self::statement).collect();
            format!("{} {} }}", phenomenon_head(decl), body.join(" "))
        }
        StatementKind::Request(decl) => request(decl),
        StatementKind::Error => String::new(),
    }
}

/// `phenomenon NAME "title" {`.
pub(crate) fn phenomenon_head(decl: &PhenomenonDecl) -> String {
    format!("phenomenon {}{} {{", decl.name.text, notes(&decl.notes))
}

/// The text of a request.
pub fn request(request: &Request) -> String {
    let asked = request_kind(&request.kind);
    format!("{asked}{}", clause("for", &request.phenomena))
}

fn request_kind(kind: &RequestKind) -> String {
    match kind {
        RequestKind::Show { expr, unit } => {
            let unit = unit.as_ref().map(|unit| format!(" in {}", unit.text));
            format!("show {}{}", expression(expr), unit.unwrap_or_default())
        }
        RequestKind::Rank { equations } => format!("rank{}", blank_names(equations)),
        RequestKind::Nondimensionalize { equations, by } => {
            let by = by.as_ref().map(|by| format!(" by {}", process(by)));
            let equations = blank_names(equations);
            format!("nondimensionalize{equations}{}", by.unwrap_or_default())
        }
        RequestKind::Reduce {
            equations,
            within,
            save,
        } => {
            let save = save.as_ref().map(|save| format!(" save {}", text(save)));
            format!(
                "reduce{}{}{}",
                blank_names(equations),
                opt_within(within.as_ref()),
                save.unwrap_or_default()
            )
        }
        RequestKind::Bounds { symbols } => format!("bounds{}", blank_names(symbols)),
        RequestKind::Find {
            unknowns,
            conditions,
        } => {
            let conditions: Vec<String> = conditions
                .iter()
                .map(|found| {
                    let (left, right) = (process(&found.left), process(&found.right));
                    format!("{}: {left} ~ {right}", found.equation.text)
                })
                .collect();
            format!("find {}{}", names(unknowns), list("where", &conditions))
        }
        RequestKind::Layers => "layers".to_owned(),
        RequestKind::Groups => "groups".to_owned(),
        RequestKind::Limit { small, places } => {
            let places: Vec<String> = places.iter().map(limit_place).collect();
            format!("limit {} -> 0{}", expression(small), list("with", &places))
        }
        RequestKind::Expand { equations, order } => {
            format!("expand{} to order {order}", blank_names(equations))
        }
        RequestKind::Sweep(along) => format!("sweep {}", axis(along)),
        RequestKind::Regimes(across, up) => format!("regimes {}, {}", axis(across), axis(up)),
        RequestKind::Compare {
            phenomena,
            matching,
        } => {
            let matching = matching.as_deref().unwrap_or_default();
            format!(
                "compare {}{}",
                names(phenomena),
                clause("matching", matching)
            )
        }
        RequestKind::Claim(said) => claim(said),
    }
}

fn limit_place(place: &LimitPlace) -> String {
    match place {
        LimitPlace::Others(_) => "others ~ 1".to_owned(),
        LimitPlace::Group(group, at) => format!("{} ~ {}", expression(group), expression(at)),
    }
}

fn axis(axis: &Axis) -> String {
    let (from, to) = (expression(&axis.from), expression(&axis.to));
    format!("{} from {from} to {to}", axis.scale.text)
}

fn claim(claim: &Claim) -> String {
    match claim {
        Claim::Verdict {
            word,
            equation,
            processes,
        } => {
            let word = match word {
                ClaimWord::Leading => "leading",
                ClaimWord::Kept => "kept",
                ClaimWord::Dropped => "dropped",
            };
            let processes: Vec<String> = processes.iter().map(process).collect();
            format!("claim {word} {} = {}", equation.text, processes.join(", "))
        }
        Claim::Relation {
            left,
            relation,
            right,
            within,
        } => {
            let sign = match relation {
                Relation::MuchLess => "<<",
                Relation::MuchGreater => ">>",
                Relation::Similar => "~",
                Relation::Less => "<",
                Relation::Greater => ">",
                Relation::Equal => "=",
            };
            let (left, right) = (expression(left), expression(right));
            format!("claim {left} {sign} {right}{}", opt_within(within.as_ref()))
        }
    }
}

fn value_decl(decl: &ValueDecl) -> String {
    let keyword = match decl.kind {
        ValueKind::Scale => "scale",
        ValueKind::Constant => "constant",
    };
    let value = match &decl.value {
        Value::Given { nominal, spread } => {
            format!("= {}{}", expression(nominal), self::spread(spread))
        }
        Value::Open(unit) => format!("in {}", unit.text),
    };
    format!("{keyword} {} {value}{}", decl.name.text, notes(&decl.notes))
}

/// The uncertainty behind a value, with the blank before it.
pub fn spread(spread: &Spread) -> String {
    match spread {
        Spread::None => String::new(),
        Spread::To(end) => format!(" .. {}", expression(end)),
        Spread::Margin(margin) => format!(" +- {}", expression(margin)),
        Spread::Within(factor) => opt_within(Some(factor)),
    }
}

fn coordinate(decl: &CoordinateDecl) -> String {
    format!(
        "coordinate {} ~ {}{}{}",
        names(&decl.names),
        expression(&decl.size),
        opt_expr("about", decl.about.as_ref()),
        notes(&decl.notes)
    )
}

fn frame(decl: &FrameDecl) -> String {
    let kind = match decl.kind {
        FrameKind::Cartesian => "cartesian",
        FrameKind::Cylindrical => "cylindrical",
        FrameKind::Spherical => "spherical",
    };
    format!(
        "frame {kind} ({}){}",
        names(&decl.coordinates),
        notes(&decl.notes)
    )
}

fn field(decl: &FieldDecl) -> String {
    let keyword = match decl.is_fluctuation {
        true => "fluctuation",
        false => "field",
    };
    let coordinates: Vec<String> = decl.coordinates.iter().map(dependence).collect();
    let coordinates = match coordinates.is_empty() {
        true => String::new(),
        false => format!("({})", coordinates.join(", ")),
    };
    format!(
        "{keyword} {}{coordinates} ~ {}{}{}",
        names(&decl.names),
        expression(&decl.size),
        opt_expr("varying", decl.varying.as_ref()),
        notes(&decl.notes)
    )
}

fn dependence(dependence: &Dependence) -> String {
    format!(
        "{}{}{}",
        dependence.coordinate.text,
        opt_expr("~", dependence.length.as_ref()),
        opt_expr("varying", dependence.varying.as_ref())
    )
}

fn split(decl: &SplitDecl) -> String {
    let mut parts = String::new();
    for (idx, (sign, part)) in decl.parts.iter().enumerate() {
        parts.push_str(match (idx, sign) {
            (0, Sign::Plus) => "",
            (0, Sign::Minus) => "-",
            (_, Sign::Plus) => " + ",
            (_, Sign::Minus) => " - ",
        });
        parts.push_str(&part.text);
    }
    format!("field {} = {parts}{}", decl.name.text, notes(&decl.notes))
}

fn velocity(decl: &VelocityDecl) -> String {
    match decl {
        VelocityDecl::Components {
            fields,
            coordinates,
            notes: about,
        } => {
            let (fields, coordinates) = (names(fields), names(coordinates));
            format!("velocity ({fields}) along ({coordinates}){}", notes(about))
        }
        VelocityDecl::Vector { name, notes: about } => {
            format!("velocity {}{}", name.text, notes(about))
        }
    }
}

fn equation(decl: &EquationDecl) -> String {
    let body = match &decl.body {
        EquationBody::Written { left, right } => {
            format!(": {} = {}", expression(left), expression(right))
        }
        EquationBody::Made(made) => format!(" from {}", expression(made)),
    };
    format!(
        "equation {}{}{body}{}{}",
        decl.name.text,
        opt_title(decl.title.as_ref()),
        clause("using", &decl.using),
        opt_source(decl.source.as_ref())
    )
}

fn balance(decl: &BalanceDecl) -> String {
    let parts: Vec<String> = decl
        .parts
        .iter()
        .map(|part| {
            let processes: Vec<String> = part.processes.iter().map(process).collect();
            format!("{} {{ {} }}", part.equation.text, processes.join(", "))
        })
        .collect();
    format!(
        "balance {}{}: {}{}",
        decl.name.text,
        opt_title(decl.title.as_ref()),
        parts.join(" "),
        opt_source(decl.source.as_ref())
    )
}

/// A process as it is named.
pub fn process(process: &ProcessRef) -> String {
    match process {
        ProcessRef::Text(named) => text(named),
        ProcessRef::Term(term) => expression(term),
    }
}

fn proportion(proportion: &Proportion) -> String {
    number(&proportion.number)
}

fn opt_within(within: Option<&Proportion>) -> String {
    within.map_or_else(String::new, |within| {
        format!(" within {}", proportion(within))
    })
}

fn opt_expr(word: &str, expr: Option<&Expr>) -> String {
    expr.map_or_else(String::new, |expr| format!(" {word} {}", expression(expr)))
}

fn notes(notes: &Notes) -> String {
    opt_title(notes.title.as_ref()) + &opt_source(notes.source.as_ref())
}

fn opt_title(title: Option<&Text>) -> String {
    title.map_or_else(String::new, |title| format!(" {}", text(title)))
}

fn opt_source(source: Option<&Text>) -> String {
    source.map_or_else(String::new, |source| format!(" from {}", text(source)))
}

fn text(text: &Text) -> String {
    format!("\"{}\"", text.text)
}

/// A blank and the names, where there are any.
fn blank_names(list: &[Name]) -> String {
    match list.is_empty() {
        true => String::new(),
        false => format!(" {}", names(list)),
    }
}

/// A clause word with names behind it, where there are any.
fn clause(word: &str, list: &[Name]) -> String {
    match list.is_empty() {
        true => String::new(),
        false => format!(" {word} {}", names(list)),
    }
}

/// A clause word with a list behind it, where there is one.
fn list(word: &str, items: &[String]) -> String {
    match items.is_empty() {
        true => String::new(),
        false => format!(" {word} {}", items.join(", ")),
    }
}

fn names(names: &[Name]) -> String {
    let names: Vec<&str> = names.iter().map(|name| name.text.as_str()).collect();
    names.join(", ")
}
