//! What can be wrong with a unit, and how it is said.

use std::ops::Range;

use crate::diagnostic::Diagnostic;
use crate::source::Span;

/// A fault in the text of a unit; places are bytes of that text.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum UnitError {
    /// A symbol that is no unit.
    Unknown {
        /// The symbol.
        symbol: String,
        /// Where it stands.
        range: Range<usize>,
        /// The unit that was probably meant, in unit syntax.
        nearest: Option<String>,
    },
    /// A second `/` outside brackets: `J/kg/K`.
    TwoSolidi {
        /// The second one.
        range: Range<usize>,
        /// The whole unit with one: `J/(kg.K)`.
        mend: String,
    },
    /// A product behind a `/` without brackets: `J/kg.K`.
    ProductBehindSolidus {
        /// The product sign.
        range: Range<usize>,
        /// The whole unit with brackets: `J/(kg.K)`.
        mend: String,
    },
    /// A `/` inside brackets: `(m/s)^2`.
    SolidusInBrackets {
        /// The `/`.
        range: Range<usize>,
        /// The whole unit without: `m^2/s^2`.
        mend: String,
    },
    /// Something else stands where a part of a unit should.
    Malformed {
        /// What stands there; empty at the end.
        range: Range<usize>,
        /// What should.
        expected: Expected,
    },
    /// `degC` or `degF` in a power, product or quotient.
    OffsetInCompound {
        /// The unit with an offset.
        symbol: String,
        /// Where it stands.
        range: Range<usize>,
        /// The whole unit with the degree's size instead: `J/(kg.K)`.
        mend: String,
    },
    /// An exponent or factor beyond the limits, too many brackets, or too long a text.
    TooLarge {
        /// What is too large.
        range: Range<usize>,
    },
}

/// What a unit needs at some place.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Expected {
    /// The symbol of a unit, or an opening bracket.
    Symbol,
    /// `.` or `/`, or the end of the unit.
    SignOrEnd,
    /// A closing bracket.
    ClosingBracket,
    /// A whole number, of an exponent.
    WholeNumber,
    /// Another number than 0 below the line of an exponent.
    DenominatorNotZero,
}

impl Expected {
    fn words(self) -> &'static str {
        match self {
            Expected::Symbol => "the symbol of a unit",
            Expected::SignOrEnd => "`.`, `/` or the end of the unit",
            Expected::ClosingBracket => "`)`",
            Expected::WholeNumber => "a whole number",
            Expected::DenominatorNotZero => "a denominator other than 0",
        }
    }
}

impl UnitError {
    /// Where it is, in bytes of the unit's text.
    pub fn range(&self) -> &Range<usize> {
        match self {
            UnitError::Unknown { range, .. }
            | UnitError::TwoSolidi { range, .. }
            | UnitError::ProductBehindSolidus { range, .. }
            | UnitError::SolidusInBrackets { range, .. }
            | UnitError::Malformed { range, .. }
            | UnitError::OffsetInCompound { range, .. }
            | UnitError::TooLarge { range } => range,
        }
    }

    /// As people are told, for a unit that stands at `unit` in the script.
    pub fn diagnostic(&self, text: &str, unit: Span) -> Diagnostic {
        let range = self.range();
        let start = unit.start as usize;
        let span = Span::new(unit.file, start + range.start, start + range.end);
        let error = |code, message: String| Diagnostic::error(code, span, message);
        match self {
            UnitError::Unknown {
                symbol, nearest, ..
            } => {
                let found = error("unknown-unit", format!("unknown unit `{symbol}`"));
                match nearest {
                    Some(nearest) => found.with_help(format!("write `{nearest}`")),
                    None => found,
                }
            }
            UnitError::TwoSolidi { mend, .. } => {
                error("two-solidi", format!("two `/` in the unit `{text}`"))
                    .with_help(format!("write `{mend}`"))
            }
            UnitError::ProductBehindSolidus { mend, .. } => error(
                "two-solidi",
                format!("product behind `/` without brackets in the unit `{text}`"),
            )
            .with_help(format!("write `{mend}`")),
            UnitError::SolidusInBrackets { mend, .. } => error(
                "two-solidi",
                format!("`/` inside brackets in the unit `{text}`"),
            )
            .with_help(format!("write `{mend}`")),
            UnitError::Malformed { expected, .. } => {
                let found = match text.get(range.clone()) {
                    None | Some("") => "the end of the unit".to_owned(),
                    Some(found) => format!("`{found}`"),
                };
                let expected = expected.words();
                error(
                    "unexpected-character",
                    format!("expected {expected}, found {found}"),
                )
            }
            UnitError::OffsetInCompound { symbol, mend, .. } => error(
                "offset-unit",
                format!("`{symbol}` is a reading with an offset, and `{text}` is no reading"),
            )
            .with_help(format!("write `{mend}`: a difference has no offset")),
            UnitError::TooLarge { .. } => error(
                "too-large",
                "exponent, factor or length of a unit beyond its limit".to_owned(),
            ),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::source::FileId;
    use crate::units::parse_unit;

    #[test]
    fn a_fault_points_at_its_place_and_offers_its_mend() {
        let text = "J/kg/K";
        let unit = Span::new(FileId(0), 100, 106);
        let found = parse_unit(text).unwrap_err().diagnostic(text, unit);
        assert_eq!(found.code, "two-solidi");
        assert_eq!(found.span, Some(Span::new(FileId(0), 104, 105)));
        assert_eq!(found.help.as_deref(), Some("write `J/(kg.K)`"));

        let text = "kg/";
        let found = parse_unit(text).unwrap_err().diagnostic(text, unit);
        assert_eq!(
            found.message,
            "expected the symbol of a unit, found the end of the unit"
        );
        assert_eq!(found.span, Some(Span::new(FileId(0), 103, 103)));
    }
}
