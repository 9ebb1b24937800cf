//! Equations turned into terms, in one setting: products multiplied out (`expand`),
//! derivatives taken by the rules of `algebra::calculus` (`derivatives`), means taken
//! (`means`), nonlinear places of split fields and of coordinates about an origin expanded
//! (`expansion`), equations made of others (`made`); each term with its size, its process
//! and its text.

mod derivatives;
mod displacements;
mod expand;
mod expansion;
mod made;
mod means;
mod pieces;
mod sized;
mod splits;
mod tangents;
mod written;

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::algebra::product::{Product, Speller};
use crate::algebra::quantities::Size;
use crate::limits;
use crate::model::dimensions::{self, Dim, Place};
use crate::model::errors::ModelError;
use crate::model::settings::{Setting, Variable};
use crate::model::spelling;
use crate::model::values::{Fault, Names, Value};
use crate::model::{GroupId, Meaning, Model, combinations, names};
use crate::number::{Exponent, TooLarge};
use crate::source::Span;
use crate::syntax::ast::{self, ExprKind, Sign};
use crate::syntax::print;
use crate::units::Range;
use pieces::{Piece, Sided, Tag, collected, merged, named, without_cancelling, written_tag};
use written::{has_partials, holds_material, leading_minus, process_names, unnamed};

/// Left or right of `=`.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Side {
    /// Left.
    Left,
    /// Right.
    Right,
}

/// How far expansions in small ratios go.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Depth {
    /// Their order.
    pub order: u32,
    /// Whether a coordinate about an origin is split into origin and displacement where it
    /// stands by itself, too.
    pub splits_levels: bool,
}

impl Depth {
    /// To the second order; a level stands for its coordinate.
    pub const RANKED: Depth = Depth {
        order: limits::EXPANSION_ORDER,
        splits_levels: false,
    };
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
    /// The unit of its number, where that came from a literal with one.
    pub unit: Option<String>,
    /// Its order in the ratios of the expansions that it comes from; 0 without any.
    pub degree: u32,
    /// Where it, or what it comes from, is written.
    pub span: Span,
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
    /// Whether it holds a `D_t`.
    pub is_material: bool,
    /// The same as a tree, without process names.
    pub expr: ast::Expr,
    /// The same as written, under the process that a name around it gives.
    pub named: ast::Expr,
}

/// A relation that is put into an equation.
#[derive(Debug, Clone)]
pub struct PutIn {
    /// Its name behind `using`.
    pub name: ast::Name,
    /// The text of its left side.
    pub left: String,
    /// Whether it replaces something.
    pub is_used: bool,
}

/// A ratio in which an expansion goes.
#[derive(Debug, Clone)]
pub struct SmallRatio {
    /// What is small.
    pub small: Product,
    /// Beside this; `None`: beside 1.
    pub large: Option<Product>,
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
    /// The first terms that its expansions leave out, in order.
    pub neglected: Vec<Term>,
    /// Ratios that are too large to expand in: whoever asks for the equation is told.
    pub faults: Vec<ModelError>,
    /// The ratios in which it was expanded.
    pub ratios: Vec<SmallRatio>,
    /// Its summands as written, in order.
    pub summands: Vec<Summand>,
    /// The relations behind its `using`, in order.
    pub put_in: Vec<PutIn>,
    /// Every process that is named in it, those whose terms are all gone included.
    pub process_names: Vec<String>,
    /// Whether the program spells what it makes with `∂`.
    pub with_partials: bool,
}

/// Turns all equations into terms, in order of declaration. Notes (vanished terms) are
/// among the errors.
pub fn all(
    model: &Model,
    setting: &Setting,
    depth: Depth,
) -> (Vec<EquationTerms>, Vec<ModelError>) {
    let mut sources: Vec<Option<Source>> = vec![None; model.equations.len()];
    let mut found: Vec<Option<(EquationTerms, Vec<ModelError>)>> = Vec::new();
    found.resize_with(model.equations.len(), || None);
    let has_units = model.equations.iter().any(|decl| match &decl.body {
        ast::EquationBody::Written { left, right } => left.holds_unit() || right.holds_unit(),
        ast::EquationBody::Made(from) => from.holds_unit(),
    });
    for idx in combinations::order(model) {
        let mut maker = Maker::new(model, setting, idx, depth);
        maker.has_units = has_units;
        maker.sources = sources;
        maker.equation();
        sources = std::mem::take(&mut maker.sources);
        let is_sound = !maker
            .errors
            .iter()
            .any(|error| error.diagnostic().is_error());
        sources[idx] = is_sound.then(|| Source {
            pieces: std::mem::take(&mut maker.source),
            process_names: maker.made.process_names.clone(),
            with_partials: maker.made.with_partials,
            faults: maker.made.faults.clone(),
            ratios: maker.made.ratios.clone(),
        });
        found[idx] = Some((maker.made, maker.errors));
    }
    let mut equations = Vec::with_capacity(found.len());
    let mut errors = Vec::new();
    for (made, own) in found.into_iter().flatten() {
        equations.push(made);
        errors.extend(own);
    }
    (equations, errors)
}

