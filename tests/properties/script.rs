//! Scripts drawn at random: a few equations of fitting terms over scales with ranges.

use std::fmt::Write as _;

use proptest::collection::vec;
use proptest::prelude::*;

/// The base dimensions of the scripts: length, time, mass.
type Powers = [i32; 3];

const ACCELERATION: Powers = [1, -2, 0];

/// Every name that a script declares, none part of another or of a word of the language.
pub(super) const NAMES: [&str; 26] = [
    "Uqa", "Wqb", "Lqc", "Hqd", "Tqe", "Pqf", "Rqg", "xqh", "zqi", "tqk", "uql", "wqm", "pqn",
    "kq_0", "kq_1", "kq_2", "kq_3", "kq_4", "kq_5", "kq_6", "kq_7", "Gqo", "Fqp", "eq_0", "eq_1",
    "eq_2",
];

/// A scale: its name, its dimension, its decimal exponent at about which values lie.
const SCALES: [(&str, Powers, i32); 7] = [
    ("Uqa", [1, -1, 0], 1),
    ("Wqb", [1, -1, 0], -1),
    ("Lqc", [1, 0, 0], 5),
    ("Hqd", [1, 0, 0], 3),
    ("Tqe", [0, 1, 0], 4),
    ("Pqf", [-1, -2, 1], 2),
    ("Rqg", [-3, 0, 1], 0),
];

/// What a term is made of, with its dimension.
const CORES: [(&str, Powers); 9] = [
    ("∂uql/∂tqk", [1, -2, 0]),
    ("uql*∂uql/∂xqh", [1, -2, 0]),
    ("wqm*∂uql/∂zqi", [1, -2, 0]),
    ("∂pqn/∂xqh", [-2, -2, 1]),
    ("∂²uql/∂zqi²", [-1, -1, 0]),
    ("∂²wqm/∂xqh²", [-1, -1, 0]),
    ("uql^2*wqm", [3, -3, 0]),
    ("pqn*∂wqm/∂zqi", [-1, -3, 1]),
    ("∂(uql*pqn)/∂xqh", [-1, -3, 1]),
];

/// Units for length, time and mass, each with the power of ten that it stands for.
pub(super) type Units = [(&'static str, i32); 3];

/// A value: two digits, a power of ten, and how far it may lie off, in halves of a factor.
#[derive(Debug, Clone)]
struct Drawn {
    digits: u32,
    exponent: i32,
    halves: u32,
}

/// One term: what it is made of, its constant, its sign.
#[derive(Debug, Clone)]
struct Term {
    core: usize,
    constant: Drawn,
    is_negative: bool,
    is_named: bool,
}

/// A script.
#[derive(Debug, Clone)]
pub(super) struct Script {
    scales: Vec<Drawn>,
    equations: Vec<Vec<Term>>,
}

fn drawn(least: i32, most: i32, halves: u32) -> impl Strategy<Value = Drawn> {
    (10..100_u32, least..=most, 0..=halves).prop_map(|(digits, exponent, halves)| Drawn {
        digits,
        exponent,
        halves,
    })
}

/// Scripts of one or two equations with at most eight terms in all.
pub(super) fn scripts() -> impl Strategy<Value = Script> {
    let term = (
        0..CORES.len(),
        drawn(-4, 2, 0),
        any::<bool>(),
        any::<bool>(),
    )
        .prop_map(|(core, constant, is_negative, is_named)| Term {
            core,
            constant,
            is_negative,
            is_named,
        });
    let scales: Vec<_> = SCALES
        .iter()
        .map(|(_, _, about)| drawn(about - 1, about + 1, 6))
        .collect();
    (scales, vec(vec(term, 2..=4), 1..=2))
        .prop_map(|(scales, equations)| Script { scales, equations })
}

impl Script {
    pub(super) const SI: Units = [("m", 0), ("s", 0), ("kg", 0)];
    /// Read in these, the same numbers are another flow.
    pub(super) const IMPERIAL: Units = [("ft", 0), ("h", 0), ("lb", 0)];
    /// The same flow.
    pub(super) const PREFIXED: Units = [("km", 3), ("ms", -3), ("g", -3)];

    /// The text of the script in these units.
    pub(super) fn text(&self, units: &Units) -> String {
        let mut text = String::new();
        for ((name, powers, _), drawn) in SCALES.iter().zip(&self.scales) {
            let value = value(drawn, powers, units);
            let range = match drawn.halves {
                0 => String::new(),
                halves => format!(" within {}", 1.0 + f64::from(halves) / 2.0),
            };
            let _ = writeln!(text, "scale {name} = {value}{range}");
        }
        text.push_str(
            "coordinate xqh ~ Lqc\ncoordinate zqi ~ Hqd\ncoordinate tqk ~ Tqe\n\
             field uql(xqh, zqi, tqk) ~ Uqa\nfield wqm(xqh, zqi, tqk) ~ Wqb\n\
             field pqn(xqh, zqi, tqk) ~ Pqf\n\
             group Gqo = Uqa*Tqe/Lqc\ngroup Fqp = Wqb*Lqc/(Uqa*Hqd)\n",
        );
        let mut n_constants = 0;
        for (idx, terms) in self.equations.iter().enumerate() {
            let mut sides = String::new();
            for (place, term) in terms.iter().enumerate() {
                let (core, powers) = CORES[term.core];
                let missing = [0, 1, 2].map(|base| ACCELERATION[base] - powers[base]);
                let constant = value(&term.constant, &missing, units);
                let _ = writeln!(text, "constant kq_{n_constants} = {constant}");
                let sign = match (place, term.is_negative) {
                    (0, false) => "",
                    (0, true) => "-",
                    (1, false) => " = ",
                    (1, true) => " = -",
                    (_, false) => " + ",
                    (_, true) => " - ",
                };
                let _ = write!(sides, "{sign}kq_{n_constants}*{core}");
                if term.is_named {
                    let _ = write!(sides, " as \"part {}\"", term.core % 3);
                }
                n_constants += 1;
            }
            let _ = writeln!(text, "equation eq_{idx}: {sides}");
        }
        text + "rank\nreduce\nnondimensionalize\ngroups\n"
    }
}

/// A value in these units: where they are powers of ten of the SI ones, the same size.
fn value(drawn: &Drawn, powers: &Powers, units: &Units) -> String {
    let shift: i32 = powers
        .iter()
        .zip(units)
        .map(|(power, (_, tens))| power * tens)
        .sum();
    let unit: Vec<String> = powers
        .iter()
        .zip(units)
        .filter(|(power, _)| **power != 0)
        .map(|(power, (unit, _))| format!("{unit}^{power}"))
        .collect();
    let number = format!("{}e{}", drawn.digits, drawn.exponent - 1 - shift);
    match unit.is_empty() {
        true => number,
        false => format!("{number} {}", unit.join(".")),
    }
}
