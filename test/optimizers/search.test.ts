import { describe, expect, it } from 'vitest';
import { stream } from '../../core/numerics/stream.js';
import {
  type Evaluate,
  globalMethods,
  localMethods,
  type ProblemSpec,
  type SearchOptions,
  type SearchOutcome,
  search,
  type TaskResult,
} from '../../optimizers/index.js';
import { FOUR, range, toyEvaluate, toySpec } from './toy.js';

// The contract of `search` (our own, no outside source), on a closed-form stand-in and on the real evaluation.

function counting(): { evaluate: Evaluate; count: () => number } {
  let count = 0;
  const evaluate: Evaluate = (design) => {
    count++;
    return toyEvaluate(design);
  };
  return { evaluate, count: () => count };
}

const run = (spec: ProblemSpec, options: Partial<SearchOptions> = {}) =>
  search(spec, { workers: 1, completed: new Map(), onTask: () => {}, evaluate: toyEvaluate, ...options });

/** What must be the same to the bit. */
const result = ({ archive, front, best, hypervolume, evaluations, stages }: SearchOutcome) =>
  JSON.stringify({ archive, front, best, hypervolume, evaluations, stages });

/** Runs with interruptions at random tasks, each time going on from a ledger that went through JSON. */
async function interrupted(spec: ProblemSpec, seed: number, options: Partial<SearchOptions> = {}) {
  const random = stream(seed, 0);
  const ledger: string[] = [];
  for (let attempts = 1; ; attempts++) {
    const tasks = ledger.map((line) => JSON.parse(line) as TaskResult);
    const controller = new AbortController();
    let left = 1 + random.int(6);
    const outcome = await run(spec, {
      ...options,
      completed: new Map(tasks.map((task) => [task.id, task])),
      onTask: (task) => {
        ledger.push(JSON.stringify(task));
        if (--left === 0) controller.abort();
      },
      signal: controller.signal,
    });
    if (outcome.kind === 'finished') return { outcome, attempts, ledger };
  }
}

describe('budget', () => {
  it.each([1, 2, 3, 7, 10, 50, 199, 1000])('of %i evaluations is a hard cap, and is used', async (budget) => {
    const { evaluate, count } = counting();
    const outcome = await run(toySpec(budget, 5), { evaluate });
    expect(count()).toBe(outcome.evaluations);
    expect(outcome.evaluations).toBeLessThanOrEqual(budget);
    expect(outcome.evaluations).toBeGreaterThan(0.95 * budget - 1);
    expect(outcome.kind).toBe('finished');
  });

  it('of a study without free parameters is one evaluation', async () => {
    const { evaluate, count } = counting();
    const outcome = await run(toySpec(1000, 1, []), { evaluate });
    expect(count()).toBe(1);
    expect(outcome.archive).toHaveLength(1);
    expect(outcome.best?.values).toEqual([]);
  });

  it('of a study with lists only is spent on each combination once', async () => {
    const parameters = [
      { kind: 'list', path: 'pulse.tones.0.gdd', values: [0, 10, 25] },
      { kind: 'list', path: 'pulse.tones.0.fwhm', values: [2, 3, 5, 9] },
    ] as const;
    const seen = new Set<string>();
    const evaluate: Evaluate = (design) => {
      const [tone] = design.pulse.tones;
      seen.add(`${tone.gdd} ${tone.fwhm}`);
      return toyEvaluate(design);
    };
    const outcome = await run(toySpec(500, 1, parameters), { evaluate });
    expect(outcome.evaluations).toBe(12);
    expect(seen.size).toBe(12);
  });
});

