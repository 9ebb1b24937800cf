"""Shares of terms and processes over boxes of scales, by linear programs: writes or checks shares.json.

    python shares.py            makes the stored file
    python shares.py --check    makes the cases anew and compares

A case holds a script and, per term in order and per process, the lowest, nominal and highest
share of the largest term and the verdict. `inside` lists the terms (counted from 0) whose
highest share no corner of the box attains, `between` the processes whose lowest share none does.
"""

import itertools

import numpy as np
from scipy.optimize import linprog

from stored import write_or_check
from systems import Maker

N_CASES = 140
TIGHT = {"primal_feasibility_tolerance": 1e-10, "dual_feasibility_tolerance": 1e-10}


class Box:
    """The logarithms of the sizes of an equation's terms over the box of scales."""

    def __init__(self, system, terms):
        self.slopes, self.logs = system.slopes(terms), system.logs(terms)
        self.low, self.nominal, self.high = system.box()
        self.tolerance = system.tolerance

    def sizes(self, point):
        return self.logs + self.slopes @ point

    def maximum(self, slopes, logs):
        """The maximum over the box of the smallest of affine functions, with its proof.

        A linear program finds the point; its multipliers give a weighted mean of the
        functions, whose maximum over the box is a bound that nothing exceeds.
        """
        n = slopes.shape[1]
        rows = np.hstack([-slopes, np.ones((len(logs), 1))])
        bounds = [*zip(self.low, self.high), (None, None)]
        objective = np.append(np.zeros(n), -1.0)
        found = linprog(objective, A_ub=rows, b_ub=logs, bounds=bounds, method="highs-ds", options=TIGHT)
        attained = np.min(slopes @ found.x[:n] + logs)
        weights = np.maximum(-found.ineqlin.marginals, 0)
        weights /= weights.sum()
        mean, constant = weights @ slopes, weights @ logs
        bound = constant + np.maximum(mean * self.low, mean * self.high).sum()
        assert abs(bound - attained) < 1e-11, (bound, attained)
        return attained

    def highest(self, i):
        """Of one term against all."""
        return self.maximum(self.slopes[i] - self.slopes, self.logs[i] - self.logs)

    def lowest(self, members):
        """Of the largest of some terms against each other term: the minimum of a maximum."""
        lows = []
        for j in range(len(self.logs)):
            lows.append(-self.maximum(self.slopes[j] - self.slopes[members], self.logs[j] - self.logs[members]))
        return min(lows)

    def corner_shares(self, members):
        """The share of the largest of some terms at every corner."""
        shares = []
        for corner in itertools.product(*({low, high} for low, high in zip(self.low, self.high))):
            sizes = self.sizes(np.array(corner))
            shares.append(sizes[members].max() - sizes.max())
        return np.array(shares)

    def share(self, members):
        """Lowest, nominal and highest share and the verdict; None where it sits on the tolerance."""
        sizes = self.sizes(self.nominal)
        highest = max(self.highest(i) for i in members)
        logs = (self.lowest(members), sizes[members].max() - sizes.max(), highest)
        low, nominal, high = (float(np.exp(value)) for value in logs)
        if min(abs(low / self.tolerance - 1), abs(high / self.tolerance - 1)) < 1e-6:
            return None
        verdict = "leads" if low > self.tolerance else "depends" if high > self.tolerance else "drops"
        return [low, nominal, high, verdict]


def make_case(seed):
    """A case without its name; None where a share sits on the tolerance."""
    maker = Maker(seed)
    system = maker.system(maker.random.randint(2, 8), maker.ranged_scale)
    n_terms = maker.random.randint(3, 12)
    n_processes = maker.random.randint(2, n_terms)
    terms = maker.terms(system, n_terms, n_processes)
    system.equations["total"] = terms
    box = Box(system, terms)
    members = {}
    for i, term in enumerate(terms):
        members.setdefault(term.process, []).append(i)
    shares = [box.share([i]) for i in range(n_terms)]
    processes = {name: box.share(of_it) for name, of_it in members.items()}
    if None in shares or None in processes.values():
        return None
    inside = [i for i in range(n_terms) if np.log(shares[i][2]) > box.corner_shares([i]).max() + 1e-6]
    between = [
        name for name, of_it in members.items()
        if len(of_it) > 1 and np.log(processes[name][0]) < box.corner_shares(of_it).min() - 1e-6
    ]
    return {
        "script": system.script(["rank"]), "terms": shares, "processes": processes, "inside": inside, "between": between,
    }


def make_cases():
    cases, seed = [], 0
    while len(cases) < N_CASES:
        case = make_case(seed)
        if case:
            cases.append({"case": f"s{len(cases) + 1:03}", **case})
        seed += 1
    assert sum(bool(case["inside"]) for case in cases) >= 15
    assert sum(bool(case["between"]) for case in cases) >= 15
    return cases


if __name__ == "__main__":
    write_or_check("shares.json", make_cases())
