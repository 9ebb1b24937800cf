//! Equations turned into terms, in one setting: products multiplied out, derivatives
//! taken by the rules of `algebra::calculus`, each term with its size, its process and
//! its text.

use std::sync::Arc;

use num_traits::ToPrimitive;

use crate::algebra::calculus;
use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::algebra::product::{Base, Derivative, Factor, Product, Sized, Speller};
use crate::algebra::quantities::{CoordinateId, FieldId, Size, Variation};
use crate::limits;
use crate::model::errors::{ModelError, Product as Wanted, Unavailable};
use crate::model::frames;
use crate::model::names::{self, Call, Function};
use crate::model::settings::{Setting, Variable};
use crate::model::spelling;
use crate::model::values::{self, Fault, Names, Value};
use crate::model::{GroupId, Meaning, Model};
use crate::number::{Exponent, Number, TooLarge};
use crate::source::Span;
use crate::syntax::ast::{self, ExprKind, Operator, Sign};
use crate::syntax::print;
use crate::units::Range;

/// Left or right of `=`.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Side {
    /// Left.
    Left,
    /// Right.
    Right,
}

/// One term of an equation in one setting. Putting its scales back gives what was written.
#[derive(Debug, Clone)]
pub struct Term {
    /// Its text, without a leading minus.
    pub text: String,
    /// The same as a tree, without process names.
    pub expr: ast::Expr,
    /// Whether a minus stands before the text.
    pub is_negative: bool,
    /// What it is, with its sign on its side.
    pub product: Product,
    /// Its size; the numbers are amounts.
    pub size: Size,
    /// The process it belongs to, where one is named.
    pub process: Option<String>,
    /// Its side.
    pub side: Side,
    /// The written summand that it comes from.
    pub summand: usize,
    /// For an expression with a size of its own: how far below its largest part it lies.
    pub below_parts: Option<f64>,
}

impl Term {
    /// The process, or the text where it has none: what it is called in answers.
    pub fn label(&self) -> &str {
        self.process.as_deref().unwrap_or(&self.text)
    }
}

/// One summand as the user wrote it.
#[derive(Debug, Clone)]
pub struct Summand {
    /// Its text, without a leading minus and without process names.
    pub text: String,
    /// Whether a minus stands before the text.
    pub is_negative: bool,
    /// Its side.
    pub side: Side,
    /// Whether no constant that is 0 took a part of it out.
    pub is_whole: bool,
    /// The expression, without process names.
    pub expr: ast::Expr,
    /// The expression as written, with the process that a name around it gives.
    pub named: ast::Expr,
}

/// An equation in one setting.
#[derive(Debug, Clone)]
pub struct EquationTerms {
    /// Its place in the model.
    pub idx: usize,
    /// Its name.
    pub name: String,
    /// Its title.
    pub title: Option<String>,
    /// Where its name stands.
    pub span: Span,
    /// The SI unit of its terms.
    pub unit: String,
    /// Its terms, in order.
    pub terms: Vec<Term>,
    /// Its summands as written, in order.
    pub summands: Vec<Summand>,
    /// Every process that is named in it, those whose terms are all gone included.
    pub process_names: Vec<String>,
    /// Whether the program spells what it makes with `∂`.
    pub with_partials: bool,
}

/// Turns an equation into terms. Notes (vanished terms) are among the errors.
pub fn terms(model: &Model, setting: &Setting, idx: usize) -> (EquationTerms, Vec<ModelError>) {
    let decl = &model.equations[idx];
    let mut maker = Maker::new(model, setting, idx);
    if let ast::EquationBody::Written { left, right } = &decl.body {
        maker.made.with_partials =
            model.is_component(idx) || has_partials(left) || has_partials(right);
        process_names(left, &mut maker.made.process_names);
        process_names(right, &mut maker.made.process_names);
        maker.side(left, Side::Left);
        maker.side(right, Side::Right);
        maker.close(decl);
    }
    (maker.made, maker.errors)
}

fn has_partials(expr: &ast::Expr) -> bool {
    match &expr.kind {
        ExprKind::Derivative { .. } => true,
        ExprKind::Sum(terms) => terms.iter().any(|(_, term)| has_partials(term)),
        ExprKind::Product(factors) => factors.iter().any(|(_, factor)| has_partials(factor)),
        ExprKind::Negate(inside) | ExprKind::Bracket(inside) => has_partials(inside),
        ExprKind::As { expr, .. } | ExprKind::Sized { expr, .. } => has_partials(expr),
        ExprKind::Power { base, .. } => has_partials(base),
        ExprKind::Call {
            function,
            arguments,
            ..
        } => names::is_vector_operation(&function.text) || arguments.iter().any(has_partials),
        ExprKind::Tuple(arguments) => arguments.iter().any(has_partials),
        ExprKind::Number(_) | ExprKind::Name(_) | ExprKind::Process { .. } | ExprKind::Error => {
            false
        }
    }
}

