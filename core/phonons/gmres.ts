export type GmresOutcome =
  | { readonly kind: 'converged'; readonly x: Float64Array; readonly iterations: number }
  | { readonly kind: 'failed'; readonly residual: number };

/**
 * Solves A x = b by the generalised minimal residual method without restart (Saad & Schultz, SIAM J. Sci. Stat. Comput. 7, 856
 * (1986)), preconditioned from the right.
 * @param apply writes A v
 * @param precondition writes M⁻¹ v
 */
export function gmres(
  apply: (v: Float64Array, out: Float64Array) => void,
  precondition: (v: Float64Array, out: Float64Array) => void,
  b: Float64Array,
  tolerance: number,
  most: number,
): GmresOutcome {
  const n = b.length;
  const size = Math.sqrt(dot(b, b));
  if (size === 0) return { kind: 'converged', x: new Float64Array(n), iterations: 0 };
  const basis: Float64Array[] = [b.map((v) => v / size)];
  const columns: Float64Array[] = [];
  const cos: number[] = [];
  const sin: number[] = [];
  const rhs = [size];
  const work = new Float64Array(n);
  for (let k = 0; k < most; k++) {
    precondition(basis[k], work);
    const next = new Float64Array(n);
    apply(work, next);
    const column = new Float64Array(k + 2);
    for (let pass = 0; pass < 2; pass++) {
      for (let i = 0; i <= k; i++) {
        const h = dot(basis[i], next);
        column[i] += h;
        for (let x = 0; x < n; x++) next[x] -= h * basis[i][x];
      }
    }
    const left = Math.sqrt(dot(next, next));
    column[k + 1] = left;
    for (let i = 0; i < k; i++) {
      const a = cos[i] * column[i] + sin[i] * column[i + 1];
      column[i + 1] = -sin[i] * column[i] + cos[i] * column[i + 1];
      column[i] = a;
    }
    const radius = Math.hypot(column[k], column[k + 1]);
    cos.push(column[k] / radius);
    sin.push(column[k + 1] / radius);
    column[k] = radius;
    rhs.push(-sin[k] * rhs[k]);
    rhs[k] *= cos[k];
    columns.push(column);
    if (Math.abs(rhs[k + 1]) <= tolerance * size || left === 0) {
      const x = new Float64Array(n);
      precondition(combination(basis, backSubstitute(columns, rhs)), x);
      return { kind: 'converged', x, iterations: k + 1 };
    }
    basis.push(next.map((v) => v / left));
  }
  return { kind: 'failed', residual: Math.abs(rhs[most]) / size };
}

function backSubstitute(columns: readonly Float64Array[], rhs: readonly number[]): Float64Array {
  const k = columns.length;
  const out = new Float64Array(k);
  for (let i = k - 1; i >= 0; i--) {
    let v = rhs[i];
    for (let j = i + 1; j < k; j++) v -= columns[j][i] * out[j];
    out[i] = v / columns[i][i];
  }
  return out;
}

function combination(basis: readonly Float64Array[], weights: Float64Array): Float64Array {
  const out = new Float64Array(basis[0].length);
  weights.forEach((w, k) => {
    for (let x = 0; x < out.length; x++) out[x] += w * basis[k][x];
  });
  return out;
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
}
