import type { Hierarchy } from '../counting/hierarchy.js';
import { reverseOrder } from '../counting/tail.js';
import type { Generator } from '../emitter/generator.js';
import { gmres } from './gmres.js';
import type { Tower } from './tower.js';
import type { TowerLinks } from './tower-links.js';
import { TowerPreconditioner } from './tower-preconditioner.js';

const TOLERANCE = 1e-10;
const MOST_ITERATIONS = 400;

/** A figure as a linear functional of the state at the end of the drive. */
export interface TowerEffect {
  readonly name: string;
  readonly factor: number;
  /** Per lane that counts: weights, [storey·coordinates + coordinate]. */
  readonly lanes: readonly { readonly lane: number; readonly weights: Float64Array }[];
}

/**
 * The filtered moments after the drive, as functionals of all storeys: with a constant generator A the functional e obeys
 * eA = 0, solved block by block from the target backwards as for bare levels (counting/tail.ts). It depends on the
 * emitter, the filter and the bath, not on the pulse. Emitted light needs no such solve: elements between levels of equal
 * exciton number do not feel the bath.
 */
export function towerEffects(
  generator: Generator,
  hierarchy: Hierarchy,
  tower: Tower,
  links: TowerLinks,
  wanted: (name: string) => boolean,
): TowerEffect[] {
  const solver = new TowerTail(generator, hierarchy, tower, links);
  return hierarchy.targets
    .filter(({ name }) => wanted(name))
    .map(({ name, block, factor }) => ({ name, factor, lanes: solver.effect(block) }));
}

type Effects = (Float64Array | null)[];

class TowerTail {
  private readonly size: number;
  private readonly half: number;
  private readonly order: readonly number[];
  /** Coordinates of the root that never decay; given, not solved for, in undamped blocks. */
  private readonly stable: readonly number[];

  constructor(
    private readonly generator: Generator,
    private readonly hierarchy: Hierarchy,
    private readonly tower: Tower,
    private readonly links: TowerLinks,
  ) {
    this.size = generator.levels ** 2;
    this.half = this.size * tower.lanes;
    this.order = reverseOrder(hierarchy);
    this.stable = generator.stable.flatMap((s, k) => (s ? [k] : []));
  }

  effect(target: number): TowerEffect['lanes'] {
    const effects: Effects = new Array(this.hierarchy.lanes).fill(null);
    for (const block of this.order) {
      const { lane, hermitian } = this.hierarchy.blocks[block];
      const lanes = hermitian ? [lane] : [lane, lane + 1];
      const inflow = lanes.map((l) => this.inflow(l, effects));
      if (block === target || inflow.some((v) => v !== null)) {
        this.solve(block, block === target, inflow, effects);
      }
    }
    return effects.flatMap((weights, lane) => (weights === null ? [] : [{ lane, weights }]));
  }

  /** Σ over what a lane feeds: factor · effect · matrix, as a row; null when it feeds nothing that counts. */
  private inflow(lane: number, effects: Effects): Float64Array | null {
    const { half, size } = this;
    let out: Float64Array | null = null;
    for (const { matrix, factor, from, to } of this.hierarchy.couplings) {
      const e = from === lane && to !== lane ? effects[to] : null;
      if (e === null) continue;
      out ??= new Float64Array(half);
      if (matrix < 0) {
        for (let k = 0; k < half; k++) out[k] += factor * e[k];
        continue;
      }
      const { row, col, value } = this.hierarchy.matrices[matrix];
      for (let base = 0; base < half; base += size) {
        for (let k = 0; k < value.length; k++) out[base + col[k]] += factor * value[k] * e[base + row[k]];
      }
    }
    return out;
  }

  private solve(
    block: number,
    target: boolean,
    inflow: readonly (Float64Array | null)[],
    effects: Effects,
  ): void {
    const { half } = this;
    const { lane, hermitian, damping, rotation } = this.hierarchy.blocks[block];
    const halves = hermitian ? 1 : 2;
    const fixed = damping === 0 && rotation === 0 ? this.stable : [];
    const given = new Float64Array(halves * half);
    if (target) for (let i = 0; i < this.generator.levels; i++) if (fixed.includes(i)) given[i] = 1;
    const rhs = new Float64Array(halves * half);
    this.apply(given, rhs, halves, damping, rotation);
    for (let h = 0; h < halves; h++) {
      const source = inflow[h];
      for (let k = 0; k < half; k++) rhs[h * half + k] = -rhs[h * half + k] - (source?.[k] ?? 0);
    }
    clear(rhs, fixed, halves, half);
    const preconditioner = new TowerPreconditioner(this.generator, this.tower, halves, damping, rotation);
    const outcome = gmres(
      (v, out) => {
        this.apply(v, out, halves, damping, rotation);
        clear(out, fixed, halves, half);
      },
      (v, out) => {
        preconditioner.apply(v, out);
        clear(out, fixed, halves, half);
      },
      rhs,
      TOLERANCE,
      MOST_ITERATIONS,
    );
    if (outcome.kind === 'failed') {
      throw new Error(
        `the tail of the phonon hierarchy did not converge: residual ${outcome.residual.toExponential(1)} after ${MOST_ITERATIONS} iterations`,
      );
    }
    for (let h = 0; h < halves; h++) {
      const weights = outcome.x.slice(h * half, (h + 1) * half);
      for (const k of fixed) weights[k] = given[h * half + k];
      if (weights.some((w) => w !== 0)) effects[lane + h] = weights;
    }
  }

  /** out = v A for one block: bath, decay of emitter and storeys, and the block's own damping and rotation. */
  private apply(v: Float64Array, out: Float64Array, halves: number, damping: number, rotation: number): void {
    const { half, size } = this;
    const { first, sources, factors } = this.links;
    const { row, col, value } = this.generator.constant;
    for (let base = 0; base < halves * half; base += half) {
      for (let t = 0; t < half; t++) {
        out[base + t] = -(this.tower.damping[Math.floor(t / size)] + damping) * v[base + t];
      }
      for (let t = 0; t < half; t++) {
        const x = v[base + t];
        if (x === 0) continue;
        for (let k = first[t]; k < first[t + 1]; k++) out[base + sources[k]] += factors[k] * x;
      }
      for (let own = base; own < base + half; own += size) {
        for (let k = 0; k < value.length; k++) out[own + col[k]] += value[k] * v[own + row[k]];
      }
    }
    if (halves < 2 || rotation === 0) return;
    for (let k = 0; k < half; k++) {
      out[k] -= rotation * v[half + k];
      out[half + k] += rotation * v[k];
    }
  }
}

function clear(v: Float64Array, fixed: readonly number[], halves: number, half: number): void {
  for (let h = 0; h < halves; h++) for (const k of fixed) v[h * half + k] = 0;
}
