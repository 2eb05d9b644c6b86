import { describe, expect, it } from 'vitest';
import { sliceBounds } from '../../optimizers/front/slices.js';
import {
  dominates,
  type EvaluatedPoint,
  type Goal,
  judge,
  objectivesOf,
  type ProblemSpec,
  type SearchOptions,
  search,
  type TaskResult,
} from '../../optimizers/index.js';
import { range, toyEvaluate, toySpec } from './toy.js';

// Fronts with three objectives (our own contract, no outside source), on a closed-form stand-in whose energy is area²/τ.

const TWO = [range('pulse.tones.0.fwhm', 1, 20, 'log'), range('pulse.tones.0.area', 0.5, 5)];
const GOAL: Partial<Goal> = {
  front: { from: 0.5, to: 0.95, points: 6 },
  third: { axis: 'energy', slices: 3 },
};

const run = (spec: ProblemSpec, options: Partial<SearchOptions> = {}) =>
  search(spec, { workers: 1, completed: new Map(), onTask: () => {}, evaluate: toyEvaluate, ...options });

const energy = ({ figures }: EvaluatedPoint) => figures.pulse.energy_fj ?? Number.NaN;
const impurity = ({ figures }: EvaluatedPoint) => figures.collected.multiphoton ?? Number.NaN;

/** Every design of a fine scan over both parameters. */
const scan = (() => {
  const { design } = toySpec(1, 1, TWO);
  return Array.from({ length: 301 * 301 }, (_, n): EvaluatedPoint => {
    const [i, k] = [n % 301, Math.floor(n / 301)];
    const tone = { ...design.pulse.tones[0], fwhm: 20 ** (i / 300), area: 0.5 + (4.5 * k) / 300 };
    return { values: [], figures: toyEvaluate({ ...design, pulse: { ...design.pulse, tones: [tone] } }) };
  });
})();

/** Least impurity of the scan at a brightness and an energy. */
function leastOf(level: number, bound: number | null): number {
  const inside = scan.filter(
    (point) => (bound === null || energy(point) <= bound) && (point.figures.signal.single ?? 0) >= level,
  );
  return inside.reduce((least, point) => Math.min(least, impurity(point)), Number.POSITIVE_INFINITY);
}

