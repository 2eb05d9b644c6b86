import { describe, expect, it } from 'vitest';
import {
  FourierPlan,
  interpolationError,
  interpolationStep,
  powerOfTwo,
  UniformTable,
} from '../../../core/numerics/index.js';

describe('Fourier sums', () => {
  it('sign and scale: a single harmonic lands in its bin (definition)', () => {
    const plan = new FourierPlan(16);
    const data = new Float64Array(32);
    for (let j = 0; j < 16; j++) {
      data[2 * j] = Math.cos((2 * Math.PI * 3 * j) / 16);
      data[2 * j + 1] = Math.sin((2 * Math.PI * 3 * j) / 16);
    }
    const out = plan.forward(data);
    for (let k = 0; k < 16; k++) {
      expect(out[2 * k]).toBeCloseTo(k === 3 ? 16 : 0, 12);
      expect(out[2 * k + 1]).toBeCloseTo(0, 12);
    }
    const back = plan.inverse(out);
    back.forEach((x, i) => {
      expect(x).toBeCloseTo(data[i], 14);
    });
  });

  it.each([2, 4, 8, 64, 2048])('size %i against the defining sum', (n) => {
    const data = Float64Array.from({ length: 2 * n }, (_, i) => Math.sin(i * i + 1));
    const out = new FourierPlan(n).forward(data);
    for (const k of [0, 1, n - 1, Math.floor(n / 3)]) {
      let re = 0;
      for (let j = 0; j < n; j++) {
        const angle = (-2 * Math.PI * ((j * k) % n)) / n;
        re += data[2 * j] * Math.cos(angle) - data[2 * j + 1] * Math.sin(angle);
      }
      expect(out[2 * k]).toBeCloseTo(re, 10);
    }
  });

  it('refuses other sizes', () => {
    expect(() => new FourierPlan(12)).toThrow(/power of two/);
    expect(() => new FourierPlan(8).forward(new Float64Array(8))).toThrow(/needs 16/);
    expect(powerOfTwo(1000)).toBe(1024);
    expect(powerOfTwo(1024)).toBe(1024);
  });
});

describe('uniform table', () => {
  const step = 0.2;
  const data = new Float64Array(200);
  for (let j = 0; j < 100; j++) {
    data[2 * j] = Math.cos(2 * (j * step - 3));
    data[2 * j + 1] = Math.exp(-((j * step - 10) ** 2) / 8);
  }
  const table = new UniformTable(-3, step, data);
  const out = new Float64Array(2);

  it('keeps its own error bound, and the bound is not idle (Lagrange remainder)', () => {
    let worst = 0;
    for (let i = 0; i < 500; i++) {
      const x = -1.8 + (15.4 * i) / 499.5;
      table.read(x, out);
      worst = Math.max(worst, Math.abs(out[0] - Math.cos(2 * x)));
    }
    const bound = interpolationError(2 ** 12, step);
    expect(worst).toBeLessThan(bound + 1e-15);
    expect(worst).toBeGreaterThan(bound / 10);
    expect(interpolationError(2 ** 12, interpolationStep(2 ** 12, 1e-9))).toBeCloseTo(1e-9, 20);
  });

  it('is exact on the points and usable up to both ends', () => {
    table.read(-3 + 7 * step, out);
    expect(out[0]).toBe(data[14]);
    for (const x of [-3, -2.9, -3 + 98.5 * step, -3 + 99 * step]) {
      table.read(x, out);
      expect(out[0]).toBeCloseTo(Math.cos(2 * x), 6);
    }
    expect(() => new UniformTable(0, 1, new Float64Array(22))).toThrow(/at least 12/);
  });
});
