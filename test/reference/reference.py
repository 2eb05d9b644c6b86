"""Plain, dense, independent evaluation of a design (JSON, internal units) with SciPy.

    /usr/bin/python3 reference.py < design.json      prints its figures as JSON

Follows the same figure tree as the tool under test and shares no code with it."""

import json
import sys
from math import exp

import numpy as np
from scipy.special import gammainc

import counting
import field
from physics import FJ_PER_MEV, HBAR, HC, RAD_PER_GHZ, collected, emitter

THINNING = 12  # photon numbers followed when emitted light is thinned
MOMENTS = 6


def reference_line(design):
    spec, pulse = design["emitter"], design["pulse"]
    return -spec["binding"] / HBAR / 2 if pulse["reference"] == "two-photon" else 0.0


def leakage(design, line):
    """Leaked laser photons per pulse. Behind an analyser crossed to the first tone the other polarisation leaks
    without rejection."""
    laser, coll, pulse = design["laser"], design["collection"], design["pulse"]
    if laser is None or laser["piPulse"] is None:
        return 0.0
    ref = reference_line(design)
    photons = laser["piPulse"]["energy"] / (FJ_PER_MEV * HC / design["emitter"]["wavelength"])

    def passing(axis):
        if coll["filter"] is None:
            return field.pulse_energy(pulse, axis)
        kappa = coll["filter"]["fwhm"] * RAD_PER_GHZ
        center = line + coll["filter"]["center"] * RAD_PER_GHZ - ref
        marks = [center + s * f * kappa for s in (-1, 1) for f in (0, 0.3, 1, 3, 10, 40, 200)]
        return field.spectral_energy(pulse["tones"], field.lorentzian(kappa, center), axis, marks)

    if coll["polarization"] == "crossed" and len({t["polarization"] for t in pulse["tones"]}) > 1:
        first = pulse["tones"][0]["polarization"]
        reaching = laser["rejection"] * passing(first) + passing(first + np.pi / 2)
    else:
        reaching = laser["rejection"] * passing(None)
    return photons * coll["efficiency"] * reaching / field.pi_pulse_energy(laser["piPulse"]["fwhm"])


def with_poisson(signal, extra):
    """Independent Poisson light added to a count."""
    p0, p1, many = signal["p0"], signal["single"], signal["multiphoton"]
    dark = exp(-extra)
    one_or_more, two_or_more = gammainc(1, extra), gammainc(2, extra)  # a Poisson tail is an incomplete gamma function
    return {
        "mean": signal["mean"] + extra,
        "factorial2": signal["factorial2"] + 2 * signal["mean"] * extra + extra**2,
        "p0": p0 * dark,
        "single": (p1 + p0 * extra) * dark,
        "multiphoton": many + p1 * one_or_more + p0 * two_or_more,
        "leakage": extra,
    }


def sample(design, shift=0.0, options=None):
    """Moments and probabilities of one design without drift; `shift` of the emitter in 1/ps."""
    options = options or {}
    rtol = options.get("rtol", counting.RTOL)
    spec, coll, pulse = design["emitter"], design["collection"], design["pulse"]
    linear = spec["model"] != "two-level"
    drive = field.Drive(pulse, reference_line(design), linear)
    model = emitter(spec, drive.frame, shift)
    dipoles = collected(model, coll, pulse["tones"][0]["polarization"])
    line = model.lines[coll["line"]]
    eta = coll["efficiency"] * (0.5 if not linear and coll["polarization"] == "crossed" else 1.0)
    thin = eta < 1 and coll["filter"] is None
    raw = counting.emitted(model, dipoles, drive, THINNING if thin else 3, rtol)
    out = {"emitted": {**raw, "p": raw["p"][:4]}, "filtered": None}
    if coll["filter"] is None:
        count = counting.thinned(raw["p"], eta) if thin else raw
        out["signal"] = {
            "mean": eta * raw["mean"],
            "factorial2": eta**2 * raw["factorial2"],
            "p0": count["p"][0],
            "single": count["p"][1],
            "multiphoton": count["multiphoton"],
        }
        out["beyond"] = max(0.0, 1 - sum(raw["p"])) if thin else 0.0
    else:
        kappa = coll["filter"]["fwhm"] * RAD_PER_GHZ
        center = line + coll["filter"]["center"] * RAD_PER_GHZ - drive.frame
        m = counting.moments(model, dipoles, drive, kappa, center, options.get("moments", MOMENTS), rtol)
        whole, part = counting.from_moments(m), counting.from_moments(m, eta)
        out["filtered"] = {"mean": m[0], "factorial2": m[1], **whole, "moments": m}
        out["signal"] = {
            "mean": eta * m[0],
            "factorial2": eta**2 * m[1],
            "p0": part["p"][0],
            "single": part["p"][1],
            "multiphoton": part["multiphoton"],
            "bound": part["bound"],
        }
    out["collected"] = with_poisson(out["signal"], leakage(design, line))
    return out


