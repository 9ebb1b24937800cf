"""Random equations and their terms, scaled with SymPy: writes or checks nondimensional.json.

    python nondimensional.py            makes the stored file
    python nondimensional.py --check    makes the cases anew and compares

A case holds a script and, for each written term in order, its side and what comes out of it:
process (null: none), exact number with the sign it has on its side, exact exponents, size in
SI units. What comes out of one written term has no order here.
"""

import random
import re
from fractions import Fraction

import sympy as sp

from scaling import Field, Setting, Unsettled, symbol
from stored import write_or_check
from writing import Writer, unit_text

N_CASES = 240
# Scale: dimension over kg m s K, decade of its nominal value.
SCALES = {
    "U": ((0, 1, -1, 0), 1), "W": ((0, 1, -1, 0), -2), "L": ((0, 1, 0, 0), 6), "M": ((0, 1, 0, 0), 5),
    "H": ((0, 1, 0, 0), 4), "H_r": ((0, 1, 0, 0), 3), "T": ((0, 0, 1, 0), 5), "P": ((1, -1, -2, 0), 4),
    "dP": ((1, -1, -2, 0), 3), "R": ((1, -3, 0, 0), 0), "dR": ((1, -3, 0, 0), -2), "Th": ((0, 0, 0, 1), 2),
    "dTh": ((0, 0, 0, 1), 0), "Q": ((0, 0, 0, 0), -2), "B": ((0, 1, -2, 0), -1), "E": ((0, 1, 0, 0), 0),
    "dU": ((0, 1, -1, 0), 0), "K": ((0, 2, -1, 0), 1),
}
# Field: its scale and the scale that it may vary by.
FIELDS = {
    "u": ("U", "dU"), "v": ("U", "dU"), "w": ("W", None), "p": ("P", "dP"), "rho": ("R", "dR"),
    "theta": ("Th", "dTh"), "q": ("Q", None), "b": ("B", None), "eta": ("E", None), "kappa": ("K", None),
}
ACCELERATION = (0, 1, -2, 0)
NAME = re.compile(r"[A-Za-z_0-9]+'?")


def plus(a, b, times=1):
    return tuple(x + times * y for x, y in zip(a, b))


