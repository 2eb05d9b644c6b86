import { setImmediate } from 'node:timers/promises';
import { evaluate } from '../../core/index.js';
import {
  applyParameters,
  type EvaluatedPoint,
  type FoundPoint,
  judge,
  type SearchOutcome,
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

/** The evaluation nearest to limits that none met, evaluated anew. */
export function quoteNearest(study: Study, { nearest }: SearchOutcome): EvaluatedPoint | null {
  if (nearest === null) return null;
  const { values } = nearest;
  return { values, figures: evaluate(applyParameters(study, values), 'quoted') };
}

export interface Quoted {
  readonly front: readonly FrontDesign[];
  readonly best: FrontDesign | null;
}

/**
 * Evaluates the chosen points anew at accuracy `quoted`: what is written has a checked error estimate. Outside the cap
 * of the search, but the same for the same search.
 * @returns null when the signal was aborted meanwhile
 */
export async function quoteFront(
  study: Study,
  outcome: SearchOutcome,
  signal: AbortSignal,
  onPoint: (done: number, total: number) => void,
): Promise<Quoted | null> {
  const chosen = chosenPoints(study, outcome);
  const distinct = [...new Set(chosen.map(({ point }) => JSON.stringify(point.values)))];
  const total = distinct.length + (outcome.best === null ? 0 : 1);
  const known = new Map<string, FrontDesign>();
  let done = 0;
  const quote = async ({ level, slice, point }: Chosen, file: string): Promise<FrontDesign | null> => {
    // Signals are heard between evaluations only.
    await setImmediate();
    if (signal.aborted) return null;
    const { values, stage } = point;
    const key = JSON.stringify(values);
    const old = known.get(key);
    const figures = old?.figures ?? evaluate(applyParameters(study, values), 'quoted');
    const design = { level, slice, file, values, figures, stage };
    known.set(key, design);
    if (old === undefined || file === BEST_FILE) onPoint(++done, total);
    return design;
  };
  const front: FrontDesign[] = [];
  for (const point of chosen) {
    const index = distinct.indexOf(JSON.stringify(point.point.values));
    const design = await quote(point, designFile(index, distinct.length));
    if (design === null) return null;
    front.push(design);
  }
  const { best } = outcome;
  if (best === null || study.goal.atLeast === null) return { front, best: null };
  const design = await quote({ level: study.goal.atLeast, slice: null, point: best }, BEST_FILE);
  return design && { front, best: design };
}
