import { describe, expect, it } from 'vitest';
import { evaluate, HBAR, normalRule } from '../../../core/index.js';
import { design, tone, twoLevelEmitter } from '../../support.js';

const FOREVER = twoLevelEmitter({ lifetime: 1e12 });

describe('means over drift', () => {
  // P_x = sin²(Θ/2) (Allen & Eberly); its mean over a Gaussian area is ½[1 − e^{−(σΘ)²/2} cos Θ].
  it.each([
    [1, 0.02],
    [2.5, 0.05],
    [9, 0.05],
    [30, 0.06],
  ])('area %s π with %s rms follows the averaged Rabi law', (pis, rms) => {
    const area = pis * Math.PI;
    const f = evaluate(
      design(FOREVER, [tone({ area })], {
        drift: { area: rms, width: 0, detuning: 0, filterCenter: 0, quantile: null },
      }),
      'quoted',
    );
    const law = 0.5 * (1 - Math.exp(-((rms * area) ** 2) / 2) * Math.cos(area));
    expect(Math.abs(f.populations['x'] - law)).toBeLessThan(1e-9);
    expect(Math.abs(f.emitted.mean - law)).toBeLessThan(1e-9);
    expect(f.nominal!.populations['x']).toBeCloseTo(Math.sin(area / 2) ** 2, 9);
    // Energy goes with the square of the area.
    expect(f.pulse.energy_pi_units / f.nominal!.pulse.energy_pi_units).toBeCloseTo(1 + rms ** 2, 10);
  });

  // Rosen & Zener, Phys. Rev. 40, 502 (1932): P = sin²(Θ/2) sech²(πΔT/2ħ), averaged by a fine sum here.
  it('detuning drift moves the emitter under a sech pulse', () => {
    const rms = 0.12;
    const fwhm = 5;
    const T = fwhm / (2 * Math.acosh(Math.SQRT2));
    const f = evaluate(
      design(FOREVER, [tone({ shape: 'sech', fwhm, area: 2, detuning: 0.05 })], {
        drift: { area: 0, width: 0, detuning: rms, filterCenter: 0, quantile: null },
      }),
      'quoted',
    );
    let law = 0;
    let weight = 0;
    for (let x = -8; x <= 8; x += 0.01) {
      const w = Math.exp((-x * x) / 2);
      const delta = 0.05 - x * rms;
      law += w * (Math.sin(1) / Math.cosh((Math.PI * delta * T) / (2 * HBAR))) ** 2;
      weight += w;
    }
    expect(Math.abs(f.populations['x'] - law / weight)).toBeLessThan(1e-8);
  });

  it('width drift alone leaves a resonant pulse without decay as it is', () => {
    const f = evaluate(
      design(FOREVER, [tone({ area: 2 })], {
        drift: { area: 0, width: 0.1, detuning: 0, filterCenter: 0, quantile: null },
      }),
      'quoted',
    );
    expect(f.populations['x']).toBeCloseTo(Math.sin(1) ** 2, 9);
  });

  it('g2 under drift is ⟨M₂⟩/⟨M₁⟩², not the mean of ratios', () => {
    const f = evaluate(
      design(twoLevelEmitter(), [tone({ area: 1.7 * Math.PI })], {
        drift: { area: 0.1, width: 0, detuning: 0, filterCenter: 0, quantile: null },
      }),
      'search',
    );
    expect(f.emitted.g2! / (f.emitted.factorial2 / f.emitted.mean ** 2)).toBeCloseTo(1, 14);
  });
});

describe('rules for a standard normal variable', () => {
  // Characteristic function of the normal law, e^{−a²/2}; Lorentzian mean by the complementary error function
  // (Voigt profile at its centre: √(π/2) d e^{d²/2} erfc(d/√2), Abramowitz & Stegun 7.1).
  it.each([0.01, 0.3, 2, 12])('integrates cos(ax) for a = %s', (a) => {
    const { nodes, weights } = normalRule(a, Number.POSITIVE_INFINITY, 1.4);
    const mean = nodes.reduce((s, x, i) => s + weights[i] * Math.cos(a * x), 0);
    expect(Math.abs(mean - Math.exp((-a * a) / 2))).toBeLessThan(2e-9);
  });

  it.each([[0.3], [1], [5]])('integrates a Lorentzian with its pole at distance %s', (d) => {
    const { nodes, weights } = normalRule(0.1, d, 1.4);
    const mean = nodes.reduce((s, x, i) => s + weights[i] / (1 + (x / d) ** 2), 0);
    let fine = 0;
    const h = d / 400;
    for (let x = -9; x <= 9; x += h)
      fine += (h * Math.exp((-x * x) / 2)) / Math.sqrt(2 * Math.PI) / (1 + (x / d) ** 2);
    expect(Math.abs(mean - fine)).toBeLessThan(1e-8);
  });
});
