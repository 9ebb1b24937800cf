//! Checks requests and claims: that what they name is there and that their expressions
//! have fitting dimensions; and finds the phenomena that a request answers for.

use num_rational::BigRational;
use num_traits::One;

use crate::analysis::{Case, compare};
use crate::limits;
use crate::model::dimensions::{self, Dim, Place};
use crate::model::errors::{Alike, Missing, ModelError, Unavailable};
use crate::model::{Meaning, Model, declarations, limit, names, terms};
use crate::source::Span;
use crate::syntax::ast::{self, Claim, ExprKind, ProcessRef, RequestKind};

/// The phenomena for which a request answers, by their places; `[None]` for a script
/// without any.
pub fn targets(model: &Model, own: Option<usize>, request: &ast::Request) -> Vec<Option<usize>> {
    if let Some(idx) = own {
        return vec![Some(idx)];
    }
    if model.phenomena.is_empty() {
        return vec![None];
    }
    (0..model.phenomena.len())
        .filter(|idx| {
            let name = &model.phenomena[*idx].name.text;
            request.phenomena.is_empty()
                || request.phenomena.iter().any(|wanted| wanted.text == *name)
        })
        .map(Some)
        .collect()
}

/// Checks all requests.
pub fn check(model: &Model) -> Vec<ModelError> {
    let mut errors = Vec::new();
    for (own, request) in &model.requests {
        let before = errors.len();
        for name in &request.phenomena {
            if let Err(error) = phenomenon(model, name) {
                errors.push(error);
            }
        }
        let mut found: Vec<Vec<ModelError>> = Vec::new();
        let targets = targets(model, *own, request);
        for target in &targets {
            let mut own_errors = Vec::new();
            Checker {
                model,
                phenomenon: *target,
                n_targets: targets.len(),
                errors: &mut own_errors,
            }
            .request(request);
            found.push(own_errors);
        }
        // The phenomena mostly find the same.
        for error in found.into_iter().flatten() {
            let is_new = errors[before..]
                .iter()
                .all(|known| known.diagnostic() != error.diagnostic());
            if is_new {
                errors.push(error);
            }
        }
    }
    errors
}

/// A phenomenon by its name.
///
/// # Errors
/// [`ModelError::UnknownPhenomenon`].
pub fn phenomenon(model: &Model, name: &ast::Name) -> Result<usize, ModelError> {
    model
        .phenomenon(&name.text)
        .ok_or_else(|| ModelError::UnknownPhenomenon {
            name: name.text.clone(),
            span: name.span,
            nearest: names::nearest(
                &name.text,
                model.phenomena.iter().map(|found| found.name.text.as_str()),
            ),
        })
}

struct Checker<'a> {
    model: &'a Model,
    phenomenon: Option<usize>,
    /// For how many phenomena the request is answered.
    n_targets: usize,
    errors: &'a mut Vec<ModelError>,
}

