import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Pulse } from '../../../core/pulse/contract.js';
import { createDrive } from '../../../core/pulse/drive.js';
import { pulseEnergy, transmittedEnergy } from '../../../core/pulse/energy.js';
import { HBAR } from '../../../core/units/constants.js';
import { pulse } from './tone.js';

const all = { axis: null };

/** ∫ |Ω_h|² + |Ω_v|² by composite Simpson over the drive's own samples: shares nothing with the spectral path. */
function energyInTime(p: Pulse, n: number): number {
  const drive = createDrive(p, { frame: 0, projection: 'linear' });
  const out = new Float64Array(4);
  let sum = 0;
  for (let s = 0; s + 1 < drive.breakpoints.length; s++) {
    const [a, b] = [drive.breakpoints[s], drive.breakpoints[s + 1]];
    for (let i = 0; i <= n; i++) {
      drive.sample(a + ((b - a) * i) / n, s, out);
      const weight = i === 0 || i === n ? 1 : i % 2 === 1 ? 4 : 2;
      sum += (weight * (b - a) * out.reduce((total, x) => total + x * x, 0)) / (3 * n);
    }
  }
  return sum;
}

/** κ∫|a|² of the single-pole filter da/dt = −(κ/2)a + (κ/2)Ω by classical Runge–Kutta in the filter's frame. */
function filteredInTime(p: Pulse, kappa: number, center: number, n: number): number {
  const drive = createDrive(p, { frame: center, projection: 'full' });
  const f = new Float64Array(6);
  const at = (t: number, s: number, k: number) => {
    const view = f.subarray(2 * k, 2 * k + 2);
    drive.sample(t, s, view);
  };
  let [re, im, sum] = [0, 0, 0];
  const g = kappa / 2;
  for (let s = 0; s + 1 < drive.breakpoints.length; s++) {
    const [start, end] = [drive.breakpoints[s], drive.breakpoints[s + 1]];
    const h = (end - start) / n;
    for (let i = 0; i < n; i++) {
      const t = start + i * h;
      [0, 0.5, 1].forEach((c, k) => {
        at(t + c * h, s, k);
      });
      const k1 = [g * (f[0] - re), g * (f[1] - im), re * re + im * im];
      const r2 = [re + (h / 2) * k1[0], im + (h / 2) * k1[1]];
      const k2 = [g * (f[2] - r2[0]), g * (f[3] - r2[1]), r2[0] ** 2 + r2[1] ** 2];
      const r3 = [re + (h / 2) * k2[0], im + (h / 2) * k2[1]];
      const k3 = [g * (f[2] - r3[0]), g * (f[3] - r3[1]), r3[0] ** 2 + r3[1] ** 2];
      const r4 = [re + h * k3[0], im + h * k3[1]];
      const k4 = [g * (f[4] - r4[0]), g * (f[5] - r4[1]), r4[0] ** 2 + r4[1] ** 2];
      re += (h / 6) * (k1[0] + 2 * k2[0] + 2 * k3[0] + k4[0]);
      im += (h / 6) * (k1[1] + 2 * k2[1] + 2 * k3[1] + k4[1]);
      sum += (h / 6) * (k1[2] + 2 * k2[2] + 2 * k3[2] + k4[2]);
    }
  }
  return sum + (re * re + im * im) / kappa;
}

