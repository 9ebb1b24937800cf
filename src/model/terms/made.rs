//! Equations made of others: linear combinations, and relations put in.

use super::expand::not_a_term;
use super::pieces::{
    Piece, Pieces, Sided, collected, gathered, leveled, multiplied, named, without_cancelling,
    written_tag,
};
use super::tangents::without_tangents;
use super::written::{has_partials, process_names};
use super::{Maker, PutIn, Side, Source, Summand};
use crate::algebra::product::{Base, Derivative, Factor, Product};
use crate::algebra::quantities::CoordinateId;
use crate::limits;
use crate::model::errors::{ModelError, Product as Wanted, Relation as WantedRelation};
use crate::model::names::{self, Call};
use crate::model::{Meaning, combinations, spelling};
use crate::number::{Exponent, Number};
use crate::source::Span;
use crate::syntax::ast::{self, EquationBody, ExprKind, Sign};

type Combined = Result<Vec<Sided>, ModelError>;

/// What a relation replaces, and by what.
struct Relation {
    left: Product,
    right: Vec<Piece>,
}

impl Maker<'_> {
    /// Makes an equation out of others, and puts in the relations that it names.
    pub(super) fn make(&mut self, decl: &ast::EquationDecl) {
        let span = decl.name.span;
        let found = match &decl.body {
            EquationBody::Written { .. } => Ok(std::mem::take(&mut self.source)),
            EquationBody::Made(expr) => {
                self.made.with_partials |= has_partials(expr);
                process_names(expr, &mut self.made.process_names);
                self.combined(expr)
            }
        };
        let found = found
            .map(gathered)
            .and_then(|pieces| self.with_relations(pieces, decl));
        let resolved = found.and_then(|pieces| {
            self.source = pieces;
            self.both_sides(|maker, pieces| maker.resolved(pieces, span))
        });
        match resolved {
            Ok(pieces) => {
                let order = self.depth.order;
                let (within, beyond): (Vec<Sided>, Vec<Sided>) = without_cancelling(pieces)
                    .into_iter()
                    .partition(|(_, piece)| piece.degree <= order);
                let highest = self.highest();
                let beyond = beyond
                    .into_iter()
                    .filter(|(_, piece)| piece.whole_order() <= highest)
                    .collect();
                self.put_all(gathered(leveled(within)), span);
                self.put_all(gathered(leveled(beyond)), span);
            }
            Err(error) => self.errors.push(error),
        }
    }

    /// Each term is a summand of its own.
    fn put_all(&mut self, pieces: Vec<Sided>, span: Span) {
        for (side, piece) in pieces {
            let is_negative = piece.product.number.is_negative();
            let expr = spelling::product(&piece.product, &self.speller());
            let process = piece.tag.as_ref().map(|tag| tag.name.as_str());
            let summand = Summand {
                text: self.speller().product(&piece.product),
                is_negative,
                side,
                is_whole: true,
                is_material: false,
                named: spelling::named(&expr, process),
                expr,
            };
            let piece = match is_negative {
                true => piece.negated(),
                false => piece,
            };
            self.put(summand, vec![piece], span);
        }
    }

    fn both_sides(
        &mut self,
        change: impl Fn(&mut Self, Vec<Piece>) -> Pieces,
    ) -> Result<Vec<Sided>, ModelError> {
        let pieces = self.source.clone();
        on_sides(&pieces, |pieces| change(self, pieces))
    }

    // Combinations ----------------------------------------------------------------------------

    fn combined(&mut self, expr: &ast::Expr) -> Combined {
        let span = expr.span;
        let found = match &expr.kind {
            ExprKind::Name(name) => self.named_equation(name, span)?,
            ExprKind::Bracket(inside) => self.combined(inside)?,
            ExprKind::Negate(inside) => negated(self.combined(inside)?),
            ExprKind::As { expr, process } => {
                let tag = written_tag(process);
                let pieces = self.combined(expr)?;
                on_sides(&pieces, |pieces| Ok(named(pieces, Some(&tag))))?
            }
            ExprKind::Sum(terms) => {
                let mut sum = Vec::new();
                for (sign, term) in terms {
                    let pieces = self.combined(term)?;
                    sum.extend(match sign {
                        Sign::Plus => pieces,
                        Sign::Minus => negated(pieces),
                    });
                }
                sum
            }
            ExprKind::Product(factors) => {
                let Some(place) = self.equation_factor(factors) else {
                    return Err(no_combination(span));
                };
                let pieces = self.combined(&factors[place].1)?;
                self.times_others(factors, place, &pieces, span)?
            }
            ExprKind::Derivative { operand, by } => {
                let mut pieces = self.combined(operand)?;
                for (name, order) in by.iter().rev() {
                    let along = self.coordinate(name)?;
                    pieces = on_sides(&pieces, |pieces| {
                        self.differentiated(&pieces, along, *order, span)
                    })?;
                }
                pieces
            }
            ExprKind::Call {
                function,
                order,
                arguments,
            } => {
                let [operand] = arguments.as_slice() else {
                    return Err(no_combination(span));
                };
                match names::call(&function.text, self.model) {
                    Call::Derivative(along) => {
                        let pieces = self.combined(operand)?;
                        on_sides(&pieces, |pieces| {
                            self.differentiated(&pieces, along, order.unwrap_or(1), span)
                        })?
                    }
                    Call::Material => {
                        let pieces = self.combined(operand)?;
                        on_sides(&pieces, |pieces| self.material(&pieces, span))?
                    }
                    Call::Mean => self.combined_mean(operand)?,
                    Call::Vector | Call::Function(_) | Call::Unknown => {
                        return Err(no_combination(span));
                    }
                }
            }
            ExprKind::Number(_)
            | ExprKind::Process { .. }
            | ExprKind::Power { .. }
            | ExprKind::Tuple(_)
            | ExprKind::Sized { .. }
            | ExprKind::Error => return Err(no_combination(span)),
        };
        if found.len() > limits::TERMS {
            return Err(ModelError::TooLarge { span });
        }
        Ok(found)
    }

    fn coordinate(&self, name: &ast::Name) -> Result<CoordinateId, ModelError> {
        match self.model.meaning(&name.text, None) {
            Some(Meaning::Coordinate(id)) => Ok(id),
            Some(
                Meaning::Symbol(_) | Meaning::Field(_) | Meaning::Group(_) | Meaning::Vector(_),
            )
            | None => Err(not_a_term(name.span)),
        }
    }

    fn named_equation(&mut self, name: &str, span: Span) -> Combined {
        let Some(idx) = self.model.equation(name) else {
            return Err(no_combination(span));
        };
        let pieces = self.take(idx).map(|source| source.pieces);
        let pieces = pieces.unwrap_or_default();
        if !self.model.is_component(idx) {
            return Ok(pieces);
        }
        on_sides(&pieces, |pieces| sines(pieces, span))
    }

    /// An equation that is done; none if an error was reported for it.
    fn take(&mut self, idx: usize) -> Option<Source> {
        let source = self.sources.get(idx)?.clone()?;
        self.made.with_partials |= source.with_partials;
        for name in &source.process_names {
            if !self.made.process_names.contains(name) {
                self.made.process_names.push(name.clone());
            }
        }
        self.made.faults.extend(source.faults.iter().cloned());
        self.made.ratios.extend(source.ratios.iter().cloned());
        Some(source)
    }

    /// The factor that holds an equation; the check saw that there is no other.
    fn equation_factor(&self, factors: &[(ast::Operator, ast::Expr)]) -> Option<usize> {
        factors.iter().position(|(_, factor)| {
            combinations::holds_equation(factor, self.model).is_ok_and(|holds| holds)
        })
    }

    /// Pieces times the other factors of a product.
    fn times_others(
        &mut self,
        factors: &[(ast::Operator, ast::Expr)],
        place: usize,
        pieces: &[Sided],
        span: Span,
    ) -> Combined {
        let mut before = self.product(&factors[..place], span)?;
        let mut behind = self.product(&factors[place + 1..], span)?;
        if self.model.frame.is_some() {
            before = sines(before, span)?;
            behind = sines(behind, span)?;
        }
        let highest = self.highest();
        on_sides(pieces, |pieces| {
            let pieces = multiplied(&before, &pieces, highest, span)?;
            multiplied(&pieces, &behind, highest, span)
        })
    }

    /// The mean of a combination. Of a written equation the mean is taken as it is
    /// written, so that derivatives stand outside.
    fn combined_mean(&mut self, expr: &ast::Expr) -> Combined {
        let model = self.model;
        match &expr.kind {
            ExprKind::Bracket(inside) => self.combined_mean(inside),
            ExprKind::Negate(inside) => Ok(negated(self.combined_mean(inside)?)),
            ExprKind::Sum(terms) => {
                let mut sum = Vec::new();
                for (sign, term) in terms {
                    let pieces = self.combined_mean(term)?;
                    sum.extend(match sign {
                        Sign::Plus => pieces,
                        Sign::Minus => negated(pieces),
                    });
                }
                Ok(sum)
            }
            ExprKind::Name(name) => match model.equation(name).map(|idx| &model.equations[idx]) {
                Some(ast::EquationDecl {
                    body: EquationBody::Written { left, right },
                    using,
                    ..
                }) if using.is_empty() => {
                    self.named_equation(name, expr.span)?;
                    let mut sided = Vec::new();
                    for (side, expr) in [(Side::Left, left), (Side::Right, right)] {
                        let pieces = self.mean(expr)?;
                        sided.extend(pieces.into_iter().map(|piece| (side, piece)));
                    }
                    Ok(sided)
                }
                Some(_) | None => self.mean_of_combined(expr),
            },
            ExprKind::Number(_)
            | ExprKind::Process { .. }
            | ExprKind::Product(_)
            | ExprKind::Power { .. }
            | ExprKind::Call { .. }
            | ExprKind::Derivative { .. }
            | ExprKind::Tuple(_)
            | ExprKind::Sized { .. }
            | ExprKind::As { .. }
            | ExprKind::Error => self.mean_of_combined(expr),
        }
    }

    fn mean_of_combined(&mut self, expr: &ast::Expr) -> Combined {
        let pieces = self.combined(expr)?;
        on_sides(&pieces, |pieces| {
            self.averaged(&collected(pieces), expr.span)
        })
    }

    // Relations -------------------------------------------------------------------------------

    fn with_relations(&mut self, pieces: Vec<Sided>, decl: &ast::EquationDecl) -> Combined {
        let mut pieces = pieces;
        for name in &decl.using {
            let Some(relation) = self.relation(name)? else {
                continue;
            };
            let mut is_used = false;
            pieces = on_sides(&pieces, |pieces| {
                let mut found = Vec::with_capacity(pieces.len());
                for piece in pieces {
                    match self.replaced(&piece.product, &relation, name.span)? {
                        Some(inside) => {
                            is_used = true;
                            found.extend(inside.into_iter().map(|new| Piece {
                                degree: new.degree + piece.degree,
                                splits: new.splits.and(&piece.splits),
                                ..new
                            }));
                        }
                        None => found.push(piece),
                    }
                }
                Ok(found)
            })?;
            if pieces.len() > limits::TERMS {
                return Err(ModelError::TooLarge { span: name.span });
            }
            pieces = gathered(pieces);
            let left = self.speller().product(&relation.left);
            self.made.put_in.push(PutIn {
                name: name.clone(),
                left,
                is_used,
            });
        }
        Ok(pieces)
    }

    /// An equation as a relation; none if an error was reported for it.
    fn relation(&mut self, name: &ast::Name) -> Result<Option<Relation>, ModelError> {
        let Some(idx) = self.model.equation(&name.text) else {
            return Ok(None);
        };
        let own = std::mem::take(&mut self.made.process_names);
        let source = self.take(idx);
        self.made.process_names = own;
        let Some(source) = source else {
            return Ok(None);
        };
        let side = |wanted: Side| {
            let pieces = source.pieces.iter();
            let own = pieces.filter(move |(side, _)| *side == wanted);
            own.map(|(_, piece)| piece.clone()).collect::<Vec<Piece>>()
        };
        let left = collected(side(Side::Left));
        let [single] = left.as_slice() else {
            return Err(match left.is_empty() {
                true => no_relation(name.span),
                false => self.no_single_left(&self.model.equations[idx]),
            });
        };
        if single.product.factors.is_empty() {
            return Err(no_relation(name.span));
        }
        let relation = self.solved(single, side(Side::Right), name.span)?;
        for piece in &relation.right {
            self.mention(piece);
            if self
                .replaced(&piece.product, &relation, name.span)?
                .is_some()
            {
                return Err(ModelError::HoldsItself {
                    relation: name.text.clone(),
                    span: self.model.equations[idx].name.span,
                });
            }
        }
        Ok(Some(relation))
    }

    /// Why the left side of a relation is no single product.
    fn no_single_left(&self, decl: &ast::EquationDecl) -> ModelError {
        let mut split = None;
        if let EquationBody::Written { left, .. } = &decl.body {
            names::visit_names(left, &mut |name, _| {
                if let Some(Meaning::Field(id)) = self.model.meaning(name, None)
                    && !self.model.fields[id.0 as usize].parts.is_empty()
                {
                    split.get_or_insert((id, left.span));
                }
            });
        }
        let Some((id, span)) = split else {
            return ModelError::NotAProduct {
                span: decl.name.span,
                what: Wanted::Using,
            };
        };
        let field = &self.model.fields[id.0 as usize];
        let parts = field.parts.iter();
        ModelError::SplitOnTheLeft {
            relation: decl.name.text.clone(),
            field: field.name.text.clone(),
            parts: parts.map(|(_, part)| part.text.clone()).collect(),
            span,
            declared: field.name.span,
        }
    }

    fn mention(&mut self, piece: &Piece) {
        if let Some(tag) = &piece.tag
            && !self.made.process_names.contains(&tag.name)
        {
            self.made.process_names.push(tag.name.clone());
        }
    }

    /// The left side with the number 1.
    fn solved(&self, left: &Piece, right: Vec<Piece>, span: Span) -> Result<Relation, ModelError> {
        let too_large = |_| ModelError::TooLarge { span };
        let number = left.product.number.power(Exponent::ONE.negated());
        let number = Product::number(number.map_err(too_large)?);
        let right = right.iter().map(|piece| {
            let product = piece.product.times(&number).map_err(too_large)?;
            Ok(piece.with_product(product))
        });
        Ok(Relation {
            left: Product {
                number: Number::one(),
                factors: left.product.factors.clone(),
            },
            right: right.collect::<Result<_, ModelError>>()?,
        })
    }

    /// A product with a relation put in wherever its left side occurs, once; none if it
    /// occurs nowhere.
    fn replaced(
        &mut self,
        product: &Product,
        relation: &Relation,
        span: Span,
    ) -> Result<Option<Vec<Piece>>, ModelError> {
        let times = occurrences(product, &relation.left);
        let mut is_replaced = times > 0;
        let too_large = |_| ModelError::TooLarge { span };
        let mut rest = product.clone();
        let mut inside = Vec::new();
        if times > 0 {
            let times = Exponent::whole(times).map_err(too_large)?;
            let taken = spelt_as_in(product, &relation.left);
            let taken = taken.power(times.negated()).map_err(too_large)?;
            rest = rest.times(&taken).map_err(too_large)?;
            inside = self.power(relation.right.clone(), times, span)?;
        }
        let mut found = vec![Piece::plain(Product::number(product.number.clone()))];
        let mut is_in = times == 0;
        for factor in &product.factors {
            // What comes in stands where the first factor of the left side stood.
            if !is_in && holds(&relation.left, &factor.base) {
                is_in = true;
                found = multiplied(&found, &inside, self.highest(), span)?;
            }
            let Some(left) = rest.factors.iter().find(|left| left.base == factor.base) else {
                continue;
            };
            let next = match self.replaced_factor(left, relation, span)? {
                Some(pieces) => {
                    is_replaced = true;
                    pieces
                }
                None => vec![Piece::plain(as_product(std::slice::from_ref(left)))],
            };
            found = multiplied(&found, &next, self.highest(), span)?;
        }
        Ok(is_replaced.then_some(found))
    }

    fn replaced_factor(
        &mut self,
        factor: &Factor,
        relation: &Relation,
        span: Span,
    ) -> Result<Option<Vec<Piece>>, ModelError> {
        let inside = match &factor.base {
            Base::Derivative(derivative) => self.replaced_derivative(derivative, relation, span)?,
            Base::Mean(inside) => {
                let product = as_product(inside);
                match self.replaced(&product, relation, span)? {
                    Some(pieces) => Some(self.averaged(&pieces, span)?),
                    None => None,
                }
            }
            Base::Absolute(inside) => {
                let product = as_product(inside);
                match self.replaced(&product, relation, span)? {
                    Some(pieces) => Some(self.amount(pieces, span)?),
                    None => None,
                }
            }
            Base::Symbol(_)
            | Base::Coordinate(_)
            | Base::Field(_)
            | Base::Sized(_)
            | Base::Function(_) => None,
        };
        match inside {
            Some(pieces) => Ok(Some(self.power(pieces, factor.power, span)?)),
            None => Ok(None),
        }
    }

    /// A derivative of the left side, or one whose inside holds it.
    fn replaced_derivative(
        &mut self,
        derivative: &Derivative,
        relation: &Relation,
        span: Span,
    ) -> Result<Option<Vec<Piece>>, ModelError> {
        let (mut pieces, by) = match further(derivative, &relation.left) {
            Some(by) => (relation.right.clone(), by),
            None => {
                let inside = as_product(&derivative.operand);
                match self.replaced(&inside, relation, span)? {
                    Some(pieces) => (pieces, derivative.by.clone()),
                    None => return Ok(None),
                }
            }
        };
        for (along, order) in by {
            pieces = self.differentiated(&pieces, along, order, span)?;
        }
        Ok(Some(pieces))
    }
}

