import type { Judgement } from '../problem/judge.js';
import { Archive } from './archive.js';

/** The members that no other beats in impurity and brightness, by brightness; the first of equals stays. */
export function flatFront<T extends Judgement>(points: readonly T[]): T[] {
  const archive = new Archive<T>();
  for (const point of points) archive.add([point.impurity, -point.brightness], point);
  return archive.entries.map(({ item }) => item);
}
