//! Answers the requests of a checked script, one after another: what one settles holds for
//! those behind it.

use std::collections::BTreeMap;
use std::rc::Rc;

use num_rational::BigRational;

use crate::analysis::claims;
use crate::analysis::names::Namer;
use crate::analysis::show::{self, CaseNames};
use crate::analysis::{
    Answer, Body, Case, LeftOut, bounds, compare, groups, nondimensional, rank, reduce, requests,
};
use crate::diagnostic::Diagnostic;
use crate::model::dimensions::{self, Dim, Place};
use crate::model::errors::{ModelError, Product};
use crate::model::values::Fault;
use crate::model::{Model, declarations, terms};
use crate::number::{Exponent, rational_to_f64};
use crate::report::module::Origin;
use crate::report::{standing, words};
use crate::saving::{self, Folders};
use crate::session::{Checked, Outcome, Watcher, main_span, solving};
use crate::source::Span;
use crate::syntax::ast::{self, Claim, RequestKind};

/// A `limit` as it stands in the script: what is small, and what stands behind `with`.
pub(super) type LimitWords<'a> = (&'a ast::Expr, &'a [ast::LimitPlace]);

/// A checked script on its way to answers.
pub(super) struct Answering<'a> {
    pub(super) model: &'a Model,
    pub(super) cases: &'a [Case],
    pub(super) outcome: &'a mut Outcome,
    pub(super) folders: Folders<'a>,
    pub(super) watcher: Option<&'a dyn Watcher>,
    /// Phenomena in which a `find` gave formulas.
    pub(super) found: BTreeMap<Option<usize>, solving::Found>,
    /// Every `limit` so far, with the phenomena it is for.
    pub(super) limits: Vec<(Vec<Option<usize>>, LimitWords<'a>)>,
    /// Whether a search was ended, and with it the rest.
    pub(super) is_interrupted: bool,
}

