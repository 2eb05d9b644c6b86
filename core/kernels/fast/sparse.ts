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
export function product(a: SparseRows, b: SparseRows, factor: number): SparseRows {
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

/** Sum of matrices of one size; entries that cancel to rounding are dropped. */
export function sumOf(matrices: readonly SparseRows[]): SparseRows {
  const rows: Map<number, number>[] = Array.from({ length: matrices[0].size }, () => new Map());
  let largest = 0;
  for (const m of matrices) {
    for (let r = 0; r < m.size; r++) {
      for (let k = m.start[r]; k < m.start[r + 1]; k++) {
        rows[r].set(m.col[k], (rows[r].get(m.col[k]) ?? 0) + m.value[k]);
        largest = Math.max(largest, Math.abs(m.value[k]));
      }
    }
  }
  for (const row of rows) {
    for (const [c, v] of row) if (Math.abs(v) <= 1e-13 * largest) row.delete(c);
  }
  return fromMaps(rows);
}

/** Largest ‖hK‖ for which the power series keeps its digits. */
const LARGEST_NORM = 6;

/** Terms of the power series of e^x that reach rounding for |x| up to `reach`. */
function termsFor(reach: number): number {
  let terms = 0;
  for (let bound = 1; bound > 1e-18; terms++) bound *= reach / (terms + 1);
  return terms;
}

/** Exponentials e^{hK} of one matrix for any step h, from its powers, which are made once on one common pattern. */
export class ExponentialFamily {
  /** Largest sum of magnitudes in a row of K, 1/ps. */
  readonly norm: number;
  private readonly powers: SparseRows[];
  private pattern: {
    readonly start: Int32Array;
    readonly col: Int32Array;
    readonly terms: Float64Array[];
  } | null = null;

  constructor(readonly matrix: SparseRows) {
    const k = matrix;
    let norm = 0;
    for (let r = 0; r < k.size; r++) {
      let sum = 0;
      for (let i = k.start[r]; i < k.start[r + 1]; i++) sum += Math.abs(k.value[i]);
      norm = Math.max(norm, sum);
    }
    this.norm = norm;
    this.powers = [identity(k.size)];
  }

  /**
   * e^{hK}, or null where the series would lose digits.
   * @param reuse an earlier answer whose numbers may be overwritten
   */
  at(h: number, reuse: SparseRows | null = null): SparseRows | null {
    const reach = h * this.norm;
    if (!(reach <= LARGEST_NORM)) return null;
    const count = termsFor(reach);
    const { start, col, terms } = this.patterned(count);
    // From the highest power down; the sum does not depend on how many more powers happen to be known.
    const value = reuse && reuse.col === col ? reuse.value : new Float64Array(col.length);
    value.set(terms[count]);
    for (let t = count - 1; t >= 0; t--) {
      const term = terms[t];
      for (let i = 0; i < value.length; i++) value[i] = value[i] * h + term[i];
    }
    return { size: this.matrix.size, start, col, value };
  }

  /** y ← e^{hK} y, or with the transpose. */
  apply(
    h: number,
    y: Float64Array,
    transposed = false,
    term: Float64Array = y.slice(),
    next: Float64Array = new Float64Array(y.length),
  ): void {
    term.set(y);
    const count = termsFor(h * this.norm);
    for (let t = 1; t <= count; t++) {
      if (transposed) applyColumns(this.matrix, term, next);
      else applyRows(this.matrix, term, next);
      for (let i = 0; i < y.length; i++) {
        term[i] = (next[i] * h) / t;
        y[i] += term[i];
      }
    }
  }

  /** K^t/t! up to t = count, written on the places of all powers together. */
  private patterned(count: number): NonNullable<ExponentialFamily['pattern']> {
    if (this.pattern && this.pattern.terms.length > count) return this.pattern;
    for (let t = this.powers.length; t <= count; t++) {
      this.powers.push(product(this.powers[t - 1], this.matrix, 1 / t));
    }
    const { size } = this.matrix;
    const start = new Int32Array(size + 1);
    const columns: number[] = [];
    const place = new Int32Array(size);
    for (let r = 0; r < size; r++) {
      const used = new Set<number>();
      for (const p of this.powers) for (let i = p.start[r]; i < p.start[r + 1]; i++) used.add(p.col[i]);
      for (const c of [...used].sort((a, b) => a - b)) columns.push(c);
      start[r + 1] = columns.length;
    }
    const terms = this.powers.map((p) => {
      const values = new Float64Array(columns.length);
      for (let r = 0; r < size; r++) {
        for (let k = start[r]; k < start[r + 1]; k++) place[columns[k]] = k;
        for (let i = p.start[r]; i < p.start[r + 1]; i++) values[place[p.col[i]]] = p.value[i];
      }
      return values;
    });
    this.pattern = { start, col: Int32Array.from(columns), terms };
    return this.pattern;
  }
}

function identity(size: number): SparseRows {
  return {
    size,
    start: Int32Array.from({ length: size + 1 }, (_, i) => i),
    col: Int32Array.from({ length: size }, (_, i) => i),
    value: new Float64Array(size).fill(1),
  };
}

/** out = m · y. */
function applyRows(m: SparseRows, y: Float64Array, out: Float64Array): void {
  const { start, col, value, size } = m;
  let k = start[0];
  for (let r = 0; r < size; r++) {
    const end = start[r + 1];
    let sum = 0;
    for (; k < end; k++) sum += value[k] * y[col[k]];
    out[r] = sum;
  }
}

/** out = mᵀ · y. */
function applyColumns(m: SparseRows, y: Float64Array, out: Float64Array): void {
  const { start, col, value, size } = m;
  out.fill(0);
  for (let r = 0; r < size; r++) {
    for (let k = start[r]; k < start[r + 1]; k++) out[col[k]] += value[k] * y[r];
  }
}
