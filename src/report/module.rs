//! A reduced system as a module in the language itself, for `reduce ... save`: the
//! reduced equations, what they need, the values of the phenomenon, and a comment that
//! says where it comes from, under which scales and with which error.
//!
//! Bundled modules that declare no equation stay in use; everything else that is needed
//! is written out, so that the module stands for itself and clashes with nothing.

use std::collections::BTreeSet;

use num_rational::BigRational;

use crate::algebra::monomial::SymbolId;
use crate::analysis::Case;
use crate::analysis::rank::speller;
use crate::analysis::reduce::{Lone, Part, ReducedEquation, Reduction};
use crate::model::needs::Needs;
use crate::model::settings::Variable;
use crate::model::{Level, Model, spelling};
use crate::report::layout::{self, percent};
use crate::report::module::shelves::Shelves;
use crate::report::{conditions, words};
use crate::source::Sources;
use crate::syntax::ast::{self, StatementKind};
use crate::syntax::print;

mod needs;
mod shelves;

/// What a module is written from.
pub struct Origin<'a> {
    /// The model.
    pub model: &'a Model,
    /// The phenomenon.
    pub case: &'a Case,
    /// The reduced system.
    pub reduction: &'a Reduction,
    /// The tolerance that it was reduced with.
    pub tolerance: &'a BigRational,
    /// The request as written.
    pub request: &'a str,
    /// The name of the script.
    pub script: &'a str,
    /// All texts that were read.
    pub sources: &'a Sources,
}

/// Writes the module; `None` if no reduced equation has two terms.
pub fn module(origin: &Origin<'_>) -> Option<String> {
    let equations = &origin.reduction.equations;
    let kept: Vec<&ReducedEquation> = equations.iter().filter(|found| stands(found)).collect();
    if kept.is_empty() {
        return None;
    }
    let shelves = Shelves::of(origin);
    let needs = needs::of(origin, &kept);
    let mut blocks = vec![
        head(origin, &kept),
        uses(&shelves),
        values(origin, &shelves, &needs),
        quantities(origin, &shelves, &needs),
        groups(origin, &shelves, &needs),
    ];
    blocks.extend(kept.iter().map(|equation| equation_text(origin, equation)));
    blocks.push(balances(origin, &kept));
    blocks.push(format!("tolerance {} %\n", in_percent(origin.tolerance)));
    blocks.retain(|block| !block.is_empty());
    Some(blocks.join("\n"))
}

/// Whether a reduced equation is one that can be written.
fn stands(equation: &ReducedEquation) -> bool {
    match equation.lone {
        Some(Lone::Term { .. }) => false,
        Some(Lone::Process { .. }) | None => true,
    }
}

// The comment ---------------------------------------------------------------------------------

fn head(origin: &Origin<'_>, kept: &[&ReducedEquation]) -> String {
    let setting = &origin.case.setting;
    let whose = match (&setting.name, &setting.title) {
        (Some(name), Some(title)) => format!(" for {name} ({title})"),
        (Some(name), None) => format!(" for {name}"),
        (None, _) => String::new(),
    };
    let mut out = String::new();
    let first = format!("Reduced system{whose}, made from {}:", origin.script);
    comment("", &first, &mut out);
    comment("  ", origin.request, &mut out);
    comment("", "", &mut out);
    let tolerance = format!(
        "A term was left out where its share of the largest stays at or below {} % over all \
         values below and in the modules in use. They are the scales under which the system was reduced; a script that \
         uses this module may give others, but then nothing says that it stands.",
        in_percent(origin.tolerance)
    );
    comment("", &tolerance, &mut out);
    for equation in &origin.reduction.equations {
        comment("", "", &mut out);
        let is_kept = kept.iter().any(|found| found.name == equation.name);
        about(equation, is_kept, &mut out);
    }
    out
}

fn about(equation: &ReducedEquation, is_kept: bool, out: &mut String) {
    let order = words::leading_order(equation);
    comment("", &format!("{}: {order}", equation.name), out);
    if !is_kept {
        let text = format!(
            "{} (not written below: one term alone is no equation)",
            equation.reduced
        );
        comment("  left      ", &text, out);
    }
    let dropped = words::dropped_listed(equation);
    if !dropped.is_empty() {
        comment("  left out  ", &dropped.join(", "), out);
        let error = format!(
            "at most {} of the largest term, {} in all",
            percent(equation.error),
            percent(equation.error_sum)
        );
        comment("  error     ", &error, out);
    }
    for found in conditions::depends(equation) {
        let texts: Vec<&str> = found.terms.iter().map(|term| term.text.as_str()).collect();
        let text = format!("{}: {}", texts.join(", "), conditions::fate(&found));
        comment("  depends   ", &text, out);
    }
}

