/** Small dense complex matrices as interleaved arrays, row-major: [2(i·n + j)] = Re, [2(i·n + j) + 1] = Im. */
export type ComplexMatrix = Float64Array;

export function identity(n: number): ComplexMatrix {
  const out = new Float64Array(2 * n * n);
  for (let i = 0; i < n; i++) out[2 * (i * n + i)] = 1;
  return out;
}

/** out = a b; out must be neither. */
export function multiplyInto(n: number, a: ComplexMatrix, b: ComplexMatrix, out: ComplexMatrix): void {
  out.fill(0);
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < n; k++) {
      const re = a[2 * (i * n + k)];
      const im = a[2 * (i * n + k) + 1];
      if (re === 0 && im === 0) continue;
      for (let j = 0; j < n; j++) {
        const from = 2 * (k * n + j);
        const to = 2 * (i * n + j);
        out[to] += re * b[from] - im * b[from + 1];
        out[to + 1] += re * b[from + 1] + im * b[from];
      }
    }
  }
}

/** out = a† b. */
export function adjointTimes(n: number, a: ComplexMatrix, b: ComplexMatrix, out: ComplexMatrix): void {
  out.fill(0);
  for (let k = 0; k < n; k++) {
    for (let i = 0; i < n; i++) {
      const re = a[2 * (k * n + i)];
      const im = -a[2 * (k * n + i) + 1];
      if (re === 0 && im === 0) continue;
      for (let j = 0; j < n; j++) {
        const from = 2 * (k * n + j);
        const to = 2 * (i * n + j);
        out[to] += re * b[from] - im * b[from + 1];
        out[to + 1] += re * b[from + 1] + im * b[from];
      }
    }
  }
}

/** out = a b†. */
export function timesAdjoint(n: number, a: ComplexMatrix, b: ComplexMatrix, out: ComplexMatrix): void {
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      let re = 0;
      let im = 0;
      for (let k = 0; k < n; k++) {
        const ar = a[2 * (i * n + k)];
        const ai = a[2 * (i * n + k) + 1];
        const br = b[2 * (j * n + k)];
        const bi = -b[2 * (j * n + k) + 1];
        re += ar * br - ai * bi;
        im += ar * bi + ai * br;
      }
      out[2 * (i * n + j)] = re;
      out[2 * (i * n + j) + 1] = im;
    }
  }
}

/** Largest row sum of moduli. */
export function norm(n: number, a: ComplexMatrix): number {
  let worst = 0;
  for (let i = 0; i < n; i++) {
    let sum = 0;
    for (let j = 0; j < n; j++) sum += Math.hypot(a[2 * (i * n + j)], a[2 * (i * n + j) + 1]);
    worst = Math.max(worst, sum);
  }
  return worst;
}
