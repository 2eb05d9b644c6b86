import type { Scheme } from '../../emitter/contract.js';
import { driveOperators } from '../../emitter/generator.js';
import type { Drive } from '../../pulse/drive.js';

/** Nodes of three-point Gauss–Legendre quadrature on a step of length 1, from its middle. */
const NODE = Math.sqrt(15) / 10;
const ALPHA2 = Math.sqrt(15) / 3;
/** Norm below which the exponential series of degree 9 is exact to rounding. */
const SMALL = 0.15;
const FACTORIALS = [1, 1, 2, 6, 24, 120, 720, 5040, 40320, 362880];

/** Raising matrix element of one drive component. */
interface Raising {
  readonly component: number;
  readonly upper: number;
  readonly lower: number;
  readonly value: number;
}

/**
 * Unitary of any level scheme over one step by the Magnus expansion of order 6 on Gauss nodes (Blanes, Casas, Oteo &
 * Ros, Phys. Rep. 470, 151 (2009), section 5), exponentiated by scaling and squaring. Levels that the drive in use does
 * not touch only turn.
 */
export class UnitaryStep {
  /** The unitary of the last step, row-major over all levels. */
  readonly re: Float64Array;
  readonly im: Float64Array;
  private readonly n: number;
  private readonly sample: Float64Array;
  private readonly raising: readonly Raising[];
  /** Levels that the drive connects. */
  private readonly driven: readonly number[];
  private readonly own: Float64Array;
  private readonly levels: number;
  private readonly work: readonly Float64Array[];

  /**
   * @param energies of the levels in the drive's frame, 1/ps
   * @param used drive components that ever differ from zero
   */
  constructor(
    scheme: Scheme,
    energies: readonly number[],
    private readonly drive: Drive,
    private readonly h: number,
    used: readonly boolean[],
  ) {
    const levels = scheme.levels.length;
    const all: Raising[] = [];
    driveOperators(scheme).forEach((a, component) => {
      if (!used[component]) return;
      a.re.forEach((value, k) => {
        if (value !== 0) all.push({ component, upper: Math.floor(k / levels), lower: k % levels, value });
      });
    });
    const touched = new Set(all.flatMap((r) => [r.upper, r.lower]));
    this.driven = [...touched].sort((a, b) => a - b);
    this.raising = all.map((r) => ({
      ...r,
      upper: this.driven.indexOf(r.upper),
      lower: this.driven.indexOf(r.lower),
    }));
    this.levels = levels;
    this.n = this.driven.length;
    this.own = Float64Array.from(this.driven, (i) => energies[i]);
    this.re = new Float64Array(levels * levels);
    this.im = new Float64Array(levels * levels);
    for (let i = 0; i < levels; i++) {
      this.re[i * levels + i] = Math.cos(energies[i] * h);
      this.im[i * levels + i] = -Math.sin(energies[i] * h);
    }
    this.sample = new Float64Array(2 * drive.components);
    this.work = Array.from({ length: 16 }, () => new Float64Array(this.n * this.n));
  }

  /** Unitary over the step about t (ps); `left`, `middle`, `right` are the segments of its nodes. */
  advance(t: number, left: number, middle: number, right: number): void {
    const { n, h } = this;
    const [ar, ai, br, bi, cr, ci, pr, pi, qr, qi, xr, xi, er, ei, fr, fi] = this.work;
    this.hamiltonian(t - NODE * h, left, ar, ai);
    this.hamiltonian(t, middle, br, bi);
    this.hamiltonian(t + NODE * h, right, cr, ci);
    const size = n * n;
    for (let k = 0; k < size; k++) {
      const x2r = ALPHA2 * (cr[k] - ar[k]);
      const x2i = ALPHA2 * (ci[k] - ai[k]);
      cr[k] = (10 / 3) * (cr[k] - 2 * br[k] + ar[k]);
      ci[k] = (10 / 3) * (ci[k] - 2 * bi[k] + ai[k]);
      ar[k] = x2r;
      ai[k] = x2i;
    }
    // Now a = α2, b = α1, c = α3.
    commutator(n, br, bi, ar, ai, pr, pi);
    for (let k = 0; k < size; k++) {
      er[k] = 2 * cr[k] + pr[k];
      ei[k] = 2 * ci[k] + pi[k];
    }
    commutator(n, br, bi, er, ei, qr, qi);
    for (let k = 0; k < size; k++) {
      er[k] = -20 * br[k] - cr[k] + pr[k];
      ei[k] = -20 * bi[k] - ci[k] + pi[k];
      fr[k] = ar[k] - qr[k] / 60;
      fi[k] = ai[k] - qi[k] / 60;
    }
    commutator(n, er, ei, fr, fi, xr, xi);
    for (let k = 0; k < size; k++) {
      xr[k] = br[k] + cr[k] / 12 + xr[k] / 240;
      xi[k] = bi[k] + ci[k] / 12 + xi[k] / 240;
    }
    this.exponential(xr, xi);
  }

