import { describe, expect, it } from 'vitest';
import type { Design } from '../../../core/index.js';
import { type CountRequest, countByReference, countPhotons } from '../../../core/kernels/count.js';
import { differentiate, keepingRun } from '../../../core/kernels/fast/two-level-filtered/gradient.js';
import { problemOf, twoLevelFiltered } from '../../../core/kernels/fast/two-level-filtered/kernel.js';
import {
  machineFor,
  plainMachine,
  reversibleMachine,
} from '../../../core/kernels/fast/two-level-filtered/machine.js';
import { type FilteredProblem, run } from '../../../core/kernels/fast/two-level-filtered/run.js';
import { design, tone, twoLevelEmitter } from '../../support.js';
import { inPromises, randomDesign, requestOf } from './fast-designs.js';

const behind = (fwhm: number, center = 0): Partial<Design> => ({
  collection: { line: 'exciton', polarization: 'all', efficiency: 1, filter: { fwhm, center } },
});

/** Everything that a step corrects: dephasing, chirp, a filter beside the line, an emitter beside the laser. */
const uneven = design(
  twoLevelEmitter({ lifetime: 150, dephasing: 0.01 }),
  [tone({ fwhm: 8, area: 2.7 * Math.PI, detuning: 0.3, phase: 0.4, gdd: 30 })],
  behind(30, 8),
);
const twoColours = design(
  twoLevelEmitter(),
  [tone({ fwhm: 4, area: 6 * Math.PI, detuning: -4 }), tone({ fwhm: 5, area: 5 * Math.PI, detuning: -9 })],
  behind(20),
);
const sech = design(
  twoLevelEmitter({ dephasing: 0.002 }),
  [tone({ shape: 'sech', fwhm: 6, gdd: 40 })],
  behind(45, -3),
);

function problem(d: Design, order: number): FilteredProblem {
  const request = requestOf(d);
  const found = problemOf({ ...request, filter: request.filter && { ...request.filter, order } });
  if (!found) throw new Error('the design has edges');
  return found;
}

const exact = (request: CountRequest) =>
  countByReference({ ...request, effort: { ...request.effort, tolerance: 1e-13 } });

describe('two levels behind a filter, by pairs of events', () => {
  // Source: an independent ODE code and a truncated-Fock filter mode, lifetime 200 ps, resonant Gaussian π pulses.
  it.each([
    [3, 10, 0.9295053301, 6.1082711934e-4],
    [10, 30, 0.9876950292, 1.16029037249e-2],
    [30, 100, 1.0261302577, 5.5962071336e-2],
  ])('%d ps, %d GHz: brightness and purity', (fwhm, filter, mean, g2) => {
    const d = design(twoLevelEmitter({ lifetime: 200 }), [tone({ fwhm })], behind(filter));
    const found = twoLevelFiltered.count({ ...requestOf(d, 1e-11), shift: 0 }, countPhotons);
    const { m1, m2 } = found?.values ?? {};
    expect(m1).toBeCloseTo(mean, 9);
    expect(m2 / m1 ** 2 / g2 - 1).toBeCloseTo(0, 6);
  });

  it.each([2, 4, 6])('%d moments: compiled and plain loops give the same bits', (order) => {
    for (const d of [uneven, twoColours]) {
      const p = problem(d, order);
      const compiled = run(p, 150, machineFor(order));
      expect(machineFor(order)).toBe(reversibleMachine(order));
      expect(compiled).toEqual(run(p, 150, plainMachine(order)));
      expect(compiled.moments[order - 1]).toBeGreaterThan(0);
    }
  });

  // Every second-order term of the splitting is taken out: one forgotten leaves h². Source: the reference propagator.
  it.each([
    ['all at once', uneven, 90],
    ['two colours', twoColours, 600],
    ['no closed form', sech, 160],
  ])('%s: the error falls with the fourth power of the step', (_, d, steps) => {
    const p = problem(d, 3);
    const truth = exact(requestOf(d)).values;
    const errors = [steps, 1.5 * steps, 2.25 * steps].map((n) =>
      run(p, Math.round(n)).moments.map((m, k) => Math.abs(m - truth[`m${k + 1}`])),
    );
    for (let k = 0; k < 3; k++) {
      expect(errors[0][k] / truth[`m${k + 1}`]).toBeLessThan(2e-3);
      expect(errors[2][k]).toBeLessThan(errors[0][k] / 1.5 ** 7);
    }
  });

  it('serves up to six moments, populations and, where asked, the light before the filter', () => {
    const request = requestOf(uneven);
    const all = { ...request, filter: request.filter && { ...request.filter, order: 6 } };
    const found = twoLevelFiltered.count(all, countPhotons);
    const truth = exact(all);
    expect(found && inPromises(found, truth)).toBeLessThan(1);
    const only = twoLevelFiltered.count({ ...all, wanted: ['m1', 'm2'] }, countPhotons);
    expect(Object.keys(only?.values ?? {})).toEqual(['m1', 'm2', 'm3', 'm4', 'm5', 'm6']);
    expect(only?.populations[1]).toBeCloseTo(truth.populations[1], 8);
  });

  // A hundred-millionth of a photon: the excited state is followed by itself, not as a difference from 1.
  it('keeps its digits where hardly any light passes', () => {
    const request = requestOf(randomDesign(3, 28, 'two-level', true));
    const { m1 } = twoLevelFiltered.count(request, countPhotons)?.values ?? {};
    const truth = countByReference({
      ...request,
      effort: { ...request.effort, tolerance: 1e-12, parts: 4 },
    }).values['m1'];
    expect(truth).toBeLessThan(1e-8);
    expect(Math.abs(m1 - truth)).toBeLessThan(2e-15);
  });
});

