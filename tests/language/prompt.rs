//! What a prompt needs: whether to ask for more, and expressions without `show`.

use scalewright::source::FileId;
use scalewright::syntax::errors::SyntaxError;
use scalewright::syntax::parser::parse_expression;
use scalewright::syntax::print::expression;

use super::read;

/// Whether more text could mend all that is wrong.
fn wants_more(text: &str) -> bool {
    let (_, errors) = read(text);
    !errors.is_empty() && errors.iter().all(SyntaxError::wants_more)
}

#[test]
fn more_is_wanted_where_the_text_ends_too_early() {
    for text in [
        "scale U =",
        "show (a +",
        "equation x: a = b +  # so far\n",
        "phenomenon low {",
        "phenomenon low {\n  scale U = 1 m/s",
        "phenomenon low {\n  scale U =",
        "balance g: x { a,",
        "show f(a,",
    ] {
        assert!(wants_more(text), "{text}");
    }
}

#[test]
fn no_more_is_wanted_where_that_mends_nothing() {
    for text in [
        "scale U = 1 m/s",
        "show )",
        "scale U =\nscale L = 1 km",
        "show \"abc",
        "phenomenon low { scale U = }",
        "show $",
        "U +",
    ] {
        assert!(!wants_more(text), "{text}");
    }
}

#[test]
fn an_expression_is_read_without_show() {
    let (expr, errors) = parse_expression("U^2/( g*L )  # so", FileId::default());
    assert!(errors.is_empty());
    assert_eq!(expression(&expr), "U^2/(g*L)");
    for text in ["", "a b", "show a", "a +", "(((", "a = b"] {
        let (_, errors) = parse_expression(text, FileId::default());
        assert_eq!(errors.len(), 1, "{text}: {errors:?}");
    }
}
