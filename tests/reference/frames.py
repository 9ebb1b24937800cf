"""Vector expressions in the three frames: the texts that the program writes, each proved equal by SymPy.

Every expression is worked out from Cartesian coordinates: unit vectors as functions of the coordinates,
derivatives of whole vectors, projections back onto the unit vectors. None of the rules of curved frames is
used. The texts are read as the language means them and must be equal exactly.

`python frames.py --check` proves the stored texts anew. Without it new cases are added, still without texts.
"""

import json
import re
from pathlib import Path

import sympy as sp
from sympy.core.function import AppliedUndef

from stored import write_or_check

t = sp.Symbol("t", real=True)
FIELDS = ("u", "v", "w")
OTHER = ("a", "b", "c")
STRESS = ("s11", "s12", "s13", "s22", "s23", "s33")
ROWS = ((0, 1, 2), (1, 3, 4), (2, 4, 5))


class Frame:
    """Coordinates, and the vectors of a script in them as Cartesian columns."""

    def __init__(self, name, coordinates, place):
        self.name, self.coordinates = name, coordinates
        place = sp.Matrix(place)
        self.lengths, self.units = [], []
        for c in coordinates:
            step = place.diff(c)
            length = sp.simplify(sp.sqrt(sp.simplify(step.dot(step))))
            self.lengths.append(length.replace(sp.Abs, lambda inside: inside))
            self.units.append(sp.simplify(step / self.lengths[-1]))
        function = lambda f: sp.Function(f)(*coordinates, t)
        self.names = {str(c): c for c in coordinates} | {"t": t}
        self.names |= {f: function(f) for f in (*FIELDS, *OTHER, *STRESS, "p", "q")}
        self.names |= {"V": self.vector(FIELDS), "A": self.vector(OTHER), "S": self.stress()}

    def vector(self, parts):
        parts = (self.names[part] if isinstance(part, str) else part for part in parts)
        return sum((part * unit for part, unit in zip(parts, self.units)), sp.zeros(3, 1))

    def stress(self):
        parts = [self.names[name] for name in STRESS]
        pairs = ((i, j) for i in range(3) for j in range(3))
        dyads = (parts[ROWS[i][j]] * self.units[i] * self.units[j].T for i, j in pairs)
        return sum(dyads, sp.zeros(3, 3))

    def directions(self):
        return zip(self.coordinates, self.lengths, self.units)

    def grad(self, f):
        return sum((f.diff(c) / h * e for c, h, e in self.directions()), sp.zeros(3, 1))

    def div(self, x):
        """Of a vector, or of a stress row by row."""
        if x.shape == (3, 3):
            return sp.Matrix([self.div(x[i, :].T) for i in range(3)])
        return sum((e / h).dot(x.diff(c)) for c, h, e in self.directions())

    def curl(self, x):
        return sum(((e / h).cross(x.diff(c)) for c, h, e in self.directions()), sp.zeros(3, 1))

    def laplacian(self, x):
        if isinstance(x, sp.MatrixBase):
            return sp.Matrix([self.laplacian(part) for part in x])
        return self.div(self.grad(x))

    def material(self, x):
        speeds = (self.names[f] for f in FIELDS)
        along = (speed / h * x.diff(c) for speed, (c, h, _) in zip(speeds, self.directions()))
        return sum(along, x.diff(t))

    def read(self, text):
        """An expression of the language; the operations are those from Cartesian coordinates."""
        operations = {
            "sin": sp.sin, "cos": sp.cos, "tan": sp.tan, "grad": self.grad, "div": self.div, "curl": self.curl,
            "laplacian": self.laplacian, "D_t": self.material, "dot": lambda x, y: x.dot(y),
            "cross": lambda x, y: x.cross(y), "D": lambda x, *by: x.diff(*by), "N": sp.Integer,
        }
        return eval(in_python(text), {"__builtins__": {}}, self.names | operations)

    def components(self, expression):
        found = self.read(expression)
        if not isinstance(found, sp.MatrixBase):
            return [found]
        return [found.dot(unit) for unit in self.units]


def in_python(text):
    """`∂²(r*u)/∂r∂z` as `D((r*u), r, 1, z, 1)`, `^` as `**`, `cos^2(x)` as `(cos(x))**2`."""
    text = re.sub(r" as \w+", "", text)
    text = without_partials(text).replace("^", "**").replace("lambda", "lambda_")
    text = re.sub(r"\b(cos|sin|tan)\*\*(\d)(\(\w+\))", r"\1\3**\2", text)
    return re.sub(r"(?<![\w.])(\d+)\b", r"N(\1)", text)


def without_partials(text):
    orders = str.maketrans("¹²³⁴", "1234")
    while "∂" in text:
        start = next(i for i in range(len(text) - 1, -1, -1) if text[i] == "∂" and text[i - 1] not in "/∂" and is_head(text, i))
        at = start + 1
        while text[at] in "²³⁴":
            at += 1
        end = end_of_operand(text, at)
        operand, by, at = text[at:end], [], end + 1
        while at < len(text) and text[at] == "∂":
            name, order = re.match(r"∂([A-Za-z_]\w*?)([²³⁴]?)(?![\w²³⁴])", text[at:]).groups()
            by += [name, order.translate(orders) or "1"]
            at += 1 + len(name) + len(order)
        text = f"{text[:start]}D({operand}, {', '.join(by)}){text[at:]}"
    return text