/// The process names written in an expression, and those that `D_t` gives.
fn process_names(expr: &ast::Expr, found: &mut Vec<String>) {
    let mut add = |name: &str| {
        if !found.iter().any(|present| present == name) {
            found.push(name.to_owned());
        }
    };
    match &expr.kind {
        ExprKind::As { expr, process } => {
            add(&process.text);
            process_names(expr, found);
        }
        ExprKind::Call {
            function,
            arguments,
            ..
        } => {
            if function.text == "D_t" {
                add("tendency");
                add("advection");
            }
            arguments
                .iter()
                .for_each(|argument| process_names(argument, found));
        }
        ExprKind::Sum(terms) => terms
            .iter()
            .for_each(|(_, term)| process_names(term, found)),
        ExprKind::Product(factors) => factors
            .iter()
            .for_each(|(_, factor)| process_names(factor, found)),
        ExprKind::Negate(inside) | ExprKind::Bracket(inside) => process_names(inside, found),
        ExprKind::Power { base, .. } => process_names(base, found),
        ExprKind::Derivative { operand, .. } => process_names(operand, found),
        ExprKind::Tuple(parts) => parts.iter().for_each(|part| process_names(part, found)),
        ExprKind::Sized { .. }
        | ExprKind::Number(_)
        | ExprKind::Name(_)
        | ExprKind::Process { .. }
        | ExprKind::Error => {}
    }
}

/// The products that an expression comes to, for comparing a process named by its term;
/// none if it is no sum of products.
pub fn products(model: &Model, setting: &Setting, idx: usize, expr: &ast::Expr) -> Vec<Product> {
    let mut maker = Maker::new(model, setting, idx);
    let pieces = maker.expand(expr).map(collected).unwrap_or_default();
    pieces.into_iter().map(|piece| piece.product).collect()
}

/// The same expression without process names.
fn unnamed(expr: &ast::Expr) -> ast::Expr {
    let inside = |inside: &ast::Expr| Box::new(unnamed(inside));
    let kind = match &expr.kind {
        ExprKind::As { expr, .. } => return unnamed(expr),
        ExprKind::Sum(terms) => ExprKind::Sum(
            terms
                .iter()
                .map(|(sign, term)| (*sign, unnamed(term)))
                .collect(),
        ),
        ExprKind::Product(factors) => ExprKind::Product(
            factors
                .iter()
                .map(|(operator, factor)| (*operator, unnamed(factor)))
                .collect(),
        ),
        ExprKind::Negate(operand) => ExprKind::Negate(inside(operand)),
        ExprKind::Bracket(operand) => ExprKind::Bracket(inside(operand)),
        ExprKind::Power { base, exponent } => ExprKind::Power {
            base: inside(base),
            exponent: exponent.clone(),
        },
        ExprKind::Call {
            function,
            order,
            arguments,
        } => ExprKind::Call {
            function: function.clone(),
            order: *order,
            arguments: arguments.iter().map(unnamed).collect(),
        },
        ExprKind::Derivative { operand, by } => ExprKind::Derivative {
            operand: inside(operand),
            by: by.clone(),
        },
        ExprKind::Tuple(parts) => ExprKind::Tuple(parts.iter().map(unnamed).collect()),
        ExprKind::Number(_)
        | ExprKind::Name(_)
        | ExprKind::Process { .. }
        | ExprKind::Sized { .. }
        | ExprKind::Error => expr.kind.clone(),
    };
    ast::Expr {
        kind,
        span: expr.span,
    }
}

/// The process of a term on its way.
#[derive(Debug, Clone, PartialEq, Eq)]
struct Tag {
    name: String,
    span: Span,
    /// Given by `D_t`, so that a name around it wins.
    is_made: bool,
}

/// A product on its way, with its process.
#[derive(Debug, Clone)]
struct Piece {
    product: Product,
    tag: Option<Tag>,
}

struct Maker<'a> {
    model: &'a Model,
    setting: &'a Setting,
    errors: Vec<ModelError>,
    /// Texts of derivatives that vanish.
    vanished: Vec<String>,
    /// Texts of terms that constants take out, and the names of those constants.
    zeros: (Vec<String>, Vec<String>),
    has_no_time: Option<Span>,
    below_parts: Option<f64>,
    made: EquationTerms,
}

