import { levelsOf } from '../front/levels.js';
import { BRANCH_WIDTH, distance, type Knowledge, type Plan } from './contract.js';
import { samplePoints } from './enumerate.js';
import { bestSolutions, standing } from './solutions.js';

/** Knot of the curve of optimal designs. */
interface Knot {
  readonly x: readonly number[];
  readonly impurity: number;
  readonly brightness: number;
}

/** Solutions that nothing in the archive beats by more than a hair, by brightness: knots of the front. */
function knots(known: Knowledge): Knot[] {
  const sorted = bestSolutions(known)
    .filter((solution) => standing(known, solution))
    .sort((a, b) => a.brightness - b.brightness);
  return sorted.filter((s, i) => i === 0 || s.brightness > sorted[i - 1].brightness + 1e-9);
}

/** Cubic Hermite curve through knots of one branch, by chord length (finite differences at the knots). */
function curve(chain: readonly Knot[]): (segment: number, t: number) => number[] {
  const times = [0];
  for (let i = 1; i < chain.length; i++) {
    const squares = chain[i].x.map((value, k) => (value - chain[i - 1].x[k]) ** 2);
    const rise = (chain[i].brightness - chain[i - 1].brightness) ** 2;
    times.push(times[i - 1] + Math.sqrt(squares.reduce((sum, s) => sum + s, rise)) + 1e-12);
  }
  const chord = (i: number, k: number) => (chain[i + 1].x[k] - chain[i].x[k]) / (times[i + 1] - times[i]);
  const slope = (i: number, k: number) => {
    if (i === 0) return chord(0, k);
    if (i === chain.length - 1) return chord(i - 1, k);
    const [before, after] = [times[i] - times[i - 1], times[i + 1] - times[i]];
    return (chord(i - 1, k) * after + chord(i, k) * before) / (before + after);
  };
  return (segment, t) => {
    const width = times[segment + 1] - times[segment];
    return chain[segment].x.map((start, k) => {
      const end = chain[segment + 1].x[k];
      const [a, b] = [slope(segment, k) * width, slope(segment + 1, k) * width];
      const value =
        start * (1 + 2 * t) * (1 - t) ** 2 +
        a * t * (1 - t) ** 2 +
        end * t * t * (3 - 2 * t) +
        b * t * t * (t - 1);
      return Math.min(Math.max(value, 0), 1);
    });
  };
}

/** Chains of neighbouring knots on one branch. */
function chains(known: Knowledge): Knot[][] {
  const result: Knot[][] = [];
  for (const knot of knots(known)) {
    const last = result[result.length - 1];
    const near =
      last !== undefined && distance(known.problem, last[last.length - 1].x, knot.x) < BRANCH_WIDTH;
    if (near) last.push(knot);
    else result.push([knot]);
  }
  return result;
}

/** Points between neighbouring optima, in the variables: one evaluation each, dealt out by the step they divide. */
export function* fillBetween(known: Knowledge, name: string, count: number): Plan {
  const segments = chains(known).flatMap((chain) => {
    const at = curve(chain);
    return chain.slice(1).map((high, i) => ({
      weight: Math.sqrt(
        (high.brightness - chain[i].brightness) * Math.max(0, high.impurity - chain[i].impurity),
      ),
      at: (t: number) => at(i, t),
    }));
  });
  const total = segments.reduce((sum, segment) => sum + segment.weight, 0);
  if (!(total > 0)) return;
  const points: number[][] = [];
  let due = 0;
  for (const { weight, at } of segments) {
    due += (count * weight) / total;
    const size = Math.floor(due + 1e-9);
    due -= size;
    for (let i = 1; i <= size; i++) points.push(at(i / (size + 1)));
  }
  yield* samplePoints(known, name, points.slice(0, count));
}

/** Share of the level that a point aimed at a level lies above it. */
const MARGIN = 1e-6;

/**
 * One point aimed at each brightness level asked for, between the archive's neighbours of that level (linear in the
 * variables, by brightness), where they lie on one branch.
 */
export function* aimAtLevels(known: Knowledge, name: string, count: number): Plan {
  const { front, problem, spec } = known;
  const wanted = [
    ...levelsOf(spec.goal.front, front),
    ...(spec.goal.atLeast === null ? [] : [spec.goal.atLeast]),
  ];
  const points = wanted.flatMap((level) => {
    const high = front.findIndex((point) => point.brightness >= level);
    if (high <= 0 || front[high].brightness <= level * (1 + 10 * MARGIN)) return [];
    const [a, b] = [front[high - 1], front[high]];
    const [x, y] = [problem.unitOf(a.values), problem.unitOf(b.values)];
    if (distance(problem, x, y) >= BRANCH_WIDTH) return [];
    const t = (level * (1 + MARGIN) - a.brightness) / (b.brightness - a.brightness);
    return [x.map((value, k) => value + t * (y[k] - value))];
  });
  yield* samplePoints(known, name, points.slice(0, count));
}
