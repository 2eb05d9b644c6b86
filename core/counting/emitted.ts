import type { Operator } from '../emitter/operators.js';
import type { HierarchyBuilder } from './hierarchy.js';

/** Highest photon number whose probability is followed by itself. */
export const HIGHEST_COUNT = 3;

/**
 * Counting by jump operators (generating function dρ_z/dt = (L₀ + zJ)ρ_z; Mollow, Phys. Rev. A 12, 1919 (1975);
 * Cook, Phys. Rev. A 23, 1243 (1981)): ρ_0 … ρ_3, the positive tail ρ_{≥2} with dρ_{≥2}/dt = Lρ_{≥2} + Jρ_1, which
 * keeps P(n≥2) free of cancellation, and the factorial moments M_1, M_2.
 * Targets: `p0` … `p3`, `multiphoton`, `mean`, `factorial2`.
 */
export function addEmittedCounting(builder: HierarchyBuilder, dipoles: readonly Operator[]): void {
  const jumps = builder.addJump(dipoles);
  const source = (factor: number, from: number, to: number): void => {
    for (const j of jumps) builder.couple(j, factor, from, to);
  };
  const counts: number[] = [];
  for (let n = 0; n <= HIGHEST_COUNT; n++) {
    const block = builder.addBlock(true, 0, 0);
    source(-1, block, block);
    if (n === 0) builder.seed(block);
    else source(1, counts[n - 1], block);
    counts.push(block);
    builder.target(`p${n}`, block, 1);
  }
  const rest = builder.addBlock(true, 0, 0);
  source(1, counts[1], rest);
  builder.target('multiphoton', rest, 1);
  const first = builder.addBlock(true, 0, 0);
  source(1, 0, first);
  builder.target('mean', first, 1);
  const second = builder.addBlock(true, 0, 0);
  source(2, first, second);
  builder.target('factorial2', second, 1);
}

/**
 * The same count after every photon has survived with probability η: the jump ηJ is counted, the rest is not.
 * Exact for the whole distribution, without knowing p_n beyond n = 1.
 * Targets: `thinned0`, `thinned1`, `thinnedMultiphoton`.
 */
export function addThinnedCounting(
  builder: HierarchyBuilder,
  dipoles: readonly Operator[],
  eta: number,
): void {
  const jumps = builder.addJump(dipoles);
  const source = (factor: number, from: number, to: number): void => {
    for (const j of jumps) builder.couple(j, factor * eta, from, to);
  };
  const none = builder.addBlock(true, 0, 0);
  builder.seed(none);
  source(-1, none, none);
  const one = builder.addBlock(true, 0, 0);
  source(-1, one, one);
  source(1, none, one);
  const more = builder.addBlock(true, 0, 0);
  source(1, one, more);
  builder.target('thinned0', none, 1);
  builder.target('thinned1', one, 1);
  builder.target('thinnedMultiphoton', more, 1);
}
