import type { Hierarchy } from '../counting/hierarchy.js';
import type { Generator } from '../emitter/generator.js';
import { type Entries, mergeGenerator } from '../kernels/linear-system.js';
import type { ExponentialFlow } from './exponential-step.js';
import type { Tower } from './tower.js';
import { GROUP, roomFor, type TowerKernel, type TowerMatrices, towerKernel } from './tower-kernel.js';
import type { TowerLinks } from './tower-links.js';

/**
 * Every operator of the counting hierarchy as a tower of auxiliary operators: decay, drive and counting act on each storey
 * alike. State layout [(storey·coordinates + coordinate)·stride + lane]: links between storeys are kept per target, so
 * that a group of lanes is summed in registers; `stride` is the number of lanes rounded up to whole groups. A system holds
 * until the next one is made (tower-kernel.ts).
 */
export class TowerSystem implements ExponentialFlow {
  readonly length: number;
  readonly lanes: number;
  readonly size: number;
  readonly stride: number;
  private readonly entries: Entries;
  private readonly kernel: TowerKernel;
  private readonly matrices: TowerMatrices;
  private readonly copies: readonly Float64Array[];

  constructor(
    generator: Generator,
    readonly hierarchy: Hierarchy,
    readonly tower: Tower,
    links: TowerLinks,
    kernelFor: (bytes: number) => TowerKernel = towerKernel,
  ) {
    this.size = generator.levels ** 2;
    this.lanes = hierarchy.lanes;
    this.stride = GROUP * Math.ceil(this.lanes / GROUP);
    this.length = this.size * tower.lanes * this.stride;
    this.entries = mergeGenerator(generator);
    const { kernel, matrices } = this.layOut(links, kernelFor);
    this.kernel = kernel;
    this.matrices = matrices;
    this.copies = [0, 1, 2].map(() => kernel.floats(this.length));
    kernel.rewind();
  }

  vector(): Float64Array {
    return this.kernel.floats(this.length);
  }

  /** The start of a propagation; vectors of an earlier one are over. */
  initial(): Float64Array {
    this.kernel.rewind();
    const y = this.vector();
    for (const block of this.hierarchy.seeded) y[this.hierarchy.blocks[block].lane] = 1;
    return y;
  }

  /** Index of a coordinate of the root operator of a lane. */
  root(coordinate: number, lane: number): number {
    return coordinate * this.stride + lane;
  }

  /** For arrays from elsewhere, by way of copies. */
  derivative(drive: Float64Array, y: Float64Array, dy: Float64Array): void {
    const [from, to, unused] = this.copies;
    from.set(y);
    this.setDrive(drive);
    this.addTerm(from, to, 1, unused);
    dy.set(to);
  }

  setDrive(drive: Float64Array): void {
    const { parts, width } = this.entries;
    const { values } = this.matrices;
    for (let k = 0; k < values.length; k++) {
      let v = parts[k * width];
      for (let p = 1; p < width; p++) v += parts[k * width + p] * drive[p - 1];
      values[k] = v;
    }
  }

  addTerm(y: Float64Array, term: Float64Array, factor: number, sum: Float64Array): void {
    this.kernel.addTerm(this.matrices, y, term, factor, sum);
  }

  /** Places all matrices in a kernel's room, offsets in bytes, with room left for the vectors of a propagation. */
  private layOut(
    links: TowerLinks,
    kernelFor: (bytes: number) => TowerKernel,
  ): { kernel: TowerKernel; matrices: TowerMatrices } {
    const { size, entries, tower, hierarchy } = this;
    const stride = 8 * this.stride;
    const rowStart = new Int32Array(size + 1);
    for (const r of entries.row) rowStart[r + 1] += 1;
    for (let r = 0; r < size; r++) rowStart[r + 1] += rowStart[r];
    const counting = couplingWithinStorey(hierarchy, size, this.stride);
    const numbers =
      VECTORS * this.length +
      tower.lanes +
      links.factors.length +
      entries.row.length +
      counting.factors.length;
    const wholes =
      links.first.length +
      links.sources.length +
      rowStart.length +
      entries.col.length +
      3 * counting.factors.length +
      1;
    const kernel = kernelFor(roomFor(numbers, wholes, VECTORS + 12));
    return {
      kernel,
      matrices: {
        storeys: tower.lanes,
        size,
        stride,
        damping: kernel.floats(tower.damping),
        first: kernel.ints(links.first),
        sources: kernel.ints(links.sources.map((s) => s * stride)),
        factors: kernel.floats(links.factors),
        rowStart: kernel.ints(rowStart),
        columns: kernel.ints(entries.col.map((c) => c * stride)),
        values: kernel.floats(entries.row.length),
        countTargets: kernel.ints(counting.targets),
        countFirst: kernel.ints(counting.first),
        countSources: kernel.ints(counting.sources),
        countFactors: kernel.floats(counting.factors),
      },
    };
  }
}

/** Vectors of a propagation: the state, two terms, and the copies for arrays from elsewhere. */
const VECTORS = 6;

/** What feeds what inside one storey, by target, as byte offsets. */
interface StoreyCoupling {
  readonly targets: Int32Array;
  readonly first: Int32Array;
  readonly sources: Int32Array;
  readonly factors: Float64Array;
}

function couplingWithinStorey(hierarchy: Hierarchy, size: number, stride: number): StoreyCoupling {
  const length = size * stride;
  const found = new Map<number, number>();
  const add = (row: number, col: number, from: number, to: number, factor: number): void => {
    const key = (row * stride + to) * length + col * stride + from;
    found.set(key, (found.get(key) ?? 0) + factor);
  };
  for (const c of hierarchy.couplings) {
    if (c.matrix < 0) {
      for (let r = 0; r < size; r++) add(r, r, c.from, c.to, c.factor);
      continue;
    }
    const m = hierarchy.matrices[c.matrix];
    for (let k = 0; k < m.value.length; k++) {
      add(m.row[k], m.col[k], c.from, c.to, c.factor * m.value[k]);
    }
  }
  for (const b of hierarchy.blocks) {
    for (let r = 0; r < size; r++) {
      for (let half = 0; half < (b.hermitian ? 1 : 2); half++) {
        if (b.damping !== 0) add(r, r, b.lane + half, b.lane + half, -b.damping);
      }
      if (b.rotation === 0 || b.hermitian) continue;
      add(r, r, b.lane + 1, b.lane, b.rotation);
      add(r, r, b.lane, b.lane + 1, -b.rotation);
    }
  }
  const entries = [...found].filter(([, factor]) => factor !== 0).sort((a, b) => a[0] - b[0]);
  const rows = entries.map(([key]) => Math.floor(key / length));
  const starts = rows.flatMap((row, k) => (row === rows[k - 1] ? [] : [k]));
  return {
    targets: Int32Array.from(starts, (k) => 8 * rows[k]),
    first: Int32Array.of(...starts, entries.length),
    sources: Int32Array.from(entries, ([key]) => 8 * (key % length)),
    factors: Float64Array.from(entries, ([, factor]) => factor),
  };
}
