"""Complete designs as plain dictionaries in internal units (angles rad, energies meV, filters GHz, wavelength µm),
and the seeded random ones of the golden files."""

from math import pi

import numpy as np


def tone(**changes):
    plain = {"shape": "gaussian", "fwhm": 5, "area": pi, "detuning": 0, "gdd": 0, "tod": 0,
             "delay": 0, "phase": 0, "polarization": 0}
    return {**plain, **changes}


def two_level(lifetime, dephasing=0):
    return {"model": "two-level", "wavelength": 0.93, "lifetime": lifetime, "biexcitonLifetime": None,
            "binding": None, "splitting": 0, "dephasing": dephasing, "phonons": None}


def cascade(lifetime, biexciton, binding, splitting=0, dephasing=0):
    return {"model": "cascade", "wavelength": 0.93, "lifetime": lifetime, "biexcitonLifetime": biexciton,
            "binding": binding, "splitting": splitting, "dephasing": dephasing, "phonons": None}


def design(emitter, tones, reference="exciton", line="exciton", polarization="all", efficiency=1,
           filter=None, center=0, laser=None, drift=None):
    return {
        "emitter": emitter,
        "pulse": {"reference": reference, "tones": tones},
        "collection": {"line": line, "polarization": polarization, "efficiency": efficiency,
                       "filter": None if filter is None else {"fwhm": filter, "center": center}},
        "laser": laser,
        "drift": drift,
    }


class Draw:
    """Seeded draws, rounded to six digits so that the files stay readable."""

    def __init__(self, seed):
        self.rng = np.random.default_rng(seed)

    def linear(self, a, b):
        return float(f"{self.rng.uniform(a, b):.6g}")

    def log(self, a, b):
        return float(f"{np.exp(self.rng.uniform(np.log(a), np.log(b))):.6g}")

    def pick(self, *options):
        return options[self.rng.integers(len(options))]

    def chance(self, p):
        return bool(self.rng.uniform() < p)

    def laser(self):
        return {"repetition": 76, "piPulse": {"energy": self.log(1, 50), "fwhm": self.log(2, 20)},
                "rejection": self.log(1e-8, 1e-5)}


def single_tone(draw, shape, areas=(0.3 * pi, 5 * pi), reach=1.0):
    """A tone with detuning within `reach` of its own bandwidth, dispersed if the shape has a finite band."""
    fwhm = draw.log(1.5, 40)
    out = tone(shape=shape, fwhm=fwhm, area=draw.linear(*areas), phase=draw.linear(-pi, pi), delay=draw.linear(-20, 20))
    if draw.chance(0.7):
        out["detuning"] = draw.linear(-reach, reach) * 1.8 / fwhm
    if shape != "square":
        if draw.chance(0.6):
            out["gdd"] = draw.linear(-1, 1) * fwhm**2 * (0.3 if shape == "sech" else 1)
        if draw.chance(0.5):
            out["tod"] = draw.linear(-1, 1) * fwhm**3 * (0.08 if shape == "sech" else 0.3)
    return out


def random_two_level(seed):
    """(name, design, options) of every random two-level design."""
    draw = Draw(seed)
    out = []
    shapes = ["gaussian", "sech", "square"]
    for k in range(18):
        tones = [single_tone(draw, shapes[k % 3])]
        if k % 4 == 3:
            second = single_tone(draw, draw.pick("gaussian", "sech", "square"), (0.3 * pi, 3 * pi))
            tones.append({**second, "polarization": draw.pick(0, draw.linear(0, pi))})
        # a wide filter over a long dispersed pulse costs much and tests nothing new
        dispersed = any(t["gdd"] or t["tod"] for t in tones)
        width = None if k % 6 == 0 else draw.log(1, 100 if dispersed else 1000)
        emitter = two_level(draw.log(60, 2000), draw.pick(0, draw.log(1e-5, 2e-2)))
        laser = draw.laser() if k % 3 != 1 else None
        one = design(
            emitter, tones, polarization=draw.pick("all", "crossed"), efficiency=draw.pick(1, draw.linear(0.2, 1)),
            filter=width, center=0 if width is None else draw.pick(0, draw.linear(-1, 1) * width), laser=laser)
        out.append((f"two-level {k}: {'+'.join(t['shape'] for t in tones)}", one, {}))
    swing_up = [tone(fwhm=draw.linear(3, 5), area=draw.linear(15, 24) * pi, detuning=draw.linear(-9, -7)),
                tone(fwhm=draw.linear(4, 6), area=draw.linear(15, 24) * pi, detuning=draw.linear(-21, -17))]
    out.append(("two-level: two far detuned colours",
                design(two_level(300), swing_up, polarization="crossed", efficiency=0.6, filter=40, laser=draw.laser()), {}))
    out.append(("two-level: many photons a pulse", design(two_level(50), [tone(fwhm=200, area=18 * pi)], filter=60), {}))
    drifts = [
        ({"area": 0.03, "width": 0, "detuning": 0.008}, 12, {"area": 8, "detuning": 20}),
        ({"area": 0.02, "width": 0.04, "detuning": 0}, None, {"area": 10, "width": 12}),
        ({"area": 0, "width": 0, "detuning": 0.02}, 80, {"detuning": 24}),
    ]
    for drift, width, nodes in drifts:
        tones = [tone(fwhm=draw.log(4, 15), area=draw.linear(0.8, 2.2) * pi)]
        drift = {**drift, "filterCenter": 0, "quantile": None}
        one = design(two_level(draw.log(150, 600)), tones, polarization="crossed", efficiency=draw.linear(0.4, 0.9),
                     filter=width, laser=draw.laser(), drift=drift)
        out.append((f"two-level, drift of {', '.join(k for k, v in drift.items() if v)}", one, {"nodes": nodes}))
    return out


