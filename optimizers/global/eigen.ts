/**
 * Eigenvalues and eigenvectors (columns of `vectors`) of a small symmetric matrix by cyclic Jacobi rotations (Golub &
 * Van Loan, *Matrix Computations*, section 8.5). Values that are not finite end it without a result worth using, never
 * in a loop.
 */
export function symmetricEigen(matrix: readonly (readonly number[])[]): {
  values: number[];
  vectors: number[][];
} {
  const n = matrix.length;
  const a = matrix.map((row) => [...row]);
  const v = a.map((_, i) => a.map((_, k) => (i === k ? 1 : 0)));
  for (let sweep = 0; sweep < 30; sweep++) {
    let off = 0;
    let diagonal = 0;
    for (let i = 0; i < n; i++) {
      diagonal += a[i][i] * a[i][i];
      for (let k = 0; k < i; k++) off += a[i][k] * a[i][k];
    }
    if (!(off > 1e-30 * diagonal)) break;
    for (let p = 0; p < n; p++) for (let q = p + 1; q < n; q++) rotate(a, v, p, q);
  }
  return { values: a.map((row, i) => row[i]), vectors: v };
}

function rotate(a: number[][], v: number[][], p: number, q: number): void {
  if (a[p][q] === 0) return;
  const theta = (a[q][q] - a[p][p]) / (2 * a[p][q]);
  const t = (theta >= 0 ? 1 : -1) / (Math.abs(theta) + Math.sqrt(theta * theta + 1));
  const c = 1 / Math.sqrt(t * t + 1);
  const s = t * c;
  for (let i = 0; i < a.length; i++) {
    const [x, y] = [a[i][p], a[i][q]];
    a[i][p] = c * x - s * y;
    a[i][q] = s * x + c * y;
  }
  for (let i = 0; i < a.length; i++) {
    const [x, y] = [a[p][i], a[q][i]];
    a[p][i] = c * x - s * y;
    a[q][i] = s * x + c * y;
    const [vx, vy] = [v[i][p], v[i][q]];
    v[i][p] = c * vx - s * vy;
    v[i][q] = s * vx + c * vy;
  }
}