class Script:
    """One random script: its declarations, its written terms, and their scaled form."""

    def __init__(self, seed):
        self.random = random.Random(seed)
        self.writer = Writer(self.random)
        self.values = {}
        self.derived = {}
        self.dimensions = {name: dimension for name, (dimension, _) in SCALES.items()}
        self.constants = []
        self.declare_scales()
        self.declare_fields()
        self.setting = Setting(
            self.values, self.derived, self.coordinates, self.fields, self.splits,
            [("u", "x"), ("v", "y"), ("w", "z")],
        )

    def chance(self, p):
        return self.random.random() < p

    def number(self, decade):
        return sp.Rational(self.random.randint(11, 97), 10) * sp.Rational(10) ** decade

    # ---- declarations

    def declare_scales(self):
        for name, (_, decade) in SCALES.items():
            self.values[name] = self.number(decade)
        factor = self.random.choice([1, 1, 2, sp.Rational(1, 4)])
        recipes = {"T": "L/U", "W": "U*H/L", "dP": "R*U^2", "H_r": "H/4", "dTh": "Th*U^2/(M*B)", "E": "U^2/B"}
        self.recipes = {}
        for name, recipe in recipes.items():
            if self.chance(0.4):
                text = f"{factor}*{recipe}" if name in ("T", "W") and factor != 1 else recipe
                self.recipes[name] = text
                names = {s: symbol(s) for s in SCALES}
                self.derived[name] = sp.sympify(text.replace("^", "**"), locals=names)
                del self.values[name]

    def declare_fields(self):
        horizontal = symbol("L")
        other = self.random.choice([horizontal, symbol("M"), 2 * horizontal])
        self.coordinates = {"x": horizontal, "y": other, "z": symbol("H"), "t": symbol("T")}
        self.splits = {}
        self.fields = {name: self.make_field(name) for name in FIELDS}
        if self.chance(0.5):
            parts = ("s_0", "s'")
            for name, scale, depends in zip(parts, ("Th", "dTh"), ("xz", "xyzt")):
                lengths = {c: self.coordinates[c] for c in depends}
                self.fields[name] = Field(name, scale, lengths)
            self.splits["s"] = parts

    def make_field(self, name):
        scale, varying = FIELDS[name]
        depends = "xyzt" if name in "uvw" else self.random.choice(["xyzt", "xyzt", "xzt", "xyz", "yz", "xy"])
        lengths = {c: self.coordinates[c] for c in depends}
        if "z" in depends and self.chance(0.25):
            lengths["z"] = symbol("H_r")
        if "x" in depends and self.chance(0.12):
            lengths["x"] = symbol("M")
        one = Field(name, scale, lengths)
        if varying and self.chance(0.35):
            if "z" in depends and self.chance(0.4):
                one.varying_along["z"] = varying
            else:
                one.varying = varying
        return one

    # ---- trees

    def a_field(self, names=None):
        return ("field", self.random.choice(names or [*FIELDS, *self.splits]))

    def plain_field(self):
        return self.a_field(list(FIELDS))

    def axes(self, n):
        return tuple(self.random.choice("xyzt" if n == 1 else "xyz") for _ in range(n))

    def of_field(self):
        return ("derivative", self.axes(self.random.choice([1, 1, 2, 2, 3])), self.a_field())

    def of_product(self):
        factors = [self.plain_field() for _ in range(self.random.choice([2, 2, 3]))]
        if self.chance(0.2):
            factors[0] = ("power", factors[0], 2)
        if self.chance(0.15):
            factors[1] = ("field", self.random.choice("xyz"))
        n = self.random.choice([1, 1, 2])
        axes = self.axes(n) if self.chance(0.5) else (self.random.choice("xyz"),) * n
        return ("derivative", axes, ("product", factors))

    def nested(self):
        axes = self.axes(1)
        inner = ("derivative", axes if self.chance(0.7) else self.axes(1), self.plain_field())
        return ("derivative", axes, ("product", [self.plain_field(), inner]))

    def product_of_sums(self):
        first, second = ("field", "u"), ("field", "v")
        if self.chance(0.3):
            first, second = ("field", "p"), ("product", [("field", "rho"), ("power", ("field", "u"), 2)])
        weight = ("product", [("number", sp.Integer(self.random.choice([2, 3]))), second])
        left = ("sum", [(1, first), (self.random.choice([1, -1]), second)])
        right = ("sum", [(1, first), (self.random.choice([1, -1]), self.random.choice([second, weight]))])
        return ("product", [left, right])

    def of_sum(self):
        parts = [(1, ("field", "u")), (-1, ("product", [("number", sp.Integer(2)), ("field", "v")]))]
        return ("derivative", self.axes(self.random.choice([1, 2])), ("sum", parts))

    def sized(self):
        parts = [(1, ("derivative", ("x",), ("field", "u"))), (1, ("derivative", ("y",), ("field", "v")))]
        largest = max(self.setting.value(self.setting.sized(self.setting.plain(p))) for _, p in parts)
        name = f"D_{len(self.constants) + 1}"
        self.values[name] = sp.Rational(f"{float(largest) / 20:.1e}")
        self.dimensions[name] = (0, 0, -1, 0)
        self.constants.append((name, f"scale {name} = {float(self.values[name]):g}{unit_text((0, 0, -1, 0))}"))
        return ("product", [("sized", ("sum", parts), name), self.plain_field()])

    def carried(self):
        inner = self.plain_field() if self.chance(0.8) else ("product", [self.plain_field(), self.plain_field()])
        return ("carried", inner)

    def core(self):
        """The part of a written term that makes it what it is."""
        maker = self.random.choice([
            self.plain_field, self.of_field, self.of_field, self.of_product, self.of_product, self.of_product,
            self.nested, self.product_of_sums, self.of_sum, self.sized, self.carried, self.carried,
        ])
        return maker()

    def written_term(self):
        """A written term as (tree, process): a core with factors, brought to an acceleration."""
        factors = [self.core()]
        while self.chance(0.35):
            factors.append(self.a_factor())
        if self.chance(0.3):
            factors.insert(0, ("number", self.random.choice([sp.Rational(n) for n in ("2", "3/4", "0.5", "5/3", "12")])))
        missing = plus(ACCELERATION, self.dimension(("product", factors)), -1)
        if any(missing):
            factors.insert(0, self.compensation(missing))
        tree = ("product", factors) if len(factors) > 1 else factors[0]
        can_be_named = tree[0] == "carried" or all(factor[0] != "carried" for factor in factors)
        process = f"part {len(self.constants)}" if can_be_named and self.chance(0.5) else None
        return tree, process

    def a_factor(self):
        choice = self.random.randrange(6)
        if choice == 0:
            return ("power", self.plain_field(), self.random.choice([-1, 2, sp.Rational(1, 2), sp.Rational(3, 2)]))
        if choice == 1:
            return ("power", ("derivative", self.axes(1), self.plain_field()), 2)
        if choice == 2:
            return ("scale", self.random.choice(list(SCALES)))
        if choice == 3:
            return ("field", self.random.choice("xyz"))
        return self.a_field()

    def compensation(self, dimension):
        """A factor of this dimension: a literal, a constant or a derived constant."""
        if dimension == (0, 1, 0, 0) and self.chance(0.5):
            return ("literal", "3 km", sp.Integer(3000), dimension)
        name = f"k_{len(self.constants) + 1}"
        value = self.number(self.random.randint(-6, 3))
        own, recipe = name, None
        if self.chance(0.25):
            own, recipe = f"m_{len(self.constants) + 1}", self.random.choice(["L/U", "H^2", "M^(1/2)", "1/P"])
            names = {s: symbol(s) for s in SCALES}
            product = sp.sympify(recipe.replace("^", "**"), locals=names)
            self.derived[name] = symbol(own) * product
            for s, power in product.as_powers_dict().items():
                if s.is_Symbol:
                    dimension = plus(dimension, self.dimensions[s.name], -Fraction(str(power)))
        self.values[own] = value
        self.constants.append((own, f"constant {own} = {float(value):g}{unit_text(dimension)}"))
        if recipe:
            self.constants.append((name, f"constant {name} = {own}*{recipe}"))
        self.dimensions[name] = dimension if not recipe else plus(dimension, self.recipe_dimension(recipe))
        return ("scale", name)

    def recipe_dimension(self, recipe):
        return {"L/U": (0, 0, 1, 0), "H^2": (0, 2, 0, 0), "M^(1/2)": (0, Fraction(1, 2), 0, 0), "1/P": (-1, 1, 2, 0)}[recipe]

    def dimension(self, tree):
        kind, *parts = tree
        zero = (0, 0, 0, 0)
        match kind:
            case "number":
                return zero
            case "literal":
                return parts[2]
            case "scale":
                return self.dimensions[parts[0]]
            case "field":
                if parts[0] in self.coordinates:
                    return (0, 1, 0, 0) if parts[0] != "t" else (0, 0, 1, 0)
                name = self.splits.get(parts[0], parts)[0]
                return self.dimensions[self.fields[name].scale]
            case "product":
                out = zero
                for part in parts[0]:
                    out = plus(out, self.dimension(part))
                return out
            case "sum":
                return self.dimension(parts[0][0][1])
            case "power":
                return tuple(Fraction(str(parts[1])) * x for x in self.dimension(parts[0]))
            case "sized":
                return self.dimensions[parts[1]]
            case "derivative":
                out = self.dimension(parts[1])
                for axis in parts[0]:
                    out = plus(out, (0, 0, 1, 0) if axis == "t" else (0, 1, 0, 0), -1)
                return out
            case "carried":
                return plus(self.dimension(parts[0]), (0, 0, 1, 0), -1)
        raise ValueError(kind)

    # ---- the case

    def case(self, name):
        """The script with its scaled terms; None where the rules leave something open."""
        written = []
        try:
            for _ in range(self.random.randint(3, 6)):
                tree, process = self.written_term()
                written.append((tree, process, self.scaled(tree, process)))
        except Unsettled:
            return None
        if sum(len(scaled) for _, _, scaled in written) < 2:
            return None
        n_left = self.random.randint(1, len(written))
        terms, sides = [], {"left": "", "right": ""}
        for i, (tree, process, scaled) in enumerate(written):
            side = "left" if i < n_left else "right"
            minus = self.chance(0.4)
            sides[side] += self.signed_text(tree, process, minus, is_first=not sides[side])
            terms.append({"side": side, "terms": [signed(term, minus) for term in scaled]})
        equation = f"equation balance_of_all: {sides['left']} = {sides['right'] or '0'}"
        return {"case": name, "script": self.script(equation), "terms": terms}

    def signed_text(self, tree, process, minus, is_first):
        text = self.writer.text(tree)
        sign = ("-" if minus else "") if is_first else (" - " if minus else " + ")
        return sign + text + (f' as "{process}"' if process else "")

    def scaled(self, tree, process):
        """What comes out of a written term: [process, number, exponents, size], ..."""
        out = []
        for own, terms in self.setting.terms_of(as_plain(tree)):
            for term in sp.Add.make_args(terms):
                if term == 0:
                    continue
                size = self.setting.base(self.setting.sized(term))
                number, powers = split_number(size)
                value = abs(self.setting.value(size))
                out.append([process or own, str(number), powers, float(value)])
        return sorted(out, key=lambda term: (str(term[0]), sorted(term[2].items()), term[1]))

    def script(self, equation):
        lines = []
        for name, (dimension, _) in SCALES.items():
            value = self.recipes.get(name) or f"{float(self.values[name]):g}{unit_text(dimension)}"
            lines.append((name, f"scale {name} = {value}"))
        lines += [(name, f"coordinate {name} ~ {product}") for name, product in self.coordinates.items()]
        lines += [(one.name, self.field_text(one)) for one in self.fields.values()]
        lines += [(name, f"field {name} = {' + '.join(parts)}") for name, parts in self.splits.items()]
        lines.append(("D_t", "velocity (u, v, w) along (x, y, z)"))
        lines += self.constants
        return "\n".join([*needed(lines, equation), equation, "rank", "nondimensionalize"]) + "\n"

    def field_text(self, one):
        depends = []
        for name, length in one.lengths.items():
            own = "" if length == self.coordinates[name] else f" ~ {length}"
            along = f" varying {one.varying_along[name]}" if name in one.varying_along else ""
            depends.append(name + own + along)
        varying = f" varying {one.varying}" if one.varying else ""
        return f"field {one.name}({', '.join(depends)}) ~ {one.scale}{varying}"


