//! A balance that the core found, in the terms of the script.

use std::cmp::Ordering;

use num_rational::BigRational;
use num_traits::{Signed, ToPrimitive, Zero};

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::analysis::Case;
use crate::analysis::balances::formulas::Solution;
use crate::analysis::balances::system::{Entry, Origin, Prepared, Query};
use crate::analysis::balances::{
    Candidate, FamilyEnd, FindFault, FoundScale, FreeScale, Neglected, condition, recognised,
};
use crate::analysis::names::Namer;
use crate::analysis::reduce;
use crate::analysis::sizes::same;
use crate::model::Model;
use crate::number::{Exponent, TooLarge};
use crate::polyhedra::prevariety::{self, Inequality, LinearForm, Source};
use crate::polyhedra::{self, Condition, Outcome, Program, Relation};
use crate::syntax::ast;
use crate::units::Range;

/// Those that fix every unknown first, in order of what they neglect; then families.
pub(super) fn order(a: &Candidate, b: &Candidate) -> Ordering {
    let key = |candidate: &Candidate| {
        let neglected = candidate.neglected.as_ref();
        let share = neglected.and_then(|found| found.share).unwrap_or(0.0);
        // A higher power of the small parameter is a smaller share.
        let power = neglected
            .and_then(|found| found.power)
            .unwrap_or(f64::INFINITY);
        (candidate.free.is_empty(), share, power)
    };
    let (a, b) = (key(a), key(b));
    b.0.cmp(&a.0)
        .then(a.1.total_cmp(&b.1))
        .then(b.2.total_cmp(&a.2))
}

/// Describes the candidates of one query.
pub(crate) struct Describer<'a> {
    model: &'a Model,
    case: &'a Case,
    query: &'a Query<'a>,
    prepared: &'a Prepared,
    namer: Namer<'a>,
}

