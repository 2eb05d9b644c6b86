"""Constants and emitters: Hamiltonian, dissipators and collected dipoles as dense matrices.

Units: ps, 1/ps, meV, µm, GHz for filters. Written from the model's equations alone; shares nothing with the
TypeScript sources, which it exists to check.
"""

from dataclasses import dataclass, field

import numpy as np

HBAR = 0.6582119569  # meV ps, CODATA
HC = 1239.841984  # meV µm
FJ_PER_MEV = 1.602176634e-7
RAD_PER_GHZ = 2e-3 * np.pi  # (1/ps) per GHz


def ket_bra(n, to, frm):
    m = np.zeros((n, n), complex)
    m[to, frm] = 1.0
    return m


@dataclass
class Emitter:
    energy: np.ndarray  # H/hbar without drive, diagonal, in the rotating frame
    raising: dict  # 'h', 'v' (cascade) or 'full' (two-level) -> raising operator of that drive component
    decays: list  # Lindblad operators, rate included
    dephasing: float
    excitons: np.ndarray
    dipoles: dict = field(default_factory=dict)  # (line, 'h' | 'v' | 'any') -> collected dipole, sqrt(rate) included
    lines: dict = field(default_factory=dict)  # line -> centre above the mean exciton line, 1/ps
    two_photon: float = None


def two_level(spec, frame, shift):
    """`frame`: rotating frame above the nominal exciton line, `shift`: of the emitter's line, both 1/ps."""
    c = np.sqrt(1 / spec["lifetime"]) * ket_bra(2, 0, 1)
    return Emitter(
        energy=np.array([0.0, shift - frame]),
        raising={"full": ket_bra(2, 1, 0)},
        decays=[c],
        dephasing=spec["dephasing"],
        excitons=np.array([0.0, 1.0]),
        dipoles={("exciton", "any"): c},
        lines={"exciton": 0.0},
    )


def cascade(spec, frame, shift):
    g, h, v, b = range(4)
    half = spec["splitting"] / 2 / HBAR
    binding = spec["binding"] / HBAR
    x = np.sqrt(1 / spec["lifetime"])
    xx = np.sqrt(1 / (2 * spec["biexcitonLifetime"]))
    dipoles = {
        ("exciton", "h"): x * ket_bra(4, g, h),
        ("exciton", "v"): x * ket_bra(4, g, v),
        ("biexciton", "h"): xx * ket_bra(4, h, b),
        ("biexciton", "v"): xx * ket_bra(4, v, b),
    }
    delta = frame - shift
    return Emitter(
        energy=np.array([0.0, half - delta, -half - delta, -binding - 2 * delta]),
        raising={"h": ket_bra(4, h, g) + ket_bra(4, b, h), "v": ket_bra(4, v, g) + ket_bra(4, b, v)},
        decays=list(dipoles.values()),
        dephasing=spec["dephasing"],
        excitons=np.array([0.0, 1.0, 1.0, 2.0]),
        dipoles=dipoles,
        lines={"exciton": 0.0, "biexciton": -binding},
        two_photon=-binding / 2,
    )


def emitter(spec, frame, shift):
    return {"two-level": two_level, "cascade": cascade}[spec["model"]](spec, frame, shift)


def collected(model, collection, first_polarization):
    """Collected dipoles: one operator for a polarisation, two orthogonal ones for an open analyser."""
    line = collection["line"]
    if ("exciton", "any") in model.dipoles:
        return [model.dipoles[(line, "any")]]
    h, v = model.dipoles[(line, "h")], model.dipoles[(line, "v")]
    kind = collection["polarization"]
    if kind == "all":
        return [h, v]
    beta = {"h": 0.0, "v": np.pi / 2, "crossed": first_polarization + np.pi / 2}[kind]
    return [np.cos(beta) * h + np.sin(beta) * v]


def left(a):
    """Superoperator of rho -> a rho for row-major vectors."""
    return np.kron(a, np.eye(len(a)))


def right(a):
    """Superoperator of rho -> rho a."""
    return np.kron(np.eye(len(a)), a.T)


def sandwich(a):
    """Superoperator of rho -> a rho a^dagger."""
    return np.kron(a, a.conj())


def commutator(h):
    """Superoperator of rho -> -i [h, rho]."""
    return -1j * (left(h) - right(h))


def dissipator(a):
    n = a.conj().T @ a
    return sandwich(a) - 0.5 * (left(n) + right(n))


def undriven(model):
    """The Liouvillian without drive, dephasing gamma* D[S] included."""
    s = np.diag(model.excitons).astype(complex)
    out = commutator(np.diag(model.energy).astype(complex)) + model.dephasing * dissipator(s)
    for c in model.decays:
        out = out + dissipator(c)
    return out
