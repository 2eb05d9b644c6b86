import type { Hierarchy } from '../counting/hierarchy.js';
import type { Generator } from '../emitter/generator.js';
import type { SparseMatrix } from '../emitter/operators.js';

interface Entries {
  readonly row: Int32Array;
  readonly col: Int32Array;
  /** Value without drive, then per drive component the factors of Re Ω and Im Ω: [entry·width + part]. */
  readonly parts: Float64Array;
  readonly width: number;
}

/** Merges the sparse parts of L(t) into one entry list, so that a stage only refreshes the values. */
function mergeGenerator(generator: Generator): Entries {
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

interface Scatter {
  readonly row: number;
  readonly col: number;
  readonly from: Int32Array;
  readonly to: Int32Array;
  readonly factor: Float64Array;
}

/** Couplings regrouped by matrix entry, so that the inner loop runs over lanes. */
function groupCouplings(hierarchy: Hierarchy): {
  entries: Scatter[];
  identity: Omit<Scatter, 'row' | 'col'>;
} {
  const entries: Scatter[] = [];
  hierarchy.matrices.forEach((m, index) => {
    const own = hierarchy.couplings.filter((c) => c.matrix === index);
    if (own.length === 0) return;
    for (let k = 0; k < m.value.length; k++) {
      entries.push({
        row: m.row[k],
        col: m.col[k],
        from: Int32Array.from(own, (c) => c.from),
        to: Int32Array.from(own, (c) => c.to),
        factor: Float64Array.from(own, (c) => c.factor * m.value[k]),
      });
    }
  });
  const plain = hierarchy.couplings.filter((c) => c.matrix < 0);
  const turns = hierarchy.blocks.filter((b) => b.rotation !== 0 && !b.hermitian);
  return {
    entries,
    identity: {
      from: Int32Array.from([...plain.map((c) => c.from), ...turns.flatMap((b) => [b.lane + 1, b.lane])]),
      to: Int32Array.from([...plain.map((c) => c.to), ...turns.flatMap((b) => [b.lane, b.lane + 1])]),
      factor: Float64Array.from([
        ...plain.map((c) => c.factor),
        ...turns.flatMap((b) => [b.rotation, -b.rotation]),
      ]),
    },
  };
}

/**
 * The right-hand side of a hierarchy under a drive, as one real linear system.
 * State layout: coordinate-major, [coordinate·lanes + lane], so that one generator entry serves all lanes in a row.
 */
export class LinearSystem {
  readonly size: number;
  readonly lanes: number;
  readonly length: number;
  /** Largest damping or rotation of a block, 1/ps: bounds the step of an explicit method. */
  readonly fastest: number;
  private readonly entries: Entries;
  private readonly values: Float64Array;
  private readonly damping: Float64Array;
  private readonly damped: boolean;
  private readonly scatter: Scatter[];
  private readonly identity: Omit<Scatter, 'row' | 'col'>;
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
    this.fastest = Math.max(0, ...hierarchy.blocks.map((b) => Math.hypot(b.damping, b.rotation)));
    const grouped = groupCouplings(hierarchy);
    this.scatter = grouped.entries;
    this.identity = grouped.identity;
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
    const { row, col, parts, width } = this.entries;
    const { values, lanes } = this;
    for (let k = 0; k < values.length; k++) {
      let v = parts[k * width];
      for (let p = 1; p < width; p++) v += parts[k * width + p] * drive[p - 1];
      values[k] = v;
    }
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

  private applyDamping(y: Float64Array, dy: Float64Array): void {
    const { damping, lanes, size } = this;
    for (let r = 0; r < size; r++) {
      const base = r * lanes;
      for (let h = 0; h < lanes; h++) dy[base + h] = -damping[h] * y[base + h];
    }
  }

  private applyCouplings(y: Float64Array, dy: Float64Array): void {
    const { lanes, size, identity } = this;
    for (const { row, col, from, to, factor } of this.scatter) {
      const r = row * lanes;
      const c = col * lanes;
      for (let k = 0; k < from.length; k++) dy[r + to[k]] += factor[k] * y[c + from[k]];
    }
    const { from, to, factor } = identity;
    for (let r = 0; r < size; r++) {
      const base = r * lanes;
      for (let k = 0; k < from.length; k++) dy[base + to[k]] += factor[k] * y[base + from[k]];
    }
  }
}