impl Names for Maker<'_> {
    fn model(&self) -> &Model {
        self.model
    }

    fn phenomenon(&self) -> Option<usize> {
        // An equation stands outside all phenomena; their values come with the setting.
        None
    }

    fn symbol(&self, id: SymbolId) -> Result<Value, Vec<SymbolId>> {
        match &self.setting.variables[id.idx()] {
            Variable::Known(value) => Ok(value.clone()),
            Variable::Open(open) => Err(open.clone()),
        }
    }

    fn group(&self, id: GroupId) -> Option<&Monomial> {
        self.setting.group_formulas.get(id.0 as usize)?.as_ref()
    }

    fn process(&self, _: &ast::Name, process: &ast::ProcessName) -> Result<Range, Fault> {
        Err(Fault::NotAProduct(process.span))
    }
}

type Pieces = Result<Vec<Piece>, ModelError>;

impl<'a> Maker<'a> {
    fn new(model: &'a Model, setting: &'a Setting, idx: usize) -> Maker<'a> {
        let decl = &model.equations[idx];
        Maker {
            model,
            setting,
            errors: Vec::new(),
            vanished: Vec::new(),
            zeros: (Vec::new(), Vec::new()),
            has_no_time: None,
            below_parts: None,
            made: EquationTerms {
                idx,
                name: decl.name.text.clone(),
                title: decl.title.as_ref().map(|title| title.text.clone()),
                span: decl.name.span,
                unit: model.equation_dimensions[idx]
                    .map_or_else(|| "1".to_owned(), |dimension| dimension.unit_text()),
                terms: Vec::new(),
                summands: Vec::new(),
                process_names: Vec::new(),
                with_partials: false,
            },
        }
    }

    fn speller(&self) -> Speller<'_> {
        Speller {
            symbols: &self.setting.names,
            quantities: &self.setting.quantities,
            with_partials: self.made.with_partials,
        }
    }

    fn side(&mut self, expr: &ast::Expr, side: Side) {
        self.flatten(expr, false, None, side);
    }

    /// Takes a side apart into its written summands.
    fn flatten(&mut self, expr: &ast::Expr, is_negative: bool, tag: Option<&Tag>, side: Side) {
        match &expr.kind {
            ExprKind::Bracket(inside) => self.flatten(inside, is_negative, tag, side),
            ExprKind::Negate(inside) => self.flatten(inside, !is_negative, tag, side),
            ExprKind::As { expr, process } => {
                let tag = written_tag(process);
                self.flatten(expr, is_negative, Some(&tag), side);
            }
            ExprKind::Sum(terms) => {
                for (sign, term) in terms {
                    self.flatten(term, is_negative != (*sign == Sign::Minus), tag, side);
                }
            }
            ExprKind::Product(factors) => match leading_minus(factors) {
                Some(factors) => {
                    let kind = ExprKind::Product(factors);
                    self.flatten(
                        &ast::Expr {
                            kind,
                            span: expr.span,
                        },
                        !is_negative,
                        tag,
                        side,
                    );
                }
                None => self.summand(expr, is_negative, tag, side),
            },
            ExprKind::Number(_)
            | ExprKind::Name(_)
            | ExprKind::Process { .. }
            | ExprKind::Power { .. }
            | ExprKind::Call { .. }
            | ExprKind::Derivative { .. }
            | ExprKind::Tuple(_)
            | ExprKind::Sized { .. }
            | ExprKind::Error => self.summand(expr, is_negative, tag, side),
        }
    }

    fn summand(&mut self, expr: &ast::Expr, is_negative: bool, tag: Option<&Tag>, side: Side) {
        self.below_parts = None;
        let pieces = match self.expand(expr) {
            Ok(pieces) => collected(named(pieces, tag)),
            Err(error) => {
                self.errors.push(error);
                return;
            }
        };
        let plain = unnamed(expr);
        let n_zeros = self.zeros.0.len();
        let mut summand = Summand {
            is_whole: true,
            text: print::expression(&plain),
            is_negative,
            side,
            expr: plain,
            named: spelling::named(expr, tag.map(|tag| tag.name.as_str())),
        };
        let idx = self.made.summands.len();
        let is_single = pieces.len() == 1;
        for piece in pieces {
            if let Some(term) = self.term(piece, &summand, idx, is_single, expr.span) {
                self.made.terms.push(term);
            }
        }
        summand.is_whole = self.zeros.0.len() == n_zeros;
        self.made.summands.push(summand);
    }

    /// A term out of a piece; none if a 0 takes it out.
    fn term(
        &mut self,
        piece: Piece,
        summand: &Summand,
        idx: usize,
        is_single: bool,
        span: Span,
    ) -> Option<Term> {
        let Piece { product, tag } = piece;
        if product.number.is_zero() {
            return None;
        }
        let (text, expr, is_negative) = if is_single {
            let expr = summand.expr.clone();
            (summand.text.clone(), expr, summand.is_negative)
        } else {
            let speller = self.speller();
            let expr = spelling::product(&product, &speller);
            let is_negative = summand.is_negative != product.number.is_negative();
            (speller.product(&product), expr, is_negative)
        };
        let size = match product.size(&self.setting.quantities) {
            Ok(size) => size,
            Err(TooLarge) => {
                self.errors.push(ModelError::TooLarge { span });
                return None;
            }
        };
        let zeros: Vec<&(Symbol, Exponent)> = size
            .resolved
            .powers()
            .iter()
            .filter(|(symbol, _)| self.setting.is_zero(symbol))
            .collect();
        if zeros.iter().any(|(_, power)| power.is_negative()) {
            self.errors.push(ModelError::DividesByZero { span });
            return None;
        }
        let range = self.setting.monomial_range(&size.resolved);
        if zeros.is_empty()
            && range
                .is_ok_and(|range| !range.abs().low.is_normal() || !range.abs().high.is_finite())
        {
            self.errors.push(ModelError::TooLarge { span });
            return None;
        }
        if !zeros.is_empty() {
            let speller = self.speller();
            let names: Vec<String> = zeros
                .iter()
                .map(|(symbol, _)| speller.symbol(symbol).to_owned())
                .collect();
            self.zeros.0.push(text);
            for name in names {
                if !self.zeros.1.contains(&name) {
                    self.zeros.1.push(name);
                }
            }
            return None;
        }
        let product = if summand.is_negative {
            product.negated()
        } else {
            product
        };
        Some(Term {
            text,
            expr,
            is_negative,
            product,
            size: Size {
                written: size.written.abs(),
                resolved: size.resolved.abs(),
            },
            process: tag.map(|tag| tag.name),
            side: summand.side,
            summand: idx,
            below_parts: if is_single { self.below_parts } else { None },
        })
    }

    /// Notes and the check for a single term, once both sides are taken apart.
    fn close(&mut self, decl: &ast::EquationDecl) {
        let n_written = self.made.terms.len() + self.zeros.0.len() + self.vanished.len();
        let has_errors = self
            .errors
            .iter()
            .any(|error| error.diagnostic().is_error());
        if n_written <= 1 && !has_errors {
            self.errors.push(ModelError::OneTerm {
                equation: decl.name.text.clone(),
                span: decl.name.span,
            });
        }
        if !self.vanished.is_empty() {
            self.vanished.dedup();
            self.errors.push(ModelError::ZeroDerivative {
                equation: decl.name.text.clone(),
                texts: std::mem::take(&mut self.vanished),
                span: decl.name.span,
            });
        }
        if !self.zeros.0.is_empty() {
            let (texts, names) = std::mem::take(&mut self.zeros);
            self.errors.push(ModelError::ZeroConstant {
                equation: decl.name.text.clone(),
                texts,
                names,
                phenomenon: self.setting.name.clone(),
                span: decl.name.span,
            });
        }
        if let Some(span) = self.has_no_time {
            self.errors.push(ModelError::NoTime { span });
        }
    }

    // Multiplying out -----------------------------------------------------------------------

    fn expand(&mut self, expr: &ast::Expr) -> Pieces {
        let span = expr.span;
        let pieces = match &expr.kind {
            ExprKind::Number(number) => {
                let (value, _) = names::literal(number, span, false)?;
                vec![plain(Product::number(value))]
            }
            ExprKind::Name(name) => self.name(expr, name)?,
            ExprKind::Sum(terms) => {
                let mut sum = Vec::new();
                for (sign, term) in terms {
                    let pieces = self.expand(term)?;
                    sum.extend(pieces.into_iter().map(|piece| match sign {
                        Sign::Plus => piece,
                        Sign::Minus => negated(piece),
                    }));
                }
                sum
            }
            ExprKind::Product(factors) => self.product(factors, span)?,
            ExprKind::Negate(inside) => self.expand(inside)?.into_iter().map(negated).collect(),
            ExprKind::Bracket(inside) => self.expand(inside)?,
            ExprKind::As { expr, process } => {
                named(self.expand(expr)?, Some(&written_tag(process)))
            }
            ExprKind::Power { base, exponent } => {
                let exponent = names::exponent(exponent)?;
                let pieces = self.expand(base)?;
                power(&pieces, exponent, span)?
            }
            ExprKind::Call {
                function,
                order,
                arguments,
            } => self.call(expr, &function.text, *order, arguments)?,
            ExprKind::Derivative { operand, by } => {
                let mut pieces = self.expand(operand)?;
                // As written, the last coordinate is the innermost.
                for (name, order) in by.iter().rev() {
                    let Some(Meaning::Coordinate(id)) = self.model.meaning(&name.text, None) else {
                        return Err(not_a_term(span));
                    };
                    pieces = self.differentiated(&pieces, id, *order, span)?;
                }
                pieces
            }
            ExprKind::Sized { expr: inside, size } => vec![self.sized(expr, inside, size)?],
            ExprKind::Process { .. } | ExprKind::Tuple(_) | ExprKind::Error => {
                return Err(not_a_term(span));
            }
        };
        if pieces.len() > limits::TERMS {
            return Err(ModelError::TooLarge { span });
        }
        Ok(pieces)
    }

    fn name(&self, expr: &ast::Expr, name: &str) -> Pieces {
        if let Some(Meaning::Field(id)) = self.model.meaning(name, None)
            && !self.model.fields[id.0 as usize].parts.is_empty()
        {
            let mut parts = Vec::new();
            self.split(id, false, &mut parts);
            return Ok(parts);
        }
        let base = match self.model.meaning(name, None) {
            Some(Meaning::Symbol(id)) => Base::Symbol(Symbol::Declared(id)),
            Some(Meaning::Coordinate(id)) => Base::Coordinate(id),
            Some(Meaning::Field(id)) => Base::Field(id),
            Some(Meaning::Group(_)) | None => return self.monomial(expr),
            Some(Meaning::Vector(_)) => return Err(not_a_term(expr.span)),
        };
        Ok(vec![plain(Product::base(base))])
    }

    /// The parts of a split field, those of split parts in their places.
    fn split(&self, id: FieldId, is_negative: bool, found: &mut Vec<Piece>) {
        for (sign, part) in &self.model.fields[id.0 as usize].parts {
            let is_negative = is_negative != (*sign == Sign::Minus);
            let base = match self.model.meaning(&part.text, None) {
                Some(Meaning::Field(inner))
                    if !self.model.fields[inner.0 as usize].parts.is_empty() =>
                {
                    self.split(inner, is_negative, found);
                    continue;
                }
                Some(Meaning::Field(inner)) => Base::Field(inner),
                Some(Meaning::Symbol(inner)) => Base::Symbol(Symbol::Declared(inner)),
                Some(Meaning::Coordinate(_) | Meaning::Group(_) | Meaning::Vector(_)) | None => {
                    continue;
                }
            };
            let piece = plain(Product::base(base));
            found.push(if is_negative { negated(piece) } else { piece });
        }
    }

    /// A product of constants, a group or a function of constants.
    fn monomial(&self, expr: &ast::Expr) -> Pieces {
        let found = values::monomial(expr, self).map_err(|fault| {
            fault
                .error(Wanted::Term)
                .unwrap_or(ModelError::NotAProduct {
                    span: expr.span,
                    what: Wanted::Term,
                })
        })?;
        let factors = found
            .powers()
            .iter()
            .map(|(symbol, power)| Factor {
                base: Base::Symbol(symbol.clone()),
                power: *power,
            })
            .collect();
        Ok(vec![plain(Product {
            number: found.number.clone(),
            factors,
        })])
    }

    fn product(&mut self, factors: &[(Operator, ast::Expr)], span: Span) -> Pieces {
        let mut pieces = vec![plain(Product::number(Number::one()))];
        for (operator, factor) in factors {
            let mut next = self.expand(factor)?;
            if *operator == Operator::Over {
                next = power(&next, Exponent::ONE.negated(), factor.span)?;
            }
            pieces = multiplied(&pieces, &next, span)?;
        }
        Ok(pieces)
    }

    fn call(
        &mut self,
        expr: &ast::Expr,
        function: &str,
        order: Option<u32>,
        arguments: &[ast::Expr],
    ) -> Pieces {
        let span = expr.span;
        if names::call(function, self.model) == Call::Vector {
            let written_out = frames::expanded(expr, self.model)?;
            return self.expand(&written_out);
        }
        let [argument] = arguments else {
            return self.constant_call(expr, function, arguments);
        };
        match names::call(function, self.model) {
            Call::Derivative(id) => {
                let pieces = self.expand(argument)?;
                self.differentiated(&pieces, id, order.unwrap_or(1), span)
            }
            Call::Material => {
                let pieces = self.expand(argument)?;
                self.material(&pieces, span)
            }
            Call::Function(Function::Sqrt) => {
                let half = Exponent::ratio(1, 2);
                let exponent = half
                    .times(
                        Exponent::whole(i64::from(order.unwrap_or(1)))
                            .map_err(|_| ModelError::TooLarge { span })?,
                    )
                    .map_err(|_| ModelError::TooLarge { span })?;
                match self.expand(argument)?.as_slice() {
                    [single] => power(std::slice::from_ref(single), exponent, span),
                    _ => self.constant_call(expr, function, arguments),
                }
            }
            Call::Function(Function::Abs) => {
                let pieces = self.expand(argument)?;
                let [single] = pieces.as_slice() else {
                    return self.constant_call(expr, function, arguments);
                };
                let amount = vec![absolute(single)];
                match order {
                    Some(order) => power(
                        &amount,
                        Exponent::whole(i64::from(order))
                            .map_err(|_| ModelError::TooLarge { span })?,
                        span,
                    ),
                    None => Ok(amount),
                }
            }
            Call::Function(_) => self.constant_call(expr, function, arguments),
            Call::Mean | Call::Vector | Call::Unknown => Err(not_a_term(span)),
        }
    }

    /// A function of constants; of anything that varies it has no size by itself.
    fn constant_call(&self, expr: &ast::Expr, function: &str, arguments: &[ast::Expr]) -> Pieces {
        let mut varies = false;
        for argument in arguments {
            names::visit_names(argument, &mut |name, _| {
                varies |= matches!(
                    self.model.meaning(name, None),
                    Some(Meaning::Field(_) | Meaning::Coordinate(_) | Meaning::Vector(_))
                );
            });
        }
        if varies {
            return Err(ModelError::NotSplit {
                span: expr.span,
                function: function.to_owned(),
            });
        }
        self.monomial(expr)
    }

    // Derivatives -----------------------------------------------------------------------------

    fn differentiated(
        &mut self,
        pieces: &[Piece],
        along: CoordinateId,
        order: u32,
        span: Span,
    ) -> Pieces {
        let mut pieces = pieces.to_vec();
        for _ in 0..order {
            let mut next = Vec::new();
            for piece in &pieces {
                next.extend(self.derivative(piece, along, span)?);
            }
            pieces = next;
            if pieces.len() > limits::TERMS {
                return Err(ModelError::TooLarge { span });
            }
        }
        Ok(pieces)
    }

    fn derivative(&mut self, piece: &Piece, along: CoordinateId, span: Span) -> Pieces {
        let found = calculus::differentiate(&piece.product, along, &self.setting.quantities)
            .map_err(|_| ModelError::TooLarge { span })?;
        if found.is_empty() && !piece.product.number.is_zero() {
            let text = self.vanished_text(&piece.product, along);
            self.vanished.push(text);
        }
        let tagged = |product| Piece {
            product,
            tag: piece.tag.clone(),
        };
        Ok(found.into_iter().map(tagged).collect())
    }

    fn vanished_text(&self, product: &Product, along: CoordinateId) -> String {
        let whole = Product::base(Base::Derivative(Box::new(Derivative {
            operand: product.factors.clone(),
            by: vec![(along, 1)],
        })));
        self.speller().product(&whole)
    }

    fn material(&mut self, pieces: &[Piece], span: Span) -> Pieces {
        let mut sum = Vec::new();
        match self.model.meaning("t", None) {
            Some(Meaning::Coordinate(time)) => {
                let tendency = self.differentiated(pieces, time, 1, span)?;
                sum.extend(named(tendency, Some(&made_tag("tendency", span))));
            }
            Some(
                Meaning::Symbol(_) | Meaning::Field(_) | Meaning::Group(_) | Meaning::Vector(_),
            )
            | None => {
                self.has_no_time.get_or_insert(span);
            }
        }
        let model = self.model;
        let Some(velocity) = &model.velocity else {
            return Err(ModelError::NoVelocity { span });
        };
        for (field, along) in &velocity.components {
            let Some(Meaning::Coordinate(along)) = model.meaning(&along.text, None) else {
                return Err(not_a_term(span));
            };
            let name = ast::Expr {
                kind: ExprKind::Name(field.text.clone()),
                span: field.span,
            };
            let mut carrier = self.name(&name, &field.text)?;
            if let Some(metric) = frames::metric(along, model, span) {
                carrier = multiplied(&carrier, &self.expand(&metric)?, span)?;
            }
            let gradient = self.differentiated(pieces, along, 1, span)?;
            let carried = multiplied(&carrier, &gradient, span)?;
            sum.extend(named(carried, Some(&made_tag("advection", span))));
        }
        Ok(sum)
    }

    // Expressions with a size of their own ------------------------------------------------------

    fn sized(
        &mut self,
        whole: &ast::Expr,
        inside: &ast::Expr,
        size: &ast::Expr,
    ) -> Result<Piece, ModelError> {
        let span = size.span;
        let found = values::monomial(size, self).map_err(|fault| {
            fault
                .error(Wanted::Size)
                .unwrap_or(ModelError::NotAProduct {
                    span,
                    what: Wanted::Size,
                })
        })?;
        let found = self
            .setting
            .quantities
            .size(found.abs())
            .map_err(|_| ModelError::TooLarge { span })?;
        let parts = self.part_sizes(inside).unwrap_or_default();
        self.compare_with_parts(&found, &parts, size.span)?;
        let fields = self.fields_in(inside);
        let variations = self.shortest_variations(&fields, &found);
        let sized = Sized {
            text: print::expression(&unnamed(whole)),
            size: found,
            parts,
            variations,
            fields,
            place: whole.span.start,
        };
        Ok(plain(Product::base(Base::Sized(Arc::new(sized)))))
    }

    /// The size must not lie above the largest part; how far below is kept for reports.
    fn compare_with_parts(
        &mut self,
        size: &Size,
        parts: &[Monomial],
        span: Span,
    ) -> Result<(), ModelError> {
        let nominal = self.setting.nominal(&size.resolved);
        let sizes = parts.iter().map(|part| self.setting.nominal(part));
        let largest = sizes.reduce(f64::max);
        let Some(largest) = largest.filter(|largest| largest.is_finite() && nominal.is_finite())
        else {
            return Ok(());
        };
        if nominal > largest * (1.0 + 1e-12) {
            let dimension = self.made.unit.clone();
            return Err(ModelError::CancelsUpwards {
                span,
                size: nominal,
                largest,
                unit: if dimension == "1" {
                    String::new()
                } else {
                    "(SI units)".to_owned()
                },
            });
        }
        self.below_parts = Some(nominal / largest);
        Ok(())
    }

    /// The sizes of the parts of an expression, where they can be told.
    fn part_sizes(&mut self, inside: &ast::Expr) -> Option<Vec<Monomial>> {
        let root = match &inside.kind {
            ExprKind::Call {
                function,
                order: None,
                arguments,
            } if function.text == "sqrt" => arguments.first(),
            ExprKind::Bracket(inside) => return self.part_sizes(inside),
            _ => None,
        };
        if let Some(argument) = root {
            let parts = self.part_sizes(argument)?;
            let roots = parts
                .iter()
                .map(|part| part.power(Exponent::ratio(1, 2)).ok());
            return roots.collect();
        }
        let (vanished, zeros) = (self.vanished.len(), self.zeros.clone());
        let pieces = self.expand(inside).ok();
        self.vanished.truncate(vanished);
        self.zeros = zeros;
        let sizes = pieces?
            .iter()
            .filter_map(|piece| piece.product.size(&self.setting.quantities).ok())
            .map(|size| size.resolved.abs())
            .collect();
        Some(sizes)
    }

    fn fields_in(&self, expr: &ast::Expr) -> Vec<FieldId> {
        let mut fields = Vec::new();
        let mut add = |name: &str| {
            if let Some(Meaning::Field(id)) = self.model.meaning(name, None)
                && !fields.contains(&id)
            {
                fields.push(id);
            }
        };
        names::visit_names(expr, &mut |name, _| match self.model.meaning(name, None) {
            Some(Meaning::Vector(id)) => {
                for part in &self.model.vectors[id.0 as usize].components {
                    names::visit_names(part, &mut |name, _| add(name));
                }
            }
            Some(_) | None => add(name),
        });
        fields
    }

    /// It varies as its parts do, over the shortest of their lengths.
    fn shortest_variations(&self, fields: &[FieldId], size: &Size) -> Vec<Variation> {
        let mut shortest: Vec<Variation> = Vec::new();
        let quantities = &self.setting.quantities;
        for variation in fields
            .iter()
            .flat_map(|id| &quantities.field(*id).variations)
        {
            let length = self.setting.nominal(&variation.length.resolved);
            let own = Variation {
                amplitude: size.clone(),
                nominal_amplitude: self.setting.nominal(&size.resolved),
                has_own_amplitude: false,
                ..variation.clone()
            };
            match shortest
                .iter_mut()
                .find(|found| found.coordinate == own.coordinate)
            {
                None => shortest.push(own),
                Some(found) if length < self.setting.nominal(&found.length.resolved) => {
                    *found = own
                }
                Some(_) => {}
            }
        }
        shortest
    }
}

