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
