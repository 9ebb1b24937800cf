//! The formulas of a balance: its ties solved for the unknowns as exact products.

use crate::algebra::monomial::{Monomial, Symbol, SymbolId};
use crate::analysis::balances::system::Query;
use crate::number::{Exponent, TooLarge};

/// Unknowns solved for, each as a product of known symbols and unknowns that stay free.
#[derive(Debug, Clone, Default)]
pub(crate) struct Solution {
    /// In order of the unknowns.
    pub(crate) formulas: Vec<(SymbolId, Monomial)>,
}

impl Solution {
    /// Solves "all attaining terms of an equation are equal", for all entries. Ties that
    /// `where` asks for come first, so that formulas rest on them.
    pub(crate) fn of(
        query: &Query<'_>,
        sizes: &[Vec<Monomial>],
        attaining: &[Vec<usize>],
    ) -> Result<Solution, TooLarge> {
        let mut order: Vec<usize> = (0..query.entries.len()).collect();
        order.sort_by_key(|idx| query.entries[*idx].required.is_empty());
        let mut rows: Vec<Monomial> = Vec::new();
        for idx in order {
            let entry = &query.entries[idx];
            let mut terms = attaining[idx].clone();
            terms.sort_by_key(|term| {
                let label = entry.equation.terms[*term].label();
                !entry.required.iter().any(|wanted| wanted == label)
            });
            for pair in terms.windows(2) {
                let tie = sizes[idx][pair[0]].over(&sizes[idx][pair[1]])?;
                put(&mut rows, &query.unknowns, tie)?;
            }
        }
        let mut formulas = Vec::new();
        for row in rows {
            if let Some(lead) = lead(&row, &query.unknowns) {
                let own = Monomial::symbol(Symbol::Declared(lead));
                formulas.push((lead, own.over(&row)?));
            }
        }
        formulas.sort_by_key(|(id, _)| query.unknowns.iter().position(|found| found == id));
        Ok(Solution { formulas })
    }

    /// The formula of an unknown; none if it is free.
    pub(crate) fn formula(&self, id: SymbolId) -> Option<&Monomial> {
        let found = self.formulas.iter().find(|(found, _)| *found == id);
        found.map(|(_, formula)| formula)
    }

    /// A product with the unknowns that were solved for replaced.
    pub(crate) fn replaced(&self, product: &Monomial) -> Result<Monomial, TooLarge> {
        product.replaced(|symbol| match symbol {
            Symbol::Declared(id) => self.formula(*id),
            Symbol::Function(_) => None,
        })
    }
}

/// Takes a product that is 1 into the others, in reduced echelon form: each begins with
/// power 1 of an unknown that stands in no other one.
fn put(rows: &mut Vec<Monomial>, unknowns: &[SymbolId], mut tie: Monomial) -> Result<(), TooLarge> {
    for row in rows.iter() {
        if let Some(lead) = lead(row, unknowns) {
            tie = eliminated(&tie, row, lead)?;
        }
    }
    let Some(lead) = lead(&tie, unknowns) else {
        return Ok(());
    };
    let inverse = tie.power_of(lead).to_rational().recip();
    let tie = tie.power(Exponent::from_rational(&inverse)?)?;
    for row in rows.iter_mut() {
        *row = eliminated(row, &tie, lead)?;
    }
    rows.push(tie);
    Ok(())
}

fn lead(row: &Monomial, unknowns: &[SymbolId]) -> Option<SymbolId> {
    let mut all = unknowns.iter().copied();
    all.find(|id| !row.power_of(*id).is_zero())
}

fn eliminated(row: &Monomial, by: &Monomial, lead: SymbolId) -> Result<Monomial, TooLarge> {
    let power = row.power_of(lead);
    if power.is_zero() {
        return Ok(row.clone());
    }
    row.times(&by.power(power.negated())?)
}
