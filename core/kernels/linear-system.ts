import type { Hierarchy } from '../counting/hierarchy.js';
import type { Generator } from '../emitter/generator.js';
import type { SparseMatrix } from '../emitter/operators.js';

/** Entries of a generator with their values per drive component. */
export interface Entries {
  readonly row: Int32Array;
  readonly col: Int32Array;
  /** Value without drive, then per drive component the factors of Re Ω and Im Ω: [entry·width + part]. */
  readonly parts: Float64Array;
  readonly width: number;
}

/** Merges the sparse parts of L(t) into one entry list, so that a stage only refreshes the values. */
export function mergeGenerator(generator: Generator): Entries {
  const all: SparseMatrix[] = [generator.constant];
  generator.real.forEach((m, c) => {
    all.push(m, generator.imaginary[c]);
  });
  const { size } = generator.constant;
  const index = new Map<number, number>();
  for (const m of all) {
    for (let k = 0; k < m.value.length; k++) {
      const key = m.row[k] * size + m.col[k];
      if (!index.has(key)) index.set(key, 0);
    }
  }
  const keys = [...index.keys()].sort((a, b) => a - b);
  keys.forEach((key, i) => {
    index.set(key, i);
  });
  const width = all.length;
  const parts = new Float64Array(keys.length * width);
  all.forEach((m, part) => {
    for (let k = 0; k < m.value.length; k++) {
      const entry = index.get(m.row[k] * size + m.col[k]) as number;
      parts[entry * width + part] += m.value[k];
    }
  });
  return {
    row: Int32Array.from(keys, (key) => Math.floor(key / size)),
    col: Int32Array.from(keys, (key) => key % size),
    parts,
    width,
  };
}

/** Largest frequency at which a coherence turns without drive, 1/ps. */
function fastestCoherence({ levels, constant }: Generator): number {
  let most = 0;
  for (let k = 0; k < constant.value.length; k++) {
    // A coherence's two coordinates feed each other by its frequency.
    const [r, c] = [constant.row[k], constant.col[k]];
    if (r >= levels && c >= levels && r !== c) most = Math.max(most, Math.abs(constant.value[k]));
  }
  return most;
}

/** dy[to] += factor · y[from], for every coupling and matrix entry. */
interface Scatter {
  readonly from: Int32Array;
  readonly to: Int32Array;
  readonly factor: Float64Array;
}

/** Couplings between lanes written out entry by entry: one flat loop beats nested ones in V8. */
function flattenCouplings(hierarchy: Hierarchy, size: number): Scatter {
  const { lanes } = hierarchy;
  const from: number[] = [];
  const to: number[] = [];
  const factor: number[] = [];
  const add = (row: number, col: number, source: number, target: number, value: number): void => {
    from.push(col * lanes + source);
    to.push(row * lanes + target);
    factor.push(value);
  };
  for (const c of hierarchy.couplings) {
    if (c.matrix < 0) {
      for (let r = 0; r < size; r++) add(r, r, c.from, c.to, c.factor);
      continue;
    }
    const m = hierarchy.matrices[c.matrix];
    for (let k = 0; k < m.value.length; k++) add(m.row[k], m.col[k], c.from, c.to, c.factor * m.value[k]);
  }
  for (const b of hierarchy.blocks) {
    if (b.rotation === 0 || b.hermitian) continue;
    for (let r = 0; r < size; r++) {
      add(r, r, b.lane + 1, b.lane, b.rotation);
      add(r, r, b.lane, b.lane + 1, -b.rotation);
    }
  }
  const order = to.map((_, i) => i).sort((i, j) => to[i] - to[j] || from[i] - from[j]);
  return {
    from: Int32Array.from(order, (i) => from[i]),
    to: Int32Array.from(order, (i) => to[i]),
    factor: Float64Array.from(order, (i) => factor[i]),
  };
}

/** A linear right-hand side dy/dt = M(drive values) y with its start: what the propagator steps. */
export interface LinearFlow {
  readonly length: number;
  initial(): Float64Array;
  derivative(drive: Float64Array, y: Float64Array, dy: Float64Array): void;
}

/**
 * The right-hand side of a hierarchy under a drive, as one real linear system.
 * State layout: coordinate-major, [coordinate·lanes + lane], so that one generator entry serves all lanes in a row.
 */
export class LinearSystem implements LinearFlow {
  readonly size: number;
  readonly lanes: number;
  readonly length: number;
  /**
   * Largest damping and turning of a block without drive, the motion of its levels included, 1/ps: bounds the step of an
   * explicit method. 0 where no block is damped or turns by itself: then the density operator alone sets the steps.
   */
  readonly fastest: number;
  protected readonly entries: Entries;
  protected readonly values: Float64Array;
  private readonly damping: Float64Array;
  private readonly damped: boolean;
  private readonly scatter: Scatter;
  private readonly seeded: readonly number[];

  constructor(generator: Generator, hierarchy: Hierarchy) {
    this.size = generator.levels ** 2;
    this.lanes = hierarchy.lanes;
    this.length = this.size * this.lanes;
    this.entries = mergeGenerator(generator);
    this.values = new Float64Array(this.entries.row.length);
    this.damping = new Float64Array(this.lanes);
    for (const b of hierarchy.blocks) {
      this.damping[b.lane] = b.damping;
      if (!b.hermitian) this.damping[b.lane + 1] = b.damping;
    }
    this.damped = this.damping.some((d) => d !== 0);
    const turning = fastestCoherence(generator);
    this.fastest = Math.max(
      0,
      ...hierarchy.blocks.map((b) =>
        b.damping === 0 && b.rotation === 0 ? 0 : Math.hypot(b.damping, Math.abs(b.rotation) + turning),
      ),
    );
    this.scatter = flattenCouplings(hierarchy, this.size);
    this.seeded = hierarchy.seeded.map((block) => hierarchy.blocks[block].lane);
  }

  /** The state before the pulse: everything in the first level, which must be the ground state. */
  initial(): Float64Array {
    const y = new Float64Array(this.length);
    for (const lane of this.seeded) y[lane] = 1;
    return y;
  }

  /**
   * dy = M(t) y for the drive values at t.
   * @param drive Re and Im of each drive component, 1/ps
   */
  derivative(drive: Float64Array, y: Float64Array, dy: Float64Array): void {
    const { row, col } = this.entries;
    const { values, lanes } = this;
    this.refresh(drive);
    if (this.damped) this.applyDamping(y, dy);
    else dy.fill(0);
    for (let k = 0; k < values.length; k++) {
      const v = values[k];
      const r = row[k] * lanes;
      const c = col[k] * lanes;
      for (let h = 0; h < lanes; h++) dy[r + h] += v * y[c + h];
    }
    this.applyCouplings(y, dy);
  }

  /** Sets the values of L(t)'s entries for the drive values at t. */
  protected refresh(drive: Float64Array): void {
    const { parts, width } = this.entries;
    const { values } = this;
    for (let k = 0; k < values.length; k++) {
      let v = parts[k * width];
      for (let p = 1; p < width; p++) v += parts[k * width + p] * drive[p - 1];
      values[k] = v;
    }
  }

  private applyDamping(y: Float64Array, dy: Float64Array): void {
    const { damping, lanes, size } = this;
    for (let r = 0; r < size; r++) {
      const base = r * lanes;
      for (let h = 0; h < lanes; h++) dy[base + h] = -damping[h] * y[base + h];
    }
  }

  private applyCouplings(y: Float64Array, dy: Float64Array): void {
    const { from, to, factor } = this.scatter;
    for (let k = 0; k < to.length; k++) dy[to[k]] += factor[k] * y[from[k]];
  }
}
