/**
 * The exact phonon method against a SciPy script of the same hierarchy (peers/hierarchy.py), both at the same depth and
 * exponentials of the bath and at equal accuracy, in turns in one run, by processor time. Ours on built code.
 *
 * Run: npm run build && npx tsx benchmarks/phonon-peer.ts [rounds [python]]     default 5 rounds, /usr/bin/python3
 */
import { spawn } from 'node:child_process';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import { design, tone, twoLevelEmitter } from '../test/support.js';
import { machineLine, markdownTable, seconds, summarise } from './timing.js';

/** What is loaded from the built package: tsx would halve its speed. */
const built = '../dist/core/index.js';
const core = (await import(built)) as typeof import('../core/index.js');

const rounds = Number(process.argv[2] ?? 5);
const python = process.argv[3] ?? '/usr/bin/python3';
const BATH = { coupling: 0.03, cutoff: 2.2, temperature: 4 };
const LIFETIME = 500;
const FWHM = 10;
const SIZES = [
  { terms: 5, depth: 3 },
  { terms: 7, depth: 3 },
];
/** Relative error that either side may leave by its steps. */
const ACCURACY = 1e-6;

const script = fileURLToPath(new URL('./peers/hierarchy.py', import.meta.url));
const child = spawn(python, [script], {
  env: { ...process.env, OMP_NUM_THREADS: '1', OPENBLAS_NUM_THREADS: '1' },
});
child.stderr.pipe(process.stderr);
const lines = createInterface({ input: child.stdout })[Symbol.asyncIterator]();
async function ask<T>(request: unknown): Promise<T> {
  child.stdin.write(`${JSON.stringify(request)}\n`);
  const { value, done } = await lines.next();
  if (done) throw new Error('the SciPy peer ended');
  return JSON.parse(value) as T;
}

interface Prepared {
  readonly tolerance: number;
  readonly error: number;
  readonly operators: number;
  readonly figures: Readonly<Record<'mean' | 'p0' | 'p1' | 'multiphoton', number>>;
}

const where = core.situation(
  design(twoLevelEmitter({ lifetime: LIFETIME }), [tone({ fwhm: FWHM, area: Math.PI })]),
);
const request = {
  scheme: where.scheme,
  dipoles: core.collectedDipoles(where.scheme, 'exciton', 'all'),
  drive: where.drive,
  frame: where.frame,
  shift: 0,
  thinning: null,
  filter: null,
  effort: { tolerance: 1e-10, parts: 1, nodes: 1, series: 'estimate' as const },
};

console.log(machineLine());
const rows: string[][] = [];
for (const size of SIZES) {
  const { poles } = core.correlationFit(BATH, 'bath', size.terms);
  const peer = await ask<Prepared>({
    prepare: {
      fwhm: FWHM,
      area: Math.PI,
      lifetime: LIFETIME,
      shift: core.relaxationShift(BATH),
      depth: size.depth,
      poles: poles.map((p) => [p.re, p.im, ...p.amplitude, ...p.conjugate]),
      accuracy: ACCURACY,
    },
  });
  const own = core.countWithHierarchy(request, BATH, size).values;
  const names = ['mean', 'p1', 'multiphoton'] as const;
  const apart = Math.max(...names.map((n) => Math.abs(own[n] / peer.figures[n] - 1)));
  const ours: number[] = [];
  const theirs: number[] = [];
  for (let round = 0; round < rounds; round++) {
    for (let k = 0; k < 10; k++) {
      const began = process.cpuUsage();
      core.countWithHierarchy(request, BATH, size);
      const { user, system } = process.cpuUsage(began);
      ours.push((user + system) / 1e6);
    }
    theirs.push((await ask<{ seconds: number }>({ run: 1 })).seconds);
  }
  const [a, b] = [summarise(ours), summarise(theirs)];
  rows.push([
    `${size.terms} terms, depth ${size.depth}`,
    String(peer.operators),
    seconds(a.least),
    `${seconds(b.least)} (rtol ${peer.tolerance}, error ${peer.error.toExponential(0)})`,
    (b.least / a.least).toFixed(0),
    apart.toExponential(1),
  ]);
}
child.stdin.end();
console.log('two-level, resonant Gaussian π, 10 ps, 4 K, emitted statistics; least processor time');
console.log(markdownTable(['size', 'operators', 'ours', 'SciPy', 'ratio', 'figures apart'], rows));
