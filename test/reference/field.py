"""Tones, their envelopes by direct Fourier quadrature where dispersed, windows, energies and spectral overlaps."""

import cmath
import math

import numpy as np
from scipy.integrate import quad
from scipy.interpolate import make_interp_spline
from scipy.optimize import brentq, minimize_scalar

from physics import HBAR, RAD_PER_GHZ

CUT = 1e-13  # relative field at which envelopes and spectra are cut


def width(tone):
    """Shape parameter: sigma (gaussian), T (sech, square), ps."""
    fwhm = tone["fwhm"]
    return {
        "gaussian": fwhm / (2 * np.sqrt(np.log(2))),
        "sech": fwhm / (2 * np.arccosh(np.sqrt(2))),
        "square": fwhm,
    }[tone["shape"]]


def spectrum(tone, nu):
    """Fourier transform of the transform-limited envelope of area 1, real."""
    w, shape = width(tone), tone["shape"]
    if shape == "gaussian":
        return np.exp(-((nu * w) ** 2) / 2)
    if shape == "sech":
        return 1 / np.cosh(np.clip(np.pi * nu * w / 2, -700, 700))
    return np.sinc(nu * w / (2 * np.pi))


def half_window(tone):
    """Time from the centre after which the limited envelope is below CUT of its peak."""
    w = width(tone)
    return {"gaussian": np.sqrt(-2 * np.log(CUT)) * w, "sech": -np.log(CUT / 2) * w, "square": w / 2}[tone["shape"]]


def spectral_half(tone):
    w = width(tone)
    return {"gaussian": np.sqrt(-2 * np.log(CUT)) / w, "sech": -np.log(CUT / 2) * 2 / (np.pi * w)}[tone["shape"]]


