//! Which equations contradict one another, where a system has no balance.

use std::ops::ControlFlow;

use super::contests::Prepared;
use super::prevariety::{Ending, System};
use super::search::Search;

/// A smallest set of equations without a common balance, the first in their order.
///
/// Sets are tried by size. Each balance met on the way shows a whole set of equations
/// that do go together; its subsets need no trial.
pub(super) fn smallest(
    system: &System,
    watch: &mut dyn FnMut(usize) -> ControlFlow<()>,
) -> Option<Vec<usize>> {
    let prepared = Prepared::new(system);
    let n_contests = prepared.contests.len();
    let mut compatible: Vec<Vec<bool>> = Vec::new();
    for size in 1..=n_contests {
        let mut subset = Some((0..size).collect::<Vec<usize>>());
        while let Some(contests) = subset {
            let known = |set: &Vec<bool>| contests.iter().all(|&contest| set[contest]);
            if !compatible.iter().any(known) {
                match try_together(&prepared, &contests, watch) {
                    Trial::Together(set) => compatible.push(set),
                    Trial::Apart => {
                        let equation = |&contest: &usize| prepared.contests[contest].equation;
                        return Some(contests.iter().map(equation).collect());
                    }
                    Trial::Ended => return None,
                }
            }
            subset = next_subset(contests, n_contests);
        }
    }
    None
}

enum Trial {
    /// These have a balance in common; for each contest, whether it has one there too.
    Together(Vec<bool>),
    Apart,
    Ended,
}

fn try_together(
    prepared: &Prepared,
    contests: &[usize],
    watch: &mut dyn FnMut(usize) -> ControlFlow<()>,
) -> Trial {
    let part = prepared.only(contests);
    let mut point = None;
    let ending = Search::new(&part, watch).consistent_cells(&mut |_, cell, _| {
        point = Some(cell.inner_point());
        ControlFlow::Break(Ending::Complete)
    });
    match (point, ending) {
        (Some(point), _) => Trial::Together(prepared.balanced_at(&point)),
        (None, Ending::Complete) => Trial::Apart,
        (None, Ending::Stopped | Ending::TooLarge) => Trial::Ended,
    }
}

/// The next subset of the same size of `0..n`, in lexicographic order.
fn next_subset(mut subset: Vec<usize>, n: usize) -> Option<Vec<usize>> {
    let size = subset.len();
    let place = (0..size)
        .rev()
        .find(|&place| subset[place] < n - size + place)?;
    subset[place] += 1;
    for later in place + 1..size {
        subset[later] = subset[later - 1] + 1;
    }
    Some(subset)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn subsets_come_in_order_each_once() {
        let mut all = vec![vec![0, 1]];
        while let Some(next) = next_subset(all[all.len() - 1].clone(), 4) {
            all.push(next);
        }
        assert_eq!(all, [[0, 1], [0, 2], [0, 3], [1, 2], [1, 3], [2, 3]]);
        assert_eq!(next_subset(vec![0, 1, 2], 3), None);
    }
}
