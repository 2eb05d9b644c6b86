import { describe, expect, it } from 'vitest';
import { faddeeva } from '../../../core/numerics/faddeeva.js';
import { integrate } from '../../../core/numerics/index.js';

const out = new Float64Array(4);

/** The defining integral (Abramowitz & Stegun 7.1.4): w = (i/π) ∫ e^{−t²}/(z − t) dt. */
function byIntegral(x: number, y: number): [number, number] {
  const breaks = [x, x - y, x + y, x - 10 * y, x + 10 * y, 0];
  const options = { relative: 1e-13, absolute: 1e-300, breaks };
  const part = (f: (t: number) => number) =>
    integrate(f, -9 - Math.abs(x), 9 + Math.abs(x), options).value / Math.PI;
  const weight = (t: number) => Math.exp(-t * t) / ((x - t) ** 2 + y * y);
  return [part((t) => y * weight(t)), part((t) => (x - t) * weight(t))];
}

describe('Faddeeva function', () => {
  // w(iy) = e^{y²} erfc(y); erfc(1) = 0.157299207050285 (Abramowitz & Stegun, table 7.1).
  it('has its value on the imaginary axis', () => {
    faddeeva(0, 1, out);
    expect(out[0]).toBeCloseTo(Math.E * 0.157299207050285, 13);
    expect(out[1]).toBe(0);
  });

  it('is e^{−x²} in its real part on the real axis', () => {
    for (const x of [0, 0.3, 1.1, 2.7, 5.2]) {
      faddeeva(x, 0, out);
      expect(Math.abs(out[0] / Math.exp(-x * x) - 1)).toBeLessThan(1e-12);
    }
  });

  it.each([0.02, 0.3, 1.5, 4, 7, 20])('agrees with its integral at y = %s, far tails included', (y) => {
    for (const x of [0, 0.1, 0.4, 0.77, 1.3, 2.9, 5.5, 7.9, 8.1, 15, -2.2]) {
      faddeeva(x, y, out);
      const [re, im] = byIntegral(x, y);
      expect(Math.abs(out[0] / re - 1), `Re w at ${x}`).toBeLessThan(1e-11);
      expect(Math.abs(out[1] - im), `Im w at ${x}`).toBeLessThan(1e-12);
    }
  });

  it('has the slope that its differences show', () => {
    for (const [x, y] of [
      [0.4, 0.1],
      [-1.7, 2],
      [6, 0.01],
      [7.9, 1],
      [9, 0.003],
      [40, 0.1],
    ]) {
      faddeeva(x, y, out);
      const [slope, turned] = [out[2], out[3]];
      const at = (by: number) => {
        faddeeva(x + by, y, out);
        return [out[0], out[1]];
      };
      const h = 1e-3 * Math.max(1, Math.abs(x));
      const [[a, b], [c, d], [e, f], [g, k]] = [at(h), at(-h), at(2 * h), at(-2 * h)];
      const scale = Math.abs(slope) + 1e-9;
      expect(Math.abs(slope - (8 * (a - c) - (e - g)) / (12 * h)) / scale, `${x} ${y}`).toBeLessThan(1e-7);
      expect(Math.abs(turned - (8 * (b - d) - (f - k)) / (12 * h)) / Math.abs(turned)).toBeLessThan(1e-7);
    }
  });

  it('refuses the lower half plane', () => {
    expect(() => faddeeva(1, -0.1, out)).toThrow(RangeError);
  });
});
