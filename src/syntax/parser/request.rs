//! Requests. Each function is the production of that name in the grammar.

use chumsky::prelude::*;
use num_rational::BigRational;
use num_traits::{One, Zero};

use crate::syntax::ast::{
    Axis, Claim, ClaimWord, FindCondition, LimitPlace, Name, Number, Relation, Request, RequestKind,
};
use crate::syntax::parser::expression::Expressions;
use crate::syntax::parser::literal::{bare_number, proportion, unit};
use crate::syntax::parser::rule::{
    Extra, Fault, FaultKind, Input, Rule, end_of_statement, name, names, opt_names, span_of, text,
    token, word,
};
use crate::syntax::token::Kind;

type Kinds<'t, 's> = Boxed<'t, 't, Input<'t, 's>, RequestKind, Extra>;

/// Any request.
pub(super) fn request<'t, 's: 't>(
    parts: &Expressions<'t, 's>,
) -> Boxed<'t, 't, Input<'t, 's>, Request, Extra> {
    let for_all = answer(parts).then(opt_for());
    let for_one = limit(parts).or(expand()).then(opt_for_one());
    let alone = compare().map(|kind| (kind, Vec::new()));
    choice((for_all, for_one, alone))
        .then_ignore(end_of_statement())
        .map_with(|(kind, phenomena), extra| Request {
            kind,
            phenomena,
            span: span_of(extra),
        })
        .boxed()
}

/// `for A, B`.
fn opt_for<'t, 's: 't>() -> impl Rule<'t, 's, Vec<Name>> {
    let phenomena = token(Kind::For).ignore_then(names());
    phenomena.or_not().map(Option::unwrap_or_default)
}

/// `for A`.
fn opt_for_one<'t, 's: 't>() -> impl Rule<'t, 's, Vec<Name>> {
    let phenomenon = token(Kind::For).ignore_then(name());
    phenomenon.or_not().map(|name| name.into_iter().collect())
}

fn answer<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Kinds<'t, 's> {
    choice((
        show(parts),
        rank(),
        nondimensionalize(parts),
        reduce(),
        bounds(),
        find(parts),
        token(Kind::Layers).map(|_| RequestKind::Layers).boxed(),
        token(Kind::Groups).map(|_| RequestKind::Groups).boxed(),
        sweep(parts),
        regimes(parts),
        claim(parts),
    ))
    .boxed()
}

fn show<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Kinds<'t, 's> {
    let unit = token(Kind::In).ignore_then(unit());
    token(Kind::Show)
        .ignore_then(parts.expression.clone())
        .then(unit.or_not())
        .map(|(expr, unit)| RequestKind::Show { expr, unit })
        .boxed()
}

fn rank<'t, 's: 't>() -> Kinds<'t, 's> {
    token(Kind::Rank)
        .ignore_then(opt_names())
        .map(|equations| RequestKind::Rank { equations })
        .boxed()
}

fn nondimensionalize<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Kinds<'t, 's> {
    let by = token(Kind::By).ignore_then(parts.process.clone());
    token(Kind::Nondimensionalize)
        .ignore_then(opt_names())
        .then(by.or_not())
        .map(|(equations, by)| RequestKind::Nondimensionalize { equations, by })
        .boxed()
}

fn reduce<'t, 's: 't>() -> Kinds<'t, 's> {
    let within = token(Kind::Within).ignore_then(proportion());
    let save = token(Kind::Save).ignore_then(text());
    token(Kind::Reduce)
        .ignore_then(opt_names())
        .then(within.or_not())
        .then(save.or_not())
        .map(|((equations, within), save)| RequestKind::Reduce {
            equations,
            within,
            save,
        })
        .boxed()
}

fn bounds<'t, 's: 't>() -> Kinds<'t, 's> {
    token(Kind::Bounds)
        .ignore_then(opt_names())
        .map(|symbols| RequestKind::Bounds { symbols })
        .boxed()
}

fn find<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Kinds<'t, 's> {
    let condition = name()
        .then_ignore(token(Kind::Colon))
        .then(parts.process.clone())
        .then_ignore(token(Kind::Tilde))
        .then(parts.process.clone())
        .map(|((equation, left), right)| FindCondition {
            equation,
            left,
            right,
        });
    let conditions = token(Kind::Where).ignore_then(
        condition
            .separated_by(token(Kind::Comma))
            .at_least(1)
            .collect::<Vec<_>>(),
    );
    token(Kind::Find)
        .ignore_then(names())
        .then(conditions.or_not().map(Option::unwrap_or_default))
        .map(|(unknowns, conditions)| RequestKind::Find {
            unknowns,
            conditions,
        })
        .boxed()
}

fn axis<'t, 's: 't>(parts: &Expressions<'t, 's>) -> impl Rule<'t, 's, Axis> {
    name()
        .then_ignore(token(Kind::From))
        .then(parts.expression.clone())
        .then_ignore(token(Kind::To))
        .then(parts.expression.clone())
        .map(|((scale, from), to)| Axis { scale, from, to })
}

