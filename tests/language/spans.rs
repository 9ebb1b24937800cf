//! Places: the text under the span of an expression is that expression.

use scalewright::source::{FileId, Span};
use scalewright::syntax::ast::{
    Claim, EquationBody, Expr, ExprKind, RequestKind, StatementKind, Value,
};
use scalewright::syntax::parser::parse_expression;

use super::{read_well, without_spans};

/// Checks the places in a script without errors.
pub(super) fn check_spans(text: &str) {
    let script = read_well(text);
    let mut end = 0;
    for statement in &script.statements {
        assert!(statement.span.start >= end, "statements overlap in\n{text}");
        end = statement.span.end;
        for expr in expressions(&statement.kind) {
            check(expr, statement.span, text);
        }
    }
    for comment in &script.comments {
        assert_eq!(under(comment.span, text), comment.text);
    }
}

fn expressions(kind: &StatementKind) -> Vec<&Expr> {
    match kind {
        StatementKind::Value(decl) => match &decl.value {
            Value::Given { nominal, .. } => vec![nominal],
            Value::Open(_) => vec![],
        },
        StatementKind::Equation(decl) => match &decl.body {
            EquationBody::Written { left, right } => vec![left, right],
            EquationBody::Made(made) => vec![made],
        },
        StatementKind::Group(decl) => vec![&decl.value],
        StatementKind::Request(request) => match &request.kind {
            RequestKind::Show { expr, .. } => vec![expr],
            RequestKind::Claim(Claim::Relation { left, right, .. }) => vec![left, right],
            _ => vec![],
        },
        _ => vec![],
    }
}

fn check(expr: &Expr, around: Span, text: &str) {
    let span = expr.span;
    assert!(around.start <= span.start && span.end <= around.end);
    let written = under(span, text);
    let (again, errors) = parse_expression(written, FileId::default());
    assert!(errors.is_empty(), "`{written}` in\n{text}");
    assert_eq!(without_spans(expr), without_spans(&again), "`{written}`");
    for child in children(expr) {
        check(child, span, text);
    }
}

fn under(span: Span, text: &str) -> &str {
    &text[span.start as usize..span.end as usize]
}

/// The parts of an expression that are expressions as written; superscripts are not.
fn children(expr: &Expr) -> Vec<&Expr> {
    match &expr.kind {
        ExprKind::Sum(terms) => terms.iter().map(|(_, term)| term).collect(),
        ExprKind::Product(factors) => factors.iter().map(|(_, factor)| factor).collect(),
        ExprKind::Negate(inner) | ExprKind::Bracket(inner) => vec![inner],
        ExprKind::Power { base, .. } => vec![base],
        ExprKind::Call { arguments, .. } => arguments.iter().collect(),
        ExprKind::Derivative { operand, .. } => vec![operand],
        ExprKind::Tuple(parts) => parts.iter().collect(),
        ExprKind::Sized { expr, size } => vec![expr, size],
        ExprKind::As { expr, .. } => vec![expr],
        ExprKind::Number(_) | ExprKind::Name(_) | ExprKind::Process { .. } | ExprKind::Error => {
            vec![]
        }
    }
}
