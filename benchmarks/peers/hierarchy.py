"""The exact phonon method as a straightforward SciPy script: auxiliary operators as one sparse matrix, an adaptive
Runge-Kutta method of order 8 over the drive window, closed form afterwards. Two levels, one resonant Gaussian pulse.

Talks in JSON lines. `{"prepare": case}` finds the loosest tolerance whose figures are within `accuracy` (relative) of a
tight run and answers with it and the figures; `{"run": 1}` evaluates once and answers with its processor time in seconds."""

import itertools
import json
import math
import sys
import time

import numpy as np
from scipy.integrate import solve_ivp
from scipy.sparse import csr_matrix, identity, kron

LANES = 5  # rho, rho_0, rho_1, rho_>=2, first moment


def left(a):
    """a X on row-major vectors of X."""
    return kron(csr_matrix(a), identity(2, format="csr"), format="csr")


def right(a):
    return kron(identity(2, format="csr"), csr_matrix(a).T, format="csr")


class Case:
    """`case`: fwhm (ps), area, lifetime (ps), shift (1/ps), depth, poles [nu_re, nu_im, c_re, c_im, conj_re, conj_im]."""

    def __init__(self, case):
        sigma = case["fwhm"] / (2 * math.sqrt(math.log(2)))
        self.peak = case["area"] / (sigma * math.sqrt(2 * math.pi))
        self.sigma = sigma
        self.reach = sigma * math.sqrt(2 * math.log(self.peak * sigma / 1e-6))
        gamma = 1 / case["lifetime"]
        x = np.diag([0.0, 1.0])
        up = np.array([[0, 0], [1, 0]])
        down = up.T
        jump = gamma * left(down) @ right(up)
        bare = -1j * case["shift"] * (left(x) - right(x)) + jump - 0.5 * gamma * (left(x) + right(x))
        half = 0.5 * (up + down)
        nus = [complex(p[0], p[1]) for p in case["poles"]]
        cs = [complex(p[2], p[3]) for p in case["poles"]]
        ds = [complex(p[4], p[5]) for p in case["poles"]]
        scale = [0.5 * (abs(c) + abs(d)) for c, d in zip(cs, ds)]
        depth, terms = case["depth"], len(nus)
        index = {
            n: i
            for i, n in enumerate(n for n in itertools.product(range(depth + 1), repeat=terms) if sum(n) <= depth)
        }
        size = len(index)
        self.operators = size
        total = kron(identity(size), bare).tolil()
        commutator = left(x) - right(x)
        blocks = []
        for n, i in index.items():
            decay = sum(a * nu for a, nu in zip(n, nus))
            blocks.append((i, i, -decay * identity(4)))
            for k in range(terms):
                above = n[:k] + (n[k] + 1,) + n[k + 1 :]
                if above in index:
                    blocks.append((i, index[above], -1j * math.sqrt((n[k] + 1) * scale[k]) * commutator))
                if n[k] > 0:
                    below = n[:k] + (n[k] - 1,) + n[k + 1 :]
                    factor = -1j * math.sqrt(n[k] / scale[k])
                    blocks.append((i, index[below], factor * (cs[k] * left(x) - ds[k] * right(x))))
        rows, cols, values = [], [], []
        for i, j, block in blocks:
            block = csr_matrix(block).tocoo()
            rows.extend(4 * i + block.row)
            cols.extend(4 * j + block.col)
            values.extend(block.data)
        links = csr_matrix((values, (rows, cols)), shape=(4 * size, 4 * size))
        self.constant = csr_matrix(total) + links
        self.driven = kron(identity(size), -1j * (left(half) - right(half)), format="csr")
        self.jump = kron(identity(size), jump, format="csr")
        self.size = 4 * size

    def derivative(self, t, y):
        y = y.reshape(self.size, LANES)
        omega = self.peak * math.exp(-0.5 * (t / self.sigma) ** 2)
        dy = self.constant @ y + omega * (self.driven @ y)
        j = self.jump @ y
        dy[:, 1] -= j[:, 1]
        dy[:, 2] += j[:, 1] - j[:, 2]
        dy[:, 3] += j[:, 2]
        dy[:, 4] += j[:, 0]
        return dy.ravel()

    def evaluate(self, tolerance):
        start = np.zeros((self.size, LANES), complex)
        start[0, 0] = start[0, 1] = 1
        run = solve_ivp(
            self.derivative,
            (-self.reach, self.reach),
            start.ravel(),
            method="DOP853",
            rtol=tolerance,
            atol=1e-3 * tolerance,
            t_eval=[self.reach],
        )
        root = run.y[:, -1].reshape(self.size, LANES)[:4].real
        trace, excited = root[0] + root[3], root[3]
        return {
            "mean": trace[4] + excited[0],
            "p0": root[0, 1],
            "p1": root[0, 2] + excited[1],
            "multiphoton": trace[3] + excited[2],
        }


def deviation(a, b):
    return max(abs(a[k] - b[k]) / max(abs(b[k]), 1e-2 if k == "p0" else 0) for k in b)


def main():
    case = None
    tolerance = 0.0
    for line in sys.stdin:
        request = json.loads(line)
        if "prepare" in request:
            wanted = request["prepare"]
            case = Case(wanted)
            exact = case.evaluate(1e-10)
            for digits in range(3, 10):
                tolerance = 10.0**-digits
                error = deviation(case.evaluate(tolerance), exact)
                if error <= wanted["accuracy"]:
                    break
            answer = {"tolerance": tolerance, "error": error, "figures": exact, "operators": case.operators}
        else:
            began = time.process_time()
            case.evaluate(tolerance)
            answer = {"seconds": time.process_time() - began}
        print(json.dumps(answer), flush=True)


main()
