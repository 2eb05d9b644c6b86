/**
 * The fast kernels against the reference propagator and, for two levels emitted, against the same formulation in scalar
 * C (peers/two-level.c, built here with gcc -O3 -march=native): one count of each case, error estimate included, and one
 * with the derivatives of two figures by the whole drive; interleaved; minima, spread and ratios. Prints markdown.
 *
 *   npm run build && npm run bench:kernels [-- rounds [seconds]]        default 7 rounds of 0.1 s
 */
import { type ChildProcessWithoutNullStreams, spawn, spawnSync } from 'node:child_process';
import { mkdtempSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import type { Design } from '../core/index.js';
import type { PhaseFrame } from '../core/kernels/fast/bloch/frame.js';
import { disagreement } from '../core/kernels/fast/estimate.js';
import type { TwoLevel } from '../core/kernels/fast/two-level.js';
import type { GaussianTone } from '../core/pulse/gaussians.js';
import { CASES } from './cases.js';
import { machineLine, markdownTable, seconds, summarise } from './timing.js';

const rounds = Number(process.argv[2] ?? 7);
const least = Number(process.argv[3] ?? 0.1);

/** A process that answers line by line. */
class LineProcess {
  readonly #child: ChildProcessWithoutNullStreams;
  readonly #lines: AsyncIterator<string>;

  constructor(program: string, args: readonly string[]) {
    this.#child = spawn(program, args);
    this.#child.stderr.pipe(process.stderr);
    this.#lines = createInterface({ input: this.#child.stdout })[Symbol.asyncIterator]();
  }

  tell(line: string): void {
    this.#child.stdin.write(`${line}\n`);
  }

  async ask(line: string): Promise<string> {
    this.tell(line);
    const { value, done } = await this.#lines.next();
    if (done) throw new Error(`${this.#child.spawnfile} ended`);
    return String(value);
  }

  close(): void {
    this.#child.stdin.end();
  }
}

interface Plan {
  readonly model: TwoLevel;
  readonly start: number;
  readonly end: number;
  readonly steps: number;
  readonly peakRabi: number;
  readonly time: number;
  readonly resonant: boolean;
  readonly frame: PhaseFrame;
  readonly tones: readonly GaussianTone[];
}

interface Answer {
  /** Seconds; null where no kernel has derivatives. */
  readonly elapsed: number | null;
  readonly steps: number;
  readonly values: Readonly<Record<string, number>>;
  readonly plan: Plan | null;
}

/** Moments behind a filter. */
const ORDER = 3;

const counter = new LineProcess(process.execPath, [
  fileURLToPath(new URL('./peers/counter.mjs', import.meta.url)),
]);

async function count(
  kernel: 'fast' | 'reference' | 'gradient',
  design: Design,
  duration: number,
  tolerance = 1e-10,
): Promise<Answer> {
  const request = { design, order: ORDER, kernel, seconds: duration, tolerance };
  return JSON.parse(await counter.ask(JSON.stringify(request))) as Answer;
}

/** The C program on one case, started from the same steps in the same frame. */
function startPeer(program: string, plan: Plan): LineProcess {
  const { model, frame } = plan;
  const tones = plan.tones.flatMap((t) => [t.amplitude, t.fall, t.phase, t.rate, t.chirp, t.delay]);
  const numbers = [model.decay, model.dephasing, model.energy, plan.start, plan.end, plan.steps];
  const rules = [plan.peakRabi, plan.time, plan.resonant ? 1 : 0, frame.origin, frame.rate, frame.chirp];
  const peer = new LineProcess(program, []);
  peer.tell([...numbers, ...rules, plan.tones.length, ...tones].join(' '));
  return peer;
}

async function timePeer(peer: LineProcess): Promise<number> {
  const [elapsed, total] = (await peer.ask(String(least))).split(' ').map(Number);
  if (!(total > 0)) throw new Error('the C peer did not reach its accuracy');
  return elapsed;
}

function buildPeer(): string {
  const source = fileURLToPath(new URL('./peers/two-level.c', import.meta.url));
  const program = join(mkdtempSync(join(tmpdir(), 'kernel-peer-')), 'two-level');
  const built = spawnSync('gcc', ['-O3', '-march=native', '-o', program, source, '-lm'], {
    stdio: 'inherit',
  });
  if (built.status !== 0) throw new Error('gcc could not build benchmarks/peers/two-level.c');
  return program;
}

const program = buildPeer();
const entries = [];
for (const { name, design } of CASES) {
  const { plan } = await count('fast', design, 0.3);
  await count('gradient', design, 0.3);
  const peer = plan ? startPeer(program, plan) : null;
  const times = {
    fast: [] as number[],
    gradient: [] as number[],
    reference: [] as number[],
    c: [] as number[],
  };
  entries.push({ name, design, peer, times });
}
for (let round = 0; round < rounds; round++) {
  for (const { design, peer, times } of entries) {
    for (const kernel of ['fast', 'gradient', 'reference'] as const) {
      const { elapsed } = await count(kernel, design, least);
      if (elapsed !== null) times[kernel].push(elapsed);
      if (kernel === 'fast' && peer) times.c.push(await timePeer(peer));
    }
  }
}
const rows: string[][] = [];
for (const { name, design, peer, times } of entries) {
  peer?.close();
  const found = await count('fast', design, 0);
  const exact = await count('reference', design, 0, 1e-12);
  const values = Object.fromEntries(Object.keys(found.values).map((k) => [k, exact.values[k]]));
  const [us, them] = [summarise(times.fast), summarise(times.reference)];
  const over = (list: readonly number[], digits: number): string =>
    list.length > 0 ? (summarise(list).least / us.least).toFixed(digits) : '–';
  const c = times.c.length > 0 ? summarise(times.c) : null;
  rows.push([
    name,
    seconds(us.least),
    us.spread.toFixed(2),
    c ? seconds(c.least) : '–',
    c ? (us.least / c.least).toFixed(2) : '–',
    over(times.gradient, 2),
    seconds(them.least),
    (them.least / us.least).toPrecision(3),
    String(found.steps),
    (disagreement(found.values, values) / 1e-9).toPrecision(1),
  ]);
}
counter.close();
console.log(`${machineLine()}; ${rounds} rounds, minima; spread = median / minimum\n`);
console.log(
  markdownTable(
    [
      'case',
      'fast',
      'spread',
      'C',
      'fast / C',
      'gradient / fast',
      'reference',
      'reference / fast',
      'steps',
      'error / promise',
    ],
    rows,
  ),
);