  /** −i h H(t) on the driven levels. */
  private hamiltonian(t: number, segment: number, re: Float64Array, im: Float64Array): void {
    const { n, h, sample, own, raising } = this;
    this.drive.sample(t, segment, sample);
    re.fill(0);
    im.fill(0);
    for (let i = 0; i < n; i++) im[i * n + i] = -h * own[i];
    for (let k = 0; k < raising.length; k++) {
      const { component, upper, lower, value } = raising[k];
      const a = 0.5 * h * value * sample[2 * component];
      const b = 0.5 * h * value * sample[2 * component + 1];
      re[upper * n + lower] += b;
      im[upper * n + lower] -= a;
      re[lower * n + upper] -= b;
      im[lower * n + upper] -= a;
    }
  }

  private exponential(xr: Float64Array, xi: Float64Array): void {
    const { n } = this;
    const size = n * n;
    let norm = 0;
    for (let i = 0; i < n; i++) {
      let sum = 0;
      for (let j = 0; j < n; j++) sum += Math.abs(xr[i * n + j]) + Math.abs(xi[i * n + j]);
      norm = Math.max(norm, sum);
    }
    let scale = 1;
    let squarings = 0;
    while (norm * scale > SMALL) {
      scale *= 0.5;
      squarings++;
    }
    for (let k = 0; k < size; k++) {
      xr[k] *= scale;
      xi[k] *= scale;
    }
    const [r2, i2, r3, i3, ur, ui, vr, vi] = this.work;
    multiply(n, xr, xi, xr, xi, r2, i2);
    multiply(n, r2, i2, xr, xi, r3, i3);
    // Degree 9 in three groups of powers (Paterson & Stockmeyer, SIAM J. Comput. 2, 60 (1973)).
    group(n, 6, xr, xi, r2, i2, ur, ui);
    for (let k = 0; k < size; k++) {
      ur[k] += r3[k] / FACTORIALS[9];
      ui[k] += i3[k] / FACTORIALS[9];
    }
    for (let g = 3; g >= 0; g -= 3) {
      multiply(n, ur, ui, r3, i3, vr, vi);
      group(n, g, xr, xi, r2, i2, ur, ui);
      for (let k = 0; k < size; k++) {
        ur[k] += vr[k];
        ui[k] += vi[k];
      }
    }
    for (let k = 0; k < squarings; k++) {
      multiply(n, ur, ui, ur, ui, vr, vi);
      ur.set(vr);
      ui.set(vi);
    }
    const { driven, levels, re, im } = this;
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        re[driven[i] * levels + driven[j]] = ur[i * n + j];
        im[driven[i] * levels + driven[j]] = ui[i * n + j];
      }
    }
  }
}

/** out = 1/g! + x/(g+1)! + x²/(g+2)!. */
function group(
  n: number,
  g: number,
  xr: Float64Array,
  xi: Float64Array,
  r2: Float64Array,
  i2: Float64Array,
  re: Float64Array,
  im: Float64Array,
): void {
  const b = 1 / FACTORIALS[g + 1];
  const c = 1 / FACTORIALS[g + 2];
  for (let k = 0; k < n * n; k++) {
    re[k] = b * xr[k] + c * r2[k];
    im[k] = b * xi[k] + c * i2[k];
  }
  for (let i = 0; i < n; i++) re[i * n + i] += 1 / FACTORIALS[g];
}

function multiply(
  n: number,
  ar: Float64Array,
  ai: Float64Array,
  br: Float64Array,
  bi: Float64Array,
  re: Float64Array,
  im: Float64Array,
): void {
  for (let i = 0; i < n * n; i += n) {
    for (let j = 0; j < n; j++) {
      let sr = 0;
      let si = 0;
      for (let k = 0, m = j; k < n; k++, m += n) {
        sr += ar[i + k] * br[m] - ai[i + k] * bi[m];
        si += ar[i + k] * bi[m] + ai[i + k] * br[m];
      }
      re[i + j] = sr;
      im[i + j] = si;
    }
  }
}

/** Of anti-Hermitian a and b: ab − (ab)†. */
function commutator(
  n: number,
  ar: Float64Array,
  ai: Float64Array,
  br: Float64Array,
  bi: Float64Array,
  re: Float64Array,
  im: Float64Array,
): void {
  multiply(n, ar, ai, br, bi, re, im);
  for (let i = 0; i < n; i++) {
    for (let j = i; j < n; j++) {
      const x = re[i * n + j] - re[j * n + i];
      const y = im[i * n + j] + im[j * n + i];
      re[i * n + j] = x;
      re[j * n + i] = -x;
      im[i * n + j] = y;
      im[j * n + i] = y;
    }
  }
}
