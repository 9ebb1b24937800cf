//! The sentences that all report forms share.

use num_integer::Integer as _;

use crate::analysis::balances::Balances;
use crate::analysis::claims::{Astray, Held, Measured};
use crate::analysis::reduce::{Kind, Lone, LostDerivative, Part, ReducedEquation, ReducedTerm};
use crate::analysis::show::Shown;
use crate::analysis::{Answer, Body, Exponents, Factors};
use crate::diagnostic::Severity;
use crate::number::{Exponent, Number};
use crate::report::layout::{number, percent, quantity, range, significant, unit};
use crate::syntax::ast::{ClaimWord, Relation};
use crate::units::{self, Range};

/// A warning or note of one equation.
#[derive(Debug, Clone)]
pub struct Warning {
    /// Its code.
    pub code: &'static str,
    /// Its weight.
    pub severity: Severity,
    /// What it says.
    pub message: String,
    /// Scales that mend it, each with its factor.
    pub mends: Vec<(String, f64)>,
}

/// A number times powers of names: `2*Ro/Bu`, `dP/(rho*L)`.
pub fn product(factor: &Number, exponents: &Exponents) -> String {
    let powers = |is_below: bool| {
        exponents
            .iter()
            .filter(move |(_, power)| power.is_negative() == is_below)
            .map(move |(name, power)| raised(name, if is_below { power.negated() } else { *power }))
    };
    let mut above: Vec<String> = powers(false).collect();
    let below: Vec<String> = powers(true).collect();
    if !factor.is_one() || above.is_empty() {
        above.insert(0, short(factor));
    }
    let above = above.join("*");
    match below.as_slice() {
        [] => above,
        [single] => format!("{above}/{single}"),
        several => format!("{above}/({})", several.join("*")),
    }
}

/// An exact number as it is where that is short, else in six digits.
pub fn short(exact: &Number) -> String {
    let text = exact.to_string();
    if text.len() <= 9 {
        text
    } else {
        significant(exact.to_f64(), 6)
    }
}

fn raised(name: &str, power: Exponent) -> String {
    if power == Exponent::ONE {
        name.to_owned()
    } else if power.is_whole() {
        format!("{name}^{power}")
    } else {
        format!("{name}^({power})")
    }
}

/// A number and exponents as a product.
pub fn factors(factors: &Factors) -> String {
    product(&factors.number, &factors.exponents)
}

/// The same with what is raised to a fraction under one root: `tau_0/(rho_0*sqrt(nu*f))`.
pub fn formula(found: &Factors) -> String {
    let (whole, broken): (Exponents, Exponents) = found
        .exponents
        .iter()
        .cloned()
        .partition(|(_, power)| power.is_whole());
    let degree = broken
        .iter()
        .fold(1, |lcm: i64, (_, power)| lcm.lcm(&power.denom()));
    if broken.is_empty() || degree > MAX_DEGREE {
        return factors(found);
    }
    let is_below = broken.iter().all(|(_, power)| power.is_negative());
    let inside = broken.iter().map(|(name, power)| {
        let sign = if is_below { -1 } else { 1 };
        let times = sign * power.numer() * (degree / power.denom());
        (name.clone(), Exponent::whole(times).unwrap_or(*power))
    });
    let inside = product(&Number::one(), &inside.collect());
    let root = match degree {
        2 => format!("sqrt({inside})"),
        degree => format!("({inside})^(1/{degree})"),
    };
    let power = if is_below {
        Exponent::ONE.negated()
    } else {
        Exponent::ONE
    };
    let mut exponents = whole;
    exponents.push((root, power));
    product(&found.number, &exponents)
}

/// Roots of a higher degree are written name by name.
const MAX_DEGREE: i64 = 12;

/// So many dropped terms a report lists in any case.
const ALWAYS_LISTED: usize = 8;

/// Part of the tolerance below which a dropped term is far from mattering.
const FAR_BELOW: f64 = 1e-4;

