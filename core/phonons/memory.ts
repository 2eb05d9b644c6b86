import type { Drive } from '../pulse/drive.js';
import { BackAction } from './back-action.js';
import { adjointTimes, type ComplexMatrix, identity, multiplyInto, timesAdjoint } from './complex-matrix.js';
import { Convolution } from './convolution.js';
import { Hamiltonian, type RaisingEntry, raisingEntries, type SecondOrderModel } from './model.js';
import { type MemorySegment, memorySegments } from './segments.js';
import { LARGEST_DECAY, lagrange, STENCIL, stencilStart } from './stencil.js';
import { MAGNUS_NODES, UnitaryStep } from './unitary.js';

/** Entries of the time-dependent superoperator that a bath adds, tabulated on a uniform grid per segment. */
export interface MemoryTable {
  readonly segments: readonly (MemorySegment & { readonly step: number; readonly values: Float64Array })[];
  readonly row: Int32Array;
  readonly col: Int32Array;
}

export interface MemoryOptions {
  readonly frame: number;
  readonly shift: number;
  /** Every grid step is cut into this many. */
  readonly parts: number;
  /** Time scale of the bath, 1/ω_c, ps. */
  readonly bathTime: number;
  /** How long the bath's own motion lasts after a hard edge, ps. */
  readonly settling: number;
}

/** Phase, in rad, that the fastest motion may advance per grid step. */
const LARGEST_PHASE = 0.4;
/** Grid step over the shortest time scale of the drive. */
const LARGEST_SHARE = 0.3;
/** Grid step over the bath's time scale while the bath itself moves. */
const TRANSIENT_SHARE = 0.16;
/** Steps of the evolution operator per grid step. */
const SUBSTEPS = 2;

/**
 * Tabulates −Σ_a [X_a, Q_aρ − ρQ_a†] along a drive. Q_a = ∫f_a(s) U X_a(t−s) U† ds follows from a convolution in the
 * Heisenberg picture, in which X̃ = U†XU is as smooth as the drive: the bath's fast exponentials are integrated as they
 * are and never limit the step.
 */
export function tabulateMemory(model: SecondOrderModel, drive: Drive, options: MemoryOptions): MemoryTable {
  return new MemoryBuilder(model, drive, options).build();
}

class MemoryBuilder {
  private readonly n: number;
  private readonly hamiltonian: Hamiltonian;
  private readonly step: UnitaryStep;
  private readonly action: BackAction;
  private readonly convolutions: Convolution[];
  private readonly sample: Float64Array;
  private readonly u: ComplexMatrix;
  private readonly dense: Float64Array;
  private readonly fastest: number;
  private pattern: Int32Array = new Int32Array(0);

  constructor(
    private readonly model: SecondOrderModel,
    private readonly drive: Drive,
    private readonly options: MemoryOptions,
  ) {
    this.n = model.scheme.levels.length;
    this.hamiltonian = new Hamiltonian(model.scheme, options.frame, options.shift);
    this.step = new UnitaryStep(this.n);
    this.action = new BackAction(this.n);
    this.convolutions = model.baths.map((b) => new Convolution(b.fit, this.n ** 2));
    this.sample = new Float64Array(2 * drive.components);
    this.u = identity(this.n);
    this.dense = new Float64Array(this.n ** 4);
    this.fastest = Math.max(
      ...model.baths.flatMap((b) => b.fit.poles.map((pole) => Math.hypot(pole.re, pole.im))),
    );
  }

  build(): MemoryTable {
    const { options, model, drive, n } = this;
    const segments = memorySegments(drive, options.settling, model.afterglow);
    this.pattern = this.findPattern();
    const tables = segments.map((segment) => {
      const count = this.stepsOf(segment);
      return {
        ...segment,
        step: (segment.end - segment.start) / count,
        values: this.tabulate(segment, count),
      };
    });
    const size = n * n;
    return {
      segments: tables,
      row: this.pattern.map((p) => Math.floor(p / size)),
      col: this.pattern.map((p) => p % size),
    };
  }