/// The products that an expression comes to, for comparing a process named by its term;
/// none if it is no sum of products.
pub fn products(model: &Model, setting: &Setting, idx: usize, expr: &ast::Expr) -> Vec<Product> {
    let mut maker = Maker::new(model, setting, idx, Depth::RANKED);
    let found = maker
        .expand(expr)
        .and_then(|pieces| maker.resolved(collected(pieces), expr.span));
    let pieces = found.unwrap_or_default().into_iter();
    let within = pieces.filter(|piece| piece.degree <= Depth::RANKED.order);
    within.map(|piece| piece.product).collect()
}

/// An equation before its functions are expanded, for equations made of it.
#[derive(Debug, Clone)]
struct Source {
    pieces: Vec<Sided>,
    process_names: Vec<String>,
    with_partials: bool,
    faults: Vec<ModelError>,
    ratios: Vec<SmallRatio>,
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
    depth: Depth,
    /// Whether a number in any equation has a unit.
    has_units: bool,
    /// The equations that are done, for those made of them.
    sources: Vec<Option<Source>>,
    /// This equation's products before functions in them are expanded.
    source: Vec<Sided>,
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

impl<'a> Maker<'a> {
    fn new(model: &'a Model, setting: &'a Setting, idx: usize, depth: Depth) -> Maker<'a> {
        let decl = &model.equations[idx];
        Maker {
            model,
            setting,
            errors: Vec::new(),
            vanished: Vec::new(),
            zeros: (Vec::new(), Vec::new()),
            has_no_time: None,
            below_parts: None,
            depth,
            has_units: false,
            sources: Vec::new(),
            source: Vec::new(),
            made: EquationTerms {
                idx,
                name: decl.name.text.clone(),
                title: decl.title.as_ref().map(|title| title.text.clone()),
                span: decl.name.span,
                unit: model.equation_dimensions[idx]
                    .map_or_else(|| "1".to_owned(), |dimension| dimension.unit_text()),
                terms: Vec::new(),
                neglected: Vec::new(),
                faults: Vec::new(),
                ratios: Vec::new(),
                summands: Vec::new(),
                put_in: Vec::new(),
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

    /// The highest order that is followed: one more than is asked for, to tell what is
    /// left out first.
    fn highest(&self) -> u32 {
        self.depth.order + 1
    }

    fn equation(&mut self) {
        let model = self.model;
        let decl = &model.equations[self.made.idx];
        if let ast::EquationBody::Written { left, right } = &decl.body {
            self.made.with_partials =
                model.is_component(self.made.idx) || has_partials(left) || has_partials(right);
            process_names(left, &mut self.made.process_names);
            process_names(right, &mut self.made.process_names);
            self.flatten(left, false, None, Side::Left);
            self.flatten(right, false, None, Side::Right);
        }
        if combinations::is_made(decl) {
            self.make(decl);
        }
        self.close(decl);
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
        let signed = |piece: &Piece| match is_negative {
            true => piece.negated(),
            false => piece.clone(),
        };
        self.source
            .extend(pieces.iter().map(|piece| (side, signed(piece))));
        // Its terms come with the equation that is made of it.
        if combinations::is_made(&self.model.equations[self.made.idx]) {
            return;
        }
        let plain = unnamed(expr);
        let summand = Summand {
            is_whole: true,
            text: print::expression(&plain),
            is_negative,
            side,
            is_material: holds_material(expr),
            expr: plain,
            named: spelling::named(expr, tag.map(|tag| tag.name.as_str())),
        };
        match self.resolved(pieces, expr.span) {
            Ok(pieces) => self.put(summand, pieces, expr.span),
            Err(error) => self.errors.push(error),
        }
    }

    /// Takes up a summand with its terms.
    fn put(&mut self, mut summand: Summand, pieces: Vec<Piece>, span: Span) {
        let n_zeros = self.zeros.0.len();
        let idx = self.made.summands.len();
        let is_within = |piece: &Piece| piece.degree <= self.depth.order;
        // The side has no say here.
        let sided = pieces.into_iter().map(|piece| (Side::Left, piece));
        let left = without_cancelling(sided.collect()).into_iter();
        let (within, mut beyond): (Vec<Piece>, Vec<Piece>) =
            left.map(|(_, piece)| piece).partition(is_within);
        beyond.retain(|piece| piece.whole_order() <= self.highest());
        let within = merged(within);
        let is_single = within.len() == 1;
        let is_as_written = is_single && !self.holds_split(&summand.expr);
        for piece in within {
            if let Some(mut term) = self.term(piece, &summand, idx, is_as_written, span) {
                term.below_parts = self.below_parts.filter(|_| is_single);
                self.made.terms.push(term);
            }
        }
        summand.is_whole = self.zeros.0.len() == n_zeros && is_single == is_as_written;
        for piece in merged(beyond) {
            if let Some(term) = self.term(piece, &summand, idx, false, span) {
                self.made.neglected.push(term);
            }
        }
        self.made.summands.push(summand);
    }

    /// Whether an expression names a split field: one part of it may be all that is left.
    fn holds_split(&self, expr: &ast::Expr) -> bool {
        let mut holds = false;
        names::visit_names(expr, &mut |name, _| {
            let meaning = self.model.meaning(name, self.setting.phenomenon);
            holds |= matches!(meaning, Some(Meaning::Field(id))
                if !self.model.fields[id.0 as usize].parts.is_empty());
        });
        holds
    }

    /// The unit of a product's number, if it came from a literal with one.
    fn unit_of_number(&self, product: &Product) -> Option<String> {
        if !self.has_units {
            return None;
        }
        let expr = &spelling::product(product, &self.speller());
        let whole = self.model.equation_dimensions[self.made.idx]?;
        let (phenomenon, mut errors) = (self.setting.phenomenon, Vec::new());
        let place = Place::Equation;
        match dimensions::dimension(expr, self.model, phenomenon, place, &mut errors) {
            Dim::Known(found, _) if found != whole && errors.is_empty() => {
                Some(whole.over(&found).ok()?.unit_text())
            }
            Dim::Known(..) | Dim::Any | Dim::Faulty => None,
        }
    }

    /// A term out of a piece; none if a 0 takes it out.
    fn term(
        &mut self,
        piece: Piece,
        summand: &Summand,
        idx: usize,
        is_as_written: bool,
        span: Span,
    ) -> Option<Term> {
        let Piece {
            product,
            degree,
            tag,
            ..
        } = piece;
        if product.number.is_zero() {
            return None;
        }
        let unit = self.unit_of_number(&product);
        let (text, expr, is_negative) = if is_as_written {
            let expr = summand.expr.clone();
            (summand.text.clone(), expr, summand.is_negative)
        } else {
            let speller = self.speller();
            let expr = spelling::product(&product, &speller);
            let is_negative = summand.is_negative != product.number.is_negative();
            match &unit {
                Some(unit) => {
                    let expr = spelling::with_unit(expr, unit);
                    (print::expression(&expr), expr, is_negative)
                }
                None => (speller.product(&product), expr, is_negative),
            }
        };
        let size = match product.size(&self.setting.quantities) {
            Ok(size) => size,
            Err(TooLarge) => {
                self.errors.push(ModelError::TooLarge { span });
                return None;
            }
        };
        if self.is_zero(&size, &text, degree, span) {
            return None;
        }
        let range = self.setting.monomial_range(&size.resolved);
        if range.is_ok_and(|range| !range.abs().low.is_normal() || !range.abs().high.is_finite()) {
            self.errors.push(ModelError::TooLarge { span });
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
            below_parts: None,
            unit,
            degree,
            span,
        })
    }

    /// Whether a constant that is 0 takes a term out; such terms are told of, but for those
    /// that an expansion leaves out anyway.
    fn is_zero(&mut self, size: &Size, text: &str, degree: u32, span: Span) -> bool {
        let zeros: Vec<&(Symbol, Exponent)> = size
            .resolved
            .powers()
            .iter()
            .filter(|(symbol, _)| self.setting.is_zero(symbol))
            .collect();
        if zeros.iter().any(|(_, power)| power.is_negative()) {
            self.errors.push(ModelError::DividesByZero { span });
            return true;
        }
        if zeros.is_empty() || degree > self.depth.order {
            return !zeros.is_empty();
        }
        let speller = self.speller();
        let names: Vec<String> = zeros
            .iter()
            .map(|(symbol, _)| speller.symbol(symbol).to_owned())
            .collect();
        self.zeros.0.push(text.to_owned());
        for name in names {
            if !self.zeros.1.contains(&name) {
                self.zeros.1.push(name);
            }
        }
        true
    }

    /// Notes and the check for a single term, once both sides are taken apart.
    fn close(&mut self, decl: &ast::EquationDecl) {
        let n_written = self.made.terms.len() + self.zeros.0.len() + self.vanished.len();
        let has_errors = self
            .errors
            .iter()
            .any(|error| error.diagnostic().is_error());
        // Of a plane motion one component may be nothing at all.
        let is_nothing = self.made.terms.is_empty() && self.model.is_component(self.made.idx);
        if n_written <= 1 && !has_errors && !is_nothing {
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
}