/** Central difference of a run at fixed steps. */
function slope(p: (e: number) => FilteredProblem, steps: number, e: number): number[] {
  const [a, b] = [run(p(e), steps).moments, run(p(-e), steps).moments];
  return a.map((m, k) => (m - b[k]) / (2 * e));
}

const WEIGHTS = [
  [1, 0, 0],
  [0, 1, 0],
  [0, 0, 1],
];

describe('derivatives of the light behind a filter', () => {
  it.each([
    ['all at once', uneven, 90],
    ['two colours', twoColours, 420],
    ['no closed form', sech, 160],
  ])('%s: agree with central differences at fixed steps', (_, d, steps) => {
    const p = problem(d, 3);
    const machine = reversibleMachine(3);
    if (!machine) throw new Error('no WebAssembly');
    const kept: Float64Array[] = [];
    keepingRun(p, steps, machine, kept);
    const { times, sensitivities } = differentiate(p, machine, steps, kept, WEIGHTS);
    const { filter, model, center, drive } = p;
    // What corrections of corrections do to derivatives is left out: 1e-5 of the third moment's.
    const agree = (found: readonly number[], expected: readonly number[]) =>
      found.forEach((v, k) => {
        expect(Math.abs(v / expected[k] - 1)).toBeLessThan(k < 2 ? 2e-6 : 2e-5);
      });
    const kappa = (e: number) => ({ ...p, filter: { ...filter, kappa: filter.kappa + e } });
    agree(
      sensitivities.map((s) => s.kappa),
      slope(kappa, steps, 1e-5),
    );
    const moved = (e: number) => ({
      ...p,
      center: center + e,
      filter: { ...filter, offset: filter.offset + e },
    });
    agree(
      sensitivities.map((s) => s.center),
      slope(moved, steps, 1e-5),
    );
    const shifted = (e: number) => ({
      ...p,
      model: { ...model, energy: model.energy + e },
      filter: { ...filter, offset: filter.offset - e },
    });
    agree(
      sensitivities.map((s) => s.shift),
      slope(shifted, steps, 1e-5),
    );
    // A change of the drive that turns and fades, added to its samples.
    const [start, end] = [p.part.span.start, p.part.span.end];
    const bump = (t: number): [number, number] => {
      const fade = Math.exp(-(((t - 0.5 * (start + end)) / 5) ** 2));
      return [fade * Math.cos(0.7 * t), fade * Math.sin(0.3 * t + 1)];
    };
    const sampled =
      p.part.source.kind === 'sampled'
        ? p.part
        : { ...p.part, source: { kind: 'sampled', follow: false } as const };
    const bumped = (e: number): FilteredProblem => ({
      ...p,
      part: sampled,
      drive: {
        ...drive,
        sample(t, segment, out) {
          drive.sample(t, segment, out);
          const [a, b] = bump(t);
          out[0] += e * a;
          out[1] += e * b;
        },
      },
    });
    agree(
      sensitivities.map((s) => {
        let sum = 0;
        times.forEach((t, i) => {
          const [a, b] = bump(t);
          sum += s.drive[2 * i] * a + s.drive[2 * i + 1] * b;
        });
        return sum;
      }),
      slope(bumped, steps, 1e-5),
    );
  });

  it('come with the values, for figures behind the filter only', () => {
    const request = { ...requestOf(uneven), wanted: ['m1', 'm2'] };
    const { countWithGradient } = twoLevelFiltered;
    const found = countWithGradient?.(request, (values) => [
      { m1: -2 * (values['m2'] / values['m1'] ** 3), m2: 1 / values['m1'] ** 2 },
      { m3: 0 },
    ]);
    expect(found?.result).toEqual(twoLevelFiltered.count(request, countPhotons));
    expect(found?.sensitivities).toHaveLength(2);
    expect(found?.sensitivities[0].drive).toHaveLength(2 * (found?.times.length ?? 0));
    expect(found?.segments).toHaveLength(found?.times.length ?? 0);
    expect(found?.sensitivities[0].kappa).not.toBe(0);
    expect(found?.sensitivities[1].drive.every((v) => v === 0)).toBe(true);
    expect(countWithGradient?.(request, () => [{ p0: 1 }])).toBeNull();
    expect(countWithGradient?.({ ...request, wanted: ['p0'] }, () => [])).toBeNull();
    expect(countWithGradient?.(request, () => [])?.sensitivities).toEqual([]);
  });
});
