//! The answers: one file a request. Each takes a [`Case`] and gives plain data, numbers
//! and names, never prose.

pub mod balances;
pub mod base_state;
pub mod bounds;
pub mod claims;
pub mod compare;
pub mod groups;
pub mod hierarchy;
pub mod layers;
pub mod matching;
pub mod movable;
pub mod names;
pub mod neglected;
pub mod nondimensional;
pub mod rank;
pub mod reduce;
pub mod requests;
pub mod shelf;
pub mod show;
pub mod sizes;

use std::collections::BTreeMap;

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::model::settings::{self, Adopted, Setting};
use crate::model::terms::{self, Depth, EquationTerms};
use crate::model::{Model, errors::ModelError};
use crate::number::{Exponent, Number};
use crate::source::Span;

/// One phenomenon with everything that answers need: its setting and its equations.
#[derive(Debug)]
pub struct Case {
    /// Values, ranges, sizes.
    pub setting: Setting,
    /// All equations of the model, in order.
    pub equations: Vec<EquationTerms>,
}

fn phenomena(model: &Model) -> Vec<Option<usize>> {
    if model.phenomena.is_empty() {
        vec![None]
    } else {
        (0..model.phenomena.len()).map(Some).collect()
    }
}

/// The faults of values and ranges alone, for a model that has other faults: a script with
/// five mistakes tells of five.
pub fn value_errors(model: &Model) -> Vec<ModelError> {
    let found = phenomena(model)
        .into_iter()
        .flat_map(|idx| settings::build(model, idx).1);
    let mut errors: Vec<ModelError> = Vec::new();
    for error in found.filter(ModelError::is_of_value) {
        if errors
            .iter()
            .all(|known| known.diagnostic() != error.diagnostic())
        {
            errors.push(error);
        }
    }
    errors
}

/// Works out all phenomena of a model, or the script itself where it has none.
/// Errors make the script invalid; notes do not.
pub fn cases(model: &Model) -> (Vec<Case>, Vec<ModelError>) {
    let mut errors = Vec::new();
    let mut cases = Vec::new();
    for phenomenon in phenomena(model) {
        let (case, found) = case(model, phenomenon);
        cases.extend(case);
        errors.extend(found);
    }
    errors.extend(idle_relations(model, &cases));
    (cases, errors)
}

/// Relations behind a `using` that replace nothing, in no phenomenon and no component.
fn idle_relations(model: &Model, cases: &[Case]) -> Vec<ModelError> {
    let mut found: BTreeMap<Span, (bool, ModelError)> = BTreeMap::new();
    for equation in cases.iter().flat_map(|case| &case.equations) {
        for put_in in &equation.put_in {
            let span = put_in.name.span;
            let (is_used, _) = found.entry(span).or_insert_with(|| {
                let mut vectors = model.vector_equations.iter();
                let whole = vectors.find(|whole| whole.components.contains(&equation.name));
                let error = ModelError::NothingReplaced {
                    relation: put_in.name.text.clone(),
                    left: put_in.left.clone(),
                    equation: whole
                        .map_or(&equation.name, |whole| &whole.name.text)
                        .clone(),
                    span,
                };
                (false, error)
            });
            *is_used |= put_in.is_used;
        }
    }
    let idle = found.into_values().filter(|(is_used, _)| !is_used);
    idle.map(|(_, error)| error).collect()
}

/// Works out one phenomenon.
pub fn case(model: &Model, phenomenon: Option<usize>) -> (Option<Case>, Vec<ModelError>) {
    case_with(model, phenomenon, &Adopted::new())
}

/// The same with open scales that follow the formulas found for them.
pub fn case_with(
    model: &Model,
    phenomenon: Option<usize>,
    adopted: &Adopted,
) -> (Option<Case>, Vec<ModelError>) {
    let (setting, mut errors) = settings::build_with(model, phenomenon, adopted);
    let Some(setting) = setting else {
        return (None, errors);
    };
    let (equations, found) = terms::all(model, &setting, Depth::RANKED);
    errors.extend(found);
    (Some(Case { setting, equations }), errors)
}

impl Case {
    /// The open names in an equation's sizes, in order of declaration.
    pub fn open_in(&self, equation: &EquationTerms) -> Vec<String> {
        let mut open: Vec<SymbolId> = equation
            .terms
            .iter()
            .filter_map(|term| self.setting.monomial_range(&term.size.resolved).err())
            .flatten()
            .collect();
        open.sort_unstable();
        open.dedup();
        open.iter()
            .map(|id| self.setting.names[id.idx()].clone())
            .collect()
    }

    /// A symbol's name.
    pub fn symbol_name(&self, symbol: &Symbol) -> String {
        match symbol {
            Symbol::Declared(id) => self.setting.names[id.idx()].clone(),
            Symbol::Function(function) => function.text.clone(),
        }
    }

    /// A monomial as answers carry it.
    pub fn factors(&self, monomial: &Monomial) -> Factors {
        Factors {
            number: monomial.number.clone(),
            exponents: monomial
                .powers()
                .iter()
                .map(|(symbol, power)| (self.symbol_name(symbol), *power))
                .collect(),
        }
    }
}

/// Names to exact exponents, in order.
pub type Exponents = Vec<(String, Exponent)>;

/// The number and exponents of a monomial, as answers carry it.
#[derive(Debug, Clone, PartialEq)]
pub struct Factors {
    /// The exact number.
    pub number: Number,
    /// Names to exponents.
    pub exponents: Exponents,
}

/// An equation that a request left out, with the names that are open in it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct LeftOut {
    /// The equation.
    pub equation: String,
    /// The open names.
    pub open: Vec<String>,
}

/// An answer to one request for one phenomenon.
#[derive(Debug, Clone)]
pub struct Answer {
    /// The request's keyword.
    pub request: &'static str,
    /// The phenomenon.
    pub phenomenon: Option<String>,
    /// Its title.
    pub title: Option<String>,
    /// The request as written.
    pub text: String,
    /// What was left out.
    pub left_out: Vec<LeftOut>,
    /// What was found.
    pub body: Body,
}

/// The contents of an answer, by request.
#[derive(Debug, Clone)]
pub enum Body {
    /// `show`.
    Show(show::Shown),
    /// `groups`.
    Groups(groups::Groups),
    /// `nondimensionalize`.
    Nondimensionalize(Vec<nondimensional::DimensionlessEquation>),
    /// `rank`.
    Rank(Vec<rank::RankedEquation>),
    /// `reduce`.
    Reduce(reduce::Reduction),
    /// `expand`.
    Expand(hierarchy::Hierarchy),
    /// `find`.
    Find(balances::Balances),
    /// `layers`.
    Layers(layers::Layers),
    /// `bounds`.
    Bounds(bounds::Bounds),
    /// `compare`.
    Compare(compare::Comparison),
}
