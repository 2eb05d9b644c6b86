import { addEmittedCounting, addThinnedCounting } from '../../../counting/emitted.js';
import { addFilteredMoments } from '../../../counting/filtered.js';
import { type Hierarchy, HierarchyBuilder } from '../../../counting/hierarchy.js';
import type { Scheme } from '../../../emitter/contract.js';
import { buildGenerator } from '../../../emitter/generator.js';
import type { SparseMatrix } from '../../../emitter/operators.js';
import type { Ingredients } from './signature.js';

/** One entry of a matrix on lane·size + coordinate. */
export interface Entry {
  readonly row: number;
  readonly col: number;
  readonly value: number;
}

/** @param center filter centre in the frame of the layout, 1/ps */
export function hierarchyOf({ filter, thinning, dipoles }: Ingredients, center: number): Hierarchy {
  const builder = new HierarchyBuilder();
  if (filter) {
    addFilteredMoments(builder, dipoles, { kappa: filter.kappa, center }, filter.order);
  } else {
    addEmittedCounting(builder, dipoles);
    if (thinning !== null) addThinnedCounting(builder, dipoles, thinning);
  }
  return builder.build();
}

/**
 * Everything that does not turn with the levels: decay, dephasing, jumps, the filter's damping and offset, all couplings.
 * @param uneven parts of the level energies that belong here as well, 1/ps
 */
export function constantEntries(scheme: Scheme, hierarchy: Hierarchy, uneven: readonly number[]): Entry[] {
  const size = scheme.levels.length ** 2;
  const levels = scheme.levels.map((level, i) => ({ ...level, offset: uneven[i] }));
  const dissipators = buildGenerator({ ...scheme, levels }, 0, 0).constant;
  const out: Entry[] = [];
  const put = (m: SparseMatrix | null, factor: number, from: number, to: number): void => {
    if (!m) {
      for (let i = 0; i < size; i++) out.push({ row: to * size + i, col: from * size + i, value: factor });
      return;
    }
    m.value.forEach((v, k) => {
      out.push({ row: to * size + m.row[k], col: from * size + m.col[k], value: factor * v });
    });
  };
  for (const b of hierarchy.blocks) {
    for (const lane of b.hermitian ? [b.lane] : [b.lane, b.lane + 1]) {
      put(dissipators, 1, lane, lane);
      if (b.damping !== 0) put(null, -b.damping, lane, lane);
    }
    if (b.hermitian || b.rotation === 0) continue;
    put(null, b.rotation, b.lane + 1, b.lane);
    put(null, -b.rotation, b.lane, b.lane + 1);
  }
  for (const c of hierarchy.couplings) {
    put(c.matrix < 0 ? null : hierarchy.matrices[c.matrix], c.factor, c.from, c.to);
  }
  return out.filter((e) => e.value !== 0);
}

/** A vector over all places by figure. */
export interface Functional {
  readonly name: string;
  readonly row: Float64Array;
}

/**
 * Leaves lane 0 (ρ) out where it is the sum of other lanes, as counted states sum to the whole: whatever reads it reads
 * those. Rows of a dropped lane vanish.
 */
export function withoutLane(entries: readonly Entry[], parts: readonly number[], size: number): Entry[] {
  return entries.flatMap((e) => {
    if (e.row < size) return [];
    if (e.col >= size) return [e];
    return parts.map((lane) => ({ ...e, col: lane * size + e.col }));
  });
}

/** The same for a functional on [lane·size + coordinate]. */
export function spreadLane(row: Float64Array, parts: readonly number[], size: number): Float64Array {
  const out = row.slice();
  for (let i = 0; i < size; i++) {
    for (const lane of parts) out[lane * size + i] += row[i];
    out[i] = 0;
  }
  return out;
}
