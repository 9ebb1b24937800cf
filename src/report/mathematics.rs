//! Expressions as people write them on paper, in plain characters: `∂²u/∂z²`, `2 Ω sin φ`
//! with the Greek letters, raised exponents and lowered indices that there are.

use crate::algebra::product::superscript;
use crate::report::latex::escape::GREEK;
use crate::syntax::ast::{Expr, ExprKind, Name, Operator, Sign};
use crate::syntax::print;

/// Sets the expressions of one model.
#[derive(Debug, Clone, Copy)]
pub struct Mathematics<'a> {
    /// The names of its coordinates: `d_x` is a derivative for these alone.
    pub coordinates: &'a [String],
}

/// How tightly a set expression holds together.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Tightness {
    Sum,
    Product,
    Power,
    Single,
}

impl Mathematics<'_> {
    /// An expression without the names of its processes.
    pub fn expression(&self, expr: &Expr) -> String {
        self.set(expr).0
    }

    /// The summands of one side with their signs; `true` is a minus.
    pub fn summands(&self, expr: &Expr) -> Vec<(bool, Expr)> {
        let mut found = Vec::new();
        summands(expr, false, &mut found);
        found
    }

    fn set(&self, expr: &Expr) -> (String, Tightness) {
        match &expr.kind {
            ExprKind::Number(_) | ExprKind::Process { .. } | ExprKind::Error => {
                (print::expression(expr), Tightness::Single)
            }
            ExprKind::Name(name) => (symbol(name), Tightness::Single),
            ExprKind::Sum(terms) => (self.sum(terms), Tightness::Sum),
            ExprKind::Product(factors) => match positive(factors) {
                Some(factors) => (format!("-{}", self.product(&factors)), Tightness::Sum),
                None => (self.product(factors), Tightness::Product),
            },
            ExprKind::Negate(inside) => {
                let inside = self.at_least(inside, Tightness::Product);
                (format!("-{inside}"), Tightness::Sum)
            }
            ExprKind::Power { base, exponent } => self.power(base, exponent),
            ExprKind::Call {
                function,
                order,
                arguments,
            } => self.call(&function.text, *order, arguments),
            ExprKind::Derivative { operand, by } => {
                (self.derivative(operand, by), Tightness::Single)
            }
            ExprKind::Tuple(parts) => (format!("({})", self.list(parts)), Tightness::Single),
            ExprKind::Bracket(inside) => {
                (format!("({})", self.expression(inside)), Tightness::Single)
            }
            ExprKind::Sized { expr, size } => {
                let (inside, size) = (self.expression(expr), self.expression(size));
                (format!("({inside} ~ {size})"), Tightness::Single)
            }
            ExprKind::As { expr, .. } => self.set(expr),
        }
    }

    fn at_least(&self, expr: &Expr, wanted: Tightness) -> String {
        let (text, tightness) = self.set(expr);
        if tightness < wanted {
            format!("({text})")
        } else {
            text
        }
    }

    fn list(&self, parts: &[Expr]) -> String {
        let parts: Vec<String> = parts.iter().map(|part| self.expression(part)).collect();
        parts.join(", ")
    }

    fn sum(&self, terms: &[(Sign, Expr)]) -> String {
        let mut text = String::new();
        for (idx, (sign, term)) in terms.iter().enumerate() {
            text.push_str(match (idx, sign) {
                (0, Sign::Plus) => "",
                (0, Sign::Minus) => "-",
                (_, Sign::Plus) => " + ",
                (_, Sign::Minus) => " - ",
            });
            text.push_str(&self.at_least(term, Tightness::Product));
        }
        text
    }

    /// Factors side by side; what is divided by stands before a derivative, `(1/ρ) ∂p/∂x`.
    fn product(&self, factors: &[(Operator, Expr)]) -> String {
        let side = |wanted: Operator| {
            factors
                .iter()
                .filter(move |(operator, _)| *operator == wanted)
                .map(|(_, factor)| factor)
        };
        let below: Vec<String> = side(Operator::Over)
            .map(|factor| self.at_least(factor, Tightness::Power))
            .collect();
        let (varying, plain): (Vec<&Expr>, Vec<&Expr>) = side(Operator::Times)
            .partition(|factor| !below.is_empty() && self.is_derivative(factor));
        let texts = |factors: Vec<&Expr>| -> Vec<String> {
            let texts = factors.into_iter();
            texts
                .map(|factor| self.at_least(factor, Tightness::Power))
                .collect()
        };
        let (varying, plain) = (texts(varying), texts(plain));
        let head = match below.as_slice() {
            [] => plain.join(" "),
            below => {
                let above = match plain.is_empty() {
                    true => "1".to_owned(),
                    false => plain.join(" "),
                };
                let below = match below {
                    [single] => single.clone(),
                    several => format!("({})", several.join(" ")),
                };
                match varying.is_empty() {
                    true => format!("{above}/{below}"),
                    false => format!("({above}/{below})"),
                }
            }
        };
        let parts = [head].into_iter().chain(varying);
        let parts: Vec<String> = parts.filter(|part| !part.is_empty()).collect();
        parts.join(" ")
    }

    fn is_derivative(&self, expr: &Expr) -> bool {
        match &expr.kind {
            ExprKind::Derivative { .. } => true,
            ExprKind::Call { function, .. } => {
                self.along(&function.text).is_some()
                    || matches!(function.text.as_str(), "D_t" | "grad" | "div" | "laplacian")
            }
            _ => false,
        }
    }

    fn power(&self, base: &Expr, exponent: &Expr) -> (String, Tightness) {
        let base = self.at_least(base, Tightness::Single);
        let exponent = self.expression(exponent);
        let raised = match raised(&exponent) {
            Some(raised) => format!("{base}{raised}"),
            None if exponent.chars().all(char::is_alphanumeric) => format!("{base}^{exponent}"),
            None if exponent.starts_with('(') => format!("{base}^{exponent}"),
            None => format!("{base}^({exponent})"),
        };
        (raised, Tightness::Power)
    }

    fn call(&self, function: &str, order: Option<u32>, arguments: &[Expr]) -> (String, Tightness) {
        if let (Some(along), [operand]) = (self.along(function), arguments) {
            let order = order.unwrap_or(1);
            let by = format!("∂{along}{}", superscript(order));
            let text = format!("∂{}{}/{by}", superscript(order), self.operand(operand));
            return (text, Tightness::Single);
        }
        let raised = order.map(superscript).unwrap_or_default();
        let text = match (function, arguments) {
            ("D_t", [operand]) => format!("D{}/Dt", self.operand(operand)),
            ("sqrt", [operand]) => format!("√{}{raised}", self.operand(operand)),
            ("abs", [operand]) => format!("|{}|{raised}", self.expression(operand)),
            ("grad", [operand]) => format!("∇{}", self.operand(operand)),
            ("div", [operand]) => format!("∇·{}", self.operand(operand)),
            ("curl", [operand]) => format!("∇×{}", self.operand(operand)),
            ("laplacian", [operand]) => format!("∇²{}", self.operand(operand)),
            ("cross", [a, b]) => format!("({} × {})", self.operand(a), self.operand(b)),
            ("dot", [a, b]) => format!("({} · {})", self.operand(a), self.operand(b)),
            _ => format!("{function}{raised}({})", self.list(arguments)),
        };
        (text, Tightness::Single)
    }

    /// The coordinate of `d_x`.
    fn along(&self, function: &str) -> Option<String> {
        let name = function.strip_prefix("d_")?;
        let is_one = self.coordinates.iter().any(|found| found == name);
        is_one.then(|| symbol(name))
    }

    /// What is differentiated: a name as it is, anything else in brackets.
    fn operand(&self, expr: &Expr) -> String {
        match &expr.kind {
            ExprKind::Name(_) | ExprKind::Bracket(_) | ExprKind::Tuple(_) => self.expression(expr),
            _ => format!("({})", self.expression(expr)),
        }
    }

    fn derivative(&self, operand: &Expr, by: &[(Name, u32)]) -> String {
        let total: u32 = by.iter().map(|(_, order)| order).sum();
        let below: String = by
            .iter()
            .map(|(name, order)| format!("∂{}{}", symbol(&name.text), superscript(*order)))
            .collect();
        format!("∂{}{}/{below}", superscript(total), self.operand(operand))
    }
}