/// Scales with the factors that they would have to take, any of which is enough.
pub fn mends(mends: &[(String, f64)]) -> String {
    let texts: Vec<String> = mends
        .iter()
        .map(|(scale, factor)| {
            if *factor >= 1.0 {
                format!("{scale} × {}", number(*factor))
            } else {
                format!("{scale} ÷ {}", number(1.0 / factor))
            }
        })
        .collect();
    match texts.as_slice() {
        [first @ .., last] if !first.is_empty() => format!("{} or {last}", first.join(", ")),
        texts => texts.concat(),
    }
}

fn ordinal(order: u32) -> String {
    match order {
        1 => "first".to_owned(),
        2 => "second".to_owned(),
        3 => "third".to_owned(),
        4 => "fourth".to_owned(),
        order => format!("{order}th"),
    }
}

/// A share over the box: `28.9 .. 100 %`.
pub fn share(share: &Range) -> String {
    if share.is_exact() {
        return percent(share.nominal);
    }
    format!(
        "{} .. {}",
        percent(share.low).trim_end_matches(" %"),
        percent(share.high)
    )
}

/// The parts of one side of an equation, each with the sign before it; none of a side
/// that is 0.
pub fn signed(parts: &[Part], text: impl Fn(&Part) -> String) -> Vec<String> {
    if parts.is_empty() {
        return vec!["0".to_owned()];
    }
    let parts = parts.iter().enumerate();
    parts
        .map(|(idx, part)| {
            let sign = match (idx, part.is_negative) {
                (0, false) => "",
                (0, true) => "-",
                (_, false) => "+ ",
                (_, true) => "- ",
            };
            format!("{sign}{}", text(part))
        })
        .collect()
}

/// Which balance leads, whether it was put in, and whether the equation keeps more.
pub fn leading_order(equation: &ReducedEquation) -> String {
    let name = equation.balance.as_deref().unwrap_or("unnamed");
    let depend = "and terms that depend on the ranges";
    let put_in = "by construction: derived scales put this balance in";
    match (equation.by_construction, keeps_more(equation)) {
        (true, false) => format!("{name}, {put_in}"),
        (true, true) => format!("{name} ({put_in}), {depend}"),
        (false, true) if equation.leading.is_empty() => {
            "no process over all ranges, only terms that depend on them".to_owned()
        }
        (false, true) => format!("{name}, {depend}"),
        (false, false) => name.to_owned(),
    }
}

/// Whether a term of a process that does not lead is kept.
fn keeps_more(equation: &ReducedEquation) -> bool {
    let label = |term: &ReducedTerm| term.process.clone().unwrap_or_else(|| term.text.clone());
    let mut kept = equation.kept.iter();
    kept.any(|term| !equation.leading.contains(&label(term)))
}

/// What a reduced equation of base fields alone is good for.
pub const BASE_STATE: &str = "a base state alone: `using` takes it out of other equations";

/// The fields that an equation steps in time, and those that it gives at any time.
pub fn kinds(equation: &ReducedEquation) -> String {
    let of = |wanted: Kind| -> Vec<&str> {
        let kinds = equation.kinds.iter().filter(|(_, kind)| *kind == wanted);
        kinds.map(|(field, _)| field.as_str()).collect()
    };
    let mut texts = Vec::new();
    for (kind, word) in [
        (Kind::Prognostic, "prognostic"),
        (Kind::Diagnostic, "diagnostic"),
    ] {
        let fields = of(kind);
        if !fields.is_empty() {
            texts.push(format!("{} {word}", fields.join(", ")));
        }
    }
    texts.join("; ")
}

/// A request with its phenomenon: `rank, winter_low: mature winter low`.
pub fn heading(answer: &Answer) -> String {
    // The phenomenon is named once, whatever the request says behind `for`.
    let asked = answer.text.split(" for ").next().unwrap_or(&answer.text);
    match (&answer.phenomenon, &answer.title) {
        (Some(name), Some(title)) => format!("{asked}, {name}: {title}"),
        (Some(name), None) => format!("{asked}, {name}"),
        (None, _) => answer.text.clone(),
    }
}