def random_cascade(seed):
    draw = Draw(seed)
    out = []
    plan = [  # line, polarisation, filtered, reference, tones
        ("exciton", "h", True, "two-photon", 1),
        ("exciton", "all", True, "two-photon", 1),
        ("biexciton", "all", True, "two-photon", 1),
        ("exciton", "crossed", True, "two-photon", 1),
        ("biexciton", "crossed", False, "two-photon", 1),
        ("exciton", "crossed", False, "exciton", 1),
        ("exciton", "all", True, "exciton", 2),
        ("biexciton", "v", True, "two-photon", 2),
        ("exciton", "v", False, "two-photon", 1),
        ("biexciton", "crossed", True, "two-photon", 1),
        ("exciton", "all", True, "two-photon", 1),
        ("biexciton", "all", True, "exciton", 1),
        ("exciton", "all", True, "two-photon", 2),
    ]
    for k, (line, polarization, filtered, reference, count) in enumerate(plan):
        binding = draw.linear(1.5, 4) * (-1 if k % 4 == 3 else 1)
        lifetime = draw.log(150, 900)
        emitter = cascade(lifetime, draw.linear(0.4, 0.7) * lifetime, binding, draw.pick(0.0, draw.linear(-0.04, 0.04)),
                          draw.pick(0, draw.log(1e-5, 5e-3)))
        if polarization == "crossed" and emitter["splitting"] == 0:
            emitter["splitting"] = 0.02  # without splitting nothing is emitted across the drive
        fwhm = draw.log(3, 10)
        if reference == "two-photon":  # area for a two-photon pi pulse, times a random factor
            area = np.sqrt(abs(binding) / 0.658 * fwhm * 2.13 * pi) * 2.0 * draw.linear(0.5, 1.2)
        else:
            area = draw.linear(0.5, 1.5) * pi
        first = tone(shape=draw.pick("gaussian", "gaussian", "sech"), fwhm=fwhm, area=float(f"{area:.6g}"),
                     detuning=draw.pick(0, draw.linear(-0.1, 0.1)), gdd=0 if polarization == "all" else draw.linear(-0.5, 0.5) * fwhm**2,
                     phase=draw.linear(-pi, pi), polarization=draw.pick(0, pi / 4, draw.linear(0, pi)))
        tones = [first]
        if count == 2:  # a delayed pulse on the other line
            target = -binding / 2 if reference == "two-photon" else -binding
            tones.append(tone(fwhm=draw.log(3, 10), area=draw.linear(0.5, 1.2) * pi, detuning=float(f"{target:.6g}"),
                              delay=draw.linear(10, 40), polarization=draw.linear(0, pi)))
        width = draw.log(2, 60 if polarization == "all" else 300) if filtered else None
        one = design(emitter, tones, reference, line, polarization, draw.pick(1, draw.linear(0.2, 1)), width,
                     0 if width is None else draw.pick(0, draw.linear(-0.5, 0.5) * width),
                     draw.laser() if k % 2 == 0 else None)
        out.append((f"cascade {k}: {line}, {polarization}", one, {"moments": 4} if polarization == "all" else {}))
    one = out[0][1]
    collection = {**one["collection"], "filter": {"fwhm": 40, "center": 0}}
    out.append(("cascade, drift of area, detuning",
                {**one, "collection": collection, "drift": {"area": 0.02, "width": 0, "detuning": 0.004, "filterCenter": 0, "quantile": None}},
                {"moments": 4, "nodes": {"area": 8, "detuning": 10}}))
    return out