impl Checker<'_> {
    fn dimension(&mut self, expr: &ast::Expr) -> Dim {
        dimensions::dimension(
            expr,
            self.model,
            self.phenomenon,
            Place::Request,
            self.errors,
        )
    }

    fn request(&mut self, request: &ast::Request) {
        match &request.kind {
            RequestKind::Show { expr, unit } => self.show(expr, unit.as_ref()),
            RequestKind::Rank { equations } => self.equations(equations),
            RequestKind::Reduce {
                equations,
                within,
                save,
            } => {
                self.equations(equations);
                if let Some(within) = within
                    && let Err(error) = declarations::tolerance_value(within)
                {
                    self.errors.push(error);
                }
                self.save(save.as_ref());
            }
            RequestKind::Claim(claim) => self.claim(claim),
            RequestKind::Nondimensionalize { equations, .. } => self.equations(equations),
            // What may be moved is known case by case.
            RequestKind::Bounds { .. } => {}
            RequestKind::Find {
                unknowns,
                conditions,
            } => {
                unknowns.iter().for_each(|name| self.open_name(name));
                for condition in conditions {
                    self.equations(std::slice::from_ref(&condition.equation));
                }
            }
            RequestKind::Layers | RequestKind::Groups => {}
            RequestKind::Limit { small, places } => self.limit(small, places),
            RequestKind::Expand { equations, order } => {
                self.equations(equations);
                self.order(order, request);
            }
            RequestKind::Sweep(_) => self.unavailable("sweep", request.span),
            RequestKind::Regimes(..) => self.unavailable("regimes", request.span),
            RequestKind::Compare { .. } => {
                self.errors.extend(compare::check(self.model, request));
            }
        }
    }

    /// The order of an expansion, and that it is asked for once.
    fn order(&mut self, order: &BigRational, request: &ast::Request) {
        let highest = BigRational::from_integer(limits::HIERARCHY_ORDER.into());
        if *order > highest {
            let span = request.span;
            self.errors.push(ModelError::OrderTooHigh { span });
        }
        if let [_, second, ..] = request.phenomena.as_slice() {
            self.errors.push(ModelError::WrongForm {
                found: "another",
                wanted: "one phenomenon behind `for`",
                span: second.span,
            });
        }
    }

    /// A saved system is that of one phenomenon.
    fn save(&mut self, save: Option<&ast::Text>) {
        if let Some(save) = save.filter(|_| self.n_targets > 1) {
            self.errors.push(ModelError::WrongForm {
                found: "several phenomena",
                wanted: "one phenomenon for `save`, named with `for`",
                span: save.span,
            });
        }
    }

    fn unavailable(&mut self, word: &'static str, span: Span) {
        self.errors.push(ModelError::NotAvailable {
            what: Unavailable::Request(word),
            span,
        });
    }

    fn equations(&mut self, equations: &[ast::Name]) {
        for name in equations {
            if let Err(error) = dimensions::equation(self.model, name) {
                self.errors.push(error);
            }
        }
    }

    /// Groups and the powers that they are placed at have no dimension.
    fn limit(&mut self, small: &ast::Expr, places: &[ast::LimitPlace]) {
        let n_errors = self.errors.len();
        let pairs = places.iter().flat_map(|place| match place {
            ast::LimitPlace::Others(_) => Vec::new(),
            ast::LimitPlace::Group(group, power) => vec![group, power],
        });
        for expr in pairs.chain([small]) {
            if let Dim::Known(dimension, span) = self.dimension(expr)
                && !dimension.is_one()
            {
                self.errors.push(ModelError::NotDimensionless {
                    dimension,
                    span,
                    what: "a group of a limit",
                });
            }
        }
        if self.errors.len() == n_errors
            && let Err(errors) = limit::read(self.model, small, places)
        {
            self.errors.extend(errors);
        }
    }

    /// A name that may be looked for: a scale or a constant.
    fn open_name(&mut self, name: &ast::Name) {
        let kind = match self.model.meaning(&name.text, self.phenomenon) {
            Some(Meaning::Symbol(_)) => return,
            Some(Meaning::Coordinate(_)) => "coordinate",
            Some(Meaning::Field(_)) => "field",
            Some(Meaning::Vector(_)) => "vector",
            Some(Meaning::Group(_)) => "group",
            None => {
                let known = self.model.visible_names(self.phenomenon);
                self.errors.push(ModelError::UnknownName {
                    name: name.text.clone(),
                    span: name.span,
                    nearest: names::nearest(&name.text, known),
                    missing: Missing::Open,
                    unit: None,
                });
                return;
            }
        };
        self.errors.push(ModelError::OutOfPlace {
            name: name.text.clone(),
            kind,
            wanted: "an open scale",
            span: name.span,
        });
    }

    fn show(&mut self, expr: &ast::Expr, unit: Option<&ast::UnitText>) {
        let found = self.dimension(expr);
        let Some(text) = unit else { return };
        match names::unit(text) {
            Ok(unit) => {
                let is_level = is_level(expr, self.model, self.phenomenon);
                if unit.offset.is_some() && !is_level {
                    self.errors.push(ModelError::OffsetUnit {
                        unit: text.text.clone(),
                        span: text.span,
                    });
                }
                if let Dim::Known(expected, expected_at) = found
                    && expected != unit.dimension
                {
                    self.errors.push(ModelError::UnlikeDimensions {
                        expected,
                        expected_at,
                        found: unit.dimension,
                        found_at: text.span,
                        what: Alike::Unit,
                    });
                }
            }
            Err(error) => self.errors.push(error),
        }
    }

    fn claim(&mut self, claim: &Claim) {
        match claim {
            Claim::Verdict { equation, .. } => self.equations(std::slice::from_ref(equation)),
            Claim::Relation {
                left,
                relation,
                right,
                within,
            } => {
                let left = self.dimension(left);
                let right = self.dimension(right);
                if let (Dim::Known(expected, expected_at), Dim::Known(found, found_at)) =
                    (left, right)
                    && expected != found
                {
                    self.errors.push(ModelError::UnlikeDimensions {
                        expected,
                        expected_at,
                        found,
                        found_at,
                        what: Alike::Relation,
                    });
                }
                if let Some(within) = within {
                    self.margin(*relation, within);
                }
            }
        }
    }

    fn margin(&mut self, relation: ast::Relation, within: &ast::Proportion) {
        use ast::Relation as R;
        let result = match relation {
            R::MuchLess | R::MuchGreater => declarations::tolerance_value(within).map(|_| ()),
            R::Similar => crate::model::spreading::factor(within).map(|_| ()),
            R::Equal => match declarations::share(within) {
                Ok(share) if share >= BigRational::one() => Err(ModelError::WrongForm {
                    found: "a factor",
                    wanted: "a relative margin below 1 behind `=`, such as `within 1 %`",
                    span: within.span,
                }),
                other => other.map(|_| ()),
            },
            R::Less | R::Greater => Err(ModelError::WrongForm {
                found: "`within`",
                wanted: "no margin behind a comparison",
                span: within.span,
            }),
        };
        if let Err(error) = result {
            self.errors.push(error);
        }
    }
}

