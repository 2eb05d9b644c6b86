import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { stream } from '../../../core/numerics/index.js';

describe('seeded streams', () => {
  it('repeat, and differ by seed and index', () => {
    fc.assert(
      fc.property(fc.nat(), fc.nat(100_000), (seed, index) => {
        const numbers = (s: number, i: number) => {
          const one = stream(s, i);
          return [one.next(), one.normal(), one.normal(), one.int(1000), one.next()];
        };
        expect(numbers(seed, index)).toEqual(numbers(seed, index));
        expect(numbers(seed, index)).not.toEqual(numbers(seed + 1, index));
        expect(numbers(seed, index)).not.toEqual(numbers(seed, index + 1));
      }),
      { seed: 11, numRuns: 50 },
    );
    expect(stream(1 + 2 ** 32, 0).next()).not.toBe(stream(1, 0).next());
  });

  it('moments of the uniform and the normal distribution (Abramowitz & Stegun 26.1, 26.2)', () => {
    const n = 40_000;
    const uniform = [0, 0];
    const normal = [0, 0, 0];
    const counts = new Array<number>(7).fill(0);
    for (let i = 0; i < n / 10; i++) {
      const one = stream(42, i);
      for (let j = 0; j < 10; j++) {
        const u = one.next();
        if (u < 0 || u >= 1) expect.fail(`${u} is outside [0, 1)`);
        const x = one.normal();
        uniform[0] += u / n;
        uniform[1] += (u * u) / n;
        normal[0] += x / n;
        normal[1] += (x * x) / n;
        normal[2] += x ** 4 / n;
        counts[one.int(7)]++;
      }
    }
    // Five standard errors each.
    expect(Math.abs(uniform[0] - 1 / 2)).toBeLessThan(5 * Math.sqrt(1 / 12 / n));
    expect(Math.abs(uniform[1] - 1 / 3)).toBeLessThan(5 * Math.sqrt(4 / 45 / n));
    expect(Math.abs(normal[0])).toBeLessThan(5 / Math.sqrt(n));
    expect(Math.abs(normal[1] - 1)).toBeLessThan(5 * Math.sqrt(2 / n));
    expect(Math.abs(normal[2] - 3)).toBeLessThan(5 * Math.sqrt(96 / n));
    for (const count of counts) expect(Math.abs(count - n / 7)).toBeLessThan(5 * Math.sqrt(n / 7));
  });

  it('first numbers of neighbouring streams are not correlated', () => {
    const n = 20_000;
    let product = 0;
    let before = stream(3, 0).next() - 0.5;
    for (let i = 1; i <= n; i++) {
      const now = stream(3, i).next() - 0.5;
      product += (before * now * 12) / n;
      before = now;
    }
    expect(Math.abs(product)).toBeLessThan(5 / Math.sqrt(n));
  });

  it('refuses what it cannot hold', () => {
    expect(() => stream(-1, 0)).toThrow(/seed: got -1/);
    expect(() => stream(1, 0.5)).toThrow(/stream index/);
    expect(() => stream(1, 0).int(0)).toThrow(/at least 1/);
  });
});
