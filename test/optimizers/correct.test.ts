import { describe, expect, it } from 'vitest';
import type { PhononSpec } from '../../core/index.js';
import {
  type Evaluate,
  judge,
  type ProblemSpec,
  type SearchOptions,
  type SearchOutcome,
  search,
  type TaskResult,
} from '../../optimizers/index.js';
import { range, toyEvaluate, toySpec } from './toy.js';

// The contract of the correction (our own, no outside source), on a closed-form stand-in with an exact twin.

const PHONONS: PhononSpec = { coupling: 0.03, cutoff: 2.2, temperature: 4, method: 'auto' };
const TWO = [range('pulse.tones.0.fwhm', 1, 100, 'log'), range('pulse.tones.0.area', 0, 2 * Math.PI)];
const GOAL = { atLeast: 0.85, front: { from: 0.4, to: 0.9, points: 6 } };

/** The exact twin is dimmer and less pure, each by a share that changes with the design. */
const twins: Evaluate = (design) => {
  const cheap = toyEvaluate(design);
  const method = design.emitter.phonons?.method === 'exact' ? 'exact' : 'polaron';
  const [{ area, fwhm }] = design.pulse.tones;
  const loss = method === 'exact' ? 0.003 * area * Math.exp(-fwhm / 20) : 0;
  const single = cheap.signal.single! * (1 - loss);
  const multiphoton = cheap.collected.multiphoton! * (1 + 3 * loss);
  return {
    ...cheap,
    signal: { ...cheap.signal, single, any: single },
    collected: { ...cheap.collected, multiphoton },
    phonons: { method, flags: [] },
  };
};

function specOf(evaluations: number, method: PhononSpec['method']): ProblemSpec {
  const spec = toySpec(evaluations, 3, TWO, GOAL);
  return {
    ...spec,
    design: { ...spec.design, emitter: { ...spec.design.emitter, phonons: { ...PHONONS, method } } },
  };
}

const run = (spec: ProblemSpec, options: Partial<SearchOptions> = {}): Promise<SearchOutcome> =>
  search(spec, { workers: 1, completed: new Map(), onTask: () => {}, evaluate: twins, ...options });

describe('correction of a front by the exact phonon method', () => {
  it('reaches the front of the exact method within its tolerance, inside the budget', async () => {
    let count = 0;
    const counted: Evaluate = (design) => {
      count++;
      return twins(design);
    };
    const outcome = await run(specOf(500, 'auto'), { evaluate: counted });
    expect(count).toBeLessThanOrEqual(500);
    expect(outcome.correction).toEqual({ tolerance: 1e-3, levels: 7, settled: 7 });
    const exact = await run(specOf(6000, 'exact'));
    outcome.front.forEach(({ level, point }, i) => {
      const own = judge(point!.figures, specOf(0, 'auto').goal);
      const best = judge(exact.front[i].point!.figures, specOf(0, 'auto').goal);
      expect(point!.figures.phonons.method).toBe('exact');
      expect(own.brightness).toBeGreaterThanOrEqual(level);
      expect(Math.abs(own.impurity / best.impurity - 1)).toBeLessThan(1e-3);
    });
    expect(outcome.archive.every(({ figures }) => figures.phonons.method === 'exact')).toBe(true);
    expect(outcome.best?.figures.phonons.method).toBe('exact');
  });

  it('gives the same when it is stopped and resumed', async () => {
    const spec = specOf(200, 'auto');
    const tasks: TaskResult[] = [];
    const whole = await run(spec, { onTask: (task) => void tasks.push(JSON.parse(JSON.stringify(task))) });
    const correcting = tasks.filter(({ id }) => id.includes('exact-phonons'));
    expect(correcting.length).toBeGreaterThan(4);
    const completed = new Map(tasks.slice(0, tasks.length - 3).map((task) => [task.id, task]));
    const resumed = await run(spec, { completed });
    expect(JSON.stringify(resumed)).toBe(JSON.stringify(whole));
  });

  it('leaves searches alone that are exact already or have no phonons', async () => {
    expect((await run(specOf(60, 'exact'))).correction).toBeNull();
    expect((await run(toySpec(60, 1, TWO, GOAL))).correction).toBeNull();
  });

  it('keeps to a budget that pays for a single look', async () => {
    for (const evaluations of [1, 2, 5, 12]) {
      const outcome = await run(specOf(evaluations, 'auto'));
      expect(outcome.evaluations).toBeLessThanOrEqual(evaluations);
    }
  });
});
