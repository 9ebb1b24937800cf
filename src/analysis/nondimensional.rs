//! `nondimensionalize`: an equation divided by one of its terms, its coefficients as
//! products of named groups. How the equation is then written is left to the reports.

use crate::algebra::monomial::Monomial;
use crate::algebra::product::{Base, Factor, Product};
use crate::algebra::quantities::{Quantity, Size};
use crate::analysis::names::Namer;
use crate::analysis::rank::speller;
use crate::analysis::requests::{process_label, term_of};
use crate::analysis::sizes::{largest, order_of_magnitude};
use crate::analysis::{Case, Exponents, Factors};
use crate::model::Model;
use crate::model::errors::ModelError;
use crate::model::terms::{EquationTerms, Side, Term};
use crate::number::{Number, TooLarge};
use crate::syntax::ast::ProcessRef;
use crate::units::Range;

/// An equation without dimensions.
#[derive(Debug, Clone)]
pub struct DimensionlessEquation {
    /// Its name.
    pub name: String,
    /// Its title.
    pub title: Option<String>,
    /// The text of the term that it is divided by.
    pub by: String,
    /// That term in the user's own scales.
    pub by_scale: String,
    /// Its terms, as written.
    pub terms: Vec<DimensionlessTerm>,
    /// What each field and coordinate in it is measured by, in order.
    pub measures: Vec<Measure>,
}

/// A term without dimensions: a coefficient times an expression of order one.
#[derive(Debug, Clone)]
pub struct DimensionlessTerm {
    /// Its text, without sign.
    pub text: String,
    /// Its process.
    pub process: Option<String>,
    /// Its side.
    pub side: Side,
    /// Its size in the user's own scales.
    pub scale: String,
    /// Its size as number and exponents, the number with the term's sign on its side.
    pub factors: Factors,
    /// Its size.
    pub size: Range,
    /// Its order of magnitude.
    pub order: Option<i32>,
    /// What stands before its expression once the equation is divided.
    pub coefficient: Coefficient,
    /// Its dimensionless part; 1 where nothing varies in it.
    pub expression: String,
}

/// The ratio of a term to the one that the equation is divided by.
#[derive(Debug, Clone, PartialEq)]
pub struct Coefficient {
    /// What is left as a number, with the term's sign: beside the groups, or beside the
    /// exponents where no groups give it.
    pub number: Number,
    /// The symbols as a product of named groups; empty if no symbol is left, `None` if no
    /// product of groups gives them.
    pub groups: Option<Exponents>,
    /// The symbols as scales and constants.
    pub exponents: Exponents,
    /// Its value over the box.
    pub value: Range,
}

/// What a field or coordinate is measured by.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Measure {
    /// The field or coordinate.
    pub name: String,
    /// Its size, or level.
    pub size: String,
    /// By how much it varies, where that differs from its size along some coordinate.
    pub varying: Vec<String>,
    /// The lengths over which it varies, where they are not the coordinate's own.
    pub lengths: Vec<(String, String)>,
}

/// Divides the equations at these places by the term named, or by their largest one where
/// they do not have it (`named` ones must).
pub fn answer(
    model: &Model,
    case: &Case,
    wanted: &[usize],
    by: Option<&ProcessRef>,
    are_named: bool,
) -> (Vec<DimensionlessEquation>, Vec<ModelError>) {
    let namer = Namer::new(case);
    let mut errors = Vec::new();
    let mut equations = Vec::new();
    for equation in wanted.iter().map(|idx| &case.equations[*idx]) {
        let by = match (divisor(model, case, equation, by), by) {
            (Ok(None), Some(by)) if are_named => Err(ModelError::DividesByZero { span: by.span() }),
            (Err(error), _) if are_named => Err(error),
            (Ok(Some(found)), _) => Ok(Some(found)),
            (Ok(None) | Err(_), _) => divisor(model, case, equation, None),
        };
        match by {
            Ok(by) => {
                equations.extend(by.and_then(|by| nondimensionalize(case, equation, by, &namer)))
            }
            Err(error) => errors.push(error),
        }
    }
    (equations, errors)
}

/// The place of the term that an equation is divided by; `None` where constants that are 0
/// took all of the named process out.
///
/// # Errors
/// [`ModelError::UnknownProcess`].
pub fn divisor(
    model: &Model,
    case: &Case,
    equation: &EquationTerms,
    by: Option<&ProcessRef>,
) -> Result<Option<usize>, ModelError> {
    let nominal = |idx: &usize| case.setting.nominal(&equation.terms[*idx].size.resolved);
    let all: Vec<usize> = (0..equation.terms.len()).collect();
    let Some(by) = by else {
        return Ok(largest(all.iter().map(nominal)));
    };
    let label = process_label(model, case, equation.idx, by)?;
    let members: Vec<usize> = all
        .into_iter()
        .filter(|idx| equation.terms[*idx].label() == label)
        .collect();
    let written = term_of(model, case, equation.idx, by);
    Ok(match written.filter(|idx| members.contains(idx)) {
        Some(idx) => Some(idx),
        None => largest(members.iter().map(nominal)).map(|place| members[place]),
    })
}