def fock(design, photons, shift=0.0, rtol=counting.RTOL):
    """Filtered count from truncated filter modes: the independent check of the moment equations."""
    spec, coll, pulse = design["emitter"], design["collection"], design["pulse"]
    drive = field.Drive(pulse, reference_line(design), spec["model"] != "two-level")
    model = emitter(spec, drive.frame, shift)
    dipoles = collected(model, coll, pulse["tones"][0]["polarization"])
    kappa = coll["filter"]["fwhm"] * RAD_PER_GHZ
    center = model.lines[coll["line"]] + coll["filter"]["center"] * RAD_PER_GHZ - drive.frame
    return counting.filter_modes(model, dipoles, drive, kappa, center, photons, rtol)


def drift_nodes(drift, counts):
    """Brute-force tensor Gauss-Hermite nodes: (weight, area change, width change, detuning in meV)."""
    if drift.get("filterCenter") or drift.get("quantile"):
        raise ValueError("drift of the filter and quantiles are left out of this reference")
    axes = []
    for key in ("area", "width", "detuning"):
        if drift[key] > 0:
            x, w = np.polynomial.hermite_e.hermegauss(counts[key])
            axes.append([(float(b / np.sqrt(2 * np.pi)), float(drift[key] * a)) for a, b in zip(x, w)])
        else:
            axes.append([(1.0, 0.0)])
    return [(a[0] * b[0] * c[0], a[1], b[1], c[1]) for a in axes[0] for b in axes[1] for c in axes[2]]


def drifted(design, area, width):
    tones = [{**t, "area": t["area"] * (1 + area), "fwhm": t["fwhm"] * (1 + width)} for t in design["pulse"]["tones"]]
    return {**design, "pulse": {**design["pulse"], "tones": tones}}


def add_up(total, part, weight):
    if part is None:
        return None
    if isinstance(part, dict):
        return {k: add_up(None if total is None else total[k], v, weight) for k, v in part.items()}
    if isinstance(part, list):
        return [add_up(None if total is None else total[i], v, weight) for i, v in enumerate(part)]
    return (0.0 if total is None else total) + weight * part


def figures(tree):
    """Ratios are taken last: the mean g2 is the ratio of means."""
    for key in ("emitted", "filtered", "signal", "collected"):
        part = tree[key]
        if part is None:
            continue
        part["g2"] = part["factorial2"] / part["mean"] ** 2
        if key in ("signal", "collected"):
            part["any"] = part["single"] + part["multiphoton"]
    return tree


def evaluate(design, options=None):
    options = options or {}
    plain = {**design, "drift": None}
    nominal = figures(sample(plain, 0.0, options))
    nominal["pulse"] = {
        "energy_pi_units": field.pulse_energy(design["pulse"])
        / field.pi_pulse_energy(design["pulse"]["tones"][0]["fwhm"]),
        "duration_ps": field.duration(design["pulse"]),
        "bandwidth_ghz": field.bandwidth(design["pulse"]),
    }
    if design["drift"] is None:
        return {**nominal, "nominal": None}
    total = None
    for weight, area, width, shift in drift_nodes(design["drift"], options["nodes"]):
        total = add_up(total, sample(drifted(plain, area, width), shift / HBAR, options), weight)
    return {**figures(total), "pulse": None, "nominal": nominal}


if __name__ == "__main__":
    json.dump(evaluate(json.load(sys.stdin)), sys.stdout, indent=1)
