import type { Scheme } from '../../emitter/contract.js';
import { driveOperators } from '../../emitter/generator.js';
import type { Drive } from '../../pulse/drive.js';

/** Nodes of three-point Gauss–Legendre quadrature on a step of length 1, from its middle. */
const NODE = Math.sqrt(15) / 10;
const ALPHA2 = Math.sqrt(15) / 3;
/** Norm of a matrix up to which the exponential series is summed as it stands. */
const SMALL = 0.5;

/**
 * Unitary of any level scheme over one step by the Magnus expansion of order 6 on Gauss nodes (Blanes, Casas, Oteo &
 * Ros, Phys. Rep. 470, 151 (2009), section 5). Matrices are dense complex n×n, as separate real and imaginary parts.
 */
export class UnitaryStep {
  /** The unitary of the last step, row-major. */
  readonly re: Float64Array;
  readonly im: Float64Array;
  private readonly n: number;
  private readonly sample: Float64Array;
  private readonly raising: readonly {
    readonly row: number;
    readonly col: number;
    readonly value: number;
  }[][];
  private readonly work: readonly { readonly re: Float64Array; readonly im: Float64Array }[];

  /** @param energies of the levels in the drive's frame, 1/ps */
  constructor(
    scheme: Scheme,
    private readonly energies: readonly number[],
    private readonly drive: Drive,
    private readonly h: number,
  ) {
    const n = scheme.levels.length;
    this.n = n;
    this.re = new Float64Array(n * n);
    this.im = new Float64Array(n * n);
    this.sample = new Float64Array(2 * drive.components);
    this.raising = driveOperators(scheme).map((a) => {
      const entries: { row: number; col: number; value: number }[] = [];
      a.re.forEach((value, k) => {
        if (value !== 0) entries.push({ row: Math.floor(k / n), col: k % n, value });
      });
      return entries;
    });
    this.work = Array.from({ length: 10 }, () => ({
      re: new Float64Array(n * n),
      im: new Float64Array(n * n),
    }));
  }

  /** Unitary over the step about t (ps); `left`, `middle`, `right` are the segments of its nodes. */
  advance(t: number, left: number, middle: number, right: number): void {
    const [a1, a2, a3, x2, x3, c1, c2, e, f, omega] = this.work;
    this.hamiltonian(t - NODE * this.h, left, a1);
    this.hamiltonian(t, middle, a2);
    this.hamiltonian(t + NODE * this.h, right, a3);
    const size = this.n * this.n;
    for (const part of ['re', 'im'] as const) {
      for (let k = 0; k < size; k++) {
        x2[part][k] = ALPHA2 * (a3[part][k] - a1[part][k]);
        x3[part][k] = (10 / 3) * (a3[part][k] - 2 * a2[part][k] + a1[part][k]);
      }
    }
    this.commutator(a2, x2, c1);
    for (const part of ['re', 'im'] as const) {
      for (let k = 0; k < size; k++) e[part][k] = 2 * x3[part][k] + c1[part][k];
    }
    this.commutator(a2, e, c2);
    for (const part of ['re', 'im'] as const) {
      for (let k = 0; k < size; k++) {
        e[part][k] = -20 * a2[part][k] - x3[part][k] + c1[part][k];
        f[part][k] = x2[part][k] - c2[part][k] / 60;
      }
    }
    this.commutator(e, f, omega);
    for (const part of ['re', 'im'] as const) {
      for (let k = 0; k < size; k++) {
        omega[part][k] = a2[part][k] + x3[part][k] / 12 + omega[part][k] / 240;
      }
    }
    this.exponential(omega);
  }

  /** −i h H(t). */
  private hamiltonian(t: number, segment: number, out: { re: Float64Array; im: Float64Array }): void {
    const { n, h, sample } = this;
    this.drive.sample(t, segment, sample);
    out.re.fill(0);
    out.im.fill(0);
    for (let i = 0; i < n; i++) out.im[i * n + i] = -h * this.energies[i];
    this.raising.forEach((entries, c) => {
      const a = 0.5 * h * sample[2 * c];
      const b = 0.5 * h * sample[2 * c + 1];
      for (const { row, col, value } of entries) {
        out.re[row * n + col] += b * value;
        out.im[row * n + col] -= a * value;
        out.re[col * n + row] -= b * value;
        out.im[col * n + row] -= a * value;
      }
    });
  }

  private product(a: Complex, b: Complex, out: Complex): void {
    const { n } = this;
    for (let i = 0; i < n * n; i += n) {
      for (let j = 0; j < n; j++) {
        let re = 0;
        let im = 0;
        for (let k = 0; k < n; k++) {
          const ar = a.re[i + k];
          const ai = a.im[i + k];
          const br = b.re[k * n + j];
          const bi = b.im[k * n + j];
          re += ar * br - ai * bi;
          im += ar * bi + ai * br;
        }
        out.re[i + j] = re;
        out.im[i + j] = im;
      }
    }
  }

  /** Of anti-Hermitian a and b: ab − (ab)†. */
  private commutator(a: Complex, b: Complex, out: Complex): void {
    const { n } = this;
    this.product(a, b, out);
    for (let i = 0; i < n; i++) {
      for (let j = i; j < n; j++) {
        const re = out.re[i * n + j] - out.re[j * n + i];
        const im = out.im[i * n + j] + out.im[j * n + i];
        out.re[i * n + j] = re;
        out.re[j * n + i] = -re;
        out.im[i * n + j] = im;
        out.im[j * n + i] = im;
      }
    }
  }

  private exponential(a: Complex): void {
    const { n, re, im } = this;
    let norm = 0;
    for (let i = 0; i < n; i++) {
      let sum = 0;
      for (let j = 0; j < n; j++) sum += Math.abs(a.re[i * n + j]) + Math.abs(a.im[i * n + j]);
      norm = Math.max(norm, sum);
    }
    let squarings = 0;
    while (norm > SMALL) {
      norm *= 0.5;
      squarings++;
    }
    const scale = 0.5 ** squarings;
    const terms = Math.max(4, Math.ceil(13 + 3 * Math.log10(Math.max(norm, 1e-4) / SMALL)));
    let [result, spare] = [this.work[0], this.work[1]];
    // Horner: 1 + a(1 + a/2(1 + a/3(…))).
    result.re.fill(0);
    result.im.fill(0);
    for (let i = 0; i < n; i++) result.re[i * n + i] = 1;
    for (let k = terms; k >= 1; k--) {
      this.product(a, result, spare);
      const f = scale / k;
      for (let i = 0; i < n * n; i++) {
        spare.re[i] *= f;
        spare.im[i] *= f;
      }
      for (let i = 0; i < n; i++) spare.re[i * n + i] += 1;
      [result, spare] = [spare, result];
    }
    for (let k = 0; k < squarings; k++) {
      this.product(result, result, spare);
      [result, spare] = [spare, result];
    }
    re.set(result.re);
    im.set(result.im);
  }
}

interface Complex {
  readonly re: Float64Array;
  readonly im: Float64Array;
}
