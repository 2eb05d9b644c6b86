"""Makes test/golden/*.json: published tables, and random designs evaluated with SciPy.

    /usr/bin/python3 test/reference/make_golden.py            all files
    /usr/bin/python3 test/reference/make_golden.py two-level  one of: tables, two-level, cascade
    ... two-level --keep                                      only designs that the present file does not hold

Every design is checked before it is written: filtered light against truncated filter modes, and everything against a
run with looser tolerance. A failing check stops the script."""

import json
import platform
import sys
import time
from pathlib import Path

import numpy as np
import scipy

import counting
import reference
from designs import random_cascade, random_two_level
from tables import tables

HERE = Path(__file__).resolve().parent
GOLDEN = HERE.parent / "golden"
SEEDS = {"two-level": 20240611, "cascade": 20240612}
LOOSE = 1e-11
FLOOR = 1e-7  # relative agreement is asked down to this value


def leaves(tree, path=""):
    if isinstance(tree, dict):
        for k, v in tree.items():
            yield from leaves(v, f"{path}.{k}" if path else k)
    elif isinstance(tree, list):
        for i, v in enumerate(tree):
            yield from leaves(v, f"{path}.{i}")
    elif tree is not None:
        yield path, tree


def deviation(a, b):
    """Largest relative difference of two trees, floored at FLOOR."""
    other = dict(leaves(b))
    skip = ("bound", "moments", "beyond")
    return max(abs(x - other[p]) / max(abs(x), FLOOR) for p, x in leaves(a) if not any(s in p for s in skip) and p in other)


def check_filter(design, figures):
    """Deviation of the moment equations from truncated filter modes, with as many photons as that needs."""
    plain = {**design, "drift": None}
    moment = (figures["nominal"] or figures)["filtered"]
    if moment["bound"] > 1e-6 * moment["multiphoton"]:
        moment = {k: moment[k] for k in ("mean", "factorial2")}
    best = (float("inf"), 0)
    for photons in range(2, 4 if design["emitter"]["model"] == "cascade" else 11):
        mode = reference.fock(plain, photons)
        best = min(best, (deviation({k: v for k, v in moment.items()}, mode), photons))
        if best[0] < 1e-8:
            break
    return {"difference": best[0], "photons": best[1]}


def two_modes(design):
    coll = design["collection"]
    return design["emitter"]["model"] == "cascade" and coll["polarization"] == "all" and coll["filter"] is not None


def golden(name, design, options):
    began = time.time()
    figures = reference.evaluate(design, options)
    nominal = figures["nominal"] or figures
    if nominal["filtered"] and nominal["filtered"]["bound"] > 1e-6 * nominal["filtered"]["multiphoton"]:
        if options.get("moments", reference.MOMENTS) < reference.MOMENTS:
            return golden(name, design, {**options, "moments": reference.MOMENTS})
    checks = {}
    if not two_modes(design):  # there the filter modes below are a second integration anyway
        loose = reference.sample({**design, "drift": None}, 0.0, {**options, "rtol": LOOSE})
        checks["tolerance"] = deviation(reference.figures(loose), nominal)
        assert checks["tolerance"] < 1e-7, (name, checks)
    if nominal["filtered"]:
        checks["filter_modes"] = check_filter(design, figures)
        assert checks["filter_modes"]["difference"] < 1e-6, (name, checks)
    if design["drift"]:
        fewer = {k: max(4, int(0.8 * v)) for k, v in options["nodes"].items()}
        again = reference.evaluate(design, {**options, "nodes": fewer})
        checks["nodes"] = deviation({k: figures[k] for k in ("emitted", "filtered", "signal", "collected")}, again)
        assert checks["nodes"] < 1e-5, (name, checks)  # four fifths of the nodes: the full rule is far closer
    assert figures.get("beyond", 0) < 1e-10, (name, figures["beyond"])
    print(f"{time.time() - began:7.1f} s  {name}  {checks}", flush=True)
    return {"name": name, "design": design, "figures": figures, "checks": checks}


def provenance(**more):
    return {
        "script": "test/reference/make_golden.py",
        "method": "density matrices and superoperators, scipy.integrate.DOP853 over the drive, sparse LU afterwards",
        "python": platform.python_version(),
        "numpy": np.__version__,
        "scipy": scipy.__version__,
        "rtol": counting.RTOL,
        "atol": "rtol times the largest value of each operator, measured in a first pass",
        **more,
    }


def write(name, content):
    path = GOLDEN / f"{name}.json"
    path.write_text(json.dumps(content, indent=1, default=float) + "\n")


def half_digit(text):
    """Half a unit of the last printed digit."""
    mantissa, _, exponent = text.partition("e")
    return 0.5 * 10.0 ** (-len(mantissa.partition(".")[2]) + int(exponent or 0))


def make_tables():
    rows = []
    for row in tables():
        found = dict(leaves(reference.figures(reference.sample(row["design"]))))
        expected = {}
        for path, text in row["expected"].items():
            expected[path] = {"value": float(text), "printed": half_digit(text)}
            off = abs(found[path] - float(text))
            # the tables' own windows show in the last digits of p_0
            assert off <= max(1.5 * half_digit(text), 2e-10), (row["name"], path, found[path], text)
        rows.append({**row, "expected": expected})
        print("reproduced", row["name"], flush=True)
    write("tables", {"provenance": provenance(checked="every value reproduced to its last digit"), "rows": rows})


def kept_rows(kind):
    """Rows of the present file, by design, for a run with --keep."""
    path = GOLDEN / f"scipy-{kind}.json"
    rows = json.loads(path.read_text())["rows"] if "--keep" in sys.argv and path.exists() else []
    return {json.dumps(row["design"]): row for row in rows}


def make_random(kind, draw):
    kept, rows = kept_rows(kind), []
    for name, design, options in draw(SEEDS[kind]):
        old = kept.get(json.dumps(design))
        rows.append({**old, "name": name} if old else golden(name, design, options))
        write(f"scipy-{kind}", {"provenance": provenance(seed=SEEDS[kind], loose_rtol=LOOSE), "rows": rows})


MAKERS = {
    "tables": make_tables,
    "two-level": lambda: make_random("two-level", random_two_level),
    "cascade": lambda: make_random("cascade", random_cascade),
}

if __name__ == "__main__":
    for which in [a for a in sys.argv[1:] if a != "--keep"] or MAKERS:
        MAKERS[which]()
