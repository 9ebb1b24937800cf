//! What a degenerate leading order leaves open, and the conditions that restore it.
//!
//! A leading order that is linear with constant coefficients is a matrix whose entries are
//! polynomials in the derivatives. Where it is singular it does not determine its fields;
//! each null vector from the left, applied to the next order, takes out what is unknown
//! there and leaves a condition on what is known.

use num_rational::BigRational;
use num_traits::Zero;

use crate::algebra::monomial::{Monomial, Symbol};
use crate::algebra::polynomial::{Matrix, Polynomial, Powers, Vector};
use crate::algebra::product::{Base, Factor, Product};
use crate::algebra::quantities::{CoordinateId, FieldId};
use crate::algebra::series::{self, Graded, Series};
use crate::analysis::hierarchy::elimination::Rules;
use crate::analysis::hierarchy::expander::{Part, add};
use crate::analysis::hierarchy::view::View;
use crate::analysis::hierarchy::{Condition, HierarchyFault, OrderEquation, Solvability};
use crate::analysis::sizes;
use crate::model::terms::Side;
use crate::number::{Exponent, Number, TooLarge};

/// Looks at the leading order.
///
/// # Errors
/// Something beyond the limits.
pub(super) fn look(
    view: &View<'_>,
    equations: &[Vec<Part>],
    degrees: &[u32],
) -> Result<Solvability, HierarchyFault> {
    let Some(system) = System::of(view, equations)? else {
        return Ok(Solvability::NotLooked);
    };
    let found = system.matrix.free_columns();
    let vectors = system.matrix.left_null_vectors();
    let (Ok(free), Ok(vectors)) = (found, vectors) else {
        return Ok(Solvability::NotLooked);
    };
    let setting = &view.expander.case.setting;
    let name = |column: usize| setting.quantities.field(system.fields[column]).name.clone();
    let rules = Rules::of(view, equations)?;
    let mut conditions = Vec::new();
    for vector in &vectors {
        for degree in degrees.iter().filter(|degree| **degree > 0) {
            let sum = system.applied(view, equations, vector, *degree)?;
            if !sum.is_empty() {
                let name = condition_name(conditions.len(), vectors.len());
                let simplified = rules.put_into(view, &sum)?;
                let changes = simplified.len() != sum.len()
                    || simplified
                        .iter()
                        .zip(&sum)
                        .any(|(own, old)| own.product != old.product);
                conditions.push(Condition {
                    equation: condition(view, &name, sum, *degree)?,
                    simplified: match changes {
                        true => Some(condition(view, &name, simplified, *degree)?),
                        false => None,
                    },
                });
                break;
            }
        }
    }
    Ok(Solvability::Looked {
        undetermined: free.into_iter().map(name).collect(),
        conditions,
    })
}

fn condition_name(idx: usize, n_vectors: usize) -> String {
    match n_vectors {
        1 => "solvability".to_owned(),
        _ => format!("solvability_{}", idx + 1),
    }
}

/// The leading order as a matrix: rows are equations, columns fields.
struct System {
    matrix: Matrix,
    fields: Vec<FieldId>,
    symbols: Symbols,
}

/// What the symbols of the polynomials stand for: derivatives first.
struct Symbols {
    coordinates: Vec<CoordinateId>,
    constants: Vec<Symbol>,
    /// Numbers that are not rational, each without its rational part.
    numbers: Vec<Number>,
}

impl Symbols {
    fn n(&self) -> usize {
        self.coordinates.len() + self.constants.len() + self.numbers.len()
    }

    fn polynomial(
        &self,
        number: &Number,
        constants: &Monomial,
        by: &[(CoordinateId, u32)],
    ) -> Result<Polynomial, TooLarge> {
        let mut powers: Powers = vec![Exponent::ZERO; self.n()];
        for (along, order) in by {
            if let Some(place) = self.coordinates.iter().position(|found| found == along) {
                powers[place] = powers[place].plus(Exponent::whole(i64::from(*order))?)?;
            }
        }
        for (symbol, power) in constants.powers() {
            if let Some(place) = self.constants.iter().position(|found| found == symbol) {
                powers[self.coordinates.len() + place] = *power;
            }
        }
        let unit = irrational(number)?;
        if let Some(place) = self.numbers.iter().position(|found| *found == unit) {
            powers[self.coordinates.len() + self.constants.len() + place] = Exponent::ONE;
        }
        Ok(Polynomial::monomial(number.rational_part().clone(), powers))
    }

