import type { Generator } from '../emitter/generator.js';
import { toDense } from '../emitter/operators.js';
import { gmres } from './gmres.js';
import type { Tower } from './tower.js';
import type { TowerSystem } from './tower-system.js';

const TOLERANCE = 1e-10;
const MOST_ITERATIONS = 400;

/**
 * The filtered moments after the drive. With a constant generator every block of the hierarchy, tower and all, enters
 * only through its time integral, X̄ = −A⁻¹(X + sources), which is solved from the sources onwards. The emitted light
 * needs no such solve: elements between levels of equal exciton number do not feel the bath.
 * @returns target values by name
 */
export function filteredTail(
  system: TowerSystem,
  generator: Generator,
  state: Float64Array,
  wanted: (name: string) => boolean,
): Record<string, number> {
  const solver = new TowerTail(system, generator, state);
  const values: Record<string, number> = {};
  for (const target of system.hierarchy.targets) {
    if (wanted(target.name)) values[target.name] = target.factor * solver.finalTrace(target.block);
  }
  return values;
}

class TowerTail {
  private readonly tower: Tower;
  private readonly half: number;
  private readonly owner: number[] = [];
  /** Time integral per lane of the hierarchy, [storey·coordinates + coordinate]. */
  private readonly integrals = new Map<number, Float64Array>();
  private readonly dense: Float64Array;
  private readonly stable: boolean[];

  constructor(
    private readonly system: TowerSystem,
    private readonly generator: Generator,
    private readonly state: Float64Array,
  ) {
    this.tower = system.tower;
    this.half = system.size * this.tower.lanes;
    system.hierarchy.blocks.forEach((b, i) => {
      this.owner[b.lane] = i;
      if (!b.hermitian) this.owner[b.lane + 1] = i;
    });
    this.dense = toDense(generator.constant);
    this.stable = Array.from({ length: this.half }, (_, k) => k < system.size && generator.stable[k]);
  }

  finalTrace(block: number): number {
    const { lane } = this.system.hierarchy.blocks[block];
    const source = this.inflow(lane);
    let sum = 0;
    for (let i = 0; i < this.generator.levels; i++) {
      sum += this.state[this.system.root(i, lane)] + source[i];
    }
    return sum;
  }

  /** Σ over sources of a lane: factor · matrix · integral. */
  private inflow(lane: number): Float64Array {
    const { hierarchy, size } = this.system;
    const out = new Float64Array(this.half);
    for (const c of hierarchy.couplings) {
      if (c.to !== lane || c.from === lane) continue;
      const x = this.integral(c.from);
      if (c.matrix < 0) {
        for (let k = 0; k < out.length; k++) out[k] += c.factor * x[k];
        continue;
      }
      const m = hierarchy.matrices[c.matrix];
      for (let base = 0; base < out.length; base += size) {
        for (let k = 0; k < m.value.length; k++) {
          out[base + m.row[k]] += c.factor * m.value[k] * x[base + m.col[k]];
        }
      }
    }
    return out;
  }

  private integral(lane: number): Float64Array {
    const known = this.integrals.get(lane);
    if (known) return known;
    const block = this.system.hierarchy.blocks[this.owner[lane]];
    const halves = block.hermitian ? 1 : 2;
    const undamped = block.damping === 0 && block.rotation === 0;
    const rhs = new Float64Array(halves * this.half);
    for (let h = 0; h < halves; h++) {
      const source = this.inflow(block.lane + h);
      for (let k = 0; k < this.half; k++) {
        if (undamped && this.stable[k]) continue;
        rhs[h * this.half + k] = -source[k] - this.state[k * this.system.stride + block.lane + h];
      }
    }
    const outcome = gmres(
      (v, out) => this.apply(v, out, halves, block.damping, block.rotation, undamped),
      (v, out) => this.precondition(v, out, halves, block.damping, block.rotation, undamped),
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
      this.integrals.set(block.lane + h, outcome.x.subarray(h * this.half, (h + 1) * this.half));
    }
    return this.integrals.get(lane) as Float64Array;
  }