/// Pieces whose tangents are sines over cosines.
fn sines(pieces: Vec<Piece>, span: Span) -> Pieces {
    let plain = |piece: Piece| {
        let product = without_tangents(&piece.product);
        let product = product.map_err(|_| ModelError::TooLarge { span })?;
        Ok(piece.with_product(product))
    };
    pieces.into_iter().map(plain).collect()
}

fn as_product(factors: &[Factor]) -> Product {
    Product {
        number: Number::one(),
        factors: factors.to_vec(),
    }
}

fn are_like(a: &Base, b: &Base) -> bool {
    Product::base(a.clone()).is_like(&Product::base(b.clone()))
}

fn holds(product: &Product, base: &Base) -> bool {
    product
        .factors
        .iter()
        .any(|factor| are_like(&factor.base, base))
}

/// The left side of a relation with each base as a product has it: `d_x(d_y(u))` may be
/// `d_y(d_x(u))` there.
fn spelt_as_in(product: &Product, left: &Product) -> Product {
    let spelt = |factor: &Factor| {
        let own = product.factors.iter();
        let mut like = own.filter(|own| are_like(&own.base, &factor.base));
        Factor {
            base: like.next().unwrap_or(factor).base.clone(),
            power: factor.power,
        }
    };
    Product {
        number: left.number.clone(),
        factors: left.factors.iter().map(spelt).collect(),
    }
}

