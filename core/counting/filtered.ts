import type { Operator } from '../emitter/operators.js';
import type { HierarchyBuilder } from './hierarchy.js';

/** A Lorentzian filter in the rotating frame: FWHM κ of the intensity transmission and centre ω_f, both 1/ps. */
export interface RotatingFilter {
  readonly kappa: number;
  readonly center: number;
}

/** Broad light of the same emitter that the filter passes incoherently: counted jumps, each with probability `rate`. */
export interface SideLight {
  readonly dipoles: readonly Operator[];
  readonly rate: number;
}

/** Index of a filtered operator: level d (photons already transmitted) and powers of a (j) and a† (k) per mode. */
interface Index {
  readonly level: number;
  readonly j: readonly number[];
  readonly k: readonly number[];
}

const sum = (x: readonly number[]): number => x.reduce((a, b) => a + b, 0);
const step = (x: readonly number[], q: number, by: number): number[] =>
  x.map((v, i) => (i === q ? v + by : v));

/** Only one of R_jk and R_kj = R_jk† is stored. */
function canonical(index: Index): { stored: Index; conjugate: boolean } {
  for (let q = 0; q < index.j.length; q++) {
    if (index.j[q] > index.k[q]) return { stored: index, conjugate: false };
    if (index.j[q] < index.k[q]) {
      return { stored: { level: index.level, j: index.k, k: index.j }, conjugate: true };
    }
  }
  return { stored: index, conjugate: false };
}

/**
 * Normally ordered moments of the light behind a two-sided cavity filter driven one way by the emitter
 * (cascaded quantum systems: Gardiner; Carmichael, Phys. Rev. Lett. 70, 2269 and 2273 (1993)). With
 * R_jk = Tr_a[a^j ρ a†^k], level d holding the operators after d transmitted photons,
 *   dR_jk/dt = LR_jk − [(j+k)κ/2 + i(j−k)ω_f]R_jk − √(κ/2)(j c R_{j−1,k} + k R_{j,k−1} c†) + (κ/2) R^{(d−1)}_{j+1,k+1}.
 * Each collected mode (polarisation) has its own filter mode; a count is a photon through any of them. Only the
 * operators that the targets need are kept.
 * Targets `m1` … `mK`: factorial moments of the transmitted count, exact.
 * @param aside light beside the line of `dipoles` that passes with a fixed probability: one more counted jump per level
 */
export function addFilteredMoments(
  builder: HierarchyBuilder,
  dipoles: readonly Operator[],
  filter: RotatingFilter,
  order: number,
  aside: SideLight | null = null,
): void {
  const modes = dipoles.length;
  const none = new Array<number>(modes).fill(0);
  const left = dipoles.map((c) => builder.addLeft(c));
  const jumps = aside && aside.rate > 0 ? builder.addJump(aside.dipoles) : [];
  const known = new Map<string, number>();
  const half = filter.kappa / 2;
  const drive = -Math.sqrt(half);

  const request = (index: Index): { block: number; conjugate: boolean } => {
    const { stored, conjugate } = canonical(index);
    if (stored.level === 0 && sum(stored.j) + sum(stored.k) === 0) return { block: 0, conjugate: false };
    const key = `${stored.level}|${stored.j}|${stored.k}`;
    const found = known.get(key);
    if (found !== undefined) return { block: found, conjugate };
    const block = define(stored, key);
    return { block, conjugate };
  };

  const define = (index: Index, key: string): number => {
    const { level, j, k } = index;
    const up = sum(j);
    const down = sum(k);
    const hermitian = j.every((v, q) => v === k[q]);
    const block = builder.addBlock(hermitian, (up + down) * half, (up - down) * filter.center);
    known.set(key, block);
    for (let q = 0; q < modes; q++) {
      if (j[q] > 0) {
        const from = request({ level, j: step(j, q, -1), k });
        builder.coupleDipole(left[q], 1, drive * j[q], from.block, from.conjugate, block);
      }
      if (k[q] > 0) {
        const from = request({ level, j, k: step(k, q, -1) });
        builder.coupleDipole(left[q], -1, drive * k[q], from.block, from.conjugate, block);
      }
      if (level > 0) {
        const from = request({ level: level - 1, j: step(j, q, 1), k: step(k, q, 1) });
        coupleSame(builder, half, from, block);
      }
    }
    if (level > 0 && aside) {
      const from = request({ level: level - 1, j, k });
      for (const jump of jumps) builder.couple(jump, aside.rate, from.block, block);
    }
    return block;
  };

  let factorial = 1;
  for (let d = 1; d <= order; d++) {
    factorial *= d;
    builder.target(`m${d}`, request({ level: d, j: none, k: none }).block, factorial);
  }
}

/** Identity source; a stored adjoint hands over X − iY. */
function coupleSame(
  builder: HierarchyBuilder,
  factor: number,
  from: { block: number; conjugate: boolean },
  to: number,
): void {
  if (from.conjugate) builder.coupleConjugate(factor, from.block, to);
  else builder.couple(-1, factor, from.block, to);
}