  private stepsOf(segment: MemorySegment): number {
    const { drive, options, model } = this;
    const peak = drive.scales.peakRabi * model.driveFactor;
    const rate = Math.max(Math.hypot(peak, this.hamiltonian.spread), drive.scales.frequency);
    const h = Math.min(
      rate > 0 ? LARGEST_PHASE / rate : Number.POSITIVE_INFINITY,
      LARGEST_SHARE * drive.scales.time,
      LARGEST_DECAY / this.fastest,
      segment.transient ? TRANSIENT_SHARE * options.bathTime : Number.POSITIVE_INFINITY,
    );
    return Math.max(STENCIL - 1, Math.ceil(((segment.end - segment.start) * options.parts) / h));
  }

  private driveAt(t: number, source: number): Float64Array {
    const { sample, drive, model } = this;
    if (source < 0) return sample.fill(0);
    drive.sample(t, source, sample);
    for (let k = 0; k < sample.length; k++) sample[k] *= model.driveFactor;
    return sample;
  }

  private tabulate(segment: MemorySegment, count: number): Float64Array {
    const { n, model, pattern, u, dense } = this;
    const size = n * n;
    const h = (segment.end - segment.start) / count;
    const unitaries = new Float64Array((count + 1) * 2 * size);
    const operators = model.baths.map(() => new Float64Array((count + 1) * 2 * size));
    const series = model.baths.map(() => new Float64Array((count + 1) * size));
    const first = new Float64Array(2 * size);
    const second = new Float64Array(2 * size);
    for (let j = 0; j <= count; j++) {
      const t = segment.start + j * h;
      unitaries.set(u, j * 2 * size);
      const drive = this.driveAt(t, segment.source);
      model.baths.forEach((bath, a) => {
        const x = operators[a].subarray(j * 2 * size, (j + 1) * 2 * size);
        bath.operator(drive, x);
        this.heisenberg(x, series[a].subarray(j * size, (j + 1) * size));
      });
      if (j === count) break;
      for (let part = 0; part < SUBSTEPS; part++) {
        const dt = h / SUBSTEPS;
        const from = t + part * dt;
        this.hamiltonian.at(this.driveAt(from + MAGNUS_NODES[0] * dt, segment.source), first);
        this.hamiltonian.at(this.driveAt(from + MAGNUS_NODES[1] * dt, segment.source), second);
        this.step.advance(first, second, dt, u);
      }
    }
    const values = new Float64Array((count + 1) * pattern.length);
    const q = model.baths.map(() => new Float64Array(2 * size));
    for (const c of this.convolutions) c.setStep(h);
    for (let j = 0; j <= count; j++) {
      const at = unitaries.subarray(j * 2 * size, (j + 1) * 2 * size);
      this.convolutions.forEach((c, a) => {
        if (j > 0) c.advance(series[a], j - 1, count);
        this.schroedinger(c, at, q[a]);
      });
      this.action.matrix(
        operators.map((o) => o.subarray(j * 2 * size, (j + 1) * 2 * size)),
        q,
        dense,
      );
      const base = j * pattern.length;
      for (let e = 0; e < pattern.length; e++) values[base + e] = dense[pattern[e]];
    }
    return values;
  }

  private readonly scratch = [0, 1, 2].map(() => new Float64Array(0));

  private work(index: number): ComplexMatrix {
    if (this.scratch[index].length === 0) this.scratch[index] = new Float64Array(2 * this.n ** 2);
    return this.scratch[index];
  }

  /** Coordinates of U†XU. */
  private heisenberg(x: ComplexMatrix, out: Float64Array): void {
    const { n, u } = this;
    const a = this.work(0);
    const b = this.work(1);
    multiplyInto(n, x, u, a);
    adjointTimes(n, u, a, b);
    for (let i = 0; i < n; i++) out[i] = b[2 * (i * n + i)];
    let k = n;
    for (let i = 0; i < n; i++) {
      for (let j = i + 1; j < n; j++) {
        out[k++] = b[2 * (i * n + j)];
        out[k++] = b[2 * (i * n + j) + 1];
      }
    }
  }