/// Whether an expression is a constant given as a reading on a scale with an offset.
pub fn is_level(expr: &ast::Expr, model: &Model, phenomenon: Option<usize>) -> bool {
    let ExprKind::Name(name) = &expr.kind else {
        return false;
    };
    let Some(crate::model::Meaning::Symbol(id)) = model.meaning(name, phenomenon) else {
        return false;
    };
    match &model.effective(id, phenomenon).1.value {
        ast::Value::Given { nominal, .. } => dimensions::is_offset(nominal),
        ast::Value::Open(_) => false,
    }
}

/// Checks that the processes named in balances and claims are there.
pub fn check_processes(model: &Model, case: &Case) -> Vec<ModelError> {
    let mut errors = Vec::new();
    for part in model.balances.iter().flat_map(|balance| &balance.parts) {
        let Some(idx) = model.equation(&part.equation.text) else {
            continue;
        };
        for process in &part.processes {
            errors.extend(process_label(model, case, idx, process).err());
        }
    }
    for (_, request) in &model.requests {
        match &request.kind {
            RequestKind::Claim(Claim::Verdict {
                equation,
                processes,
                ..
            }) => {
                let Some(idx) = model.equation(&equation.text) else {
                    continue;
                };
                for process in processes {
                    errors.extend(process_label(model, case, idx, process).err());
                }
            }
            RequestKind::Claim(Claim::Relation { left, right, .. }) => {
                named_processes(model, case, left, &mut errors);
                named_processes(model, case, right, &mut errors);
            }
            RequestKind::Show { expr, .. } => named_processes(model, case, expr, &mut errors),
            RequestKind::Find { conditions, .. } => {
                for condition in conditions {
                    let Some(idx) = model.equation(&condition.equation.text) else {
                        continue;
                    };
                    for process in [&condition.left, &condition.right] {
                        errors.extend(process_label(model, case, idx, process).err());
                    }
                }
            }
            RequestKind::Nondimensionalize {
                equations,
                by: Some(by),
            } => {
                for idx in equations
                    .iter()
                    .filter_map(|name| model.equation(&name.text))
                {
                    errors.extend(process_label(model, case, idx, by).err());
                }
                if equations.is_empty() {
                    errors.extend(unknown_everywhere(model, case, by));
                }
            }
            _ => {}
        }
    }
    errors
}

