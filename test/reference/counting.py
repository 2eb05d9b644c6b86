"""Photon counting of emitted light, and behind a Lorentzian filter in two independent ways: closed moments, and a
master equation with truncated filter modes."""

from dataclasses import dataclass
from itertools import product
from math import comb, factorial
from typing import Callable

import numpy as np
import scipy.sparse as sp

from liouville import Blocks
from physics import commutator, left, right, sandwich, undriven

RTOL = 1e-12


def drive_parts(raising):
    """Superoperators of Re and Im Omega in H = (Omega U + h.c.)/2."""
    out = []
    for u in raising:
        d = u.conj().T
        out.append((commutator(0.5 * (u + d)), commutator(0.5j * (u - d))))
    return out


def active(model, drive):
    """Drive components that are not zero throughout, and their raising operators."""
    if "full" in model.raising:
        return [0], [model.raising["full"]]
    use = [
        k
        for k, project in enumerate((np.cos, np.sin))
        if any(abs(project(t["polarization"])) > 1e-15 and t["area"] != 0 for t in drive.tones)
    ]
    return use or [0], [model.raising["hv"[k]] for k in (use or [0])]


@dataclass
class System:
    """Blocks, the drive components that act on them, and what to read from the traces at the end."""

    blocks: Blocks
    components: list
    read: Callable

    def solve(self, drive, rtol):
        return self.read(self.blocks.finish(self.blocks.run(drive, rtol, self.components)))


def emitted_system(model, dipoles, drive, highest=3):
    components, raising = active(model, drive)
    blocks = Blocks(undriven(model), drive_parts(raising), 0, model.excitons)
    jump = sum(sandwich(c) for c in dipoles)
    blocks.add("rho", seed=True)
    for n in range(highest + 1):
        blocks.add(f"p{n}", seed=n == 0)
        blocks.link(f"p{n}", f"p{n}", -jump)
        if n:
            blocks.link(f"p{n}", f"p{n - 1}", jump)
    blocks.add("many")
    blocks.link("many", "p1", jump)
    blocks.add("mean")
    blocks.link("mean", "rho", jump)
    blocks.add("factorial2")
    blocks.link("factorial2", "mean", 2 * jump)
    return System(blocks, components, lambda done: {
        "mean": done["mean"],
        "factorial2": done["factorial2"],
        "p": [done[f"p{n}"] for n in range(highest + 1)],
        "multiphoton": done["many"],
    })


def emitted(model, dipoles, drive, highest=3, rtol=RTOL):
    """Count of emitted photons by jump operators."""
    return emitted_system(model, dipoles, drive, highest).solve(drive, rtol)


def powers(modes, most):
    return [p for p in product(range(most + 1), repeat=modes) if sum(p) <= most]


def moments(model, dipoles, drive, kappa, center, highest, rtol=RTOL):
    """Factorial moments m_1 ... m_K of the light that leaves the filters, by the closed moment equations."""
    return moments_system(model, dipoles, drive, kappa, center, highest).solve(drive, rtol)


def moments_system(model, dipoles, drive, kappa, center, highest):
    components, raising = active(model, drive)
    blocks = Blocks(undriven(model), drive_parts(raising), 0, model.excitons)
    modes = len(dipoles)
    pairs = {}
    for d in range(highest + 1):
        pairs[d] = list(product(powers(modes, highest - d), repeat=2))
        for j, k in pairs[d]:
            up, down = sum(j), sum(k)
            blocks.add((d, j, k), (up + down) * kappa / 2, (up - down) * center, d == 0 and up + down == 0, up - down)
    couple = -np.sqrt(kappa / 2)
    shifted = lambda p, q, by: p[:q] + (p[q] + by,) + p[q + 1 :]
    one = sp.identity(blocks.size)
    for d, some in pairs.items():
        for j, k in some:
            for q, c in enumerate(dipoles):
                if j[q]:
                    blocks.link((d, j, k), (d, shifted(j, q, -1), k), couple * j[q] * left(c))
                if k[q]:
                    blocks.link((d, j, k), (d, j, shifted(k, q, -1)), couple * k[q] * right(c.conj().T))
                if d:
                    blocks.link((d, j, k), (d - 1, shifted(j, q, 1), shifted(k, q, 1)), kappa / 2 * one)
    none = (0,) * modes
    return System(
        blocks, components, lambda done: [factorial(d) * done[(d, none, none)] for d in range(1, highest + 1)]
    )


