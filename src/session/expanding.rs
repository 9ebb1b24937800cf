//! Answers `expand`: once, for the values of the top level or of one phenomenon.

use std::rc::Rc;

use crate::analysis::hierarchy::{self, HierarchyFault, Wanted};
use crate::analysis::{self, Answer, Body, Case};
use crate::diagnostic::Diagnostic;
use crate::model::errors::ModelError;
use crate::model::limit;
use crate::number::Exponent;
use crate::session::answering::{Answering, LimitWords};
use crate::source::Span;
use crate::syntax::ast;

impl Answering<'_> {
    /// Answers `expand`.
    pub(super) fn expand(
        &mut self,
        own: Option<usize>,
        request: &ast::Request,
        equations: &[ast::Name],
        order: Exponent,
        text: &str,
    ) {
        let named = request.phenomena.first();
        let target = own.or(named.and_then(|name| self.model.phenomenon(&name.text)));
        let span = request.span;
        let Some(case) = self.case_of(target) else {
            return;
        };
        let Some((wanted, left_out)) = self.equations(&case, equations, span) else {
            return;
        };
        let limit = match self.limit_for(target) {
            None => None,
            Some((small, places)) => match limit::read(self.model, small, places) {
                Ok(limit) => Some(limit),
                // The check told of it.
                Err(_) => return,
            },
        };
        let wanted = Wanted {
            equations: &wanted,
            order,
            limit: limit.as_ref(),
        };
        match hierarchy::expand(self.model, &case.setting, &wanted) {
            Ok(found) => self.outcome.answers.push(Answer {
                request: "expand",
                phenomenon: case.setting.name.clone(),
                title: case.setting.title.clone(),
                text: text.to_owned(),
                left_out,
                body: Body::Expand(found),
            }),
            Err(fault) => {
                for found in diagnostics(fault, span) {
                    if !self.outcome.diagnostics.contains(&found) {
                        self.outcome.diagnostics.push(found);
                    }
                }
            }
        }
    }

    /// The `limit` in force for a phenomenon, or for the script outside all of them.
    pub(super) fn limit_for(&self, target: Option<usize>) -> Option<LimitWords<'_>> {
        let mut last_first = self.limits.iter().rev();
        let found = last_first.find(|(targets, _)| targets.contains(&target));
        found.map(|(_, limit)| *limit)
    }

    /// A phenomenon, or the script outside all of them.
    fn case_of(&mut self, target: Option<usize>) -> Option<Rc<Case>> {
        if let Some(solved) = self.solved(target) {
            return Some(solved);
        }
        let (case, errors) = analysis::case(self.model, target);
        let errors = errors.iter().map(ModelError::diagnostic);
        for found in errors.filter(Diagnostic::is_error) {
            if !self.outcome.diagnostics.contains(&found) {
                self.outcome.diagnostics.push(found);
            }
        }
        case.map(Rc::new)
    }
}

fn diagnostics(fault: HierarchyFault, span: Span) -> Vec<Diagnostic> {
    let listed = |names: &[String]| {
        let quoted: Vec<String> = names.iter().map(|name| format!("`{name}`")).collect();
        quoted.join(", ")
    };
    let found = match fault {
        HierarchyFault::Model(errors) => {
            return errors.iter().map(ModelError::diagnostic).collect();
        }
        HierarchyFault::FreeGroups(groups) => Diagnostic::error(
            "free-groups",
            span,
            format!("the limit does not place {}", listed(&groups)),
        )
        .with_help("place each behind `with`, as in `Bu ~ 1`, or add `others ~ 1`"),
        HierarchyFault::NoGroups(coefficients) => Diagnostic::error(
            "free-groups",
            span,
            format!("no named groups give {}", listed(&coefficients)),
        )
        .with_help("declare a `group` for it"),
        HierarchyFault::NothingSmall => Diagnostic::error(
            "free-groups",
            span,
            "there is no `limit`, and no split whose ratio could be small",
        )
        .with_help("set one first: `limit Ro -> 0 with others ~ 1`"),
        HierarchyFault::Contradiction { place, relation } => {
            let message = match &relation {
                Some(relation) => {
                    format!("this placement contradicts the relation between groups {relation}")
                }
                None => "this placement contradicts the ones before it".to_owned(),
            };
            Diagnostic::error("contradicting-limit", place.unwrap_or(span), message)
                .with_help("leave out one of the placements: the relation settles it")
        }
        HierarchyFault::OrderTooHigh => ModelError::OrderTooHigh { span }.diagnostic(),
        HierarchyFault::TooLarge => ModelError::TooLarge { span }.diagnostic(),
    };
    vec![found]
}
