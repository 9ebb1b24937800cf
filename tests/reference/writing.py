"""Expression trees in the language's text, with its spellings taken in turn at random."""

from fractions import Fraction

import sympy as sp

BASES = ("kg", "m", "s", "K")
SUPERSCRIPTS = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")


def unit_text(dimension):
    """A dimension in the language's unit syntax."""
    def factor(base, power):
        if power == 1:
            return base
        return f"{base}^{power}" if power.denominator == 1 else f"{base}^({power})"

    powers = [(base, Fraction(power)) for base, power in zip(BASES, dimension)]
    above = [factor(base, power) for base, power in powers if power > 0]
    below = [factor(base, -power) for base, power in powers if power < 0]
    text = ".".join(above) or "1"
    if below:
        text += "/" + (below[0] if len(below) == 1 else f"({'.'.join(below)})")
    return "" if text == "1" else " " + text


class Writer:
    """Writes trees: derivatives with ∂ or d_x, powers with ^ or a superscript."""

    def __init__(self, random):
        self.random = random

    def text(self, tree):
        kind, *parts = tree
        match kind:
            case "number":
                return str(parts[0])
            case "literal" | "scale" | "field":
                return parts[0]
            case "product":
                above = [self.factor_text(part) for part in parts[0] if not is_below(part)]
                below = [self.factor_text(part[1]) for part in parts[0] if is_below(part)]
                return "*".join(above or ["1"]) + "".join(f"/{part}" for part in below)
            case "sum":
                first, *others = parts[0]
                return self.text(first[1]) + "".join(f" {'+' if s > 0 else '-'} {self.text(t)}" for s, t in others)
            case "power":
                return self.power_text(*parts)
            case "sized":
                return f"({self.text(parts[0])} ~ {parts[1]})"
            case "derivative":
                return self.derivative_text(*parts)
            case "carried":
                return f"D_t({self.text(parts[0])})"
        raise ValueError(kind)

    def factor_text(self, tree):
        return f"({self.text(tree)})" if tree[0] in ("sum", "product") else self.text(tree)

    def power_text(self, base, power):
        if power == sp.Rational(1, 2):
            return f"sqrt({self.text(base)})"
        if base[0] == "field":
            plain = f"{self.text(base)}^{power}" if sp.Rational(power).is_integer else f"{self.text(base)}^({power})"
            return plain if self.random.random() < 0.6 or "(" in plain else self.text(base) + str(power).translate(SUPERSCRIPTS)
        inner = self.text(base)
        return f"({inner})^{power}" if inner.startswith("∂") else f"{inner}^{power}"

    def derivative_text(self, axes, inner):
        if self.random.random() < 0.5:
            text = self.text(inner)
            for axis, order in reversed(runs(axes)):
                text = f"d_{axis}({text})" if order == 1 else f"d_{axis}^{order}({text})"
            return text
        order = "" if len(axes) == 1 else str(len(axes)).translate(SUPERSCRIPTS)
        text = self.text(inner) if inner[0] == "field" else f"({self.text(inner)})"
        below = "".join(f"∂{axis}" + ("" if n == 1 else str(n).translate(SUPERSCRIPTS)) for axis, n in runs(axes))
        return f"∂{order}{text}/{below}"


def is_below(tree):
    return tree[0] == "power" and tree[2] == -1


def runs(axes):
    """Equal neighbours together: x, x, z as (x, 2), (z, 1)."""
    out = []
    for axis in axes:
        if out and out[-1][0] == axis:
            out[-1] = (axis, out[-1][1] + 1)
        else:
            out.append((axis, 1))
    return out
