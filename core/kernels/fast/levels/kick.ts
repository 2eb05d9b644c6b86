import { ExponentialFamily, type SparseRows } from '../sparse.js';

/** e^{hK} for one matrix K and any step, in work space that is made once. */
export class Kick {
  /** Largest sum of magnitudes in a row of K, 1/ps. */
  readonly norm: number;
  private readonly family: ExponentialFamily;
  /** e^{hK} for the chosen step. */
  rows: SparseRows | null = null;
  private readonly diagonal: Float64Array;
  /** Entries off the diagonal: one flat list takes half the time of short rows. */
  private row = new Int32Array(0);
  private col = new Int32Array(0);
  private value = new Float64Array(0);
  private known: Int32Array | null = null;
  private readonly term: Float64Array;
  private readonly next: Float64Array;

  constructor(constant: SparseRows) {
    this.family = new ExponentialFamily(constant);
    this.norm = this.family.norm;
    this.diagonal = new Float64Array(constant.size);
    this.term = new Float64Array(constant.size);
    this.next = new Float64Array(constant.size);
  }

  /** Chooses the step; false where it is too large for the series. */
  set(h: number): boolean {
    this.rows = this.family.at(h, this.rows);
    if (!this.rows) return false;
    const { start, col, value, size } = this.rows;
    if (this.known !== col) this.pattern(this.rows);
    this.diagonal.fill(0);
    for (let r = 0, at = 0; r < size; r++) {
      for (let k = start[r]; k < start[r + 1]; k++) {
        if (col[k] === r) this.diagonal[r] = value[k];
        else this.value[at++] = value[k];
      }
    }
    return true;
  }

  private pattern({ start, col, size }: SparseRows): void {
    const rows: number[] = [];
    const cols: number[] = [];
    for (let r = 0; r < size; r++) {
      for (let k = start[r]; k < start[r + 1]; k++) {
        if (col[k] === r) continue;
        rows.push(r);
        cols.push(col[k]);
      }
    }
    this.row = Int32Array.from(rows);
    this.col = Int32Array.from(cols);
    this.value = new Float64Array(rows.length);
    this.known = col;
  }

  /** out = e^{hK}·y for the chosen step. */
  apply(y: Float64Array, out: Float64Array): void {
    const { diagonal, row, col, value } = this;
    for (let i = 0; i < diagonal.length; i++) out[i] = diagonal[i] * y[i];
    for (let k = 0; k < value.length; k++) out[row[k]] += value[k] * y[col[k]];
  }

  /** out = (e^{hK})ᵀ·y for the chosen step. */
  applyTransposed(y: Float64Array, out: Float64Array): void {
    const { diagonal, row, col, value } = this;
    for (let i = 0; i < diagonal.length; i++) out[i] = diagonal[i] * y[i];
    for (let k = 0; k < value.length; k++) out[col[k]] += value[k] * y[row[k]];
  }

  /** y ← e^{hK}·y for another time h, ps, or with the transpose. */
  once(h: number, y: Float64Array, transposed = false): void {
    this.family.apply(h, y, transposed, this.term, this.next);
  }
}
