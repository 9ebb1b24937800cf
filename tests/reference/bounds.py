"""Where reduced systems stand, by scanning one scale at a time: writes or checks bounds.json.

    python bounds.py            makes the stored file
    python bounds.py --check    makes the cases anew and compares

A case holds a script, what is dropped at the nominal values, and per scale two intervals, over
which the reduced system stands and over which it stays the same: [low, high, equations and
processes of which one ends it below, and above]. `null`: nothing within 40 decades ends it.
`nearest` is the scale with the nearest end and the factor to it, `null` where two are as near.
"""

import numpy as np

from stored import write_or_check
from systems import Maker

N_CASES = 300
DECADES, STEP = 40, 0.001  # of the scan
GRID = np.arange(STEP, DECADES, STEP) * np.log(10)


class Reduced:
    """An equation reduced at the nominal values."""

    def __init__(self, system, name, terms):
        self.name, self.terms = name, terms
        self.slopes, self.logs = system.slopes(terms), system.logs(terms)
        self.tolerance = np.log(system.tolerance)
        self.nominal = self.sizes(system.box()[1])
        shares = self.nominal - self.nominal.max()
        self.is_settled = np.abs(shares - self.tolerance).min() > 1e-2
        self.kept = shares > self.tolerance
        self.processes = {}
        for i, term in enumerate(terms):
            self.processes.setdefault(term.process, []).append(i)
        leading = [p for p, of_it in self.processes.items() if self.kept[of_it].any()]
        self.n_leading = len(leading)

    def sizes(self, point):
        return self.logs + self.slopes @ point

    def margins(self, axis, moved):
        """What must stay above 0 for the system to stand: the margin of each dropped term, then
        that of the second process; and, to stay the same, that of each kept term.

        `moved` is how far the logarithm of the scale has moved from its nominal value.
        """
        sizes = self.nominal[:, None] + self.slopes[:, axis][:, None] * moved
        largest = sizes[self.kept].max(axis=0)
        standing = {}
        for i in np.flatnonzero(~self.kept):
            standing[i] = largest + self.tolerance - sizes[i]
        second = None
        if self.n_leading >= 2:
            of_process = np.array([sizes[of_it].max(axis=0) for of_it in self.processes.values()])
            second = np.sort(of_process, axis=0)[-2] - of_process.max(axis=0) - self.tolerance
        kept = {i: sizes[i] - sizes.max(axis=0) - self.tolerance for i in np.flatnonzero(self.kept)}
        return standing, second, kept

    def second_process(self, axis, moved):
        """The process that is the second largest there."""
        sizes = self.nominal + self.slopes[:, axis] * moved
        by_size = sorted(self.processes, key=lambda p: sizes[self.processes[p]].max())
        return by_size[-2]


class Tangent(Exception):
    """A margin comes near to 0 without a clear crossing: the scan could miss it."""


def first_crossing(along, margin):
    """Where a margin first falls to 0, None if nowhere: its values along the scan, then itself."""
    below = np.flatnonzero(along <= 0)
    before = along[: below[0]] if len(below) else along
    turns = before[1:-1][(before[1:-1] <= before[:-2]) & (before[1:-1] <= before[2:])]
    if len(turns) and turns.min() < 0.02:
        raise Tangent
    if not len(below):
        return None
    inside, outside = GRID[below[0]] - STEP * np.log(10), GRID[below[0]]
    for _ in range(80):
        middle = (inside + outside) / 2
        if margin(np.array([middle]))[0] > 0:
            inside = middle
        else:
            outside = middle
    return outside


def ends(equations, axis, sign):
    """The nearest ends of the two intervals on one side, with all that ends them: [moved, enders]."""
    standing, unchanged = [], []
    for equation in equations:
        dropped, second, kept = equation.margins(axis, sign * GRID)
        for i, along in dropped.items():
            moved = first_crossing(along, lambda d: equation.margins(axis, sign * d)[0][i])
            standing.append((moved, [equation.name, equation.terms[i].process]))
        if second is not None:
            moved = first_crossing(second, lambda d: equation.margins(axis, sign * d)[1])
            if moved is not None:
                standing.append((moved, [equation.name, equation.second_process(axis, sign * moved)]))
        for i, along in kept.items():
            moved = first_crossing(along, lambda d: equation.margins(axis, sign * d)[2][i])
            unchanged.append((moved, [equation.name, equation.terms[i].process]))
    return nearest_end(standing), nearest_end(standing + unchanged)


def nearest_end(found):
    reached = [(moved, ender) for moved, ender in found if moved is not None]
    if not reached:
        return None, []
    nearest = min(moved for moved, _ in reached)
    enders = sorted({tuple(ender) for moved, ender in reached if moved < nearest + 1e-9})
    return nearest, [list(ender) for ender in enders]


def nearest_way_out(standing):
    """The scale with the nearest end and the factor to it; `none` without one, None in a tie."""
    ways = []
    for name, sides in standing.items():
        ways += [(moved, name, sign * moved) for sign, (moved, _) in zip((-1, 1), sides) if moved is not None]
    ways.sort()
    if not ways:
        return "none"
    if len(ways) > 1 and ways[1][0] - ways[0][0] < 1e-9:
        return None
    return [ways[0][1], float(np.exp(ways[0][2]))]


def make_system(maker):
    system = maker.system(maker.random.randint(2, 6), maker.known_scale)
    for i in range(maker.random.choice([1, 1, 2, 3])):
        n_terms = maker.random.randint(3, 8)
        system.equations[f"e_{i + 1}"] = maker.terms(system, n_terms, maker.random.randint(2, n_terms))
    return system


def make_case(seed):
    """A case without its name; None where something sits on the tolerance or an equation is left out."""
    maker = Maker(seed)
    system = make_system(maker)
    equations = [Reduced(system, name, terms) for name, terms in system.equations.items()]
    if any(not equation.is_settled or equation.kept.sum() < 2 for equation in equations):
        return None
    scales, standing = {}, {}
    for axis, (name, (_, _, nominal, _)) in enumerate(system.scales.items()):
        if not any(equation.slopes[:, axis].any() for equation in equations):
            continue
        sides = [ends(equations, axis, sign) for sign in (-1, 1)]
        standing[name] = [side[0] for side in sides]
        scales[name] = [interval(nominal, [side[which] for side in sides]) for which in (0, 1)]
    dropped = sorted({(e.name, e.terms[i].process) for e in equations for i in np.flatnonzero(~e.kept)})
    listed = " " + ", ".join(scales) if seed % 2 else ""
    return {
        "script": system.script(["bounds" + listed]), "dropped": [list(d) for d in dropped],
        "scales": scales, "nearest": nearest_way_out(standing),
    }


def interval(nominal, sides):
    (low, enders_below), (high, enders_above) = sides
    return [
        None if low is None else float(nominal * np.exp(-low)),
        None if high is None else float(nominal * np.exp(high)), enders_below, enders_above,
    ]


def make_cases():
    cases, seed = [], 0
    while len(cases) < N_CASES:
        seed += 1
        try:
            case = make_case(seed)
        except Tangent:
            continue
        if case:
            cases.append({"case": f"b{len(cases) + 1:03}", **case})
    return cases


if __name__ == "__main__":
    write_or_check("bounds.json", make_cases())
