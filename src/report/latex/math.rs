//! Expressions as LaTeX mathematics, for the LaTeX and the Markdown report: fractions,
//! partial derivatives, Greek letters. Names stay what they are: `rho` is the letter,
//! `P_0` has an index, `dP` is one name of two letters.
//!
//! Each piece carries an estimate of its width, so that a long equation can be broken
//! before it runs off the page.

use crate::analysis::Exponents;
use crate::number::{Exponent, Number};
use crate::report::latex::{escape, unit};
use crate::source::FileId;
use crate::syntax::ast::{self, Expr, ExprKind, Name, Operator, Sign};
use crate::syntax::parser;

/// A piece of mathematics.
#[derive(Debug, Clone, PartialEq)]
pub struct Math {
    /// Its LaTeX.
    pub text: String,
    /// Its width, about: 1 is a digit.
    pub width: f64,
    /// Whether it is higher than a line.
    is_tall: bool,
}

/// How fractions are set.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Style {
    /// With a bar, in an equation of its own.
    Display,
    /// With a slash, in a line of text or a table; breaks between factors.
    Inline,
}

/// Widths in digits.
const LETTER: f64 = 1.3;
const THIN: f64 = 0.35;
const OPERATOR: f64 = 2.5;
const RAISED: f64 = 0.75;

/// A name longer than this is set so that it may be broken.
const LONG_NAME: usize = 12;
/// Letters of a long name between two places where it may be broken.
const PIECE: usize = 6;

/// An expression.
pub fn expression(expr: &Expr, style: Style) -> Math {
    Setter { style }.expr(expr)
}

/// An expression in a line of text.
pub fn inline(expr: &Expr) -> String {
    format!("${}$", expression(expr, Style::Inline).text)
}

impl Math {
    fn new(text: impl Into<String>, width: f64) -> Math {
        Math {
            text: text.into(),
            width,
            is_tall: false,
        }
    }

    fn then(mut self, other: Math) -> Math {
        self.text.push_str(&other.text);
        self.width += other.width;
        self.is_tall |= other.is_tall;
        self
    }

    fn space(self) -> Math {
        self.then(Math::new("\\,", THIN))
    }
}

// Names and numbers -----------------------------------------------------------------------------

/// A name: `rho_0` is a letter with an index, `dP` one name, `p'` keeps its prime.
pub fn name(name: &str) -> Math {
    let stem = name.trim_end_matches('\'');
    let primes = &name[stem.len()..];
    if stem.chars().count() > LONG_NAME && stem.contains('_') {
        return long_name(name);
    }
    let (base, index) = split_index(stem);
    let mut math = letters(&base, "\\mathit");
    if !index.is_empty() {
        let parts: Vec<Math> = index.iter().map(|part| letters(part, "\\mathrm")).collect();
        let texts: Vec<&str> = parts.iter().map(|part| part.text.as_str()).collect();
        let width: f64 = parts.iter().map(|part| part.width + THIN).sum();
        math = math.then(Math::new(
            format!("_{{{}}}", texts.join(",")),
            RAISED * width,
        ));
    }
    math.then(Math::new(primes, 0.5 * primes.len() as f64))
}

/// A name too long for an index: on one line, where it may be broken.
fn long_name(name: &str) -> Math {
    let chars: Vec<char> = name.chars().collect();
    let pieces: Vec<String> = chars
        .chunks(PIECE)
        .map(|piece| {
            format!(
                "\\text{{{}}}",
                escape::text(&piece.iter().collect::<String>())
            )
        })
        .collect();
    Math::new(pieces.join("\\allowbreak "), LETTER * chars.len() as f64)
}

