//! The SI prefixes, quetta to quecto, and the two more ways to write micro.
//!
//! Source: SI Brochure, 9th ed. (2019); the four outermost: 27th CGPM (2022),
//! resolution 3.

/// An SI prefix.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Prefix {
    /// What stands before the unit: `k`.
    pub symbol: &'static str,
    /// Its name: `kilo`.
    pub name: &'static str,
    /// The power of ten it stands for: 3.
    pub power: i32,
}

/// All prefixes; micro has three spellings (the letter u, the micro sign, the Greek mu).
#[rustfmt::skip]
pub(super) const PREFIXES: [Prefix; 26] = [
    Prefix { symbol: "Q",  name: "quetta", power: 30 },
    Prefix { symbol: "R",  name: "ronna",  power: 27 },
    Prefix { symbol: "Y",  name: "yotta",  power: 24 },
    Prefix { symbol: "Z",  name: "zetta",  power: 21 },
    Prefix { symbol: "E",  name: "exa",    power: 18 },
    Prefix { symbol: "P",  name: "peta",   power: 15 },
    Prefix { symbol: "T",  name: "tera",   power: 12 },
    Prefix { symbol: "G",  name: "giga",   power: 9 },
    Prefix { symbol: "M",  name: "mega",   power: 6 },
    Prefix { symbol: "k",  name: "kilo",   power: 3 },
    Prefix { symbol: "h",  name: "hecto",  power: 2 },
    Prefix { symbol: "da", name: "deca",   power: 1 },
    Prefix { symbol: "d",  name: "deci",   power: -1 },
    Prefix { symbol: "c",  name: "centi",  power: -2 },
    Prefix { symbol: "m",  name: "milli",  power: -3 },
    Prefix { symbol: "u",  name: "micro",  power: -6 },
    Prefix { symbol: "\u{b5}",  name: "micro", power: -6 },
    Prefix { symbol: "\u{3bc}", name: "micro", power: -6 },
    Prefix { symbol: "n",  name: "nano",   power: -9 },
    Prefix { symbol: "p",  name: "pico",   power: -12 },
    Prefix { symbol: "f",  name: "femto",  power: -15 },
    Prefix { symbol: "a",  name: "atto",   power: -18 },
    Prefix { symbol: "z",  name: "zepto",  power: -21 },
    Prefix { symbol: "y",  name: "yocto",  power: -24 },
    Prefix { symbol: "r",  name: "ronto",  power: -27 },
    Prefix { symbol: "q",  name: "quecto", power: -30 },
];
