import type { Goal } from '../problem/contract.js';
import type { Judgement } from '../problem/judge.js';

type Point = Pick<Judgement, 'impurity' | 'brightness'>;

/**
 * The member with the least impurity among those of at least the brightness `level`, null when the level is out of
 * reach. `front` is non-dominated and sorted by brightness, so impurity rises along it.
 */
export function atLevel<T extends Point>(front: readonly T[], level: number): T | null {
  let low = 0;
  let high = front.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (front[middle].brightness < level) low = middle + 1;
    else high = middle;
  }
  return front[low] ?? null;
}

/** Evenly spaced brightness levels, ends included; an open end is the end of what `front` reaches. */
export function levelsOf(wanted: Goal['front'], front: readonly Point[]): number[] {
  if (front.length === 0 && (wanted.from === null || wanted.to === null)) return [];
  const from = wanted.from ?? Math.min(front[0].brightness, wanted.to ?? Number.POSITIVE_INFINITY);
  const to = wanted.to ?? Math.max(front[front.length - 1].brightness, from);
  if (wanted.points <= 1 || from === to) return [to];
  const last = wanted.points - 1;
  return Array.from({ length: wanted.points }, (_, i) => (i === last ? to : from + ((to - from) * i) / last));
}
