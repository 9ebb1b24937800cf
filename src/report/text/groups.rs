//! `groups` for a terminal.

use crate::analysis::groups::{Groups, NamedGroup, PiGroup};
use crate::number::{Exponent, Number};
use crate::report::layout::{WIDTH, cut, padded, range, width, wrapped};
use crate::report::text::Pen;
use crate::report::words;
use crate::units::Range;

/// Writes the independent groups, then the named ones over them.
pub(super) fn groups(groups: &Groups, pen: &Pen, out: &mut String) {
    let n = groups.independent.len();
    let head = match n {
        0 => "no independent group".to_owned(),
        1 => "one independent group".to_owned(),
        n => format!("{n} independent groups"),
    };
    out.push_str(&wrapped(
        "",
        &pen.head(&format!("{head} of {}", groups.symbols.join(", "))),
    ));
    independent(groups, out);
    out.push('\n');
    named(groups, pen, out);
}

fn independent(groups: &Groups, out: &mut String) {
    let rows: Vec<[String; 3]> = groups
        .independent
        .iter()
        .enumerate()
        .map(|(idx, group)| {
            let name = format!("Pi_{}", idx + 1);
            let known = same_as(&name, group, groups);
            [
                name,
                words::factors(&group.factors) + &known,
                value(group.value.as_ref()),
            ]
        })
        .collect();
    table(&rows, out);
}

/// The named group that an independent one is, or a power of it.
fn same_as(name: &str, group: &PiGroup, groups: &Groups) -> String {
    if let Some(known) = &group.name {
        return format!(" = {known}");
    }
    let power_of = |named: &NamedGroup| -> Option<String> {
        match named.groups.as_deref()? {
            [(found, power)] if found == name && named.factors.number.is_one() => {
                let inverse = Exponent::from_rational(&power.to_rational().recip()).ok()?;
                let powers = vec![(named.name.clone(), inverse)];
                Some(format!(" = {}", words::product(&Number::one(), &powers)))
            }
            _ => None,
        }
    };
    groups.named.iter().find_map(power_of).unwrap_or_default()
}

fn named(groups: &Groups, pen: &Pen, out: &mut String) {
    let (own, others): (Vec<&NamedGroup>, Vec<&NamedGroup>) = groups
        .named
        .iter()
        .partition(|group| group.groups.is_some());
    if !own.is_empty() {
        out.push_str(&format!("{}\n", pen.head("named groups")));
        let rows: Vec<[String; 3]> = own
            .iter()
            .filter_map(|group| {
                let product = words::product(&group.factors.number, group.groups.as_ref()?);
                let value = value(group.value.as_ref());
                Some([group.name.clone(), product, value])
            })
            .collect();
        table(&rows, out);
    }
    out.push_str(&wrapped("", &spanned(groups)));
    if !others.is_empty() {
        let names: Vec<&str> = others.iter().map(|group| group.name.as_str()).collect();
        let text = format!(
            "{} hold scales or constants that are not among these",
            names.join(", ")
        );
        out.push_str(&wrapped("", &text));
    }
    out.push('\n');
}

/// Which named groups are complete.
pub(in crate::report) fn spanned(groups: &Groups) -> String {
    let names = groups.spanning.join(", ");
    let n = groups.independent.len();
    match (groups.spanning.len(), groups.is_spanned()) {
        (_, true) if n == 0 => "nothing is left to name".to_owned(),
        (1, true) => format!("{names} alone is complete"),
        (_, true) => format!("{names} are complete: every other group is a product of them"),
        (0, false) => "no named group is a product of these".to_owned(),
        (count, false) => format!("{names} are independent, {count} of the {n} that are needed"),
    }
}

fn value(value: Option<&Range>) -> String {
    value.map_or_else(|| "open".to_owned(), range)
}

fn table(rows: &[[String; 3]], out: &mut String) {
    let column = |idx: usize, most: usize| {
        let widths = rows.iter().map(|row| width(&row[idx]));
        widths.max().unwrap_or(0).min(most)
    };
    let names = column(0, 16);
    let values = column(2, 34);
    let texts = column(1, WIDTH.saturating_sub(names + values + 6));
    for [name, text, value] in rows {
        let name = padded(&cut(name, names), names);
        let text = padded(&cut(text, texts), texts);
        out.push_str(format!("  {name}  {text}  {value}").trim_end());
        out.push('\n');
    }
}