def is_head(text, at):
    """Whether a ∂ begins a derivative rather than standing below its line."""
    before = re.search(r"/(∂\w+[²³⁴]?)*$", text[:at])
    return before is None


def end_of_operand(text, at):
    end = at
    while end < len(text) and (text[end].isalnum() or text[end] == "_") and text[end] not in "²³⁴":
        end += 1
    if end < len(text) and text[end] == "(":
        depth = 0
        while True:
            depth += {"(": 1, ")": -1}.get(text[end], 0)
            end += 1
            if depth == 0:
                break
    return end


r, theta, z = sp.symbols("r theta z", real=True)
x, y = sp.symbols("x y", real=True)
lambda_, phi = sp.symbols("lambda_ phi", real=True)
FRAMES = [
    Frame("cartesian (x, y, z)", (x, y, z), (x, y, z)),
    Frame("cylindrical (r, theta, z)", (r, theta, z), (r * sp.cos(theta), r * sp.sin(theta), z)),
    Frame("spherical (lambda, phi, r)", (lambda_, phi, r), (
        r * sp.cos(phi) * sp.cos(lambda_), r * sp.cos(phi) * sp.sin(lambda_), r * sp.sin(phi),
    )),
]
EXPRESSIONS = [
    "grad(p)", "div(V)", "curl(V)", "laplacian(p)", "laplacian(V)", "D_t(V)", "D_t(A)", "D_t(p)", "dot(A, V)", "cross(A, V)", "div(S)",
    "∂V/∂t", "∂V/∂FIRST", "∂V/∂SECOND", "∂V/∂THIRD", "∂²V/∂SECOND²", "∂²V/∂FIRST∂SECOND",
    "div(grad(p))", "grad(div(V))", "curl(curl(V))", "div(p*V)", "curl(p*V)", "div(cross(A, V))", "dot(V, grad(p))", "grad(dot(A, V))",
    "cross(V, curl(V))", "laplacian(curl(V))", "div(p*grad(q))", "div(laplacian(V))", "p*D_t(V) - q*curl(A)", "dot(A, curl(V))",
]
# What is nothing in every frame; the program writes 0.
NOTHING = ["div(curl(V))", "curl(grad(p))"]


def script(frame, expression):
    names = [str(c).rstrip("_") for c in frame.coordinates]
    all_names = ", ".join(names)
    fields = ", ".join((*FIELDS, *OTHER, *STRESS, "p", "q"))
    for word, name in zip(("FIRST", "SECOND", "THIRD"), names):
        expression = expression.replace(word, name)
    return expression, "\n".join([
        f"frame {frame.name}", f"coordinate {all_names}, t ~ 1", f"field {fields}({all_names}, t) ~ 1",
        "vector V = (u, v, w)", "vector A = (a, b, c)", f"vector S = ({', '.join(STRESS)})", "velocity V",
        f"equation e: {expression} = 0", "",
    ])


def prove(frame, expression, texts):
    """Every text is the component worked out from Cartesian coordinates."""
    wanted = frame.components(expression)
    assert len(wanted) == len(texts), (frame.name, expression)
    for text, component in zip(texts, wanted):
        assert is_zero(frame.read(text) - component), (frame.name, expression, text)


def is_zero(difference):
    """Coefficient by coefficient of the fields and their derivatives, which may be anything."""
    difference = sp.expand(difference.doit())
    unknown = sorted(difference.atoms(sp.Derivative, AppliedUndef), key=str)
    if not unknown:
        return vanishes(difference)
    symbols = {part: sp.Dummy() for part in unknown}
    coefficients = sp.Poly(difference.xreplace(symbols), *symbols.values()).coeffs()
    return all(map(vanishes, coefficients))


def vanishes(coefficient):
    """A rational expression of the coordinates, their sines and cosines: its numerator modulo sin^2 + cos^2 = 1."""
    angles = sorted({part.args[0] for part in coefficient.atoms(sp.sin, sp.cos, sp.tan)}, key=str)
    circles, rule = [], {}
    for angle in angles:
        sine, cosine = sp.Dummy(), sp.Dummy()
        rule |= {sp.sin(angle): sine, sp.cos(angle): cosine, sp.tan(angle): sine / cosine}
        circles.append(sine**2 + cosine**2 - 1)
    numerator = sp.expand(sp.numer(sp.together(coefficient.xreplace(rule))))
    if numerator == 0 or not circles:
        return numerator == 0
    return sp.reduced(numerator, circles)[1] == 0


def is_nothing(frame, expression):
    return all(is_zero(part) for part in frame.components(expression))


def make_cases():
    """All cases with the texts that are stored for them, each proved; a new case gets none until the test tells them."""
    path = Path(__file__).with_name("frames.json")
    stored = json.loads(path.read_text(encoding="utf-8")) if path.exists() else []
    texts = {case["case"]: case["texts"] for case in stored}
    for frame in FRAMES:
        for expression in EXPRESSIONS + NOTHING:
            expression, text = script(frame, expression)
            name = f"{frame.name.split()[0]}: {expression}"
            found = texts.get(name, [])
            if not found:
                assert expression not in NOTHING or is_nothing(frame, expression), name
            else:
                prove(frame, expression, found)
            yield {"case": name, "script": text, "texts": found}


if __name__ == "__main__":
    write_or_check("frames.json", list(make_cases()))
