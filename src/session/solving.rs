//! `find` and `layers` within a session: which phenomena they answer for, the formulas
//! that the requests behind them use, and how long searches are watched.

use std::ops::ControlFlow;
use std::rc::Rc;

use num_rational::BigRational;
use num_traits::Zero;

use crate::algebra::monomial::{Monomial, SymbolId};
use crate::analysis::balances::powers::Placing;
use crate::analysis::balances::{self, Balances, FindFault, Wanted};
use crate::analysis::requests::{self, process_label};
use crate::analysis::show::CaseNames;
use crate::analysis::{self, Answer, Body, Case, layers};
use crate::diagnostic::Diagnostic;
use crate::limits;
use crate::model::errors::ModelError;
use crate::model::settings::Adopted;
use crate::model::values::{self, Fault};
use crate::model::{Meaning, names};
use crate::number::TooLarge;
use crate::polyhedra::prevariety::Ending;
use crate::report::words;
use crate::session::answering::Answering;
use crate::source::Span;
use crate::syntax::ast::{self, LimitPlace};
use crate::syntax::print;

/// Is told how long searches get on, and may end them.
pub trait Watcher: Send + Sync {
    /// Called at every step of a search with the number of balances found so far; whether
    /// it shall go on.
    fn goes_on(&self, n_found: usize) -> bool;

    /// Called when a search is over.
    fn is_done(&self) {}
}

/// The state of one phenomenon once a `find` gave formulas for open scales.
pub(super) struct Found {
    formulas: Adopted,
    /// The processes that balance by them, by equation.
    pub(super) balances: Vec<(String, Vec<String>)>,
    /// The phenomenon with these formulas.
    pub(super) case: Rc<Case>,
}

/// A `find` as written.
pub(super) struct FindWords<'r> {
    pub(super) unknowns: &'r [ast::Name],
    pub(super) conditions: &'r [ast::FindCondition],
    pub(super) span: Span,
    pub(super) text: &'r str,
}

/// Why a name is not open in a phenomenon.
enum Closed {
    Known(String),
    Derived(String, String),
}