fn summands(expr: &Expr, is_negative: bool, found: &mut Vec<(bool, Expr)>) {
    let span = expr.span;
    match &expr.kind {
        ExprKind::Sum(terms) => {
            for (sign, term) in terms {
                summands(term, is_negative != (*sign == Sign::Minus), found);
            }
        }
        ExprKind::Negate(inside) => summands(inside, !is_negative, found),
        // `-f*v as coriolis` is the negative of the named product.
        ExprKind::As { expr, process } => {
            let mut parts = Vec::new();
            summands(expr, is_negative, &mut parts);
            found.extend(parts.into_iter().map(|(is_negative, part)| {
                let kind = ExprKind::As {
                    expr: Box::new(part),
                    process: process.clone(),
                };
                (is_negative, Expr { kind, span })
            }));
        }
        ExprKind::Product(factors) => found.push(match positive(factors) {
            Some(factors) => {
                let kind = ExprKind::Product(factors);
                (!is_negative, Expr { kind, span })
            }
            None => (is_negative, expr.clone()),
        }),
        _ => found.push((is_negative, expr.clone())),
    }
}

/// The factors of a product without the minus before the first, if there is one.
fn positive(factors: &[(Operator, Expr)]) -> Option<Vec<(Operator, Expr)>> {
    let (operator, first) = factors.first()?;
    let ExprKind::Negate(inside) = &first.kind else {
        return None;
    };
    let mut factors = factors.to_vec();
    factors[0] = (*operator, (**inside).clone());
    Some(factors)
}

