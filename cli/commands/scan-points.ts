import { type Accuracy, type Design, emitterModel } from '../../core/index.js';
import {
  type FiguresInput,
  type FiguresResult,
  runTasks,
  type Task,
  taskPool,
} from '../../optimizers/index.js';
import { progressBar } from '../report/progress.js';
import { type Scan, valuesAt } from '../report/scan-report.js';
import { type FigureShape, figurePaths } from '../run/columns.js';
import { packageVersion } from '../run/package.js';
import { UserError } from '../run/user-error.js';
import type { Override, Study } from '../study/index.js';
import { nearestName } from '../study/nearest.js';
import type { Arguments, Context } from './contract.js';
import { fixedDesign } from './fixed-design.js';
import { assignments } from './options.js';
import { type Over, parseOver } from './over.js';
import { loadStudy, type StudyFile, soundStudy } from './study-file.js';

const MOST_POINTS = 1_000_000;

export interface Plan {
  readonly file: StudyFile;
  readonly sets: readonly Override[];
  readonly overs: readonly Over[];
  /** Whether all parameters step together, so that the scan is one line through them. */
  readonly together: boolean;
  readonly accuracy: Accuracy;
}

export async function planOf(args: Arguments): Promise<Plan> {
  const sets = assignments(args['set'] as unknown[]);
  const file = await loadStudy(String(args['study']), sets);
  const texts = args['over'] as string[];
  const { tones } = file.study.design.pulse;
  const together = args['together'] === true;
  const overs = texts.map((text, i) => parseOver(text, tones.length, together && i > 0));
  if (!together && overs.length > 2) {
    throw new UserError(`--over: given ${overs.length} times; needs one or two, or --together`);
  }
  const twice = overs.find((o, i) => overs.findIndex((p) => p.path === o.path) < i);
  if (twice) throw new UserError(`--over: ${twice.path} is given twice`);
  const odd = together ? overs.find(({ values }) => values.length !== overs[0].values.length) : undefined;
  if (odd) {
    const [counts, first] = [odd.values.length, overs[0].values.length];
    throw new UserError(
      `--together: got ${counts} values of ${odd.path}; needs ${first}, as many as of the first`,
    );
  }
  const count = pointCount({ overs, together });
  if (count > MOST_POINTS) throw new UserError(`--over: ${count} points; allowed are ${MOST_POINTS}`);
  return { file, sets, overs, together, accuracy: args['accuracy'] as Accuracy };
}

const pointCount = ({ overs, together }: Pick<Plan, 'overs' | 'together'>): number =>
  together ? overs[0].values.length : overs.reduce((product, { values }) => product * values.length, 1);

/** The study at one point of the scan, read anew: ties, limits and rules hold at each. */
function studyAt({ file, sets, overs, together }: Plan, index: number): StudyFile {
  const axes = overs.map((o) => ({ ...o, values: o.values.map((_, i) => i) }));
  const indices = valuesAt({ axes, together }, index);
  const overrides = [...sets, ...overs.map((o, k) => ({ path: o.path, value: o.texts[indices[k]] }))];
  return { ...file, ...soundStudy(file.bytes, file.path, overrides) };
}

function shownFigures(asked: readonly string[], study: Study, shape: FigureShape, axes: number): string[] {
  const known = figurePaths(shape);
  for (const name of asked) {
    if (known.includes(name)) continue;
    const near = nearestName(name, known);
    throw new UserError(
      `--figure: got ${name}; needs the path of a figure${near === null ? `, such as ${known[0]}` : `; nearest: ${near}`}`,
    );
  }
  if (asked.length > 0) return [...new Set(asked)];
  const impurity = `collected.${study.goal.impurity}`;
  return axes === 2
    ? [impurity]
    : [...new Set([`signal.${study.goal.brightness}`, impurity, 'collected.g2'])];
}