impl Answering<'_> {
    /// Answers a `find` for the phenomena in which all its scales are open.
    pub(super) fn find(
        &mut self,
        own: Option<usize>,
        request: &ast::Request,
        words: &FindWords<'_>,
    ) {
        let mut closed: Vec<(Option<String>, Closed)> = Vec::new();
        let mut n_answered = 0;
        for target in requests::targets(self.model, own, request) {
            if self.is_interrupted {
                return;
            }
            match self.closed_name(target, words) {
                Some(why) => {
                    let name = target.map(|idx| self.model.phenomena[idx].name.text.clone());
                    closed.push((name, why));
                }
                None => {
                    n_answered += 1;
                    self.find_for(target, words);
                }
            }
        }
        let found = closed_diagnostics(&closed, n_answered == 0, words.span);
        self.outcome.diagnostics.extend(found);
    }

    /// A phenomenon with the formulas that a `find` gave.
    pub(super) fn solved(&self, target: Option<usize>) -> Option<Rc<Case>> {
        self.found.get(&target).map(|found| Rc::clone(&found.case))
    }

    /// The first of the wanted names that is not open in a phenomenon.
    fn closed_name(&self, target: Option<usize>, words: &FindWords<'_>) -> Option<Closed> {
        words.unknowns.iter().find_map(|name| {
            let Some(Meaning::Symbol(id)) = self.model.meaning(&name.text, target) else {
                return None; // reported before
            };
            let (_, decl) = self.model.effective(id, target);
            match &decl.value {
                ast::Value::Given { nominal, .. } if names::has_names(nominal) => Some(
                    Closed::Derived(name.text.clone(), print::expression(nominal)),
                ),
                ast::Value::Given { .. } => Some(Closed::Known(name.text.clone())),
                ast::Value::Open(_) => None,
            }
        })
    }

    fn find_for(&mut self, target: Option<usize>, words: &FindWords<'_>) {
        let Some((wanted, case)) = self.wanted(target, words) else {
            return;
        };
        let model = self.model;
        let watcher = self.watcher;
        let answer = balances::find(model, &case, &wanted, &mut |n_found| {
            watched(watcher, n_found)
        });
        if let Some(watcher) = watcher {
            watcher.is_done();
        }
        let (found, left_out) = match answer {
            Ok(answer) => answer,
            Err(fault) => {
                let found = self.find_fault(&case, fault, words);
                self.outcome.diagnostics.push(found);
                return;
            }
        };
        if found.candidates.is_empty() && found.ending == Ending::Complete {
            let message = words::no_balance(&found);
            let whose = case.setting.name.as_ref().map(|name| format!("{name}: "));
            let message = format!("{}{message}", whose.unwrap_or_default());
            let warning = Diagnostic::warning("no-balance", words.span, message);
            self.outcome.diagnostics.push(warning);
        }
        self.ended(found.ending, words.span);
        self.adopt(target, &case, &found, words.span);
        // A search that was ended before it found anything has no answer.
        if found.ending == Ending::Complete || !found.candidates.is_empty() {
            self.outcome.answers.push(Answer {
                request: "find",
                phenomenon: case.setting.name.clone(),
                title: case.setting.title.clone(),
                text: words.text.to_owned(),
                left_out,
                body: Body::Find(found),
            });
        }
    }

    /// What is looked for, and the phenomenon in which it is open: formulas that an
    /// earlier `find` gave for the same scales are left aside.
    fn wanted(
        &mut self,
        target: Option<usize>,
        words: &FindWords<'_>,
    ) -> Option<(Wanted, Rc<Case>)> {
        let mut unknowns: Vec<SymbolId> = Vec::new();
        for name in words.unknowns {
            if let Some(Meaning::Symbol(id)) = self.model.meaning(&name.text, target)
                && !unknowns.contains(&id)
            {
                unknowns.push(id);
            }
        }
        let mut formulas = self.found.get(&target).map(|found| found.formulas.clone());
        if let Some(formulas) = &mut formulas {
            formulas.retain(|(id, formula)| {
                let rests = unknowns
                    .iter()
                    .any(|unknown| !formula.power_of(*unknown).is_zero());
                !unknowns.contains(id) && !rests
            });
        }
        let formulas = formulas.unwrap_or_default();
        let (case, _) = analysis::case_with(self.model, target, &formulas);
        let case = Rc::new(case?);
        let mut is_sound = true;
        for equation in &case.equations {
            is_sound &= self.is_sound(equation);
        }
        if !is_sound {
            return None;
        }
        let mut conditions: Vec<(usize, Vec<String>)> = Vec::new();
        for condition in words.conditions {
            let idx = self.model.equation(&condition.equation.text)?;
            let sides = [&condition.left, &condition.right].into_iter();
            let labels = sides.map(|side| process_label(self.model, &case, idx, side).ok());
            let labels: Vec<String> = labels.collect::<Option<_>>()?;
            match conditions.iter_mut().find(|(known, _)| *known == idx) {
                Some((_, known)) => known.extend(labels),
                None => conditions.push((idx, labels)),
            }
        }
        let placing = match self.placing(&case) {
            Ok(placing) => placing,
            Err(fault) => {
                self.fault(fault, &case, words.span);
                return None;
            }
        };
        let wanted = Wanted {
            unknowns,
            conditions,
            placing,
        };
        Some((wanted, case))
    }

    /// The limit in force, its names looked up in a phenomenon.
    fn placing(&self, case: &Case) -> Result<Option<Placing>, Fault> {
        let Some((small, places)) = self.limit_for(case.setting.phenomenon) else {
            return Ok(None);
        };
        let names = CaseNames {
            model: self.model,
            case,
        };
        let resolved = |expr: &ast::Expr| -> Result<Monomial, Fault> {
            let written = values::monomial(expr, &names)?;
            let size = case.setting.quantities.size(written);
            let size = size.map_err(|_| ModelError::TooLarge { span: expr.span })?;
            Ok(size.resolved.without_number())
        };
        let mut placing = Placing {
            text: print::expression(small),
            small: resolved(small)?,
            places: Vec::new(),
            others: false,
        };
        for place in places {
            match place {
                LimitPlace::Others(_) => placing.others = true,
                LimitPlace::Group(group, at) => {
                    let power = power_of(&resolved(at)?, &placing.small);
                    let power = power.ok_or(Fault::NotAProduct(at.span))?;
                    placing.places.push((resolved(group)?, power));
                }
            }
        }
        Ok(Some(placing))
    }

    /// Keeps the formulas of a balance that is the only one for the requests that follow.
    fn adopt(&mut self, target: Option<usize>, case: &Case, found: &Balances, span: Span) {
        let Some(only) = found
            .candidates
            .iter()
            .find(|candidate| candidate.is_adopted)
        else {
            return;
        };
        let unknowns: Vec<SymbolId> = only.scales.iter().map(|scale| scale.id).collect();
        let mut formulas = self
            .found
            .get(&target)
            .map(|found| found.formulas.clone())
            .unwrap_or_default();
        formulas.retain(|(id, formula)| {
            !unknowns.contains(id)
                && unknowns
                    .iter()
                    .all(|unknown| formula.power_of(*unknown).is_zero())
        });
        for scale in &only.scales {
            if let Some(product) = &scale.product {
                formulas.push((scale.id, positive(case, product)));
            }
        }
        let (made, errors) = analysis::case_with(self.model, target, &formulas);
        match made {
            Some(made) => {
                let case = Rc::new(made);
                let before = self.found.remove(&target);
                let mut balances = before.map(|found| found.balances).unwrap_or_default();
                balances.retain(|(name, _)| only.balances.iter().all(|(new, _)| new != name));
                balances.extend(only.balances.iter().cloned());
                let found = Found {
                    formulas,
                    balances,
                    case,
                };
                self.found.insert(target, found);
            }
            None => {
                let found = errors.first().map(ModelError::diagnostic);
                let too_large = || ModelError::TooLarge { span }.diagnostic();
                self.outcome
                    .diagnostics
                    .push(found.unwrap_or_else(too_large));
            }
        }
    }

    fn find_fault(&self, case: &Case, fault: FindFault, words: &FindWords<'_>) -> Diagnostic {
        let of = |idx: usize| {
            words
                .conditions
                .iter()
                .find(|condition| self.model.equation(&condition.equation.text) == Some(idx))
        };
        let place = |idx: usize| of(idx).map_or(words.span, |condition| condition.equation.span);
        let name = |idx: usize| case.equations[idx].name.clone();
        match fault {
            FindFault::Open(open) => self.open_in_find(None, &open, words.span),
            FindFault::OpenCondition(idx, open) => {
                self.open_in_find(Some(&name(idx)), &open, place(idx))
            }
            FindFault::NotInvolved(idx) => Diagnostic::error(
                "not-open",
                place(idx),
                format!(
                    "`{}` holds none of the scales that `find` looks for",
                    name(idx)
                ),
            )
            .with_help("put the condition on an equation that holds one of them"),
            FindFault::NotAProduct { symbol, unknown } => Diagnostic::error(
                "not-a-product",
                words.span,
                format!("`{symbol}` is no product of powers of `{unknown}`"),
            )
            .with_help(format!(
                "look for `{symbol}` itself: declare it open, without a formula"
            )),
            FindFault::FreeGroups(ratios) => {
                let listed: Vec<String> = ratios
                    .iter()
                    .map(|ratio| format!("`{}`", words::factors(ratio)))
                    .collect();
                Diagnostic::error(
                    "free-groups",
                    words.span,
                    format!("the limit does not place {}", listed.join(", ")),
                )
                .with_help("name a group for it and place it behind `with`, or add `others ~ 1`")
            }
            FindFault::Contradicting(group) => Diagnostic::error(
                "contradicting-limit",
                words.span,
                format!(
                    "`{}` is placed at another power by the rest of the limit",
                    words::factors(&group)
                ),
            )
            .with_help("leave out one of the placements that contradict one another"),
            FindFault::TooLarge => ModelError::TooLarge { span: words.span }.diagnostic(),
        }
    }

    fn open_in_find(&self, equation: Option<&str>, open: &[String], span: Span) -> Diagnostic {
        let listed: Vec<String> = open.iter().map(|name| format!("`{name}`")).collect();
        let subject = match equation {
            Some(equation) => format!("`{equation}` needs"),
            None => "every equation with a scale looked for needs".to_owned(),
        };
        let form = open
            .first()
            .map(|name| self.value_form(name))
            .unwrap_or_default();
        Diagnostic::error(
            "open-scale",
            span,
            format!("{subject} a value of {}", listed.join(", ")),
        )
        .with_help(format!(
            "give it one ({form}), look for it too, or set a `limit`"
        ))
    }

    /// Answers `layers` for one phenomenon.
    pub(super) fn layers(&mut self, case: &Case, span: Span, text: &str) {
        let Some((wanted, left_out)) = self.equations(case, &[], span) else {
            return;
        };
        let watcher = self.watcher;
        let found = layers::layers(self.model, case, &wanted, &mut |n_found| {
            watched(watcher, n_found)
        });
        if let Some(watcher) = watcher {
            watcher.is_done();
        }
        match found {
            Ok(found) => {
                self.ended(found.ending, span);
                self.outcome.answers.push(Answer {
                    request: "layers",
                    phenomenon: case.setting.name.clone(),
                    title: case.setting.title.clone(),
                    text: text.to_owned(),
                    left_out,
                    body: Body::Layers(found),
                });
            }
            Err(TooLarge) => {
                let found = ModelError::TooLarge { span }.diagnostic();
                self.outcome.diagnostics.push(found);
            }
        }
    }

    /// Says where a search did not see all.
    fn ended(&mut self, ending: Ending, span: Span) {
        match ending {
            Ending::Complete => {}
            Ending::Stopped => {
                self.is_interrupted = true;
                self.outcome.diagnostics.push(
                    Diagnostic::error("interrupted", span, "the search was interrupted here")
                        .with_help(
                            "what was found until then stands; nothing behind it is answered",
                        ),
                );
            }
            Ending::TooLarge => self.outcome.diagnostics.push(
                Diagnostic::error(
                    "too-large",
                    span,
                    format!(
                        "there are more than {} balances, or more than {} cells to look at",
                        limits::BALANCES,
                        limits::CELLS
                    ),
                )
                .with_help("look for fewer scales, give fewer of them a range, or add a `where`"),
            ),
        }
    }
}

