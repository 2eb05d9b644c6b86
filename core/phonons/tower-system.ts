import type { Hierarchy } from '../counting/hierarchy.js';
import type { Scheme } from '../emitter/contract.js';
import type { Generator } from '../emitter/generator.js';
import { addTransfer, combine, commutatorMap, multiply, superoperator, zero } from '../emitter/operators.js';
import { type Entries, type LinearFlow, mergeGenerator } from '../kernels/linear-system.js';
import type { Tower } from './tower.js';

/** Lanes that are summed together in registers. */
const GROUP = 8;

interface Link {
  readonly row: number;
  readonly col: number;
  readonly from: number;
  readonly to: number;
  readonly factor: number;
}

/**
 * Every operator of the counting hierarchy as a tower of auxiliary operators: decay, drive and counting act on each storey
 * alike. State layout [(coordinate·storeys + storey)·stride + lane]: a generator entry serves all storeys and lanes in one
 * row. Links between storeys are kept per target, so that a group of lanes is summed in registers; `stride` is the number
 * of lanes rounded up to whole groups.
 */
export class TowerSystem implements LinearFlow {
  readonly length: number;
  readonly lanes: number;
  readonly size: number;
  private readonly entries: Entries;
  private readonly values: Float64Array;
  /** Generator entries of row r are rowStart[r] … rowStart[r+1]−1. */
  private readonly rowStart: Int32Array;
  /** Lanes padded to a multiple of GROUP. */
  readonly stride: number;
  /** Links by target: those of target t are first[t] … first[t+1]−1. */
  private readonly first: Int32Array;
  private readonly sources: Int32Array;
  private readonly factors: Float64Array;
  private readonly counting: StoreyCoupling;

  constructor(
    generator: Generator,
    readonly hierarchy: Hierarchy,
    scheme: Scheme,
    readonly tower: Tower,
  ) {
    this.size = generator.levels ** 2;
    this.lanes = hierarchy.lanes;
    this.stride = GROUP * Math.ceil(this.lanes / GROUP);
    this.length = this.size * tower.lanes * this.stride;
    this.entries = mergeGenerator(generator);
    this.values = new Float64Array(this.entries.row.length);
    this.rowStart = new Int32Array(this.size + 1);
    for (const r of this.entries.row) this.rowStart[r + 1] += 1;
    for (let r = 0; r < this.size; r++) this.rowStart[r + 1] += this.rowStart[r];
    this.counting = couplingWithinStorey(hierarchy, this.size, this.stride);
    const links = towerLinks(scheme, tower);
    const targets = this.size * tower.lanes;
    this.first = new Int32Array(targets + 1);
    for (const l of links) this.first[l.to * this.size + l.row + 1] += 1;
    for (let t = 0; t < targets; t++) this.first[t + 1] += this.first[t];
    this.sources = Int32Array.from(links, (l) => l.from * this.size + l.col);
    this.factors = Float64Array.from(links, (l) => l.factor);
  }

  initial(): Float64Array {
    const y = new Float64Array(this.length);
    for (const block of this.hierarchy.seeded) y[this.hierarchy.blocks[block].lane] = 1;
    return y;
  }

  /** Index of a coordinate of the root operator of a lane. */
  root(coordinate: number, lane: number): number {
    return coordinate * this.stride + lane;
  }

  derivative(drive: Float64Array, y: Float64Array, dy: Float64Array): void {
    const { parts, width } = this.entries;
    const { values } = this;
    for (let k = 0; k < values.length; k++) {
      let v = parts[k * width];
      for (let p = 1; p < width; p++) v += parts[k * width + p] * drive[p - 1];
      values[k] = v;
    }
    this.acrossStoreys(y, dy);
    this.applyCounting(y, dy);
  }

  /**
   * One lane without drive and counting: the tower of a single operator under decay, bath and an extra damping (1/ps).
   * Layout [storey·coordinates + coordinate].
   */
  bathAndDecay(y: Float64Array, dy: Float64Array, damping: number): void {
    this.bathOnLane(y, dy, damping);
    const { row, col, parts, width } = this.entries;
    const { size } = this;
    for (let base = 0; base < this.tower.lanes * size; base += size) {
      for (let k = 0; k < row.length; k++) dy[base + row[k]] += parts[k * width] * y[base + col[k]];
    }
  }

  /** dy = links and decay of the storeys, for one lane. */
  private bathOnLane(y: Float64Array, dy: Float64Array, extra: number): void {
    const { first, sources, factors, size } = this;
    const { damping } = this.tower;
    for (let t = 0; t < first.length - 1; t++) {
      let sum = -(damping[Math.floor(t / size)] + extra) * y[t];
      for (let k = first[t]; k < first[t + 1]; k++) sum += factors[k] * y[sources[k]];
      dy[t] = sum;
    }
  }