/// What stands before the first `_`, and the parts behind it; small digits at the end are
/// an index too.
fn split_index(stem: &str) -> (String, Vec<String>) {
    let (base, index) = stem.split_once('_').unwrap_or((stem, ""));
    let small = |c: char| ('₀'..='₉').contains(&c);
    let plain = base.trim_end_matches(small);
    let digits: String = base[plain.len()..]
        .chars()
        .filter_map(|c| char::from_digit(u32::from(c) - u32::from('₀'), 10))
        .collect();
    let mut parts: Vec<String> = Vec::new();
    if !digits.is_empty() {
        parts.push(digits);
    }
    let written = index.split('_').filter(|part| !part.is_empty());
    parts.extend(written.map(str::to_owned));
    if plain.is_empty() {
        return (base.to_owned(), Vec::new());
    }
    (plain.to_owned(), parts)
}

fn letters(word: &str, font: &str) -> Math {
    let n_letters = word.chars().count();
    if escape::GREEK.iter().any(|(name, _)| *name == word) {
        return Math::new(format!("\\{word} "), LETTER);
    }
    let mut chars = word.chars();
    if let (Some(single), None) = (chars.next(), chars.next()) {
        if single.is_ascii_alphanumeric() {
            return Math::new(word, LETTER);
        }
        if let Some(sign) = escape::sign(single) {
            return Math::new(sign, LETTER);
        }
    }
    let width = LETTER * n_letters as f64;
    if !word.chars().all(|c| c.is_ascii_alphanumeric()) {
        return Math::new(format!("\\text{{{}}}", escape::text(word)), width);
    }
    if word.chars().all(|c| c.is_ascii_digit()) {
        return Math::new(word, n_letters as f64);
    }
    let chars: Vec<char> = word.chars().collect();
    let piece = if n_letters > LONG_NAME {
        PIECE
    } else {
        LONG_NAME
    };
    let pieces: Vec<String> = chars
        .chunks(piece)
        .map(|piece| format!("{font}{{{}}}", piece.iter().collect::<String>()))
        .collect();
    Math::new(pieces.join("\\allowbreak "), width)
}

/// A number as the reports print it: `9.76e-5` has a power of ten.
pub fn number(text: &str) -> Math {
    let text = text.replace('∞', "\\infty ");
    let Some((mantissa, exponent)) = text.split_once(['e', 'E']) else {
        let width = text.len() as f64;
        return match text.strip_prefix("10^") {
            Some(exponent) => Math::new(format!("10^{{{exponent}}}"), width),
            None => Math::new(text, width),
        };
    };
    let power = format!("10^{{{}}}", exponent.trim_start_matches('+'));
    let width = 2.0 + RAISED * exponent.len() as f64;
    if mantissa == "1" {
        return Math::new(power, width);
    }
    Math::new(
        format!("{mantissa}\\times {power}"),
        width + mantissa.len() as f64 + OPERATOR,
    )
}

/// A unit: upright, with thin spaces for its dots.
pub fn unit(text: &str) -> Math {
    Math::new(
        format!("\\mathrm{{{}}}", unit::unit(text)),
        LETTER * text.chars().count() as f64,
    )
}

/// A number times powers of names, those with negative powers below the line.
pub fn product(factor: &Number, exponents: &Exponents, style: Style) -> Math {
    let side = |is_below: bool| -> Vec<Math> {
        exponents
            .iter()
            .filter(|(_, power)| power.is_negative() == is_below)
            .map(|(text, power)| {
                let power = if is_below { power.negated() } else { *power };
                raised(read(text, Style::Inline), power)
            })
            .collect()
    };
    let mut above = side(false);
    if !factor.is_one() || above.is_empty() {
        above.insert(0, read(&factor.to_string(), Style::Inline));
    }
    Setter { style }.quotient(above, side(true))
}

/// A text of the language, as answers carry formulas: read, then set.
pub fn read(text: &str, style: Style) -> Math {
    let (expr, errors) = parser::parse_expression(text, FileId::default());
    match errors.is_empty() {
        true => expression(&expr, style),
        false => Math::new(
            format!("\\text{{{}}}", escape::text(text)),
            LETTER * text.len() as f64,
        ),
    }
}

