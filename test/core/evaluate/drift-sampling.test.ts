import { describe, expect, it } from 'vitest';
import { type Design, evaluate, GHZ_PER_MEV } from '../../../core/index.js';
import { design, tone, twoLevelEmitter } from '../../support.js';

// Quasi-Monte-Carlo as the independent check of the quadrature: the Halton sequence (Numer. Math. 2, 84 (1960)) through
// the Box–Muller transform, each sample a plain design without drift.

function halton(i: number, base: number): number {
  let value = 0;
  for (let scale = 1 / base, rest = i; rest > 0; rest = Math.floor(rest / base), scale /= base) {
    value += scale * (rest % base);
  }
  return value;
}

/** Two independent standard normal numbers; each drift below takes one of them. */
function normals(i: number): number[] {
  const radius = Math.sqrt(-2 * Math.log(halton(i, 2)));
  const angle = 2 * Math.PI * halton(i, 3);
  return [radius * Math.cos(angle), radius * Math.sin(angle)];
}

/** The design at a point of the drift: laser and filter move against an emitter that stays. */
function moved(nominal: Design, [first, second]: readonly number[]): Design {
  const [area, width, shift, center] = [first, first, second, first];
  const { drift, pulse, collection } = nominal;
  const tones = pulse.tones.map((t) => ({
    ...t,
    area: t.area * (1 + area * drift!.area),
    fwhm: t.fwhm * (1 + width * drift!.width),
    detuning: t.detuning - shift * drift!.detuning,
  }));
  const filter = collection.filter && {
    ...collection.filter,
    center: collection.filter.center - shift * drift!.detuning * GHZ_PER_MEV + center * drift!.filterCenter,
  };
  return { ...nominal, pulse: { ...pulse, tones }, collection: { ...collection, filter }, drift: null };
}

const quantileOf = (values: readonly number[], share: number) =>
  [...values].sort((a, b) => a - b)[Math.round(share * (values.length - 1))];

const CASES: readonly (readonly [string, Design['drift'] & object])[] = [
  ['area', { area: 0.12, width: 0, detuning: 0, filterCenter: 0, quantile: 0.9 }],
  ['width', { area: 0, width: 0.1, detuning: 0, filterCenter: 0, quantile: 0.9 }],
  ['detuning', { area: 0, width: 0, detuning: 0.03, filterCenter: 0, quantile: 0.9 }],
  ['filter centre', { area: 0, width: 0, detuning: 0, filterCenter: 6, quantile: 0.9 }],
  ['area and detuning', { area: 0.08, width: 0, detuning: 0.02, filterCenter: 0, quantile: 0.8 }],
];

describe.each(CASES)('drift of %s', (_name, drift) => {
  const nominal = design(twoLevelEmitter({ lifetime: 300 }), [tone({ area: 1.1 * Math.PI, fwhm: 8 })], {
    drift,
    collection: {
      ...{ line: 'exciton', polarization: 'crossed', efficiency: 0.7 },
      filter: drift.filterCenter > 0 ? { fwhm: 25, center: 1 } : null,
    },
    laser: { repetition: null, piPulse: { energy: 12, fwhm: 5 }, rejection: 4e-7 },
  });
  const figures = evaluate(nominal, 'search');
  // A design behind a filter costs twenty times as much.
  const count = drift.filterCenter > 0 ? 250 : 600;
  const samples = Array.from({ length: count }, (_, i) => evaluate(moved(nominal, normals(i + 1)), 'search'));
  const mean = (of: (f: (typeof samples)[number]) => number) =>
    samples.reduce((sum, f) => sum + of(f), 0) / count;

  it('means agree with quasi-Monte-Carlo', () => {
    const single = mean((f) => f.signal.single!);
    const multiphoton = mean((f) => f.collected.multiphoton!);
    expect(figures.signal.single! / single).toBeCloseTo(1, 2);
    expect(Math.abs(figures.collected.multiphoton! / multiphoton - 1)).toBeLessThan(1e-2);
    expect(Math.abs(figures.collected.leakage / mean((f) => f.collected.leakage) - 1)).toBeLessThan(1e-2);
  });

  it('quantiles agree with those of the samples', () => {
    const share = drift.quantile!;
    const dark = quantileOf(
      samples.map((f) => f.signal.single!),
      1 - share,
    );
    const impure = quantileOf(
      samples.map((f) => f.collected.multiphoton!),
      share,
    );
    expect(figures.quantile?.share).toBe(share);
    // A quantile of a few hundred samples is itself that uncertain.
    const uncertain = drift.filterCenter > 0 ? 4e-2 : 2e-2;
    expect(Math.abs(figures.quantile!.signal.single! / dark - 1)).toBeLessThan(uncertain);
    expect(Math.abs(figures.quantile!.collected.multiphoton! / impure - 1)).toBeLessThan(uncertain);
  });
});
