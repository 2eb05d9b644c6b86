import type { Scheme } from '../../../emitter/contract.js';
import { driveOperators } from '../../../emitter/generator.js';

/** Three levels on one drive component: level 0 – level 1 – level 2. */
export interface Ladder {
  readonly levels: readonly [number, number, number];
  readonly component: number;
  /** Factors of ½Ω on the lower and the upper rung. */
  readonly lower: number;
  readonly upper: number;
}

/** The ladder that the used drive components make of a scheme, or null where they connect other levels. */
export function ladderOf(scheme: Scheme, used: readonly boolean[]): Ladder | null {
  const n = scheme.levels.length;
  if (used.filter((acts) => acts).length !== 1) return null;
  const component = used.indexOf(true);
  const { re } = driveOperators(scheme)[component];
  const rungs = Array.from(re, (value, k) => ({ value, up: Math.floor(k / n), low: k % n })).filter(
    (r) => r.value !== 0,
  );
  if (rungs.length !== 2) return null;
  const [a, b] = rungs[0].up === rungs[1].low ? rungs : [rungs[1], rungs[0]];
  if (a.up !== b.low || !(a.low < a.up && a.up < b.up)) return null;
  const steps = [a, b].every(({ up, low }) => scheme.levels[up].excitons === scheme.levels[low].excitons + 1);
  return steps ? { levels: [a.low, a.up, b.up], component, lower: a.value, upper: b.value } : null;
}
