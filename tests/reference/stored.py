"""Stored reference values: a JSON list, one case a line, written or compared with what is made anew."""

import json
import math
import sys
from pathlib import Path


def is_same(stored, made):
    """Equal, floating-point numbers to a relative 1e-9 (other processors, other last digits)."""
    if isinstance(stored, float) and isinstance(made, (int, float)):
        return math.isclose(stored, made, rel_tol=1e-9, abs_tol=1e-300)
    if isinstance(stored, dict) and isinstance(made, dict):
        return stored.keys() == made.keys() and all(is_same(stored[k], made[k]) for k in stored)
    if isinstance(stored, list) and isinstance(made, list):
        return len(stored) == len(made) and all(map(is_same, stored, made))
    return stored == made


def write_or_check(name, cases):
    """Writes `name`, or with `--check` as the only argument fails where it differs from `cases`."""
    path = Path(__file__).parent / name
    if sys.argv[1:] != ["--check"]:
        lines = ",\n".join(json.dumps(case, ensure_ascii=False) for case in cases)
        path.write_text(f"[\n{lines}\n]\n", encoding="utf-8")
        print(f"{name}: {len(cases)} cases written")
        return
    stored = json.loads(path.read_text(encoding="utf-8"))
    made = json.loads(json.dumps(cases))
    differing = [case["case"] for case, anew in zip(stored, made) if not is_same(case, anew)]
    if differing or len(stored) != len(made):
        sys.exit(f"{name}: {len(stored)} stored, {len(made)} made, different: {differing}")
    print(f"{name}: {len(stored)} cases made anew, all the same")
