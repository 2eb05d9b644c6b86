import type { Goal } from '../problem/contract.js';
import type { Judgement } from '../problem/judge.js';
import { turned } from '../problem/third.js';
import { flatFront } from './flat.js';
import { atLevel, levelsOf } from './levels.js';

/** Digits of a bound: a reader must be able to repeat it, and a design to keep it. */
const DIGITS = 3;

const rounded = (value: number): number => Number(value.toPrecision(DIGITS));

/** What is left of `points` within a bound of the third axis (minimised; null: none), as a front of two objectives. */
export function sliceOf<T extends Judgement>(points: readonly T[], bound: number | null): T[] {
  return flatFront(points.filter(({ third }) => bound === null || (third !== null && third <= bound)));
}

/**
 * Bounds of the slices of a front with three objectives, tightest first, in the unit of the figure; the last is null:
 * no bound. They divide evenly (in ratio, where the axis is positive) the way from the least third number to that of the
 * front without a bound, both at the brightness of the best design asked for, or else in the middle of the front. Fewer
 * where the axis has no room.
 */
export function sliceBounds(goal: Goal, points: readonly Judgement[]): (number | null)[] {
  if (goal.third === null) return [null];
  const { axis, slices } = goal.third;
  const open = flatFront(points);
  if (open.length === 0) return [null];
  const levels = levelsOf(goal.front, open).filter((level) => atLevel(open, level) !== null);
  const wanted = goal.atLeast ?? levels[Math.floor(levels.length / 2)] ?? 0;
  // Where the level is out of reach, the brightest design stands for it.
  const served = atLevel(open, wanted) ?? open[open.length - 1];
  const level = Math.min(wanted, served.brightness);
  const bright = points.flatMap(({ brightness, third }) =>
    brightness >= level && third !== null ? third : [],
  );
  const [tight, loose] = [Math.min(...bright), served.third ?? Number.NEGATIVE_INFINITY];
  const at = (share: number) =>
    tight > 0 ? tight * (loose / tight) ** share : tight + (loose - tight) * share;
  const inner = Array.from({ length: slices - 1 }, (_, i) => rounded(at((i + 1) / slices)));
  const distinct = inner.filter((bound, i) => bound > tight && bound < loose && inner.indexOf(bound) === i);
  return [...distinct.map((bound) => turned(bound, axis)), null];
}