fn comment(label: &str, text: &str, out: &mut String) {
    let clean: String = text
        .chars()
        .map(|c| if c.is_control() { ' ' } else { c })
        .collect();
    for line in layout::wrapped(label, &clean).lines() {
        out.push_str(format!("# {line}").trim_end());
        out.push('\n');
    }
}

// Declarations --------------------------------------------------------------------------------

fn uses(shelves: &Shelves) -> String {
    let uses = shelves.used.iter();
    uses.map(|name| format!("use {name}\n")).collect()
}

fn line(kind: StatementKind) -> String {
    let statement = ast::Statement {
        kind,
        span: crate::source::Span::default(),
    };
    format!("{}\n", print::statement(&statement))
}

fn values(origin: &Origin<'_>, shelves: &Shelves, needs: &Needs) -> String {
    let mut out = String::new();
    for (idx, info) in origin.model.symbols.iter().enumerate() {
        let id = SymbolId(idx as u32);
        let (_, decl) = origin.model.effective(id, origin.case.setting.phenomenon);
        let is_there = shelves.hold(decl.name.span.file) && !is_adopted(origin, id);
        if !needs.symbols[idx] || is_there {
            continue;
        }
        let opened = info
            .entries
            .iter()
            .find_map(|(_, entry)| entry.notes.title.clone());
        let mut decl = decl.clone();
        decl.notes.title = decl.notes.title.or(opened);
        if is_adopted(origin, id) {
            decl.value = adopted(origin, id).unwrap_or(decl.value);
        }
        out.push_str(&line(StatementKind::Value(decl)));
    }
    out
}

/// Whether a value is none that was written: one that a request found.
fn is_adopted(origin: &Origin<'_>, id: SymbolId) -> bool {
    let setting = &origin.case.setting;
    let (_, decl) = origin.model.effective(id, setting.phenomenon);
    let is_known = match setting.variables[id.idx()] {
        Variable::Known(_) => true,
        Variable::Open(_) => false,
    };
    is_known && !crate::model::is_given(decl)
}

fn adopted(origin: &Origin<'_>, id: SymbolId) -> Option<ast::Value> {
    let setting = &origin.case.setting;
    let monomial = setting.quantities.replacements.get(id.idx())?.as_ref()?;
    let speller = speller(setting, origin.case.equations.first()?);
    Some(ast::Value::Given {
        nominal: spelling::monomial(monomial, &speller),
        spread: ast::Spread::None,
    })
}

fn quantities(origin: &Origin<'_>, shelves: &Shelves, needs: &Needs) -> String {
    let model = origin.model;
    let mut out = String::new();
    if let Some(frame) = &model.frame
        && !shelves.hold(frame.span.file)
    {
        out.push_str(&line(StatementKind::Frame(ast::FrameDecl {
            kind: frame.kind,
            coordinates: frame.coordinates.clone(),
            notes: ast::Notes::default(),
        })));
    }
    for (idx, info) in model.coordinates.iter().enumerate() {
        if needs.coordinates[idx] && !shelves.hold(info.name.span.file) {
            out.push_str(&line(StatementKind::Coordinate(ast::CoordinateDecl {
                names: vec![info.name.clone()],
                size: info.size.clone(),
                about: info.about.clone(),
                notes: info.notes.clone(),
            })));
        }
    }
    for (idx, info) in model.fields.iter().enumerate() {
        if needs.fields[idx] && !shelves.hold(info.name.span.file) {
            out.push_str(&line(field(info)));
        }
    }
    if let Some(velocity) = &model.velocity
        && !shelves.hold(velocity.span.file)
    {
        let (fields, coordinates) = velocity.components.iter().cloned().unzip();
        out.push_str(&line(StatementKind::Velocity(
            ast::VelocityDecl::Components {
                fields,
                coordinates,
                notes: ast::Notes::default(),
            },
        )));
    }
    out
}

fn field(info: &crate::model::FieldInfo) -> StatementKind {
    if !info.parts.is_empty() {
        return StatementKind::Split(ast::SplitDecl {
            name: info.name.clone(),
            parts: info.parts.clone(),
            notes: info.notes.clone(),
        });
    }
    StatementKind::Field(ast::FieldDecl {
        is_fluctuation: info.is_fluctuation,
        names: vec![info.name.clone()],
        coordinates: info.coordinates.clone(),
        size: info.size.clone(),
        varying: info.varying.clone(),
        notes: info.notes.clone(),
    })
}

