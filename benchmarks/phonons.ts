/**
 * Cost of every phonon method relative to the bare evaluation of the same emitter, by the reference propagator and by the
 * fast kernels, and of the hierarchy against its size. Built code, in turns, least and median processor time (which
 * background load does not stretch).
 *
 * Run: npm run build && npx tsx benchmarks/phonons.ts [rounds]     default 40 rounds
 */
import type { Design } from '../core/design.js';
import type { CountRequest } from '../core/kernels/count.js';
import { cascadeEmitter, design, tone, twoLevelEmitter } from '../test/support.js';
import { machineLine, markdownTable } from './timing.js';

/** From the built package: tsx would halve its speed. */
const built = '../dist/core';
const core = (await import(`${built}/index.js`)) as typeof import('../core/index.js');
const { countByReference } = (await import(
  `${built}/kernels/count.js`
)) as typeof import('../core/kernels/count.js');

const rounds = Number(process.argv[2] ?? 40);
const BATH = { coupling: 0.03, cutoff: 2.2, temperature: 4, method: 'exact' as const };
const FILTER = { kappa: 2 * Math.PI * 0.03, order: 3 };
let sink = 0;

interface Job {
  readonly name: string;
  readonly run: () => { readonly values: Readonly<Record<string, number>>; readonly steps: number };
  readonly times: number[];
  steps: number;
}

const job = (name: string, run: Job['run']): Job => ({ name, run, times: [], steps: 0 });

function processorTime(): number {
  const { user, system } = process.cpuUsage();
  return (user + system) / 1000;
}

/** Takes turns, so that background load meets all alike; the first rounds warm up. */
function interleave(jobs: readonly Job[], count: number): void {
  const warm = Math.ceil(count / 4);
  for (let round = 0; round < count + warm; round++) {
    for (const one of jobs) {
      const start = processorTime();
      const result = one.run();
      const time = processorTime() - start;
      sink += result.values['mean'];
      one.steps = result.steps;
      if (round >= warm) one.times.push(time);
    }
  }
}

function report(title: string, jobs: readonly Job[]): void {
  const least = jobs.map(({ times }) => Math.min(...times));
  const rows = jobs.map(({ name, times, steps }, i) => [
    name,
    `${least[i].toFixed(2)} ms`,
    `${[...times].sort((a, b) => a - b)[times.length >> 1].toFixed(2)} ms`,
    (least[i] / least[0]).toFixed(2),
    (least[i] / least[1]).toFixed(1),
    String(steps),
  ]);
  console.log(`\n${title}`);
  console.log(markdownTable(['', 'least', 'median', 'over reference', 'over fast', 'steps'], rows));
}

function requestOf(d: Design, filtered: boolean): CountRequest {
  const where = core.situation(d);
  return {
    scheme: where.scheme,
    dipoles: core.collectedDipoles(where.scheme, 'exciton', 'all'),
    drive: where.drive,
    frame: where.frame,
    shift: 0,
    thinning: null,
    filter: filtered ? { ...FILTER, center: -where.frame } : null,
    effort: { tolerance: 1e-10, parts: 1, nodes: 1, series: 'estimate' },
  };
}

const bare = (request: CountRequest): Job[] => [
  job('bare, reference propagator', () => countByReference(request)),
  job('bare, fast kernel', () => core.countPhotons(request)),
];

function secondOrder(title: string, request: CountRequest, count = rounds): void {
  const jobs = [
    ...bare(request),
    job('weak-coupling', () => core.countWithPhonons(request, BATH, 'weak-coupling')),
    job('polaron', () => core.countWithPhonons(request, BATH, 'polaron')),
  ];
  interleave(jobs, count);
  report(title, jobs);
}

function hierarchy(
  title: string,
  request: CountRequest,
  sizes: readonly (readonly [number, number])[],
): void {
  const jobs = [
    ...bare(request),
    ...sizes.map(([terms, depth]) =>
      job(`exact, ${terms} terms, depth ${depth}`, () =>
        core.countWithHierarchy(request, BATH, { terms, depth }),
      ),
    ),
  ];
  interleave(jobs, Math.max(2, Math.ceil(rounds / 8)));
  report(title, jobs);
}

const resonant = design(twoLevelEmitter({ lifetime: 500 }), [tone({ fwhm: 10, area: Math.PI })]);
const chirped = design(twoLevelEmitter({ lifetime: 500 }), [tone({ fwhm: 2.5, area: 3 * Math.PI, gdd: 8 })]);
const pair = { lifetime: 320, biexcitonLifetime: 170, binding: 3.1, splitting: 0.012 };
const twoPhoton = design(cascadeEmitter(pair), [tone({ fwhm: 9, area: 5.4 * Math.PI })]);
const cascade = { ...twoPhoton, pulse: { ...twoPhoton.pulse, reference: 'two-photon' as const } };

console.log(machineLine());
const emitted = requestOf(resonant, false);
const filtered = requestOf(resonant, true);
const lines = requestOf(cascade, false);
secondOrder('two-level, π, 10 ps, emitted', emitted);
secondOrder('two-level, π, 10 ps, behind 30 GHz', filtered);
secondOrder('two-level, 3π, 2.5 ps, GDD 8 ps², emitted', requestOf(chirped, false));
secondOrder('cascade, two-photon, 9 ps, emitted', lines, Math.ceil(rounds / 4));
hierarchy('two-level, π, 10 ps, emitted', emitted, [
  [5, 3],
  [7, 1],
  [7, 2],
  [7, 3],
  [7, 4],
]);
hierarchy('two-level, π, 10 ps, behind 30 GHz', filtered, [
  [5, 3],
  [7, 3],
]);
hierarchy('cascade, two-photon, 9 ps, emitted', lines, [
  [5, 4],
  [7, 3],
  [7, 4],
]);
if (!Number.isFinite(sink)) throw new Error('a benchmark gave no figures');
