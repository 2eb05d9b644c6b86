import { binCenter } from '../problem/space.js';
import type { Knowledge, Plan } from './contract.js';
import { samplePoints } from './enumerate.js';
import { bestSolutions } from './solutions.js';

/** Points along a coordinate: enough to tell neighbouring branches apart, few enough to be cheap. */
const FEWEST = 4;
const MOST = 16;

/** Up to `count` solutions, spread evenly over the levels. */
function spread<T>(items: readonly T[], count: number): T[] {
  if (items.length <= count) return [...items];
  return Array.from({ length: count }, (_, i) => items[Math.floor(((i + 0.5) * items.length) / count)]);
}

/**
 * Looks along each coordinate across the whole cube through good designs: other branches often differ in one variable
 * only (an area by 2π, a detuning by its sign), where neither a local method nor small mutations get across. Each
 * round shifts the points.
 */
export function* cross(known: Knowledge, name: string, budget: number, round: number): Plan {
  const { categories, dimension } = known.problem.space;
  const solutions = bestSolutions(known);
  const affordable = Math.floor(budget / (dimension * FEWEST));
  const centres = spread(solutions, Math.min(2, affordable));
  if (centres.length === 0) return;
  const steps = Math.min(MOST, Math.floor(budget / (dimension * centres.length)));
  const offset = (round * 0.618034) % 1;
  const points = centres.flatMap(({ x }) =>
    categories.flatMap((count, k) => {
      const size = count > 0 ? Math.min(count, steps) : steps;
      return Array.from({ length: size }, (_, i) => {
        const next = [...x];
        next[k] = count > 0 ? binCenter(i, count) : (i + offset) / steps;
        return next;
      });
    }),
  );
  yield* samplePoints(known, name, points.slice(0, Math.floor(budget)));
}
