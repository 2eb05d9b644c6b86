import { describe, expect, it } from 'vitest';
import type { Design } from '../../../core/index.js';
import { type CountRequest, countByReference, countPhotons } from '../../../core/kernels/count.js';
import { named } from '../../../core/kernels/fast/bloch/figures.js';
import { phaseFrame, seenFrom } from '../../../core/kernels/fast/bloch/frame.js';
import { PLACES } from '../../../core/kernels/fast/bloch/nodes.js';
import { prepare } from '../../../core/kernels/fast/bloch/problem.js';
import { runBloch } from '../../../core/kernels/fast/bloch/run.js';
import { addComplex, fillReal } from '../../../core/kernels/fast/bloch/table.js';
import { smoothSpans } from '../../../core/kernels/fast/spans.js';
import { asTwoLevel } from '../../../core/kernels/fast/two-level.js';
import { twoLevelEmitted } from '../../../core/kernels/fast/two-level-emitted.js';
import { createDrive } from '../../../core/pulse/drive.js';
import { design, tone, twoLevelEmitter } from '../../support.js';
import { inPromises, requestOf } from './fast-designs.js';

const TWO_TONES = [
  tone({ fwhm: 4, area: 22.65 * Math.PI, detuning: -8, gdd: 3, phase: 0.4 }),
  tone({ fwhm: 5, area: 19.29 * Math.PI, detuning: -19.163, delay: 2 }),
];

/** A fresh request on changed tones, in the frame of the old one. */
function changed(base: CountRequest, d: Design, tones: Design['pulse']['tones'], shift = 0): CountRequest {
  const drive = createDrive({ ...d.pulse, tones }, { frame: base.drive.frame, projection: 'full' });
  return { ...base, drive, shift: base.shift + shift };
}

describe('tables of Gaussians', () => {
  // Source: the drive's own samples, by exp, sin and cos at every time.
  it('follow the drive in its frame over a block of steps', () => {
    const { drive } = requestOf(design(twoLevelEmitter(), TWO_TONES));
    const tones = drive.gaussians ?? [];
    const frame = phaseFrame(tones, 14);
    const grid = { start: drive.breakpoints[0] + 11, h: 0.04 };
    const out = new Float64Array(8 * 64);
    for (const t of tones) addComplex(seenFrom(frame, t), 2, grid, 0, 64, out);
    const sample = new Float64Array(2);
    for (let n = 0; n < 64; n++) {
      PLACES.forEach((place, j) => {
        const t = grid.start + (n + 0.5 + place) * grid.h;
        drive.sample(t, 0, sample);
        const s = t - frame.origin;
        const angle = -(frame.constant + (frame.rate + frame.chirp * s) * s);
        const re = 2 * (sample[0] * Math.cos(angle) - sample[1] * Math.sin(angle));
        const im = 2 * (sample[0] * Math.sin(angle) + sample[1] * Math.cos(angle));
        expect(Math.abs(out[8 * n + 2 * j] - re)).toBeLessThan(1e-12 * drive.scales.peakRabi);
        expect(Math.abs(out[8 * n + 2 * j + 1] - im)).toBeLessThan(1e-12 * drive.scales.peakRabi);
      });
    }
  });

  it('are real for one tone in its own phase', () => {
    const { drive } = requestOf(design(twoLevelEmitter(), [tone({ fwhm: 3, gdd: 20, detuning: 0.7 })]));
    const [only] = drive.gaussians ?? [];
    const frame = phaseFrame([only], 0);
    const grid = { start: -60, h: 1.9 };
    const [real, complex] = [new Float64Array(4 * 64), new Float64Array(8 * 64)];
    fillReal(seenFrom(frame, only), 1, grid, 0, 64, real);
    addComplex(seenFrom(frame, only), 1, grid, 0, 64, complex);
    for (let i = 0; i < real.length; i++) {
      expect(Math.abs(complex[2 * i] - real[i])).toBeLessThan(1e-12 * drive.scales.peakRabi);
      expect(Math.abs(complex[2 * i + 1])).toBeLessThan(1e-12 * drive.scales.peakRabi);
    }
  });
});