    /// Number, constants and derivatives of one term of a polynomial.
    fn read(
        &self,
        powers: &Powers,
        number: &BigRational,
    ) -> Result<(Product, Vec<(CoordinateId, u32)>), TooLarge> {
        let mut product = Product::number(Number::rational(number.clone()));
        let mut by = Vec::new();
        for (power, along) in powers.iter().zip(&self.coordinates) {
            let order = u32::try_from(power.numer()).unwrap_or(0);
            if order > 0 {
                by.push((*along, order));
            }
        }
        let behind = &powers[self.coordinates.len()..];
        for (power, symbol) in behind.iter().zip(&self.constants) {
            if !power.is_zero() {
                product = product.times(&Product {
                    number: Number::one(),
                    factors: vec![Factor {
                        base: Base::Symbol(symbol.clone()),
                        power: *power,
                    }],
                })?;
            }
        }
        let behind = &behind[self.constants.len()..];
        for (power, unit) in behind.iter().zip(&self.numbers) {
            product.number = product.number.times(&unit.power(*power)?)?;
        }
        Ok((product, by))
    }
}

/// A number without its rational part.
fn irrational(number: &Number) -> Result<Number, TooLarge> {
    let rational = Number::rational(number.rational_part().clone());
    Ok(number.over(&rational)?.unwrap_or_else(Number::one))
}

/// A linear term: its number, its constants, its field and the field's derivatives.
struct Linear<'p> {
    number: Number,
    constants: Monomial,
    field: FieldId,
    by: &'p [(CoordinateId, u32)],
}

impl System {
    /// The leading order, if it is linear with constant coefficients.
    fn of(view: &View<'_>, equations: &[Vec<Part>]) -> Result<Option<System>, HierarchyFault> {
        let mut rows: Vec<Vec<Linear<'_>>> = Vec::with_capacity(equations.len());
        for parts in equations {
            let mut row = Vec::new();
            for part in parts.iter().filter(|part| part.degree == 0) {
                let sign = match part.side {
                    Side::Left => Number::one(),
                    Side::Right => Number::whole(-1),
                };
                match linear(view, part, &sign)? {
                    Kind::Linear(found) => row.push(found),
                    Kind::Known => {}
                    Kind::Other => return Ok(None),
                }
            }
            rows.push(row);
        }
        let fields = fields_of(view, equations);
        if fields.is_empty() {
            return Ok(None);
        }
        let symbols = symbols_of(&rows)?;
        let mut matrix = Vec::with_capacity(rows.len());
        for row in &rows {
            let mut entries = vec![Polynomial::zero(); fields.len()];
            for term in row {
                let column = fields.iter().position(|field| *field == term.field);
                if let Some(column) = column {
                    let own = symbols.polynomial(&term.number, &term.constants, term.by)?;
                    entries[column] = entries[column].plus(&own);
                }
            }
            matrix.push(entries);
        }
        let is_free = (0..symbols.n()).map(|place| place >= symbols.coordinates.len());
        Ok(Some(System {
            matrix: Matrix {
                rows: matrix,
                is_free: is_free.collect(),
            },
            fields,
            symbols,
        }))
    }

    /// A combination of the equations at one order, all on the left side.
    fn applied(
        &self,
        view: &View<'_>,
        equations: &[Vec<Part>],
        vector: &Vector,
        degree: u32,
    ) -> Result<Series, HierarchyFault> {
        let mut sum = Vec::new();
        for (parts, entry) in equations.iter().zip(vector) {
            let mut own = Vec::new();
            for part in parts.iter().filter(|part| part.degree == degree) {
                let quantities = &view.expander.case.setting.quantities;
                let product = part.product.resolved(quantities)?;
                own.push(Graded::plain(match part.side {
                    Side::Left => product,
                    Side::Right => product.negated(),
                }));
            }
            for (powers, number) in entry.terms().rev() {
                let (factor, by) = self.symbols.read(powers, number)?;
                let mut terms = own.clone();
                for (along, order) in by {
                    for _ in 0..order {
                        terms = view.coefficients.differentiated(&terms, along)?;
                    }
                }
                for term in terms {
                    sum.push(Graded::plain(factor.times(&term.product)?));
                }
            }
        }
        Ok(series::collected(sum))
    }
}

enum Kind<'p> {
    Linear(Linear<'p>),
    /// No field: it forces.
    Known,
    /// Not linear, or with a coefficient that varies.
    Other,
}