/// The factors of a product without the minus before the first, if there is one.
fn leading_minus(factors: &[(Operator, ast::Expr)]) -> Option<Vec<(Operator, ast::Expr)>> {
    let (operator, first) = factors.first()?;
    let ExprKind::Negate(inside) = &first.kind else {
        return None;
    };
    let mut factors = factors.to_vec();
    factors[0] = (*operator, (**inside).clone());
    Some(factors)
}

fn not_a_term(span: Span) -> ModelError {
    ModelError::NotAProduct {
        span,
        what: Wanted::Term,
    }
}

fn plain(product: Product) -> Piece {
    Piece { product, tag: None }
}

fn negated(piece: Piece) -> Piece {
    Piece {
        product: piece.product.negated(),
        tag: piece.tag,
    }
}

fn written_tag(process: &ast::ProcessName) -> Tag {
    Tag {
        name: process.text.clone(),
        span: process.span,
        is_made: false,
    }
}

fn made_tag(name: &str, span: Span) -> Tag {
    Tag {
        name: name.to_owned(),
        span,
        is_made: true,
    }
}

/// Gives pieces a process: the innermost written name stays, one that `D_t` gave does not.
fn named(pieces: Vec<Piece>, tag: Option<&Tag>) -> Vec<Piece> {
    let Some(tag) = tag else { return pieces };
    let pieces = pieces.into_iter().map(|piece| {
        let keeps = match &piece.tag {
            Some(present) => !present.is_made || tag.is_made,
            None => false,
        };
        let tag = if keeps { piece.tag } else { Some(tag.clone()) };
        Piece {
            product: piece.product,
            tag,
        }
    });
    pieces.collect()
}