def from_moments(m, eta=1.0):
    """p_0, p_1, P(n>=2) by the sieve sums, and the last term of P(n>=2), which bounds its error."""
    terms = [x * eta ** (k + 1) / factorial(k + 1) for k, x in enumerate(m)]
    p0 = 1 + sum((-1) ** (k + 1) * t for k, t in enumerate(terms))
    p1 = sum((-1) ** k * (k + 1) * t for k, t in enumerate(terms))
    many = sum((-1) ** (k + 1) * k * t for k, t in enumerate(terms))
    return {"p": [p0, p1], "multiphoton": many, "bound": abs((len(m) - 1) * terms[-1])}


def filter_modes(model, dipoles, drive, kappa, center, photons, rtol=RTOL):
    """The same light from a master equation of emitter x filter modes, at most `photons` in all modes together.

    Cascaded system: source dipole c drives mode a through one mirror, (kappa/2)^1/2 ([c rho, a+] + [a, rho c+]);
    counted is what leaves through the other, jump (kappa/2) a rho a+."""
    components, raising = active(model, drive)
    number = powers(len(dipoles), photons)
    index = {p: i for i, p in enumerate(number)}
    n, e = len(number), len(model.energy)
    annihilators = []
    for q in range(len(dipoles)):
        a = np.zeros((n, n), complex)
        for p in number:
            if p[q]:
                a[index[p[:q] + (p[q] - 1,) + p[q + 1 :]], index[p]] = np.sqrt(p[q])
        annihilators.append(np.kron(np.eye(e), a))
    big = lambda x: np.kron(x, np.eye(n))
    sparse_left = lambda x: sp.kron(sp.csr_matrix(x), sp.identity(e * n))
    sparse_right = lambda x: sp.kron(sp.identity(e * n), sp.csr_matrix(x.T))
    both = lambda x: sp.kron(sp.csr_matrix(x), sp.csr_matrix(x.conj()))

    def decay(a):
        m = a.conj().T @ a
        return both(a) - 0.5 * (sparse_left(m) + sparse_right(m))

    def turn(h):
        return -1j * (sparse_left(h) - sparse_right(h))

    quanta = np.add.outer(model.excitons, [sum(p) for p in number]).ravel()
    generator = turn(big(np.diag(model.energy).astype(complex)))
    generator = generator + model.dephasing * decay(big(np.diag(model.excitons).astype(complex)))
    for c in model.decays:
        generator = generator + decay(big(c))
    jump = 0
    for c, a in zip(dipoles, annihilators):
        ad, cc = a.conj().T, big(c)
        generator = generator + kappa * decay(a) + center * turn(ad @ a)
        generator = generator + np.sqrt(kappa / 2) * (
            sp.kron(sp.csr_matrix(cc), sp.csr_matrix(ad.T)) - sparse_left(ad @ cc)
            + sp.kron(sp.csr_matrix(a), sp.csr_matrix(cc.conj())) - sparse_right(cc.conj().T @ a)
        )
        jump = jump + kappa / 2 * both(a)
    drives = [(turn(0.5 * (u + u.conj().T)), turn(0.5j * (u - u.conj().T))) for u in map(big, raising)]
    blocks = Blocks(generator, drives, 0, quanta)
    for name in ("rho", "p0", "p1", "many", "mean", "factorial2"):
        blocks.add(name, seed=name in ("rho", "p0"))
    blocks.link("p0", "p0", -jump)
    blocks.link("p1", "p1", -jump)
    for to, source, factor in (("p1", "p0", 1), ("many", "p1", 1), ("mean", "rho", 1), ("factorial2", "mean", 2)):
        blocks.link(to, source, factor * jump)
    read = lambda done: {
        "mean": done["mean"],
        "factorial2": done["factorial2"],
        "p": [done["p0"], done["p1"]],
        "multiphoton": done["many"],
    }
    return System(blocks, components, read).solve(drive, rtol)


def thinned(p, eta):
    """Binomial thinning of a whole distribution p_0, p_1, ... : p_0, p_1 and P(n>=2) of the survivors."""
    lost = lambda n, k: comb(n, k) * eta**k * (1 - eta) ** (n - k)
    p0 = sum(x * lost(n, 0) for n, x in enumerate(p))
    p1 = sum(x * lost(n, 1) for n, x in enumerate(p) if n >= 1)
    many = sum(x * sum(lost(n, k) for k in range(2, n + 1)) for n, x in enumerate(p) if n >= 2)
    return {"p": [p0, p1], "multiphoton": many}
