//! What each reserved word does, with one example of it.

/// A word of the language.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Word {
    /// The word.
    pub word: &'static str,
    /// What it does.
    pub says: &'static str,
    /// One example.
    pub example: &'static str,
}

macro_rules! words {
    ($($word:literal: $says:literal, $example:literal;)+) => {
        &[$(Word { word: $word, says: $says, example: $example }),+]
    };
}

/// Every reserved word: first those that begin a statement.
#[rustfmt::skip]
pub const WORDS: &[Word] = words! {
    "scale": "A characteristic size, always positive; with `in UNIT` in place of a value it stays open.",
        "scale U = 10 m/s within 2 \"wind\" from \"mast V3\"";
    "constant": "A number of the setting, of any sign; it goes into the coefficients.",
        "constant phi = 45 deg \"latitude\"";
    "coordinate": "What fields vary along, and over what length; time is the one named `t`.",
        "coordinate x, y ~ L";
    "frame": "The coordinates of vector operations, in order.",
        "frame spherical (lambda, phi, r)";
    "vector": "Three components under one name.",
        "vector V = (u, v, w)";
    "field": "What varies: on which coordinates it depends, and its size; `field p = p_0 + p'` splits it into parts.",
        "field u, v(x, y, z, t) ~ U";
    "fluctuation": "Fields whose mean is zero, as parts of split fields; `help mean` tells how an equation is averaged.",
        "fluctuation u', v'(x, y, z, t) ~ U";
    "velocity": "What the material derivative `D_t` carries with.",
        "velocity (u, v, w) along (x, y, z)";
    "equation": "A governing equation; `as` names the processes of its terms.",
        "equation x_momentum: D_t(u) - f*v as coriolis = -d_x(p)/rho as pressure_gradient";
    "group": "A named dimensionless product, in which answers then speak.",
        "group Ro = U/(f*L) \"Rossby number\"";
    "balance": "A name for a leading order: the processes that lead in each equation.",
        "balance geostrophic: x_momentum { coriolis, pressure_gradient }";
    "tolerance": "What may be dropped, relative to the largest term of the equation.",
        "tolerance 10 %";
    "phenomenon": "One specific setting: its own values for scales and constants.",
        "phenomenon winter_low \"mature winter low\" { scale U = 10 m/s scale L = 1000 km }";
    "use": "Brings in a module of the library, or a file.",
        "use atmosphere.momentum";
    "show": "The value of an expression; at the prompt the word may be left out.",
        "show U/(f*L)";
    "rank": "Every term with its size, its share of the largest and its verdict.",
        "rank x_momentum";
    "nondimensionalize": "The dimensionless equation with its coefficients as groups.",
        "nondimensionalize x_momentum by coriolis";
    "reduce": "The leading-order system, what was dropped, and how large that can be.",
        "reduce x_momentum within 5 %";
    "bounds": "Over which values of each scale the reduced system stands.",
        "bounds L, U";
    "find": "Every set of dominant balances that fixes the open scales.",
        "find W where continuity: vertical ~ horizontal";
    "layers": "Thin layers where a dropped highest derivative comes back.",
        "layers";
    "groups": "A complete set of independent groups, and every named one.",
        "groups";
    "limit": "Which group goes to 0, and how the others go with it.",
        "limit Ro -> 0 with Bu ~ 1, others ~ 1";
    "expand": "The hierarchy of equations, order by order.",
        "expand x_momentum to order 1";
    "sweep": "How sizes and verdicts change as one scale grows.",
        "sweep L from 1 km to 10000 km";
    "regimes": "The map of leading-order balances over two scales.",
        "regimes L from 1 km to 1000 km, U from 1 m/s to 50 m/s";
    "compare": "Phenomena side by side, and what would have to change to match them.",
        "compare winter_low, squall_vortex matching Ro";
    "claim": "A statement about the analysis that must hold.",
        "claim leading x_momentum = coriolis, pressure_gradient";
    "in": "The unit in which a value is shown, or in which an open name is measured.",
        "show U in kt";
    "for": "The phenomena that a request answers for; it comes last.",
        "rank x_momentum for winter_low";
    "by": "The term by which an equation is divided.",
        "nondimensionalize x_momentum by coriolis";
    "from": "Where a number comes from, or the lower end of a stretch.",
        "scale H = 10 km from \"sounding at the coast\"";
    "to": "The upper end of a stretch, or the order of an expansion.",
        "sweep U from 1 m/s to 50 m/s";
    "within": "How far a value may lie off, either way: a factor or a share.",
        "scale L = 1000 km within 20 %";
    "about": "The origin of a coordinate that does not begin at 0.",
        "coordinate lat ~ L/a about phi";
    "along": "The coordinates of the velocity's components.",
        "velocity (u, v) along (x, y)";
    "as": "The process that a term belongs to.",
        "equation y_momentum: D_t(v) + f*u as coriolis = -d_y(p)/rho as pressure_gradient";
    "where": "Which processes must be among the largest.",
        "find W where continuity: vertical ~ horizontal";
    "with": "How other groups go with the small one of a limit.",
        "limit Ro -> 0 with others ~ 1";
    "varying": "By how much a field varies, where that differs from its level.",
        "field theta(x, z) ~ 300 K varying 5 K";
    "using": "Equations, each with one product alone on its left, which is replaced by the right side wherever it occurs.",
        "equation vorticity from d_x(y_momentum) - d_y(x_momentum) using no_divergence";
    "save": "Writes the reduced system of one phenomenon to a file.",
        "reduce x_momentum save \"leading.scl\" for winter_low";
    "matching": "The groups that a comparison wants equal.",
        "compare winter_low, squall_vortex matching Ro";
};

/// What is looked for under words that are not reserved.
#[rustfmt::skip]
pub const NOTIONS: &[Word] = words! {
    "split": "A field as a sum of fields and constants declared elsewhere, which take its place everywhere; in quotients, powers and functions it is expanded about the largest part.",
        "field p = p_0 + p'";
    "mean": "The average in an equation: linear, 0 for a `fluctuation`, any other field itself. The mean of an equation brings in the stresses of the split fields.",
        "equation mean_x from mean(x_momentum)";
    "base": "A base state: the part of a split field that is at rest, with an equation of its own that `using` takes out of others. The library's shared symbols stand in the modules `base.axes`, `base.planet` and so on.",
        "equation hydrostatic_base: d_z(p_0) = -rho_0*g";
};

#[cfg(test)]
mod tests {
    use super::*;
    use crate::source::FileId;
    use crate::syntax::parser;
    use crate::syntax::token::{self, RESERVED};

    #[test]
    fn every_notion_has_an_example_that_parses() {
        for found in NOTIONS {
            assert!(!token::is_reserved(found.word), "{}", found.word);
            let (script, errors) = parser::parse(found.example, FileId::default());
            assert!(errors.is_empty(), "{}: {errors:?}", found.example);
            assert_eq!(script.statements.len(), 1, "{}", found.example);
        }
    }

    #[test]
    fn every_reserved_word_has_a_topic_with_an_example_of_it() {
        assert_eq!(WORDS.len(), RESERVED.len());
        for ((_, reserved), found) in RESERVED.iter().zip(WORDS) {
            assert_eq!(*reserved, found.word);
            let (script, errors) = parser::parse(found.example, FileId::default());
            assert!(errors.is_empty(), "{}: {errors:?}", found.example);
            assert_eq!(script.statements.len(), 1, "{}", found.example);
            let tokens = token::read(found.example, FileId::default()).tokens;
            assert!(
                tokens.iter().any(|token| token.text == found.word),
                "{}",
                found.example
            );
        }
    }
}
