//! Equations as a system of the polyhedral core: logarithms of all that is known, ranges
//! as bounded unknowns, near ties, and what one `D_t` makes of its two parts.

use num_rational::BigRational;
use num_traits::{FromPrimitive, ToPrimitive, Zero};

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::algebra::product::{Base, Factor, Sized};
use crate::analysis::balances::powers::Powers;
use crate::analysis::sizes::same;
use crate::model::settings::{Setting, Variable};
use crate::model::terms::EquationTerms;
use crate::number::{Exponent, Number, TooLarge};
use crate::polyhedra::prevariety::{Equation, LinearForm, System, Term};

/// The grid of logarithms: exact sums of rounded ones keep exact products exact.
const GRID: f64 = (1_u64 << 48) as f64;

/// What is asked: which equations take part, and what is unknown in them.
pub(crate) struct Query<'c> {
    /// The setting.
    pub(crate) setting: &'c Setting,
    /// The unknowns.
    pub(crate) unknowns: Vec<SymbolId>,
    /// The equations, each of which holds an unknown.
    pub(crate) entries: Vec<Entry<'c>>,
    /// Products of unknowns and known scales that must be at least 1.
    pub(crate) at_least_one: Vec<Monomial>,
    /// How known scales compare: by their values, or as powers of a small parameter.
    pub(crate) powers: Option<Powers>,
}

/// An equation that takes part.
pub(crate) struct Entry<'c> {
    /// The equation.
    pub(crate) equation: &'c EquationTerms,
    /// The size of each term.
    pub(crate) sizes: Vec<Monomial>,
    /// Processes that must be among the largest.
    pub(crate) required: Vec<String>,
    /// If there are any, one of these terms must be among the largest.
    pub(crate) leaders: Vec<usize>,
}

/// Where an equation of the system comes from.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) enum Origin {
    /// One that takes part, by its place.
    Entry(usize),
    /// The condition that an expression with a size of its own exceeds none of its
    /// largest parts, in this term of this entry; its own size is the last term.
    Parts(usize, usize),
    /// The condition that one of some terms of an entry is among the largest.
    Leaders(usize),
}

impl Origin {
    /// The entry that it belongs to.
    pub(crate) fn entry(self) -> usize {
        match self {
            Origin::Entry(entry) | Origin::Parts(entry, _) | Origin::Leaders(entry) => entry,
        }
    }
}

/// A query made ready for the core.
pub(crate) struct Prepared {
    /// The system; its equations begin with the entries, in order.
    pub(crate) system: System,
    /// Where each of its equations comes from.
    pub(crate) origins: Vec<Origin>,
    /// For each of its equations the sizes that formulas use: near ties take that of their
    /// leader.
    pub(crate) formulas: Vec<Vec<Monomial>>,
    /// Known scales with a range, unknowns behind the open ones.
    pub(crate) ranged: Vec<Symbol>,
}

impl Prepared {
    /// Makes a query ready.
    pub(crate) fn new(query: &Query<'_>) -> Result<Prepared, TooLarge> {
        let logs = Logs::new(query);
        let mut prepared = Prepared {
            system: System {
                n_unknowns: query.unknowns.len() + logs.ranged.len(),
                equations: Vec::new(),
                within: Vec::new(),
            },
            origins: Vec::new(),
            formulas: Vec::new(),
            ranged: logs.ranged.clone(),
        };
        for (idx, entry) in query.entries.iter().enumerate() {
            let formulas = logs.merged(entry)?;
            let equation = logs.equation(entry, &formulas);
            prepared.put(Origin::Entry(idx), equation, formulas);
        }
        for (idx, entry) in query.entries.iter().enumerate() {
            prepared.conditions(idx, entry, &logs);
        }
        prepared.system.within = logs.within(&query.at_least_one);
        Ok(prepared)
    }

    fn put(&mut self, origin: Origin, equation: Equation, formulas: Vec<Monomial>) {
        self.origins.push(origin);
        self.system.equations.push(equation);
        self.formulas.push(formulas);
    }

    /// Conditions that stand beside the equations, written as equations themselves.
    fn conditions(&mut self, idx: usize, entry: &Entry<'_>, logs: &Logs<'_>) {
        if !entry.leaders.is_empty() {
            let mut equation = logs.equation(entry, &entry.sizes);
            for (place, term) in equation.terms.iter_mut().enumerate() {
                let leads = entry.leaders.contains(&place);
                term.process = if leads { 0 } else { place + 1 };
            }
            equation.required = vec![0];
            self.put(Origin::Leaders(idx), equation, entry.sizes.clone());
        }
        for (place, term) in entry.equation.terms.iter().enumerate() {
            let mut sized: Vec<&Sized> = Vec::new();
            sized_in(&term.product.factors, &mut sized);
            for found in sized {
                if let Some((equation, sizes)) = logs.below_parts(found) {
                    self.put(Origin::Parts(idx, place), equation, sizes);
                }
            }
        }
    }

