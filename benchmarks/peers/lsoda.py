"""The same evaluation as a straightforward SciPy script: superoperators as sparse matrices, LSODA (scipy.integrate.odeint)
over the drive window, one linear solve afterwards.

Talks in JSON lines. `{"prepare": design, "moments": 4}` finds the loosest tolerance that meets the promised accuracy
(1e-9 on p_0 and p_1, 1e-6 relative on means, g2 and P(n>=2)) against a DOP853 run at 1e-12, and answers with it and the
figures; `{"run": key}` evaluates once and answers with the seconds it took."""

import cmath
import json
import sys
import time
from pathlib import Path

import numpy as np
from scipy.integrate import odeint

sys.path.insert(0, str(Path(__file__).resolve().parents[2] / "test" / "reference"))

import counting  # noqa: E402
import field  # noqa: E402
import reference  # noqa: E402
from physics import RAD_PER_GHZ, collected, emitter  # noqa: E402


def chirped_gaussian(tone):
    """Area 1, closed form: 1/sqrt(2 pi (s^2 - i GDD)) exp(-t^2 / 2(s^2 - i GDD)). Cheaper than the reference's table."""
    width2 = complex(field.width(tone) ** 2, -tone["gdd"])
    peak = 1 / cmath.sqrt(2 * cmath.pi * width2)
    return lambda t: peak * cmath.exp(-t * t / (2 * width2))


class Case:
    """A design with its matrices, built once; `evaluate` integrates and closes."""

    def __init__(self, design, moments):
        spec, coll, pulse = design["emitter"], design["collection"], design["pulse"]
        self.drive = field.Drive(pulse, reference.reference_line(design), spec["model"] != "two-level")
        for tone, envelope in zip(self.drive.tones, self.drive.envelopes):
            if envelope.dispersed and tone["shape"] == "gaussian" and tone["tod"] == 0:
                envelope.function = lambda tone=tone: chirped_gaussian(tone)
        model = emitter(spec, self.drive.frame, 0.0)
        dipoles = collected(model, coll, pulse["tones"][0]["polarization"])
        self.filtered = coll["filter"] is not None
        if self.filtered:
            kappa = coll["filter"]["fwhm"] * RAD_PER_GHZ
            center = model.lines[coll["line"]] + coll["filter"]["center"] * RAD_PER_GHZ - self.drive.frame
            self.system = counting.moments_system(model, dipoles, self.drive, kappa, center, moments)
        else:
            self.system = counting.emitted_system(model, dipoles, self.drive)
        self.exact = self.figures(self.system.solve(self.drive, 1e-12))
        for digits in range(6, 14):
            self.tolerance = 10.0**-digits
            self.error = self.deviation(self.evaluate())
            if self.error["p"] <= 1e-9 and self.error["relative"] <= 1e-6:
                return
        raise SystemExit("LSODA does not reach the promised accuracy")

    def figures(self, read):
        return {"mean": read[0], "factorial2": read[1], **counting.from_moments(read)} if self.filtered else read

    def evaluate(self):
        blocks, drive, components = self.system.blocks, self.drive, self.system.components
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

            tolerance = {"rtol": self.tolerance, "atol": self.tolerance * 1e-3}
            y = odeint(rhs, y, [a, b], hmax=(b - a) / 20, mxstep=10**7, **tolerance)[-1].copy()
        return self.figures(self.system.read(blocks.finish(y.view(complex))))

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
            case.evaluate()
            answer = {"seconds": time.perf_counter() - began}
        print(json.dumps(answer), flush=True)


if __name__ == "__main__":
    main()
