/**
 * Registered methods on standard problems. Many objectives: share of the true hypervolume in the archive of all
 * non-dominated evaluations, median over seeds, with nothing tuned; `auto` is the default strategy. One objective: how many seeds come within 1e-6 of
 * the shifted minimum.
 *
 *   npx tsx benchmarks/standard-problems.ts [seeds] [evaluations] [problems] [methods]     e.g. 1,2,3 25000 ZDT1,OSY auto
 */
import {
  Archive,
  globalMethods,
  hypervolume,
  localMethods,
  type Method,
  optimize,
  type Reply,
  search,
  type Trial,
} from '../optimizers/index.js';
import * as problems from '../test/optimizers/standard-problems.js';
import { asStudy } from './standard-study.js';

interface ManyProblem {
  readonly evaluate: (x: Trial) => Reply;
  readonly dimension: number;
  readonly constraints: number;
  readonly reference: readonly number[];
  /** True hypervolume, from the definition of the front. */
  readonly volume: number;
}

const many = (
  evaluate: ManyProblem['evaluate'],
  dimension: number,
  volume: number,
  reference: readonly number[] = [1.1, 1.1],
  constraints = 0,
): ManyProblem => ({ evaluate, dimension, constraints, reference, volume });

const MANY: Readonly<Record<string, ManyProblem>> = {
  ZDT1: many(problems.zdt1, 30, 0.87667),
  ZDT2: many(problems.zdt2, 30, 0.54333),
  ZDT3: many(problems.zdt3, 30, 1.33176),
  ZDT4: many(problems.zdt4, 10, 0.87667),
  ZDT6: many(problems.zdt6, 10, 0.50788),
  DTLZ2: many(problems.dtlz2, 12, 1.1 ** 3 - Math.PI / 6, [1.1, 1.1, 1.1]),
  BNH: many(problems.bnh, 2, 5285.3, [140, 50], 2),
  OSY: many(problems.osy, 6, 100640, [0, 386], 6),
};

const ONE: Readonly<Record<string, [(x: Trial) => Reply, number, number]>> = {
  Rosenbrock: [problems.rosenbrock, 4, 10_000],
  Rastrigin: [problems.rastrigin, 4, 10_000],
  Ackley: [problems.ackley, 4, 10_000],
  Griewank: [problems.griewank, 4, 10_000],
};

const [
  seedText = '1,2,3,4,5',
  budgetText = '25000',
  names = Object.keys({ ...MANY, ...ONE }).join(','),
  only,
] = process.argv.slice(2);
const seeds = seedText.split(',').map(Number);
const methods = [...localMethods.values(), ...globalMethods.values()].filter(
  ({ name }) => only === undefined || only.split(',').includes(name),
);

const median = (numbers: readonly number[]) => {
  const sorted = [...numbers].sort((a, b) => a - b);
  return (sorted[(sorted.length - 1) >> 1] + sorted[sorted.length >> 1]) / 2;
};

function share(method: Method, problem: ManyProblem, seed: number): number {
  const { evaluate, dimension, constraints, reference, volume } = problem;
  const space = { dimension, categories: new Array<number>(dimension).fill(0) };
  const setup = {
    space,
    objectives: reference.length,
    constraints,
    start: [],
    seed,
    budget: Number(budgetText),
  };
  const archive = new Archive<null>();
  for (const { reply } of optimize(method, setup, evaluate).trace) {
    if (reply.constraints.every((c) => c <= 0)) archive.add(reply.objectives, null);
  }
  return (
    hypervolume(
      archive.entries.map((entry) => entry.objectives),
      reference,
    ) / volume
  );
}

/** The default strategy on the same problem, as a study; derivatives by differences. */
async function shareOfStrategy(problem: ManyProblem, seed: number): Promise<number> {
  const study = asStudy(problem, problem.reference.length, Number(budgetText), seed);
  const { evaluate, spec, objectivesOf } = study;
  const { archive } = await search(spec, { workers: 1, completed: new Map(), onTask: () => {}, evaluate });
  const points = archive.map(({ figures }) => objectivesOf(figures));
  return hypervolume(points, problem.reference) / problem.volume;
}

function successes(method: Method, name: string): number {
  const [evaluate, dimension, budget] = ONE[name];
  const space = { dimension, categories: new Array<number>(dimension).fill(0) };
  return seeds.filter((seed) => {
    const start = [Array.from({ length: dimension }, (_, k) => (0.37 * seed + 0.61 * k) % 1)];
    const setup = { space, objectives: 1, constraints: 0, start, seed, budget };
    const { best } = optimize(method, setup, evaluate);
    return best !== null && best.reply.objectives[0] < 1e-6;
  }).length;
}

console.log(
  `seeds ${seeds.join(' ')}; many objectives: ${budgetText} evaluations, one: 10000 in four variables`,
);
for (const name of names.split(',')) {
  if (name in MANY && (only === undefined || only.split(',').includes('auto'))) {
    const shares = [];
    for (const seed of seeds) shares.push(100 * (await shareOfStrategy(MANY[name], seed)));
    const least = Math.min(...shares).toFixed(2);
    console.log(name.padEnd(12), 'auto'.padEnd(28), `${median(shares).toFixed(2)} % (least ${least} %)`);
  }
  for (const method of methods) {
    const problem = MANY[name];
    if (problem !== undefined && method.traits.objectives === 'many') {
      const shares = seeds.map((seed) => 100 * share(method, problem, seed));
      const least = Math.min(...shares).toFixed(2);
      console.log(
        name.padEnd(12),
        method.name.padEnd(28),
        `${median(shares).toFixed(2)} % (least ${least} %)`,
      );
    } else if (name in ONE && method.traits.objectives === 'one') {
      console.log(name.padEnd(12), method.name.padEnd(28), `${successes(method, name)} of ${seeds.length}`);
    }
  }
}