fn multiplied(left: &[Piece], right: &[Piece], span: Span) -> Pieces {
    if left.len().saturating_mul(right.len()) > limits::TERMS {
        return Err(ModelError::TooLarge { span });
    }
    let mut pieces = Vec::with_capacity(left.len() * right.len());
    for a in left {
        for b in right {
            let product = a
                .product
                .times(&b.product)
                .map_err(|_| ModelError::TooLarge { span })?;
            pieces.push(Piece {
                product,
                tag: met(a.tag.as_ref(), b.tag.as_ref())?,
            });
        }
    }
    Ok(pieces)
}

/// The process of a product: that of the factor which has one.
fn met(a: Option<&Tag>, b: Option<&Tag>) -> Result<Option<Tag>, ModelError> {
    match (a, b) {
        (Some(a), Some(b)) if a.name != b.name => Err(ModelError::TwoProcesses {
            first: (a.name.clone(), a.span),
            second: (b.name.clone(), b.span),
        }),
        (Some(tag), _) | (None, Some(tag)) => Ok(Some(tag.clone())),
        (None, None) => Ok(None),
    }
}

fn power(pieces: &[Piece], exponent: Exponent, span: Span) -> Pieces {
    if let [single] = pieces {
        let number = &single.product.number;
        if number.is_zero() && exponent.is_negative() {
            return Err(ModelError::DividesByZero { span });
        }
        if number.is_negative() && !exponent.is_whole() {
            return Err(ModelError::OutOfDomain {
                span,
                what: "no root of a negative number",
            });
        }
        let product = single
            .product
            .power(exponent)
            .map_err(|_| ModelError::TooLarge { span })?;
        return Ok(vec![Piece {
            product,
            tag: single.tag.clone(),
        }]);
    }
    if pieces.is_empty() {
        return Ok(Vec::new());
    }
    if !exponent.is_whole() || exponent.is_negative() {
        return Err(ModelError::NotAvailable {
            what: Unavailable::PowersOfSums,
            span,
        });
    }
    if exponent.numer() > limits::SUM_POWER {
        return Err(ModelError::TooLarge { span });
    }
    let mut result = vec![plain(Product::number(Number::one()))];
    for _ in 0..exponent.numer().to_usize().unwrap_or(0) {
        result = collected(multiplied(&result, pieces, span)?);
    }
    Ok(result)
}