/// Whether an answer speaks of shares and verdicts.
pub fn has_verdicts(answer: &Answer) -> bool {
    match answer.body {
        Body::Rank(_) | Body::Reduce(_) | Body::Compare(_) => true,
        Body::Show(_)
        | Body::Groups(_)
        | Body::Nondimensionalize(_)
        | Body::Find(_)
        | Body::Layers(_)
        | Body::Expand(_)
        | Body::Bounds(_) => false,
    }
}

/// A heading in two parts.
pub struct Asked {
    /// The request, without the phenomena that it names.
    pub request: String,
    /// For what it was answered: ` for winter_low, mature winter low`.
    pub subject: String,
}

/// The heading of an answer in two parts.
pub fn asked(answer: &Answer) -> Asked {
    let request = answer.text.split(" for ").next().unwrap_or(&answer.text);
    let title = answer.title.as_ref().map(|title| format!(", {title}"));
    let subject = answer
        .phenomenon
        .as_ref()
        .map(|name| format!(" for {name}{}", title.unwrap_or_default()));
    Asked {
        request: request.to_owned(),
        subject: subject.unwrap_or_default(),
    }
}

/// A claim without its keyword, with the phenomenon that it was held against.
pub fn claim(claim: &Held) -> String {
    let text = claim.text.strip_prefix("claim ").unwrap_or(&claim.text);
    match (&claim.phenomenon, text.contains(" for ")) {
        (Some(name), false) => format!("{text} for {name}"),
        _ => text.to_owned(),
    }
}

/// What was measured for a claim that is not met, by how much it misses, and what would
/// mend it.
pub fn unmet(claim: &Held) -> String {
    let mut text = measured(claim);
    if let Some(miss) = claim.miss {
        text.push_str(&format!("; misses by a factor {}", number(miss)));
    }
    if !claim.mends.is_empty() {
        text.push_str(&format!("; would hold with {}", mends(&claim.mends)));
    }
    text
}

/// How many claims there are, and how many hold.
pub fn tally(claims: &[Held]) -> String {
    let n_met = claims.iter().filter(|claim| claim.met).count();
    let n_unmet = claims.len() - n_met;
    let noun = if claims.len() == 1 { "claim" } else { "claims" };
    format!("{} {noun}: {n_met} met, {n_unmet} not met", claims.len())
}

/// What the words of the tables mean, for a reader who meets them first.
pub const LEGEND: &str = "The size of a term follows from the scales; its share is its size \
    over that of the largest term of its equation at the same values. Ranges run over all \
    values that the scales may take. With its share above the tolerance over the whole range \
    a term leads; above it over a part only, it depends; never above it, it drops and is left \
    out.";

/// What the lost derivatives of an equation mean, in one sentence.
pub fn lost(lost: &[LostDerivative]) -> String {
    let mut sets: Vec<(&str, u32, Vec<&str>)> = Vec::new();
    for lost in lost {
        let (field, order) = (lost.field.as_str(), lost.order);
        let mut known = sets.iter_mut();
        match known.find(|(found, at, _)| *found == field && *at == order) {
            Some((_, _, along)) => along.push(&lost.coordinate),
            None => sets.push((field, order, vec![&lost.coordinate])),
        }
    }
    let derivatives: Vec<String> = sets
        .iter()
        .map(|(field, order, along)| {
            let noun = if along.len() == 1 {
                "derivative"
            } else {
                "derivatives"
            };
            format!(
                "the {} {noun} of {field} along {}",
                ordinal(*order),
                along.join(", ")
            )
        })
        .collect();
    let in_time = lost.iter().any(|lost| lost.coordinate == "t");
    let in_space = lost.iter().any(|lost| lost.coordinate != "t");
    let conditions = match (in_space, in_time) {
        (true, true) => "boundary and initial conditions",
        (false, true) => "an initial condition",
        (true, false) if lost.len() == 1 => "a boundary condition",
        (true, false) | (false, false) => "boundary conditions",
    };
    let (verb, them) = if lost.len() == 1 {
        ("is", "it")
    } else {
        ("are", "they")
    };
    format!(
        "{} {verb} lost, and with {} {conditions}; `layers` looks for where {them} matter again",
        derivatives.join(" and "),
        if lost.len() == 1 { "it" } else { "them" },
    )
    .replace("where it matter again", "where it matters again")
}

