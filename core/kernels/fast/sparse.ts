/** Real sparse matrix by rows. */
export interface SparseRows {
  readonly size: number;
  /** Entries of row r: start[r] … start[r + 1] − 1. */
  readonly start: Int32Array;
  readonly col: Int32Array;
  readonly value: Float64Array;
}

/** Rows from entry lists; entries at one place are added. */
export function sparseRows(
  size: number,
  row: readonly number[],
  col: readonly number[],
  value: readonly number[],
): SparseRows {
  const rows: Map<number, number>[] = Array.from({ length: size }, () => new Map());
  row.forEach((r, k) => {
    rows[r].set(col[k], (rows[r].get(col[k]) ?? 0) + value[k]);
  });
  return fromMaps(rows);
}

function fromMaps(rows: readonly Map<number, number>[]): SparseRows {
  const start = new Int32Array(rows.length + 1);
  rows.forEach((r, i) => {
    start[i + 1] = start[i] + r.size;
  });
  const col = new Int32Array(start[rows.length]);
  const value = new Float64Array(start[rows.length]);
  rows.forEach((r, i) => {
    const sorted = [...r.entries()].sort((a, b) => a[0] - b[0]);
    sorted.forEach(([c, v], k) => {
      col[start[i] + k] = c;
      value[start[i] + k] = v;
    });
  });
  return { size: rows.length, start, col, value };
}

/** factor · a · b (row by row; Gustavson, ACM Trans. Math. Softw. 4, 250 (1978)). */
function product(a: SparseRows, b: SparseRows, factor: number): SparseRows {
  const { size } = a;
  const sums = new Float64Array(size);
  const seen = new Int32Array(size).fill(-1);
  const start = new Int32Array(size + 1);
  const col: number[] = [];
  const value: number[] = [];
  for (let r = 0; r < size; r++) {
    const used: number[] = [];
    for (let k = a.start[r]; k < a.start[r + 1]; k++) {
      const v = factor * a.value[k];
      const m = a.col[k];
      for (let l = b.start[m]; l < b.start[m + 1]; l++) {
        const c = b.col[l];
        if (seen[c] !== r) {
          seen[c] = r;
          sums[c] = 0;
          used.push(c);
        }
        sums[c] += v * b.value[l];
      }
    }
    used.sort((x, y) => x - y);
    for (const c of used) {
      if (sums[c] === 0) continue;
      col.push(c);
      value.push(sums[c]);
    }
    start[r + 1] = col.length;
  }
  return { size, start, col: Int32Array.from(col), value: Float64Array.from(value) };
}

/** Entries of an exponential below this are dropped. */
const NEGLIGIBLE = 1e-20;
/** Largest ‖hK‖ for which the power series keeps its digits. */
const LARGEST_NORM = 6;

/** Exponentials e^{hK} of one matrix for any step h, from its powers, which are made once. */
export class ExponentialFamily {
  /** Largest sum of magnitudes in a row of K, 1/ps. */
  readonly norm: number;
  private readonly powers: SparseRows[];

  constructor(private readonly k: SparseRows) {
    this.powers = [];
    let norm = 0;
    for (let r = 0; r < k.size; r++) {
      let sum = 0;
      for (let i = k.start[r]; i < k.start[r + 1]; i++) sum += Math.abs(k.value[i]);
      norm = Math.max(norm, sum);
    }
    this.norm = norm;
  }

  /** e^{hK}, or null where the series would lose digits. */
  at(h: number): SparseRows | null {
    const reach = h * this.norm;
    if (!(reach <= LARGEST_NORM)) return null;
    const { size } = this.k;
    const sums = new Float64Array(size);
    const seen = new Int32Array(size).fill(-1);
    const start = new Int32Array(size + 1);
    const col: number[] = [];
    const value: number[] = [];
    let terms = 0;
    for (let bound = 1; bound > 1e-18; terms++) bound *= reach / (terms + 1);
    for (let t = this.powers.length + 1; t <= terms; t++) {
      this.powers.push(t === 1 ? this.k : product(this.powers[t - 2], this.k, 1 / t));
    }
    const scales = Float64Array.from({ length: terms }, (_, t) => h ** (t + 1));
    for (let r = 0; r < size; r++) {
      const used: number[] = [r];
      seen[r] = r;
      sums[r] = 1;
      for (let t = 0; t < terms; t++) {
        const p = this.powers[t];
        for (let i = p.start[r]; i < p.start[r + 1]; i++) {
          const c = p.col[i];
          if (seen[c] !== r) {
            seen[c] = r;
            sums[c] = 0;
            used.push(c);
          }
          sums[c] += scales[t] * p.value[i];
        }
      }
      used.sort((x, y) => x - y);
      for (const c of used) {
        if (Math.abs(sums[c]) < NEGLIGIBLE) continue;
        col.push(c);
        value.push(sums[c]);
      }
      start[r + 1] = col.length;
    }
    return { size, start, col: Int32Array.from(col), value: Float64Array.from(value) };
  }
}

/** out = m · y. */
export function applyRows(m: SparseRows, y: Float64Array, out: Float64Array): void {
  const { start, col, value, size } = m;
  let k = start[0];
  for (let r = 0; r < size; r++) {
    const end = start[r + 1];
    let sum = 0;
    for (; k < end; k++) sum += value[k] * y[col[k]];
    out[r] = sum;
  }
}