describe('front', () => {
  it('is monotone, meets its levels and reports those out of reach', async () => {
    const spec = toySpec(1500, 3, FOUR, { front: { from: 0.5, to: 1.2, points: 15 } });
    const { front, archive, best } = await run(spec);
    let last = 0;
    for (const { level, point } of front) {
      const figures = point?.figures;
      if (level > 1) expect(point).toBeNull();
      if (figures === undefined) continue;
      expect(figures.signal.single).toBeGreaterThanOrEqual(level);
      expect(figures.collected.multiphoton).toBeGreaterThanOrEqual(last);
      last = figures.collected.multiphoton ?? Number.NaN;
    }
    const brightness = archive.map((point) => point.figures.signal.single ?? Number.NaN);
    expect(brightness).toEqual([...brightness].sort((a, b) => a - b));
    expect(best?.figures.signal.single).toBeGreaterThanOrEqual(0.9);
  });

  // In the stand-in the best pulse at a level has no detuning, the least area with that brightness, and some width.
  it('comes within 1 % of the best of a fine scan at a level', async () => {
    const { best } = await run(toySpec(1500, 4));
    let least = Number.POSITIVE_INFINITY;
    for (let i = 0; i <= 400; i++) {
      for (let k = 0; k <= 400; k++) {
        const tone = { ...toySpec(1, 1).design.pulse.tones[0], fwhm: 1 + i / 50, area: 2 + k / 300 };
        const spec = toySpec(1, 1);
        const figures = toyEvaluate({ ...spec.design, pulse: { ...spec.design.pulse, tones: [tone] } });
        if ((figures.signal.single ?? 0) >= 0.9)
          least = Math.min(least, figures.collected.multiphoton ?? least);
      }
    }
    expect(best?.figures.collected.multiphoton).toBeLessThan(1.01 * least);
  });

  it('spans the reachable range when its ends are open', async () => {
    const { front, archive } = await run(
      toySpec(600, 2, FOUR, { front: { from: null, to: null, points: 9 } }),
    );
    expect(front).toHaveLength(9);
    expect(front[0].point).toEqual(archive[0]);
    expect(front[8].point).toEqual(archive.at(-1));
  });

  it.each(['single', 'any', 'mean'] as const)(
    'serves g2 against %s without a level of its own',
    async (brightness) => {
      const goal = {
        impurity: 'g2',
        brightness,
        atLeast: null,
        front: { from: 0.4, to: 0.95, points: 12 },
      } as const;
      const { front, best } = await run(toySpec(900, 6, FOUR, goal));
      expect(best).toBeNull();
      // In the stand-in g2 falls with brightness for one and the same pulse, so a level may well be exceeded.
      let last = 0;
      for (const { level, point } of front) {
        expect(point?.figures.signal[brightness]).toBeGreaterThanOrEqual(level);
        expect(point?.figures.collected.g2).toBeGreaterThanOrEqual(last);
        last = point?.figures.collected.g2 ?? Number.NaN;
      }
    },
  );

  it('is empty, without an error, when every candidate is infeasible', async () => {
    const evaluate: Evaluate = (design) => {
      const figures = toyEvaluate(design);
      return { ...figures, collected: { ...figures.collected, multiphoton: null } };
    };
    const outcome = await run(toySpec(300, 1), { evaluate });
    expect(outcome.archive).toEqual([]);
    expect(outcome.best).toBeNull();
    expect(outcome.front.every(({ point }) => point === null)).toBe(true);
  });

  it('keeps every limit, and reaches the best design that one of them allows', async () => {
    const limits = [{ figure: 'pulse.duration_ps', atMost: null, atLeast: 6 }];
    const free = await run(toySpec(1200, 4));
    expect(free.best?.figures.pulse.duration_ps).toBeLessThan(5);
    const { archive, best, nearest } = await run(toySpec(1200, 4, FOUR, { limits }));
    expect(archive.length).toBeGreaterThan(20);
    for (const { figures } of archive) expect(figures.pulse.duration_ps).toBeGreaterThanOrEqual(6);
    expect(best?.figures.pulse.duration_ps).toBeLessThan(6 * (1 + 1e-3));
    expect(nearest).toBeNull();
  });

  it('names the evaluation nearest to limits that nothing meets', async () => {
    const limits = [
      { figure: 'pulse.duration_ps', atMost: 1, atLeast: null },
      { figure: 'collected.multiphoton', atMost: 1, atLeast: null },
    ];
    const outcome = await run(toySpec(600, 4, FOUR, { limits }));
    expect(outcome.archive).toEqual([]);
    // In the stand-in the duration is τ + 5/τ for an undispersed pulse: 2√5 at the least.
    expect(outcome.nearest?.figures.pulse.duration_ps).toBeCloseTo(2 * Math.sqrt(5), 1);
  });

  it('does not fall for a flaw that is flagged or undefined', async () => {
    const evaluate: Evaluate = (design) => {
      const figures = toyEvaluate(design);
      if (design.pulse.tones[0].gdd < 0) return figures;
      const collected = {
        ...figures.collected,
        multiphoton: design.pulse.tones[0].detuning > 0 ? Number.NaN : -1e-3,
      };
      return { ...figures, collected };
    };
    const { archive } = await run(toySpec(400, 1), { evaluate });
    expect(archive.length).toBeGreaterThan(10);
    for (const { values } of archive) expect(values[3]).toBeLessThan(0);
  });
});