  /** dy = bath, decay of the storeys and generator, for all lanes, a group at a time. */
  private acrossStoreys(y: Float64Array, dy: Float64Array): void {
    const { first, sources, factors, size, stride, values, rowStart } = this;
    const { col } = this.entries;
    const { damping } = this.tower;
    for (let t = 0; t < first.length - 1; t++) {
      const storey = Math.floor(t / size);
      const d = -damping[storey];
      const begin = first[t];
      const end = first[t + 1];
      const own = storey * size;
      const ownBegin = rowStart[t - own];
      const ownEnd = rowStart[t - own + 1];
      for (let g = 0; g < stride; g += GROUP) {
        const at = t * stride + g;
        let a0 = d * y[at];
        let a1 = d * y[at + 1];
        let a2 = d * y[at + 2];
        let a3 = d * y[at + 3];
        let a4 = d * y[at + 4];
        let a5 = d * y[at + 5];
        let a6 = d * y[at + 6];
        let a7 = d * y[at + 7];
        for (let k = begin; k < end; k++) {
          const f = factors[k];
          const from = sources[k] * stride + g;
          a0 += f * y[from];
          a1 += f * y[from + 1];
          a2 += f * y[from + 2];
          a3 += f * y[from + 3];
          a4 += f * y[from + 4];
          a5 += f * y[from + 5];
          a6 += f * y[from + 6];
          a7 += f * y[from + 7];
        }
        for (let k = ownBegin; k < ownEnd; k++) {
          const f = values[k];
          const from = (own + col[k]) * stride + g;
          a0 += f * y[from];
          a1 += f * y[from + 1];
          a2 += f * y[from + 2];
          a3 += f * y[from + 3];
          a4 += f * y[from + 4];
          a5 += f * y[from + 5];
          a6 += f * y[from + 6];
          a7 += f * y[from + 7];
        }
        dy[at] = a0;
        dy[at + 1] = a1;
        dy[at + 2] = a2;
        dy[at + 3] = a3;
        dy[at + 4] = a4;
        dy[at + 5] = a5;
        dy[at + 6] = a6;
        dy[at + 7] = a7;
      }
    }
  }

  /** Counting, damping and rotation of blocks, the same in every storey. */
  private applyCounting(y: Float64Array, dy: Float64Array): void {
    const { target, source, factor } = this.counting;
    const storey = this.size * this.stride;
    for (let shift = 0; shift < this.length; shift += storey) {
      for (let k = 0; k < factor.length; k++) dy[target[k] + shift] += factor[k] * y[source[k] + shift];
    }
  }
}

/** dy[target] += factor · y[source] inside one storey, as offsets. */
interface StoreyCoupling {
  readonly target: Int32Array;
  readonly source: Int32Array;
  readonly factor: Float64Array;
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
  const sorted = [...found.entries()].filter(([, f]) => f !== 0).sort((a, b) => a[0] - b[0]);
  // Sums into one target are spread out: one right after the other each would wait for the store before it.
  const rank = new Map<number, number>();
  const entries = sorted
    .map((entry) => {
      const target = Math.floor(entry[0] / length);
      const turn = rank.get(target) ?? 0;
      rank.set(target, turn + 1);
      return { entry, turn };
    })
    .sort((a, b) => a.turn - b.turn || a.entry[0] - b.entry[0])
    .map(({ entry }) => entry);
  return {
    target: Int32Array.from(entries, ([key]) => Math.floor(key / length)),
    source: Int32Array.from(entries, ([key]) => key % length),
    factor: Float64Array.from(entries, ([, factor]) => factor),
  };
}

/** Links between storeys written out per coordinate, and the turning of X into Y within a storey. */
export function towerLinks(scheme: Scheme, tower: Tower): Link[] {
  const n = scheme.levels.length;
  const s = zero(n);
  scheme.levels.forEach((level, i) => {
    addTransfer(s, i, i, level.excitons);
  });
  const commutator = commutatorMap(s);
  const anticommutator = superoperator(n, (x) => combine(multiply(s, x), 0.5, 0, multiply(x, s), 0.5, 0));
  const links: Link[] = [];
  for (const link of tower.links) {
    for (const [m, factor] of [
      [commutator, link.commutator],
      [anticommutator, link.anticommutator],
    ] as const) {
      if (factor === 0) continue;
      for (let k = 0; k < m.value.length; k++) {
        links.push({
          row: m.row[k],
          col: m.col[k],
          from: link.from,
          to: link.to,
          factor: factor * m.value[k],
        });
      }
    }
  }
  for (const { from, to, factor } of tower.turns) {
    for (let r = 0; r < n * n; r++) links.push({ row: r, col: r, from, to, factor });
  }
  return links.sort((a, b) => a.to - b.to || a.row - b.row || a.from - b.from || a.col - b.col);
}