    /// The bounds of the ranges alone, for asking whether a family covers all of them.
    pub(crate) fn corners(&self) -> impl Iterator<Item = Vec<BigRational>> + '_ {
        let n_open = self.system.n_unknowns - self.ranged.len();
        let ends = move |place: usize| {
            let own = self.system.within.iter().filter(move |form| {
                let mut exponents = form.exponents.iter().enumerate();
                exponents.all(|(at, exponent)| exponent.is_zero() == (at != n_open + place))
            });
            own.map(move |form| -&form.constant / &form.exponents[n_open + place])
        };
        let all: Vec<Vec<BigRational>> = (0..self.ranged.len())
            .map(|place| ends(place).collect())
            .collect();
        let n_corners = 1_usize << all.len();
        (0..n_corners).map(move |corner| {
            let sides = all.iter().enumerate();
            sides
                .map(|(place, ends)| ends[(corner >> place) & 1].clone())
                .collect()
        })
    }
}

fn sized_in<'a>(factors: &'a [Factor], found: &mut Vec<&'a Sized>) {
    for factor in factors {
        match &factor.base {
            Base::Sized(sized) => found.push(sized),
            Base::Derivative(derivative) => sized_in(&derivative.operand, found),
            Base::Absolute(inside) | Base::Mean(inside) => sized_in(inside, found),
            Base::Function(applied) => sized_in(&applied.argument.factors, found),
            Base::Symbol(_) | Base::Coordinate(_) | Base::Field(_) => {}
        }
    }
}

/// Logarithms of the known, linear in the unknown.
pub(crate) struct Logs<'q> {
    query: &'q Query<'q>,
    ranged: Vec<Symbol>,
    known: Vec<(Symbol, BigRational)>,
}