impl<'a> Describer<'a> {
    pub(crate) fn new(
        model: &'a Model,
        case: &'a Case,
        query: &'a Query<'a>,
        prepared: &'a Prepared,
    ) -> Describer<'a> {
        Describer {
            model,
            case,
            query,
            prepared,
            namer: Namer::new(case),
        }
    }

    /// The attaining terms of the equations that take part.
    pub(crate) fn attaining<'f>(&self, found: &'f prevariety::Candidate) -> &'f [Vec<usize>] {
        &found.attaining[..self.query.entries.len()]
    }

    /// Whether it holds over a part of the ranges that has an inside.
    pub(crate) fn has_inside(&self, found: &prevariety::Candidate) -> bool {
        let n_open = self.query.unknowns.len();
        found.tight.is_empty() && found.dependent.iter().all(|unknown| *unknown < n_open)
    }

    /// Its formulas.
    pub(crate) fn solution(&self, found: &prevariety::Candidate) -> Result<Solution, TooLarge> {
        Solution::of(self.query, &self.prepared.formulas, self.attaining(found))
    }

    pub(super) fn describe(&self, found: &prevariety::Candidate) -> Result<Candidate, FindFault> {
        let solution = self.solution(found)?;
        let balances = self.balances(found);
        let free: Vec<SymbolId> = (self.query.unknowns.iter())
            .filter(|id| solution.formula(**id).is_none())
            .copied()
            .collect();
        let neglected = match free.is_empty() {
            true => Some(self.neglected(found, &solution)?),
            false => None,
        };
        let (whole_box, conditions) = match self.query.with_ranges {
            true => (self.covers_box(found), self.conditions(found, &solution)?),
            false => self.over_ranges(found, &solution, free.is_empty())?,
        };
        Ok(Candidate {
            names: recognised(self.model, self.case, &balances),
            scales: (self.query.unknowns.iter())
                .map(|id| self.scale(*id, &solution))
                .collect(),
            free: (free.iter())
                .map(|id| self.free(*id, found, &solution))
                .collect::<Result<_, TooLarge>>()?,
            as_one: self.as_one(),
            balances,
            neglected,
            whole_box,
            conditions,
            is_adopted: false,
        })
    }

    /// The balancing processes of each equation, in its order.
    pub(crate) fn balances(&self, found: &prevariety::Candidate) -> Vec<(String, Vec<String>)> {
        let pairs = self.query.entries.iter().zip(self.attaining(found));
        pairs
            .map(|(entry, terms)| (entry.equation.name.clone(), labels(entry, terms)))
            .collect()
    }

    /// Equations in which tendency and advection count as one process.
    fn as_one(&self) -> Vec<String> {
        let entries = self
            .query
            .entries
            .iter()
            .zip(&self.prepared.system.equations);
        entries
            .filter(|(entry, equation)| {
                let numbers = |wanted: &str| {
                    let terms = entry.equation.terms.iter().zip(&equation.terms);
                    let found = terms.filter(|(term, _)| term.label() == wanted);
                    found.map(|(_, term)| term.process).next()
                };
                let tendency = numbers("tendency");
                tendency.is_some() && tendency == numbers("advection")
            })
            .map(|(entry, _)| entry.equation.name.clone())
            .collect()
    }

    fn scale(&self, id: SymbolId, solution: &Solution) -> FoundScale {
        let product = solution.formula(id).cloned();
        let (unit, shown_in) = self.units(id);
        FoundScale {
            id,
            name: self.case.setting.names[id.idx()].clone(),
            formula: product.as_ref().map(|product| self.case.factors(product)),
            value: product.as_ref().and_then(|product| self.value(product)),
            product,
            unit,
            shown_in,
        }
    }

    /// The SI unit of a scale, and the one in which it was declared.
    fn units(&self, id: SymbolId) -> (String, Option<String>) {
        let info = &self.model.symbols[id.idx()];
        let (_, decl) = self.model.effective(id, self.case.setting.phenomenon);
        let unit = info
            .dimension
            .map_or_else(|| "1".to_owned(), |found| found.unit_text());
        let shown_in = match &decl.value {
            ast::Value::Open(unit) => Some(unit.text.clone()),
            ast::Value::Given { .. } => None,
        };
        (unit, shown_in.filter(|text| text != "1"))
    }

    fn value(&self, product: &Monomial) -> Option<Range> {
        let range = self.case.setting.monomial_range(product).ok()?;
        Some(range.abs()).filter(|range| range.nominal.is_finite())
    }

    /// The largest share of a process that is not in the balance.
    fn neglected(
        &self,
        found: &prevariety::Candidate,
        solution: &Solution,
    ) -> Result<Neglected, TooLarge> {
        // Its height below the balance, its share, its name and its equation.
        let mut largest: Option<(f64, f64, String, String)> = None;
        for (entry, terms) in self.query.entries.iter().zip(self.attaining(found)) {
            let balancing = labels(entry, terms);
            let mut sizes = Vec::new();
            for size in &entry.sizes {
                sizes.push(solution.replaced(size)?);
            }
            let heights: Vec<f64> = sizes.iter().map(|size| self.height(size)).collect();
            let higher = |a: &usize, b: &usize| heights[*a].total_cmp(&heights[*b]);
            let Some(top) = terms.iter().copied().max_by(higher) else {
                continue;
            };
            for (idx, term) in entry.equation.terms.iter().enumerate() {
                let is_out = balancing.iter().all(|label| label != term.label());
                let below = heights[idx] - heights[top];
                let is_larger = |best: f64| below > best && !same(below.exp(), best.exp());
                if is_out && largest.as_ref().is_none_or(|(best, ..)| is_larger(*best)) {
                    let nominal = |place: usize| self.case.setting.nominal(&sizes[place]);
                    let share = nominal(idx) / nominal(top);
                    let equation = entry.equation.name.clone();
                    largest = Some((below, share, term.label().to_owned(), equation));
                }
            }
        }
        let is_symbolic = self.query.powers.is_some();
        Ok(match largest {
            Some((below, share, term, equation)) => Neglected {
                share: (!is_symbolic).then_some(share),
                power: is_symbolic.then_some(-below),
                term: Some((term, equation)),
            },
            None => Neglected {
                share: (!is_symbolic).then_some(0.0),
                power: None,
                term: None,
            },
        })
    }

    /// The logarithm of a product of known symbols at the nominal values; as powers, to
    /// the base of the inverse small parameter.
    fn height(&self, product: &Monomial) -> f64 {
        match &self.query.powers {
            Some(powers) => -powers.of_product(product).to_f64().unwrap_or(f64::NAN),
            None => self.case.setting.nominal(product).ln(),
        }
    }

    // Families ----------------------------------------------------------------------------------

    fn free(
        &self,
        id: SymbolId,
        found: &prevariety::Candidate,
        solution: &Solution,
    ) -> Result<FreeScale, TooLarge> {
        let (unit, shown_in) = self.units(id);
        let mut scale = FreeScale {
            name: self.case.setting.names[id.idx()].clone(),
            unit,
            shown_in,
            low: Vec::new(),
            high: Vec::new(),
        };
        for inequality in &found.inequalities {
            let Some((ratio, equation, joins)) = self.source(inequality, found, solution)? else {
                continue;
            };
            // ratio >= 1, so the scale is at least, or at most, what the rest makes it.
            let power = ratio.power_of(id);
            if power.is_zero() {
                continue;
            }
            let inverse = Exponent::from_rational(&-power.to_rational().recip())?;
            let own = Monomial::symbol(Symbol::Declared(id));
            let bound = own.times(&ratio.power(inverse)?)?;
            let end = FamilyEnd {
                formula: self.case.factors(&bound),
                value: self.value(&bound),
                equation,
                joins,
            };
            match power.is_negative() {
                false => scale.low.push(end),
                true => scale.high.push(end),
            }
        }
        // What counts at the nominal values comes first; ends that move with another free
        // scale come last.
        let nominal = |end: &FamilyEnd| end.value.map(|value| value.nominal);
        let compare = |a: Option<f64>, b: Option<f64>| match (a, b) {
            (Some(a), Some(b)) => a.total_cmp(&b),
            (Some(_), None) => Ordering::Less,
            (None, Some(_)) => Ordering::Greater,
            (None, None) => Ordering::Equal,
        };
        scale.high.sort_by(|a, b| compare(nominal(a), nominal(b)));
        let lower = |end: &FamilyEnd| nominal(end).map(|value| -value);
        scale.low.sort_by(|a, b| compare(lower(a), lower(b)));
        Ok(scale)
    }

    /// What an inequality says: a ratio that is at least 1, the equation, and the processes
    /// that join its balance where it is 1. None where only a bound stands there.
    fn source(
        &self,
        inequality: &Inequality,
        found: &prevariety::Candidate,
        solution: &Solution,
    ) -> Result<Option<(Monomial, String, Vec<String>)>, TooLarge> {
        let mut all: Vec<(usize, usize)> = Vec::new();
        for source in &inequality.sources {
            match source {
                Source::Term { equation, term } => all.push((*equation, *term)),
                Source::Bound(_) => return Ok(None),
            }
        }
        all.retain(|(equation, term)| match self.prepared.origins[*equation] {
            Origin::Entry(_) => true,
            Origin::Parts(..) => term + 1 == self.prepared.formulas[*equation].len(),
            Origin::Leaders(_) => false,
        });
        let first = all
            .iter()
            .find(|join| self.joins_anew(join, found))
            .or(all.first());
        let Some(&(place, term)) = first else {
            return Ok(None);
        };
        let entry = &self.query.entries[self.prepared.origins[place].entry()];
        let is_new = self.joins_anew(&(place, term), found);
        let own: Vec<usize> = (all.iter())
            .filter(|join| join.0 == place && self.joins_anew(join, found) == is_new)
            .map(|join| self.own_term(join))
            .collect();
        let sizes = &self.prepared.formulas[place];
        let top = &sizes[found.attaining[place][0]];
        let ratio = solution.replaced(&top.over(&sizes[term])?)?;
        Ok(Some((
            ratio,
            entry.equation.name.clone(),
            labels(entry, &own),
        )))
    }

    /// The term of the equation that a term of the system stands for.
    fn own_term(&self, join: &(usize, usize)) -> usize {
        match self.prepared.origins[join.0] {
            Origin::Parts(_, term) => term,
            Origin::Entry(_) | Origin::Leaders(_) => join.1,
        }
    }

    /// Whether the process of a term is not in the balance already.
    fn joins_anew(&self, join: &(usize, usize), found: &prevariety::Candidate) -> bool {
        let place = self.prepared.origins[join.0].entry();
        let entry = &self.query.entries[place];
        let label = entry.equation.terms[self.own_term(join)].label();
        !labels(entry, &found.attaining[place])
            .iter()
            .any(|balancing| balancing == label)
    }

    // Ranges ------------------------------------------------------------------------------------

    /// The conditions on known scales alone, as ratios that must not exceed 1.
    pub(crate) fn conditions(
        &self,
        found: &prevariety::Candidate,
        solution: &Solution,
    ) -> Result<Vec<reduce::Inequality>, TooLarge> {
        let mut conditions = Vec::new();
        for inequality in &found.inequalities {
            if !self.is_of_known(&inequality.form) {
                continue;
            }
            if let Some((ratio, ..)) = self.source(inequality, found, solution)? {
                let ratio = ratio.power(Exponent::ONE.negated())?;
                conditions.push(condition(self.case, &ratio, &self.namer));
            }
        }
        Ok(conditions)
    }

    /// The same for a balance found at the nominal values: what overtakes it somewhere in
    /// the box. Of a family that is not told.
    fn over_ranges(
        &self,
        found: &prevariety::Candidate,
        solution: &Solution,
        is_point: bool,
    ) -> Result<(bool, Vec<reduce::Inequality>), TooLarge> {
        let mut ratios: Vec<Monomial> = Vec::new();
        for (idx, entry) in self.query.entries.iter().enumerate() {
            let sizes = &self.prepared.formulas[idx];
            let top = &sizes[found.attaining[idx][0]];
            for (term, size) in sizes.iter().enumerate().take(entry.sizes.len()) {
                let ratio = solution.replaced(&size.over(top)?)?;
                let highest = self.value(&ratio).map_or(0.0, |value| value.high);
                let attains = found.attaining[idx].contains(&term);
                if !attains && highest > 1.0 && !ratios.contains(&ratio) {
                    ratios.push(ratio);
                }
            }
        }
        let conditions: Vec<reduce::Inequality> = (ratios.iter())
            .map(|ratio| condition(self.case, ratio, &self.namer))
            .collect();
        Ok((is_point && conditions.is_empty(), conditions))
    }

    fn is_of_known(&self, form: &LinearForm) -> bool {
        let n_open = self.query.unknowns.len();
        form.exponents[..n_open].iter().all(Zero::is_zero)
    }

    /// Whether at every corner of the ranges the free unknowns have a place; the part over
    /// which they have one is convex, so the corners tell.
    pub(crate) fn covers_box(&self, found: &prevariety::Candidate) -> bool {
        let rests: Vec<&LinearForm> = (found.inequalities.iter())
            .filter(|inequality| {
                let mut sources = inequality.sources.iter();
                sources.all(|source| matches!(source, Source::Term { .. }))
            })
            .filter(|inequality| !self.is_of_parts(inequality))
            .map(|inequality| &inequality.form)
            .collect();
        if rests.is_empty() || self.prepared.ranged.is_empty() {
            return true;
        }
        if rests.iter().any(|form| self.is_of_known(form)) {
            return false;
        }
        self.prepared
            .corners()
            .all(|corner| self.has_place(&rests, &corner))
    }

    /// Where two parts of a sized expression change places, nothing ends.
    fn is_of_parts(&self, inequality: &Inequality) -> bool {
        inequality.sources.iter().all(|source| match source {
            Source::Term { equation, term } => {
                let n_terms = self.prepared.system.equations[*equation].terms.len();
                match self.prepared.origins[*equation] {
                    Origin::Parts(..) => term + 1 < n_terms,
                    Origin::Entry(_) | Origin::Leaders(_) => false,
                }
            }
            Source::Bound(_) => false,
        })
    }

    fn has_place(&self, forms: &[&LinearForm], corner: &[BigRational]) -> bool {
        let n_open = self.query.unknowns.len();
        let conditions = forms.iter().map(|form| {
            let known = form.exponents[n_open..].iter().zip(corner);
            let known: BigRational = known.map(|(exponent, value)| exponent * value).sum();
            Condition {
                coefficients: form.exponents[..n_open].iter().map(|e| -e).collect(),
                relation: Relation::AtMost,
                limit: &form.constant + known,
            }
        });
        let program = Program {
            objective: vec![BigRational::zero(); n_open],
            conditions: conditions.collect(),
            bounds: vec![(None, None); n_open],
        };
        match polyhedra::maximise(&program) {
            Outcome::Optimal { value, .. } => !value.is_negative(),
            Outcome::Infeasible | Outcome::Unbounded => false,
        }
    }
}

/// The processes of some terms, in the order of the equation, each once.
pub(crate) fn labels(entry: &Entry<'_>, terms: &[usize]) -> Vec<String> {
    let mut found: Vec<String> = Vec::new();
    for (idx, term) in entry.equation.terms.iter().enumerate() {
        if terms.contains(&idx) && found.iter().all(|label| label != term.label()) {
            found.push(term.label().to_owned());
        }
    }
    found
}