function shapeFor({ emitter, collection, laser, drift }: Design): FigureShape {
  const { levels } = emitterModel(emitter.model).scheme(emitter);
  return {
    filtered: collection.filter !== null,
    drift: drift !== null,
    energies: (laser?.piPulse ?? null) !== null,
    quantile: drift !== null && drift.quantile !== null,
    levels: levels.map((l) => l.name),
  };
}

/** Points of a task: some milliseconds of work at least. */
const CHUNK = 4;

/** Time that is tried without worker threads, unless asked otherwise, and the work left that is worth loading them, ms. */
const TRIAL = 300;
const WORTH_THREADS = 1500;

/** Reads the study at one point after the other, while the workers evaluate earlier ones; the first one alone. */
function* scanTasks(plan: Plan, total: number): Generator<Task> {
  for (let begin = 0, size = 1; begin < total; begin += size, size = CHUNK) {
    const indices = Array.from({ length: Math.min(size, total - begin) }, (_, i) => begin + i);
    const designs = indices.map((index) => studyAt(plan, index).study.design);
    const input: FiguresInput = { designs, accuracy: plan.accuracy };
    yield { id: `points from ${begin + 1}`, kind: 'figures', index: begin, budget: 1, input };
  }
}

/** Items of an iterator as long as a condition holds; the others stay in it. */
function* takeWhile<T>(items: Iterator<T>, condition: () => boolean): Generator<T> {
  while (condition()) {
    const next = items.next();
    if (next.done === true) return;
    yield next.value;
  }
}

/** What the points gave, in their order; null when the signal was aborted before all were done. */
async function evaluatePoints(
  plan: Plan,
  spec: Study,
  { workers, signal, trial = TRIAL }: ScanEffort,
  context: Context,
): Promise<FiguresResult[] | null> {
  const total = pointCount(plan);
  const progress = progressBar(context.streams.stderr, 'points');
  const results = new Array<FiguresResult>(total);
  let done = 0;
  const show = () => progress.update({ stage: 'scan', done, total, best: '' });
  const run = async (threads: number, tasks: Iterable<Task>) => {
    const pool = taskPool(spec, threads);
    try {
      await runTasks(pool, tasks, signal, ({ summary }, { index }) => {
        for (const [i, result] of (summary as readonly FiguresResult[]).entries()) {
          results[index + i] = result;
          done++;
        }
        show();
      });
    } finally {
      await pool.close();
    }
  };
  try {
    show();
    const tasks = scanTasks(plan, total);
    const began = performance.now();
    await run(
      1,
      takeWhile(tasks, () => workers === 1 || performance.now() - began < trial),
    );
    const left = ((performance.now() - began) * (total - done)) / done;
    if (done < total && !signal.aborted) await run(left > WORTH_THREADS ? workers : 1, tasks);
  } finally {
    progress.stop();
  }
  return done < total ? null : results;
}

/** How a scan is carried out; its result does not depend on it. */
export interface ScanEffort {
  readonly workers: number;
  readonly signal: AbortSignal;
  /** Time that is tried without threads, ms. */
  readonly trial?: number;
}

/** @returns null when the signal was aborted before all points were done */
export async function scanOf(
  plan: Plan,
  figures: readonly string[],
  effort: ScanEffort,
  context: Context,
): Promise<Scan | null> {
  const first = studyAt(plan, 0);
  const shape = shapeFor(fixedDesign(first, 'scan'));
  const shown = shownFigures(figures, first.study, shape, plan.together ? 1 : plan.overs.length);
  const results = await evaluatePoints(plan, first.study, effort, context);
  if (results === null) return null;
  const missing = results.findIndex(({ failure }) => failure !== null);
  if (missing >= 0) context.note(`no figures at point ${missing + 1}: ${results[missing].failure}`);
  const points = results.map((result) => result.figures);
  if (points.every((point) => point === null)) throw new UserError('no point of the scan could be evaluated');
  return {
    title: first.study.title || plan.file.path,
    hash: first.hash,
    version: packageVersion(),
    accuracy: plan.accuracy,
    axes: plan.overs,
    together: plan.together,
    ...{ points, shape, shown },
  };
}
