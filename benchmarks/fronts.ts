/**
 * How good the front of a starter study is at its default budget: its hypervolume over that of a run with many times
 * the evaluations, both within the range of brightness that the study asks for and against one corner.
 *
 *   npm run bench:fronts [-- studies] [factor] [workers]     e.g. resonant,chirped,two-colour 20 2
 */
import { mkdtempSync, readFileSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { basename, join } from 'node:path';
import { readStudy } from '../cli/study/index.js';
import { hypervolume } from '../optimizers/index.js';
import { loadLine, optimize, studyPath } from './optimize-run.js';
import { machineLine } from './timing.js';

/** Share of the long run's hypervolume that the default budget has to reach. */
const WANTED = 0.995;

const names = (process.argv[2] ?? 'resonant,chirped,two-colour').split(',');
const factor = Number(process.argv[3] ?? 20);
const workers = process.argv[4] ?? '2';
const root = mkdtempSync(join(tmpdir(), 'pulsewright-fronts-'));

/** The study with that many times its evaluations. */
function longStudy(path: string): string {
  const text = readFileSync(path, 'utf8');
  const longer = text.replace(
    /evaluations: (\d+)/,
    (_, count: string) => `evaluations: ${Number(count) * factor}`,
  );
  if (longer === text) throw new Error(`${path}: has no number of evaluations to raise`);
  const copy = join(root, basename(path));
  writeFileSync(copy, longer);
  return copy;
}

/** Impurity and −brightness of every point of an archive. */
function objectivesOf(out: string, impurity: string, brightness: string): number[][] {
  const lines = readFileSync(join(out, 'archive.csv'), 'utf8')
    .split('\n')
    .filter((line) => line !== '' && !line.startsWith('#'));
  const [head, ...rows] = lines.map((line) => line.split(','));
  const [i, b] = [`collected.${impurity}`, `signal.${brightness}`].map((name) => head.indexOf(name));
  return rows.map((row) => [Number(row[i]), -Number(row[b])]);
}

async function run(study: string, out: string): Promise<number> {
  const { code, wall } = await optimize(study, out, ['--workers', workers]);
  if (code !== 0 && code !== 1) throw new Error(`${study}: optimize ended with exit code ${code}`);
  return wall;
}

/** Share of the hypervolume, printed. */
async function compare(name: string): Promise<number> {
  const path = studyPath(name);
  const read = readStudy(readFileSync(path), path, []);
  if (read.kind === 'faults') throw new Error(`${path}: is no sound study`);
  const { goal, search } = read.study;
  const outs = [join(root, `${basename(path)}-short`), join(root, `${basename(path)}-long`)];
  const short = await run(path, outs[0]);
  const long = await run(longStudy(path), outs[1]);
  const [few, many] = outs.map((out) => objectivesOf(out, goal.impurity, goal.brightness));
  // The corner: the lowest level asked for, and the least impurity at the highest level that the long run reaches.
  const brightest = Math.max(...many.map(([, b]) => -b));
  const top = Math.min(goal.front.to ?? brightest, brightest);
  const corner = [
    Math.min(...many.filter(([, b]) => -b >= top).map(([i]) => i)),
    -(goal.front.from ?? Math.min(...many.map(([, b]) => -b))),
  ];
  const volumes = [few, many].map((points) => hypervolume(points, corner));
  const share = volumes[0] / volumes[1];
  const cells = [
    name,
    search.evaluations,
    search.evaluations * factor,
    ...volumes.map((volume) => volume.toExponential(4)),
    `${(100 * share).toFixed(2)} %`,
    `${short.toFixed(0)} s`,
    `${long.toFixed(0)} s`,
    loadLine(),
  ];
  console.log(`| ${cells.join(' | ')} |`);
  return share;
}

const head = [
  ...['study', 'evaluations', 'long run', 'hypervolume', 'of the long run', 'share'],
  ...['wall', 'long run', 'machine'],
];
console.log(`${machineLine()}, ${workers} workers\n`);
console.log(`| ${head.join(' | ')} |\n| ${head.map(() => '---').join(' | ')} |`);
let worst = 1;
for (const name of names) worst = Math.min(worst, await compare(name));
process.exitCode = worst >= WANTED ? 0 : 1;
