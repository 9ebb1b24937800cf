"""Random systems of terms that are products of powers of scales, and their scripts.

Everything is dimensionless; one field of size 1 stands in every term. A scale that is
derived in the script is replaced here, as an exponent vector over the others.
"""

import math
import random
from dataclasses import dataclass, field
from fractions import Fraction

import numpy as np

NAMES = ("A", "B", "C", "D", "E", "F", "G", "H")


@dataclass
class Term:
    process: str
    number: float
    powers: dict  # exponents as written, derived scales among them
    is_left: bool

    def text(self):
        above = [power_text(s, p) for s, p in self.powers.items() if p > 0]
        below = [power_text(s, -p) for s, p in self.powers.items() if p < 0]
        return "*".join([f"{self.number:g}", *above, "q"]) + "".join(f"/{part}" for part in below)


def power_text(name, power):
    if power == 1:
        return name
    return f"{name}^{power}" if power.denominator == 1 else f"{name}^({power})"


@dataclass
class System:
    """Scales with their ranges, derived scales, and equations of terms."""

    scales: dict = field(default_factory=dict)  # name: (text, low, nominal, high)
    derived: dict = field(default_factory=dict)  # name: exponents over the scales
    equations: dict = field(default_factory=dict)  # name: terms
    tolerance: float = 0.1

    def script(self, requests):
        lines = [f"scale {name} = {text}" for name, (text, *_) in self.scales.items()]
        for name, powers in self.derived.items():
            lines.append(f"scale {name} = {'*'.join(power_text(s, p) for s, p in powers.items())}")
        lines.append("field q ~ 1")
        for name, terms in self.equations.items():
            left = " + ".join(f"{t.text()} as {t.process}" for t in terms if t.is_left)
            right = " + ".join(f"{t.text()} as {t.process}" for t in terms if not t.is_left)
            lines.append(f"equation {name}: {left} = {right or '0'}")
        lines.append(f"tolerance {100 * self.tolerance:g} %")
        return "\n".join([*lines, *requests]) + "\n"

    def slopes(self, terms):
        """One row a term: its exponents over the scales, derived ones replaced."""
        rows = np.zeros((len(terms), len(self.scales)))
        index = {name: i for i, name in enumerate(self.scales)}
        for row, term in zip(rows, terms):
            for name, power in term.powers.items():
                for part, times in self.derived.get(name, {name: 1}).items():
                    row[index[part]] += float(power * times)
        return rows

    def logs(self, terms):
        """The natural logarithms of the numbers of the terms."""
        return np.array([math.log(term.number) for term in terms])

    def box(self):
        """The logarithms of (low, nominal, high) of each scale."""
        return np.log(np.array([values for _, *values in self.scales.values()], dtype=float)).T


class Maker:
    """Makes systems from a seed."""

    def __init__(self, seed):
        self.random = random.Random(seed)
        self.width = self.random.choice([0.05, 0.2, 0.5, 1])  # how wide the ranges are

    def number(self, decades):
        """Two digits times a power of ten."""
        return float(f"{self.random.uniform(1, 9.9):.1f}e{self.random.randint(*decades)}")

    def known_scale(self):
        value = self.number((-2, 3))
        return (f"{value:g}", value, value, value)

    def ranged_scale(self):
        """A scale with a range, in one of the ways to write one."""
        value = self.number((-2, 3))
        way = self.random.randrange(4)
        if way == 0:
            high = float(f"{value * self.random.uniform(1.3, 30) ** self.width:.3g}")
            return (f"{value:g} .. {high:g}", value, math.sqrt(value * high), high)
        if way == 1:
            factor = round(1.01 + self.width * self.random.uniform(0.1, 4), 2)
            return (f"{value:g} within {factor:g}", value / factor, value, value * factor)
        if way == 2:
            percent = 1 + int(self.width * self.random.randint(5, 90))
            factor = 1 + percent / 100
            return (f"{value:g} within {percent} %", value / factor, value, value * factor)
        margin = float(f"{value * self.width * self.random.uniform(0.1, 0.8):.2g}")
        return (f"{value:g} +- {margin:g}", value - margin, value, value + margin)

    def system(self, n_scales, make_scale):
        system = System()
        for name in NAMES[:n_scales]:
            system.scales[name] = make_scale()
        for name in ("X", "Y")[: self.random.randrange(3)]:
            first, second = self.random.sample(list(system.scales), 2)
            system.derived[name] = {first: Fraction(1), second: Fraction(self.random.choice([-1, 1, 2]))}
        system.tolerance = self.random.choice([0.05, 0.1, 0.1, 0.2])
        return system

    def terms(self, system, n_terms, n_processes):
        """Terms of about one size at the nominal values, spread over two or three decades."""
        names = [*system.scales, *system.derived]
        terms = []
        for i in range(n_terms):
            powers = {}
            for name in self.random.sample(names, min(len(names), self.random.randint(1, 4))):
                powers[name] = self.random.choice([Fraction(p) for p in ("1", "1", "-1", "-1", "2", "-2", "1/2", "-1/3", "3/2")])
            process = f"p_{i + 1 if i < n_processes else self.random.randint(1, n_processes)}"
            terms.append(Term(process, 1.0, powers, is_left=i == 0 or self.random.random() < 0.6))
        terms.sort(key=lambda term: not term.is_left)  # the order of the text
        nominal = nominal_sizes(system, terms)
        for term, size in zip(terms, nominal):
            decades = self.random.uniform(-2.2, 0)
            term.number = float(f"{10**decades / size:.2g}")
        return terms


def nominal_sizes(system, terms):
    """The sizes of the terms at the nominal values."""
    return np.exp(system.logs(terms) + system.slopes(terms) @ system.box()[1])
