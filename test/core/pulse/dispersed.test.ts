import { describe, expect, it } from 'vitest';
import type { Tone } from '../../../core/pulse/contract.js';
import { disperse } from '../../../core/pulse/dispersed.js';
import { createDrive, type Drive } from '../../../core/pulse/drive.js';
import { cutLevel } from '../../../core/pulse/envelope.js';
import { pulseShape } from '../../../core/pulse/shapes/registry.js';
import { pulse } from './tone.js';

const one = (part: Partial<Tone>): Drive =>
  createDrive(pulse({ area: 1, ...part }), { frame: 0, projection: 'full' });

/** Ω(t) as a complex number. */
function at(drive: Drive, t: number): [number, number] {
  const out = new Float64Array(2);
  drive.sample(t, 0, out);
  return [out[0], out[1]];
}

/** ∫ S(ν) e^{i(½G ν² + ⅙B ν³ − νt)} dν/2π by the trapezoidal rule on [−reach, reach], for an even spectrum. */
function fourier(
  spectrum: (nu: number) => number,
  gdd: number,
  tod: number,
  t: number,
  reach: number,
  n: number,
) {
  let re = 0;
  let im = 0;
  for (let i = -n; i <= n; i++) {
    const nu = (reach * i) / n;
    const angle = (gdd / 2) * nu * nu + (tod / 6) * nu ** 3 - nu * t;
    re += spectrum(nu) * Math.cos(angle);
    im += spectrum(nu) * Math.sin(angle);
  }
  const scale = reach / n / (2 * Math.PI);
  return [re * scale, im * scale];
}

const distance = (a: ArrayLike<number>, b: ArrayLike<number>) => Math.hypot(a[0] - b[0], a[1] - b[1]);
const size = (a: readonly number[]) => Math.hypot(a[0], a[1]);

/** ∫|Ω|² dt and ∫ t|Ω|² dt by the trapezoidal rule. */
function moments(drive: Drive, n = 20_000): { energy: number; mean: number } {
  const [start, end] = [drive.breakpoints[0], drive.breakpoints.at(-1)!];
  let energy = 0;
  let first = 0;
  for (let i = 0; i <= n; i++) {
    const t = start + ((end - start) * i) / n;
    const p = size(at(drive, t)) ** 2;
    energy += (p * (end - start)) / n;
    first += (t * p * (end - start)) / n;
  }
  return { energy, mean: first / energy };
}