  /** U P U† with P given by complex coordinates: P_ij = x + iy, P_ji = x − iy with complex x, y. */
  private schroedinger(c: Convolution, u: ComplexMatrix, out: ComplexMatrix): void {
    const { n } = this;
    const p = this.work(0);
    const a = this.work(1);
    const b = this.work(2);
    c.value(p);
    for (let i = 0; i < n; i++) {
      a[2 * (i * n + i)] = p[2 * i];
      a[2 * (i * n + i) + 1] = p[2 * i + 1];
    }
    let k = 2 * n;
    for (let i = 0; i < n; i++) {
      for (let j = i + 1; j < n; j++) {
        const up = 2 * (i * n + j);
        const down = 2 * (j * n + i);
        a[up] = p[k] - p[k + 3];
        a[up + 1] = p[k + 1] + p[k + 2];
        a[down] = p[k] + p[k + 3];
        a[down + 1] = p[k + 1] - p[k + 2];
        k += 4;
      }
    }
    multiplyInto(n, u, a, b);
    timesAdjoint(n, b, u, out);
  }

  /** Entries that can differ from zero, given the drive components that ever act. */
  private findPattern(): Int32Array {
    const { n, model } = this;
    const active = activeComponents(this.drive);
    const drive = Float64Array.from(this.sample, (_, k) => (active[k >> 1] ? 0.7 + 0.31 * k : 0));
    const linked = connectivity(
      n,
      raisingEntries(model.scheme).filter((e) => active[e.component]),
    );
    const x = model.baths.map((bath) => {
      const out = new Float64Array(2 * n * n);
      bath.operator(drive, out);
      return out;
    });
    const q = model.baths.map((_, a) =>
      Float64Array.from({ length: 2 * n * n }, (_, k) => (linked[k >> 1] ? Math.sin(1 + k + 7.3 * a) : 0)),
    );
    this.action.matrix(x, q, this.dense);
    const entries: number[] = [];
    this.dense.forEach((v, k) => {
      if (v !== 0) entries.push(k);
    });
    return Int32Array.from(entries);
  }
}

function activeComponents(drive: Drive): boolean[] {
  const value = new Float64Array(2 * drive.components);
  const active = new Array<boolean>(drive.components).fill(false);
  for (let s = 0; s + 1 < drive.breakpoints.length; s++) {
    const a = drive.breakpoints[s];
    const b = drive.breakpoints[s + 1];
    for (let k = 0; k <= 64; k++) {
      drive.sample(a + ((b - a) * k) / 64, s, value);
      for (let c = 0; c < active.length; c++) {
        if (value[2 * c] !== 0 || value[2 * c + 1] !== 0) active[c] = true;
      }
    }
  }
  return active;
}

/** linked[i·n + j]: levels i and j are connected by driven transitions. */
function connectivity(n: number, entries: readonly RaisingEntry[]): boolean[] {
  const group = Array.from({ length: n }, (_, i) => i);
  for (const { upper, lower } of entries) {
    const from = group[upper];
    const to = group[lower];
    group.forEach((g, i) => {
      if (g === from) group[i] = to;
    });
  }
  return Array.from({ length: n * n }, (_, k) => group[Math.floor(k / n)] === group[k % n]);
}

/** Reads a table between its grid points. */
export class MemoryReader {
  private readonly weights = new Float64Array(STENCIL);

  constructor(private readonly table: MemoryTable) {}

  /** Values of the entries at t (ps) inside a segment, written from `offset` on. */
  read(segment: number, t: number, out: Float64Array, offset: number): void {
    const { start, step, values } = this.table.segments[segment];
    const { weights } = this;
    const entries = this.table.row.length;
    const last = values.length / entries - 1;
    const x = (t - start) / step;
    const first = stencilStart(Math.min(Math.max(Math.floor(x), 0), last - 1), last);
    lagrange(x - first, weights);
    const a = first * entries;
    for (let e = 0; e < entries; e++) {
      let sum = 0;
      for (let l = 0, at = a + e; l < STENCIL; l++, at += entries) sum += weights[l] * values[at];
      out[offset + e] = sum;
    }
  }
}
