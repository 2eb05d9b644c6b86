import { EigenvalueDecomposition, Matrix, SingularValueDecomposition, solve } from 'ml-matrix';
import type { ComplexSeries } from './bath.js';

/** One decaying exponential e^{−νt}. */
export interface Pole {
  /** Re ν > 0 and Im ν, 1/ps. */
  readonly re: number;
  readonly im: number;
  /** Index of the pole ν*: itself for a real pole. */
  readonly partner: number;
  /** Amplitude c in f(t) ≈ Σ c e^{−νt}. */
  readonly amplitude: readonly [re: number, im: number];
  /** Amplitude of the same exponential in f*(t): the conjugate of the partner's. */
  readonly conjugate: readonly [re: number, im: number];
}

export interface ExponentialFit {
  readonly poles: readonly Pole[];
  /** Largest |error| over the sampled times and half as far again, divided by |f(0)|. */
  readonly error: number;
}

/** Samples on a uniform grid from 0, and the spectral subspace of their Hankel matrices. */
export interface Pencil {
  readonly times: Float64Array;
  readonly series: ComplexSeries;
  readonly step: number;
  /** How many samples the poles are taken from; the rest only judges the fit. */
  readonly used: number;
  readonly subspace: Matrix;
}

/**
 * Common right singular vectors of the Hankel matrices of Re f and Im f. One set of exponentials, closed under
 * conjugation, then serves f and f* alike, which a hierarchy of operators needs.
 */
export function buildPencil(times: Float64Array, series: ComplexSeries, used: number): Pencil {
  const columns = used >> 1;
  const rows = used - columns + 1;
  const stacked = new Matrix(2 * rows, columns);
  for (let i = 0; i < rows; i++) {
    for (let j = 0; j < columns; j++) {
      stacked.set(i, j, series.re[i + j]);
      stacked.set(rows + i, j, series.im[i + j]);
    }
  }
  const svd = new SingularValueDecomposition(stacked, {
    computeLeftSingularVectors: false,
    computeRightSingularVectors: true,
    autoTranspose: true,
  });
  return { times, series, step: times[1], used, subspace: svd.rightSingularVectors };
}

/**
 * Least-squares fit by `terms` exponentials: poles by the matrix pencil (Hua & Sarkar, IEEE Trans. Acoust. Speech
 * Signal Process. 38, 814 (1990)), amplitudes by linear least squares.
 * @param integral known ∫_0^∞ f dt, kept exactly where given: it decides what a slow system sees of the bath
 */
export function fitExponentials(
  pencil: Pencil,
  terms: number,
  integral: readonly [number, number] | null,
): ExponentialFit {
  const roots = polesOf(pencil, terms);
  const shapes = realShapes(roots);
  const { times, series, used } = pencil;
  const weight = integral ? 1e4 : 0;
  const design = Matrix.zeros(used + 1, shapes.length);
  for (let s = 0; s < shapes.length; s++) {
    for (let i = 0; i < used; i++) design.set(i, s, shapeAt(shapes[s], times[i]));
    design.set(used, s, weight * shapeIntegral(shapes[s]));
  }
  const targets = Matrix.zeros(used + 1, 2);
  for (let i = 0; i < used; i++) targets.setRow(i, [series.re[i], series.im[i]]);
  if (integral) targets.setRow(used, [weight * integral[0], weight * integral[1]]);
  const x = solve(design, targets, true);
  const poles = assemble(roots, x);
  return { poles, error: fitError(pencil, shapes, x) };
}

interface Root {
  readonly re: number;
  readonly im: number;
}

/** Decay constants with Im ν ≥ 0, from the shift invariance of the subspace; growing ones are dropped. */
function polesOf(pencil: Pencil, terms: number): Root[] {
  const { subspace, step } = pencil;
  const last = subspace.rows - 1;
  const upper = subspace.subMatrix(0, last - 1, 0, terms - 1);
  const lower = subspace.subMatrix(1, last, 0, terms - 1);
  const shift = solve(upper, lower, true);
  const evd = new EigenvalueDecomposition(shift);
  const roots: Root[] = [];
  for (let k = 0; k < terms; k++) {
    const re = evd.realEigenvalues[k];
    const im = evd.imaginaryEigenvalues[k];
    const decay = -Math.log(Math.hypot(re, im)) / step;
    const turn = Math.atan2(im, re) / step;
    // A negative real root would alternate from sample to sample: noise, not physics.
    if (decay <= 0 || !Number.isFinite(decay) || turn < 0 || (im === 0 && re < 0)) continue;
    roots.push({ re: decay, im: turn });
  }
  return roots.sort((a, b) => a.im - b.im || a.re - b.re);
}

interface Shape {
  readonly root: Root;
  readonly sine: boolean;
}

function realShapes(roots: readonly Root[]): Shape[] {
  return roots.flatMap((root) =>
    root.im === 0
      ? [{ root, sine: false }]
      : [
          { root, sine: false },
          { root, sine: true },
        ],
  );
}

function shapeAt({ root, sine }: Shape, t: number): number {
  const envelope = Math.exp(-root.re * t);
  return envelope * (sine ? Math.sin(root.im * t) : Math.cos(root.im * t));
}

function shapeIntegral({ root, sine }: Shape): number {
  return (sine ? root.im : root.re) / (root.re * root.re + root.im * root.im);
}

/** a cos βt + b sin βt = ½(a + ib) e^{−iβt} + ½(a − ib) e^{+iβt}, with complex a and b. */
function assemble(roots: readonly Root[], x: Matrix): Pole[] {
  const poles: Pole[] = [];
  let s = 0;
  for (const { re, im } of roots) {
    const a = [x.get(s, 0), x.get(s, 1)] as const;
    const at = poles.length;
    if (im === 0) {
      poles.push({ re, im, partner: at, amplitude: a, conjugate: [a[0], -a[1]] });
      s += 1;
      continue;
    }
    const b = [x.get(s + 1, 0), x.get(s + 1, 1)] as const;
    const plus = [(a[0] - b[1]) / 2, (a[1] + b[0]) / 2] as const;
    const minus = [(a[0] + b[1]) / 2, (a[1] - b[0]) / 2] as const;
    poles.push({ re, im, partner: at + 1, amplitude: plus, conjugate: [minus[0], -minus[1]] });
    poles.push({ re, im: -im, partner: at, amplitude: minus, conjugate: [plus[0], -plus[1]] });
    s += 2;
  }
  return poles;
}

function fitError(pencil: Pencil, shapes: readonly Shape[], x: Matrix): number {
  const { times, series } = pencil;
  let worst = 0;
  for (let i = 0; i < times.length; i++) {
    let re = -series.re[i];
    let im = -series.im[i];
    for (let s = 0; s < shapes.length; s++) {
      const value = shapeAt(shapes[s], times[i]);
      re += x.get(s, 0) * value;
      im += x.get(s, 1) * value;
    }
    worst = Math.max(worst, Math.hypot(re, im));
  }
  return worst / Math.hypot(series.re[0], series.im[0]);
}
