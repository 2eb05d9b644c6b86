import type { ComplexMatrix } from './complex-matrix.js';
import { multiplyInto } from './complex-matrix.js';

/**
 * The map ρ ↦ −Σ_a [X_a, Q_aρ − ρQ_a†] as a real matrix on coordinate vectors (diagonal first, then Re and Im of each
 * pair i < j), row-major.
 */
export class BackAction {
  private readonly product: ComplexMatrix;
  private readonly map: Float64Array;
  private readonly sum: ComplexMatrix;

  constructor(private readonly n: number) {
    this.product = new Float64Array(2 * n * n);
    this.sum = new Float64Array(2 * n * n);
    this.map = new Float64Array(2 * n * n);
  }

  matrix(x: readonly ComplexMatrix[], q: readonly ComplexMatrix[], out: Float64Array): void {
    const { n, product, sum } = this;
    sum.fill(0);
    x.forEach((operator, a) => {
      multiplyInto(n, operator, q[a], product);
      for (let k = 0; k < sum.length; k++) sum[k] += product[k];
    });
    let pair = n;
    for (let r = 0; r < n; r++) {
      this.images(r, r, x, q);
      this.writeRow(out, r, false);
    }
    for (let r = 0; r < n; r++) {
      for (let s = r + 1; s < n; s++) {
        this.images(r, s, x, q);
        this.writeRow(out, pair, false);
        this.writeRow(out, pair + 1, true);
        pair += 2;
      }
    }
  }

  /** Element (r, s) of the image of |i⟩⟨j|, for every i and j. */
  private images(r: number, s: number, x: readonly ComplexMatrix[], q: readonly ComplexMatrix[]): void {
    const { n, map, sum } = this;
    map.fill(0);
    for (let i = 0; i < n; i++) {
      map[2 * (i * n + s)] -= sum[2 * (r * n + i)];
      map[2 * (i * n + s) + 1] -= sum[2 * (r * n + i) + 1];
      map[2 * (r * n + i)] -= sum[2 * (s * n + i)];
      map[2 * (r * n + i) + 1] += sum[2 * (s * n + i) + 1];
    }
    for (let a = 0; a < x.length; a++) {
      addOuter(n, x[a], r, q[a], s, map);
      // Q_ri X_js = Q_ri conj(X_sj), X being Hermitian.
      addOuter(n, q[a], r, x[a], s, map);
    }
  }

  private writeRow(out: Float64Array, row: number, imaginary: boolean): void {
    const { n, map } = this;
    const base = row * n * n;
    const part = imaginary ? 1 : 0;
    for (let i = 0; i < n; i++) out[base + i] = map[2 * (i * n + i) + part];
    let column = base + n;
    for (let i = 0; i < n; i++) {
      for (let j = i + 1; j < n; j++) {
        const a = 2 * (i * n + j);
        const b = 2 * (j * n + i);
        out[column] = map[a + part] + map[b + part];
        // Image of i|i⟩⟨j| − i|j⟩⟨i|.
        out[column + 1] = imaginary ? map[a] - map[b] : map[b + 1] - map[a + 1];
        column += 2;
      }
    }
  }
}

/** map_ij += a_ri conj(b_sj). */
function addOuter(
  n: number,
  a: ComplexMatrix,
  r: number,
  b: ComplexMatrix,
  s: number,
  map: Float64Array,
): void {
  for (let i = 0; i < n; i++) {
    const re = a[2 * (r * n + i)];
    const im = a[2 * (r * n + i) + 1];
    if (re === 0 && im === 0) continue;
    for (let j = 0; j < n; j++) {
      const x = b[2 * (s * n + j)];
      const y = b[2 * (s * n + j) + 1];
      map[2 * (i * n + j)] += re * x + im * y;
      map[2 * (i * n + j) + 1] += im * x - re * y;
    }
  }
}