impl<'q> Logs<'q> {
    pub(crate) fn new(query: &'q Query<'q>) -> Logs<'q> {
        let mut logs = Logs {
            query,
            ranged: Vec::new(),
            known: Vec::new(),
        };
        for entry in &query.entries {
            for size in &entry.sizes {
                logs.take_in(size);
            }
            // Only what differs between the terms of one equation moves a balance.
            for size in &entry.sizes[1..] {
                logs.take_in_ranges(size, &entry.sizes[0]);
            }
            let mut sized = Vec::new();
            for term in &entry.equation.terms {
                sized_in(&term.product.factors, &mut sized);
            }
            for found in sized {
                for part in &found.parts {
                    logs.take_in(part);
                    logs.take_in_ranges(part, &found.size.resolved);
                }
            }
        }
        for bound in &query.at_least_one {
            logs.take_in(bound);
            logs.take_in_ranges(bound, &Monomial::one());
        }
        logs.ranged.sort();
        logs
    }

    fn take_in(&mut self, size: &Monomial) {
        for (symbol, _) in size.powers() {
            let is_new = self.known.iter().all(|(known, _)| known != symbol);
            if is_new && self.place(symbol).is_none() {
                let log = match &self.query.powers {
                    Some(powers) => -powers.of(symbol),
                    None => nominal_log(self.query.setting, symbol),
                };
                self.known.push((symbol.clone(), log));
            }
        }
    }

    fn take_in_ranges(&mut self, size: &Monomial, other: &Monomial) {
        if self.query.powers.is_some() {
            return;
        }
        for (symbol, power) in size.powers().iter().chain(other.powers()) {
            let is_ranged = self.place(symbol).is_none()
                && (self.query.setting.symbol_value(symbol))
                    .is_ok_and(|value| value.low < value.high);
            let differs = power_in(size, symbol) != power_in(other, symbol) && !power.is_zero();
            if is_ranged && differs && !self.ranged.contains(symbol) {
                self.ranged.push(symbol.clone());
            }
        }
    }

    /// The place of an open unknown.
    fn place(&self, symbol: &Symbol) -> Option<usize> {
        match symbol {
            Symbol::Declared(id) => self.query.unknowns.iter().position(|found| found == id),
            Symbol::Function(_) => None,
        }
    }

    /// The exponents of the open unknowns.
    fn open_exponents(&self, size: &Monomial) -> Vec<Exponent> {
        self.query
            .unknowns
            .iter()
            .map(|id| size.power_of(*id))
            .collect()
    }

    /// The logarithm of the known part at the nominal values.
    fn nominal(&self, size: &Monomial) -> BigRational {
        self.constant(size, false)
    }

    fn constant(&self, size: &Monomial, without_ranged: bool) -> BigRational {
        let mut sum = match &self.query.powers {
            Some(_) => BigRational::zero(),
            None => log_of(&size.number),
        };
        for (symbol, power) in size.powers() {
            if without_ranged && self.ranged.contains(symbol) {
                continue;
            }
            if let Some((_, log)) = self.known.iter().find(|(known, _)| known == symbol) {
                sum += log * power.to_rational();
            }
        }
        sum
    }

    fn exponents(&self, size: &Monomial) -> Vec<Exponent> {
        let mut exponents = self.open_exponents(size);
        exponents.extend(self.ranged.iter().map(|symbol| power_in(size, symbol)));
        exponents
    }

    fn term(&self, size: &Monomial, process: usize) -> Term {
        Term {
            process,
            exponents: self.exponents(size),
            constant: self.constant(size, true),
        }
    }

    fn equation(&self, entry: &Entry<'_>, formulas: &[Monomial]) -> Equation {
        let labels = self.processes(entry, formulas);
        let numbered = |label: &str| labels.iter().position(|(found, _)| found == label);
        Equation {
            terms: (entry.equation.terms.iter().zip(formulas))
                .map(|(term, size)| {
                    let place = numbered(term.label()).unwrap_or_default();
                    self.term(size, labels[place].1)
                })
                .collect(),
            required: (entry.required.iter())
                .map(|label| numbered(label).map_or(usize::MAX, |place| labels[place].1))
                .collect(),
        }
    }

    /// The processes of an equation with their numbers; tendency and advection of one
    /// `D_t` that count as equal get one number.
    fn processes(&self, entry: &Entry<'_>, formulas: &[Monomial]) -> Vec<(String, usize)> {
        let mut labels: Vec<(String, usize)> = Vec::new();
        for term in &entry.equation.terms {
            if labels.iter().all(|(label, _)| label != term.label()) {
                labels.push((term.label().to_owned(), labels.len()));
            }
        }
        let place = |wanted: &str| labels.iter().position(|(label, _)| label == wanted);
        if let (Some(tendency), Some(advection)) = (place("tendency"), place("advection"))
            && labels.len() > 2
            && is_one_derivative(entry, formulas)
        {
            labels[advection].1 = labels[tendency].1;
        }
        labels
    }

    /// The sizes of the terms, those of near ties replaced by their leader's.
    fn merged(&self, entry: &Entry<'_>) -> Result<Vec<Monomial>, TooLarge> {
        let sizes = &entry.sizes;
        let mut order: Vec<(usize, BigRational)> = sizes
            .iter()
            .map(|size| self.nominal(size))
            .enumerate()
            .collect();
        // From the largest down; the first of equal ones first.
        order.sort_by(|a, b| b.1.cmp(&a.1));
        let mut formulas = sizes.clone();
        let mut taken = vec![false; sizes.len()];
        for (rank, (leader, top)) in order.iter().enumerate() {
            if taken[*leader] {
                continue;
            }
            let exponents = self.open_exponents(&sizes[*leader]);
            let set: Vec<usize> = (order[rank..].iter())
                .filter(|(idx, log)| {
                    !taken[*idx]
                        && self.open_exponents(&sizes[*idx]) == exponents
                        && self.counts_as_equal(&(top - log))
                })
                .map(|(idx, _)| *idx)
                .collect();
            let is_named = |idx: &&usize| {
                let label = entry.equation.terms[**idx].label();
                entry.required.iter().any(|wanted| wanted == label)
            };
            let chosen = set.iter().find(is_named).unwrap_or(leader);
            for idx in &set {
                taken[*idx] = true;
                formulas[*idx] = sizes[*chosen].clone();
            }
        }
        Ok(formulas)
    }

    /// Within a factor of the root of 10; as powers of a small parameter, equal ones.
    fn counts_as_equal(&self, difference: &BigRational) -> bool {
        match self.query.powers {
            Some(_) => difference.is_zero(),
            None => {
                let difference = difference.to_f64().unwrap_or(f64::INFINITY);
                let limit = 10_f64.ln() / 2.0;
                difference <= limit || same(difference.exp(), limit.exp())
            }
        }
    }

    /// "Its size exceeds none of its largest parts": each part balances itself, so that
    /// any of them may be the largest; the size may not, unless it ties with one.
    fn below_parts(&self, sized: &Sized) -> Option<(Equation, Vec<Monomial>)> {
        let size = &sized.size.resolved;
        let mut sizes: Vec<Monomial> = Vec::new();
        for part in sized.parts.iter().filter(|part| self.is_there(part)) {
            sizes.extend([part.clone(), part.clone()]);
        }
        if sizes.is_empty() {
            return None;
        }
        sizes.push(size.clone());
        let is_open = |part: &Monomial| self.open_exponents(part).iter().any(|e| !e.is_zero());
        if !sizes.iter().any(is_open) {
            return None;
        }
        let terms = sizes.iter().enumerate();
        let equation = Equation {
            terms: terms
                .map(|(process, part)| self.term(part, process))
                .collect(),
            required: Vec::new(),
        };
        Some((equation, sizes))
    }

    /// Whether no constant that is 0 takes a product out.
    fn is_there(&self, product: &Monomial) -> bool {
        let mut symbols = product.powers().iter();
        !product.number.is_zero() && !symbols.any(|(symbol, _)| self.query.setting.is_zero(symbol))
    }

    /// The bounds: those asked for, then two for each range.
    fn within(&self, at_least_one: &[Monomial]) -> Vec<LinearForm> {
        let mut forms: Vec<LinearForm> = (at_least_one.iter())
            .map(|bound| LinearForm {
                exponents: self
                    .exponents(bound)
                    .iter()
                    .map(|e| e.to_rational())
                    .collect(),
                constant: self.constant(bound, true),
            })
            .collect();
        let n_open = self.query.unknowns.len();
        for (place, symbol) in self.ranged.iter().enumerate() {
            let Ok(value) = self.query.setting.symbol_value(symbol) else {
                continue;
            };
            let amount = value.abs();
            for (sign, end) in [(1, amount.low), (-1, amount.high)] {
                let sign = BigRational::from_integer(sign.into());
                let mut exponents = vec![BigRational::zero(); n_open + self.ranged.len()];
                exponents[n_open + place] = sign.clone();
                forms.push(LinearForm {
                    exponents,
                    constant: -sign * on_grid(end.ln()),
                });
            }
        }
        forms
    }
}

