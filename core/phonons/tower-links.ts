import type { Scheme } from '../emitter/contract.js';
import { addTransfer, combine, commutatorMap, multiply, superoperator, zero } from '../emitter/operators.js';
import type { Tower } from './tower.js';

/**
 * Links between storeys written out per coordinate, by target: dy[t] gains Σ factors[k]·y[sources[k]] over k from first[t]
 * to first[t+1]−1, with t = storey·coordinates + coordinate.
 */
export interface TowerLinks {
  readonly first: Int32Array;
  readonly sources: Int32Array;
  readonly factors: Float64Array;
}

interface Link {
  readonly target: number;
  readonly source: number;
  readonly factor: number;
}

/** The links of a tower on a scheme, and the turning of X into Y within a storey. */
export function towerLinks(scheme: Scheme, tower: Tower): TowerLinks {
  const size = scheme.levels.length ** 2;
  const links = allLinks(scheme, tower).sort((a, b) => a.target - b.target || a.source - b.source);
  const first = new Int32Array(size * tower.lanes + 1);
  for (const l of links) first[l.target + 1] += 1;
  for (let t = 0; t + 1 < first.length; t++) first[t + 1] += first[t];
  return {
    first,
    sources: Int32Array.from(links, (l) => l.source),
    factors: Float64Array.from(links, (l) => l.factor),
  };
}

function allLinks(scheme: Scheme, tower: Tower): Link[] {
  const n = scheme.levels.length;
  const size = n * n;
  const s = zero(n);
  scheme.levels.forEach((level, i) => {
    addTransfer(s, i, i, level.excitons);
  });
  const commutator = commutatorMap(s);
  const anticommutator = superoperator(n, (x) => combine(multiply(s, x), 0.5, 0, multiply(x, s), 0.5, 0));
  const links: Link[] = [];
  for (const { from, to, commutator: c, anticommutator: a } of tower.links) {
    for (const [m, factor] of [
      [commutator, c],
      [anticommutator, a],
    ] as const) {
      if (factor === 0) continue;
      for (let k = 0; k < m.value.length; k++) {
        links.push({
          target: to * size + m.row[k],
          source: from * size + m.col[k],
          factor: factor * m.value[k],
        });
      }
    }
  }
  for (const { from, to, factor } of tower.turns) {
    for (let r = 0; r < size; r++) links.push({ target: to * size + r, source: from * size + r, factor });
  }
  return links;
}
