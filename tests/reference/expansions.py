"""Random splits and expansions, worked out with SymPy: writes or checks expansions.json.

    python expansions.py            makes the stored file
    python expansions.py --check    makes the cases anew and compares

A case holds a script with an equation whose terms hold split fields in linear and nonlinear
places. `ranked` lists, for each written term, what `rank` makes of it: exact number (amount)
and exponents over scales and constants; nonlinear places go to the second order in the ratios
of the parts, linear ones are exact; what cancels with the third order is left out. `orders`
lists, order by order up to the third, what `expand` makes of the equation under its limit:
exact number with its sign on its side, groups without the small one, and fields with their
orders and powers.
"""

import random
from fractions import Fraction

import sympy as sp

from stored import write_or_check

N_CASES = 220
MOST_TERMS = 60
HIGHEST = 3
STEPS = [Fraction(1), Fraction(1, 2), Fraction(2), Fraction(3, 2)]
POWERS = [-1, -2, -3, Fraction(1, 2), Fraction(-1, 2), Fraction(-3, 2), Fraction(2, 3), 2, 3]
EPS, DELTA = sp.symbols("eps delta", positive=True)


def symbol(name):
    return sp.Symbol(name, positive=True)


def exact(number):
    return str(sp.nsimplify(number))


def pieces(expression):
    return sp.Add.make_args(sp.expand(expression))