/// What is wrong with a process that no equation has.
fn unknown_everywhere(model: &Model, case: &Case, process: &ProcessRef) -> Option<ModelError> {
    let mut unknown = None;
    for idx in 0..case.equations.len() {
        match process_label(model, case, idx, process) {
            Ok(_) => return None,
            Err(error) => unknown = unknown.or(Some(error)),
        }
    }
    unknown
}

/// Checks the processes in an expression, `x_momentum.coriolis`.
pub(crate) fn named_processes(
    model: &Model,
    case: &Case,
    expr: &ast::Expr,
    errors: &mut Vec<ModelError>,
) {
    expr.visit(&mut |expr| {
        if let ExprKind::Process { equation, process } = &expr.kind
            && let Some(idx) = model.equation(&equation.text)
        {
            errors.extend(known_process(case, idx, &process.text, process.span).err());
        }
    });
}

/// A process by its name.
///
/// # Errors
/// [`ModelError::UnknownProcess`].
pub fn known_process(
    case: &Case,
    idx: usize,
    name: &str,
    span: Span,
) -> Result<String, ModelError> {
    let equation = &case.equations[idx];
    let is_there = equation.terms.iter().any(|term| term.label() == name)
        || equation.process_names.iter().any(|found| found == name);
    if is_there {
        return Ok(name.to_owned());
    }
    let mut known: Vec<String> = Vec::new();
    for label in equation.terms.iter().map(terms::Term::label) {
        if !known.iter().any(|found| found == label) {
            known.push(label.to_owned());
        }
    }
    Err(ModelError::UnknownProcess {
        name: name.to_owned(),
        equation: equation.name.clone(),
        span,
        known,
    })
}

/// The label of a process as it is named: a name, a text, or the term itself, matched by
/// what it comes to.
///
/// # Errors
/// [`ModelError::UnknownProcess`].
pub fn process_label(
    model: &Model,
    case: &Case,
    idx: usize,
    process: &ProcessRef,
) -> Result<String, ModelError> {
    let expr = match process {
        ProcessRef::Text(text) => return known_process(case, idx, &text.text, text.span),
        ProcessRef::Term(expr) => expr,
    };
    let by_name = match &expr.kind {
        ExprKind::Name(name) => Some(known_process(case, idx, name, expr.span)),
        _ => None,
    };
    if let Some(Ok(label)) = by_name {
        return Ok(label);
    }
    let found = term_of(model, case, idx, process);
    match (found, by_name) {
        (Some(found), _) => Ok(case.equations[idx].terms[found].label().to_owned()),
        (None, Some(unknown)) => unknown,
        (None, None) => known_process(
            case,
            idx,
            &crate::syntax::print::expression(expr),
            expr.span,
        ),
    }
}

/// The place of the term that a process is named by, matched by what it comes to.
pub fn term_of(model: &Model, case: &Case, idx: usize, process: &ProcessRef) -> Option<usize> {
    let ProcessRef::Term(expr) = process else {
        return None;
    };
    match terms::products(model, &case.setting, idx, expr).as_slice() {
        [wanted] => case.equations[idx].terms.iter().position(|term| {
            term.product.is_like(wanted) && term.product.number.abs() == wanted.number.abs()
        }),
        _ => None,
    }
}