class Envelope:
    """Dispersed envelope of one tone about its own centre; `start`, `end` in ps about its delay."""

    def __init__(self, tone):
        self.tone = tone
        self.dispersed = tone["gdd"] != 0 or tone["tod"] != 0
        half = half_window(tone)
        self.start, self.end = -half, half
        if not self.dispersed:
            return
        if tone["shape"] == "square":
            raise ValueError("a dispersed square has no finite band; this reference leaves it out")
        reach = spectral_half(tone)
        nu = np.linspace(-reach, reach, 2001)
        delay = tone["gdd"] * nu + tone["tod"] * nu**2 / 2
        # beyond the last group delay the tail falls slower than the limited pulse (an Airy tail for pure TOD)
        self.start, self.end = delay.min() - 4 * half, delay.max() + 4 * half
        self._tabulate(reach)

    def _tabulate(self, reach):
        """Trapezoidal Fourier sum on a grid by FFT, five times finer than the band needs, and a spline of degree 9
        through it; compared with the sum itself at 50 places."""
        tone = self.tone
        span = 1.2 * 2 * max(-self.start, self.end)  # the sum repeats with this period
        count = 1 << int(np.ceil(np.log2(5 * span * 2 * reach / (2 * np.pi))))
        index = np.arange(-int(reach * span / (2 * np.pi)) - 1, int(reach * span / (2 * np.pi)) + 2)
        nu = 2 * np.pi * index / span
        phase = tone["gdd"] * nu**2 / 2 + tone["tod"] * nu**3 / 6
        weights = spectrum(tone, nu) * np.exp(1j * phase) / span
        line = np.zeros(count, complex)
        line[index % count] = weights
        times = (np.arange(count) - count // 2) * span / count
        values = np.fft.fftshift(np.fft.fft(line))
        alive = np.nonzero(np.abs(values) > CUT * np.abs(values).max())[0]
        self.start, self.end = times[alive[0]], times[alive[-1]]
        keep = slice(*np.searchsorted(times, (self.start - span / 50, self.end + span / 50)))
        self.table = make_interp_spline(times[keep], values[keep], k=9)
        places = np.linspace(self.start, self.end, 52)[1:-1]
        direct = np.exp(-1j * np.outer(places, nu)) @ weights
        worst = np.abs(direct - self.table(places)).max() / np.abs(values).max()
        assert worst < 1e-11, f"envelope table: {worst}"

    def function(self):
        """The envelope at one time, inside its window."""
        w, shape = width(self.tone), self.tone["shape"]
        if self.dispersed:
            return lambda t: complex(self.table(t))
        if shape == "gaussian":
            peak = 1 / (math.sqrt(2 * math.pi) * w)
            return lambda t: peak * math.exp(-0.5 * (t / w) ** 2)
        if shape == "sech":
            return lambda t: 1 / (math.pi * w * math.cosh(min(abs(t / w), 700)))  # a step may be tried far outside
        return lambda t: 1 / w


class Drive:
    """Complex drive per component in the frame `frame` (1/ps above the mean exciton line)."""

    def __init__(self, pulse, reference, linear, frame=None):
        self.tones = pulse["tones"]
        self.centers = [reference + t["detuning"] / HBAR for t in self.tones]
        self.frame = float(np.mean(self.centers)) if frame is None else frame
        self.linear = linear
        self.envelopes = [Envelope(t) for t in self.tones]
        self.windows = [(t["delay"] + e.start, t["delay"] + e.end) for t, e in zip(self.tones, self.envelopes)]
        self.start = min(w[0] for w in self.windows)
        self.end = max(w[1] for w in self.windows)
        self.breaks = sorted({x for w in self.windows for x in w})

    def sampler(self, begin, end):
        """Function of t giving Omega per component, for a segment between two breaks: tones off in it stay off."""
        middle = (begin + end) / 2
        on = [k for k, w in enumerate(self.windows) if w[0] < middle < w[1]]

        def one(k):
            """(envelope at t, complex factor, rate, delay, weights) of a tone, constants worked out once."""
            tone, env = self.tones[k], self.envelopes[k]
            angle = tone["polarization"]
            weights = [math.cos(angle), math.sin(angle)] if self.linear else [1.0]
            factor = tone["area"] * np.exp(1j * tone["phase"])
            return env.function(), complex(factor), self.centers[k] - self.frame, tone["delay"], weights

        parts = [one(k) for k in on]
        size = 2 if self.linear else 1

        def value(t):
            out = [0j] * size
            for env, factor, rate, delay, weights in parts:
                omega = env(t - delay) * factor * cmath.exp(-1j * rate * t)
                for c, w in enumerate(weights):
                    out[c] += w * omega
            return np.array(out)

        return value


def field_spectrum(tones, omega):
    """(h, v) spectral field at omega (1/ps above the pulse reference), delays and phases included."""
    out = np.zeros((2, np.size(omega)), complex)
    for t in tones:
        nu = omega - t["detuning"] / HBAR
        phase = t["phase"] + t["gdd"] * nu**2 / 2 + t["tod"] * nu**3 / 6 + nu * t["delay"]
        # the carrier is not delayed: env(t - t_k) e^{-i w_k t} has the transform env(nu) e^{i nu t_k}
        amplitude = t["area"] * spectrum(t, nu) * np.exp(1j * phase)
        out[0] += np.cos(t["polarization"]) * amplitude
        out[1] += np.sin(t["polarization"]) * amplitude
    return out


def spectral_energy(tones, weight, axis, marks):
    """Integral dw/2pi of |projection on axis|^2 weight(w); axis None: both components.

    Adaptive quadrature between `marks` (frequencies near which something happens)."""

    def density(w):
        h, v = field_spectrum(tones, np.array([w]))[:, 0]
        if axis is None:
            return (abs(h) ** 2 + abs(v) ** 2) * weight(w)
        return abs(h * np.cos(axis) + v * np.sin(axis)) ** 2 * weight(w)

    edges = [t["detuning"] / HBAR + s * f / t["fwhm"] for t in tones for s in (-1, 1) for f in (0, 1, 3, 8, 20)]
    if any(t["shape"] == "square" for t in tones):
        edges += [t["detuning"] / HBAR + s * f / t["fwhm"] for t in tones for s in (-1, 1) for f in np.arange(50, 4001, 50)]
    edges = sorted({*edges, *marks})
    total = 0.0
    for a, b in zip(edges, edges[1:]):
        total += quad(density, a, b, epsabs=0, epsrel=1e-10, limit=2000)[0]
    return total / (2 * np.pi)


def pulse_energy(pulse, axis=None):
    """Integral |Omega|^2 dt (1/ps) by quadrature in time; axis None: both components."""
    drive = Drive(pulse, 0.0, True)
    fastest = max([abs(c - drive.frame) for c in drive.centers] + [1 / min(t["fwhm"] for t in drive.tones)])
    total = 0.0
    for a, b in zip(drive.breaks, drive.breaks[1:]):
        value = drive.sampler(a, b)

        def intensity(t):
            h, v = value(t)
            return abs(h) ** 2 + abs(v) ** 2 if axis is None else abs(h * np.cos(axis) + v * np.sin(axis)) ** 2

        parts = max(1, int((b - a) * fastest / 3))
        edges = np.linspace(a, b, parts + 1)
        nodes, weights = np.polynomial.legendre.leggauss(20)
        for lo, hi in zip(edges, edges[1:]):
            mid, half = (lo + hi) / 2, (hi - lo) / 2
            total += half * sum(w * intensity(mid + half * x) for x, w in zip(nodes, weights))
    return total


def pi_pulse_energy(fwhm):
    """Integral |Omega|^2 dt of a resonant transform-limited Gaussian pi pulse, 1/ps."""
    return np.pi**2 / (2 * np.sqrt(np.pi) * fwhm / (2 * np.sqrt(np.log(2))))


def lorentzian(kappa, center):
    """Intensity transmission of full width kappa at half maximum, 1 at its peak."""
    return lambda w: (kappa / 2) ** 2 / ((w - center) ** 2 + (kappa / 2) ** 2)


def outermost(function, grid):
    """Distance between the outermost half-maximum crossings of a sampled intensity, refined by root finding."""
    y = np.array([function(x) for x in grid])
    top, k = y.max(), int(y.argmax())
    if 0 < k < len(grid) - 1 and y[k - 1] < top and y[k + 1] < top:
        bracket = (grid[k - 1], grid[k], grid[k + 1])
        top = max(top, -minimize_scalar(lambda x: -function(x), bracket=bracket, options={"xtol": 1e-12}).fun)
    above = np.nonzero(y >= top / 2)[0]
    lo, hi = above[0], above[-1]
    level = lambda x: function(x) - top / 2
    return brentq(level, grid[hi], grid[hi + 1], xtol=1e-12) - brentq(level, grid[lo - 1], grid[lo], xtol=1e-12)


def duration(pulse):
    """ps, of |Omega_h|^2 + |Omega_v|^2; a lone square: its width."""
    drive = Drive(pulse, 0.0, True)
    if len(drive.tones) == 1 and drive.tones[0]["shape"] == "square":
        return drive.tones[0]["fwhm"]
    samplers = [(a, b, drive.sampler(a, b)) for a, b in zip(drive.breaks, drive.breaks[1:])]

    def intensity(t):
        for a, b, value in samplers:
            if a <= t <= b:
                return float((np.abs(value(t)) ** 2).sum())
        return 0.0

    return outermost(intensity, np.linspace(drive.start, drive.end, 6001))


def bandwidth(pulse):
    """GHz, of |Omega_h(w)|^2 + |Omega_v(w)|^2."""
    tones = pulse["tones"]
    centers = [t["detuning"] / HBAR for t in tones]
    reach = max(8 / t["fwhm"] for t in tones)
    grid = np.linspace(min(centers) - reach, max(centers) + reach, 20001)
    return outermost(lambda w: float((np.abs(field_spectrum(tones, np.array([w]))) ** 2).sum()), grid) / RAD_PER_GHZ
