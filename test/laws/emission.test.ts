import { describe, expect, it } from 'vitest';
import { evaluate, type Figures } from '../../core/index.js';
import { design, tone, twoLevelEmitter } from '../support.js';
import { logSlope } from './drives.js';

/** T in units of the intensity FWHM: sech(t/T), square of length T; the Gaussian's law is stated for the FWHM itself. */
const WIDTH: Readonly<Record<string, number>> = {
  square: 1,
  sech: 1 / (2 * Math.acosh(Math.SQRT2)),
  gaussian: 1,
};

function emit(shape: string, fwhm: number, area: number, lifetime: number): Figures {
  return evaluate(design(twoLevelEmitter({ lifetime }), [tone({ shape, fwhm, area })]), 'quoted');
}

describe('square drive with decay', () => {
  // Torrey, Phys. Rev. 76, 1059 (1949).
  it.each([
    ['underdamped', 0.3],
    ['strong', 2],
    ['weak, overdamped', 0.002],
  ])('%s: ρ_xx(t) with damped Rabi oscillations', (_, rabi) => {
    const rate = 1 / 100;
    const saturation = (2 * rabi ** 2) / rate ** 2;
    const square = rabi ** 2 - rate ** 2 / 16;
    const root = Math.sqrt(Math.abs(square));
    for (const time of [3, 20, 90, 400]) {
      const cosine = square >= 0 ? Math.cos(root * time) : Math.cosh(root * time);
      const sine = square >= 0 ? Math.sin(root * time) : Math.sinh(root * time);
      const damped = Math.exp((-3 * rate * time) / 4) * (cosine + ((3 * rate) / (4 * root)) * sine);
      const law = ((0.5 * saturation) / (1 + saturation)) * (1 - damped);
      const figures = emit('square', time, rabi * time, 1 / rate);
      expect(figures.populations['x']).toBeCloseTo(law, 9);
    }
  });

  // Mandel, Opt. Lett. 4, 205 (1979): Q → −6Ω²γ²/(γ²+2Ω²)². Switching on and off adds a constant to mean and
  // variance, which the difference of two long pulses removes.
  it('Mandel Q of a steady drive, least −3/4 at Ω² = γ²/2', () => {
    const rate = 1 / 100;
    const mandel = (rabi: number): number => {
      const [short, long] = [3000, 6000].map((time) => emit('square', time, rabi * time, 1 / rate).emitted);
      const excess = (e: typeof short): number => e.factorial2 - e.mean ** 2;
      return (excess(long) - excess(short)) / (long.mean - short.mean);
    };
    const law = (rabi: number): number => (-6 * rabi ** 2 * rate ** 2) / (rate ** 2 + 2 * rabi ** 2) ** 2;
    for (const ratio of [0.3, Math.SQRT1_2, 1, 3]) {
      expect(mandel(ratio * rate)).toBeCloseTo(law(ratio * rate), 6);
    }
    const least = mandel(Math.SQRT1_2 * rate);
    expect(least).toBeCloseTo(-0.75, 6);
    expect(mandel(0.68 * rate)).toBeGreaterThan(least);
    expect(mandel(0.74 * rate)).toBeGreaterThan(least);
  });
});

describe('short π pulse, γτ ≪ 1', () => {
  // Derived: P₂ = ¼γ∫sin²θ(t)dt with θ the area absorbed so far.
  it.each([
    ['square', 0.25],
    ['sech', 1],
    ['gaussian', 0.43757],
  ])('%s: g2 = %f γT, linear in γ', (shape, factor) => {
    const lifetimes = [1e4, 1e5, 1e6];
    const points = lifetimes.map((lifetime) => {
      const g2 = emit(shape, 1 / WIDTH[shape], Math.PI, lifetime).emitted.g2 as number;
      return [1 / lifetime, g2] as const;
    });
    for (const [rate, g2] of points) {
      expect(Math.abs(g2 / (factor * rate) - 1)).toBeLessThan(2e-5 + 20 * rate);
    }
    expect(logSlope(points)).toBeCloseTo(1, 3);
  });
});

describe('short 2π pulse', () => {
  // Derived: P₂ = γ∫sin⁴(θ/2)dt, P₁ = γ∫sin²(θ/2)cos²(θ/2)dt.
  it.each([
    ['square', 1 / 8, 3 / 8],
    ['sech', 2 / 3, 4 / 3],
  ])('%s: P₁ = %f γT, P₂ = %f γT', (shape, first, second) => {
    for (const lifetime of [1e4, 1e6]) {
      const { p } = emit(shape, 1 / WIDTH[shape], 2 * Math.PI, lifetime).emitted;
      expect(Math.abs(p[1] * lifetime - first)).toBeLessThan(1e-5 + 20 / lifetime);
      expect(Math.abs(p[2] * lifetime - second)).toBeLessThan(1e-5 + 20 / lifetime);
      expect(p[3] * lifetime).toBeLessThan(20 / lifetime);
    }
  });

  it('gaussian: P₂/P₁ = 2.3042', () => {
    const { p } = emit('gaussian', 1, 2 * Math.PI, 1e6).emitted;
    expect(Math.abs(p[2] / p[1] - 2.3042)).toBeLessThan(1e-4);
    expect(p[3]).toBeLessThan(1e-4 * p[2]);
  });

  it('emits two photons rather than one, with probabilities linear in γ', () => {
    const points = [1e4, 3e4, 1e5].map(
      (life) => [1 / life, emit('gaussian', 1, 2 * Math.PI, life).emitted.p[2]] as const,
    );
    expect(logSlope(points)).toBeCloseTo(1, 3);
  });
});

describe('laser background', () => {
  // Brouri et al., Opt. Lett. 25, 1294 (2000): g2_meas = 1 − ρ²(1 − g2), ρ = signal/(signal + background).
  it.each([null, { fwhm: 30, center: 0 }])('adds to g2 as uncorrelated light, filter %j', (filter) => {
    for (const rejection of [1e-7, 1e-5, 1e-3]) {
      const figures = evaluate(
        design(twoLevelEmitter(), [tone({ area: 3 })], {
          collection: { line: 'exciton', polarization: 'crossed', efficiency: 0.6, filter },
          laser: { repetition: 76, piPulse: { energy: 10, fwhm: 5 }, rejection },
        }),
        'quoted',
      );
      const { leakage, mean, g2 } = figures.collected;
      expect(leakage).toBeGreaterThan(0);
      expect(mean).toBeCloseTo(figures.signal.mean + leakage, 12);
      const rho = figures.signal.mean / mean;
      expect(g2).toBeCloseTo(1 - rho ** 2 * (1 - (figures.signal.g2 as number)), 11);
    }
  });
});
