//! Declarations. Each function is the production of that name in the grammar.
//!
//! Behind the names that it declares a declaration is read to its end or passed over: a
//! fault there leaves an `Error` node in its place, and the names stay declared.

use chumsky::prelude::*;

use crate::source::Span;
use crate::syntax::ast::{
    BalanceDecl, BalancePart, CoordinateDecl, Dependence, EquationBody, EquationDecl, Expr,
    ExprKind, FieldDecl, FrameDecl, FrameKind, GroupDecl, Name, Notes, Sign, SplitDecl, Spread,
    StatementKind, Text, ToleranceDecl, Use, Value, ValueDecl, ValueKind, VectorDecl, VelocityDecl,
};
use crate::syntax::parser::expression::{Expressions, sign, spanned};
use crate::syntax::parser::literal::{proportion, unit};
use crate::syntax::parser::rule::{
    Extra, Input, Rule, end_of_statement, followed_by, name, names, notes, opt_rest, opt_source,
    opt_title, skip_to, span_of, text, token, word,
};
use crate::syntax::token::Kind;

type Statement<'t, 's> = Boxed<'t, 't, Input<'t, 's>, StatementKind, Extra>;

/// Any declaration but a phenomenon.
pub(super) fn declaration<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Statement<'t, 's> {
    choice((
        value_decl(parts, Kind::Scale, ValueKind::Scale),
        value_decl(parts, Kind::Constant, ValueKind::Constant),
        coordinate(parts),
        field(parts),
        fluctuation(parts),
        equation(parts),
        group(parts),
        tolerance(),
        balance(parts),
        velocity(),
        vector(parts),
        frame(),
        use_module(),
    ))
    .boxed()
}

/// The head of a phenomenon, up to its opening brace.
pub(super) fn phenomenon_head<'t, 's: 't>() -> impl Rule<'t, 's, (Name, Notes)> {
    token(Kind::Phenomenon)
        .ignore_then(name())
        .then(opt_rest(notes().then_ignore(token(Kind::LeftBrace))))
        .map(|(name, notes)| (name, notes.unwrap_or_default()))
}

fn use_module<'t, 's: 't>() -> Statement<'t, 's> {
    let module = name()
        .separated_by(token(Kind::Dot))
        .at_least(1)
        .collect::<Vec<_>>()
        .map_with(|parts, extra| {
            let parts: Vec<String> = parts.into_iter().map(|part| part.text).collect();
            Use::Module(Name {
                text: parts.join("."),
                span: span_of(extra),
            })
        });
    token(Kind::Use)
        .ignore_then(module.or(text().map(Use::File)))
        .then_ignore(end_of_statement())
        .map(StatementKind::Use)
        .boxed()
}

/// `scale ...` and `constant ...`.
fn value_decl<'t, 's: 't>(
    parts: &Expressions<'t, 's>,
    keyword: Kind,
    kind: ValueKind,
) -> Statement<'t, 's> {
    let open = token(Kind::In).ignore_then(unit()).map(Value::Open);
    token(keyword)
        .ignore_then(name())
        .then(opt_rest(value(parts).or(open).then(notes())))
        .map_with(move |(name, rest), extra| {
            let (value, notes) = rest.unwrap_or_else(|| {
                let nominal = error(span_of(extra));
                let spread = Spread::None;
                (Value::Given { nominal, spread }, Notes::default())
            });
            StatementKind::Value(ValueDecl {
                kind,
                name,
                value,
                notes,
            })
        })
        .boxed()
}

fn value<'t, 's: 't>(parts: &Expressions<'t, 's>) -> impl Rule<'t, 's, Value> {
    let expression = parts.expression.clone();
    let end = token(Kind::Range).ignore_then(expression.clone());
    let margin = token(Kind::PlusMinus).ignore_then(expression.clone());
    let within = token(Kind::Within).ignore_then(proportion());
    token(Kind::Equals)
        .ignore_then(expression)
        .then(choice((
            end.map(Spread::To),
            margin.map(Spread::Margin),
            within.map(Spread::Within),
            empty().map(|()| Spread::None),
        )))
        .map(|(nominal, spread)| Value::Given { nominal, spread })
}

fn coordinate<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Statement<'t, 's> {
    let about = token(Kind::About).ignore_then(parts.expression.clone());
    let rest = token(Kind::Tilde)
        .ignore_then(parts.size.clone())
        .then(about.or_not())
        .then(notes());
    token(Kind::Coordinate)
        .ignore_then(names())
        .then(opt_rest(rest))
        .map_with(|(names, rest), extra| {
            let ((size, about), notes) =
                rest.unwrap_or_else(|| ((error(span_of(extra)), None), Notes::default()));
            StatementKind::Coordinate(CoordinateDecl {
                names,
                size,
                about,
                notes,
            })
        })
        .boxed()
}

