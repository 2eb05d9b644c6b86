import { binCenter } from '../problem/space.js';
import type { SampleSummary } from '../tasks/sample.js';
import { type Knowledge, type Plan, split } from './contract.js';

/** Largest number of evaluations in a sampling task, and the smallest that is worth a task. */
const CHUNK = 50;
const LEAST = 5;
/** Tasks of a stage that keep several workers busy to its end. */
const TASKS = 8;

const chunks = (count: number): number =>
  Math.max(Math.ceil(count / CHUNK), Math.min(TASKS, Math.ceil(count / LEAST)));

/** Evaluates points of the unit cube, in tasks of a bounded size; never more than what is left of the budget. */
export function* samplePoints(
  known: Knowledge,
  name: string,
  points: readonly (readonly number[])[],
): Plan<SampleSummary['replies']> {
  const affordable = points.slice(0, known.left);
  if (affordable.length === 0) return [];
  const tasks = [];
  let begin = 0;
  for (const size of split(affordable.length, chunks(affordable.length))) {
    tasks.push(known.task(name, 'sample', size, { points: affordable.slice(begin, begin + size) }));
    begin += size;
  }
  const results = yield { name, tasks };
  return results.flatMap(({ summary }) => (summary as SampleSummary).replies);
}

/** Every combination of the lists, with `steps` even steps along each continuous coordinate; null when over `limit`. */
export function gridOf(categories: readonly number[], steps: number, limit: number): number[][] | null {
  const sizes = categories.map((count) => (count > 0 ? count : steps));
  if (sizes.reduce((product, size) => product * size, 1) > limit) return null;
  const along = (k: number, i: number) =>
    categories[k] > 0 ? binCenter(i, categories[k]) : steps > 1 ? i / (steps - 1) : 0.5;
  return sizes.reduce<number[][]>(
    (points, size, k) => points.flatMap((x) => Array.from({ length: size }, (_, i) => [...x, along(k, i)])),
    [[]],
  );
}