/// The warnings and notes of a reduced equation.
pub fn warnings(equation: &ReducedEquation) -> Vec<Warning> {
    let mut found = Vec::new();
    match &equation.lone {
        Some(Lone::Term {
            term,
            is_derivative,
            mends: scales,
        }) => {
            let mut message = format!(
                "`{}` is left with `{term}` alone, which nothing balances",
                equation.name
            );
            if *is_derivative {
                message.push_str(": it vanishes to leading order");
            }
            if !scales.is_empty() {
                message.push_str(&format!(
                    "; a second process would be as large with {}",
                    mends(scales)
                ));
            }
            found.push(Warning {
                code: "lone-leading-term",
                severity: Severity::Warning,
                message,
                mends: scales.clone(),
            });
        }
        Some(Lone::Process { process }) => found.push(Warning {
            code: "lone-process",
            severity: Severity::Note,
            message: format!(
                "the terms of `{process}` are left alone in `{}` and must cancel one another",
                equation.name
            ),
            mends: Vec::new(),
        }),
        None => {}
    }
    if !equation.lost.is_empty() {
        found.push(Warning {
            code: "lost-derivative",
            severity: Severity::Note,
            message: format!("in `{}` {}", equation.name, lost(&equation.lost)),
            mends: Vec::new(),
        });
    }
    found
}

/// What an undetermined field means.
pub fn undetermined(fields: &[String]) -> String {
    let verb = if fields.len() == 1 { "is" } else { "are" };
    format!(
        "{} {verb} determined by the full equations, but no longer by the reduced ones",
        fields.join(", ")
    )
}

/// A value that was asked for, with its order and the group it is.
pub fn shown(shown: &Shown) -> String {
    let (value, unit_text) = match &shown.shown_in {
        Some((unit, value)) => (value, unit),
        None => (&shown.value, &shown.unit),
    };
    let bound = if shown.is_bound { "at most " } else { "" };
    let mut text = format!("{bound}{}", quantity(value, unit_text));
    if let Some(order) = shown.order {
        text.push_str(&format!(", order 1e{order}"));
        if shown.shown_in.is_some() && shown.unit != "1" {
            text.push_str(&format!(" {}", unit(&shown.unit)));
        }
    }
    if let Some(group) = &shown.group {
        let title = shown.group_title.as_ref().map(|title| format!(", {title}"));
        text.push_str(&format!("; {group}{}", title.unwrap_or_default()));
    }
    text
}

/// A word with a capital letter.
pub fn capital(word: &str) -> String {
    let mut chars = word.chars();
    let first = chars.next().map(|first| first.to_uppercase().chain(chars));
    first.map(Iterator::collect).unwrap_or_default()
}

/// What was measured for a claim.
pub fn measured(held: &Held) -> String {
    match &held.measured {
        Measured::Ratio {
            value,
            limit,
            relation,
        } => {
            let side = match relation {
                Relation::MuchLess => format!("at most {} is asked for", number(*limit)),
                Relation::MuchGreater => format!("at least {} is asked for", number(1.0 / limit)),
                _ => format!(
                    "within a factor {} of 1 at the nominal values is asked for",
                    number(*limit)
                ),
            };
            format!("ratio {}; {side}", range(value))
        }
        Measured::Value {
            left,
            right,
            unit,
            written_unit,
            relation,
            is_bound,
        } => {
            let bound = if *is_bound {
                ", at most so far apart"
            } else {
                ""
            };
            let (left, right) = match relation {
                Relation::Equal => (Range::exact(left.nominal), Range::exact(right.nominal)),
                _ => (*left, *right),
            };
            let shown = |range: &Range| in_unit(range, unit, written_unit.as_ref());
            format!("{} against {}{bound}", shown(&left), shown(&right))
        }
        Measured::Processes {
            word,
            found,
            astray,
            ..
        } => measured_processes(*word, found, astray),
    }
}

