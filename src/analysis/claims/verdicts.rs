//! Claims of what leads, is kept, or drops.

use crate::algebra::monomial::Symbol;
use crate::analysis::claims::mends::{self, Mends};
use crate::analysis::claims::{Astray, Held, Measured};
use crate::analysis::rank::RankedProcess;
use crate::analysis::reduce::Kept;
use crate::analysis::requests;
use crate::analysis::show::CaseNames;
use crate::analysis::sizes::{Shares, Verdict, at_most};
use crate::model::errors::ModelError;
use crate::model::values::Fault;
use crate::syntax::ast::{self, ClaimWord};
use crate::units::Range;

/// Holds one.
///
/// # Errors
/// Open names, unknown processes.
pub(super) fn verdict(
    word: ClaimWord,
    equation: &ast::Name,
    processes: &[ast::ProcessRef],
    held: Held,
    names: &CaseNames<'_>,
) -> Result<Held, Fault> {
    let case = names.case;
    let Some(idx) = names.model.equation(&equation.text) else {
        return Err(Fault::NotAProduct(equation.span));
    };
    let terms = &case.equations[idx];
    if let Some(fault) = terms.faults.first() {
        return Err(Fault::Error(fault.clone()));
    }
    let mut open = Vec::new();
    for term in &terms.terms {
        open.extend(case.setting.monomial_range(&term.size.resolved).err());
    }
    if !open.is_empty() {
        return Err(Fault::Open(open.into_iter().flatten().collect()));
    }
    let claimed: Vec<String> = processes
        .iter()
        .map(|process| requests::process_label(names.model, case, idx, process))
        .collect::<Result<_, ModelError>>()?;
    let tolerance = case.setting.tolerance();
    let Some(kept) = Kept::of(case, terms, tolerance) else {
        // Every term is gone.
        return Ok(without_terms(word, &claimed, held));
    };
    let verdict = Verdicts {
        word,
        claimed: &claimed,
        kept: &kept,
        tolerance,
    };
    Ok(verdict.held(held, names))
}

fn without_terms(word: ClaimWord, claimed: &[String], held: Held) -> Held {
    let astray: Vec<Astray> = match word {
        ClaimWord::Leading | ClaimWord::Kept => claimed.iter().map(|name| gone(name)).collect(),
        ClaimWord::Dropped => Vec::new(),
    };
    Held {
        met: astray.is_empty(),
        measured: Measured::Processes {
            word,
            found: Vec::new(),
            share: None,
            astray,
        },
        ..held
    }
}

fn gone(name: &str) -> Astray {
    Astray {
        process: name.to_owned(),
        share: None,
        is_claimed: true,
    }
}

struct Verdicts<'a> {
    word: ClaimWord,
    claimed: &'a [String],
    kept: &'a Kept<'a>,
    tolerance: f64,
}