/// How many times the left side of a relation stands in a product.
fn occurrences(product: &Product, left: &Product) -> i64 {
    let own = product.likeness();
    let mut times: Option<i64> = None;
    for factor in left.likeness() {
        let Some(found) = own.iter().find(|found| found.base == factor.base) else {
            return 0;
        };
        if found.power.is_negative() != factor.power.is_negative() {
            return 0;
        }
        let ratio = found.power.to_f64() / factor.power.to_f64();
        // Powers are small rationals, so the quotient of two of them is exact enough to
        // tell its whole part.
        let whole = (ratio + 1e-9).floor() as i64;
        times = Some(times.map_or(whole, |least| least.min(whole)));
    }
    times.unwrap_or(0)
}

/// The coordinates along which the left side, a single derivative, is differentiated
/// further.
fn further(derivative: &Derivative, left: &Product) -> Option<Vec<(CoordinateId, u32)>> {
    let [
        Factor {
            base: Base::Derivative(wanted),
            power,
        },
    ] = left.factors.as_slice()
    else {
        return None;
    };
    let is_like = as_product(&derivative.operand).is_like(&as_product(&wanted.operand));
    if *power != Exponent::ONE || !is_like {
        return None;
    }
    let mut by = derivative.by.clone();
    for (along, order) in &wanted.by {
        let (_, present) = by.iter_mut().find(|(found, _)| found == along)?;
        *present = present.checked_sub(*order)?;
    }
    by.retain(|(_, order)| *order > 0);
    Some(by)
}

fn negated(pieces: Vec<Sided>) -> Vec<Sided> {
    pieces
        .iter()
        .map(|(side, piece)| (*side, piece.negated()))
        .collect()
}

/// The same done with each side.
fn on_sides(pieces: &[Sided], mut change: impl FnMut(Vec<Piece>) -> Pieces) -> Combined {
    let mut found = Vec::with_capacity(pieces.len());
    for side in [Side::Left, Side::Right] {
        let own = pieces.iter().filter(|(own, _)| *own == side);
        let own = own.map(|(_, piece)| piece.clone()).collect();
        found.extend(change(own)?.into_iter().map(|piece| (side, piece)));
    }
    Ok(found)
}

fn no_combination(span: Span) -> ModelError {
    ModelError::NotARelation {
        span,
        what: WantedRelation::Combination,
    }
}

fn no_relation(span: Span) -> ModelError {
    ModelError::NotARelation {
        span,
        what: WantedRelation::Using,
    }
}
