/**
 * Numbers of a traceless Hermitian 3×3 matrix: differences of diagonal elements 0−1 and 1−2, then re, im of elements
 * 01, 12 and 02.
 */
export const MATRIX = 8;

/** −i[A, B] of two matrices in one work space. */
export function commute(m: Float64Array, a: number, b: number, out: number): void {
  const a01 = m[a];
  const a12 = m[a + 1];
  const ar = m[a + 2];
  const ai = m[a + 3];
  const br = m[a + 4];
  const bi = m[a + 5];
  const cr = m[a + 6];
  const ci = m[a + 7];
  const b01 = m[b];
  const b12 = m[b + 1];
  const pr = m[b + 2];
  const pi = m[b + 3];
  const qr = m[b + 4];
  const qi = m[b + 5];
  const rr = m[b + 6];
  const ri = m[b + 7];
  const s01 = 2 * (ai * pr - ar * pi);
  const s12 = 2 * (bi * qr - br * qi);
  const s02 = 2 * (ci * rr - cr * ri);
  m[out] = 2 * s01 + s02 - s12;
  m[out + 1] = 2 * s12 + s02 - s01;
  m[out + 2] = a01 * pi - b01 * ai + (ci * qr - cr * qi) - (ri * br - rr * bi);
  m[out + 3] = b01 * ar - a01 * pr - (cr * qr + ci * qi) + (rr * br + ri * bi);
  m[out + 4] = a12 * qi - b12 * bi + (ar * ri - ai * rr) - (pr * ci - pi * cr);
  m[out + 5] = b12 * br - a12 * qr - (ar * rr + ai * ri) + (pr * cr + pi * ci);
  const a02 = a01 + a12;
  const b02 = b01 + b12;
  m[out + 6] = a02 * ri - b02 * ci + (ar * qi + ai * qr) - (pr * bi + pi * br);
  m[out + 7] = b02 * cr - a02 * rr - (ar * qr - ai * qi) + (pr * br - pi * bi);
}

/** Rows of U or U† (re, im), and their product with Q. */
const w = new Float64Array(18);
const left = new Float64Array(18);

/**
 * UQU†, or U†QU, of the numbers of a matrix; `out` may be `q`.
 * @param at index of the first of U's nine numbers
 */
export function turned(
  ur: Float64Array,
  ui: Float64Array,
  at: number,
  q: Float64Array,
  adjoint: boolean,
  out: Float64Array,
): void {
  for (let i = 0; i < 3; i++) {
    for (let j = 0; j < 3; j++) {
      const k = adjoint ? at + 3 * j + i : at + 3 * i + j;
      w[6 * i + 2 * j] = ur[k];
      w[6 * i + 2 * j + 1] = adjoint ? -ui[k] : ui[k];
    }
  }
  const d0 = (2 * q[0] + q[1]) / 3;
  const d1 = (q[1] - q[0]) / 3;
  const d2 = -d0 - d1;
  const ar = q[2];
  const ai = q[3];
  const br = q[4];
  const bi = q[5];
  const cr = q[6];
  const ci = q[7];
  for (let o = 0; o < 18; o += 6) {
    const x0 = w[o];
    const y0 = w[o + 1];
    const x1 = w[o + 2];
    const y1 = w[o + 3];
    const x2 = w[o + 4];
    const y2 = w[o + 5];
    left[o] = x0 * d0 + (x1 * ar + y1 * ai) + (x2 * cr + y2 * ci);
    left[o + 1] = y0 * d0 + (y1 * ar - x1 * ai) + (y2 * cr - x2 * ci);
    left[o + 2] = x1 * d1 + (x0 * ar - y0 * ai) + (x2 * br + y2 * bi);
    left[o + 3] = y1 * d1 + (x0 * ai + y0 * ar) + (y2 * br - x2 * bi);
    left[o + 4] = x2 * d2 + (x0 * cr - y0 * ci) + (x1 * br - y1 * bi);
    left[o + 5] = y2 * d2 + (x0 * ci + y0 * cr) + (x1 * bi + y1 * br);
  }
  const e0 = realOf(0, 0);
  const e1 = realOf(6, 6);
  out[0] = e0 - e1;
  out[1] = e1 - realOf(12, 12);
  out[2] = realOf(0, 6);
  out[3] = imaginaryOf(0, 6);
  out[4] = realOf(6, 12);
  out[5] = imaginaryOf(6, 12);
  out[6] = realOf(0, 12);
  out[7] = imaginaryOf(0, 12);
}

/** Row of `left` at i times the adjoint of the row of `w` at j. */
function realOf(i: number, j: number): number {
  return (
    left[i] * w[j] +
    left[i + 1] * w[j + 1] +
    (left[i + 2] * w[j + 2] + left[i + 3] * w[j + 3]) +
    (left[i + 4] * w[j + 4] + left[i + 5] * w[j + 5])
  );
}

function imaginaryOf(i: number, j: number): number {
  return (
    left[i + 1] * w[j] -
    left[i] * w[j + 1] +
    (left[i + 3] * w[j + 2] - left[i + 2] * w[j + 3]) +
    (left[i + 5] * w[j + 4] - left[i + 4] * w[j + 5])
  );
}
