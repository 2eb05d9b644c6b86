import { type Figures, PropagationError } from '../../core/index.js';
import {
  applyParameters,
  type EvaluatedPoint,
  type FiguresInput,
  type FiguresResult,
  type FoundPoint,
  judge,
  runTasks,
  type SearchOutcome,
  type Task,
  type TaskPool,
} from '../../optimizers/index.js';
import type { FrontDesign } from '../run/contract.js';
import { BEST_FILE, designFile } from '../run/results.js';
import type { Study } from '../study/index.js';

/** A point of the front before it is evaluated anew. */
interface Chosen {
  readonly level: number;
  readonly slice: number | null;
  readonly point: FoundPoint;
}

/** The distinct points of each slice with the highest level that each serves; a fixed design is a front of one point. */
function chosenPoints(study: Study, outcome: SearchOutcome): Chosen[] {
  const { goal, parameters } = study;
  if (parameters.length === 0) {
    return outcome.archive.map((point) => {
      return { level: judge(point.figures, goal).brightness, slice: null, point };
    });
  }
  const byValues = new Map<string, Chosen>();
  for (const { level, slice, point } of outcome.front) {
    if (point !== null) byValues.set(JSON.stringify([slice, point.values]), { level, slice, point });
  }
  return [...byValues.values()];
}

/** Levels that nothing reaches, within whatever bound; a fixed design is asked for none but `at_least`. */
export function outOfReach(study: Study, outcome: SearchOutcome): number[] {
  const levels =
    study.parameters.length === 0
      ? []
      : outcome.front
          .filter(({ slice, point }) => slice === null && point === null)
          .map(({ level }) => level);
  const { atLeast } = study.goal;
  if (atLeast !== null && outcome.best === null && !levels.includes(atLeast)) levels.push(atLeast);
  return levels.sort((a, b) => a - b);
}

export interface Quoted {
  readonly front: readonly FrontDesign[];
  readonly best: FrontDesign | null;
  /** The evaluation nearest to limits that none met; null where some met them. */
  readonly nearest: EvaluatedPoint | null;
}

const keyOf = ({ values }: EvaluatedPoint): string => JSON.stringify(values);

/** The dearest first, so that no worker is left alone with it; propagation steps tell what a point costs. */
function quotingTasks(study: Study, points: readonly EvaluatedPoint[]): Task[] {
  const distinct = [...new Map(points.map((point) => [keyOf(point), point])).entries()];
  return distinct
    .sort(([, a], [, b]) => b.figures.accuracy.steps - a.figures.accuracy.steps)
    .map(([id, { values }], index) => {
      const input: FiguresInput = { designs: [applyParameters(study, values)], accuracy: 'quoted' };
      return { id, kind: 'figures', index, budget: 1, input };
    });
}

/** Figures at accuracy `quoted` by the key of their point; null when the signal was aborted meanwhile. */
async function quotedFigures(
  tasks: readonly Task[],
  pool: TaskPool,
  signal: AbortSignal,
  onPoint: (done: number, total: number) => void,
): Promise<ReadonlyMap<string, Figures> | null> {
  const known = new Map<string, Figures>();
  await runTasks(pool, tasks, signal, ({ id, summary }) => {
    const [{ figures, failure }] = summary as readonly FiguresResult[];
    if (figures === null) throw new PropagationError(failure);
    known.set(id, figures);
    onPoint(known.size, tasks.length);
  });
  return known.size < tasks.length ? null : known;
}

/**
 * Evaluates the chosen points anew at accuracy `quoted`: what is written has a checked error estimate. Outside the cap
 * of the search, but the same for the same search.
 * @returns null when the signal was aborted meanwhile
 */
export async function quoteFront(
  study: Study,
  outcome: SearchOutcome,
  pool: TaskPool,
  signal: AbortSignal,
  onPoint: (done: number, total: number) => void,
): Promise<Quoted | null> {
  const chosen = chosenPoints(study, outcome);
  const { best, nearest } = outcome;
  const others = [best, nearest].filter((point) => point !== null);
  // What the exact phonon method corrected was evaluated at this accuracy already.
  const isQuoted = ({ figures }: EvaluatedPoint) =>
    outcome.correction !== null && figures.phonons.method === 'exact';
  const all = [...chosen.map(({ point }) => point), ...others];
  const tasks = quotingTasks(
    study,
    all.filter((point) => !isQuoted(point)),
  );
  const figures = await quotedFigures(tasks, pool, signal, onPoint);
  if (figures === null) return null;
  const anew = <P extends EvaluatedPoint>(point: P): P => ({
    ...point,
    figures: figures.get(keyOf(point)) ?? point.figures,
  });
  const distinct = [...new Set(chosen.map(({ point }) => keyOf(point)))];
  const front = chosen.map(({ level, slice, point }) => {
    const { values, figures, stage } = anew(point);
    const file = designFile(distinct.indexOf(keyOf(point)), distinct.length);
    return { level, slice, file, values, figures, stage };
  });
  const { atLeast } = study.goal;
  const bestDesign =
    best === null || atLeast === null
      ? null
      : { level: atLeast, slice: null, file: BEST_FILE, ...anew(best) };
  return { front, best: bestDesign, nearest: nearest && anew(nearest) };
}
