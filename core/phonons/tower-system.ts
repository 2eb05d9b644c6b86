import type { Hierarchy } from '../counting/hierarchy.js';
import type { Scheme } from '../emitter/contract.js';
import type { Generator } from '../emitter/generator.js';
import { addTransfer, combine, commutatorMap, multiply, superoperator, zero } from '../emitter/operators.js';
import { type Entries, type LinearFlow, mergeGenerator } from '../kernels/linear-system.js';
import type { Tower } from './tower.js';

interface Link {
  readonly row: number;
  readonly col: number;
  readonly from: number;
  readonly to: number;
  readonly factor: number;
}

/**
 * Every operator of the counting hierarchy as a tower of auxiliary operators: decay, drive and counting act on each storey
 * alike. State layout [(coordinate·storeys + storey)·lanes + lane]: a generator entry serves all storeys and lanes in one
 * row, a link between storeys all lanes in one row.
 */
export class TowerSystem implements LinearFlow {
  readonly length: number;
  readonly lanes: number;
  readonly size: number;
  private readonly entries: Entries;
  private readonly values: Float64Array;
  private readonly links: readonly Link[];
  private readonly rows: Int32Array;
  private readonly cols: Int32Array;
  private readonly factors: Float64Array;

  constructor(
    generator: Generator,
    readonly hierarchy: Hierarchy,
    scheme: Scheme,
    readonly tower: Tower,
  ) {
    this.size = generator.levels ** 2;
    this.lanes = hierarchy.lanes;
    this.length = this.size * tower.lanes * this.lanes;
    this.entries = mergeGenerator(generator);
    this.values = new Float64Array(this.entries.row.length);
    this.links = towerLinks(scheme, tower);
    const width = this.lanes;
    this.rows = Int32Array.from(this.links, (l) => (l.row * tower.lanes + l.to) * width);
    this.cols = Int32Array.from(this.links, (l) => (l.col * tower.lanes + l.from) * width);
    this.factors = Float64Array.from(this.links, (l) => l.factor);
  }

  initial(): Float64Array {
    const y = new Float64Array(this.length);
    for (const block of this.hierarchy.seeded) y[this.hierarchy.blocks[block].lane] = 1;
    return y;
  }

  /** Index of a coordinate of the root operator of a lane. */
  root(coordinate: number, lane: number): number {
    return coordinate * this.tower.lanes * this.lanes + lane;
  }

  derivative(drive: Float64Array, y: Float64Array, dy: Float64Array): void {
    const { row, col, parts, width } = this.entries;
    const { values, tower, lanes } = this;
    for (let k = 0; k < values.length; k++) {
      let v = parts[k * width];
      for (let p = 1; p < width; p++) v += parts[k * width + p] * drive[p - 1];
      values[k] = v;
    }
    this.applyDamping(y, dy);
    const run = tower.lanes * lanes;
    for (let k = 0; k < values.length; k++) {
      const v = values[k];
      const r = row[k] * run;
      const c = col[k] * run;
      for (let h = 0; h < run; h++) dy[r + h] += v * y[c + h];
    }
    this.applyLinks(y, dy);
    this.applyCounting(y, dy);
  }

  /**
   * One lane without drive and counting: the tower of a single operator under decay, bath and an extra damping (1/ps).
   * Layout [coordinate·storeys + storey].
   */
  bathAndDecay(y: Float64Array, dy: Float64Array, damping: number): void {
    const { row, col, parts, width } = this.entries;
    const { size, lanes } = this;
    const storeys = this.tower.lanes;
    for (let r = 0; r < size; r++) {
      for (let s = 0; s < storeys; s++) {
        dy[r * storeys + s] = -(this.tower.damping[s] + damping) * y[r * storeys + s];
      }
    }
    for (let k = 0; k < row.length; k++) {
      const v = parts[k * width];
      if (v === 0) continue;
      const r = row[k] * storeys;
      const c = col[k] * storeys;
      for (let s = 0; s < storeys; s++) dy[r + s] += v * y[c + s];
    }
    const { rows, cols, factors } = this;
    for (let k = 0; k < factors.length; k++) dy[rows[k] / lanes] += factors[k] * y[cols[k] / lanes];
  }

  /** dy of the storeys' own decay. */
  private applyDamping(y: Float64Array, dy: Float64Array): void {
    const { size, lanes, tower } = this;
    const { damping } = tower;
    for (let r = 0; r < size; r++) {
      for (let s = 0; s < tower.lanes; s++) {
        const base = (r * tower.lanes + s) * lanes;
        const d = damping[s];
        for (let h = 0; h < lanes; h++) dy[base + h] = -d * y[base + h];
      }
    }
  }

  private applyLinks(y: Float64Array, dy: Float64Array): void {
    const { rows, cols, factors, lanes } = this;
    for (let k = 0; k < factors.length; k++) {
      const f = factors[k];
      const r = rows[k];
      const c = cols[k];
      for (let h = 0; h < lanes; h++) dy[r + h] += f * y[c + h];
    }
  }

  private applyCounting(y: Float64Array, dy: Float64Array): void {
    const { hierarchy, size, tower, lanes } = this;
    const storeys = tower.lanes;
    const add = (row: number, col: number, from: number, to: number, factor: number): void => {
      let a = row * storeys * lanes + to;
      let b = col * storeys * lanes + from;
      for (let s = 0; s < storeys; s++) {
        dy[a] += factor * y[b];
        a += lanes;
        b += lanes;
      }
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
      for (let half = 0; half < (b.hermitian ? 1 : 2); half++) {
        const lane = b.lane + half;
        for (let r = 0; r < size; r++) {
          if (b.damping !== 0) add(r, r, lane, lane, -b.damping);
          if (b.rotation !== 0 && !b.hermitian) {
            add(r, r, lane, half === 0 ? lane + 1 : b.lane, half === 0 ? -b.rotation : b.rotation);
          }
        }
      }
    }
  }
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
  return links.sort((a, b) => a.row - b.row || a.to - b.to || a.col - b.col || a.from - b.from);
}