describe('determinism', () => {
  const SEVEN = [
    ...FOUR,
    range('pulse.tones.0.phase', 0, 1),
    range('pulse.tones.1.delay', -10, 10),
    range('pulse.tones.1.area', 0, 9),
  ];
  const mixed = [
    ...FOUR.slice(0, 3),
    { kind: 'list', path: 'pulse.tones.0.gdd', values: [-20, 0, 10, 25] } as const,
  ];

  it.each([
    ['four ranges', toySpec(1200, 9)],
    ['ranges and a list', toySpec(700, 9, mixed)],
    ['one range', toySpec(150, 9, [range('pulse.tones.0.area', 0, 20)])],
    ['seven ranges, which begin with a race', toySpec(2400, 9, SEVEN)],
  ])('%s: random interruptions and resumption change nothing', async (_name, spec) => {
    const whole = await run(spec);
    for (const seed of [1, 2, 3]) {
      const { outcome, attempts } = await interrupted(spec, seed);
      expect(attempts).toBeGreaterThan(1);
      expect(result(outcome)).toBe(result(whole));
    }
  });

  it('a finished ledger is replayed without an evaluation or a task', async () => {
    const spec = toySpec(500, 2);
    const { outcome, ledger } = await interrupted(spec, 4);
    const completed = new Map(
      ledger.map((line) => JSON.parse(line) as TaskResult).map((task) => [task.id, task]),
    );
    const { evaluate, count } = counting();
    const again = await run(spec, { completed, evaluate, onTask: () => expect.unreachable() });
    expect(count()).toBe(0);
    expect(result(again)).toBe(result(outcome));
  });

  it('another seed searches elsewhere', async () => {
    expect(result(await run(toySpec(300, 1)))).not.toBe(result(await run(toySpec(300, 2))));
  });
});

describe('one method in place of the strategy', () => {
  const methods = [...localMethods.keys(), ...globalMethods.keys()];
  const named = (method: string, evaluations: number): ProblemSpec => {
    const spec = toySpec(evaluations, 3);
    return { ...spec, search: { ...spec.search, method } };
  };

  it.each(methods)('%s keeps the cap, finds a front, and goes on after interruptions', async (method) => {
    const { evaluate, count } = counting();
    const whole = await run(named(method, 700), { evaluate });
    expect(count()).toBe(whole.evaluations);
    expect(whole.evaluations).toBeLessThanOrEqual(700);
    expect(whole.archive.length).toBeGreaterThan(5);
    const { outcome } = await interrupted(named(method, 700), 5);
    expect(result(outcome)).toBe(result(whole));
  });

  it('refuses a name that is none', async () => {
    await expect(run(named('gradient', 100))).rejects.toThrow('search.method: got gradient');
  });
});

describe('running', () => {
  it('tells each finished task once, and progress within the budget', async () => {
    const ids: string[] = [];
    let last = 0;
    const outcome = await run(toySpec(600, 1), {
      onTask: ({ id }) => void ids.push(id),
      onProgress: ({ evaluations, budget, tasksDone, tasksTotal }) => {
        expect(evaluations).toBeGreaterThanOrEqual(last);
        expect(evaluations).toBeLessThanOrEqual(budget);
        expect(tasksDone).toBeLessThanOrEqual(tasksTotal);
        last = evaluations;
      },
    });
    expect(new Set(ids).size).toBe(ids.length);
    expect(last).toBe(outcome.evaluations);
    expect(ids).toHaveLength(outcome.stages.reduce((sum, stage) => sum + stage.tasks, 0));
  });

  it('rejects with the message when an evaluation throws', async () => {
    const evaluate: Evaluate = () => {
      throw new Error('the laser is off');
    };
    await expect(run(toySpec(100, 1), { evaluate })).rejects.toThrow('the laser is off');
  });

  it('is interrupted at once by a signal that has already come', async () => {
    const outcome = await run(toySpec(100, 1), { signal: AbortSignal.abort() });
    expect(outcome).toMatchObject({ kind: 'interrupted', evaluations: 0, archive: [] });
  });
});
