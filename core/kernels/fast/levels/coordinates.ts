import type { Generator } from '../../../emitter/generator.js';
import { coherencePairs } from '../../../emitter/operators.js';

/** A set of coordinates that the drive mixes, with the places in the state of every lane that uses them. */
export interface Component {
  readonly coordinates: readonly number[];
  readonly offsets: Int32Array;
}

/** The least coordinate of the set that the used drive components and the level energies mix, for every coordinate. */
export function mixedWith(generator: Generator, used: readonly boolean[]): number[] {
  const n = generator.levels;
  const owner = Array.from({ length: n * n }, (_, i) => i);
  const find = (i: number): number => {
    let root = i;
    while (owner[root] !== root) root = owner[root];
    return root;
  };
  const join = (a: number, b: number): void => {
    const [p, q] = [find(a), find(b)];
    owner[Math.max(p, q)] = Math.min(p, q);
  };
  used.forEach((acts, c) => {
    if (!acts) return;
    for (const m of [generator.real[c], generator.imaginary[c]]) {
      for (let e = 0; e < m.row.length; e++) join(m.row[e], m.col[e]);
    }
  });
  coherencePairs(n).forEach((_, pair) => {
    join(n + 2 * pair, n + 2 * pair + 1);
  });
  return owner.map((_, i) => find(i));
}

/** Everything that can be reached from the starts along the edges, starts included. */
export function reach(starts: readonly number[], edges: readonly (readonly [number, number])[]): Set<number> {
  const next = new Map<number, number[]>();
  for (const [a, b] of edges) {
    if (a === b) continue;
    const list = next.get(a);
    if (list) list.push(b);
    else next.set(a, [b]);
  }
  const seen = new Set(starts);
  const stack = [...starts];
  for (let v = stack.pop(); v !== undefined; v = stack.pop()) {
    for (const w of next.get(v) ?? []) {
      if (seen.has(w)) continue;
      seen.add(w);
      stack.push(w);
    }
  }
  return seen;
}
