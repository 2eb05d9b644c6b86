import { hypervolume } from '../front/hypervolume.js';
import type { Judgement } from '../problem/judge.js';

/** Bounds of the share of a later round that populations get, by what they gained in the last one. */
const LEAST_SHARE = 0.15;
const MOST_SHARE = 0.85;

/** Area that a front covers from the corner of another one, which it may not reach. */
function covered(front: readonly Judgement[], last: readonly Judgement[]): number {
  const [dimmest, brightest] = [last[0], last[last.length - 1]];
  const points = front.map(({ impurity, brightness }) => [impurity, -brightness]);
  return hypervolume(points, [brightest.impurity, -dimmest.brightness]);
}

/**
 * Share of the next round for populations: what they gained an evaluation in this round against what the rest of it
 * did. Where solves get nowhere, as in many variables without derivatives or among many local fronts, populations
 * carry on; where they no longer find anything, the budget goes to solves and points between.
 */
export function nextShare(
  fronts: readonly (readonly Judgement[])[],
  spent: readonly number[],
  share: number,
): number {
  const [before, explored, after] = fronts;
  if (before.length === 0 || after.length < 2) return share;
  const [v0, v1, v2] = [before, explored, after].map((front) => covered(front, after));
  const [early, late] = [(v1 - v0) / Math.max(1, spent[0]), (v2 - v1) / Math.max(1, spent[1])];
  if (!(early + late > 0)) return LEAST_SHARE;
  return Math.min(Math.max(early / (early + late), LEAST_SHARE), MOST_SHARE);
}