impl<'a> Answering<'a> {
    pub(super) fn new(
        checked: &'a Checked,
        outcome: &'a mut Outcome,
        watcher: Option<&'a dyn Watcher>,
        folders: Folders<'a>,
    ) -> Answering<'a> {
        Answering {
            model: &checked.model,
            cases: &checked.cases,
            outcome,
            folders,
            watcher,
            found: BTreeMap::new(),
            limits: Vec::new(),
            is_interrupted: false,
        }
    }

    pub(super) fn all(&mut self) {
        let model = self.model;
        if model.requests.is_empty() {
            let whole = main_span(&self.outcome.sources);
            let plain = |kind| ast::Request {
                kind,
                phenomena: Vec::new(),
                span: whole,
            };
            let rank = plain(RequestKind::Rank {
                equations: Vec::new(),
            });
            let reduce = plain(RequestKind::Reduce {
                equations: Vec::new(),
                within: None,
                save: None,
            });
            self.request(None, &rank, "rank");
            self.request(None, &reduce, "reduce");
        }
        for (own, request) in &model.requests {
            self.in_turn(*own, request);
        }
    }

    /// Answers a request of the script; what it settles holds for those behind it.
    pub(super) fn in_turn(&mut self, own: Option<usize>, request: &'a ast::Request) {
        if self.is_interrupted {
            return;
        }
        if let RequestKind::Limit { small, places } = &request.kind {
            let mut targets = requests::targets(self.model, own, request);
            if own.is_none() && request.phenomena.is_empty() {
                targets.push(None);
            }
            self.limits.push((targets, (small, places)));
        }
        let text = one_line(self.outcome.sources.slice(request.span));
        self.request(own, request, &text);
    }

    pub(super) fn request(&mut self, own: Option<usize>, request: &ast::Request, text: &str) {
        if let RequestKind::Find {
            unknowns,
            conditions,
        } = &request.kind
        {
            let span = request.span;
            let words = solving::FindWords {
                unknowns,
                conditions,
                span,
                text,
            };
            self.find(own, request, &words);
            return;
        }
        if let RequestKind::Compare {
            phenomena,
            matching,
        } = &request.kind
        {
            self.compare(phenomena, matching.as_deref(), request.span, text);
            return;
        }
        if let RequestKind::Expand { equations, order } = &request.kind {
            // The check saw that it is within the limit.
            if let Ok(order) = Exponent::from_rational(order) {
                self.expand(own, request, equations, order, text);
            }
            return;
        }
        for target in requests::targets(self.model, own, request) {
            let cases = self.cases;
            let solved = self.solved(target);
            let given = cases.iter().find(|case| case.setting.phenomenon == target);
            if let Some(case) = solved.as_deref().or(given) {
                self.answer(case, request, text);
            }
        }
    }

    pub(super) fn answer(&mut self, case: &Case, request: &ast::Request, text: &str) {
        let names = CaseNames {
            model: self.model,
            case,
        };
        let answer = |request, left_out, body| Answer {
            request,
            phenomenon: case.setting.name.clone(),
            title: case.setting.title.clone(),
            text: text.to_owned(),
            left_out,
            body,
        };
        match &request.kind {
            RequestKind::Show { expr, unit } => {
                let si_unit = self.unit_of(expr, case);
                match show::show(expr, unit.as_ref(), si_unit, &names) {
                    Ok(shown) => {
                        self.outcome
                            .answers
                            .push(answer("show", Vec::new(), Body::Show(shown)))
                    }
                    Err(fault) => self.fault(fault, case, request.span),
                }
            }
            RequestKind::Rank { equations } => {
                if let Some((wanted, left_out)) = self.equations(case, equations, request.span) {
                    let namer = Namer::new(case);
                    let ranked = wanted
                        .iter()
                        .filter_map(|idx| rank::rank(case, &case.equations[*idx], &namer))
                        .collect();
                    self.outcome
                        .answers
                        .push(answer("rank", left_out, Body::Rank(ranked)));
                }
            }
            RequestKind::Reduce {
                equations,
                within,
                save,
            } => {
                if let Some((wanted, left_out)) = self.equations(case, equations, request.span) {
                    let tolerance = within
                        .as_ref()
                        .and_then(|within| declarations::tolerance_value(within).ok())
                        .map_or(case.setting.tolerance.clone(), |info| info.value);
                    let share = rational_to_f64(&tolerance);
                    let reduction = reduce::reduce(self.model, case, &wanted, share);
                    self.warn(case, &reduction);
                    if let Some(save) = save {
                        self.save(case, &reduction, &tolerance, text, save);
                    }
                    self.outcome
                        .answers
                        .push(answer("reduce", left_out, Body::Reduce(reduction)));
                }
            }
            RequestKind::Claim(claim) => {
                let unit = match claim {
                    Claim::Relation { left, .. } => self.unit_of(left, case),
                    Claim::Verdict { .. } => String::new(),
                };
                match claims::hold(claim, text, request.span, unit, &names) {
                    Ok(held) => self.outcome.claims.push(held),
                    Err(fault) => self.fault(fault, case, request.span),
                }
            }
            RequestKind::Layers => self.layers(case, request.span, text),
            RequestKind::Nondimensionalize { equations, by } => {
                if let Some((wanted, left_out)) = self.equations(case, equations, request.span) {
                    let are_named = !equations.is_empty();
                    let (divided, errors) =
                        nondimensional::answer(self.model, case, &wanted, by.as_ref(), are_named);
                    let errors = errors.iter().map(ModelError::diagnostic);
                    self.outcome.diagnostics.extend(errors);
                    let body = Body::Nondimensionalize(divided);
                    self.outcome
                        .answers
                        .push(answer("nondimensionalize", left_out, body));
                }
            }
            RequestKind::Groups => match groups::groups(self.model, case) {
                Ok(found) => {
                    self.outcome
                        .answers
                        .push(answer("groups", Vec::new(), Body::Groups(found)))
                }
                Err(groups::TooMany { n_symbols }) => {
                    let span = request.span;
                    let error = ModelError::TooManyGroups { n_symbols, span };
                    self.outcome.diagnostics.push(error.diagnostic());
                }
            },
            RequestKind::Bounds { symbols } => {
                if let Some((wanted, left_out)) = self.equations(case, &[], request.span) {
                    let found = self.found.get(&case.setting.phenomenon);
                    let balances = found.map_or(&[][..], |found| &found.balances);
                    match bounds::bounds(self.model, case, &wanted, symbols, balances) {
                        Ok(found) => {
                            self.warn_of_lone_terms(case, &found);
                            self.outcome.answers.push(answer(
                                "bounds",
                                left_out,
                                Body::Bounds(found),
                            ));
                        }
                        Err(fault) => self.fault(fault, case, request.span),
                    }
                }
            }
            // Answered once, for all the phenomena they name.
            RequestKind::Compare { .. } | RequestKind::Find { .. } | RequestKind::Expand { .. } => {
            }
            // The check refused these.
            RequestKind::Limit { .. } | RequestKind::Sweep(_) | RequestKind::Regimes(..) => {}
        }
    }

    pub(super) fn compare(
        &mut self,
        phenomena: &[ast::Name],
        matching: Option<&[ast::Name]>,
        span: Span,
        text: &str,
    ) {
        let wanted = phenomena
            .iter()
            .map(|name| self.model.phenomenon(&name.text));
        let solved: Vec<(Option<usize>, Option<Rc<Case>>)> =
            wanted.map(|wanted| (wanted, self.solved(wanted))).collect();
        let cases = self.cases;
        let given = |wanted| cases.iter().find(|case| case.setting.phenomenon == wanted);
        let named: Vec<&Case> = solved
            .iter()
            .filter_map(|(wanted, solved)| solved.as_deref().or(given(*wanted)))
            .collect();
        let mut is_sound = true;
        for equation in named.iter().flat_map(|case| &case.equations) {
            is_sound &= self.is_sound(equation);
        }
        if !is_sound {
            return;
        }
        match compare::compare(self.model, &named, matching) {
            Ok((comparison, left_out)) => {
                let matching = comparison.matching.iter();
                let found = matching.filter_map(|matching| standing::cannot_match(matching, span));
                self.outcome.diagnostics.extend(found);
                self.outcome.answers.push(Answer {
                    request: "compare",
                    phenomenon: None,
                    title: None,
                    text: text.to_owned(),
                    left_out,
                    body: Body::Compare(comparison),
                });
            }
            Err(compare::Fault::Open(case, open)) => self.fault(Fault::Open(open), case, span),
            Err(compare::Fault::TooMany) => {
                let message = "matching tries more sets of scales than the limit";
                let found = Diagnostic::error("too-large", span, message);
                let found = found.with_help("name fewer groups behind `matching`");
                self.outcome.diagnostics.push(found);
            }
        }
    }

    /// What `bounds` leaves out since nothing balances it.
    pub(super) fn warn_of_lone_terms(&mut self, case: &Case, bounds: &bounds::Bounds) {
        for place in &bounds.lone {
            let mut equations = case.equations.iter();
            let span = equations
                .find(|found| found.name == place.equation)
                .map_or(Span::default(), |found| found.span);
            let message = match &case.setting.name {
                Some(name) => format!("{name}: {}", standing::left_out_lone(place)),
                None => standing::left_out_lone(place),
            };
            let found = Diagnostic::warning("lone-leading-term", span, message);
            self.outcome.diagnostics.push(found);
        }
    }

    /// Makes the module of a reduced system, for whoever runs the session to write.
    pub(super) fn save(
        &mut self,
        case: &Case,
        reduction: &reduce::Reduction,
        tolerance: &BigRational,
        request: &str,
        save: &ast::Text,
    ) {
        let origin = Origin {
            model: self.model,
            case,
            reduction,
            tolerance,
            request,
            script: &self.outcome.script,
            sources: &self.outcome.sources,
        };
        match saving::saved(&origin, save, &self.folders, &self.outcome.saved) {
            Ok(saved) => self.outcome.saved.push(saved),
            Err(fault) => self.outcome.diagnostics.push(fault),
        }
    }

    /// The SI unit of an expression; that of a 0 is 1.
    pub(super) fn unit_of(&self, expr: &ast::Expr, case: &Case) -> String {
        let dim = dimensions::dimension(
            expr,
            self.model,
            case.setting.phenomenon,
            Place::Request,
            &mut Vec::new(),
        );
        match dim {
            Dim::Known(dimension, _) => dimension.unit_text(),
            Dim::Any | Dim::Faulty => "1".to_owned(),
        }
    }

    /// The equations of a request whose scales are known, and those left out; none, with
    /// an error, if a named one is open or nothing is left.
    pub(super) fn equations(
        &mut self,
        case: &Case,
        named: &[ast::Name],
        span: Span,
    ) -> Option<(Vec<usize>, Vec<LeftOut>)> {
        let mut known = Vec::new();
        let mut left_out = Vec::new();
        let indices: Vec<(usize, Span)> = if named.is_empty() {
            (0..case.equations.len()).map(|idx| (idx, span)).collect()
        } else {
            named
                .iter()
                .filter_map(|name| Some((self.model.equation(&name.text)?, name.span)))
                .collect()
        };
        let indices = with_terms(self.model, case, indices);
        let mut is_open = false;
        let mut is_faulty = false;
        for (idx, place) in indices {
            let open = case.open_in(&case.equations[idx]);
            if open.is_empty() {
                if self.is_sound(&case.equations[idx]) {
                    known.push(idx);
                } else {
                    is_faulty = true;
                }
                continue;
            }
            let equation = case.equations[idx].name.clone();
            if !named.is_empty() {
                is_open = true;
                self.open_scale(case, Some(&equation), &open, place);
            }
            left_out.push(LeftOut { equation, open });
        }
        if known.is_empty() && is_faulty {
            return None;
        }
        if known.is_empty() && !is_open {
            is_open = true;
            let mut open: Vec<String> = Vec::new();
            for name in left_out.iter().flat_map(|left| &left.open) {
                if !open.contains(name) {
                    open.push(name.clone());
                }
            }
            match case.equations.is_empty() {
                true => self.outcome.diagnostics.push(
                    Diagnostic::error(
                        "nothing-to-rank",
                        span,
                        "there is no equation to answer for",
                    )
                    .with_help("declare an `equation`, or `use` a module that has one"),
                ),
                false => self.open_scale(case, None, &open, span),
            }
        }
        (!is_open).then_some((known, left_out))
    }

    /// Whether an equation can be answered for; tells, once, why not.
    pub(super) fn is_sound(&mut self, equation: &terms::EquationTerms) -> bool {
        for fault in &equation.faults {
            let fault = fault.diagnostic();
            if !self.outcome.diagnostics.contains(&fault) {
                self.outcome.diagnostics.push(fault);
            }
        }
        equation.faults.is_empty()
    }

    pub(super) fn open_scale(
        &mut self,
        case: &Case,
        equation: Option<&str>,
        open: &[String],
        span: Span,
    ) {
        let subject = match equation {
            Some(equation) => format!("`{equation}` needs"),
            None => "this request needs".to_owned(),
        };
        let whose = case
            .setting
            .name
            .as_ref()
            .map(|name| format!(" for {name}"))
            .unwrap_or_default();
        let listed: Vec<String> = open.iter().map(|name| format!("`{name}`")).collect();
        let help = open
            .first()
            .map(|name| self.value_form(name))
            .unwrap_or_default();
        self.outcome.diagnostics.push(
            Diagnostic::error(
                "open-scale",
                span,
                format!("{subject} a value of {}{whose}", listed.join(", ")),
            )
            .with_help(format!("give it one: {help}")),
        );
    }

    /// How a value is given to an open name.
    pub(super) fn value_form(&self, name: &str) -> String {
        let info = self.model.symbols.iter().find(|info| info.name == name);
        let keyword = match info.map(|info| info.kind) {
            Some(ast::ValueKind::Constant) => "constant",
            Some(ast::ValueKind::Scale) | None => "scale",
        };
        let unit = info
            .and_then(|info| info.dimension)
            .map(|dimension| dimension.unit_text())
            .filter(|unit| unit != "1")
            .map(|unit| format!(" {unit}"))
            .unwrap_or_default();
        format!("`{keyword} {name} = NUMBER{unit}`")
    }

    pub(super) fn fault(&mut self, fault: Fault, case: &Case, span: Span) {
        match fault {
            Fault::Open(mut open) => {
                open.sort_unstable();
                open.dedup();
                let names: Vec<String> = open
                    .iter()
                    .map(|id| case.setting.names[id.idx()].clone())
                    .collect();
                self.open_scale(case, None, &names, span);
            }
            fault => self
                .outcome
                .diagnostics
                .extend(fault.error(Product::Term).map(|error| error.diagnostic())),
        }
    }

    /// What a reduction warns of, at the equations.
    pub(super) fn warn(&mut self, case: &Case, reduction: &reduce::Reduction) {
        for equation in &reduction.equations {
            let span = case
                .equations
                .iter()
                .find(|found| found.name == equation.name)
                .map_or(Span::default(), |found| found.span);
            for warning in words::warnings(equation) {
                let message = match &case.setting.name {
                    Some(name) => format!("{name}: {}", warning.message),
                    None => warning.message,
                };
                let mut found = Diagnostic::note(warning.code, span, message);
                found.severity = warning.severity;
                self.outcome.diagnostics.push(found);
            }
        }
    }
}

/// The equations without components of a vector of which nothing is left, unless there are
/// no others.
fn with_terms(model: &Model, case: &Case, all: Vec<(usize, Span)>) -> Vec<(usize, Span)> {
    let is_empty = |idx: usize| model.is_component(idx) && case.equations[idx].terms.is_empty();
    if all.iter().all(|(idx, _)| is_empty(*idx)) {
        return all;
    }
    all.into_iter().filter(|(idx, _)| !is_empty(*idx)).collect()
}

/// A request as written, with its blanks and line breaks made single blanks.
fn one_line(text: &str) -> String {
    let lines = text
        .lines()
        .map(|line| line.split('#').next().unwrap_or(""));
    let joined: Vec<&str> = lines.flat_map(str::split_whitespace).collect();
    joined.join(" ")
}
