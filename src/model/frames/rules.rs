//! The rules of the frames: what `grad`, `div`, `curl`, `laplacian` and the rest come to in
//! each, written in the language itself.
//!
//! In a rule `q1 q2 q3` are the coordinates of the frame in their order, `p` a scalar,
//! `a1 a2 a3` the components of a vector, `b1 b2 b3` those of a second one, `v1 v2 v3`
//! those of the velocity, `s11 s12 s13 s22 s23 s33` those of a symmetric stress. A rule
//! that is missing is 0. Latitude counts from the equator, so the spherical frame is
//! (east, north, up). On the sphere products are differentiated, since latitude and
//! distance mostly count from an origin; around an axis the flux form stays.
//!
//! `tests/reference/frames.py` holds every rule against SymPy, from Cartesian coordinates.

use crate::source::FileId;
use crate::syntax::ast::{EquationBody, Expr, FrameKind, StatementKind};
use crate::syntax::parser;

/// The rules of one frame, read.
#[derive(Debug)]
pub(crate) struct Rules(Vec<(String, Expr)>);

impl Rules {
    /// Reads the rules of a frame.
    pub(crate) fn of(kind: FrameKind) -> Rules {
        let text: String = common()
            .iter()
            .chain(own(kind))
            .map(|(name, rule)| format!("equation {name}: {rule} = 0\n"))
            .collect();
        let (script, _) = parser::parse(&text, FileId::default());
        let rules = script.statements.into_iter().filter_map(rule);
        Rules(rules.collect())
    }

    /// The rule of this name; none where it is 0.
    pub(crate) fn get(&self, name: &str) -> Option<&Expr> {
        let found = self.0.iter().find(|(found, _)| found == name);
        found.map(|(_, expr)| expr)
    }
}

fn rule(statement: crate::syntax::ast::Statement) -> Option<(String, Expr)> {
    let StatementKind::Equation(decl) = statement.kind else {
        return None;
    };
    match decl.body {
        EquationBody::Written { left, .. } => Some((decl.name.text, left)),
        EquationBody::Made(_) => None,
    }
}

/// Which coordinates of a frame are angles, so that a length along them takes a factor.
pub(crate) fn angles(kind: FrameKind) -> [bool; 3] {
    match kind {
        FrameKind::Cartesian => [false, false, false],
        FrameKind::Cylindrical => [false, true, false],
        FrameKind::Spherical => [true, true, false],
    }
}

/// The place of the coordinate that is a distance from an axis or a centre.
pub(crate) fn radius(kind: FrameKind) -> Option<usize> {
    match kind {
        FrameKind::Cartesian => None,
        FrameKind::Cylindrical => Some(0),
        FrameKind::Spherical => Some(2),
    }
}

type Table = &'static [(&'static str, &'static str)];

fn own(kind: FrameKind) -> Table {
    match kind {
        FrameKind::Cartesian => CARTESIAN,
        FrameKind::Cylindrical => CYLINDRICAL,
        FrameKind::Spherical => SPHERICAL,
    }
}

fn common() -> Table {
    COMMON
}

/// What holds in every frame whose unit vectors are at right angles.
#[rustfmt::skip]
const COMMON: Table = &[
    ("dot",     "a1*b1 + a2*b2 + a3*b3"),
    ("cross_1", "a2*b3 - a3*b2"),
    ("cross_2", "a3*b1 - a1*b3"),
    ("cross_3", "a1*b2 - a2*b1"),
];

#[rustfmt::skip]
const CARTESIAN: Table = &[
    ("grad_1",   "∂p/∂q1"),
    ("grad_2",   "∂p/∂q2"),
    ("grad_3",   "∂p/∂q3"),
    ("div",      "∂a1/∂q1 + ∂a2/∂q2 + ∂a3/∂q3"),
    ("curl_1",   "∂a3/∂q2 - ∂a2/∂q3"),
    ("curl_2",   "∂a1/∂q3 - ∂a3/∂q1"),
    ("curl_3",   "∂a2/∂q1 - ∂a1/∂q2"),
    ("laplacian",   "∂²p/∂q1² + ∂²p/∂q2² + ∂²p/∂q3²"),
    ("laplacian_1", "laplacian(a1)"),
    ("laplacian_2", "laplacian(a2)"),
    ("laplacian_3", "laplacian(a3)"),
    ("stress_1", "∂s11/∂q1 + ∂s12/∂q2 + ∂s13/∂q3"),
    ("stress_2", "∂s12/∂q1 + ∂s22/∂q2 + ∂s23/∂q3"),
    ("stress_3", "∂s13/∂q1 + ∂s23/∂q2 + ∂s33/∂q3"),
];