/// Whether tendency and advection come out of one `D_t` and count as equal: a term of
/// each has one size in the system. Where `where` names one of them they stay apart.
fn is_one_derivative(entry: &Entry<'_>, formulas: &[Monomial]) -> bool {
    let is_named = |label: &String| label == "tendency" || label == "advection";
    if entry.required.iter().any(is_named) {
        return false;
    }
    let of = |wanted: &'static str| {
        let terms = entry.equation.terms.iter().enumerate();
        terms.filter(move |(_, term)| term.label() == wanted)
    };
    of("tendency").any(|(a, tendency)| {
        of("advection").any(|(b, advection)| {
            tendency.summand == advection.summand
                && entry.equation.summands[tendency.summand].is_material
                && formulas[a] == formulas[b]
        })
    })
}

/// The power of a symbol; 0 if it does not occur.
pub(crate) fn power_in(monomial: &Monomial, symbol: &Symbol) -> Exponent {
    let found = monomial.powers().iter().find(|(found, _)| found == symbol);
    found.map_or(Exponent::ZERO, |(_, power)| *power)
}

/// The logarithm of a known symbol's amount at its nominal value, exact in the whole
/// powers that an exact value is made of.
fn nominal_log(setting: &Setting, symbol: &Symbol) -> BigRational {
    if let Symbol::Declared(id) = symbol
        && let Some(Variable::Known(value)) = setting.variables.get(id.idx())
        && let Some(exact) = &value.exact
    {
        return log_of(exact);
    }
    let value = setting.symbol_value(symbol);
    value.map_or_else(
        |_| BigRational::zero(),
        |value| on_grid(value.nominal.abs().ln()),
    )
}

fn log_of(number: &Number) -> BigRational {
    let mut sum = number.pi_power().to_rational() * on_grid(std::f64::consts::PI.ln());
    for (base, power) in number.whole_powers() {
        sum += power * on_grid(Number::rational(BigRational::from_integer(base)).ln_abs());
    }
    sum
}

fn on_grid(log: f64) -> BigRational {
    let steps = BigRational::from_f64((log * GRID).round()).unwrap_or_default();
    steps / BigRational::from_f64(GRID).unwrap_or_else(|| BigRational::from_integer(1.into()))
}
