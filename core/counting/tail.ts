import { LuDecomposition, Matrix } from 'ml-matrix';
import type { Generator } from '../emitter/generator.js';
import { toDense } from '../emitter/operators.js';
import type { Hierarchy } from './hierarchy.js';

/**
 * Closed form of everything that happens after the drive. Once L is constant, each figure is a linear functional of
 * the state at the end of the drive: figure = Σ effect · state. The functional e is the limit of the adjoint flow: it
 * is constant in time, so e A = 0 for the whole (block-triangular) generator A, with e fixed on the coordinates that
 * never decay (the trace for the target's own block, zero elsewhere). Blocks are solved from the target backwards.
 */
export interface TailEffects {
  readonly names: readonly string[];
  /** One row per target, length size·lanes, layout [coordinate·lanes + lane] like the propagator's state. */
  readonly rows: readonly Float64Array[];
}

interface Outflow {
  readonly matrix: number;
  readonly factor: number;
  readonly to: number;
}

export function tailEffects(generator: Generator, hierarchy: Hierarchy): TailEffects {
  const solver = new TailSolver(generator, hierarchy);
  return {
    names: hierarchy.targets.map((t) => t.name),
    rows: hierarchy.targets.map((t) => solver.row(t.block, t.factor)),
  };
}

class TailSolver {
  private readonly size: number;
  private readonly constant: Float64Array;
  private readonly outflow: Outflow[][];
  private readonly selfLoops: Coupling[][];
  private readonly factored = new Map<string, LuDecomposition>();
  private readonly order: number[];

  constructor(
    private readonly generator: Generator,
    private readonly hierarchy: Hierarchy,
  ) {
    this.size = generator.levels ** 2;
    this.constant = toDense(generator.constant);
    const lanes = hierarchy.lanes;
    this.outflow = Array.from({ length: lanes }, () => []);
    this.selfLoops = Array.from({ length: lanes }, () => []);
    for (const c of hierarchy.couplings) {
      if (c.from === c.to) this.selfLoops[c.from].push(c);
      else this.outflow[c.from].push(c);
    }
    this.order = reverseOrder(hierarchy);
  }

  private lanesOf(block: number): number[] {
    const b = this.hierarchy.blocks[block];
    return b.hermitian ? [b.lane] : [b.lane, b.lane + 1];
  }

  row(target: number, factor: number): Float64Array {
    const { lanes } = this.hierarchy;
    const effect: (Float64Array | null)[] = new Array(lanes).fill(null);
    for (const block of this.order) {
      const inflow = this.lanesOf(block).map((lane) => this.inflow(lane, effect));
      if (block !== target && inflow.every((v) => v === null)) continue;
      this.solve(block, block === target ? factor : 0, inflow, effect);
    }
    const row = new Float64Array(this.size * lanes);
    effect.forEach((e, lane) => {
      if (e) for (let r = 0; r < this.size; r++) row[r * lanes + lane] = e[r];
    });
    return row;
  }

  /** Σ over sources: (effect of what the lane feeds) · matrix, as a row; null when it feeds nothing that counts. */
  private inflow(lane: number, effect: readonly (Float64Array | null)[]): Float64Array | null {
    let out: Float64Array | null = null;
    for (const { matrix, factor, to } of this.outflow[lane]) {
      const e = effect[to];
      if (!e) continue;
      out ??= new Float64Array(this.size);
      if (matrix < 0) {
        for (let r = 0; r < this.size; r++) out[r] += factor * e[r];
        continue;
      }
      const m = this.hierarchy.matrices[matrix];
      for (let k = 0; k < m.value.length; k++) out[m.col[k]] += factor * m.value[k] * e[m.row[k]];
    }
    return out;
  }

