//! `nondimensionalize` as a sheet.

use crate::analysis::nondimensional::{DimensionlessEquation, DimensionlessTerm};
use crate::report::dimensionless;
use crate::report::layout::range;
use crate::report::sheets::{Block, Line, Piece, formula, head, numbers, words};

/// Each equation with its coefficients, and what its variables are measured by.
pub(super) fn nondimensional(equations: &[DimensionlessEquation]) -> Vec<Block> {
    let mut blocks = Vec::new();
    for equation in equations {
        blocks.push(Block::Heading(
            equation.name.clone(),
            equation.title.clone(),
        ));
        blocks.push(Block::Equation(dimensionless::equation(equation)));
        blocks.push(Block::Paragraph(divisor(equation)));
        let columns = [
            ("term", 0.24),
            ("process", 0.2),
            ("coefficient", 0.16),
            ("in scales", 0.2),
            ("value", 0.2),
        ];
        let rows = equation.terms.iter().map(term_row).collect();
        blocks.push(Block::Table(head(&columns), rows));
        measures(equation, &mut blocks);
    }
    blocks
}

fn divisor(equation: &DimensionlessEquation) -> Line {
    let mut line = vec![
        Piece::Words("Divided by ".to_owned()),
        Piece::Formula(equation.by.clone()),
    ];
    if equation.by != equation.by_scale {
        line.push(Piece::Words(", of size ".to_owned()));
        line.push(Piece::Formula(equation.by_scale.clone()));
    }
    line.push(Piece::Words(
        "; every variable stands for itself over what it is measured in.".to_owned(),
    ));
    line
}

fn term_row(term: &DimensionlessTerm) -> Vec<Line> {
    let scales = dimensionless::in_scales(&term.coefficient);
    vec![
        formula(term.text.clone()),
        words(term.process.clone().unwrap_or_default()),
        formula(dimensionless::amount(&term.coefficient)),
        scales.map(formula).unwrap_or_default(),
        numbers(range(&term.coefficient.value.abs())),
    ]
}

fn measures(equation: &DimensionlessEquation, blocks: &mut Vec<Block>) {
    if equation.measures.is_empty() {
        return;
    }
    let columns = [
        ("variable", 0.15),
        ("measured in", 0.25),
        ("varies by", 0.3),
        ("over lengths of its own", 0.3),
    ];
    let rows = equation.measures.iter().map(|measure| {
        let mut lengths = Line::new();
        for (coordinate, length) in &measure.lengths {
            lengths.push(Piece::Formula(length.clone()));
            lengths.push(Piece::Words(format!(" along {coordinate} ")));
        }
        vec![
            formula(measure.name.clone()),
            formula(measure.size.clone()),
            words(measure.varying.join(" or ")),
            lengths,
        ]
    });
    blocks.push(Block::Table(head(&columns), rows.collect()));
}