/// Words with numbers among them, as the reports print them: `2 .. 27.7 %`.
pub fn numbers(words: &str) -> String {
    let words: Vec<String> = words
        .split(' ')
        .map(|word| match word {
            ".." => "\\dots".to_owned(),
            word if word.starts_with(|c: char| c.is_ascii_digit() || c == '-') => {
                format!("${}$", number(word).text)
            }
            word => escape::text(word),
        })
        .collect();
    words.join(" ").replace(" \\%", "~\\%")
}

fn raised(base: Math, power: Exponent) -> Math {
    if power == Exponent::ONE {
        return base;
    }
    let text = power.to_string();
    let width = RAISED * text.len() as f64;
    base.then(Math::new(format!("^{{{text}}}"), width))
}

// Expressions -----------------------------------------------------------------------------------

#[derive(Clone, Copy)]
struct Setter {
    style: Style,
}

impl Setter {
    fn expr(self, expr: &Expr) -> Math {
        match &expr.kind {
            ExprKind::Number(literal) => literal_math(literal),
            ExprKind::Name(text) => name(text),
            ExprKind::Process { equation, process } => {
                let text = format!("{}.{}", equation.text, process.text);
                Math::new(
                    format!("\\text{{{}}}", escape::text(&text)),
                    text.len() as f64,
                )
            }
            ExprKind::Sum(terms) => self.sum(terms),
            ExprKind::Product(factors) => self.product(factors),
            ExprKind::Negate(inner) => Math::new("-", OPERATOR).then(self.factor(inner)),
            ExprKind::Power { base, exponent } => self.power(base, exponent),
            ExprKind::Call {
                function,
                order,
                arguments,
            } => self.call(function, *order, arguments),
            ExprKind::Derivative { operand, by } => {
                let by: Vec<(&str, u32)> = by
                    .iter()
                    .map(|(name, order)| (name.text.as_str(), *order))
                    .collect();
                self.derivative(operand, &by)
            }
            ExprKind::Tuple(parts) => self.brackets(self.list(parts)),
            ExprKind::Bracket(inner) => self.brackets(self.expr(inner)),
            ExprKind::Sized { expr, size } => self.sized(expr, size),
            ExprKind::As { expr, .. } => self.expr(expr),
            ExprKind::Error => Math::new("?", 1.0),
        }
    }

    fn list(self, parts: &[Expr]) -> Math {
        let mut parts = parts.iter().map(|part| self.expr(part));
        let first = parts.next().unwrap_or(Math::new("", 0.0));
        parts.fold(first, |list, part| {
            list.then(Math::new(",\\,", 1.0)).then(part)
        })
    }

    fn brackets(self, inside: Math) -> Math {
        let (open, close) = match inside.is_tall {
            true => ("\\Bigl(", "\\Bigr)"),
            false => ("(", ")"),
        };
        Math::new(open, 1.2)
            .then(inside)
            .then(Math::new(close, 1.2))
    }

    fn sum(self, terms: &[(Sign, Expr)]) -> Math {
        let mut math = Math::new("", 0.0);
        for (idx, (sign, term)) in terms.iter().enumerate() {
            let sign = match (idx, sign) {
                (0, Sign::Plus) => "",
                (_, Sign::Plus) => " + ",
                (_, Sign::Minus) => " - ",
            };
            let width = if sign.is_empty() { 0.0 } else { OPERATOR };
            math = math.then(Math::new(sign, width)).then(self.factor(term));
        }
        math
    }

    /// A part of a sum or a product: a sum in it stands in brackets.
    fn factor(self, expr: &Expr) -> Math {
        match &expr.kind {
            ExprKind::Sum(_) => self.brackets(self.expr(expr)),
            ExprKind::As { expr, .. } => self.factor(expr),
            ExprKind::Number(_)
            | ExprKind::Name(_)
            | ExprKind::Process { .. }
            | ExprKind::Product(_)
            | ExprKind::Negate(_)
            | ExprKind::Power { .. }
            | ExprKind::Call { .. }
            | ExprKind::Derivative { .. }
            | ExprKind::Tuple(_)
            | ExprKind::Bracket(_)
            | ExprKind::Sized { .. }
            | ExprKind::Error => self.expr(expr),
        }
    }

