//! Exact linear programs: maximise a linear form under linear conditions.
//!
//! Takes rational numbers, calculates in whole ones (`tableau`), gives rational ones.
//! Free variables and equalities are pivoted into the basis first; a phase one follows
//! only where the start is not feasible.

use num_rational::BigRational;
use num_traits::{One, Zero};

use super::tableau::Tableau;
use super::whole::{self, Whole};

/// Maximise `objective . x` subject to the conditions, x within the bounds.
#[derive(Debug, Clone, Default)]
pub struct Program {
    /// One coefficient for each variable.
    pub objective: Vec<BigRational>,
    /// What must hold.
    pub conditions: Vec<Condition>,
    /// Lowest and highest value of each variable; a variable left out is free.
    pub bounds: Vec<(Option<BigRational>, Option<BigRational>)>,
}

/// `coefficients . x <= limit`, or `=`; coefficients left out are 0.
#[derive(Debug, Clone)]
pub struct Condition {
    /// One coefficient for each variable.
    pub coefficients: Vec<BigRational>,
    /// How the sides compare.
    pub relation: Relation,
    /// The right side.
    pub limit: BigRational,
}

/// How the two sides of a [`Condition`] compare.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Relation {
    /// The left side is at most the right one.
    AtMost,
    /// The sides are equal.
    Equal,
}

/// What became of a [`Program`].
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Outcome {
    /// The largest value and a point that attains it.
    Optimal {
        /// The objective at the point.
        value: BigRational,
        /// One value for each variable.
        point: Vec<BigRational>,
    },
    /// No point meets the conditions.
    Infeasible,
    /// The objective grows without bound.
    Unbounded,
}

/// Solves a linear program exactly; it always ends.
pub fn maximise(program: &Program) -> Outcome {
    let Some(places) = places(program) else {
        return Outcome::Infeasible;
    };
    let mut solver = Solver::new(program, &places);
    solver.take_in_free_variables();
    if !solver.take_in_equalities() || !solver.find_start() {
        return Outcome::Infeasible;
    }
    if solver.endless || !solver.tableau.rise() {
        return Outcome::Unbounded;
    }
    let point: Vec<BigRational> = places
        .iter()
        .enumerate()
        .map(|(variable, place)| place.value(solver.value(variable)))
        .collect();
    let value = sum_of_products(&program.objective, &point);
    Outcome::Optimal { value, point }
}

/// How a variable x of the program is written by a variable y of the tableau.
enum Place {
    /// x = y, which may be negative.
    Free,
    /// x = low + y.
    Above(BigRational),
    /// x = high - y.
    Below(BigRational),
}

impl Place {
    fn value(&self, y: BigRational) -> BigRational {
        match self {
            Place::Free => y,
            Place::Above(low) => low + y,
            Place::Below(high) => high - y,
        }
    }
}

/// `None` if a variable's lowest value is above its highest.
fn places(program: &Program) -> Option<Vec<Place>> {
    let n_variables = program.objective.len();
    let mut places = Vec::with_capacity(n_variables);
    for variable in 0..n_variables {
        places.push(match program.bounds.get(variable) {
            Some((Some(low), Some(high))) if low > high => return None,
            Some((Some(low), _)) => Place::Above(low.clone()),
            Some((None, Some(high))) => Place::Below(high.clone()),
            Some((None, None)) | None => Place::Free,
        });
    }
    Some(places)
}

struct Solver {
    tableau: Tableau,
    n_variables: usize,
    /// The variables of the equalities, which must stay at 0.
    equal: Vec<usize>,
    /// A free variable in no condition changes the objective.
    endless: bool,
}

impl Solver {
    fn new(program: &Program, places: &[Place]) -> Solver {
        let n_variables = places.len();
        let mut rows = Vec::new();
        let mut equal = Vec::new();
        for condition in &program.conditions {
            if condition.relation == Relation::Equal {
                equal.push(n_variables + rows.len());
            }
            rows.push(slack_row(condition, places));
        }
        for (variable, place) in places.iter().enumerate() {
            if let (Place::Above(low), Some((_, Some(high)))) =
                (place, program.bounds.get(variable))
            {
                let mut row = vec![BigRational::zero(); n_variables + 1];
                row[0] = high - low;
                row[variable + 1] = -BigRational::one();
                rows.push(whole::whole_row(&row));
            }
        }
        let goal: Vec<BigRational> = std::iter::once(BigRational::zero())
            .chain(
                program
                    .objective
                    .iter()
                    .zip(places)
                    .map(|(c, place)| turned(c, place)),
            )
            .collect();
        let mut tableau = Tableau::new(n_variables, rows, whole::whole_row(&goal));
        for (variable, place) in places.iter().enumerate() {
            tableau.free[variable] = matches!(place, Place::Free);
        }
        Solver {
            tableau,
            n_variables,
            equal,
            endless: false,
        }
    }

