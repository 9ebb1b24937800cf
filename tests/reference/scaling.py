"""The rules by which an equation is scaled, worked out with SymPy.

A field, a coordinate and a derivative of one field is an *atom*: a symbol with a size, a
product of powers of scales. So is a derivative of a product that stays whole. Terms are
products of powers of atoms, scales and constants; SymPy collects like ones.
"""

from dataclasses import dataclass, field

import sympy as sp


class Unsettled(Exception):
    """The rules leave open how this derivative is written; the generator makes another."""


def symbol(name):
    return sp.Symbol(name, positive=True)


@dataclass
class Field:
    """A field: its scale, the length along each coordinate that it depends on, what it varies by."""

    name: str
    scale: str
    lengths: dict
    varying: str | None = None
    varying_along: dict = field(default_factory=dict)

    def own_amplitude(self, along):
        """Its `varying` scale along this coordinate, None without one."""
        return self.varying_along.get(along, self.varying)

    def amplitude(self, along):
        return self.own_amplitude(along) or self.scale


@dataclass(frozen=True)
class Atom:
    """What a symbol of a term stands for: `inner` differentiated along `along` (a sorted tuple).

    `inner` is the name of a field or coordinate, or a product of atoms that stays whole.
    """

    inner: object
    along: tuple


class Setting:
    """The declarations of a script, and the atoms met so far."""

    def __init__(self, values, derived, coordinates, fields, splits, velocity):
        self.values = values  # nominal value of each scale and constant that is not derived
        self.derived = derived  # name to product of others
        self.coordinates = coordinates  # name to scale (a product)
        self.fields = fields
        self.splits = splits  # field to its parts
        self.velocity = velocity  # (field, coordinate), ...
        self.atoms = {}

    # ---- sizes

    def base(self, product):
        """A product of scales with the derived ones replaced."""
        product = sp.sympify(product)
        while any(s.name in self.derived for s in product.free_symbols):
            product = product.subs({symbol(n): p for n, p in self.derived.items()})
        return sp.powsimp(sp.expand_power_base(product, force=True), force=True)

    def value(self, product):
        return self.base(product).subs({symbol(n): v for n, v in self.values.items()})

    def length(self, name, along):
        """Over which `name` varies along a coordinate; None if it does not."""
        if name in self.coordinates:
            return self.base(self.coordinates[name]) if name == along else None
        length = self.fields[name].lengths.get(along)
        return None if length is None else self.base(length)

    def size(self, atom):
        if not isinstance(atom.inner, str):
            inner = self.base(self.sized(atom.inner))
            return inner / sp.Mul(*(self.lengths_of(atom.inner, c).pop() for c in atom.along))
        if atom.inner in self.coordinates:
            assert not atom.along
            return self.base(self.coordinates[atom.inner])
        one = self.fields[atom.inner]
        amplitudes = [symbol(one.amplitude(c)) for c in atom.along] or [symbol(one.scale)]
        smallest = min(amplitudes, key=self.value)
        return self.base(smallest) / sp.Mul(*(self.length(atom.inner, c) for c in atom.along))

    def sized(self, term):
        """A term with the size of each atom in its place."""
        sizes = {s: self.size(a) for s, a in self.atoms.items() if s in term.free_symbols}
        return term.subs(sizes)

    # ---- atoms

    def atom(self, inner, along=()):
        atom = Atom(inner, tuple(sorted(along)))
        name = f"<{inner}>" + "".join(f"_{c}" for c in atom.along)
        self.atoms[symbol(name)] = atom
        return symbol(name)

    def lengths_of(self, product, along):
        """The lengths over which the atoms of a product vary along a coordinate."""
        found = set()
        for s in product.free_symbols & self.atoms.keys():
            inner = self.atoms[s].inner
            found |= {self.length(inner, along)} if isinstance(inner, str) else self.lengths_of(inner, along)
        return found - {None}

    def has_varying(self, product, along):
        for s in product.free_symbols & self.atoms.keys():
            inner = self.atoms[s].inner
            if isinstance(inner, str):
                one = self.fields.get(inner)
                if one and along in one.lengths and one.own_amplitude(along):
                    return True
            elif self.has_varying(inner, along):
                return True
        return False

    # ---- derivatives

    def derivative(self, expression, along):
        """One derivative of a sum of terms, each by the rule for its product."""
        terms = sp.Add.make_args(sp.expand(expression))
        return sp.expand(sp.Add(*(self.derivative_of_term(term, along) for term in terms)))

    def derivative_of_term(self, term, along):
        powers = term.as_powers_dict()
        inside = {b: p for b, p in powers.items() if b in self.atoms and self.lengths_of(b, along)}
        if not inside:
            return sp.Integer(0)
        product = sp.Mul(*(b**p for b, p in inside.items()))
        outside = term / product
        if product in self.atoms:
            return outside * self.derivative_of_atom(product, along)
        if any(p < 0 or not p.is_integer for p in inside.values()):
            raise Unsettled
        if len(self.lengths_of(product, along)) == 1 and not self.has_varying(product, along):
            return outside * self.atom(product, (along,))
        return outside * self.product_rule(inside, product, along)

    def product_rule(self, inside, product, along):
        """Of a power, of two factors, or of factors of which no two could stay together."""
        lengths = [self.lengths_of(b, along).pop() for b in inside]
        if len(inside) > 1 and sum(inside.values()) > 2 and len(set(lengths)) < sum(inside.values()):
            raise Unsettled
        parts = (p * product / b * self.derivative_of_atom(b, along) for b, p in inside.items())
        return sp.Add(*parts)

    def derivative_of_atom(self, s, along):
        atom = self.atoms[s]
        if atom.inner in self.coordinates:
            return sp.Integer(1)
        if isinstance(atom.inner, str):
            return self.atom(atom.inner, atom.along + (along,))
        if len(self.lengths_of(atom.inner, along)) == 1 and not self.has_varying(atom.inner, along):
            whole = all(self.lengths_of(b, along) for b in atom.inner.free_symbols)
            if whole:
                return self.atom(atom.inner, atom.along + (along,))
        raise Unsettled  # whole along one coordinate, not along another

    # ---- expressions

    def terms_of(self, tree):
        """An expression as a list of (process or None, sum of terms)."""
        kind, *parts = tree
        if kind == "carried":
            return self.carried(parts[0])
        if kind == "product":
            out = [(None, sp.Integer(1))]
            for part in parts[0]:
                out = [(a or b, sp.expand(x * y)) for a, x in out for b, y in self.terms_of(part)]
            return out
        return [(None, sp.expand(self.plain(tree)))]

    def plain(self, tree):
        kind, *parts = tree
        match kind:
            case "number":
                return parts[0]
            case "scale":
                return symbol(parts[0])
            case "field":
                return sp.Add(*(self.atom(name) for name in self.splits.get(parts[0], [parts[0]])))
            case "product":
                return sp.Mul(*(self.plain(part) for part in parts[0]))
            case "sum":
                return sp.Add(*(sign * self.plain(part) for sign, part in parts[0]))
            case "power":
                return self.plain(parts[0]) ** parts[1]
            case "sized":
                return symbol(parts[1])
            case "derivative":
                out = self.plain(parts[1])
                for along in reversed(parts[0]):  # from the inside out
                    out = self.derivative(out, along)
                return out
        raise ValueError(kind)

    def carried(self, tree):
        """`D_t`: the tendency and the advection by each component of the velocity."""
        inner = self.plain(tree)
        out = [("tendency", self.derivative(inner, "t"))] if "t" in self.coordinates else []
        for name, along in self.velocity:
            out.append(("advection", sp.expand(self.atom(name) * self.derivative(inner, along))))
        return out
