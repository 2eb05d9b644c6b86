/**
 * The two-photon π pulse of the cascade by the built package and by peers/cascade.c, interleaved: least time of one count
 * each, error estimate included, and their ratio. What does not depend on the pulse is handed to the C program.
 *
 *   npm run build && node benchmarks/peers/cascade.mjs [rounds [seconds]]
 */
import { spawn, spawnSync } from 'node:child_process';
import { mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { performance } from 'node:perf_hooks';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import { collectedDipoles } from '../../dist/core/emitter/generator.js';
import { levels, usedComponents } from '../../dist/core/kernels/fast/levels/kernel.js';
import { problemOf } from '../../dist/core/kernels/fast/levels/run.js';
import { UnitaryTable } from '../../dist/core/kernels/fast/levels/unitary-table.js';
import { smoothSpans } from '../../dist/core/kernels/fast/spans.js';
import { situation } from '../../dist/core/situation.js';

const FIGURES = ['p0', 'p1', 'p2', 'p3', 'multiphoton', 'mean', 'factorial2'];

const tone = {
  shape: 'gaussian',
  fwhm: 10,
  area: 4.8186 * Math.PI,
  detuning: 0,
  gdd: 0,
  tod: 0,
  delay: 0,
  phase: 0,
  polarization: 0,
};
const design = {
  emitter: {
    model: 'cascade',
    wavelength: 0.93,
    lifetime: 500,
    biexcitonLifetime: 250,
    binding: 2,
    splitting: 0,
    dephasing: 0,
    phonons: null,
  },
  pulse: { reference: 'two-photon', tones: [tone] },
  collection: { line: 'exciton', polarization: 'all', efficiency: 1, filter: null },
  laser: null,
  drift: null,
};

function requestOf() {
  const { scheme, drive, frame } = situation(design);
  return {
    scheme,
    dipoles: collectedDipoles(scheme, 'exciton', 'all'),
    drive,
    frame,
    shift: 0,
    thinning: null,
    filter: null,
    effort: { tolerance: 1e-10, parts: 1, nodes: 1, series: 'estimate' },
  };
}

/** Everything the C program reads before it is timed. `base` is a sixth of the table's steps. */
function numbersFor(request, base) {
  const problem = problemOf(request, smoothSpans(request.drive), usedComponents(request));
  const { layout, spans, ladder, sources, energies } = problem;
  const [span] = spans;
  const [source] = sources;
  const [gaussian] = source.tones;
  const table = new UnitaryTable({ request, span, ladder, source, energies }, 6 * base);
  const { first, second } = table.falls(0);
  const block = layout.components.find((c) => c.coordinates.length === 9);
  const out = [span.start, span.end, gaussian.amplitude, gaussian.fall, gaussian.delay, first / table.h];
  out.push(second / table.h, base, layout.length, block.offsets.length, ...block.offsets);
  out.push(layout.seeds.length, ...layout.seeds, FIGURES.length);
  for (const name of FIGURES) out.push(...layout.effects.find((e) => e.name === name).row);
  const triples = ({ row, col, value }) => {
    out.push(value.length);
    for (let k = 0; k < value.length; k++) out.push(row[k], col[k], value[k]);
  };
  for (const parts of [3, 2, 1]) {
    layout.kick.set(parts * table.h);
    const { start, col, value, size } = layout.kick.rows;
    const row = new Int32Array(col.length);
    for (let r = 0; r < size; r++) row.fill(r, start[r], start[r + 1]);
    const off = [...row.keys()].filter((k) => row[k] !== col[k]);
    const diagonal = new Float64Array(size);
    for (let k = 0; k < row.length; k++) if (row[k] === col[k]) diagonal[row[k]] = value[k];
    out.push(...diagonal);
    triples({ row: off.map((k) => row[k]), col: off.map((k) => col[k]), value: off.map((k) => value[k]) });
  }
  triples(layout.corrections[ladder.component][0]);
  return out.map((x) => (Number.isInteger(x) ? String(x) : x.toPrecision(17))).join(' ');
}

function build() {
  const program = join(mkdtempSync(join(tmpdir(), 'kernel-peer-')), 'cascade');
  const source = fileURLToPath(new URL('./cascade.c', import.meta.url));
  const built = spawnSync('gcc', ['-O3', '-march=native', '-o', program, source, '-lm'], {
    stdio: 'inherit',
  });
  if (built.status !== 0) throw new Error('gcc could not build benchmarks/peers/cascade.c');
  return program;
}

const rounds = Number(process.argv[2] ?? 7);
const duration = Number(process.argv[3] ?? 0.2);
const request = requestOf();
const found = levels.count(request, () => null);
// Of the first series' runs, twice, three and six times the base, the steps are eleven times it.
const base = Math.round(found.steps / 11);
const child = spawn(build(), []);
child.stdin.write(`${numbersFor(request, base)}\n`);
const lines = createInterface({ input: child.stdout })[Symbol.asyncIterator]();
let [ours, theirs, last] = [Number.POSITIVE_INFINITY, Number.POSITIVE_INFINITY, ''];
for (let round = 0; round < rounds; round++) {
  const until = performance.now() + 1000 * duration;
  while (performance.now() < until) {
    const began = performance.now();
    levels.count(request, () => null);
    ours = Math.min(ours, (performance.now() - began) / 1000);
  }
  child.stdin.write(`${duration}\n`);
  last = (await lines.next()).value;
  theirs = Math.min(theirs, Number(last.split(' ')[0]));
}
child.stdin.end();
const micro = (s) => `${(1e6 * s).toPrecision(3)} µs`;
console.log(`steps ${found.steps}, error estimate ${found.localErrors.toExponential(1)}`);
console.log(`package ${micro(ours)}, C ${micro(theirs)}, ratio ${(ours / theirs).toFixed(2)}`);
console.log(`C: seconds, error, p0, P(n≥2), mean, factorial2: ${last}`);
console.log(`package: ${['p0', 'multiphoton', 'mean', 'factorial2'].map((n) => found.values[n]).join(' ')}`);