describe('the emitted kernel of two levels', () => {
  it('gives the figures asked for as it gives all of them', () => {
    for (const tones of [[tone({})], [tone({ fwhm: 9, area: 7, gdd: 60 })], TWO_TONES]) {
      const request = requestOf(design(twoLevelEmitter({ dephasing: 0.002 }), tones));
      const all = countPhotons(request);
      for (const wanted of [
        ['p1', 'multiphoton'],
        ['mean'],
        ['thinned1', 'thinnedMultiphoton', 'factorial2'],
      ]) {
        const some = countPhotons({ ...request, wanted });
        for (const name of wanted) {
          const size = name === 'p1' || name === 'thinned1' ? 1e-9 : 1e-6 * all.values[name];
          expect(Math.abs(some.values[name] - all.values[name])).toBeLessThan(size);
        }
      }
    }
  });

  // Source: the frame is a choice of coordinates.
  it('does not depend on the frame of its tones', () => {
    const request = requestOf(design(twoLevelEmitter(), TWO_TONES));
    const model = asTwoLevel(request);
    const spans = smoothSpans(request.drive);
    const tones = request.drive.gaussians;
    if (!model || !spans || !tones) throw new Error('not a problem of two levels');
    const problem = prepare(request, model, spans);
    const [part] = problem.spans;
    const runs = [-9, 0, 4, 13].map((rate) => {
      const frame = { origin: 1, constant: 0.3, rate, chirp: 0.02 };
      const source = { kind: 'complex' as const, tones: tones.map((t) => seenFrom(frame, t)), unrest: 1 };
      const figures = new Float64Array(12);
      runBloch({ ...problem, spans: [{ ...part, frame, source }] }, [9000], figures);
      return { values: named(figures), populations: [figures[10], figures[11]], steps: 0, localErrors: 0 };
    });
    for (const run of runs) expect(inPromises(run, runs[0])).toBeLessThan(0.05);
  });

  it('keeps what it promises with strong dephasing and short lifetimes', () => {
    for (const tones of [
      [tone({ fwhm: 30, area: 8 })],
      [tone({ fwhm: 60, area: 20 }), tone({ fwhm: 15, delay: 70 })],
    ]) {
      const request = requestOf(design(twoLevelEmitter({ dephasing: 0.02, lifetime: 60 }), tones));
      const found = twoLevelEmitted.count(request, countPhotons);
      const truth = countByReference({ ...request, effort: { ...request.effort, tolerance: 1e-12 } });
      expect(found && inPromises(found, truth)).toBeLessThan(1);
    }
  });
});