    fn product(self, factors: &[(Operator, Expr)]) -> Math {
        let (mut above, mut below) = (Vec::new(), Vec::new());
        let is_alone = factors
            .iter()
            .filter(|(operator, _)| *operator == Operator::Over)
            .count()
            == 1;
        for (idx, (operator, factor)) in factors.iter().enumerate() {
            match operator {
                Operator::Times if idx > 0 && matches!(factor.kind, ExprKind::Negate(_)) => {
                    above.push(self.brackets(self.expr(factor)));
                }
                Operator::Times => above.push(self.factor(factor)),
                Operator::Over => self.below(factor, is_alone, &mut below),
            }
        }
        self.quotient(above, below)
    }

    /// Takes in what stands below the line; brackets around all of it are not needed.
    fn below(self, factor: &Expr, is_alone: bool, below: &mut Vec<Math>) {
        match &factor.kind {
            ExprKind::Bracket(inner) => match &inner.kind {
                ExprKind::Product(factors)
                    if factors.iter().all(|(op, _)| *op == Operator::Times) =>
                {
                    below.extend(factors.iter().map(|(_, factor)| self.factor(factor)));
                }
                _ if is_alone && self.style == Style::Display => below.push(self.expr(inner)),
                _ => below.push(self.expr(factor)),
            },
            _ => below.push(self.factor(factor)),
        }
    }

    /// `a*b/c`: in display, what is higher than a line stands beside the fraction.
    fn quotient(self, above: Vec<Math>, below: Vec<Math>) -> Math {
        let one = || Math::new("1", 1.0);
        if below.is_empty() {
            return self.times(above);
        }
        if self.style == Style::Inline {
            let is_single = below.len() == 1;
            let above = if above.is_empty() {
                one()
            } else {
                self.times(above)
            };
            let below = self.times(below);
            let below = if is_single {
                below
            } else {
                self.brackets(below)
            };
            return above.then(slash()).then(below);
        }
        let (beside, above): (Vec<Math>, Vec<Math>) =
            above.into_iter().partition(|factor| factor.is_tall);
        let above = if above.is_empty() {
            one()
        } else {
            self.times(above)
        };
        let fraction = fraction(above, self.times(below));
        if beside.is_empty() {
            return fraction;
        }
        fraction.space().then(self.times(beside))
    }

    /// Factors side by side; a dot before a digit.
    fn times(self, factors: Vec<Math>) -> Math {
        let sign = match self.style {
            Style::Display => "\\,",
            Style::Inline => "\\,\\allowbreak ",
        };
        let mut factors = factors.into_iter();
        let first = factors.next().unwrap_or(Math::new("", 0.0));
        factors.fold(first, |product, factor| {
            let is_digit = factor.text.starts_with(|c: char| c.is_ascii_digit());
            let sign = match is_digit {
                true => Math::new("\\cdot ", 1.5),
                false => Math::new(sign, THIN),
            };
            product.then(sign).then(factor)
        })
    }

    fn power(self, base: &Expr, exponent: &Expr) -> Math {
        let inside = self.expr(base);
        let base = match &base.kind {
            ExprKind::Name(_) | ExprKind::Bracket(_) | ExprKind::Tuple(_) => inside,
            ExprKind::Number(literal) if literal.unit.is_none() => inside,
            ExprKind::Call { function, .. } if function_sign(&function.text).is_some() => inside,
            ExprKind::Number(_)
            | ExprKind::Call { .. }
            | ExprKind::Process { .. }
            | ExprKind::Sum(_)
            | ExprKind::Product(_)
            | ExprKind::Negate(_)
            | ExprKind::Power { .. }
            | ExprKind::Derivative { .. }
            | ExprKind::Sized { .. }
            | ExprKind::As { .. }
            | ExprKind::Error => self.brackets(inside),
        };
        let inline = Setter {
            style: Style::Inline,
        };
        let exponent = inline.expr(unbracketed(exponent));
        base.then(Math::new(
            format!("^{{{}}}", exponent.text.replace("\\allowbreak ", "")),
            RAISED * exponent.width,
        ))
    }