fn groups(origin: &Origin<'_>, shelves: &Shelves, needs: &Needs) -> String {
    let groups = origin.model.groups.iter().enumerate();
    groups
        .filter(|(idx, info)| needs.groups[*idx] && !shelves.hold(info.name.span.file))
        .map(|(_, info)| {
            line(StatementKind::Group(ast::GroupDecl {
                name: info.name.clone(),
                value: info.value.clone(),
                notes: info.notes.clone(),
            }))
        })
        .collect()
}

// Equations -----------------------------------------------------------------------------------

fn equation_text(origin: &Origin<'_>, equation: &ReducedEquation) -> String {
    let title = equation
        .title
        .as_ref()
        .map(|title| format!(" \"{title}\""))
        .unwrap_or_default();
    let [left, right] = equation.sides.each_ref().map(|parts| side(parts));
    let mut out = format!("equation {}{title}:\n", equation.name);
    out.push_str(&layout::wrapped_words("    ", &left));
    out.push_str(&layout::wrapped_words("  = ", &right));
    let whose = match &origin.case.setting.name {
        Some(name) => format!("reduced for {name}"),
        None => "reduced".to_owned(),
    };
    let written = origin.model.equation(&equation.name);
    let source = written.and_then(|idx| origin.model.equations[idx].source.as_ref());
    let source = match source {
        Some(source) => format!("{}; {whose}", source.text),
        None => whose,
    };
    out.push_str(&format!("  from \"{source}\"\n"));
    out
}

/// One side, each part with the name of its process.
fn side(parts: &[Part]) -> Vec<String> {
    words::signed(parts, |part| print::expression(&part.named))
}

/// The balances that speak of the equations written: one of several equations keeps its
/// parts for these if it is the one that was recognised.
fn balances(origin: &Origin<'_>, kept: &[&ReducedEquation]) -> String {
    let is_kept = |name: &str| kept.iter().any(|equation| equation.name == name);
    let recognised: BTreeSet<&str> = kept
        .iter()
        .filter_map(|equation| equation.balance.as_deref())
        .collect();
    let mut out = String::new();
    for balance in &origin.model.balances {
        let is_whole = balance
            .parts
            .iter()
            .all(|part| is_kept(&part.equation.text));
        if !is_whole && !recognised.contains(balance.name.text.as_str()) {
            continue;
        }
        let mut balance = balance.clone();
        balance.parts.retain(|part| is_kept(&part.equation.text));
        if balance.parts.iter().all(|part| knows(origin, kept, part)) {
            out.push_str(&line(StatementKind::Balance(balance)));
        }
    }
    out
}

/// Whether the reduced equation still has all processes of a part.
fn knows(origin: &Origin<'_>, kept: &[&ReducedEquation], part: &ast::BalancePart) -> bool {
    let found = kept
        .iter()
        .find(|equation| equation.name == part.equation.text);
    let (Some(equation), Some(idx)) = (found, origin.model.equation(&part.equation.text)) else {
        return false;
    };
    part.processes.iter().all(|process| {
        let label =
            crate::analysis::requests::process_label(origin.model, origin.case, idx, process);
        label.is_ok_and(|label| {
            let mut kept = equation.kept.iter();
            kept.any(|term| term.process.as_deref().unwrap_or(&term.text) == label)
        })
    })
}

/// A share in per cent, exactly where it is a decimal.
fn in_percent(share: &BigRational) -> String {
    let percent = share * BigRational::from_integer(100.into());
    let ten = BigRational::from_integer(10.into());
    let mut scaled = percent.clone();
    for decimals in 0..30 {
        if scaled.is_integer() {
            let digits = format!("{:0>width$}", scaled.to_integer(), width = decimals + 1);
            let (whole, rest) = digits.split_at(digits.len() - decimals);
            return match rest {
                "" => whole.to_owned(),
                rest => format!("{whole}.{rest}"),
            };
        }
        scaled *= &ten;
    }
    format!("{}", crate::number::rational_to_f64(&percent))
}

/// Whether a value of a module is replaced by one of the script or of the phenomenon.
fn overrides(model: &Model, id: SymbolId, phenomenon: Option<usize>) -> bool {
    let (level, decl) = model.effective(id, phenomenon);
    level > Level::Module && crate::model::is_given(decl)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_tolerance_is_written_exactly() {
        let share = |numer: i64, denom: i64| BigRational::new(numer.into(), denom.into());
        assert_eq!(in_percent(&share(1, 10)), "10");
        assert_eq!(in_percent(&share(1, 800)), "0.125");
        assert_eq!(in_percent(&share(3, 1000)), "0.3");
    }
}