fn sweep<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Kinds<'t, 's> {
    token(Kind::Sweep)
        .ignore_then(axis(parts))
        .map(RequestKind::Sweep)
        .boxed()
}

fn regimes<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Kinds<'t, 's> {
    token(Kind::Regimes)
        .ignore_then(axis(parts))
        .then_ignore(token(Kind::Comma))
        .then(axis(parts))
        .map(|(across, up)| RequestKind::Regimes(Box::new(across), Box::new(up)))
        .boxed()
}

fn limit<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Kinds<'t, 's> {
    let others = word("others")
        .then_ignore(token(Kind::Tilde))
        .then_ignore(only_number(1))
        .map_with(|_, extra| LimitPlace::Others(span_of(extra)));
    let placed = parts
        .product
        .clone()
        .then_ignore(token(Kind::Tilde))
        .then(parts.product.clone())
        .map(|(group, place)| LimitPlace::Group(group, place));
    let places = token(Kind::With).ignore_then(
        others
            .or(placed)
            .separated_by(token(Kind::Comma))
            .at_least(1)
            .collect::<Vec<_>>(),
    );
    token(Kind::Limit)
        .ignore_then(parts.product.clone())
        .then_ignore(token(Kind::Arrow))
        .then_ignore(only_number(0))
        .then(places.or_not().map(Option::unwrap_or_default))
        .map(|(small, places)| RequestKind::Limit { small, places })
        .boxed()
}

/// A number that can only be this one.
fn only_number<'t, 's: 't>(only: u8) -> impl Rule<'t, 's, ()> {
    bare_number().validate(move |number, extra, emitter| {
        if number.value != BigRational::from_integer(only.into()) {
            emitter.emit(Fault::over(extra.span(), FaultKind::OnlyNumber(only)));
        }
    })
}

fn expand<'t, 's: 't>() -> Kinds<'t, 's> {
    let over = token(Kind::Slash).ignore_then(bare_number());
    let order = bare_number()
        .then(over.or_not())
        .validate(|(number, over), extra, emitter| {
            quotient(&number, over.as_ref()).unwrap_or_else(|| {
                emitter.emit(Fault::over(extra.span(), FaultKind::TooLarge));
                BigRational::zero()
            })
        });
    token(Kind::Expand)
        .ignore_then(opt_names())
        .then_ignore(token(Kind::To))
        .then_ignore(word("order"))
        .then(order)
        .map(|(equations, order)| RequestKind::Expand { equations, order })
        .boxed()
}

/// The quotient; `None` if it divides by 0.
fn quotient(number: &Number, over: Option<&Number>) -> Option<BigRational> {
    let denominator = over.map_or_else(BigRational::one, |over| over.value.clone());
    (!denominator.is_zero()).then(|| &number.value / denominator)
}

fn compare<'t, 's: 't>() -> Kinds<'t, 's> {
    let matching = token(Kind::Matching).ignore_then(names());
    token(Kind::Compare)
        .ignore_then(names())
        .then(matching.or_not())
        .map(|(phenomena, matching)| RequestKind::Compare {
            phenomena,
            matching,
        })
        .boxed()
}

fn claim<'t, 's: 't>(parts: &Expressions<'t, 's>) -> Kinds<'t, 's> {
    token(Kind::Claim)
        .ignore_then(verdict(parts).or(relation_claim(parts)))
        .map(RequestKind::Claim)
        .boxed()
}

/// `leading EQ = P, Q`; the word counts only before a name and `=`.
fn verdict<'t, 's: 't>(parts: &Expressions<'t, 's>) -> impl Rule<'t, 's, Claim> {
    let claim_word = choice((
        word("leading").to(ClaimWord::Leading),
        word("kept").to(ClaimWord::Kept),
        word("dropped").to(ClaimWord::Dropped),
    ));
    let processes = parts
        .process
        .clone()
        .separated_by(token(Kind::Comma))
        .at_least(1)
        .collect();
    claim_word
        .then(name())
        .then_ignore(token(Kind::Equals))
        .then(processes)
        .map(|((word, equation), processes)| Claim::Verdict {
            word,
            equation,
            processes,
        })
}

fn relation_claim<'t, 's: 't>(parts: &Expressions<'t, 's>) -> impl Rule<'t, 's, Claim> {
    let within = token(Kind::Within).ignore_then(proportion());
    parts
        .expression
        .clone()
        .then(relation())
        .then(parts.expression.clone())
        .then(within.or_not())
        .map(|(((left, relation), right), within)| Claim::Relation {
            left,
            relation,
            right,
            within,
        })
}

fn relation<'t, 's: 't>() -> impl Rule<'t, 's, Relation> {
    choice((
        token(Kind::MuchLess).to(Relation::MuchLess),
        token(Kind::MuchGreater).to(Relation::MuchGreater),
        token(Kind::Tilde).to(Relation::Similar),
        token(Kind::Less).to(Relation::Less),
        token(Kind::Greater).to(Relation::Greater),
        token(Kind::Equals).to(Relation::Equal),
    ))
}
