/**
 * Evaluations per second of the built package, emitted and filtered, beside a straightforward SciPy script (LSODA at
 * the accuracy that is promised here), interleaved in one session; then one `search` on two worker threads against
 * one. Prints markdown.
 *
 *   npm run bench:propagation [-- rounds [python]]        default 5 rounds, /usr/bin/python3
 */
import { performance } from 'node:perf_hooks';
import { type Design, evaluate } from 'pulsewright/core';
import { type ProblemSpec, search } from 'pulsewright/optimizers';
import { CASES } from './cases.js';
import { Peer, type PeerFigures, type Prepared } from './peers/peer.js';
import { machineLine, markdownTable, seconds, sink, summarise, timeOnce } from './timing.js';

const rounds = Number(process.argv[2] ?? 5);
const python = process.argv[3] ?? '/usr/bin/python3';

/** Error of an evaluation against the peer's tight run: p_0 and p_1 absolute, the rest relative. */
function errorOf(design: Design, exact: PeerFigures): string {
  const figures = evaluate(design, 'search');
  const found = figures.filtered ?? figures.emitted;
  const { p, multiphoton } = found;
  if (p === null || multiphoton === null) return 'p null';
  const absolute = Math.max(...[0, 1].map((n) => Math.abs(p[n] - exact.p[n])));
  const relative = Math.max(
    Math.abs(found.mean / exact.mean - 1),
    Math.abs((found.g2 as number) / (exact.factorial2 / exact.mean ** 2) - 1),
    Math.abs(multiphoton / exact.multiphoton - 1),
  );
  return `${absolute.toExponential(0)} / ${relative.toExponential(0)}`;
}

interface Entry {
  readonly name: string;
  readonly design: Design;
  readonly peer: Prepared;
  readonly ours: number[];
  readonly theirs: number[];
}

async function propagation(peer: Peer): Promise<void> {
  const entries: Entry[] = [];
  for (const { name, design } of CASES) {
    entries.push({ name, design, peer: await peer.prepare(design, 4), ours: [], theirs: [] });
    timeOnce(() => evaluate(design, 'search').emitted.mean, 0.3);
  }
  for (let round = 0; round < rounds; round++) {
    for (const entry of entries) {
      entry.ours.push(timeOnce(() => evaluate(entry.design, 'search').emitted.mean, 0.1));
      entry.theirs.push(await peer.run(entry.peer.key));
    }
  }
  const rows = entries.map(({ name, design, peer: prepared, ours, theirs }) => {
    const us = summarise(ours);
    const them = summarise(theirs);
    return [
      name,
      seconds(us.least),
      (1 / us.least).toPrecision(3),
      us.spread.toFixed(2),
      seconds(them.least),
      them.spread.toFixed(2),
      `${(them.least / us.least).toPrecision(3)} ×`,
      errorOf(design, prepared.exact),
      `${prepared.error.p.toExponential(0)} / ${prepared.error.relative.toExponential(0)}`,
    ];
  });
  const head = [
    'case',
    'ours',
    'per second',
    'spread',
    'SciPy LSODA',
    'spread',
    'ratio',
    'our error',
    'its error',
  ];
  console.log(markdownTable(head, rows));
  console.log(
    '\nTimes: minimum; spread: median over minimum. Errors: largest of p_0, p_1 / largest relative.\n',
  );
}

/** A search large enough that starting a thread does not matter. */
function problem(): ProblemSpec {
  const { design } = CASES[0];
  return {
    design,
    parameters: [
      { kind: 'range', path: 'pulse.tones.0.fwhm', from: 2, to: 40, scale: 'log' },
      { kind: 'range', path: 'pulse.tones.0.area', from: 0.5 * Math.PI, to: 3 * Math.PI, scale: 'linear' },
      { kind: 'range', path: 'pulse.tones.0.gdd', from: -40, to: 40, scale: 'linear' },
    ],
    ties: [],
    goal: {
      impurity: 'multiphoton',
      brightness: 'single',
      atLeast: 0.9,
      front: { from: 0.5, to: 0.98, points: 25 },
      third: null,
      limits: [],
    },
    search: { evaluations: 6000, seed: 7, method: 'auto' },
  };
}

async function searchSeconds(workers: number): Promise<{ time: number; evaluations: number }> {
  const began = performance.now();
  const outcome = await search(problem(), { workers, completed: new Map(), onTask: () => {} });
  return { time: (performance.now() - began) / 1000, evaluations: outcome.evaluations };
}

async function workers(): Promise<void> {
  const times: Record<number, number[]> = { 1: [], 2: [] };
  let evaluations = 0;
  for (let round = 0; round < Math.min(rounds, 3); round++) {
    for (const count of [1, 2]) {
      const run = await searchSeconds(count);
      times[count].push(run.time);
      evaluations = run.evaluations;
    }
  }
  const [one, two] = [summarise(times[1]), summarise(times[2])];
  const rows = [
    ['1', seconds(one.least), one.spread.toFixed(2), '1 ×'],
    ['2', seconds(two.least), two.spread.toFixed(2), `${(one.least / two.least).toPrecision(3)} ×`],
  ];
  console.log(markdownTable(['workers', `${evaluations} evaluations`, 'spread', 'speed'], rows));
}

console.log(`${machineLine()}; ${rounds} rounds, interleaved\n`);
const peer = new Peer(python);
await propagation(peer);
peer.close();
await workers();
if (!Number.isFinite(sink.total)) throw new Error('an evaluation gave no number');
