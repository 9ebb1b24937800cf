"""Cells of random systems of terms, by gfan (Debian package `gfan`; tried with 0.6.2).

A term of log-size a.x + c is written as t^(-c) times the monomial with exponents a, all
exponents whole and not negative; `gfan_tropicalintersection --tplane` then gives the fan
of all points where each equation has its largest size twice, and its cones that reach
t < 0 are cells. gfan knows no processes: which terms attain the largest size in a cell is
evaluated here at a point inside, and of the cells that balance by processes those with
the fewest attaining terms are kept.

`--check` makes the cells anew where gfan is installed and compares them with cells.json.
"""

import random
import shutil
import subprocess
import sys
from fractions import Fraction
from math import lcm

from stored import write_or_check

LETTERS = "abcdef"  # gfan's names of the unknowns; t is taken
SIZES = [(1, 1, 5), (1, 2, 5), (2, 2, 4), (2, 3, 4), (3, 3, 4), (3, 4, 3), (4, 4, 4), (4, 6, 3)]
SEEDS = 6


def draw_system(rng, n, m, n_terms, with_thirds):
    """Terms as (process or None, constant, exponents); a tie of two terms at one point."""
    divisors = [1, 1, 2, 3] if with_thirds else [1]
    draw = lambda bound: Fraction(rng.randint(-bound, bound), rng.choice(divisors))
    point = [draw(5) for _ in range(n)]
    equations = []
    for _ in range(m):
        terms = {}
        while len(terms) < n_terms:
            exponents = [Fraction(0)] * n
            for place in rng.sample(range(n), min(2, n)):
                exponents[place] = draw(3)
            # No two terms of one equation have the same exponents: gfan would add them up.
            terms.setdefault(tuple(exponents), [rng.choice([None, None, None, "p", "q"]), draw(8)])
        rows = [[process, constant, list(e)] for e, (process, constant) in terms.items()]
        order = sorted(rows, key=lambda row: size(row, point), reverse=True)
        order[1][1] += size(order[0], point) - size(order[1], point)
        if order[0][0] is not None and order[0][0] == order[1][0]:
            order[1][0] = None
        equations.append(rows)
    return equations


def size(term, point):
    return term[1] + sum(e * x for e, x in zip(term[2], point))


def attaining(terms, point):
    sizes = [size(term, point) for term in terms]
    return [i for i, value in enumerate(sizes) if value == max(sizes)]


def balances(terms, places):
    labels = {terms[i][0] or i for i in places}
    return len(labels) > 1


def fan(equations, n):
    """Rays, lineality and cones of gfan's fan, with the scaling of its coordinates."""
    rows = [term for terms in equations for term in terms]
    scale_t = lcm(*(term[1].denominator for term in rows))
    scales = [lcm(*(term[2][j].denominator for term in rows)) for j in range(n)]
    polynomials = []
    for terms in equations:
        powers = [[-int(c * scale_t)] + [int(e * s) for e, s in zip(es, scales)] for _, c, es in terms]
        lowest = [min(column) for column in zip(*powers)]
        names = ["t", *LETTERS[:n]]
        monomials = [
            "*".join(f"{v}^{p - q}" for v, p, q in zip(names, row, lowest) if p > q) or "1" for row in powers
        ]
        polynomials.append("+".join(monomials))
    text = f"Q[{','.join(['t', *LETTERS[:n]])}]\n{{{','.join(polynomials)}}}\n"
    run = subprocess.run(
        ["gfan_tropicalintersection", "--tplane"], input=text, capture_output=True, text=True, check=True
    )
    return sections(run.stdout), scale_t, scales


def sections(text):
    found, title = {}, None
    for line in text.splitlines():
        line = line.split("#")[0].strip()
        if line and line.replace("_", "").isalpha() and line.isupper():
            title = line
            found[title] = []
        elif line and title:
            found[title].append(line)
    return found


def rank(rows):
    rows, found = [list(row) for row in rows], 0
    for column in range(len(rows[0]) if rows else 0):
        pivot = next((row for row in rows if row[column]), None)
        if pivot is None:
            continue
        rows.remove(pivot)
        rows = [[v - row[column] / pivot[column] * w for v, w in zip(row, pivot)] for row in rows]
        found += 1
    return found


def cells(equations, n):
    read, scale_t, scales = fan(equations, n)
    if "CONES" not in read:
        return []
    numbers = lambda line: [int(v) for v in line.strip("{}").split()]
    rays = [numbers(line) for line in read["RAYS"]]
    lines = [numbers(line) for line in read["LINEALITY_SPACE"]]
    point_of = lambda ray: [Fraction(s * v, -scale_t * ray[0]) for v, s in zip(ray[1:], scales)]
    direction = lambda ray: [Fraction(s * v) for v, s in zip(ray[1:], scales)]
    found = {}
    for line in read["CONES"]:
        own = [rays[k] for k in numbers(line)]
        if not any(ray[0] < 0 for ray in own):
            continue
        corners = [point_of(ray) for ray in own if ray[0] < 0]
        ways = [direction(ray) for ray in own if ray[0] == 0]
        both = [direction(ray) for ray in lines]
        inside = point_of([sum(column) for column in zip(*own)])
        key = tuple(tuple(attaining(terms, inside)) for terms in equations)
        if not all(balances(terms, places) for terms, places in zip(equations, key)):
            continue
        spread = [[p - q for p, q in zip(corner, corners[0])] for corner in corners]
        found[key] = {
            "dimension": rank(spread + ways + both),
            "attaining": [list(places) for places in key],
            "ranges": [extent(corners, ways, both, j) for j in range(n)],
        }
    below = lambda p, q: p != q and all(set(a) <= set(b) for a, b in zip(p, q))
    return [found[key] for key in sorted(found) if not any(below(other, key) for other in found)]


def extent(corners, ways, both, j):
    ends = []
    for sign in (-1, 1):
        endless = any(way[j] for way in both) or any(sign * way[j] > 0 for way in ways)
        ends.append(None if endless else str(sign * max(sign * corner[j] for corner in corners)))
    return ends


def main():
    if shutil.which("gfan_tropicalintersection") is None:
        print("cells.json: gfan is not installed, the stored cells stand as they are")
        return
    cases = []
    for n, m, n_terms in SIZES:
        for seed in range(SEEDS):
            rng = random.Random(1000 * n + 100 * m + seed)
            equations = draw_system(rng, n, m, n_terms, with_thirds=seed % 2 == 1)
            written = [[[p, str(c), [str(e) for e in es]] for p, c, es in terms] for terms in equations]
            name = f"{n} unknowns, {m} equations of {n_terms} terms, {seed}"
            cases.append({"case": name, "unknowns": n, "equations": written, "cells": cells(equations, n)})
    write_or_check("cells.json", cases)


if __name__ == "__main__":
    main()
