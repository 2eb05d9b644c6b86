/**
 * The fast kernels against the reference propagator and, for two levels emitted, against the same formulation in scalar
 * C (peers/two-level.c, built here with gcc -O3 -march=native): one count of each case, error estimate included,
 * interleaved; minima, spread and ratios. Prints markdown.
 *
 *   npm run bench:kernels [-- rounds [seconds]]        default 7 rounds of 0.05 s
 */
import { type ChildProcessWithoutNullStreams, spawn, spawnSync } from 'node:child_process';
import { mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import type { Design } from '../core/index.js';
import { collectedDipoles } from '../dist/core/emitter/generator.js';
import { type CountRequest, countByReference, countPhotons } from '../dist/core/kernels/count.js';
import { disagreement } from '../dist/core/kernels/fast/estimate.js';
import { smoothSpans } from '../dist/core/kernels/fast/spans.js';
import { firstSteps } from '../dist/core/kernels/fast/step-rule.js';
import { asTwoLevel } from '../dist/core/kernels/fast/two-level.js';
import { situation } from '../dist/core/sample.js';
import { HBAR, RAD_PER_PS_PER_GHZ } from '../dist/core/units/constants.js';
import { CASES } from './cases.js';
import { machineLine, markdownTable, seconds, sink, summarise, timeOnce } from './timing.js';

const rounds = Number(process.argv[2] ?? 7);
const least = Number(process.argv[3] ?? 0.05);

function requestOf(design: Design): CountRequest {
  const { scheme, drive, frame, line } = situation(design);
  const { filter, polarization } = design.collection;
  return {
    scheme,
    dipoles: collectedDipoles(scheme, 'exciton', polarization === 'h' ? 0 : 'all'),
    drive,
    frame,
    shift: 0,
    thinning: null,
    filter: filter && {
      kappa: filter.fwhm * RAD_PER_PS_PER_GHZ,
      center: line + filter.center * RAD_PER_PS_PER_GHZ - frame,
      order: 3,
    },
    effort: { tolerance: 1e-10, parts: 1, nodes: 1, series: 'estimate' },
  };
}

/** A C process that times the two-level kernel on one case. */
class CPeer {
  readonly #child: ChildProcessWithoutNullStreams;
  readonly #lines: AsyncIterator<string>;

  constructor(program: string, request: CountRequest, design: Design) {
    const model = asTwoLevel(request);
    const spans = smoothSpans(request.drive);
    if (!model || !spans) throw new Error('the C peer knows smooth pulses on two levels only');
    const plan = firstSteps(request.drive, model, spans);
    const { breakpoints } = request.drive;
    const ends = [breakpoints[0], breakpoints[breakpoints.length - 1]];
    const tones = design.pulse.tones.flatMap((t) => {
      if (t.shape !== 'gaussian') throw new Error('the C peer knows Gaussian tones only');
      return [
        t.area,
        t.fwhm / (2 * Math.sqrt(Math.LN2)),
        t.gdd,
        t.detuning / HBAR - request.frame,
        t.delay,
        t.phase,
      ];
    });
    this.#child = spawn(program);
    this.#child.stderr.pipe(process.stderr);
    this.#lines = createInterface({ input: this.#child.stdout })[Symbol.asyncIterator]();
    const steps = plan.counts.reduce((a, b) => a + b, 0);
    const numbers = [model.decay, model.dephasing, model.energy, ...ends, steps, plan.follow ? 1 : 0];
    this.#child.stdin.write(`${[...numbers, design.pulse.tones.length, ...tones].join(' ')}\n`);
  }

  async time(): Promise<number> {
    this.#child.stdin.write(`${least}\n`);
    const { value, done } = await this.#lines.next();
    if (done) throw new Error('the C peer ended');
    const [elapsed, total] = String(value).split(' ').map(Number);
    if (!(total > 0)) throw new Error('the C peer did not reach its accuracy');
    return elapsed;
  }

  close(): void {
    this.#child.stdin.end();
  }
}

function buildPeer(): string | null {
  const source = fileURLToPath(new URL('./peers/two-level.c', import.meta.url));
  const program = join(mkdtempSync(join(tmpdir(), 'kernel-peer-')), 'two-level');
  const built = spawnSync('gcc', ['-O3', '-march=native', '-o', program, source, '-lm'], {
    stdio: 'inherit',
  });
  return built.status === 0 ? program : null;
}

const program = buildPeer();
const entries = CASES.map(({ name, design }) => {
  const request = requestOf(design);
  const inC = program && !request.filter && asTwoLevel(request) ? new CPeer(program, request, design) : null;
  return { name, request, inC, fast: [] as number[], reference: [] as number[], c: [] as number[] };
});
for (const { request } of entries) timeOnce(() => countPhotons(request).steps, 0.3);
for (let round = 0; round < rounds; round++) {
  for (const { request, inC, fast, reference, c } of entries) {
    fast.push(timeOnce(() => countPhotons(request).steps, least));
    if (inC) c.push(await inC.time());
    reference.push(timeOnce(() => countByReference(request).steps, least));
  }
}
const rows = entries.map(({ name, request, inC, fast, reference, c }) => {
  inC?.close();
  const [us, them] = [summarise(fast), summarise(reference)];
  const peer = c.length > 0 ? summarise(c) : null;
  const found = countPhotons(request);
  const exact = countByReference({ ...request, effort: { ...request.effort, tolerance: 1e-12 } });
  const values = Object.fromEntries(Object.keys(found.values).map((k) => [k, exact.values[k]]));
  return [
    name,
    seconds(us.least),
    us.spread.toFixed(2),
    peer ? seconds(peer.least) : '–',
    peer ? (us.least / peer.least).toFixed(2) : '–',
    seconds(them.least),
    (them.least / us.least).toPrecision(3),
    String(found.steps),
    (disagreement(found.values, values) / 1e-9).toPrecision(1),
  ];
});
console.log(`${machineLine()}; ${rounds} rounds, minima; spread = median / minimum\n`);
console.log(
  markdownTable(
    ['case', 'fast', 'spread', 'C', 'fast / C', 'reference', 'reference / fast', 'steps', 'error / promise'],
    rows,
  ),
);
console.log(`\n(sink ${sink.total})`);
