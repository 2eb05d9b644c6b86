import type { Stream } from '../../core/numerics/stream.js';
import { compareReplies } from '../local/compare.js';
import type { Reply, Setup, Trial } from '../local/contract.js';
import { binCenter, type Space } from '../problem/space.js';

// Global methods keep the contract of `local/contract.ts`; what they share stands here.

/** A trial and its reply. */
export interface Member {
  readonly x: Trial;
  readonly reply: Reply;
}

/** Index of the best member by the feasibility rules, the earliest of equals. */
export function bestIndex(members: readonly Member[]): number {
  let best = 0;
  for (let i = 1; i < members.length; i++) {
    if (compareReplies(members[i].reply, members[best].reply) < 0) best = i;
  }
  return best;
}

/**
 * Latin hypercube (McKay, Beckman & Conover, Technometrics 21, 239 (1979)): in every coordinate one point in each of
 * `count` equal strata; list coordinates are dealt out evenly.
 */
export function latinHypercube(space: Space, count: number, random: Stream): number[][] {
  const points = Array.from({ length: count }, () => new Array<number>(space.dimension).fill(0));
  for (let coordinate = 0; coordinate < space.dimension; coordinate++) {
    const strata = Array.from({ length: count }, (_, i) => i);
    for (let i = count - 1; i > 0; i--) {
      const other = random.int(i + 1);
      [strata[i], strata[other]] = [strata[other], strata[i]];
    }
    const categories = space.categories[coordinate];
    strata.forEach((stratum, i) => {
      points[i][coordinate] =
        categories > 0
          ? binCenter(
              Math.min(categories - 1, Math.floor(((stratum + random.next()) / count) * categories)),
              categories,
            )
          : (stratum + random.next()) / count;
    });
  }
  return points;
}

/** The given starts, filled up to `count` by a Latin hypercube. */
export function firstGeneration(setup: Setup, count: number, random: Stream): Trial[] {
  const given = setup.start.slice(0, count);
  return [...given, ...latinHypercube(setup.space, count - given.length, random)];
}

/** `count` different indices below `total`, none of them `except`; needs total > count. */
export function drawDistinct(count: number, total: number, except: number, random: Stream): number[] {
  const drawn: number[] = [];
  while (drawn.length < count) {
    const next = random.int(total);
    if (next !== except && !drawn.includes(next)) drawn.push(next);
  }
  return drawn;
}