    fn sized(self, expr: &Expr, size: &Expr) -> Math {
        let inline = Setter {
            style: Style::Inline,
        };
        let (inside, size) = (self.expr(expr), inline.expr(size));
        match self.style {
            Style::Display => Math {
                width: inside.width.max(size.width),
                is_tall: true,
                text: format!("\\underbrace{{{}}}_{{\\sim {}}}", inside.text, size.text),
            },
            Style::Inline => {
                let sized = inside.then(Math::new("\\sim ", OPERATOR)).then(size);
                self.brackets(sized)
            }
        }
    }

    // Calls -------------------------------------------------------------------------------------

    fn call(self, function: &Name, order: Option<u32>, arguments: &[Expr]) -> Math {
        let text = function.text.as_str();
        if let (Some(coordinate), [operand]) = (text.strip_prefix("d_"), arguments) {
            return self.derivative(operand, &[(coordinate, order.unwrap_or(1))]);
        }
        let [argument] = arguments else {
            return self.other_call(text, order, arguments);
        };
        match text {
            "D_t" => self.material(argument, order.unwrap_or(1)),
            "mean" => self.over(argument, "\\overline"),
            "sqrt" if self.style == Style::Display => self.over(argument, "\\sqrt"),
            // A root cannot be broken; a power can.
            "sqrt" => {
                let inside = self.brackets(self.expr(unbracketed(argument)));
                inside.then(Math::new("^{1/2}", 2.0))
            }
            "abs" => {
                let bar = |side: &str| Math::new(format!("\\{side}vert "), 0.7);
                let inside = self.expr(unbracketed(argument));
                bar("l").then(inside).then(bar("r"))
            }
            "exp" if order.is_none() => {
                let inline = Setter {
                    style: Style::Inline,
                };
                let inside = inline.expr(unbracketed(argument));
                let width = 1.0 + RAISED * inside.width;
                Math::new(format!("\\mathrm{{e}}^{{{}}}", inside.text), width)
            }
            text => self.other_call(text, order, arguments),
        }
    }

    /// An accent or a root over the whole argument.
    fn over(self, argument: &Expr, command: &str) -> Math {
        let inside = self.expr(unbracketed(argument));
        Math {
            text: format!("{command}{{{}}}", inside.text),
            width: inside.width + 1.5,
            is_tall: inside.is_tall,
        }
    }

    fn other_call(self, function: &str, order: Option<u32>, arguments: &[Expr]) -> Math {
        let (sign, width) = match function_sign(function) {
            Some((sign, width)) => (sign.to_owned(), width),
            None => {
                let sign = format!("\\operatorname{{{}}}", escape::text(function));
                (sign, LETTER * function.len() as f64)
            }
        };
        let mut sign = Math::new(sign, width);
        if let Some(order) = order {
            sign = sign.then(Math::new(format!("^{{{order}}}"), 1.0));
        }
        match arguments {
            [argument] if is_operator(function) => match &argument.kind {
                ExprKind::Name(_) => sign.then(self.expr(argument)),
                _ => sign.then(self.brackets(self.expr(unbracketed(argument)))),
            },
            [left, right] if function == "cross" || function == "dot" => {
                let between = if function == "cross" {
                    "\\times "
                } else {
                    "\\cdot "
                };
                let (left, right) = (self.factor(left), self.factor(right));
                self.brackets(left.then(Math::new(between, OPERATOR)).then(right))
            }
            _ => sign.then(self.brackets(self.list(arguments))),
        }
    }

    // Derivatives -------------------------------------------------------------------------------

