"""A set of operators X_b with dX_b/dt = L(t) X_b - (damping_b + i rotation_b) X_b + sum S_bc X_c, integrated by
SciPy's DOP853 over the drive window and closed by one linear solve when the drive is over."""

import numpy as np
import scipy.sparse as sp
from scipy.integrate import DOP853
from scipy.sparse.linalg import splu


class Blocks:
    def __init__(self, constant, drives, rest, quanta):
        """`constant`: Liouvillian without drive; `drives`: per component the superoperators of Re and Im of Omega;
        `rest`: vector index of the state that starts populated and never decays; `quanta`: per basis state."""
        self.constant = sp.csr_matrix(constant)
        self.drives = drives
        self.size = self.constant.shape[0]
        self.rest = rest
        self.order = np.subtract.outer(quanta, quanta).ravel()
        self.rates = []
        self.orders = []
        self.links = []
        self.seeds = []
        self.names = {}

    def add(self, name, damping=0.0, rotation=0.0, seed=False, order=0):
        self.names[name] = len(self.rates)
        self.orders.append(order)
        self.rates.append(damping + 1j * rotation)
        if seed:
            self.seeds.append(name)
        return name

    def link(self, to, source, superoperator):
        self.links.append((self.names[to], self.names[source], sp.coo_matrix(superoperator)))

    def assemble(self):
        """Sparse matrices of the undriven generator and of every drive part, and the solver for the time after."""
        n, size = len(self.rates), self.size
        eye = sp.identity(n, format="csr")
        base = sp.kron(eye, self.constant) - sp.kron(sp.diags(self.rates), sp.identity(size))
        rows, cols, vals = [], [], []
        for to, source, m in self.links:
            rows.append(to * size + m.row)
            cols.append(source * size + m.col)
            vals.append(m.data)
        if rows:
            base = base + sp.coo_matrix(
                (np.concatenate(vals), (np.concatenate(rows), np.concatenate(cols))), shape=(n * size, n * size)
            )
        self.base = sp.csr_matrix(base)
        parts = [self.base] + [sp.kron(eye, sp.csr_matrix(m)) for pair in self.drives for m in pair]
        self.stack = sp.csr_matrix(sp.vstack(parts))
        self.count = len(parts)
        # Without drive the quanta on the left and on the right change together, so only operators with as many on
        # either side (each block adds its own `order`) reach the ground state; leaving out the rest keeps the fast
        # coherences out of the solve.
        self.still = np.array([b * size + self.rest for b in range(n) if self.rates[b] == 0])
        balanced = np.nonzero(np.add.outer(self.orders, self.order).ravel() == 0)[0]
        self.decays = np.setdiff1d(balanced, self.still)
        self.afterwards = splu(self.base[self.decays][:, self.decays].tocsc())
        self.outflow = self.base[self.still][:, self.decays]

    def initial(self):
        y = np.zeros(len(self.rates) * self.size, complex)
        for name in self.seeds:
            y[self.names[name] * self.size + self.rest] = 1.0
        return y

    def run(self, drive, rtol, components):
        """State at the end of the drive window. Two passes: the first measures the size of every block, the second
        takes an absolute tolerance per block from it, so that small multiphoton terms keep their relative accuracy."""
        self.assemble()
        _, peaks = self._pass(drive, 1e-5, np.full(len(self.rates), 1e-8), components)
        y, _ = self._pass(drive, rtol, np.maximum(peaks, 1e-16) * rtol, components)
        return y

    def _pass(self, drive, rtol, atol, components):
        n, size = len(self.rates), self.size
        y = self.initial()
        peaks = np.zeros(n)
        tolerance = np.repeat(atol, size)
        width = n * size
        for a, b in zip(drive.breaks, drive.breaks[1:]):
            value = drive.sampler(a, b)

            def rhs(t, state):
                omega = value(t)[components]
                weights = np.empty(self.count)
                weights[0] = 1.0
                weights[1::2] = omega.real
                weights[2::2] = omega.imag
                return weights @ (self.stack @ state).reshape(self.count, width)

            solver = DOP853(rhs, a, y, b, rtol=rtol, atol=tolerance, max_step=(b - a) / 20)
            while solver.status == "running":
                message = solver.step()
                if solver.status == "failed":
                    raise RuntimeError(message)
                peaks = np.maximum(peaks, np.abs(solver.y).reshape(n, size).max(axis=1))
            y = solver.y
        return y, peaks

    def finish(self, y):
        """Trace of every undamped block at t = infinity."""
        final = y[self.still] - self.outflow @ self.afterwards.solve(y[self.decays])
        where = {int(index) // self.size: k for k, index in enumerate(self.still)}
        return {name: final[where[b]].real for name, b in self.names.items() if b in where}