#[rustfmt::skip]
const CYLINDRICAL: Table = &[
    ("metric_2", "1/q1"),
    ("grad_1",   "∂p/∂q1"),
    ("grad_2",   "∂p/∂q2/q1"),
    ("grad_3",   "∂p/∂q3"),
    ("div",      "∂(q1*a1)/∂q1/q1 + ∂a2/∂q2/q1 + ∂a3/∂q3"),
    ("curl_1",   "∂a3/∂q2/q1 - ∂a2/∂q3"),
    ("curl_2",   "∂a1/∂q3 - ∂a3/∂q1"),
    ("curl_3",   "∂(q1*a2)/∂q1/q1 - ∂a1/∂q2/q1"),
    ("laplacian",   "∂(q1*∂p/∂q1)/∂q1/q1 + ∂²p/∂q2²/q1^2 + ∂²p/∂q3²"),
    ("laplacian_1", "laplacian(a1) - a1/q1^2 - 2*∂a2/∂q2/q1^2"),
    ("laplacian_2", "laplacian(a2) - a2/q1^2 + 2*∂a1/∂q2/q1^2"),
    ("laplacian_3", "laplacian(a3)"),
    ("curvature_1", "-v2*a2/q1"),
    ("curvature_2", "v2*a1/q1"),
    ("stress_1", "∂(q1*s11)/∂q1/q1 + ∂s12/∂q2/q1 + ∂s13/∂q3 - s22/q1"),
    ("stress_2", "∂(q1^2*s12)/∂q1/q1^2 + ∂s22/∂q2/q1 + ∂s23/∂q3"),
    ("stress_3", "∂(q1*s13)/∂q1/q1 + ∂s23/∂q2/q1 + ∂s33/∂q3"),
    ("along_2_1", "∂a1/∂q2 - a2"),
    ("along_2_2", "∂a2/∂q2 + a1"),
    ("along_2_3", "∂a3/∂q2"),
];

#[rustfmt::skip]
const SPHERICAL: Table = &[
    ("metric_1", "1/(q3*cos(q2))"),
    ("metric_2", "1/q3"),
    ("grad_1",   "∂p/∂q1/(q3*cos(q2))"),
    ("grad_2",   "∂p/∂q2/q3"),
    ("grad_3",   "∂p/∂q3"),
    ("div",      "∂a1/∂q1/(q3*cos(q2)) + ∂a2/∂q2/q3 - a2*tan(q2)/q3 + ∂a3/∂q3 + 2*a3/q3"),
    ("curl_1",   "∂a3/∂q2/q3 - ∂a2/∂q3 - a2/q3"),
    ("curl_2",   "∂a1/∂q3 + a1/q3 - ∂a3/∂q1/(q3*cos(q2))"),
    ("curl_3",   "∂a2/∂q1/(q3*cos(q2)) - ∂a1/∂q2/q3 + a1*tan(q2)/q3"),
    ("laplacian",   "∂²p/∂q1²/(q3^2*cos^2(q2)) + ∂²p/∂q2²/q3^2 - tan(q2)*∂p/∂q2/q3^2 + ∂²p/∂q3² + 2*∂p/∂q3/q3"),
    ("laplacian_1", "laplacian(a1) - a1/(q3^2*cos^2(q2)) - 2*tan(q2)*∂a2/∂q1/(q3^2*cos(q2)) + 2*∂a3/∂q1/(q3^2*cos(q2))"),
    ("laplacian_2", "laplacian(a2) - a2/(q3^2*cos^2(q2)) + 2*tan(q2)*∂a1/∂q1/(q3^2*cos(q2)) + 2*∂a3/∂q2/q3^2"),
    ("laplacian_3", "laplacian(a3) - 2*a3/q3^2 - 2*∂a2/∂q2/q3^2 + 2*tan(q2)*a2/q3^2 - 2*∂a1/∂q1/(q3^2*cos(q2))"),
    ("curvature_1", "-v1*a2*tan(q2)/q3 + v1*a3/q3"),
    ("curvature_2", "v1*a1*tan(q2)/q3 + v2*a3/q3"),
    ("curvature_3", "-v1*a1/q3 - v2*a2/q3"),
    ("stress_1", "∂s11/∂q1/(q3*cos(q2)) + ∂s12/∂q2/q3 - 2*s12*tan(q2)/q3 + ∂s13/∂q3 + 3*s13/q3"),
    ("stress_2", "∂s12/∂q1/(q3*cos(q2)) + ∂s22/∂q2/q3 - s22*tan(q2)/q3 + s11*tan(q2)/q3 + ∂s23/∂q3 + 3*s23/q3"),
    ("stress_3", "∂s13/∂q1/(q3*cos(q2)) + ∂s23/∂q2/q3 - s23*tan(q2)/q3 + ∂s33/∂q3 + 2*s33/q3 - s11/q3 - s22/q3"),
    ("along_1_1", "∂a1/∂q1 - a2*sin(q2) + a3*cos(q2)"),
    ("along_1_2", "∂a2/∂q1 + a1*sin(q2)"),
    ("along_1_3", "∂a3/∂q1 - a1*cos(q2)"),
    ("along_2_1", "∂a1/∂q2"),
    ("along_2_2", "∂a2/∂q2 + a3"),
    ("along_2_3", "∂a3/∂q2 - a2"),
];

#[cfg(test)]
mod tests {
    use super::*;
    use crate::syntax::print;

    #[test]
    fn every_rule_is_read_and_printed_as_written() {
        for kind in [
            FrameKind::Cartesian,
            FrameKind::Cylindrical,
            FrameKind::Spherical,
        ] {
            let rules = Rules::of(kind);
            for (name, text) in COMMON.iter().chain(own(kind)) {
                let read = rules.get(name).map(print::expression);
                assert_eq!(read.as_deref(), Some(*text), "{name}");
            }
        }
    }
}