  private apply(
    v: Float64Array,
    out: Float64Array,
    halves: number,
    damping: number,
    rotation: number,
    undamped: boolean,
  ): void {
    const n = this.half;
    for (let h = 0; h < halves; h++) {
      this.system.bathAndDecay(v.subarray(h * n, (h + 1) * n), out.subarray(h * n, (h + 1) * n), damping);
    }
    if (halves === 2 && rotation !== 0) {
      for (let k = 0; k < n; k++) {
        out[k] += rotation * v[n + k];
        out[n + k] -= rotation * v[k];
      }
    }
    if (undamped) this.clear(out, halves);
  }

  private clear(v: Float64Array, halves: number): void {
    for (let k = 0; k < this.half; k++) {
      if (this.stable[k]) for (let h = 0; h < halves; h++) v[h * this.half + k] = 0;
    }
  }

  /** Inverse of decay and rotation of each matrix element of each storey, links and feeding left out. */
  private precondition(
    v: Float64Array,
    out: Float64Array,
    halves: number,
    damping: number,
    rotation: number,
    undamped: boolean,
  ): void {
    const { levels } = this.generator;
    const size = this.system.size;
    for (const storey of this.tower.storeys) {
      for (let i = 0; i < levels; i++) this.divide(v, out, halves, storey, i, -1, damping, rotation);
      for (let c = levels; c < size; c += 2) {
        this.divide(v, out, halves, storey, c, c + 1, damping, rotation);
      }
    }
    if (undamped) this.clear(out, halves);
  }

  /**
   * One matrix element (coordinates a = Re, b = Im part; b = −1 for a diagonal one). The storey and its mirror image are
   * u = (X₁ − Y₂) + i(X₂ + Y₁) and v = (X₁ + Y₂) + i(Y₁ − X₂), X and Y the halves of the block, 1 and 2 of the storey.
   */
  private divide(
    from: Float64Array,
    to: Float64Array,
    halves: number,
    storey: Tower['storeys'][number],
    a: number,
    b: number,
    damping: number,
    rotation: number,
  ): void {
    const { size } = this.system;
    const at = (coordinate: number, h: number, second: boolean): number =>
      h * this.half + (storey.lane + (second ? 1 : 0)) * size + coordinate;
    const get = (coordinate: number, h: number, second: boolean): number =>
      coordinate < 0 || h >= halves || (second && storey.hermitian) ? 0 : from[at(coordinate, h, second)];
    const decay = -this.dense[a * size + a] + damping + storey.decay[0];
    const own = b < 0 ? 0 : this.dense[a * size + b];
    const result = (['u', 'v'] as const).map((which) => {
      const sign = which === 'u' ? 1 : -1;
      const turn = rotation + sign * storey.decay[1];
      const complex = (coordinate: number): [number, number] => [
        get(coordinate, 0, false) - sign * get(coordinate, 1, true),
        sign * get(coordinate, 0, true) + get(coordinate, 1, false),
      ];
      const [xr, xi] = complex(a);
      const [yr, yi] = complex(b);
      // Elements (i, j) and (j, i): x ± iy, each with its own frequency.
      const upper = ratio(xr - yi, xi + yr, -decay, -turn - own);
      const lower = ratio(xr + yi, xi - yr, -decay, -turn + own);
      return {
        a: [(upper[0] + lower[0]) / 2, (upper[1] + lower[1]) / 2],
        b: [(upper[1] - lower[1]) / 2, -(upper[0] - lower[0]) / 2],
      };
    });
    const [u, w] = result;
    const write = (coordinate: number, p: number[], q: number[]): void => {
      to[at(coordinate, 0, false)] = (p[0] + q[0]) / 2;
      if (!storey.hermitian) to[at(coordinate, 0, true)] = (p[1] - q[1]) / 2;
      if (halves < 2) return;
      to[at(coordinate, 1, false)] = (p[1] + q[1]) / 2;
      if (!storey.hermitian) to[at(coordinate, 1, true)] = (q[0] - p[0]) / 2;
    };
    write(a, u.a, w.a);
    if (b >= 0) write(b, u.b, w.b);
  }
}

function ratio(ar: number, ai: number, br: number, bi: number): [number, number] {
  const size = br * br + bi * bi;
  return size === 0 ? [0, 0] : [(ar * br + ai * bi) / size, (ai * br - ar * bi) / size];
}
