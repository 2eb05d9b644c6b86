"""Published tables of figures, each recomputed with an independent ODE code before it was written down here.

Every number is kept as printed: half a unit of its last digit is its own uncertainty."""

from math import pi

from designs import cascade, design, tone, two_level

SOURCE = "recomputed with an independent ODE code"
FIELD = 1.6651092223153956  # FWHM of a Gaussian over its field sigma, 2 sqrt(ln 2)


def row(name, fixed, **expected):
    return {"name": name, "source": SOURCE, "design": fixed, "expected": expected}


def emitted_rows():
    slow = two_level(500)
    pulses = {
        "A: Gaussian pi, 5 ps": [tone()],
        "B: Gaussian 2 pi, 50 ps": [tone(fwhm=50, area=2 * pi)],
        "C: Gaussian 5 pi, 2 ps, GDD 40 ps^2": [tone(fwhm=2, area=5 * pi, gdd=40)],
        "D: two tones below the line": [
            tone(fwhm=2.4 * FIELD, area=22.65 * pi, detuning=-8),
            tone(fwhm=3.04 * FIELD, area=19.29 * pi, detuning=-19.163),
        ],
    }
    a, b, c, d = (design(slow, tones) for tones in pulses.values())
    names = list(pulses)
    two_photon = design(
        cascade(500, 250, 2), [tone(fwhm=10, area=4.8186 * pi)], reference="two-photon"
    )

    def values(mean, g2, p0, p1, p2):
        out = {"emitted.mean": mean, "emitted.g2": g2, "emitted.p.1": p1, "emitted.p.2": p2}
        return out if p0 is None else {**out, "emitted.p.0": p0}

    return [
        row(names[0], a, **values("1.00216473028", "4.33213973853e-3", "9.95461847e-6", "0.99781613343", "2.17313909624e-3")),
        row(
            "A with pure dephasing 0.01 1/ps",
            design(two_level(500, dephasing=0.01), pulses[names[0]]),
            **values("0.99131218139", "4.34748972342e-3", "1.08232004327e-2", "0.98704217457", "2.13386827190e-3"),
        ),
        row(names[1], b, **values("0.14481279422", "5.96304638786", "0.91619357473", "0.02430892101", "0.05799814492")),
        row(names[2], c, **values("1.0290650466", "5.5958048098e-2", None, "0.9714909104", "2.7961120028e-2")),
        row(names[3], d, **values("0.9996668410", "3.0194827613e-3", "1.840467411e-3", "0.9966536505", "1.5044567580e-3")),
        row(
            "E: cascade, two-photon resonance, Gaussian 4.8186 pi, 10 ps",
            two_photon,
            **values("1.00005965891", "1.81028162019e-3", "8.44857258526e-4", "0.99825135876", "9.03052259720e-4"),
        ),
        row("A, first four probabilities", a, **{
            "emitted.p.0": "9.9546e-6", "emitted.p.1": "0.9978161334", "emitted.p.2": "2.1731391e-3",
            "emitted.p.3": "7.72759e-7", "emitted.g2": "4.33213974e-3"}),
        row("B, first four probabilities", b, **{
            "emitted.p.0": "0.9161935747", "emitted.p.1": "0.0243089210", "emitted.p.2": "0.0579981449",
            "emitted.p.3": "1.48987862e-3", "emitted.g2": "5.96304639"}),
        row("C, first four probabilities", c, **{
            "emitted.p.1": "0.9714909104", "emitted.p.2": "0.0279611200",
            "emitted.p.3": "5.400738e-4", "emitted.g2": "0.0559580480"}),
    ]


def filtered_rows():
    def values(mean, g2, through, g2_through):
        return {"emitted.mean": mean, "emitted.g2": g2, "filtered.mean": through, "filtered.g2": g2_through}

    def pi_pulse(fwhm, width):
        return design(two_level(200), [tone(fwhm=fwhm)], filter=width)

    def two_photon(fwhm, area, width):
        return design(
            cascade(400, 200, 5), [tone(fwhm=fwhm, area=area * pi)],
            reference="two-photon", polarization="h", filter=width,
        )

    return [
        row("two-level, pi, 3 ps, 10 GHz", pi_pulse(3, 10),
            **values("1.0032298525", "6.4660131917e-3", "0.9295053301", "6.1082711934e-4")),
        row("two-level, pi, 10 ps, 30 GHz", pi_pulse(10, 30),
            **values("1.0103707095", "2.08320465861e-2", "0.9876950292", "1.16029037249e-2")),
        row("two-level, pi, 30 ps, 100 GHz", pi_pulse(30, 100),
            **values("1.0279125784", "5.70746401450e-2", "1.0261302577", "5.59620713360e-2")),
        row("cascade, 6 ps, 20 GHz", two_photon(6, 5.80764685934973, 20),
            **values("0.5000635176", "2.0158248378e-3", "0.4894233259", "2.3182614759e-6")),
        row("cascade, 12 ps, 100 GHz", two_photon(12, 8.07178065428037, 100),
            **values("0.5000753845", "2.1998402625e-3", "0.4971166102", "7.0519767293e-5")),
        row("two-level, pi, 5 ps, 20 GHz, multiphoton", design(two_level(260), [tone()], filter=20), **{
            "filtered.multiphoton": "1.0002973416e-3", "filtered.mean": "0.974985351",
            "filtered.factorial2": "2.00135716e-3"}),
        row("two-level, 4 pi, 20 ps, 50 GHz, multiphoton",
            design(two_level(260), [tone(fwhm=20, area=4 * pi)], filter=50), **{
                "filtered.multiphoton": "3.99429e-2", "filtered.mean": "0.10549399",
                "filtered.factorial2": "0.08189691"}),
    ]


def tables():
    return emitted_rows() + filtered_rows()