fn frame<'t, 's: 't>() -> Statement<'t, 's> {
    let kind = choice((
        word("cartesian").to(FrameKind::Cartesian),
        word("cylindrical").to(FrameKind::Cylindrical),
        word("spherical").to(FrameKind::Spherical),
    ));
    let coordinates = name()
        .separated_by(token(Kind::Comma))
        .exactly(3)
        .collect()
        .delimited_by(token(Kind::LeftBracket), token(Kind::RightBracket));
    token(Kind::Frame)
        .ignore_then(kind)
        .then(coordinates)
        .then(notes())
        .then_ignore(end_of_statement())
        .map(|((kind, coordinates), notes)| {
            StatementKind::Frame(FrameDecl {
                kind,
                coordinates,
                notes,
            })
        })
        .boxed()
}

fn vector<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Statement<'t, 's> {
    let components = parts
        .expression
        .clone()
        .separated_by(token(Kind::Comma))
        .at_least(2)
        .collect()
        .delimited_by(token(Kind::LeftBracket), token(Kind::RightBracket));
    let tuple = components.map_with(|parts, extra| spanned(ExprKind::Tuple(parts), span_of(extra)));
    token(Kind::Vector)
        .ignore_then(name())
        .then(opt_rest(
            token(Kind::Equals).ignore_then(tuple).then(notes()),
        ))
        .map_with(|(name, rest), extra| {
            let (value, notes) = rest.unwrap_or_else(|| (error(span_of(extra)), Notes::default()));
            StatementKind::Vector(VectorDecl { name, value, notes })
        })
        .boxed()
}

/// What stands behind the names of a field.
type Sized = (((Vec<Dependence>, Expr), Option<Expr>), Notes);

fn field<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Statement<'t, 's> {
    let split = token(Kind::Field)
        .ignore_then(name())
        .then_ignore(token(Kind::Equals).rewind())
        .then(opt_rest(split()))
        .map_with(|(name, rest), extra| match rest {
            Some((parts, notes)) => StatementKind::Split(SplitDecl { name, parts, notes }),
            None => field_decl(false, vec![name], None, span_of(extra)),
        });
    let sized = token(Kind::Field)
        .ignore_then(names())
        .then(opt_rest(sized(parts)))
        .map_with(|(names, rest), extra| field_decl(false, names, rest, span_of(extra)));
    split.or(sized).boxed()
}

fn fluctuation<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Statement<'t, 's> {
    token(Kind::Fluctuation)
        .ignore_then(names())
        .then(opt_rest(sized(parts)))
        .map_with(|(names, rest), extra| field_decl(true, names, rest, span_of(extra)))
        .boxed()
}

fn field_decl(
    is_fluctuation: bool,
    names: Vec<Name>,
    rest: Option<Sized>,
    span: Span,
) -> StatementKind {
    let (((coordinates, size), varying), notes) =
        rest.unwrap_or_else(|| (((Vec::new(), error(span)), None), Notes::default()));
    StatementKind::Field(FieldDecl {
        is_fluctuation,
        names,
        coordinates,
        size,
        varying,
        notes,
    })
}

/// `(x, z ~ H) ~ U varying dU "title"`.
fn sized<'t, 's: 't>(parts: &Expressions<'t, 's>) -> impl Rule<'t, 's, Sized> {
    let varying = token(Kind::Varying).ignore_then(parts.size.clone());
    coordinates(parts)
        .then_ignore(token(Kind::Tilde))
        .then(parts.size.clone())
        .then(varying.or_not())
        .then(notes())
}

fn coordinates<'t, 's: 't>(parts: &Expressions<'t, 's>) -> impl Rule<'t, 's, Vec<Dependence>> {
    let length = token(Kind::Tilde).ignore_then(parts.size.clone());
    let varying = token(Kind::Varying).ignore_then(parts.size.clone());
    let dependence = name().then(length.or_not()).then(varying.or_not()).map(
        |((coordinate, length), varying)| Dependence {
            coordinate,
            length,
            varying,
        },
    );
    dependence
        .separated_by(token(Kind::Comma))
        .at_least(1)
        .collect()
        .delimited_by(token(Kind::LeftBracket), token(Kind::RightBracket))
        .or_not()
        .map(Option::unwrap_or_default)
}

/// `= p_0 + p'`.
fn split<'t, 's: 't>() -> impl Rule<'t, 's, (Vec<(Sign, Name)>, Notes)> {
    let more = sign()
        .then(name())
        .repeated()
        .at_least(1)
        .collect::<Vec<_>>();
    token(Kind::Equals)
        .ignore_then(name())
        .then(more)
        .then(notes())
        .map(|((first, more), notes)| {
            let parts = std::iter::once((Sign::Plus, first)).chain(more);
            (parts.collect(), notes)
        })
}

