import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Figures } from '../../core/index.js';
import type { Goal } from '../../optimizers/index.js';
import { applyParameters, createProblem, infeasible, judge, transformOf } from '../../optimizers/index.js';
import { GOAL, range, toyEvaluate, toySpec } from './toy.js';

describe('parameters of a design', () => {
  const spec = toySpec(1, 1, [
    range('pulse.tones.0.fwhm', 1, 10),
    { kind: 'list', path: 'pulse.tones.0.gdd', values: [0, 10, 25] },
  ]);

  it('sets values and keeps ties, also through another tie, without changing the specification', () => {
    const tied = {
      ...spec,
      ties: [
        { path: 'pulse.tones.1.fwhm', sameAs: 'pulse.tones.1.gdd' },
        { path: 'pulse.tones.1.gdd', sameAs: 'pulse.tones.0.gdd' },
      ],
    };
    const before = structuredClone(tied);
    const { tones } = applyParameters(tied, [4, 25]).pulse;
    expect([tones[0].fwhm, tones[0].gdd, tones[1].gdd, tones[1].fwhm]).toEqual([4, 25, 25, 25]);
    expect(tied).toEqual(before);
  });

  it('sets one tone only where two tones are the same object', () => {
    const [tone] = spec.design.pulse.tones;
    const pulse = { ...spec.design.pulse, tones: [tone, tone] };
    const { tones } = applyParameters({ ...spec, design: { ...spec.design, pulse } }, [4, 25]).pulse;
    expect([tones[0].fwhm, tones[1].fwhm]).toEqual([4, tone.fwhm]);
  });

  it('finds keys that the study writes in snake case', () => {
    const free = toySpec(1, 1, [range('laser.pi_pulse.energy', 1, 2)]);
    const laser = { repetition: 76, piPulse: { energy: 12, fwhm: 5 }, rejection: 0 };
    const design = applyParameters({ ...free, design: { ...free.design, laser } }, [1.5]);
    expect(design.laser?.piPulse?.energy).toBe(1.5);
  });

  it('names the path that does not exist, and the circle', () => {
    expect(() => createProblem(toySpec(1, 1, [range('collection.filter.fwhm', 1, 2)]), toyEvaluate)).toThrow(
      'collection.filter.fwhm',
    );
    const circle = [
      { path: 'pulse.tones.0.tod', sameAs: 'pulse.tones.1.tod' },
      { path: 'pulse.tones.1.tod', sameAs: 'pulse.tones.0.tod' },
    ];
    expect(() => createProblem({ ...spec, ties: circle }, toyEvaluate)).toThrow('circle');
    expect(() => applyParameters(spec, [1])).toThrow('got 1 values');
  });
});

describe('transforms', () => {
  const cases = [
    range('pulse.tones.0.fwhm', 1, 100),
    range('pulse.tones.0.area', 0, 25),
    range('pulse.tones.0.area', 0.5, 25, 'log'),
    range('pulse.tones.0.gdd', -60, 60),
    range('pulse.tones.0.tod', 3, 60),
  ];

  it.each(cases)('maps $path from end to end and back', (parameter) => {
    const transform = transformOf(parameter);
    if (parameter.kind !== 'range') throw new Error('a range was expected');
    expect([transform.value(0), transform.value(1)]).toEqual([parameter.from, parameter.to]);
    fc.assert(
      fc.property(fc.double({ min: 0, max: 1, noNaN: true }), (u) => {
        const value = transform.value(u);
        expect(value >= parameter.from && value <= parameter.to).toBe(true);
        expect(transform.unit(value)).toBeCloseTo(u, 9);
      }),
      { seed: 7 },
    );
  });

  it('takes widths by their logarithm and dispersion by asinh(2 GDD/ps²)', () => {
    expect(transformOf(cases[0]).value(0.5)).toBeCloseTo(10, 12);
    const half = Math.asinh(120) / 2;
    expect(transformOf(cases[3]).value(0.75)).toBeCloseTo(0.5 * Math.sinh(half), 9);
  });

  it('never leaves a list', () => {
    const values = [0, 10, 25];
    const transform = transformOf({ kind: 'list', path: 'pulse.tones.0.gdd', values });
    for (let i = 0; i <= 100; i++) expect(values).toContain(transform.value(i / 100));
    for (const value of values) expect(transform.value(transform.unit(value))).toBe(value);
    expect(() => transform.unit(11)).toThrow('allowed are 0, 10, 25');
  });

  it('refuses empty ranges and lists, and logarithms of nothing', () => {
    expect(() => transformOf(range('pulse.tones.0.area', 2, 1))).toThrow('empty');
    expect(() => transformOf(range('pulse.tones.0.area', 0, 1, 'log'))).toThrow('above 0');
    expect(() => transformOf({ kind: 'list', path: 'a', values: [] })).toThrow('empty');
  });
});

describe('judgement', () => {
  const good = toyEvaluate(toySpec(1, 1).design);
  const collected = (multiphoton: number | null): Figures => ({
    ...good,
    collected: { ...good.collected, multiphoton },
  });

  it('reads impurity from what is collected and brightness from the signal', () => {
    const figures = { ...collected(0.125), signal: { ...good.signal, mean: 0.75 } };
    expect(judge(figures, { ...GOAL, brightness: 'mean' })).toMatchObject({
      impurity: 0.125,
      brightness: 0.75,
    });
  });

  it.each([null, Number.NaN, Number.POSITIVE_INFINITY, -1e-4, 1.5])(
    'never takes %s for an impurity',
    (impurity) => {
      expect(judge(collected(impurity), GOAL)).toEqual(infeasible(GOAL));
    },
  );

  it('does not trust flagged figures, useless error estimates and impossible brightness', () => {
    expect(judge({ ...good, phonons: { method: 'polaron', flags: ['p_0 < 0'] } }, GOAL)).toEqual(
      infeasible(GOAL),
    );
    expect(judge({ ...good, accuracy: { steps: 1, error_estimate: Number.NaN } }, GOAL)).toEqual(
      infeasible(GOAL),
    );
    expect(judge({ ...good, accuracy: { steps: 1, error_estimate: 0.5 } }, GOAL)).toEqual(infeasible(GOAL));
    expect(judge({ ...good, signal: { ...good.signal, single: 1.01 } }, GOAL)).toEqual(infeasible(GOAL));
  });
});

describe('limits', () => {
  const figures = toyEvaluate(toySpec(1, 1).design);
  const goal = (limits: Goal['limits']): Goal => ({ ...GOAL, limits });
  const bound = (figure: string, atMost: number | null, atLeast: number | null = null) => ({
    ...{ figure, atMost, atLeast },
  });

  it('are constraints of relative size, one for each bound, and met at the bound itself', () => {
    const { duration_ps: duration } = figures.pulse;
    const met = judge(figures, goal([bound('pulse.duration_ps', duration, duration)]));
    expect(met).toMatchObject({ constraints: [0, 0], violation: 0 });
    const missed = judge(figures, goal([bound('pulse.duration_ps', duration / 1.01, 0)]));
    expect(missed.violation).toBeCloseTo(0.01, 4);
    expect(missed.constraints[1]).toBeLessThan(0);
  });

  it('are missed by a figure that does not exist', () => {
    expect(judge(figures, goal([bound('filtered.g2', 1)])).violation).toBe(2);
  });
});