/// The dropped terms, the one with the highest share first.
pub fn dropped(equation: &ReducedEquation) -> Vec<&ReducedTerm> {
    let mut terms: Vec<&ReducedTerm> = equation.dropped.iter().collect();
    terms.sort_by(|a, b| b.share.high.total_cmp(&a.share.high));
    terms
}

/// The dropped terms with their highest shares, as texts reports list them: the first few and
/// all others that are not far below the tolerance; of the rest, how many they are.
pub fn dropped_listed(equation: &ReducedEquation) -> Vec<String> {
    let terms = dropped(equation);
    let is_far = |term: &&ReducedTerm| term.share.high < FAR_BELOW * equation.tolerance;
    let far = terms.iter().skip(ALWAYS_LISTED).filter(|term| is_far(term));
    let listed = match far.count() {
        0 | 1 => terms.len(),
        far => terms.len() - far,
    };
    let mut texts: Vec<String> = terms[..listed]
        .iter()
        .map(|term| format!("{} {}", term.text, percent(term.share.high)))
        .collect();
    if let Some(first) = terms.get(listed) {
        let most = percent(first.share.high);
        texts.push(format!("{} more of at most {most}", terms.len() - listed));
    }
    texts
}

/// That no balance is consistent, and why.
pub fn no_balance(found: &Balances) -> String {
    let listed: Vec<String> = found
        .contradiction
        .iter()
        .map(|name| format!("`{name}`"))
        .collect();
    let why = match listed.as_slice() {
        [] => "no balance is consistent".to_owned(),
        [single] => format!("{single} alone has no consistent balance"),
        [others @ .., last] => format!(
            "no balance is consistent: {} and {last} contradict one another",
            others.join(", ")
        ),
    };
    match found.is_conditioned {
        true => format!("{why}, with the processes that `where` asks for"),
        false => why,
    }
}

/// A value in the unit in which it was written, or else in SI units.
pub fn in_unit(value: &Range, si_unit: &str, written: Option<&String>) -> String {
    let unit = written.and_then(|text| Some((text, units::parse_unit(text).ok()?)));
    match unit {
        Some((text, unit)) => {
            let [low, nominal, high] =
                [value.low, value.nominal, value.high].map(|end| unit.from_si(end));
            quantity(&Range { low, nominal, high }, text)
        }
        None => quantity(value, si_unit),
    }
}

fn measured_processes(word: ClaimWord, found: &[String], astray: &[Astray]) -> String {
    let verb = match word {
        ClaimWord::Leading if found.len() > 1 => "lead",
        ClaimWord::Leading => "leads",
        ClaimWord::Kept if found.len() > 1 => "are kept",
        ClaimWord::Kept => "is kept",
        ClaimWord::Dropped if found.len() > 1 => "stay",
        ClaimWord::Dropped => "stays",
    };
    let mut text = match (word, found) {
        (ClaimWord::Dropped, []) => "all of it drops".to_owned(),
        (_, []) => format!("nothing {verb}"),
        (_, found) => format!("{} {verb}", found.join(", ")),
    };
    for astray in astray {
        let process = &astray.process;
        text.push_str(&match (&astray.share, astray.is_claimed) {
            (None, _) => format!("; {process} is gone"),
            (Some(share), true) => format!("; {process} has a share of {}", shares(share)),
            (Some(share), false) => {
                format!("; {process}, not claimed, has a share of {}", shares(share))
            }
        });
    }
    text
}

/// A share over the box: `2 .. 9.5 .. 27.7 %`.
pub fn shares(share: &Range) -> String {
    if share.is_exact() {
        return percent(share.nominal);
    }
    let bare = |share: f64| percent(share).trim_end_matches(" %").to_owned();
    format!(
        "{} .. {} .. {}",
        bare(share.low),
        bare(share.nominal),
        percent(share.high)
    )
}

/// Whether the reports say in their own place what a diagnostic of this code says.
pub fn is_in_report(code: &str) -> bool {
    matches!(
        code,
        "lone-leading-term"
            | "lone-process"
            | "lost-derivative"
            | "undetermined-field"
            | "no-balance"
    )
}