/// Divides an equation by one of its terms; `None` while a scale of it is open, or beyond
/// the limits.
pub fn nondimensionalize(
    case: &Case,
    equation: &EquationTerms,
    by: usize,
    namer: &Namer<'_>,
) -> Option<DimensionlessEquation> {
    let divisor = equation.terms.get(by)?;
    let terms = equation
        .terms
        .iter()
        .map(|term| dimensionless(case, equation, term, divisor, namer))
        .collect::<Option<_>>()?;
    Some(DimensionlessEquation {
        name: equation.name.clone(),
        title: equation.title.clone(),
        by: divisor.text.clone(),
        by_scale: speller(&case.setting, equation)
            .scale(&divisor.product)
            .ok()?,
        terms,
        measures: measures(case, equation),
    })
}

fn dimensionless(
    case: &Case,
    equation: &EquationTerms,
    term: &Term,
    divisor: &Term,
    namer: &Namer<'_>,
) -> Option<DimensionlessTerm> {
    let speller = speller(&case.setting, equation);
    let size = case.setting.monomial_range(&term.size.resolved).ok()?.abs();
    Some(DimensionlessTerm {
        text: term.text.clone(),
        process: term.process.clone(),
        side: term.side,
        scale: speller.scale(&term.product).ok()?,
        factors: case.factors(&signed(term, &term.size.resolved)),
        size,
        order: order_of_magnitude(size.nominal),
        coefficient: coefficient(case, &ratio(term, divisor).ok()?, namer)?,
        expression: speller.product(&expression(&term.product)),
    })
}

/// A term over the amount of another, with the sign that it has on its side.
///
/// # Errors
/// [`TooLarge`] beyond the limits.
pub fn ratio(term: &Term, divisor: &Term) -> Result<Monomial, TooLarge> {
    let amounts = term.size.resolved.over(&divisor.size.resolved)?;
    Ok(signed(term, &amounts))
}

fn signed(term: &Term, amount: &Monomial) -> Monomial {
    let mut signed = amount.clone();
    if term.product.number.is_negative() {
        signed.number = signed.number.negated();
    }
    signed
}

fn coefficient(case: &Case, ratio: &Monomial, namer: &Namer<'_>) -> Option<Coefficient> {
    let named = namer
        .product(ratio)
        .and_then(|product| Some((namer.rest(ratio, &product)?, namer.named(&product))));
    let (number, groups) = match named {
        Some((rest, groups)) => (rest, Some(groups)),
        None => (ratio.number.clone(), None),
    };
    Some(Coefficient {
        number,
        groups,
        exponents: case.factors(ratio).exponents,
        value: case.setting.monomial_range(ratio).ok()?,
    })
}

/// What varies in a product: its fields, coordinates and derivatives, each now measured by
/// its own scale.
pub fn expression(product: &Product) -> Product {
    let varies = |factor: &&Factor| !matches!(factor.base, Base::Symbol(_));
    Product {
        number: Number::one(),
        factors: product.factors.iter().filter(varies).cloned().collect(),
    }
}

/// What the fields and coordinates of an equation are measured by, in order of
/// declaration, coordinates first.
fn measures(case: &Case, equation: &EquationTerms) -> Vec<Measure> {
    let quantities = &case.setting.quantities;
    let mut fields = Vec::new();
    let mut along = Vec::new();
    for product in equation.terms.iter().map(|term| &term.product) {
        fields.extend(product.fields());
        for derivative in product.derivatives() {
            along.extend(derivative.by.iter().map(|(coordinate, _)| *coordinate));
        }
        for factor in &product.factors {
            if let Base::Coordinate(coordinate) = factor.base {
                along.push(coordinate);
            }
        }
    }
    fields.sort_unstable();
    fields.dedup();
    along.sort_unstable();
    along.dedup();
    let coordinates = along.iter().map(|id| quantities.coordinate(*id));
    coordinates
        .chain(fields.iter().map(|id| quantities.field(*id)))
        .map(|quantity| measure(case, equation, quantity))
        .collect()
}

fn measure(case: &Case, equation: &EquationTerms, quantity: &Quantity) -> Measure {
    let speller = speller(&case.setting, equation);
    let quantities = &case.setting.quantities;
    let text = |size: &Size| speller.monomial(&size.written);
    let mut varying: Vec<String> = Vec::new();
    let mut lengths = Vec::new();
    for variation in &quantity.variations {
        let amplitude = text(&variation.amplitude);
        if variation.has_own_amplitude && !varying.contains(&amplitude) {
            varying.push(amplitude);
        }
        let own = quantities.coordinate(variation.coordinate);
        if own.length(variation.coordinate).written != variation.length.written {
            lengths.push((own.name.clone(), text(&variation.length)));
        }
    }
    Measure {
        name: quantity.name.clone(),
        size: text(&quantity.size),
        varying,
        lengths,
    }
}
