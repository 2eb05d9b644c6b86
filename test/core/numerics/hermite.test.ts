import { describe, expect, it } from 'vitest';
import { gaussHermite } from '../../../core/numerics/index.js';

describe('Gauss–Hermite rule', () => {
  it('agrees with Abramowitz & Stegun table 25.10 (n = 5, 10; weight e^{−x²}, so x√2 and w/√π here)', () => {
    const five = gaussHermite(5);
    [0, 0.958572464613819, 2.020182870456086].forEach((x, i) => {
      expect(five.nodes[2 + i] / Math.SQRT2).toBeCloseTo(x, 14);
      const w = [0.945308720482942, 0.393619323152241, 0.01995324205904591][i];
      expect(five.weights[2 + i] * Math.sqrt(Math.PI)).toBeCloseTo(w, 14);
    });
    const ten = gaussHermite(10);
    expect(ten.nodes[9] / Math.SQRT2).toBeCloseTo(3.4361591188377374, 13);
    expect((ten.weights[9] * Math.sqrt(Math.PI)) / 7.640432855232621e-6).toBeCloseTo(1, 12);
  });

  it.each([1, 2, 7, 32, 101])('n = %i: moments of the normal distribution, (2k − 1)!!', (n) => {
    const { nodes, weights } = gaussHermite(n);
    let moment = 1;
    for (let k = 0; k < Math.min(n, 20); k++) {
      const sum = nodes.reduce((total, x, i) => total + weights[i] * x ** (2 * k), 0);
      expect(sum / moment).toBeCloseTo(1, 11);
      moment *= 2 * k + 1;
    }
  });

  it('integrates a cosine through its tails: ⟨cos ax⟩ = e^{−a²/2}', () => {
    const { nodes, weights } = gaussHermite(350);
    const mean = nodes.reduce((sum, x, i) => sum + weights[i] * Math.cos(5 * x), 0);
    expect(mean).toBeCloseTo(Math.exp(-12.5), 13);
    expect(() => gaussHermite(0)).toThrow(/needs an integer/);
    expect(() => gaussHermite(2.5)).toThrow(/needs an integer/);
  });
});