/// A whole exponent as raised digits.
fn raised(exponent: &str) -> Option<String> {
    let (sign, digits) = match exponent.strip_prefix('-') {
        Some(digits) => ("⁻", digits),
        None => ("", exponent),
    };
    let number: u32 = digits.parse().ok()?;
    Some(match number {
        1 => format!("{sign}¹"),
        number => format!("{sign}{}", superscript(number)),
    })
}

/// A name as a symbol: `ρ₀` for `rho_0`, `θ'` for `theta'`.
pub fn symbol(name: &str) -> String {
    let (name, primes) = match name.find('\'') {
        Some(at) => name.split_at(at),
        None => (name, ""),
    };
    let (head, index) = match name.split_once('_') {
        Some((head, index)) => (head, Some(index)),
        None => (name, None),
    };
    // The usual short name of a letter that has a long one.
    let spelt = if head == "eps" { "epsilon" } else { head };
    let greek = GREEK.iter().find(|(ascii, _)| *ascii == spelt);
    let head = greek.map_or_else(|| head.to_owned(), |(_, letter)| letter.to_string());
    let index = match index {
        None => String::new(),
        Some(digits) if !digits.is_empty() && digits.chars().all(|c| c.is_ascii_digit()) => {
            digits.chars().map(lowered).collect()
        }
        Some(other) => format!("_{other}"),
    };
    format!("{head}{index}{primes}")
}

fn lowered(digit: char) -> char {
    match digit {
        '0' => '₀',
        '1' => '₁',
        '2' => '₂',
        '3' => '₃',
        '4' => '₄',
        '5' => '₅',
        '6' => '₆',
        '7' => '₇',
        '8' => '₈',
        '9' => '₉',
        other => other,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::source::Sources;
    use crate::syntax::ast::{EquationBody, StatementKind};
    use crate::syntax::parser;

    fn set(expression: &str) -> String {
        let text = format!("equation e: {expression} = 0");
        let file = Sources::default().add("test", text.as_str());
        let (script, errors) = parser::parse(&text, file);
        assert!(errors.is_empty(), "{expression}");
        let StatementKind::Equation(decl) = &script.statements[0].kind else {
            panic!("not an equation");
        };
        let EquationBody::Written { left, .. } = &decl.body else {
            panic!("not written");
        };
        let coordinates = ["x", "z"].map(str::to_owned);
        Mathematics {
            coordinates: &coordinates,
        }
        .expression(left)
    }

    #[test]
    fn expressions_are_set_as_on_paper() {
        for (written, expected) in [
            ("f*v as coriolis", "f v"),
            ("-d_x(p)/rho", "-(1/ρ) ∂p/∂x"),
            ("nu*d_z^2(u)", "ν ∂²u/∂z²"),
            ("∂²u/∂x∂z", "∂²u/∂x∂z"),
            ("∂(rho_0*u)/∂x", "∂(ρ₀ u)/∂x"),
            ("D_t(theta')", "Dθ'/Dt"),
            ("g*rho_d/rho_0", "g ρ_d/ρ₀"),
            ("u*v*tan(phi)/a", "u v tan(φ)/a"),
            ("N^2*w", "N² w"),
            ("x^(1/2)*y^-2", "x^(1/2) y⁻²"),
            ("a/(b*c)", "a/(b c)"),
            ("a/b/c", "a/(b c)"),
            ("2*(u + v)*w", "2 (u + v) w"),
            ("grad(p)/rho + nu*laplacian(V)", "(1/ρ) ∇p + ν ∇²V"),
            ("2*cross(Omega_v, V)", "2 (Ω_v × V)"),
            ("sqrt(u^2 + v^2)", "√(u² + v²)"),
            ("d_0*u", "d₀ u"),
        ] {
            assert_eq!(set(written), expected, "{written}");
        }
    }
}