describe('pulse energy', () => {
  it('single tones: Θ²/(2√π σ), 2Θ²/(π²T), Θ²/T (integrals of the shapes, derived)', () => {
    expect(pulseEnergy(pulse({ fwhm: 2 * Math.sqrt(Math.LN2) * 3, area: 2 }))).toBeCloseTo(
      4 / (6 * Math.sqrt(Math.PI)),
      14,
    );
    const t = 2;
    expect(pulseEnergy(pulse({ shape: 'sech', fwhm: 2 * Math.acosh(Math.SQRT2) * t, area: 3 }))).toBeCloseTo(
      18 / (Math.PI ** 2 * t),
      13,
    );
    expect(pulseEnergy(pulse({ shape: 'square', fwhm: 4, area: 3 }))).toBeCloseTo(9 / 4, 14);
  });

  const shapes = fc.constantFrom('gaussian', 'sech', 'square');
  const tones = fc.record({
    shape: shapes,
    fwhm: fc.double({ min: 1, max: 20, noNaN: true }),
    area: fc.double({ min: 0.1, max: 10, noNaN: true }),
    detuning: fc.double({ min: -2, max: 2, noNaN: true }),
    delay: fc.double({ min: -10, max: 10, noNaN: true }),
    phase: fc.double({ min: -3, max: 3, noNaN: true }),
    polarization: fc.double({ min: 0, max: 3, noNaN: true }),
  });

  it('agrees with the time integral for two overlapping tones of any kind (Parseval)', () => {
    fc.assert(
      fc.property(tones, tones, (a, b) => {
        const p = pulse(a, b);
        const reference = energyInTime(p, 8000);
        expect(Math.abs(pulseEnergy(p) / reference - 1)).toBeLessThan(1e-9);
      }),
      { seed: 5, numRuns: 40 },
    );
  });

  it('does not change under the dispersion that all tones of one colour share', () => {
    const dispersed = { gdd: 30, tod: -20 };
    const plain = pulse({ area: 2 }, { area: 1, delay: 3, phase: 1 });
    const chirped = pulse({ area: 2, ...dispersed }, { area: 1, delay: 3, phase: 1, ...dispersed });
    expect(pulseEnergy(chirped) / pulseEnergy(plain)).toBeCloseTo(1, 12);
  });

  it('beating of two chirped Gaussians agrees with the time integral', () => {
    const p = pulse({ gdd: 40, detuning: 0.5 }, { gdd: -10, fwhm: 3, delay: 4, phase: 0.7 });
    expect(pulseEnergy(p) / energyInTime(p, 40_000)).toBeCloseTo(1, 10);
  });

  it('two squares of different dispersion beat as their drives do', () => {
    for (const [one, two] of [
      [20, -5],
      [0, 3],
    ]) {
      const shape = 'square';
      const p = pulse({ shape, gdd: one }, { shape, fwhm: 8, gdd: two, delay: 4, detuning: 0.4, phase: 1 });
      const apart = pulseEnergy(pulse({ shape })) + pulseEnergy(pulse({ shape, fwhm: 8 }));
      // The drive leaves out far wings and their energy; what beats is inside.
      const alone = energyInTime(pulse(p.tones[0]), 60_000) + energyInTime(pulse(p.tones[1]), 60_000);
      const beating = energyInTime(p, 60_000) - alone;
      expect((pulseEnergy(p) - apart) / apart).toBeCloseTo(beating / apart, 8);
    }
    // Equal GDD only delays one colour against the other: G·δ, and a phase −½Gδ² (from φ(ω), derived).
    const [gdd, delta, shape] = [10, 0.4 / HBAR, 'square'];
    const second = { shape, fwhm: 8, delay: 4, detuning: 0.4, phase: 1 };
    const together = pulseEnergy(pulse({ shape, gdd }, { ...second, gdd }));
    const moved = pulse({ shape, delay: gdd * delta, phase: -0.5 * gdd * delta * delta }, second);
    expect(together / pulseEnergy(moved)).toBeCloseTo(1, 7);
  });

  it('vanishes with the area', () => {
    expect(pulseEnergy(pulse({ area: 0 }, { area: 0, shape: 'square' }))).toBe(0);
    expect(transmittedEnergy(pulse({ area: 0 }), { kappa: 0.1, center: 0 }, all).parallel).toBe(0);
  });
});

