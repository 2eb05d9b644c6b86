import type { JudgedPoint } from '../tasks/recorder.js';
import type { Solution, SolveMethod } from '../tasks/solve.js';
import type { Knowledge, Plan } from './contract.js';

/** A start for the least impurity at a level. */
export interface Start extends Reach {
  readonly level: number;
  readonly x: readonly number[];
}

/** How far a solve may be from its end: first trust radius, shake of its start, iterations of a value and a gradient. */
export interface Reach {
  readonly radius: number;
  readonly shake: number;
  readonly iterations: number;
}

/** From anywhere. */
export const JUMP: Reach = { radius: 0.2, shake: 0.02, iterations: 24 };
/** On the right branch, perhaps. */
export const CONTINUE: Reach = { radius: 0.1, shake: 0.02, iterations: 20 };
/** Next to its end. */
export const NEIGHBOUR: Reach = { radius: 0.03, shake: 0, iterations: 12 };

/**
 * Along the bright end of a front, a narrow curved valley, moving asymptotes arrive where SQP of the same length stays behind;
 * elsewhere both need about the same.
 */
const METHOD: SolveMethod = 'moving-asymptotes';

/** Iterations below which a solve is not begun. */
const FEWEST = 4;

/** Evaluations a solve may take. */
export const allowance = (known: Knowledge, { iterations }: Reach) => iterations * known.iterationCost;

/** Solves from all starts that fit into `budget`, side by side; keeps where they end. */
export function* solveAll(known: Knowledge, name: string, starts: readonly Start[], budget: number): Plan {
  let left = Math.min(budget, known.left);
  const tasks = [];
  for (const start of starts) {
    const { level, x, radius, shake } = start;
    const each = Math.floor(Math.min(allowance(known, start), left));
    // A last one may be cut short, but not to nothing.
    if (each < Math.min(allowance(known, start), FEWEST * known.iterationCost)) break;
    left -= each;
    tasks.push(
      known.task(name, 'solve', each, { level, start: x, method: METHOD, radius, shake, exact: known.exact }),
    );
  }
  if (tasks.length === 0) return;
  const results = yield { name, tasks };
  known.learn(results.flatMap(({ summary }) => (summary === null ? [] : [summary as Solution])));
}

/** Notes a start; false where one as near was noted before. */
export function isNew(tried: Set<string>, level: number, x: readonly number[]): boolean {
  const key = `${level} ${x.map((value) => value.toFixed(2)).join(' ')}`;
  if (tried.has(key)) return false;
  tried.add(key);
  return true;
}

export const unitOf = (known: Knowledge, point: JudgedPoint) => known.problem.unitOf(point.values);
