/**
 * What worker threads gain, and what a run spends outside `evaluate`.
 *
 *   npm run bench:workers [-- studies] [rounds]     e.g. two-colour,chirped 2
 *
 * Studies are starters by name or files. Rounds are interleaved, times are minima; the load of the machine stands beside
 * them, since other processes take time from two threads twice as often as from one.
 */
import { mkdtempSync, readdirSync, readFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { type Ended, loadLine, optimize, studyPath, tablesOf } from './optimize-run.js';
import { partsOf } from './profile.js';
import { machineLine, markdownTable } from './timing.js';

const WORKERS = [1, 2, 4];

const names = (process.argv[2] ?? 'two-colour,chirped').split(',');
const rounds = Number(process.argv[3] ?? 1);
const root = mkdtempSync(join(tmpdir(), 'pulsewright-workers-'));
const two = (value: number) => value.toFixed(2);
let failures = 0;

/** The least wall time with the processor time of that run. */
const quickest = (runs: readonly Ended[]): Ended => runs.reduce((a, b) => (b.wall < a.wall ? b : a));

/** Two runs with one worker at the same time: what the machine gives two threads at best, with what else it does. */
async function ceiling(study: string, out: string): Promise<Ended> {
  const both = await Promise.all(
    ['a', 'b'].map((side) => optimize(study, `${out}-${side}`, ['--workers', '1'])),
  );
  const wall = Math.max(...both.map((run) => run.wall));
  const cpu = both.reduce((sum, run) => sum + (run.cpu ?? 0), 0);
  return { code: both[0].code, wall: wall / 2, cpu: cpu / 2 };
}

async function compare(name: string): Promise<string[][]> {
  const study = studyPath(name);
  const labels = [...WORKERS.map(String), 'two runs at once, half'];
  const runs = labels.map((): Ended[] => []);
  const loads: string[] = [];
  const tables: string[] = [];
  for (let round = 0; round < rounds; round++) {
    for (const [i, label] of labels.entries()) {
      const out = join(root, `${names.indexOf(name)}-${i}-${round}`);
      loads[i] = loadLine();
      if (i === WORKERS.length) runs[i].push(await ceiling(study, out));
      else {
        runs[i].push(await optimize(study, out, ['--workers', label]));
        tables.push(tablesOf(out));
      }
    }
  }
  const same = tables.every((text) => text === tables[0]);
  if (!same || runs.flat().some(({ code }) => code !== 0)) failures++;
  const one = quickest(runs[0]).wall;
  return labels.map((label, i) => {
    const { wall, cpu } = quickest(runs[i]);
    const share = cpu === null ? '' : two(cpu / wall);
    const cells = [name, label, two(wall), cpu === null ? '' : two(cpu), share, two(one / wall)];
    return [...cells, same ? 'yes' : 'NO', loads[i]];
  });
}

/** Where the time of one thread goes, by V8's sampling profiler. */
async function outside(name: string): Promise<string[]> {
  const profiles = join(root, `profile-${name.replaceAll('/', '_')}`);
  const options = ['--cpu-prof', `--cpu-prof-dir=${profiles}`];
  await optimize(studyPath(name), join(root, `profiled-${name}`), ['--workers', '1'], options);
  const [file] = readdirSync(profiles);
  const parts = partsOf(readFileSync(join(profiles, file), 'utf8'));
  const { evaluate, strategy, collector, command, idle } = parts;
  const percent = (part: number, whole: number) => `${((100 * part) / whole).toFixed(1)} %`;
  const search = evaluate + strategy;
  return [
    name,
    ...[evaluate, strategy, collector, command, idle].map(two),
    percent(strategy, search),
    percent(strategy + command + idle, search + command + idle),
    loadLine(),
  ];
}

console.log(`${machineLine()}\n`);
const rows = [];
for (const name of names) rows.push(...(await compare(name)));
console.log(
  markdownTable(
    ['study', 'workers', 'wall, s', 'processor, s', 'processors busy', 'gain', 'same bytes', 'before it'],
    rows,
  ),
);
console.log('\nSeconds of one thread, profiled:\n');
console.log(
  markdownTable(
    [
      'study',
      'evaluate',
      'strategy',
      'garbage collector',
      'command',
      'idle',
      'outside evaluate, of the search',
      'of the run',
      'after it',
    ],
    [await outside('resonant'), ...(names[0] === 'resonant' ? [] : [await outside(names[0])])],
  ),
);
process.exitCode = failures === 0 ? 0 : 1;