  /** Solves e G = −inflow on the coordinates that decay, with e given on the others. */
  private solve(
    block: number,
    trace: number,
    inflow: readonly (Float64Array | null)[],
    effect: (Float64Array | null)[],
  ): void {
    const b = this.hierarchy.blocks[block];
    const lanes = this.lanesOf(block);
    const damped = b.damping !== 0 || b.rotation !== 0;
    const { free, fixed } = this.split(damped);
    const given = new Float64Array(this.size);
    if (trace !== 0) for (let i = 0; i < this.generator.levels; i++) if (fixed.includes(i)) given[i] = trace;
    const rhs = new Float64Array(free.length * lanes.length);
    const dense = this.blockMatrix(block);
    lanes.forEach((_, h) => {
      free.forEach((r, k) => {
        let v = -(inflow[h]?.[r] ?? 0);
        if (h === 0 && trace !== 0) for (const f of fixed) v -= given[f] * dense[f * this.size + r];
        rhs[h * free.length + k] = v;
      });
    });
    const lu = this.factor(block, free, dense);
    const x = lu.solve(Matrix.columnVector(rhs));
    lanes.forEach((lane, h) => {
      const e = new Float64Array(this.size);
      if (h === 0) for (const f of fixed) e[f] = given[f];
      free.forEach((r, k) => {
        e[r] = x.get(h * free.length + k, 0);
      });
      effect[lane] = e;
    });
  }

  private split(damped: boolean): { free: number[]; fixed: number[] } {
    const all = Array.from({ length: this.size }, (_, i) => i);
    if (damped) return { free: all, fixed: [] };
    return {
      free: all.filter((i) => !this.generator.stable[i]),
      fixed: all.filter((i) => this.generator.stable[i]),
    };
  }

  /** L plus the block's own couplings (such as −J of the counted branches), without damping. */
  private blockMatrix(block: number): Float64Array {
    const loops = this.selfLoops[this.hierarchy.blocks[block].lane];
    if (loops.length === 0) return this.constant;
    const dense = this.constant.slice();
    for (const { matrix, factor } of loops) {
      const m = this.hierarchy.matrices[matrix];
      for (let k = 0; k < m.value.length; k++) dense[m.row[k] * this.size + m.col[k]] += factor * m.value[k];
    }
    return dense;
  }

  /** LU of the transposed block generator [[L − a, b], [−b, L − a]], shared by blocks with equal a, b. */
  private factor(block: number, free: readonly number[], dense: Float64Array): LuDecomposition {
    const b = this.hierarchy.blocks[block];
    const own = this.selfLoops[b.lane].map((c) => `${c.matrix}*${c.factor}`).join('+');
    const key = `${b.hermitian}|${b.damping}|${b.rotation}|${own}`;
    const found = this.factored.get(key);
    if (found) return found;
    const n = free.length;
    const halves = b.hermitian ? 1 : 2;
    const m = Matrix.zeros(n * halves, n * halves);
    for (let h = 0; h < halves; h++) {
      for (let r = 0; r < n; r++) {
        for (let c = 0; c < n; c++) {
          const v = dense[free[r] * this.size + free[c]] - (r === c ? b.damping : 0);
          m.set(h * n + c, h * n + r, v);
        }
      }
    }
    if (halves === 2) {
      for (let r = 0; r < n; r++) {
        m.set(n + r, r, b.rotation);
        m.set(r, n + r, -b.rotation);
      }
    }
    const lu = new LuDecomposition(m);
    this.factored.set(key, lu);
    return lu;
  }
}

type Coupling = Hierarchy['couplings'][number];

/** Blocks so that whatever a block feeds comes before it. */
export function reverseOrder({ blocks, couplings }: Hierarchy): number[] {
  const owner: number[] = [];
  blocks.forEach((b, i) => {
    owner[b.lane] = i;
    if (!b.hermitian) owner[b.lane + 1] = i;
  });
  const fed: number[][] = blocks.map(() => []);
  for (const c of couplings) if (c.from !== c.to) fed[owner[c.from]].push(owner[c.to]);
  const done = new Set<number>();
  const order: number[] = [];
  const visit = (block: number): void => {
    if (done.has(block)) return;
    done.add(block);
    fed[block].forEach(visit);
    order.push(block);
  };
  blocks.forEach((_, i) => {
    visit(i);
  });
  return order;
}