    /// A derivative; one of a derivative stands under one bar with it.
    fn derivative(self, operand: &Expr, by: &[(&str, u32)]) -> Math {
        let mut by: Vec<(&str, u32)> = by.to_vec();
        let mut operand = operand;
        while let Some((inner, more)) = inner_derivative(operand) {
            by.extend(more);
            operand = inner;
        }
        let total: u32 = by
            .iter()
            .fold(0, |sum, (_, order)| sum.saturating_add(*order));
        let below = by
            .iter()
            .map(|(coordinate, order)| {
                let along = name(coordinate);
                ordered(
                    Math::new(format!("\\partial {}", along.text), LETTER + along.width),
                    *order,
                )
            })
            .reduce(|below, next| below.space().then(next))
            .unwrap_or(Math::new("", 0.0));
        self.rate(
            ordered(Math::new("\\partial ", LETTER), total),
            operand,
            below,
        )
    }

    fn material(self, operand: &Expr, order: u32) -> Math {
        let above = ordered(Math::new("\\mathrm{D}", LETTER), order);
        let below = ordered(Math::new("\\mathrm{D}t", 2.0 * LETTER), order);
        self.rate(above, operand, below)
    }

    /// An operator over its variable, with the operand above the bar where it is low.
    fn rate(self, sign: Math, operand: &Expr, below: Math) -> Math {
        let inside = match &operand.kind {
            ExprKind::Name(_) => self.expr(operand),
            _ => self.brackets(self.expr(unbracketed(operand))),
        };
        match self.style {
            Style::Inline => sign.then(inside).then(slash()).then(below),
            Style::Display if inside.is_tall => fraction(sign, below).then(inside),
            Style::Display => fraction(sign.then(inside), below),
        }
    }
}

/// A slash, behind which a line may be broken.
fn slash() -> Math {
    Math::new("/\\allowbreak ", 1.0)
}

fn fraction(above: Math, below: Math) -> Math {
    Math {
        text: format!("\\frac{{{}}}{{{}}}", above.text, below.text),
        width: above.width.max(below.width) + 0.6,
        is_tall: true,
    }
}

fn ordered(math: Math, order: u32) -> Math {
    match order {
        1 => math,
        order => math.then(Math::new(format!("^{{{order}}}"), 1.0)),
    }
}

/// The inside of a pair of brackets.
fn unbracketed(expr: &Expr) -> &Expr {
    match &expr.kind {
        ExprKind::Bracket(inner) => inner,
        _ => expr,
    }
}

/// The operand and the coordinates of a derivative spelt either way.
fn inner_derivative(expr: &Expr) -> Option<(&Expr, Vec<(&str, u32)>)> {
    match &unbracketed(expr).kind {
        ExprKind::Derivative { operand, by } => {
            let by = by.iter().map(|(name, order)| (name.text.as_str(), *order));
            Some((operand, by.collect()))
        }
        ExprKind::Call {
            function,
            order,
            arguments,
        } => {
            let coordinate = function.text.strip_prefix("d_")?;
            let [operand] = arguments.as_slice() else {
                return None;
            };
            Some((operand, vec![(coordinate, order.unwrap_or(1))]))
        }
        _ => None,
    }
}

/// A literal with its unit.
fn literal_math(literal: &ast::Number) -> Math {
    let value = number(&literal.text);
    match &literal.unit {
        Some(text) => value.space().then(unit(&text.text)),
        None => value,
    }
}

/// Whether a function is set before its argument without brackets where it can be.
fn is_operator(function: &str) -> bool {
    matches!(function, "grad" | "div" | "curl" | "laplacian" | "∇")
}