impl Verdicts<'_> {
    fn held(&self, held: Held, names: &CaseNames<'_>) -> Held {
        let astray = self.astray();
        let met = astray.is_empty();
        let is_gone = astray.iter().any(|astray| astray.share.is_none());
        let shares = &self.kept.shares;
        let miss = (!met && !is_gone).then(|| self.excess(shares));
        let highest = astray.iter().filter_map(|astray| astray.share);
        let share = match self.word {
            ClaimWord::Dropped => highest.map(|share| share.high).reduce(f64::max),
            ClaimWord::Leading | ClaimWord::Kept => None,
        };
        Held {
            met,
            miss: miss.filter(|miss| miss.is_finite()),
            mends: match miss {
                Some(_) => self.mends(names),
                None => Vec::new(),
            },
            measured: Measured::Processes {
                word: self.word,
                found: self.found(),
                share,
                astray,
            },
            ..held
        }
    }

    fn is_claimed(&self, process: &RankedProcess) -> bool {
        self.claimed.contains(&process.process)
    }

    /// Whether the word of the claim is true of a process; for `dropped`, its contrary.
    fn is_found(&self, process: &RankedProcess) -> bool {
        match self.word {
            ClaimWord::Leading => process.verdict == Verdict::Leads,
            ClaimWord::Kept | ClaimWord::Dropped => {
                process.members.iter().any(|idx| self.kept.is_kept(*idx))
            }
        }
    }

    fn found(&self) -> Vec<String> {
        let processes = self.kept.processes.iter();
        processes
            .filter(|process| self.is_found(process))
            .filter(|process| self.word != ClaimWord::Dropped || self.is_claimed(process))
            .map(|process| process.process.clone())
            .collect()
    }

    fn astray(&self) -> Vec<Astray> {
        let mut astray: Vec<Astray> = Vec::new();
        for process in &self.kept.processes {
            let (is_found, is_claimed) = (self.is_found(process), self.is_claimed(process));
            let is_wrong = match self.word {
                ClaimWord::Leading | ClaimWord::Kept => is_found != is_claimed,
                ClaimWord::Dropped => is_found && is_claimed,
            };
            if is_wrong {
                astray.push(Astray {
                    process: process.process.clone(),
                    share: Some(self.share(process)),
                    is_claimed,
                });
            }
        }
        if self.word != ClaimWord::Dropped {
            let processes = &self.kept.processes;
            let is_there = |name: &String| processes.iter().any(|found| found.process == *name);
            let missing = self.claimed.iter().filter(|name| !is_there(name));
            astray.extend(missing.map(|name| gone(name)));
        }
        astray
    }

    /// The share that decides: of the process for `leading`, of its largest term else.
    fn share(&self, process: &RankedProcess) -> Range {
        let members = process.members.iter();
        let highest = members.map(|idx| self.kept.shares.shares[*idx].high);
        match self.word {
            ClaimWord::Leading => process.share,
            ClaimWord::Kept | ClaimWord::Dropped => Range {
                high: highest.fold(process.share.nominal, f64::max),
                ..process.share
            },
        }
    }

    /// Whether a process should lie above the tolerance; `None` where the claim does not
    /// care.
    fn should_rise(&self, process: &RankedProcess) -> Option<bool> {
        let is_claimed = self.is_claimed(process);
        match self.word {
            ClaimWord::Leading | ClaimWord::Kept => Some(is_claimed),
            ClaimWord::Dropped => is_claimed.then_some(false),
        }
    }

    /// By what factor the worst process fails; at most 1 where the claim holds.
    fn excess(&self, shares: &Shares) -> f64 {
        let excess = |process: &RankedProcess| {
            let share = self.deciding(shares, process);
            Some(match self.should_rise(process)? {
                true => self.tolerance / share,
                false => share / self.tolerance,
            })
        };
        let processes = self.kept.processes.iter();
        processes.filter_map(excess).fold(0.0, f64::max)
    }

    /// Whether the nominal shares alone, without a linear program, tell that it fails.
    fn fails_nominally(&self, shares: &Shares) -> bool {
        let fails = |process: &RankedProcess| {
            let is_low = at_most(shares.nominal(&process.members), self.tolerance);
            match (self.word, self.should_rise(process)) {
                // The lowest share is no higher, the highest no lower.
                (ClaimWord::Leading, Some(true)) => is_low,
                (ClaimWord::Kept | ClaimWord::Dropped, Some(false)) => !is_low,
                (_, Some(_) | None) => false,
            }
        };
        self.kept.processes.iter().any(fails)
    }

    fn deciding(&self, shares: &Shares, process: &RankedProcess) -> f64 {
        match self.word {
            ClaimWord::Leading => shares.lowest(&process.members),
            ClaimWord::Kept | ClaimWord::Dropped => process
                .members
                .iter()
                .map(|idx| shares.highest(*idx))
                .fold(0.0, f64::max),
        }
    }

    /// The scales that alone make the claim hold.
    fn mends(&self, names: &CaseNames<'_>) -> Mends {
        let terms = &self.kept.equation.terms;
        let excess = |symbol: &Symbol, way: f64| {
            let ways: Vec<f64> = terms
                .iter()
                .map(|term| {
                    let powers = term.size.resolved.powers().iter();
                    let power = powers.filter(|(found, _)| found == symbol);
                    power.map(|(_, power)| power.to_f64() * way).sum()
                })
                .collect();
            let moved = self.kept.shares.moved(&ways);
            if self.fails_nominally(&moved) {
                f64::INFINITY
            } else {
                self.excess(&moved)
            }
        };
        let sizes = terms.iter().map(|term| &term.size.resolved);
        mends::nearest(names, sizes, &excess)
    }
}
