import { product, type SparseRows, sumOf } from '../sparse.js';

/** A matrix as one flat list of entries. */
export interface Triples {
  readonly row: Int32Array;
  readonly col: Int32Array;
  readonly value: Float64Array;
}

function triples(m: SparseRows): Triples {
  const row = new Int32Array(m.col.length);
  for (let r = 0; r < m.size; r++) row.fill(r, m.start[r], m.start[r + 1]);
  return { row, col: m.col, value: m.value };
}

/** [[k, v], k] = 2kvk − vk² − k²v. */
export function doubleCommutator(k: SparseRows, v: SparseRows): Triples {
  const kv = product(k, v, 1);
  const vk = product(v, k, 1);
  return triples(sumOf([product(kv, k, 2), product(vk, k, -1), product(k, kv, -1)]));
}

/** out += factor · m · y. */
export function addProduct(
  { row, col, value }: Triples,
  factor: number,
  y: Float64Array,
  out: Float64Array,
): void {
  if (factor === 0) return;
  for (let k = 0; k < value.length; k++) out[row[k]] += factor * value[k] * y[col[k]];
}

/** out += factor · mᵀ · y. */
export function addTransposed(
  { row, col, value }: Triples,
  factor: number,
  y: Float64Array,
  out: Float64Array,
): void {
  if (factor === 0) return;
  for (let k = 0; k < value.length; k++) out[col[k]] += factor * value[k] * y[row[k]];
}

/** f · m · y. */
export function between({ row, col, value }: Triples, f: Float64Array, y: Float64Array): number {
  let sum = 0;
  for (let k = 0; k < value.length; k++) sum += f[row[k]] * value[k] * y[col[k]];
  return sum;
}