/// The signs of functions that have one, with their widths.
fn function_sign(function: &str) -> Option<(&'static str, f64)> {
    Some(match function {
        "sin" => ("\\sin", 3.0),
        "cos" => ("\\cos", 3.0),
        "tan" => ("\\tan", 3.0),
        "asin" => ("\\arcsin", 6.0),
        "acos" => ("\\arccos", 6.0),
        "atan" => ("\\arctan", 6.0),
        "sinh" => ("\\sinh", 4.0),
        "cosh" => ("\\cosh", 4.0),
        "tanh" => ("\\tanh", 4.0),
        "exp" => ("\\exp", 3.0),
        "log" => ("\\ln", 2.0),
        "log10" => ("\\log_{10}", 4.0),
        "min" => ("\\min", 3.0),
        "max" => ("\\max", 3.0),
        "grad" | "∇" => ("\\nabla ", 1.5),
        "div" => ("\\nabla\\cdot ", 3.0),
        "curl" => ("\\nabla\\times ", 4.0),
        "laplacian" => ("\\nabla^{2}", 2.5),
        _ => return None,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::source::FileId;
    use crate::syntax::parser::parse_expression;

    fn set(text: &str, style: Style) -> String {
        let (expr, errors) = parse_expression(text, FileId::default());
        assert!(errors.is_empty(), "{text}: {errors:?}");
        expression(&expr, style).text
    }

    #[test]
    fn names_stay_what_they_are() {
        for (text, wanted) in [
            ("rho", "\\rho "),
            ("ρ", "\\rho "),
            ("P_0", "P_{0}"),
            ("θ₀", "\\theta _{0}"),
            ("dP", "\\mathit{dP}"),
            ("p'", "p'"),
            ("H_rho", "H_{\\rho }"),
            ("u_eff", "u_{\\mathrm{eff}}"),
            ("T_a_2", "T_{a,2}"),
            ("vitesse_é", "\\mathit{vitesse}_{\\text{\\'{e}}}"),
        ] {
            assert_eq!(name(text).text, wanted);
        }
    }

    #[test]
    fn derivatives_stand_over_one_bar() {
        for (text, wanted) in [
            ("∂u/∂t", "\\frac{\\partial u}{\\partial t}"),
            (
                "d_x(d_z(u))",
                "\\frac{\\partial ^{2}u}{\\partial x\\,\\partial z}",
            ),
            ("d_z^2(u)", "\\frac{\\partial ^{2}u}{\\partial z^{2}}"),
            ("∂(rho*u)/∂x", "\\frac{\\partial (\\rho \\,u)}{\\partial x}"),
            (
                "∂p/∂x/rho",
                "\\frac{1}{\\rho }\\,\\frac{\\partial p}{\\partial x}",
            ),
            ("D_t(u)", "\\frac{\\mathrm{D}u}{\\mathrm{D}t}"),
            (
                "(∂u/∂z)^2",
                "\\Bigl(\\frac{\\partial u}{\\partial z}\\Bigr)^{2}",
            ),
        ] {
            assert_eq!(set(text, Style::Display), wanted, "{text}");
        }
    }

    #[test]
    fn products_and_powers() {
        for (text, wanted) in [
            ("u*v*tan(phi)/a", "\\frac{u\\,v\\,\\tan(\\phi )}{a}"),
            ("dP/(rho*L)", "\\frac{\\mathit{dP}}{\\rho \\,L}"),
            ("2*3*a", "2\\cdot 3\\,a"),
            ("10^-4 s^-1*u", "10^{-4}\\,\\mathrm{s^{-1}}\\,u"),
            ("(nu/f)^(1/2)", "\\Bigl(\\frac{\\nu }{f}\\Bigr)^{1/2}"),
            ("sin^2(phi)", "\\sin^{2}(\\phi )"),
            ("mean(u'*w')", "\\overline{u'\\,w'}"),
            ("(a + b ~ D)", "\\underbrace{a + b}_{\\sim D}"),
        ] {
            assert_eq!(set(text, Style::Display), wanted, "{text}");
        }
        assert_eq!(
            set("dP/(rho*L)", Style::Inline),
            "\\mathit{dP}/\\allowbreak (\\rho \\,\\allowbreak L)"
        );
    }
}