def needed(lines, equation):
    """The declarations that an equation needs, themselves through others too; all coordinates."""
    names, more = set(), {"x", "y", "z", "t", *NAME.findall(equation)}
    while more - names:
        names |= more
        more = {found for name, text in lines if name in names for found in NAME.findall(text)}
    return [text for name, text in lines if name in names]


def as_plain(tree):
    """The tree with literals as numbers."""
    if tree[0] == "literal":
        return ("number", tree[2])
    if tree[0] == "product":
        return ("product", [as_plain(part) for part in tree[1]])
    return tree


def split_number(size):
    """A product of powers as its rational number and its exponents."""
    number, powers = sp.Integer(1), {}
    for base, power in size.as_powers_dict().items():
        if base.is_Symbol:
            powers[base.name] = str(power)
        else:
            number *= base**power
    if not number.is_Rational:
        raise Unsettled
    return number, dict(sorted(powers.items()))


def signed(term, minus):
    process, number, powers, size = term
    return [process, str(-sp.Rational(number)) if minus else number, powers, size]


def make_cases():
    cases, seed = [], 0
    while len(cases) < N_CASES:
        case = Script(seed).case(f"n{len(cases) + 1:03}")
        if case:
            cases.append(case)
        seed += 1
    return cases


if __name__ == "__main__":
    write_or_check("nondimensional.json", make_cases())