describe('derivatives of the emitted kernel', () => {
  const NAMES = ['p1', 'multiphoton', 'mean', 'factorial2', 'thinned1', 'thinnedMultiphoton'];
  const seeds = (values: Readonly<Record<string, number>>) => [
    ...NAMES.map((name) => ({ [name]: 1 })),
    { factorial2: 1 / values['mean'] ** 2, mean: (-2 * values['factorial2']) / values['mean'] ** 3 },
  ];
  const scalars = (v: Readonly<Record<string, number>>) => [
    ...NAMES.map((name) => v[name]),
    v['factorial2'] / v['mean'] ** 2,
  ];

  function valuesOf(request: CountRequest): number[] {
    const found = twoLevelEmitted.count(request, countPhotons);
    if (!found) throw new Error('declined');
    return scalars(found.values);
  }

  /** Central differences with their own error from two steps. */
  function differences(at: (e: number) => CountRequest, step: number): { value: number; error: number }[] {
    const slope = (e: number) => {
      const [above, below] = [valuesOf(at(e)), valuesOf(at(-e))];
      return above.map((v, i) => (v - below[i]) / (2 * e));
    };
    const [coarse, fine] = [slope(step), slope(step / 2)];
    return fine.map((f, i) => ({ value: (4 * f - coarse[i]) / 3, error: Math.abs(f - coarse[i]) }));
  }

  const CHANGES = {
    area: (e: number) => (t: Design['pulse']['tones'][number]) => ({ ...t, area: t.area * (1 + e) }),
    detuning: (e: number) => (t: Design['pulse']['tones'][number]) => ({ ...t, detuning: t.detuning + e }),
    fwhm: (e: number) => (t: Design['pulse']['tones'][number]) => ({ ...t, fwhm: t.fwhm * (1 + e) }),
    gdd: (e: number) => (t: Design['pulse']['tones'][number]) => ({ ...t, gdd: t.gdd + e * t.fwhm ** 2 }),
  };

  const designs: Record<string, Design> = {
    'a resonant π pulse': design(twoLevelEmitter(), [tone({})]),
    'a long pulse with dephasing': design(twoLevelEmitter({ dephasing: 0.01 }), [
      tone({ fwhm: 40, area: 9, detuning: 0.1 }),
    ]),
    'a chirped pulse': design(twoLevelEmitter(), [tone({ fwhm: 4, area: 15, gdd: 50, detuning: 0.2 })]),
    'two tones': design(twoLevelEmitter({ dephasing: 0.001 }), TWO_TONES),
    'two pulses with a gap': design(twoLevelEmitter(), [
      tone({ fwhm: 4, area: 2 }),
      tone({ fwhm: 7, area: 2, detuning: 0.4, delay: 160 }),
    ]),
    'a chirped sech': design(twoLevelEmitter(), [
      tone({ shape: 'sech', fwhm: 4, area: 9, gdd: 12, detuning: -0.3 }),
    ]),
  };

  // Source: central differences of the kernel's own values, refined once.
  for (const [name, d] of Object.entries(designs)) {
    it(`agree with differences: ${name}`, () => {
      const base = requestOf(d, 1e-11);
      const found = twoLevelEmitted.countWithGradient?.(base, seeds);
      if (!found) throw new Error('no gradient');
      const { times, segments, sensitivities, result } = found;
      const sizes = scalars(result.values);
      const compare = (exact: number[], at: (e: number) => CountRequest, step: number) => {
        differences(at, step).forEach(({ value, error }, s) => {
          const allowed = 2e-5 * (Math.abs(exact[s]) + Math.abs(sizes[s])) + error;
          expect(Math.abs(exact[s] - value)).toBeLessThan(allowed);
        });
      };
      d.pulse.tones.forEach((_, k) => {
        for (const change of Object.values(CHANGES)) {
          const at = (e: number) =>
            changed(
              base,
              d,
              d.pulse.tones.map((t, i) => (i === k ? change(e)(t) : t)),
            );
          const [above, below] = [at(1e-5), at(-1e-5)];
          const [x, y] = [new Float64Array(2), new Float64Array(2)];
          const exact = sensitivities.map(() => 0);
          times.forEach((t, n) => {
            above.drive.sample(t, segments[n], x);
            below.drive.sample(t, segments[n], y);
            sensitivities.forEach(({ drive }, s) => {
              exact[s] += (drive[2 * n] * (x[0] - y[0]) + drive[2 * n + 1] * (x[1] - y[1])) / 2e-5;
            });
          });
          compare(exact, at, 1e-3);
        }
      });
      const byShift = sensitivities.map(({ shift }) => shift);
      compare(byShift, (e) => changed(base, d, d.pulse.tones, e), 3e-4);
    });
  }

  it('are left to differences where p_2 or p_3 is asked for', () => {
    const request = requestOf(design(twoLevelEmitter(), [tone({})]));
    expect(twoLevelEmitted.countWithGradient?.(request, () => [{ p2: 1 }])).toBeNull();
  });
});
