/**
 * X ↦ UXU† on a Hermitian operator of three levels as one real 9×9 matrix on its coordinates (operators.ts): diagonal,
 * then Re and Im of elements 01, 02, 12. One matrix serves every lane of a counting hierarchy.
 */
export class BlockOfThree {
  readonly matrix = new Float64Array(81);

  /** From the unitary, row-major. */
  set(re: Float64Array, im: Float64Array): void {
    const m = this.matrix;
    for (let i = 0; i < 3; i++) {
      const k = 3 * i;
      diagonalRow(m, 9 * i, re[k], im[k], re[k + 1], im[k + 1], re[k + 2], im[k + 2]);
    }
    for (let pair = 0; pair < 3; pair++) {
      const i = pair === 2 ? 3 : 0;
      const j = pair === 0 ? 3 : 6;
      const at = 27 + 18 * pair;
      coherenceRows(
        m,
        at,
        re[i],
        im[i],
        re[i + 1],
        im[i + 1],
        re[i + 2],
        im[i + 2],
        re[j],
        im[j],
        re[j + 1],
        im[j + 1],
        re[j + 2],
        im[j + 2],
      );
    }
  }

  /** Applies the matrix to nine numbers at each offset. */
  apply(y: Float64Array, offsets: Int32Array): void {
    const m = this.matrix;
    for (let l = 0; l < offsets.length; l++) {
      const o = offsets[l];
      const a = y[o];
      const b = y[o + 1];
      const c = y[o + 2];
      const d = y[o + 3];
      const e = y[o + 4];
      const f = y[o + 5];
      const g = y[o + 6];
      const h = y[o + 7];
      const k = y[o + 8];
      for (let i = 0, r = 0; i < 9; i++, r += 9) {
        y[o + i] =
          m[r] * a +
          m[r + 1] * b +
          m[r + 2] * c +
          (m[r + 3] * d + m[r + 4] * e + m[r + 5] * f) +
          (m[r + 6] * g + m[r + 7] * h + m[r + 8] * k);
      }
    }
  }
}

/** out ← mᵀ·y on nine numbers at each offset, in place. */
export function applyTransposed(m: Float64Array, y: Float64Array, offsets: Int32Array): void {
  for (let l = 0; l < offsets.length; l++) {
    const o = offsets[l];
    const a = y[o];
    const b = y[o + 1];
    const c = y[o + 2];
    const d = y[o + 3];
    const e = y[o + 4];
    const f = y[o + 5];
    const g = y[o + 6];
    const h = y[o + 7];
    const k = y[o + 8];
    for (let j = 0; j < 9; j++) {
      y[o + j] =
        m[j] * a +
        m[j + 9] * b +
        m[j + 18] * c +
        (m[j + 27] * d + m[j + 36] * e + m[j + 45] * f) +
        (m[j + 54] * g + m[j + 63] * h + m[j + 72] * k);
    }
  }
}

function diagonalRow(
  m: Float64Array,
  at: number,
  r0: number,
  i0: number,
  r1: number,
  i1: number,
  r2: number,
  i2: number,
): void {
  m[at] = r0 * r0 + i0 * i0;
  m[at + 1] = r1 * r1 + i1 * i1;
  m[at + 2] = r2 * r2 + i2 * i2;
  m[at + 3] = 2 * (r0 * r1 + i0 * i1);
  m[at + 4] = 2 * (r0 * i1 - i0 * r1);
  m[at + 5] = 2 * (r0 * r2 + i0 * i2);
  m[at + 6] = 2 * (r0 * i2 - i0 * r2);
  m[at + 7] = 2 * (r1 * r2 + i1 * i2);
  m[at + 8] = 2 * (r1 * i2 - i1 * r2);
}

/** Rows of Re and Im X_ij from rows i and j of the unitary. */
function coherenceRows(
  m: Float64Array,
  at: number,
  r0: number,
  i0: number,
  r1: number,
  i1: number,
  r2: number,
  i2: number,
  u0: number,
  v0: number,
  u1: number,
  v1: number,
  u2: number,
  v2: number,
): void {
  m[at] = r0 * u0 + i0 * v0;
  m[at + 9] = i0 * u0 - r0 * v0;
  m[at + 1] = r1 * u1 + i1 * v1;
  m[at + 10] = i1 * u1 - r1 * v1;
  m[at + 2] = r2 * u2 + i2 * v2;
  m[at + 11] = i2 * u2 - r2 * v2;
  coherence(m, at + 3, r0, i0, r1, i1, u0, v0, u1, v1);
  coherence(m, at + 5, r0, i0, r2, i2, u0, v0, u2, v2);
  coherence(m, at + 7, r1, i1, r2, i2, u1, v1, u2, v2);
}

/** Columns Re and Im X_kl: A = U_ik U*_jl, B = U_il U*_jk. */
function coherence(
  m: Float64Array,
  at: number,
  rk: number,
  ik: number,
  rl: number,
  il: number,
  uk: number,
  vk: number,
  ul: number,
  vl: number,
): void {
  const ar = rk * ul + ik * vl;
  const ai = ik * ul - rk * vl;
  const br = rl * uk + il * vk;
  const bi = il * uk - rl * vk;
  m[at] = ar + br;
  m[at + 1] = bi - ai;
  m[at + 9] = ai + bi;
  m[at + 10] = ar - br;
}