describe('dispersed pulses', () => {
  it.each([
    [5, 40],
    [0.5, -20],
    [2, 500],
    [200, -500],
  ])('the transform of a %f ps Gaussian with GDD %f ps² agrees with the closed form', (fwhm, gdd) => {
    const sampled = disperse(pulseShape('gaussian'), fwhm, { gdd, tod: 0 }, Math.PI, cutLevel);
    const closed = one({ fwhm, gdd });
    const out = new Float64Array(2);
    let worst = 0;
    for (let i = 0; i <= 400; i++) {
      const t = sampled.start + ((sampled.end - sampled.start) * i) / 400;
      sampled.table.read(t, out);
      worst = Math.max(worst, distance(out, at(closed, t)));
    }
    expect(worst / sampled.peak).toBeLessThan(2e-11);
    expect(worst / sampled.peak).toBeLessThan(sampled.error);
    expect(sampled.peak / closed.scales.peakRabi).toBeCloseTo(1, 4);
  });

  it('a chirped Gaussian lasts √(1 + (4 ln2 GDD/τ²)²) times as long (Diels & Rudolph)', () => {
    for (const [fwhm, gdd] of [
      [5, 40],
      [1, -7],
    ]) {
      const drive = one({ fwhm, gdd });
      const stretched = fwhm * Math.hypot(1, (4 * Math.LN2 * gdd) / fwhm ** 2);
      expect((size(at(drive, stretched / 2)) / size(at(drive, 0))) ** 2).toBeCloseTo(0.5, 12);
    }
  });

  it('positive GDD delays high frequencies: the instantaneous frequency −d arg Ω/dt grows', () => {
    for (const shape of ['gaussian', 'sech']) {
      const drive = one({ shape, gdd: 40 });
      const frequency = (t: number) => {
        const [a, b] = [at(drive, t), at(drive, t + 1e-3)];
        return -Math.atan2(a[0] * b[1] - a[1] * b[0], a[0] * b[0] + a[1] * b[1]) / 1e-3;
      };
      expect(frequency(5)).toBeGreaterThan(0.05);
      expect(frequency(-5)).toBeLessThan(-0.05);
    }
  });

  it('TOD of the plus sign sends both wings late, by ½·TOD·⟨ν²⟩ in the mean (group delay ½TOD ν²)', () => {
    const fwhm = 5;
    const sigma = fwhm / (2 * Math.sqrt(Math.LN2));
    // ⟨ν²⟩ over |spectrum|² = e^{−ν²σ²} is 1/2σ².
    for (const tod of [60, -60, 2000]) {
      const { mean } = moments(one({ fwhm, tod }));
      expect(mean / (tod / (4 * sigma * sigma))).toBeCloseTo(1, 8);
    }
  });

  it.each([
    ['gaussian', 3, 10, 50],
    ['gaussian', 5, 0, 10_000],
    ['gaussian', 0.5, 500, 0],
    ['sech', 4, -30, 40],
    ['sech', 2, 100, 0],
  ])('%s %f ps, GDD %f, TOD %f keeps its energy (Parseval)', (shape, fwhm, gdd, tod) => {
    const { energy } = moments(one({ shape, fwhm, gdd, tod }), 400_000);
    expect(energy / pulseShape(shape).energy(fwhm)).toBeCloseTo(1, 9);
  });

  it('tends to the undispersed pulse as TOD and GDD go to zero', () => {
    for (const shape of ['gaussian', 'sech']) {
      const plain = one({ shape });
      const slight = one({ shape, tod: 1e-9 });
      for (const t of [-8, -1, 0, 2.5, 6]) {
        expect(distance(at(slight, t), at(plain, t)) / size(at(plain, 0))).toBeLessThan(1e-10);
      }
    }
  });

  it('sech with GDD and TOD against a plain Fourier integral', () => {
    const time = 4 / (2 * Math.acosh(Math.SQRT2));
    const drive = one({ shape: 'sech', fwhm: 4, gdd: -25, tod: 30 });
    const spectrum = (nu: number) => 1 / Math.cosh((Math.PI * time * nu) / 2);
    for (const t of [-60, -20, -3, 0.4, 11, 50, 120]) {
      const exact = fourier(spectrum, -25, 30, t, 12, 20_000);
      expect(distance(at(drive, t), exact) / drive.scales.peakRabi).toBeLessThan(3e-11);
    }
  });

  it('square with GDD against a Fourier integral along a rotated contour', () => {
    // On ν = s·e^{iπ/4} the chirp e^{iGν²/2} becomes a Gaussian and sin(νT/2)/(νT/2) is entire.
    const [fwhm, gdd] = [6, 15];
    const drive = one({ shape: 'square', fwhm, gdd });
    const exact = (t: number) => {
      const r = Math.SQRT1_2;
      const [n, reach] = [40_000, 14];
      let [re, im] = [0, 0];
      for (let i = -n; i <= n; i++) {
        const s = (reach * (i + 0.5)) / n;
        // i s e^{iπ/4} (±T/2 − t) = s(±T/2 − t)(−r + ir)
        for (const sign of [1, -1]) {
          const x = s * ((sign * fwhm) / 2 - t);
          const grow = Math.exp(-x * r - (gdd / 2) * s * s);
          // sin(νT/2)/(νT/2) dν = Σ ± e^{±iνT/2}/(iT s) ds
          re += (sign * grow * Math.sin(x * r)) / (fwhm * s);
          im -= (sign * grow * Math.cos(x * r)) / (fwhm * s);
        }
      }
      const scale = reach / n / (2 * Math.PI);
      return [re * scale, im * scale];
    };
    for (const t of [-20, -7, -3, 0, 1.3, 3, 12, 25]) {
      expect(distance(at(drive, t), exact(t)) / drive.scales.peakRabi).toBeLessThan(1e-9);
    }
    expect(drive.error).toBeLessThan(2e-9);
  });

  it('square with TOD keeps its energy up to the wings it drops', () => {
    const { energy } = moments(one({ shape: 'square', fwhm: 20, tod: 500 }), 200_000);
    const kept = energy * 20;
    expect(kept).toBeLessThan(1);
    expect(kept).toBeGreaterThan(0.98);
  });

  it('names a pulse that no grid can hold', () => {
    expect(() => one({ fwhm: 0.5, tod: 10_000 })).toThrow(/0\.5 ps gaussian .* TOD 10000 ps³ spreads over/);
  });
});
