import { dominates } from './archive.js';

/**
 * Fast non-dominated sorting: indices by rank, best rank first, ascending within a rank. `before(a, b)` says whether
 * solution a dominates solution b (Deb et al., IEEE Trans. Evol. Comput. 6, 182 (2002)).
 */
export function nondominatedRanks(count: number, before: (a: number, b: number) => boolean): number[][] {
  const beaten: number[][] = Array.from({ length: count }, () => []);
  const beatenBy = new Array<number>(count).fill(0);
  for (let a = 0; a < count; a++) {
    for (let b = a + 1; b < count; b++) {
      if (before(a, b)) {
        beaten[a].push(b);
        beatenBy[b]++;
      } else if (before(b, a)) {
        beaten[b].push(a);
        beatenBy[a]++;
      }
    }
  }
  const ranks: number[][] = [];
  let current = beatenBy.flatMap((n, i) => (n === 0 ? [i] : []));
  while (current.length > 0) {
    ranks.push(current);
    const next: number[] = [];
    for (const a of current) for (const b of beaten[a]) if (--beatenBy[b] === 0) next.push(b);
    current = next.sort((a, b) => a - b);
  }
  return ranks;
}

/** Ranks of plain objective vectors (all minimised). */
export function ranksOf(objectives: readonly (readonly number[])[]): number[][] {
  return nondominatedRanks(objectives.length, (a, b) => dominates(objectives[a], objectives[b]));
}

/** Crowding distance of each vector within its rank; the ends of every objective have +∞ (Deb et al. 2002). */
export function crowding(objectives: readonly (readonly number[])[]): number[] {
  const distance = new Array<number>(objectives.length).fill(0);
  const count = objectives[0]?.length ?? 0;
  for (let k = 0; k < count; k++) {
    const order = objectives.map((_, i) => i).sort((a, b) => objectives[a][k] - objectives[b][k] || a - b);
    const last = order.length - 1;
    const span = objectives[order[last]][k] - objectives[order[0]][k];
    distance[order[0]] = Number.POSITIVE_INFINITY;
    distance[order[last]] = Number.POSITIVE_INFINITY;
    if (!(span > 0)) continue;
    for (let i = 1; i < last; i++) {
      distance[order[i]] += (objectives[order[i + 1]][k] - objectives[order[i - 1]][k]) / span;
    }
  }
  return distance;
}