class Case:
    """One random script with what comes of it."""

    def __init__(self, seed):
        self.random = random.Random(seed)
        n_ratios = self.random.choice([1, 1, 2, 2, 3])
        steps = [Fraction(1)] + [self.random.choice(STEPS) for _ in range(n_ratios - 1)]
        self.steps = {f"e_{i + 1}": step for i, step in enumerate(steps)}
        # Split field: base, perturbation with its sign, the ratio of their sizes.
        self.splits = {
            f"q_{i + 1}": (f"b_{i + 1}", self.random.choice([1, -1]), f"p_{i + 1}", f"e_{i + 1}")
            for i in range(n_ratios)
        }
        self.terms = [self.term() for _ in range(2)]

    # ---- the script

    def term(self):
        """A written term: number, linear split fields, and (split field, power) factors."""
        number = sp.Rational(self.random.randint(1, 9), self.random.choice([1, 2, 3, 4, 5]))
        linear = [name for name in self.splits if self.random.random() < 0.2]
        nonlinear = [(self.random.choice(list(self.splits)), self.random.choice(POWERS))]
        if self.random.random() < 0.25:
            nonlinear.append((self.random.choice(list(self.splits)), self.random.choice(POWERS)))
        # A power of one field stands once: the same base twice is one factor of another power.
        nonlinear = dict(nonlinear)
        return number, linear, sorted(nonlinear.items())

    def spelt(self, term):
        number, linear, nonlinear = term
        factors = [str(number)] if number.q == 1 else [f"({number})"]
        factors += linear
        text = "*".join(factors)
        for name, power in nonlinear:
            power = Fraction(power)
            if power == -1:
                text += f"/{name}"
            elif power < 0 and power.denominator == 1:
                text += f"/{name}^{-power}"
            elif power == Fraction(1, 2):
                text += f"*sqrt({name})"
            else:
                text += f"*{name}^({power})"
        return text

    def script(self):
        lines = []
        for i, (name, (base, sign, part, ratio)) in enumerate(self.splits.items()):
            lines += [
                f"scale B_{i + 1} = {self.random.randint(2, 9)} m",
                f"scale S_{i + 1} = {i + 1} cm",
                f"group {ratio} = S_{i + 1}/B_{i + 1}",
                f"field {base}(x) ~ B_{i + 1}",
                f"field {part}(x) ~ S_{i + 1}",
                f"field {name} = {base} {'+' if sign > 0 else '-'} {part}",
            ]
        lines.insert(0, "scale L = 1 km\ncoordinate x ~ L")
        sides = [[], []]
        for i, term in enumerate(self.terms):
            # Constants of the right dimension make each term a pure number of order one.
            sides[0 if i < len(self.terms) - 1 else 1].append(self.weighted(i, term, lines))
        left, right = (" + ".join(side) for side in sides)
        lines.append(f"equation e: {left} = {right}")
        others = [f"{name} ~ e_1^({step})" for name, step in self.steps.items() if name != "e_1"]
        limit = f"limit e_1 -> 0 with {', '.join(others)}" if others else "limit e_1 -> 0"
        return "\n".join(lines + ["rank", limit, f"expand to order {HIGHEST}"]) + "\n"

    def weighted(self, i, term, lines):
        number, linear, nonlinear = term
        weight = {}
        for name, power in [(name, 1) for name in linear] + nonlinear:
            weight[name] = weight.get(name, Fraction(0)) + Fraction(power)
        text = self.spelt(term)
        for name, power in weight.items():
            if power != 0:
                scale = "B_" + name.split("_")[1]
                text += f"*{scale}^({-power})"
        return text

    # ---- what rank makes of it

    def ranked(self):
        found = []
        for number, linear, nonlinear in self.terms:
            exprs = sp.Integer(1)
            scale = sp.Integer(1)
            for name in linear:
                base, sign, part, _ = self.splits[name]
                exprs *= symbol(base) + sign * symbol(part)
                scale /= symbol("B_" + name.split("_")[1])
            for name, power in nonlinear:
                base, sign, part, _ = self.splits[name]
                power = sp.Rational(str(Fraction(power)))
                inside = symbol(base) + sign * symbol(part)
                if power.is_integer and power > 0:
                    exprs *= inside**power
                else:
                    marked = (1 + sign * DELTA * symbol(part) / symbol(base)) ** power
                    exprs *= symbol(base) ** power * marked
                scale *= symbol("B_" + name.split("_")[1]) ** (-power)
            # Whole powers are multiplied out and do not count.
            # What the next order takes away again, as in q*(1/q), is not there.
            series = sp.series(exprs, DELTA, 0, 4).removeO()
            beyond = {piece.as_coeff_Mul()[1] for piece in pieces(series.subs(DELTA, 1))}
            series = sp.series(exprs, DELTA, 0, 3).removeO().subs(DELTA, 1)
            own = pieces(series)
            total = sp.expand(number * sp.Add(*(p for p in own if p.as_coeff_Mul()[1] in beyond)))
            sizes = {}
            for i, name in enumerate(self.splits):
                base, _, part, _ = self.splits[name]
                sizes[symbol(base)] = symbol(f"B_{i + 1}")
                sizes[symbol(part)] = symbol(f"S_{i + 1}")
            terms = []
            for piece in sp.Add.make_args(total):
                coefficient, rest = piece.as_coeff_Mul()
                if coefficient == 0:
                    continue
                powers = sp.powsimp(rest.subs(sizes, simultaneous=True) * scale).as_powers_dict()
                exponents = {str(base): exact(power) for base, power in powers.items() if base != 1}
                exponents = {name: power for name, power in exponents.items() if power != "0"}
                powers = [f"{name}^{power}" for name, power in sorted(exponents.items())]
                terms.append(" ".join([exact(abs(coefficient)), *powers]))
            found.append(sorted(terms))
        return found

    # ---- what expand makes of it

    def orders(self):
        steps = sorted(self.generated())
        found = {}
        for side, terms in (("left", self.terms[:-1]), ("right", self.terms[-1:])):
            total = sum((self.in_series(term, steps) for term in terms), sp.Integer(0))
            for piece in sp.Add.make_args(sp.expand(total)):
                if piece == 0:
                    continue
                self.take(found, side, piece)
        return {order: sorted(found[order]) for order in sorted(found, key=Fraction)}

    def generated(self):
        """All orders that occur: sums of the orders of the coefficients."""
        generators = set()
        for term in self.terms:
            for piece in sp.Add.make_args(self.plain(term)):
                order = piece.as_powers_dict().get(EPS, 0)
                if 0 < order <= HIGHEST:
                    generators.add(Fraction(str(order)))
        orders = {Fraction(0)}
        while True:
            more = {a + b for a in orders for b in generators if a + b <= HIGHEST} | orders
            if more == orders:
                return orders
            orders = more

    def plain(self, term):
        """A term up to the highest order, its fields not yet series."""
        number, linear, nonlinear = term
        total = sp.Integer(1)
        for name, power in [(name, 1) for name in linear] + nonlinear:
            total = self.cut(total * self.power(name, power, sp.Integer(1), symbol(self.splits[name][2])))
        return sp.expand(number * total)

    def power(self, name, power, base, part):
        """(base + e part)^power by the binomial series; the base has the size 1."""
        _, sign, _, ratio = self.splits[name]
        step = sp.Rational(str(self.steps[ratio]))
        power = sp.Rational(str(Fraction(power)))
        small = sign * EPS**step * symbol(ratio) * part / base
        n = int(HIGHEST / step) + 1
        terms = (sp.binomial(power, k) * small**k for k in range(n + 1))
        return self.cut(base**power * sum(terms))

    def cut(self, expr):
        kept = []
        for piece in sp.Add.make_args(sp.expand(expr)):
            if piece.as_powers_dict().get(EPS, 0) <= HIGHEST:
                kept.append(piece)
        return sp.Add(*kept)

    def in_series(self, term, steps):
        number, linear, nonlinear = term
        total = sp.Integer(1)
        for name, power in [(name, 1) for name in linear] + nonlinear:
            base, _, part, _ = self.splits[name]
            first, later = symbol(f"{base}@0"), sp.Integer(0)
            for step in steps[1:]:
                later += symbol(f"{base}@{step}") * EPS ** sp.Rational(str(step))
            parts = sum(symbol(f"{part}@{s}") * EPS ** sp.Rational(str(s)) for s in steps)
            total = self.cut(total * self.series_power(name, power, first, later, parts))
        return sp.expand(number * total)

    def series_power(self, name, power, first, later, parts):
        _, sign, _, ratio = self.splits[name]
        step = sp.Rational(str(self.steps[ratio]))
        power = sp.Rational(str(Fraction(power)))
        small = self.cut((later + sign * EPS**step * symbol(ratio) * parts) / first)
        total, factor, k = sp.Integer(0), sp.Integer(1), 0
        while factor != 0:
            total += sp.binomial(power, k) * factor
            factor = self.cut(factor * small)
            k += 1
        return self.cut(first**power * total)

    def take(self, found, side, piece):
        coefficient, rest = piece.as_coeff_Mul()
        powers = rest.as_powers_dict()
        order = Fraction(str(powers.pop(EPS, 0)))
        groups, factors = [], []
        for base, power in powers.items():
            name = str(base)
            if name in self.steps:
                if name != "e_1":
                    groups.append(f"{name}^{exact(power)}")
            elif base != 1:
                factors.append(f"{name}^{exact(power)}")
        text = " ".join([side, exact(coefficient), *sorted(groups), *sorted(factors)])
        found.setdefault(str(order), []).append(text)


def make(seed):
    case = Case(seed)
    orders = case.orders()
    # Very long cases say nothing more.
    if sum(map(len, orders.values())) > MOST_TERMS:
        return None
    script = case.script()
    return {"case": f"expansion {seed}", "script": script, "ranked": case.ranked(), "orders": orders}


def cases():
    found, seed = [], 0
    while len(found) < N_CASES:
        case = make(seed)
        found += [case] if case else []
        seed += 1
    return found


if __name__ == "__main__":
    write_or_check("expansions.json", cases())