/// The amount of a product: what varies in it, and the constants with it.
fn absolute(piece: &Piece) -> Piece {
    let product = &piece.product;
    let varies = product
        .factors
        .iter()
        .any(|factor| !matches!(factor.base, Base::Symbol(_)));
    let mut amount = if varies {
        Product::base(Base::Absolute(Box::new(product.factors.clone())))
    } else {
        product.clone()
    };
    amount.number = product.number.abs();
    Piece {
        product: amount,
        tag: piece.tag.clone(),
    }
}

/// Collects like terms of one process; what cancels goes.
fn collected(pieces: Vec<Piece>) -> Vec<Piece> {
    let mut sum: Vec<Piece> = Vec::with_capacity(pieces.len());
    for piece in pieces {
        let like = sum
            .iter_mut()
            .filter(|found| {
                name_of(&found.tag) == name_of(&piece.tag) && found.product.is_like(&piece.product)
            })
            .find_map(|found| {
                let number = found.product.number.plus(&piece.product.number)?;
                Some((found, number))
            });
        match like {
            Some((found, number)) => found.product.number = number,
            None => sum.push(piece),
        }
    }
    if sum.len() > 1 {
        sum.retain(|piece| !piece.product.number.is_zero());
    }
    sum
}

fn name_of(tag: &Option<Tag>) -> Option<&str> {
    tag.as_ref().map(|tag| tag.name.as_str())
}
