/**
 * Operators on n levels in a real basis. A Hermitian operator X is the vector of its n² real coordinates
 * (diagonal X_ii first, then Re X_ij and Im X_ij for i < j); any operator is X + iY with X and Y Hermitian.
 */

/** Dense complex n×n matrix, row-major. */
export interface Operator {
  readonly n: number;
  readonly re: Float64Array;
  readonly im: Float64Array;
}

/** Real sparse matrix on coordinate vectors, as entry lists. */
export interface SparseMatrix {
  readonly size: number;
  readonly row: Int32Array;
  readonly col: Int32Array;
  readonly value: Float64Array;
}

export function zero(n: number): Operator {
  return { n, re: new Float64Array(n * n), im: new Float64Array(n * n) };
}

/** |i⟩⟨j| scaled by a real number, added to `op`. */
export function addTransfer(op: Operator, i: number, j: number, scale: number): void {
  op.re[i * op.n + j] += scale;
}

export function multiply(a: Operator, b: Operator): Operator {
  const { n } = a;
  const out = zero(n);
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < n; k++) {
      const ar = a.re[i * n + k];
      const ai = a.im[i * n + k];
      if (ar === 0 && ai === 0) continue;
      for (let j = 0; j < n; j++) {
        const br = b.re[k * n + j];
        const bi = b.im[k * n + j];
        out.re[i * n + j] += ar * br - ai * bi;
        out.im[i * n + j] += ar * bi + ai * br;
      }
    }
  }
  return out;
}

export function adjoint(a: Operator): Operator {
  const { n } = a;
  const out = zero(n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      out.re[j * n + i] = a.re[i * n + j];
      out.im[j * n + i] = -a.im[i * n + j];
    }
  }
  return out;
}

/** a·α + b·β with complex α = (ar, ai), β = (br, bi). */
export function combine(a: Operator, ar: number, ai: number, b: Operator, br: number, bi: number): Operator {
  const out = zero(a.n);
  for (let k = 0; k < out.re.length; k++) {
    out.re[k] = a.re[k] * ar - a.im[k] * ai + b.re[k] * br - b.im[k] * bi;
    out.im[k] = a.re[k] * ai + a.im[k] * ar + b.re[k] * bi + b.im[k] * br;
  }
  return out;
}

/** Index pairs i < j in coordinate order. */
export function coherencePairs(n: number): [number, number][] {
  const pairs: [number, number][] = [];
  for (let i = 0; i < n; i++) for (let j = i + 1; j < n; j++) pairs.push([i, j]);
  return pairs;
}

function basisOperator(n: number, index: number, pairs: [number, number][]): Operator {
  const op = zero(n);
  if (index < n) {
    op.re[index * n + index] = 1;
    return op;
  }
  const [i, j] = pairs[(index - n) >> 1];
  if ((index - n) % 2 === 0) {
    op.re[i * n + j] = 1;
    op.re[j * n + i] = 1;
  } else {
    op.im[i * n + j] = 1;
    op.im[j * n + i] = -1;
  }
  return op;
}

/** Coordinates of the Hermitian part of `op`. */
export function coordinates(op: Operator): Float64Array {
  const { n } = op;
  const pairs = coherencePairs(n);
  const out = new Float64Array(n * n);
  for (let i = 0; i < n; i++) out[i] = op.re[i * n + i];
  pairs.forEach(([i, j], k) => {
    out[n + 2 * k] = (op.re[i * n + j] + op.re[j * n + i]) / 2;
    out[n + 2 * k + 1] = (op.im[i * n + j] - op.im[j * n + i]) / 2;
  });
  return out;
}

/** The real matrix of a linear map that keeps operators Hermitian. */
export function superoperator(n: number, map: (x: Operator) => Operator): SparseMatrix {
  const size = n * n;
  const pairs = coherencePairs(n);
  const row: number[] = [];
  const col: number[] = [];
  const value: number[] = [];
  for (let c = 0; c < size; c++) {
    const image = coordinates(map(basisOperator(n, c, pairs)));
    image.forEach((v, r) => {
      if (v === 0) return;
      row.push(r);
      col.push(c);
      value.push(v);
    });
  }
  return { size, row: Int32Array.from(row), col: Int32Array.from(col), value: Float64Array.from(value) };
}

/** X ↦ cXc†. */
export function jumpMap(c: Operator): SparseMatrix {
  const dagger = adjoint(c);
  return superoperator(c.n, (x) => multiply(multiply(c, x), dagger));
}

/** Left multiplication on a Hermitian X: cX = P X + i Q X, with P X = (cX + Xc†)/2 and Q X = (cX − Xc†)/2i. */
export function leftMaps(c: Operator): { readonly p: SparseMatrix; readonly q: SparseMatrix } {
  const dagger = adjoint(c);
  return {
    p: superoperator(c.n, (x) => combine(multiply(c, x), 0.5, 0, multiply(x, dagger), 0.5, 0)),
    q: superoperator(c.n, (x) => combine(multiply(c, x), 0, -0.5, multiply(x, dagger), 0, 0.5)),
  };
}

/** X ↦ −i[h, X] for Hermitian h. */
export function commutatorMap(h: Operator): SparseMatrix {
  return superoperator(h.n, (x) => combine(multiply(h, x), 0, -1, multiply(x, h), 0, 1));
}

/** X ↦ rate·(cXc† − ½{c†c, X}). */
export function dissipatorMap(c: Operator, rate: number): SparseMatrix {
  const dagger = adjoint(c);
  const number = multiply(dagger, c);
  return superoperator(c.n, (x) =>
    combine(
      multiply(multiply(c, x), dagger),
      rate,
      0,
      combine(multiply(number, x), 1, 0, multiply(x, number), 1, 0),
      -rate / 2,
      0,
    ),
  );
}

/** Sum of sparse matrices of one size, entries merged, zero entries dropped. */
export function addMatrices(matrices: readonly SparseMatrix[]): SparseMatrix {
  const size = matrices[0].size;
  const dense = new Float64Array(size * size);
  for (const m of matrices)
    for (let k = 0; k < m.value.length; k++) dense[m.row[k] * size + m.col[k]] += m.value[k];
  return fromDense(dense, size);
}

export function fromDense(dense: Float64Array, size: number): SparseMatrix {
  const row: number[] = [];
  const col: number[] = [];
  const value: number[] = [];
  dense.forEach((v, k) => {
    if (v === 0) return;
    row.push(Math.floor(k / size));
    col.push(k % size);
    value.push(v);
  });
  return { size, row: Int32Array.from(row), col: Int32Array.from(col), value: Float64Array.from(value) };
}

export function toDense(m: SparseMatrix): Float64Array {
  const dense = new Float64Array(m.size * m.size);
  for (let k = 0; k < m.value.length; k++) dense[m.row[k] * m.size + m.col[k]] += m.value[k];
  return dense;
}