describe('a front with a third axis', () => {
  const spec = toySpec(1500, 3, TWO, GOAL);

  it('keeps the bound of each slice, tightest first, and comes near the best that a scan finds within it', async () => {
    const { front, archive, best, hypervolume } = await run(spec);
    const bounds = [...new Set(front.map(({ slice }) => slice))];
    expect(bounds).toHaveLength(3);
    expect(bounds[2]).toBeNull();
    expect(bounds[0]).toBeLessThan(bounds[1] ?? Number.NaN);
    for (const { level, slice, point } of front) {
      if (point === null) {
        // Nothing of a slice may be missing that the scan reaches with ease.
        expect(leastOf(level * 1.01, slice)).toBe(Number.POSITIVE_INFINITY);
        continue;
      }
      expect(point.figures.signal.single).toBeGreaterThanOrEqual(level);
      if (slice !== null) expect(energy(point)).toBeLessThanOrEqual(slice);
      expect(impurity(point)).toBeLessThan(1.05 * leastOf(level, slice));
    }
    // The level at which the best design is asked for is one of each slice, and the best one has no bound.
    const asked = front.filter(({ level }) => level === 0.9);
    expect(asked).toHaveLength(3);
    expect(asked[2].point).toEqual(best);
    const objectives = archive.map(({ figures }) => objectivesOf(judge(figures, spec.goal)));
    expect(objectives.every((vector) => vector.length === 3)).toBe(true);
    expect(objectives.some((a) => objectives.some((b) => dominates(a, b)))).toBe(false);
    expect(hypervolume.value).toBeGreaterThan(0);
    expect(hypervolume.meaning).toContain('pulse.energy_fj');
  });

  it('has the same front without a bound as a search of two objectives, within 1 %', async () => {
    const three = await run(spec);
    const two = await run(toySpec(1500, 3, TWO, { ...GOAL, third: null }));
    for (const { level, point } of two.front) {
      const open = three.front.find((f) => f.slice === null && f.level === level)?.point;
      expect(impurity(open as EvaluatedPoint)).toBeLessThan(1.01 * impurity(point as EvaluatedPoint));
    }
  });

  it('takes the mean as what is to be large', async () => {
    const goal: Partial<Goal> = { ...GOAL, impurity: 'g2', third: { axis: 'mean', slices: 2 } };
    const { front } = await run(toySpec(600, 3, TWO, goal));
    const [tight] = front;
    expect(tight.slice).not.toBeNull();
    for (const { slice, point } of front) {
      if (slice !== null && point !== null) {
        expect(point.figures.collected.mean).toBeGreaterThanOrEqual(slice);
      }
    }
  });

  it.each(['auto', 'nsga2', 'moead', 'sqp'])(
    '%s: the cap is kept, and interruptions and resumption change nothing',
    async (method) => {
      const own = { ...spec, search: { evaluations: 500, seed: 3, method } };
      const results = ({ archive, front, hypervolume, stages, restarts }: Awaited<ReturnType<typeof run>>) =>
        JSON.stringify({ archive, front, hypervolume, stages, restarts });
      let count = 0;
      const counted = (design: Parameters<typeof toyEvaluate>[0]) => {
        count++;
        return toyEvaluate(design);
      };
      const whole = await run(own, { evaluate: counted });
      expect(count).toBe(whole.evaluations);
      expect(count).toBeLessThanOrEqual(500);
      expect(whole.front.some(({ slice, point }) => slice !== null && point !== null)).toBe(true);
      const ledger: TaskResult[] = [];
      for (let attempts = 1; ; attempts++) {
        const controller = new AbortController();
        const outcome = await run(own, {
          completed: new Map(ledger.map((task) => [task.id, task])),
          onTask: (task) => {
            ledger.push(JSON.parse(JSON.stringify(task)) as TaskResult);
            if (ledger.length % 2 === 0) controller.abort();
          },
          signal: controller.signal,
        });
        if (outcome.kind === 'interrupted') continue;
        expect(attempts).toBeGreaterThan(1);
        expect(results(outcome)).toBe(results(whole));
        return;
      }
    },
  );

  it('judges a design without the third figure as none', () => {
    const figures = toyEvaluate(spec.design);
    const silent = { ...figures, pulse: { ...figures.pulse, energy_fj: null } };
    expect(judge(figures, spec.goal).third).toBe(energy({ values: [], figures }));
    expect(judge(silent, spec.goal).violation).toBe(Number.POSITIVE_INFINITY);
  });
});

describe('bounds of slices', () => {
  const goal: Goal = { ...toySpec(1, 1, TWO, GOAL).goal, front: { from: 0.5, to: 0.9, points: 3 } };
  const point = (brightness: number, impurity: number, third: number) => ({ brightness, impurity, third });

  it('divide the axis evenly in ratio, at the brightness of the best design or in the middle of the front', () => {
    const open = [point(0.5, 1, 2), point(0.7, 2, 27), point(0.9, 3, 8)];
    const dark = point(0.4, 3, 0.1);
    expect(sliceBounds(goal, [...open, dark, point(0.9, 4, 1)])).toEqual([2, 4, null]);
    const middle = { ...goal, atLeast: null };
    expect(sliceBounds(middle, [...open, dark, point(0.7, 4, 1)])).toEqual([3, 9, null]);
    // Out of reach: the brightest stands for it.
    expect(sliceBounds({ ...goal, atLeast: 0.95 }, [...open, point(0.9, 4, 1)])).toEqual([2, 4, null]);
  });

  it('of an axis that may be negative divide it evenly', () => {
    const mean: Goal = { ...goal, third: { axis: 'mean', slices: 3 } };
    const points = [point(0.5, 1, -0.5), point(0.9, 3, -0.9), point(0.9, 4, -1.2)];
    expect(sliceBounds(mean, points)).toEqual([1.1, 1, null]);
  });

  it('are none where the axis has no room, or nothing was found', () => {
    expect(sliceBounds(goal, [point(0.5, 1, 8), point(0.9, 3, 8)])).toEqual([null]);
    expect(sliceBounds(goal, [])).toEqual([null]);
  });
});
