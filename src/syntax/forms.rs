//! The form of every statement on one line, as messages and the prompt show it.

use crate::syntax::token::Kind;

/// How a statement is written; capitals stand for what the writer fills in, square
/// brackets for what may be left out. `None` for a word that begins no statement.
pub fn form(keyword: Kind) -> Option<&'static str> {
    FORMS
        .iter()
        .find(|(kind, _)| *kind == keyword)
        .map(|(_, form)| *form)
}

/// The forms in the order of the keywords.
pub const FORMS: [(Kind, &str); 28] = [
    (
        Kind::Scale,
        "scale NAME = VALUE [.. VALUE | +- VALUE | within FACTOR] [\"title\"] [from \"source\"]",
    ),
    (
        Kind::Constant,
        "constant NAME = VALUE [.. VALUE | +- VALUE | within FACTOR] [\"title\"] [from \"source\"]",
    ),
    (
        Kind::Coordinate,
        "coordinate NAME, ... ~ SCALE [about VALUE] [\"title\"] [from \"source\"]",
    ),
    (
        Kind::Frame,
        "frame cartesian | cylindrical | spherical (NAME, NAME, NAME)",
    ),
    (Kind::Vector, "vector NAME = (EXPR, EXPR, EXPR)"),
    (
        Kind::Field,
        "field NAME, ... (COORDINATE, ...) ~ SCALE [varying SCALE] [\"title\"] [from \"source\"]",
    ),
    (
        Kind::Fluctuation,
        "fluctuation NAME, ... (COORDINATE, ...) ~ SCALE [\"title\"] [from \"source\"]",
    ),
    (
        Kind::Velocity,
        "velocity (NAME, ...) along (COORDINATE, ...)",
    ),
    (
        Kind::Equation,
        "equation NAME [\"title\"]: EXPR = EXPR [using EQUATION, ...] [from \"source\"]",
    ),
    (
        Kind::Group,
        "group NAME = EXPR [\"title\"] [from \"source\"]",
    ),
    (
        Kind::Balance,
        "balance NAME [\"title\"]: EQUATION { PROCESS, ... } [from \"source\"]",
    ),
    (
        Kind::Tolerance,
        "tolerance SHARE [\"title\"] [from \"source\"]",
    ),
    (
        Kind::Phenomenon,
        "phenomenon NAME [\"title\"] [from \"source\"] { STATEMENTS }",
    ),
    (Kind::Use, "use MODULE"),
    (Kind::Show, "show EXPR [in UNIT] [for PHENOMENON, ...]"),
    (Kind::Rank, "rank [EQUATION, ...] [for PHENOMENON, ...]"),
    (
        Kind::Nondimensionalize,
        "nondimensionalize [EQUATION, ...] [by PROCESS] [for PHENOMENON, ...]",
    ),
    (
        Kind::Reduce,
        "reduce [EQUATION, ...] [within SHARE] [save \"file.scl\"] [for PHENOMENON, ...]",
    ),
    (Kind::Bounds, "bounds [NAME, ...] [for PHENOMENON, ...]"),
    (
        Kind::Find,
        "find NAME, ... [where EQUATION: PROCESS ~ PROCESS, ...] [for PHENOMENON, ...]",
    ),
    (Kind::Layers, "layers [for PHENOMENON, ...]"),
    (Kind::Groups, "groups [for PHENOMENON, ...]"),
    (
        Kind::Limit,
        "limit GROUP -> 0 [with GROUP ~ GROUP, ..., others ~ 1] [for PHENOMENON]",
    ),
    (
        Kind::Expand,
        "expand [EQUATION, ...] to order NUMBER [for PHENOMENON]",
    ),
    (
        Kind::Sweep,
        "sweep NAME from VALUE to VALUE [for PHENOMENON, ...]",
    ),
    (
        Kind::Regimes,
        "regimes NAME from VALUE to VALUE, NAME from VALUE to VALUE [for PHENOMENON, ...]",
    ),
    (
        Kind::Compare,
        "compare PHENOMENON, PHENOMENON [matching GROUP, ...]",
    ),
    (
        Kind::Claim,
        "claim EXPR << EXPR [within NUMBER] | leading EQUATION = PROCESS, ... [for PHENOMENON, ...]",
    ),
];

#[cfg(test)]
mod tests {
    use super::*;
    use crate::syntax::token::RESERVED;

    #[test]
    fn every_statement_has_a_form_that_begins_with_its_keyword() {
        for (kind, word) in RESERVED {
            let form = form(kind);
            assert_eq!(form.is_some(), kind.begins_statement(), "{word}");
            if let Some(form) = form {
                assert_eq!(form.split([' ']).next(), Some(word));
            }
        }
    }
}
