//! The simplex tableau in whole numbers.
//!
//! Every basic variable is written in the variables outside the basis, all with one
//! common denominator; a pivot replaces the denominator and divides by the old one
//! without a rest (all entries are minors of the first rows). What program is solved,
//! and from which start, is the business of `simplex` and `shares`.

use super::whole::Whole;

/// `variable = (row[0] + row[1] * outside[0] + row[2] * outside[1] + ...) / denom`, for
/// each basic variable. A variable is at least 0 unless it is `free`.
pub(super) struct Tableau {
    /// Positive.
    pub(super) denom: Whole,
    /// One row for each variable of `basic`.
    pub(super) rows: Vec<Vec<Whole>>,
    /// The variable of each row.
    pub(super) basic: Vec<usize>,
    /// The variable of each column after the first; these are at 0.
    pub(super) outside: Vec<usize>,
    /// What is maximised, written as a row; the last one is at work.
    pub(super) goals: Vec<Vec<Whole>>,
    /// For each variable, whether it may be negative.
    pub(super) free: Vec<bool>,
}

impl Tableau {
    /// Variables 0.. are outside the basis, the ones after them belong to the rows.
    pub(super) fn new(n_outside: usize, rows: Vec<Vec<Whole>>, goal: Vec<Whole>) -> Tableau {
        let n_variables = n_outside + rows.len();
        Tableau {
            denom: Whole::ONE,
            basic: (n_outside..n_variables).collect(),
            outside: (0..n_outside).collect(),
            rows,
            goals: vec![goal],
            free: vec![false; n_variables],
        }
    }

    /// From a feasible start, pivots until the last goal is largest: true; or until it
    /// is seen to grow without bound: false.
    ///
    /// The column of the steepest rise is taken. Where that makes no progress for a
    /// while, Bland's rule takes over until it does, so that no cycle can arise.
    pub(super) fn rise(&mut self) -> bool {
        let patience = self.rows.len() + self.outside.len();
        let mut idle = 0;
        loop {
            let careful = idle > patience;
            let Some(column) = self.rising_column(careful) else {
                return true;
            };
            let Some(row) = self.leaving_row(column) else {
                return false;
            };
            idle = if self.rows[row][0].is_zero() {
                idle + 1
            } else {
                0
            };
            self.pivot(row, column);
        }
    }

    fn rising_column(&self, careful: bool) -> Option<usize> {
        let goal = self.goals.last()?;
        let rising = (1..goal.len()).filter(|&column| goal[column].sign() > 0);
        if careful {
            rising.min_by_key(|&column| self.outside[column - 1])
        } else {
            rising.reduce(|a, b| if goal[b] > goal[a] { b } else { a })
        }
    }

    /// The row that reaches 0 first when the variable of the column grows; of equal
    /// ones that of the first variable.
    fn leaving_row(&self, column: usize) -> Option<usize> {
        let mut best: Option<usize> = None;
        for (index, row) in self.rows.iter().enumerate() {
            if row[column].sign() >= 0 || self.free[self.basic[index]] {
                continue;
            }
            let earlier = best.is_none_or(|other| {
                let rival = &self.rows[other];
                // Rival and row reach 0 at `-[0] / [column]`; both slopes are negative.
                let order = rival[0]
                    .times(&row[column])
                    .cmp(&row[0].times(&rival[column]));
                order.is_lt() || order.is_eq() && self.basic[index] < self.basic[other]
            });
            if earlier {
                best = Some(index);
            }
        }
        best
    }

    /// Exchanges the variable of `row` with that of `column`, whose entry is not 0.
    pub(super) fn pivot(&mut self, row: usize, column: usize) {
        let mut solved = std::mem::take(&mut self.rows[row]);
        let negative = solved[column].sign() < 0;
        let entry = solved[column].abs();
        for other in self.rows.iter_mut().chain(&mut self.goals) {
            // The row of the pivot itself was taken out.
            if !other.is_empty() {
                if negative {
                    other[column] = other[column].negated();
                }
                eliminate(other, &solved, column, &entry, &self.denom);
            }
        }
        solved[column] = self.denom.negated();
        if !negative {
            solved.iter_mut().for_each(|v| *v = v.negated());
        }
        self.rows[row] = solved;
        self.denom = entry;
        std::mem::swap(&mut self.basic[row], &mut self.outside[column - 1]);
    }

    /// Takes a column out: its variable stays at 0.
    pub(super) fn remove_column(&mut self, column: usize) {
        for row in self.rows.iter_mut().chain(&mut self.goals) {
            row.remove(column);
        }
        self.outside.remove(column - 1);
    }

    /// The present value of a variable times the denominator.
    pub(super) fn value(&self, variable: usize) -> Whole {
        match self.basic.iter().position(|&v| v == variable) {
            Some(row) => self.rows[row][0].clone(),
            None => Whole::ZERO,
        }
    }
}

/// `row = (row * entry - row[column] * solved) / denom`, but in the column itself.
fn eliminate(row: &mut [Whole], solved: &[Whole], column: usize, entry: &Whole, denom: &Whole) {
    let times = row[column].clone();
    if times.is_zero() && entry == denom {
        return;
    }
    for (index, value) in row.iter_mut().enumerate() {
        let stays_zero = value.is_zero() && (times.is_zero() || solved[index].is_zero());
        if index != column && !stays_zero {
            *value = Whole::cross(value, entry, &times, &solved[index], denom);
        }
    }
}