    /// Brings every free variable into the basis, where it bounds nothing. One that
    /// occurs in no condition stays at 0.
    fn take_in_free_variables(&mut self) {
        for variable in 0..self.n_variables {
            let tableau = &self.tableau;
            let column = match self.column_of(variable) {
                Some(column) if tableau.free[variable] => column,
                Some(_) | None => continue,
            };
            let usable = |&row: &usize| {
                !tableau.free[tableau.basic[row]] && !tableau.rows[row][column].is_zero()
            };
            let rows = || (0..tableau.rows.len()).filter(usable);
            let equality = rows().find(|&row| self.equal.contains(&tableau.basic[row]));
            match equality.or_else(|| rows().next()) {
                Some(row) => self.tableau.pivot(row, column),
                None => {
                    self.endless |= self
                        .tableau
                        .goals
                        .iter()
                        .any(|goal| !goal[column].is_zero());
                    self.tableau.remove_column(column);
                }
            }
        }
    }

    /// Takes the variables of the equalities out of the basis and their columns out of
    /// the tableau; false if an equality cannot hold.
    fn take_in_equalities(&mut self) -> bool {
        // Those that are out already go first, so that no later pivot brings one back.
        let (within, out): (Vec<usize>, Vec<usize>) =
            (self.equal.iter()).partition(|&&variable| self.row_of(variable).is_some());
        for variable in out {
            self.remove_column_of(variable);
        }
        for variable in within {
            let Some(row) = self.row_of(variable) else {
                continue;
            };
            if !self.tableau.rows[row][0].is_zero() && self.first_entry(row).is_none() {
                return false;
            }
            self.drive_out(row);
            self.remove_column_of(variable);
        }
        true
    }

    /// Phase one: with a helper variable in every row, makes all variables at least 0
    /// and the helper 0 again; false if that cannot be.
    fn find_start(&mut self) -> bool {
        let Some(worst) = self.worst_row() else {
            return true;
        };
        let helper = self.add_helper();
        let column = self.tableau.outside.len();
        self.tableau.pivot(worst, column);
        self.tableau.rise();
        let goal = self.tableau.goals.pop();
        if goal.is_some_and(|goal| goal[0].sign() < 0) {
            return false;
        }
        if let Some(row) = self.row_of(helper) {
            self.drive_out(row);
        }
        self.remove_column_of(helper);
        true
    }

    /// The row that is furthest below 0.
    fn worst_row(&self) -> Option<usize> {
        let tableau = &self.tableau;
        (0..tableau.rows.len())
            .filter(|&row| !tableau.free[tableau.basic[row]] && tableau.rows[row][0].sign() < 0)
            .min_by(|&a, &b| tableau.rows[a][0].cmp(&tableau.rows[b][0]))
    }

    /// Adds 1 times a new variable to every row that must not be negative, and the goal
    /// to make that variable small.
    fn add_helper(&mut self) -> usize {
        let tableau = &mut self.tableau;
        let helper = tableau.free.len();
        tableau.free.push(false);
        for (row, variable) in tableau.rows.iter_mut().zip(&tableau.basic) {
            row.push(if tableau.free[*variable] {
                Whole::ZERO
            } else {
                tableau.denom.clone()
            });
        }
        for goal in &mut tableau.goals {
            goal.push(Whole::ZERO);
        }
        tableau.outside.push(helper);
        let mut goal = vec![Whole::ZERO; tableau.outside.len()];
        goal.push(tableau.denom.negated());
        tableau.goals.push(goal);
        helper
    }

    /// Takes the variable of a row out of the basis; a row without entries goes.
    fn drive_out(&mut self, row: usize) {
        match self.first_entry(row) {
            Some(column) => self.tableau.pivot(row, column),
            None => {
                self.tableau.rows.remove(row);
                self.tableau.basic.remove(row);
            }
        }
    }

    fn first_entry(&self, row: usize) -> Option<usize> {
        let entries = &self.tableau.rows[row];
        (1..entries.len()).find(|&column| !entries[column].is_zero())
    }

    fn remove_column_of(&mut self, variable: usize) {
        if let Some(column) = self.column_of(variable) {
            self.tableau.remove_column(column);
        }
    }

    fn row_of(&self, variable: usize) -> Option<usize> {
        self.tableau.basic.iter().position(|&v| v == variable)
    }

    fn column_of(&self, variable: usize) -> Option<usize> {
        let outside = self.tableau.outside.iter().position(|&v| v == variable);
        outside.map(|index| index + 1)
    }

    fn value(&self, variable: usize) -> BigRational {
        self.tableau.value(variable).ratio(&self.tableau.denom)
    }
}

/// The row `limit - coefficients . x`, written in the variables of the tableau.
fn slack_row(condition: &Condition, places: &[Place]) -> Vec<Whole> {
    let mut row = vec![condition.limit.clone()];
    for (variable, place) in places.iter().enumerate() {
        let Some(coefficient) = condition.coefficients.get(variable) else {
            row.push(BigRational::zero());
            continue;
        };
        match place {
            Place::Above(fixed) | Place::Below(fixed) => row[0] -= coefficient * fixed,
            Place::Free => {}
        }
        row.push(-turned(coefficient, place));
    }
    whole::whole_row(&row)
}

/// The coefficient of the tableau's variable.
fn turned(coefficient: &BigRational, place: &Place) -> BigRational {
    match place {
        Place::Free | Place::Above(_) => coefficient.clone(),
        Place::Below(_) => -coefficient,
    }
}

fn sum_of_products(a: &[BigRational], b: &[BigRational]) -> BigRational {
    a.iter().zip(b).map(|(p, q)| p * q).sum()
}
