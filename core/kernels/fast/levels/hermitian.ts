/**
 * Numbers of a traceless Hermitian 3×3 matrix: differences of diagonal elements 0−1 and 1−2, then re, im of elements
 * 01, 12 and 02.
 */
export const MATRIX = 8;

/** −i[A, B] of two matrices in one work space. */
export function commute(w: Float64Array, a: number, b: number, out: number): void {
  const a01 = w[a];
  const a12 = w[a + 1];
  const ar = w[a + 2];
  const ai = w[a + 3];
  const br = w[a + 4];
  const bi = w[a + 5];
  const cr = w[a + 6];
  const ci = w[a + 7];
  const b01 = w[b];
  const b12 = w[b + 1];
  const pr = w[b + 2];
  const pi = w[b + 3];
  const qr = w[b + 4];
  const qi = w[b + 5];
  const rr = w[b + 6];
  const ri = w[b + 7];
  const s01 = 2 * (ai * pr - ar * pi);
  const s12 = 2 * (bi * qr - br * qi);
  const s02 = 2 * (ci * rr - cr * ri);
  w[out] = 2 * s01 + s02 - s12;
  w[out + 1] = 2 * s12 + s02 - s01;
  w[out + 2] = a01 * pi - b01 * ai + (ci * qr - cr * qi) - (ri * br - rr * bi);
  w[out + 3] = b01 * ar - a01 * pr - (cr * qr + ci * qi) + (rr * br + ri * bi);
  w[out + 4] = a12 * qi - b12 * bi + (ar * ri - ai * rr) - (pr * ci - pi * cr);
  w[out + 5] = b12 * br - a12 * qr - (ar * rr + ai * ri) + (pr * cr + pi * ci);
  const a02 = a01 + a12;
  const b02 = b01 + b12;
  w[out + 6] = a02 * ri - b02 * ci + (ar * qi + ai * qr) - (pr * bi + pi * br);
  w[out + 7] = b02 * cr - a02 * rr - (ar * qr - ai * qi) + (pr * br - pi * bi);
}

const left = new Float64Array(18);

/** UQU†, or U†QU, of the numbers of a matrix; `out` may be `q`. */
export function turned(
  ur: Float64Array,
  ui: Float64Array,
  q: Float64Array,
  adjoint: boolean,
  out: Float64Array,
): void {
  const d0 = (2 * q[0] + q[1]) / 3;
  const d1 = (q[1] - q[0]) / 3;
  const d2 = -d0 - d1;
  const [, , ar, ai, br, bi, cr, ci] = q;
  // Rows of W = U or U†, times Q.
  for (let i = 0; i < 3; i++) {
    const [k, l, m] = adjoint ? [i, i + 3, i + 6] : [3 * i, 3 * i + 1, 3 * i + 2];
    const s = adjoint ? -1 : 1;
    const x0 = ur[k];
    const y0 = s * ui[k];
    const x1 = ur[l];
    const y1 = s * ui[l];
    const x2 = ur[m];
    const y2 = s * ui[m];
    const o = 6 * i;
    left[o] = x0 * d0 + (x1 * ar + y1 * ai) + (x2 * cr + y2 * ci);
    left[o + 1] = y0 * d0 + (y1 * ar - x1 * ai) + (y2 * cr - x2 * ci);
    left[o + 2] = x1 * d1 + (x0 * ar - y0 * ai) + (x2 * br + y2 * bi);
    left[o + 3] = y1 * d1 + (x0 * ai + y0 * ar) + (y2 * br - x2 * bi);
    left[o + 4] = x2 * d2 + (x0 * cr - y0 * ci) + (x1 * br - y1 * bi);
    left[o + 5] = y2 * d2 + (x0 * ci + y0 * cr) + (x1 * bi + y1 * br);
  }
  const e0 = element(ur, ui, 0, 0, adjoint, 0);
  const e1 = element(ur, ui, 1, 1, adjoint, 0);
  const e2 = element(ur, ui, 2, 2, adjoint, 0);
  out[0] = e0 - e1;
  out[1] = e1 - e2;
  out[2] = element(ur, ui, 0, 1, adjoint, 0);
  out[3] = element(ur, ui, 0, 1, adjoint, 1);
  out[4] = element(ur, ui, 1, 2, adjoint, 0);
  out[5] = element(ur, ui, 1, 2, adjoint, 1);
  out[6] = element(ur, ui, 0, 2, adjoint, 0);
  out[7] = element(ur, ui, 0, 2, adjoint, 1);
}

/** Re (part 0) or Im of row i of `left` times the adjoint of row j of W. */
function element(
  ur: Float64Array,
  ui: Float64Array,
  i: number,
  j: number,
  adjoint: boolean,
  part: 0 | 1,
): number {
  let sum = 0;
  for (let k = 0; k < 3; k++) {
    const at = adjoint ? 3 * k + j : 3 * j + k;
    const x = ur[at];
    const y = adjoint ? -ui[at] : ui[at];
    const a = left[6 * i + 2 * k];
    const b = left[6 * i + 2 * k + 1];
    sum += part === 0 ? a * x + b * y : b * x - a * y;
  }
  return sum;
}
