import { describe, expect, it } from 'vitest';
import { integrate } from '../../../core/numerics/index.js';

describe('Gauss–Kronrod quadrature', () => {
  it('is exact for polynomials of degree 31 on one interval (property of the 21-point Kronrod rule)', () => {
    for (let degree = 0; degree <= 31; degree++) {
      const { value } = integrate((x) => x ** degree, 0, 1, { intervals: 1 });
      expect(Math.abs(value * (degree + 1) - 1)).toBeLessThan(2e-15);
    }
    const beyond = integrate((x) => x ** 40, -1, 1, { intervals: 1 });
    expect(Math.abs(beyond.value * 20.5 - 1)).toBeGreaterThan(1e-13);
  });

  it.each([
    // Abramowitz & Stegun 7.4.6 with a = 1: ∫_0^∞ e^{−t²} cos 2xt dt = ½√π e^{−x²}; cut at 7, below 1e-21.
    [
      'Gaussian cosine',
      (t: number) => Math.exp(-t * t) * Math.cos(6 * t),
      0,
      7,
      0.5 * Math.sqrt(Math.PI) * Math.exp(-9),
    ],
    // Abramowitz & Stegun 4.4.3: arctan.
    ['narrow Lorentzian', (t: number) => 1e-3 / (t * t + 1e-6), -1, 2, Math.atan(1e3) + Math.atan(2e3)],
    // Abramowitz & Stegun 4.1.49.
    ['log singularity', (t: number) => Math.log(t), 0, 1, -1],
  ] as const)('%s', (_name, f, a, b, exact) => {
    const result = integrate(f, a, b, { relative: 1e-12 });
    expect(Math.abs(result.value - exact)).toBeLessThan(Math.max(1e-12 * Math.abs(exact), 1e-16));
    expect(Math.abs(result.value - exact)).toBeLessThanOrEqual(result.error + 1e-17);
  });

  it('finds a spike that a break point names', () => {
    const spike = (x: number) => Math.exp(-(((x - 777) / 1e-3) ** 2));
    const { value, converged } = integrate(spike, -1000, 1000, {
      breaks: [776.99, 777, 777.01],
      relative: 1e-11,
    });
    expect(converged).toBe(true);
    // Near 777 a double resolves 1e-10 of the spike's width.
    expect(value / (1e-3 * Math.sqrt(Math.PI))).toBeCloseTo(1, 9);
  });

  it('changes sign with the direction and reports when intervals run out', () => {
    expect(integrate(Math.exp, 1, 0).value).toBeCloseTo(1 - Math.E, 14);
    expect(integrate((x) => Math.abs(x - 0.3) ** -0.5, 0, 1, { intervals: 5 }).converged).toBe(false);
    expect(() => integrate(Math.exp, 0, Number.POSITIVE_INFINITY)).toThrow(/finite/);
  });
});
