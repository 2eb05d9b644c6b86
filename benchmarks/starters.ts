/**
 * Runs starter studies, and one that begins with a race of solves, to their ends and proves that their tables do not
 * depend on how they were run: one, two and four workers, and a run that is killed at random moments and resumed, must
 * write the same bytes.
 *
 *   npm run bench:starters [-- studies]     names of starters or files, with commas; all when left out
 *
 * PULSEWRIGHT_KILLS sets the number of kills, 20 unless given.
 */
import { existsSync, mkdtempSync, readFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { stream } from '../core/index.js';
import { loadLine, optimize, starterNames, studyPath, tablesOf } from './optimize-run.js';
import { machineLine } from './timing.js';

/** Its five free parameters are enough for a race, see `raceBudget`. */
const RACE = 'benchmarks/studies/two-tones.yaml';
const WORKERS = ['1', '2', '4'];
const SEED = 2026;

const kills = Number(process.env['PULSEWRIGHT_KILLS'] ?? 20);
const names = process.argv[2]?.split(',') ?? [...starterNames(), RACE];

/** A run that is killed again and again while it goes on; gives how often that hit a run at work. */
async function killed(study: string, out: string, wall: number, index: number): Promise<number> {
  const random = stream(SEED, index);
  for (let k = 0; k < kills; k++) {
    const resume = existsSync(join(out, 'ledger.jsonl')) ? ['--resume'] : [];
    const flags = ['--workers', WORKERS[k % WORKERS.length], ...resume];
    // Mostly early in what is left, so that all kills find a run to kill.
    const after = 300 + random.next() * ((2 * wall * 1000) / kills);
    const { code } = await optimize(study, out, flags, [], after);
    if (code !== null) return k;
  }
  return kills;
}

interface Front {
  readonly points: readonly unknown[];
  readonly evaluations: number;
  readonly hypervolume: { readonly value: number };
  readonly stages: readonly { readonly name: string }[];
}

async function prove(name: string, index: number): Promise<boolean> {
  const root = mkdtempSync(join(tmpdir(), 'pulsewright-starters-'));
  const study = studyPath(name);
  const outs = WORKERS.map((workers) => join(root, workers));
  const runs = [];
  for (const [i, workers] of WORKERS.entries())
    runs.push(await optimize(study, outs[i], ['--workers', workers]));
  const broken = join(root, 'killed');
  const hits = await killed(study, broken, runs[1].wall, index);
  const last = await optimize(study, broken, ['--workers', '2', '--resume']);
  const expected = tablesOf(outs[0]);
  const [same, sameKilled] = [outs, [broken]].map((list) => list.every((out) => tablesOf(out) === expected));
  const front = JSON.parse(readFileSync(join(outs[0], 'front.json'), 'utf8')) as Front;
  // Levels out of reach (exit code 1) are the study's affair, not that of how it was run.
  const codes = [...runs, last].map(({ code }) => code);
  const sound = same && sameKilled && codes.every((code) => code === codes[0] && code !== null && code < 2);
  const cells = [
    name,
    front.points.length,
    front.hypervolume.value.toExponential(4),
    front.evaluations,
    front.stages.some((stage) => stage.name.startsWith('race')) ? 'yes' : 'no',
    ...runs.map(({ wall }) => `${wall.toFixed(0)} s`),
    same ? 'yes' : 'NO',
    hits,
    sameKilled ? 'yes' : 'NO',
    codes.join(' '),
    loadLine(),
  ];
  console.log(`| ${cells.join(' | ')} |`);
  return sound;
}

const head = [
  ...['study', 'points', 'hypervolume', 'evaluations', 'race'],
  ...WORKERS.map((workers) => `${workers} workers`),
  ...['same bytes', 'kills', 'same bytes after kills', 'exit codes', 'machine'],
];
console.log(`${machineLine()}\n\n| ${head.join(' | ')} |\n| ${head.map(() => '---').join(' | ')} |`);
let sound = true;
for (const [index, name] of names.entries()) sound = (await prove(name, index)) && sound;
process.exitCode = sound ? 0 : 1;
