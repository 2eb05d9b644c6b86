"""Numerically exact excited-state population of a driven two-level emitter in a phonon bath, by the augmented density
tensor (Makri & Makarov, J. Chem. Phys. 102, 4600 (1995)). Shares nothing with the TypeScript sources but the model.

Run with Debian's python3-scipy: /usr/bin/python3 test/reference/phonons/path_integral.py
Writes test/golden/phonons-path-integral.json.
"""

import json
import pathlib
import sys

import numpy as np
from scipy.integrate import quad
from scipy.linalg import expm

HBAR, KB = 0.6582119569, 0.08617333262
SPAN = 7.0  # frequencies up to SPAN * cutoff


def displacement(t, bath):
    """phi(t) = int J/w^2 [coth cos wt - i sin wt] dw."""
    a, wc, temperature = bath["coupling"], bath["cutoff"], bath["temperature"]

    def weight(w):
        return a * w * np.exp(-((w / wc) ** 2))

    def coth(w):
        return 1.0 if temperature == 0 else 1.0 / np.tanh(HBAR * w / (2 * KB * temperature))

    top = SPAN * wc
    re = quad(lambda w: weight(w) * coth(w) * np.cos(w * t), 1e-12, top, limit=800, epsabs=1e-12)[0]
    im = -quad(lambda w: weight(w) * np.sin(w * t), 1e-12, top, limit=800, epsabs=1e-12)[0]
    return re + 1j * im


def influence(bath, dt, memory):
    """eta_m = int int C over two intervals m steps apart. The part of eta_0 that is linear in time is the polaron
    shift; the levels are given as seen in a spectrum, so it is left out together with the relaxation energy."""
    g = np.array([displacement(0, bath) - displacement(m * dt, bath) for m in range(memory + 2)])
    eta = [g[1]] + [g[m + 1] - 2 * g[m] + g[m - 1] for m in range(1, memory + 1)]
    return np.array(eta)


def population(case, dt, memory):
    bath = case["bath"]
    sigma = case["fwhm"] / (2 * np.sqrt(np.log(2)))
    delta = case["detuning"] / HBAR
    chirped = sigma**2 - 1j * case["gdd"]

    def rabi(t):
        return case["area"] / np.sqrt(2 * np.pi) / np.sqrt(chirped) * np.exp(-(t**2) / (2 * chirped))

    width = sigma * np.sqrt(1 + (case["gdd"] / sigma**2) ** 2)
    half = np.ceil(5.2 * width / dt) * dt
    steps = int(round(2 * half / dt))

    def unitary(a, b):
        """Time-ordered exponential, midpoint rule on fine pieces."""
        pieces = max(1, int(np.ceil((b - a) / 0.01)))
        h = (b - a) / pieces
        u = np.eye(2, dtype=complex)
        for k in range(pieces):
            w = rabi(a + (k + 0.5) * h)
            u = expm(-1j * h * np.array([[0, np.conj(w) / 2], [w / 2, -delta]])) @ u
        return u

    def superop(u):
        return np.kron(u, u.conj())  # index 2*bra... (forward, backward) = (i, j)

    forward = np.array([0, 0, 1, 1])
    backward = np.array([0, 1, 0, 1])
    eta = influence(bath, dt, memory)
    difference = forward - backward
    factors = [np.exp(-difference[:, None] * (e * forward - np.conj(e) * backward)[None, :]) for e in eta]
    own = np.diag(factors[0])
    # Joint influence of the newest interval with the memory-1 before it: axes newest first.
    kernel = own.reshape([4] + [1] * (memory - 1))
    for m in range(1, memory):
        shape = [4] + [1] * (memory - 1)
        shape[m] = 4
        kernel = kernel * factors[m].reshape(shape)
    start = -half
    tensor = np.zeros([4] * memory, dtype=complex)
    first = superop(unitary(start, start + dt / 2))[:, 0]
    # Before the pulse the emitter is in its ground state, which does not feel the bath: pad with it.
    tensor[(slice(None),) + (0,) * (memory - 1)] = own * first
    for k in range(1, steps):
        m = superop(unitary(start + (k - 0.5) * dt, start + (k + 0.5) * dt))
        reduced = tensor.sum(axis=-1)
        tensor = kernel * m.reshape([4, 4] + [1] * (memory - 2)) * reduced[None, ...]
    state = tensor.reshape(4, -1).sum(axis=1)
    state = superop(unitary(start + (steps - 0.5) * dt, start + steps * dt)) @ state
    return state[3].real


CASES = [
    dict(name="pi, 2 ps, 4 K", area=np.pi, fwhm=2.0, gdd=0.0, detuning=0.0, temperature=4.0),
    dict(name="3 pi, 5 ps, 4 K", area=3 * np.pi, fwhm=5.0, gdd=0.0, detuning=0.0, temperature=4.0),
    dict(name="3 pi, 5 ps, 20 K, 0.5 meV above", area=3 * np.pi, fwhm=5.0, gdd=0.0, detuning=0.5, temperature=20.0),
    dict(name="2 pi, 2 ps, -3 ps^2, 4 K", area=2 * np.pi, fwhm=2.0, gdd=-3.0, detuning=0.0, temperature=4.0),
]


def main():
    out = []
    for case in CASES:
        case = dict(case, bath=dict(coupling=0.03, cutoff=2.2, temperature=case["temperature"]))
        # The same memory time (3.6 ps) at three steps; the step error is even in the step.
        steps = (0.6, 0.45, 0.36)
        coarse, middle, fine = population(case, steps[0], 6), population(case, steps[1], 8), population(case, steps[2], 10)
        system = np.array([[1, h**2, h**4] for h in steps])
        value = np.linalg.solve(system, [coarse, middle, fine])[0]
        pair = fine + (fine - middle) * steps[2] ** 2 / (steps[1] ** 2 - steps[2] ** 2)
        longer = population(case, 0.45, 10)
        error = abs(value - pair) + abs(longer - middle)
        out.append(dict(case, population=value, error=error))
        print(case["name"], middle, fine, pair, value, "+-", error, file=sys.stderr)
    golden = pathlib.Path(__file__).resolve().parents[2] / "golden" / "phonons-path-integral.json"
    document = dict(
        source="test/reference/phonons/path_integral.py (augmented density tensor, SciPy)",
        cases=out,
    )
    golden.write_text(json.dumps(document, indent=1) + "\n")


if __name__ == "__main__":
    main()