describe('energy behind a Lorentzian filter', () => {
  it.each([
    ['gaussian', 0.19, 0.3],
    ['sech', 0.6, -0.5],
    ['square', 0.19, 1.7],
    ['square', 6, 0],
  ])('%s, κ = %f, centre %f, against the filter equation in time', (shape, kappa, center) => {
    const p = pulse({ shape, area: 2, detuning: 0.2 });
    const reference = filteredInTime(p, kappa, center, 20_000);
    expect(transmittedEnergy(p, { kappa, center }, all).parallel / reference).toBeCloseTo(1, 9);
  });

  it('two tones with delay, phase and mixed shapes, against the filter equation in time', () => {
    for (const [first, second] of [
      ['gaussian', 'gaussian'],
      ['square', 'square'],
      ['square', 'sech'],
    ]) {
      const p = pulse(
        { shape: first, gdd: first === 'gaussian' ? 25 : 0 },
        { shape: second, delay: 14, detuning: 0.3, phase: 2 },
      );
      const reference = filteredInTime(p, 0.1, 0.25, 40_000);
      expect(transmittedEnergy(p, { kappa: 0.1, center: 0.25 }, all).parallel / reference).toBeCloseTo(1, 9);
    }
  });

  it('narrow and wide limits: κ·π/2·|Ω(ω_f)|²/2π, and the whole energy (derived)', () => {
    const center = 0.2;
    const sigma = 5 / (2 * Math.sqrt(Math.LN2));
    const spectral = Math.PI ** 2 * Math.exp(-((center * sigma) ** 2));
    const narrow = transmittedEnergy(pulse({}), { kappa: 1e-5, center }, all).parallel;
    expect(narrow / ((1e-5 * spectral) / 4)).toBeCloseTo(1, 3);
    const wide = transmittedEnergy(pulse({}), { kappa: 1e5, center }, all).parallel;
    expect(wide / pulseEnergy(pulse({}))).toBeCloseTo(1, 8);
  });

  it.each(['gaussian', 'sech'])('%s far off the filter, against a plain sum over frequencies', (shape) => {
    // The trapezoidal rule converges geometrically for analytic integrands once its step is far below κ
    // (Trefethen & Weideman, SIAM Rev. 56, 385 (2014)).
    const kappa = 0.02;
    const p = pulse({ shape, fwhm: 6, area: 1 });
    const time = shape === 'sech' ? 6 / (2 * Math.acosh(Math.SQRT2)) : 6 / (2 * Math.sqrt(Math.LN2));
    const power = (w: number) =>
      shape === 'sech' ? Math.cosh((Math.PI * time * w) / 2) ** -2 : Math.exp(-((w * time) ** 2));
    for (const center of [2, 12, 38]) {
      let sum = 0;
      const h = kappa / 20;
      for (let i = -60_000; i <= 60_000; i++)
        sum += (power(i * h) * h) / (1 + ((i * h - center) / (kappa / 2)) ** 2);
      const { parallel } = transmittedEnergy(p, { kappa, center }, all);
      expect(Math.abs(parallel / (sum / (2 * Math.PI)) - 1)).toBeLessThan(1e-8);
    }
  });

  it('splits by polarisation: cos² and sin² for one tone, and the parts add up', () => {
    const p = pulse({ polarization: 0.4 });
    const filter = { kappa: 0.2, center: 0.1 };
    const total = transmittedEnergy(p, filter, all).parallel;
    const split = transmittedEnergy(p, filter, { axis: 1 });
    expect(split.parallel / total).toBeCloseTo(Math.cos(0.6) ** 2, 12);
    expect(split.perpendicular / total).toBeCloseTo(Math.sin(0.6) ** 2, 12);
    const two = pulse({ polarization: 0.4 }, { polarization: 1.3, delay: 2, detuning: 0.1 });
    const parts = transmittedEnergy(two, filter, { axis: -0.3 });
    expect((parts.parallel + parts.perpendicular) / transmittedEnergy(two, filter, all).parallel).toBeCloseTo(
      1,
      11,
    );
    expect(transmittedEnergy(p, filter, { axis: 0.4 }).perpendicular).toBe(0);
  });
});
