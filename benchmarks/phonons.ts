/**
 * Cost of every phonon method relative to the bare evaluation by the reference propagator, and of the hierarchy against
 * depth. Interleaved, minima and spread, on the machine named in the first line.
 *
 * Run: npx tsx benchmarks/phonons.ts [rounds]
 */
import { cpus } from 'node:os';
import { type CountRequest, countByReference } from '../core/kernels/count.js';
import { countWithPhonons } from '../core/phonons/count.js';
import { countWithHierarchy } from '../core/phonons/hierarchy-count.js';
import { cascadeRequest, phonons, twoLevelRequest } from '../test/core/phonons/support.js';

const rounds = Number(process.argv[2] ?? 15);
const bath = phonons(4);
let sink = 0;

interface Timed {
  readonly name: string;
  readonly run: () => { readonly values: Readonly<Record<string, number>>; readonly steps: number };
  readonly times: number[];
  steps: number;
}

/** Takes turns, so that background load meets all alike; the first round warms up. */
function interleave(jobs: readonly Timed[], count: number): void {
  for (let round = 0; round <= count; round++) {
    for (const job of jobs) {
      const start = performance.now();
      const result = job.run();
      const time = performance.now() - start;
      sink += result.values['mean'];
      job.steps = result.steps;
      if (round > 0) job.times.push(time);
    }
  }
}

function report(title: string, jobs: readonly Timed[]): void {
  console.log(`\n${title}`);
  const base = Math.min(...jobs[0].times);
  for (const { name, times, steps } of jobs) {
    const least = Math.min(...times);
    const median = [...times].sort((a, b) => a - b)[times.length >> 1];
    console.log(
      `  ${name.padEnd(28)} ${least.toFixed(2).padStart(9)} ms (median ${median.toFixed(2)})  ${(least / base).toFixed(1).padStart(7)} x  ${steps} steps`,
    );
  }
}

const job = (name: string, run: Timed['run']): Timed => ({ name, run, times: [], steps: 0 });

function secondOrder(title: string, request: CountRequest): void {
  const jobs = [
    job('bare, reference propagator', () => countByReference(request)),
    job('weak-coupling', () => countWithPhonons(request, bath, 'weak-coupling')),
    job('polaron', () => countWithPhonons(request, bath, 'polaron')),
  ];
  interleave(jobs, rounds);
  report(title, jobs);
}

function hierarchy(
  title: string,
  request: CountRequest,
  sizes: readonly (readonly [number, number])[],
): void {
  const jobs = [
    job('bare, reference propagator', () => countByReference(request)),
    ...sizes.map(([terms, depth]) =>
      job(`exact, ${terms} terms, depth ${depth}`, () => countWithHierarchy(request, bath, { terms, depth })),
    ),
  ];
  interleave(jobs, Math.max(2, Math.ceil(rounds / 5)));
  report(title, jobs);
}

const filter = { kappa: 2 * Math.PI * 0.03, center: 0, order: 3 };
const pulse = [{ fwhm: 10 }];
console.log(`${cpus().length} × ${cpus()[0].model}, Node ${process.version}`);
secondOrder('two-level, π, 10 ps, emitted', twoLevelRequest(pulse, 500));
secondOrder('two-level, π, 10 ps, behind 30 GHz', twoLevelRequest(pulse, 500, { filter }));
secondOrder('cascade, two-photon, 9 ps, emitted', cascadeRequest());
hierarchy('two-level, π, 10 ps, emitted', twoLevelRequest(pulse, 500), [
  [7, 1],
  [7, 2],
  [7, 3],
  [7, 4],
]);
hierarchy('two-level, π, 10 ps, behind 30 GHz', twoLevelRequest(pulse, 500, { filter }), [[7, 3]]);
hierarchy('cascade, two-photon, 9 ps, emitted', cascadeRequest(), [
  [7, 3],
  [7, 4],
]);
if (!Number.isFinite(sink)) throw new Error('a benchmark gave no figures');
