"""The same evaluation as a straightforward SciPy script: superoperators as sparse matrices, LSODA (scipy.integrate.odeint)
over the drive window, one linear solve afterwards.

Talks in JSON lines. `{"prepare": design, "moments": 4}` finds the loosest tolerance that meets the promised accuracy
(1e-9 on p_0 and p_1, 1e-6 relative on means, g2 and P(n>=2)) against a DOP853 run at 1e-12, and answers with it and the
figures; `{"run": key}` evaluates once and answers with the seconds it took."""

import json
import sys
import time
from pathlib import Path

import numpy as np
from scipy.integrate import odeint

sys.path.insert(0, str(Path(__file__).resolve().parents[2] / "test" / "reference"))

import counting  # noqa: E402
import reference  # noqa: E402
from liouville import Blocks  # noqa: E402


def lsoda_run(blocks, drive, rtol, components):
    blocks.assemble()
    y = blocks.initial().view(float)
    width = len(blocks.rates) * blocks.size
    for a, b in zip(drive.breaks, drive.breaks[1:]):
        value = drive.sampler(a, b)

        def rhs(state, t):
            omega = value(t)[components]
            weights = np.empty(blocks.count)
            weights[0] = 1.0
            weights[1::2] = omega.real
            weights[2::2] = omega.imag
            return (weights @ (blocks.stack @ state.view(complex)).reshape(blocks.count, width)).view(float)

        y = odeint(rhs, y, [a, b], rtol=rtol, atol=rtol * 1e-3, hmax=(b - a) / 20, mxstep=10**7)[-1].copy()
    return y.view(complex)


class Case:
    def __init__(self, design, moments):
        self.design = design
        self.moments = moments
        self.exact = self.evaluate(1e-12, Blocks.run)
        for digits in range(6, 14):
            self.tolerance = 10.0**-digits
            self.error = self.deviation(self.evaluate(self.tolerance, lsoda_run))
            if self.error["p"] <= 1e-9 and self.error["relative"] <= 1e-6:
                return
        raise SystemExit("LSODA does not reach the promised accuracy")

    def evaluate(self, rtol, run):
        """The parts of a design that a goal needs: without a filter the emitted count, else the filtered moments."""
        spec, coll, pulse = self.design["emitter"], self.design["collection"], self.design["pulse"]
        drive = reference.field.Drive(pulse, reference.reference_line(self.design), spec["model"] != "two-level")
        model = reference.emitter(spec, drive.frame, 0.0)
        dipoles = reference.collected(model, coll, pulse["tones"][0]["polarization"])
        standard, Blocks.run = Blocks.run, run
        try:
            if coll["filter"] is None:
                return counting.emitted(model, dipoles, drive, 3, rtol)
            kappa = coll["filter"]["fwhm"] * reference.RAD_PER_GHZ
            center = model.lines[coll["line"]] + coll["filter"]["center"] * reference.RAD_PER_GHZ - drive.frame
            m = counting.moments(model, dipoles, drive, kappa, center, self.moments, rtol)
            return {"mean": m[0], "factorial2": m[1], **counting.from_moments(m)}
        finally:
            Blocks.run = standard

    def deviation(self, found):
        """Largest error of p_0 and p_1, and largest relative error of means, g2 and P(n>=2)."""
        g2 = lambda f: f["factorial2"] / f["mean"] ** 2
        pairs = [(found[k], self.exact[k]) for k in ("mean", "factorial2", "multiphoton")] + [(g2(found), g2(self.exact))]
        return {
            "p": max(abs(a - b) for a, b in zip(found["p"][:2], self.exact["p"][:2])),
            "relative": max(abs(a - b) / max(abs(b), 1e-7) for a, b in pairs),
        }


def main():
    cases = []
    for line in sys.stdin:
        request = json.loads(line)
        if "prepare" in request:
            case = Case(request["prepare"], request["moments"])
            cases.append(case)
            answer = {"key": len(cases) - 1, "tolerance": case.tolerance, "error": case.error, "exact": case.exact}
        else:
            case = cases[request["run"]]
            began = time.perf_counter()
            case.evaluate(case.tolerance, lsoda_run)
            answer = {"seconds": time.perf_counter() - began}
        print(json.dumps(answer), flush=True)


if __name__ == "__main__":
    main()