fn velocity<'t, 's: 't>() -> Statement<'t, 's> {
    let bracket = names().delimited_by(token(Kind::LeftBracket), token(Kind::RightBracket));
    let components = bracket
        .clone()
        .then_ignore(token(Kind::Along))
        .then(bracket)
        .then(notes())
        .map(|((fields, coordinates), notes)| VelocityDecl::Components {
            fields,
            coordinates,
            notes,
        });
    let vector = name()
        .then(notes())
        .map(|(name, notes)| VelocityDecl::Vector { name, notes });
    token(Kind::Velocity)
        .ignore_then(components.or(vector))
        .then_ignore(end_of_statement())
        .map(StatementKind::Velocity)
        .boxed()
}

type EquationRest = ((EquationBody, Vec<Name>), Option<Text>);

fn equation<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Statement<'t, 's> {
    let using = token(Kind::Using).ignore_then(names());
    let rest = written(parts)
        .or(made(parts))
        .then(using.or_not().map(Option::unwrap_or_default))
        .then(opt_source());
    token(Kind::Equation)
        .ignore_then(name())
        .then(opt_title())
        .then(opt_rest(rest))
        .map_with(|((name, title), rest), extra| {
            let ((body, using), source): EquationRest = rest.unwrap_or_else(|| {
                let body = EquationBody::Made(error(span_of(extra)));
                ((body, Vec::new()), None)
            });
            StatementKind::Equation(EquationDecl {
                name,
                title,
                body,
                using,
                source,
            })
        })
        .boxed()
}

/// `: left = right`. A fault in one side passes over this side alone.
fn written<'t, 's: 't>(parts: &Expressions<'t, 's>) -> impl Rule<'t, 's, EquationBody> {
    let left = side(parts, &[Kind::Equals], false);
    let right = side(parts, &[Kind::Using, Kind::From], true);
    token(Kind::Colon)
        .ignore_then(left)
        .then_ignore(token(Kind::Equals))
        .then(right)
        .map(|(left, right)| EquationBody::Written { left, right })
}

/// A side of an equation, with what may stand behind it.
fn side<'t, 's: 't>(
    parts: &Expressions<'t, 's>,
    ends: &'static [Kind],
    may_be_last: bool,
) -> impl Rule<'t, 's, Expr> {
    parts
        .expression
        .clone()
        .then_ignore(followed_by(ends, may_be_last))
        .recover_with(via_parser(
            skip_to(ends, may_be_last).map_with(|(), extra| error(span_of(extra))),
        ))
}

/// `from d_x(y_momentum)`.
fn made<'t, 's: 't>(parts: &Expressions<'t, 's>) -> impl Rule<'t, 's, EquationBody> {
    token(Kind::From)
        .ignore_then(parts.expression.clone())
        .map(EquationBody::Made)
}

fn group<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Statement<'t, 's> {
    let rest = token(Kind::Equals)
        .ignore_then(parts.expression.clone())
        .then(notes());
    token(Kind::Group)
        .ignore_then(name())
        .then(opt_rest(rest))
        .map_with(|(name, rest), extra| {
            let (value, notes) = rest.unwrap_or_else(|| (error(span_of(extra)), Notes::default()));
            StatementKind::Group(GroupDecl { name, value, notes })
        })
        .boxed()
}

fn balance<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Statement<'t, 's> {
    let processes = parts
        .process
        .clone()
        .separated_by(token(Kind::Comma))
        .at_least(1)
        .collect()
        .delimited_by(token(Kind::LeftBrace), token(Kind::RightBrace));
    let part = name()
        .then(processes)
        .map(|(equation, processes)| BalancePart {
            equation,
            processes,
        });
    token(Kind::Balance)
        .ignore_then(name())
        .then(opt_title())
        .then_ignore(token(Kind::Colon))
        .then(part.repeated().at_least(1).collect())
        .then(opt_source())
        .then_ignore(end_of_statement())
        .map(|(((name, title), parts), source)| {
            StatementKind::Balance(BalanceDecl {
                name,
                title,
                parts,
                source,
            })
        })
        .boxed()
}

fn tolerance<'t, 's: 't>() -> Statement<'t, 's> {
    token(Kind::Tolerance)
        .ignore_then(proportion())
        .then(notes())
        .then_ignore(end_of_statement())
        .map(|(value, notes)| StatementKind::Tolerance(ToleranceDecl { value, notes }))
        .boxed()
}

fn error(span: Span) -> Expr {
    spanned(ExprKind::Error, span)
}
