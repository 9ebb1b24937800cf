//! The printer: canonical, stable, and the same tree again.

use scalewright::source::FileId;
use scalewright::syntax::parser::parse_expression;
use scalewright::syntax::print::{expression, print};

use super::{read_well, without_spans};

/// Checks what holds for every script without errors.
pub(super) fn check_printing(text: &str) -> String {
    let script = read_well(text);
    let printed = print(&script, text);
    let again = read_well(&printed);
    assert_eq!(
        without_spans(&script.statements),
        without_spans(&again.statements),
        "another tree after printing\n{printed}"
    );
    let comments = |script: &scalewright::syntax::ast::Script| -> Vec<String> {
        let comments = script.comments.iter();
        comments.map(|comment| comment.text.clone()).collect()
    };
    assert_eq!(comments(&script), comments(&again), "\n{printed}");
    assert_eq!(print(&again, &printed), printed, "not stable");
    printed
}

#[test]
fn one_statement_a_line_with_comments_kept() {
    let text = "\
# head


# second
scale   U=10m/s   within 2 # wind
scale L = 1 km scale H = 2 km  # two
equation e: # inside
    a*b # and here
    = c


phenomenon low \"winter\" { # brace
  scale U = 1 m/s

  # before the end
}   # behind
# last";
    let expected = "\
# head

# second
scale U = 10 m/s within 2  # wind
scale L = 1 km
scale H = 2 km  # two
# inside
# and here
equation e: a*b = c

phenomenon low \"winter\" {
  # brace
  scale U = 1 m/s

  # before the end
}  # behind
# last
";
    assert_eq!(check_printing(text), expected);
}

#[test]
fn expressions_have_one_form() {
    for (written, printed) in [
        ("a+b -c", "a + b - c"),
        ("a · b×c/d", "a*b*c/d"),
        ("- a*-b", "-a*-b"),
        ("a^ 2", "a^2"),
        ("x^(1/2)", "x^(1/2)"),
        ("U²*V⁻¹", "U^2*V^-1"),
        ("∂u/∂x+d_x( u )", "∂u/∂x + d_x(u)"),
        ("∂²q / ∂x ∂z", "∂²q/∂x∂z"),
        ("∂³( a*b )/∂x²∂y", "∂³(a*b)/∂x²∂y"),
        ("10m/s", "10 m/s"),
        ("10 m / U", "10 m / U"),
        ("10 m*U/V", "10 m * U/V"),
        ("10^-4 s⁻¹", "10^-4 s⁻¹"),
        ("10 ^ 2", "10 ^ 2"),
        ("10^2^3", "10 ^ 2^3"),
        ("10 m ^2", "10 m ^ 2"),
        ("f*v as coriolis", "f*v as coriolis"),
        ("a as \"b c\" + d", "a as \"b c\" + d"),
        ("( a+b~D )", "(a + b ~ D)"),
        ("(u,v, w)", "(u, v, w)"),
        ("sin²(phi)", "sin^2(phi)"),
        ("∇(p)", "grad(p)"),
        ("x_momentum . \"two words\"", "x_momentum.\"two words\""),
        ("a - -b", "a - -b"),
        ("5%", "5 %"),
        ("1e-4 1/s", "1e-4 1/s"),
    ] {
        let (tree, errors) = parse_expression(written, FileId::default());
        assert!(errors.is_empty(), "{written}: {errors:?}");
        assert_eq!(expression(&tree), printed);
        let (again, _) = parse_expression(printed, FileId::default());
        assert_eq!(without_spans(&tree), without_spans(&again), "{written}");
    }
}