fn linear<'p>(view: &View<'_>, part: &'p Part, sign: &Number) -> Result<Kind<'p>, HierarchyFault> {
    let mut constants = Monomial::one();
    let mut field: Option<(FieldId, &[(CoordinateId, u32)])> = None;
    let mut varies = false;
    for factor in &part.product.factors {
        match &factor.base {
            Base::Symbol(symbol) => {
                let size = view.expander.case.setting.quantities.symbol_size(symbol);
                constants = constants.times(&size.resolved.power(factor.power)?)?;
            }
            Base::Field(id) if field.is_none() && factor.power == Exponent::ONE => {
                field = Some((view.coefficients.of(*id).0, &[][..]));
            }
            Base::Derivative(derivative) if field.is_none() && factor.power == Exponent::ONE => {
                match derivative.operand.as_slice() {
                    [
                        Factor {
                            base: Base::Field(id),
                            ..
                        },
                    ] => field = Some((view.coefficients.of(*id).0, derivative.by.as_slice())),
                    _ => varies = true,
                }
            }
            Base::Field(_)
            | Base::Derivative(_)
            | Base::Coordinate(_)
            | Base::Absolute(_)
            | Base::Sized(_)
            | Base::Mean(_)
            | Base::Function(_) => varies = true,
        }
    }
    let number = part.product.number.times(sign)?.times(&constants.number)?;
    constants.number = Number::one();
    Ok(match field {
        _ if varies => Kind::Other,
        None => Kind::Known,
        Some((field, by)) => Kind::Linear(Linear {
            number,
            constants,
            field,
            by,
        }),
    })
}

/// All fields of the equations, in order of declaration.
fn fields_of(view: &View<'_>, equations: &[Vec<Part>]) -> Vec<FieldId> {
    let mut fields: Vec<FieldId> = equations
        .iter()
        .flatten()
        .flat_map(|part| view.coefficients.in_product(&part.product))
        .map(|(field, _)| view.coefficients.of(field).0)
        .collect();
    fields.sort_unstable();
    fields.dedup();
    fields
}

fn symbols_of(rows: &[Vec<Linear<'_>>]) -> Result<Symbols, TooLarge> {
    let mut symbols = Symbols {
        coordinates: Vec::new(),
        constants: Vec::new(),
        numbers: Vec::new(),
    };
    for term in rows.iter().flatten() {
        symbols
            .coordinates
            .extend(term.by.iter().map(|(along, _)| *along));
        let constants = term.constants.powers().iter();
        symbols
            .constants
            .extend(constants.map(|(symbol, _)| symbol.clone()));
        let unit = irrational(&term.number)?;
        if !unit.is_one() && !symbols.numbers.contains(&unit) {
            symbols.numbers.push(unit);
        }
    }
    symbols.coordinates.sort_unstable();
    symbols.coordinates.dedup();
    symbols.constants.sort_unstable();
    symbols.constants.dedup();
    Ok(symbols)
}

/// A sum that must vanish, with its coefficients over the largest of them.
fn condition(
    view: &View<'_>,
    name: &str,
    sum: Series,
    degree: u32,
) -> Result<OrderEquation, HierarchyFault> {
    let expander = view.expander;
    if sum.is_empty() {
        return Ok(view.equation(name, false, &[]));
    }
    let quantities = &view.coefficients.quantities;
    let sizes: Vec<Monomial> = sum
        .iter()
        .map(|term| Ok(term.product.size(quantities)?.resolved))
        .collect::<Result<_, TooLarge>>()?;
    let nominal = |size: &Monomial| expander.case.setting.nominal(size);
    let largest = sizes::largest(sizes.iter().map(nominal)).unwrap_or(0);
    let base = sizes[largest].without_number();
    let powers: Vec<BigRational> = sizes
        .iter()
        .map(|size| expander.power(&size.over(&base)?, 0))
        .collect::<Result<_, HierarchyFault>>()?;
    let least = powers
        .iter()
        .min()
        .cloned()
        .unwrap_or_else(BigRational::zero);
    let own = |idx: &usize| powers[*idx] == least;
    let lowest: Vec<usize> = (0..sizes.len()).filter(own).collect();
    let largest = sizes::largest(lowest.iter().map(|idx| nominal(&sizes[*idx])));
    let reference = sizes[lowest[largest.unwrap_or(0)]].without_number();
    let mut parts: Vec<Part> = Vec::new();
    for (term, (size, power)) in sum.into_iter().zip(sizes.iter().zip(&powers)) {
        let ratio = size.over(&reference)?;
        let (coefficient, number) = expander.coefficient(&ratio, &(power - &least))?;
        let factor = number.abs().over(&term.product.number.abs())?;
        add(
            &mut parts,
            Part {
                side: Side::Left,
                product: term.product,
                factor: factor.ok_or(TooLarge)?,
                coefficient,
                unit: None,
                degree,
            },
        );
    }
    for part in &parts {
        part.number()?;
    }
    let with_partials = expander
        .wanted
        .equations
        .iter()
        .any(|idx| expander.case.equations[*idx].with_partials);
    let parts: Vec<&Part> = parts.iter().collect();
    Ok(view.equation(name, with_partials, &parts))
}