fn watched(watcher: Option<&dyn Watcher>, n_found: usize) -> ControlFlow<()> {
    match watcher {
        Some(watcher) if !watcher.goes_on(n_found) => ControlFlow::Break(()),
        Some(_) | None => ControlFlow::Continue(()),
    }
}

/// A scale is positive, whatever the sign of the constants in its formula.
fn positive(case: &Case, product: &Monomial) -> Monomial {
    let is_negative = case
        .setting
        .monomial_range(product)
        .is_ok_and(|range| range.nominal < 0.0);
    let mut product = product.clone();
    if is_negative {
        product.number = product.number.negated();
    }
    product
}

/// The power that one product is of another; none if it is no power of it.
fn power_of(product: &Monomial, base: &Monomial) -> Option<BigRational> {
    if product.is_number() {
        return Some(BigRational::zero());
    }
    let (symbol, own) = base.powers().first()?;
    let found = product.powers().iter().find(|(found, _)| found == symbol)?;
    let power = found.1.to_rational() / own.to_rational();
    let exponent = crate::number::Exponent::from_rational(&power).ok()?;
    let same = base.power(exponent).ok()?;
    (same.powers() == product.powers()).then_some(power)
}

/// Tells in which phenomena a scale is not open: an error where it is open in none.
fn closed_diagnostics(
    closed: &[(Option<String>, Closed)],
    is_error: bool,
    span: Span,
) -> Option<Diagnostic> {
    let (_, first) = closed.first()?;
    let whose: Vec<String> = closed.iter().filter_map(|(name, _)| name.clone()).collect();
    let whose = match whose.as_slice() {
        [] => String::new(),
        names => format!(" for {}", names.join(", ")),
    };
    if !is_error {
        let message =
            format!("`find` finds nothing{whose}: not all of these scales are open there");
        return Some(Diagnostic::note("not-open", span, message));
    }
    Some(match first {
        Closed::Known(name) => Diagnostic::error(
            "not-open",
            span,
            format!("`{name}` has a value{whose}, and `find` looks for open scales"),
        )
        .with_help(format!("declare it open: `scale {name} in UNIT`")),
        Closed::Derived(name, formula) => Diagnostic::error(
            "derived-scale",
            span,
            format!("`{name}` follows {formula}{whose}, and `find` looks for open scales"),
        )
        .with_help("look for one of the names in its formula"),
    })
}
