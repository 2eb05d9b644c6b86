import { coherencePairs } from '../../emitter/operators.js';
import type { Component } from './levels/coordinates.js';

/**
 * The map X ↦ U X U† on the coordinates of one component (operators.ts): an orthogonal-like real matrix, row-major.
 */
export class SuperRotation {
  readonly matrix: Float64Array;
  private readonly m: number;
  /** Per coordinate: the two levels and whether it is a diagonal (0), real (1) or imaginary (2) part. */
  private readonly spots: readonly (readonly [number, number, 0 | 1 | 2])[];

  constructor(
    private readonly levels: number,
    private readonly component: Component,
  ) {
    const pairs = coherencePairs(levels);
    this.spots = component.coordinates.map((c) => {
      if (c < levels) return [c, c, 0] as const;
      const [i, j] = pairs[(c - levels) >> 1];
      return [i, j, (c - levels) % 2 === 0 ? 1 : 2] as const;
    });
    this.m = component.coordinates.length;
    this.matrix = new Float64Array(this.m * this.m);
  }

  /** Fills the matrix from the unitary. */
  set(re: Float64Array, im: Float64Array): void {
    const { spots, matrix, m, levels: n } = this;
    for (let r = 0; r < m; r++) {
      const [i, j, kind] = spots[r];
      for (let c = 0; c < m; c++) {
        const [k, l, from] = spots[c];
        const ik = i * n + k;
        const jl = j * n + l;
        // U_ik U*_jl, and U_il U*_jk for the other half of a coherence.
        const ar = re[ik] * re[jl] + im[ik] * im[jl];
        const ai = im[ik] * re[jl] - re[ik] * im[jl];
        let v: number;
        if (from === 0) v = kind === 2 ? ai : ar;
        else {
          const il = i * n + l;
          const jk = j * n + k;
          const br = re[il] * re[jk] + im[il] * im[jk];
          const bi = im[il] * re[jk] - re[il] * im[jk];
          if (from === 1) v = kind === 2 ? ai + bi : ar + br;
          else v = kind === 2 ? ar - br : bi - ai;
        }
        matrix[r * m + c] = v;
      }
    }
  }

  /** Applies the matrix to every lane's part of the state. */
  apply(y: Float64Array, scratch: Float64Array): void {
    const { matrix, m } = this;
    const { offsets } = this.component;
    if (m === 1) {
      const v = matrix[0];
      for (let a = 0; a < offsets.length; a++) y[offsets[a]] *= v;
      return;
    }
    if (m === 3 || m === 4) {
      this.applySmall(y);
      return;
    }
    for (let a = 0; a < offsets.length; a++) {
      const o = offsets[a];
      for (let j = 0; j < m; j++) scratch[j] = y[o + j];
      for (let i = 0; i < m; i++) {
        const row = i * m;
        let sum = 0;
        for (let j = 0; j < m; j++) sum += matrix[row + j] * scratch[j];
        y[o + i] = sum;
      }
    }
  }

  /** Applies the transpose. */
  applyTransposed(y: Float64Array, scratch: Float64Array): void {
    const { matrix, m } = this;
    const { offsets } = this.component;
    for (let a = 0; a < offsets.length; a++) {
      const o = offsets[a];
      for (let j = 0; j < m; j++) scratch[j] = y[o + j];
      for (let j = 0; j < m; j++) {
        let sum = 0;
        for (let i = 0; i < m; i++) sum += matrix[i * m + j] * scratch[i];
        y[o + j] = sum;
      }
    }
  }

  private applySmall(y: Float64Array): void {
    const { matrix: r, m } = this;
    const { offsets } = this.component;
    if (m === 3) {
      const a0 = r[0];
      const a1 = r[1];
      const a2 = r[2];
      const b0 = r[3];
      const b1 = r[4];
      const b2 = r[5];
      const c0 = r[6];
      const c1 = r[7];
      const c2 = r[8];
      for (let a = 0; a < offsets.length; a++) {
        const o = offsets[a];
        const p = y[o];
        const q = y[o + 1];
        const s = y[o + 2];
        y[o] = a0 * p + a1 * q + a2 * s;
        y[o + 1] = b0 * p + b1 * q + b2 * s;
        y[o + 2] = c0 * p + c1 * q + c2 * s;
      }
      return;
    }
    const a0 = r[0];
    const a1 = r[1];
    const a2 = r[2];
    const a3 = r[3];
    const b0 = r[4];
    const b1 = r[5];
    const b2 = r[6];
    const b3 = r[7];
    const c0 = r[8];
    const c1 = r[9];
    const c2 = r[10];
    const c3 = r[11];
    const d0 = r[12];
    const d1 = r[13];
    const d2 = r[14];
    const d3 = r[15];
    for (let a = 0; a < offsets.length; a++) {
      const o = offsets[a];
      const p = y[o];
      const q = y[o + 1];
      const s = y[o + 2];
      const t = y[o + 3];
      y[o] = a0 * p + a1 * q + a2 * s + a3 * t;
      y[o + 1] = b0 * p + b1 * q + b2 * s + b3 * t;
      y[o + 2] = c0 * p + c1 * q + c2 * s + c3 * t;
      y[o + 3] = d0 * p + d1 * q + d2 * s + d3 * t;
    }
  }
}
