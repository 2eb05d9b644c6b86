/**
 * How many evaluations the default strategy needs: share of the reference hypervolume in the archive, and the least
 * P(n≥2) at a brightness of 0.95, at several budgets, median over seeds. An exact gradient counts as two evaluations.
 *
 *   npx tsx benchmarks/search.ts [instances] [budgets] [seeds]     e.g. A,C 1600,3200 1-10
 */

import { evaluate } from '../core/evaluate.js';
import { evaluateGradient } from '../core/gradient.js';
import { type FreeParameter, hypervolume, type ProblemSpec, search } from '../optimizers/index.js';
import { design, tone, twoLevelEmitter } from '../test/support.js';

interface Instance {
  readonly parameters: readonly FreeParameter[];
  readonly tones: number;
  readonly areaDrift: number;
  /** Hypervolume of (P(n≥2)/nadir, (1 − P(1))/0.5) against (1, 1). */
  readonly nadir: number;
  /** Best of long runs with independent general-purpose optimisers. */
  readonly volume: number;
  readonly best: number;
}

const range = (
  path: string,
  from: number,
  to: number,
  scale: 'linear' | 'log' = 'linear',
): FreeParameter => ({
  kind: 'range',
  path: `pulse.tones.${path}`,
  from,
  to,
  scale,
});

const ONE = [
  range('0.fwhm', 1, 100, 'log'),
  range('0.area', 0, 8 * Math.PI),
  range('0.detuning', -3, 3),
  range('0.gdd', -60, 60),
];
const TWO = ['0', '1'].flatMap((tone) => [
  range(`${tone}.fwhm`, 1, 6, 'log'),
  range(`${tone}.area`, 0, 40 * Math.PI),
  range(`${tone}.detuning`, -25, -2),
]);

const INSTANCES: Readonly<Record<string, Instance>> = {
  A: {
    parameters: ONE,
    tones: 1,
    areaDrift: 0,
    nadir: 5e-4,
    volume: 0.7207657489719633,
    best: 2.7047495050955663e-4,
  },
  C: {
    parameters: ONE,
    tones: 1,
    areaDrift: 0.05,
    nadir: 4e-3,
    volume: 0.9588817671888903,
    best: 2.789775326404696e-4,
  },
  E: {
    parameters: [...TWO, range('1.delay', -10, 10)],
    tones: 2,
    areaDrift: 0,
    nadir: 4e-3,
    volume: 0.9408407972924254,
    best: 3.5802321858120247e-4,
  },
};

function specOf(instance: Instance, evaluations: number, seed: number): ProblemSpec {
  const tones = Array.from({ length: instance.tones }, () => tone({ fwhm: 1, area: 0 }));
  const drift =
    instance.areaDrift > 0
      ? { area: instance.areaDrift, width: 0, detuning: 0, filterCenter: 0, quantile: null }
      : null;
  return {
    design: design(twoLevelEmitter(), tones, { drift }),
    parameters: instance.parameters,
    ties: [],
    goal: {
      impurity: 'multiphoton',
      brightness: 'single',
      atLeast: 0.95,
      front: { from: 0.5, to: 0.999, points: 100 },
      third: null,
      limits: [],
    },
    search: { evaluations, seed, method: 'auto' },
  };
}

/** A number, or a range such as 1-20. */
function numbersOf(text: string): number[] {
  const [from, to = from] = text.split('-').map(Number);
  return Array.from({ length: to - from + 1 }, (_, i) => from + i);
}

/** Within 1 % of the best known. */
const NEAR = 1.01;

const median = (numbers: readonly number[]) => {
  const sorted = [...numbers].sort((a, b) => a - b);
  return (sorted[(sorted.length - 1) >> 1] + sorted[sorted.length >> 1]) / 2;
};

async function runOnce(instance: Instance, budget: number, seed: number) {
  let inside = 0;
  const timed = <T>(act: () => T): T => {
    const start = performance.now();
    const answer = act();
    inside += performance.now() - start;
    return answer;
  };
  let first = Number.POSITIVE_INFINITY;
  const begin = performance.now();
  const outcome = await search(specOf(instance, budget, seed), {
    workers: 1,
    completed: new Map(),
    onTask: () => {},
    evaluate: (design) => timed(() => evaluate(design, 'search')),
    evaluateGradient: (...request) => timed(() => evaluateGradient(...request)),
    onProgress: ({ best, evaluations }) => {
      if (best !== null && best.impurity < NEAR * instance.best) first = Math.min(first, evaluations);
    },
  });
  const total = performance.now() - begin;
  const points = outcome.archive.map(({ figures }) => [
    (figures.collected.multiphoton ?? 1) / instance.nadir,
    (1 - (figures.signal.single ?? 0)) / 0.5,
  ]);
  if (process.env['VERBOSE']) for (const stage of outcome.stages) console.log('   ', JSON.stringify(stage));
  return {
    share: hypervolume(points, [1, 1]) / instance.volume,
    excess: (outcome.best?.figures.collected.multiphoton ?? Number.POSITIVE_INFINITY) / instance.best - 1,
    first,
    seconds: total / 1000,
    outside: 1 - inside / total,
  };
}

const [names = 'A', budgets = '1600,3200,5000', seeds = '1,2,3'] = process.argv.slice(2);
const percent = (value: number) => `${(100 * value).toFixed(3)} %`;
console.log(
  'instance  budget  hypervolume: median (least)      excess at 0.95: median (most)   in 1 %    first there: mean (most)  s/run  outside evaluate',
);
for (const name of names.split(',')) {
  for (const budget of budgets.split(',').map(Number)) {
    const runs = [];
    for (const seed of seeds.split(',').flatMap(numbersOf))
      runs.push(await runOnce(INSTANCES[name], budget, seed));
    const shares = runs.map((run) => run.share);
    const excess = runs.map((run) => run.excess);
    const firsts = runs.map((run) => run.first);
    console.log(
      [
        name.padEnd(8),
        String(budget).padStart(7),
        `${percent(median(shares))} (${percent(Math.min(...shares))})`.padEnd(31),
        `${percent(median(excess))} (${percent(Math.max(...excess))})`.padEnd(30),
        `${excess.filter((e) => e < NEAR - 1).length} of ${excess.length}`.padEnd(8),
        `${(firsts.reduce((a, b) => a + b, 0) / firsts.length).toFixed(0)} (${Math.max(...firsts)})`.padEnd(
          24,
        ),
        median(runs.map((run) => run.seconds)).toFixed(1),
        percent(median(runs.map((run) => run.outside))),
      ].join('  '),
    );
  }
}
