import type { GaussianTone } from '../../../pulse/gaussians.js';
import { INNER, NODES, OUTER, PLACES } from './nodes.js';

/** A stretch of uniform steps. */
export interface Grid {
  /** Time at which step 0 begins, ps. */
  readonly start: number;
  /** ps. */
  readonly h: number;
}

/** A Gaussian this far down (e-folds) adds nothing, and would leave a recurrence at zero. */
const DEEP = 45;

/** The four values of a node's recurrence: the Gaussian at the first step and its ratio from one step to the next. */
const begun = new Float64Array(4 * NODES);

/**
 * Gaussian nodes by E(n+1) = E(n)·R(n), R(n+1) = R(n)·W: exact up to rounding, which grows as the square of the steps
 * and is 2e-13 after a block.
 */
function begin(tone: GaussianTone, scale: number, { start, h }: Grid, first: number): void {
  const { fall, chirp, rate, phase, delay, amplitude } = tone;
  const middle = start + (first + 0.5) * h - delay;
  for (let j = 0; j < NODES; j++) {
    const s = middle + PLACES[j] * h;
    const field = scale * amplitude * Math.exp(-fall * s * s);
    const angle = phase - (rate - chirp * s) * s;
    const shrink = Math.exp(-fall * h * (2 * s + h));
    const turn = -(rate - chirp * (2 * s + h)) * h;
    begun[4 * j] = field * Math.cos(angle);
    begun[4 * j + 1] = field * Math.sin(angle);
    begun[4 * j + 2] = shrink * Math.cos(turn);
    begun[4 * j + 3] = shrink * Math.sin(turn);
  }
}

/** Writes a Gaussian without its phase to out[4n + j], times `scale`, for the steps of a block. */
export function fillReal(
  { fall, delay, amplitude }: GaussianTone,
  scale: number,
  { start, h }: Grid,
  from: number,
  to: number,
  out: Float64Array,
): void {
  const reach = Math.sqrt(DEEP / fall);
  const first = Math.max(from, Math.ceil((delay - reach - start) / h));
  const last = Math.min(to, Math.floor((delay + reach - start) / h));
  if (first > from || last < to) out.fill(0, NODES * from, NODES * to);
  if (first >= last) return;
  // exp(−fall(s + d)²) about the middle s of a step, from few exponentials.
  const s = start + (first + 0.5) * h - delay;
  const field = scale * amplitude * Math.exp(-fall * s * s);
  const inner = Math.exp(2 * fall * h * s * INNER);
  const outer = Math.exp(2 * fall * h * s * OUTER);
  const square = fall * h * h;
  const shrink = Math.exp(-square - 2 * fall * h * s);
  const near = field * Math.exp(-square * INNER * INNER);
  const far = field * Math.exp(-square * OUTER * OUTER);
  const w = Math.exp(-2 * square);
  const kInner = Math.exp(2 * square * INNER);
  const kOuter = Math.exp(2 * square * OUTER);
  let e0 = far * outer;
  let e1 = near * inner;
  let e2 = near / inner;
  let e3 = far / outer;
  let r0 = shrink * kOuter;
  let r1 = shrink * kInner;
  let r2 = shrink / kInner;
  let r3 = shrink / kOuter;
  for (let i = NODES * first; i < NODES * last; i += NODES) {
    out[i] = e0;
    out[i + 1] = e1;
    out[i + 2] = e2;
    out[i + 3] = e3;
    e0 *= r0;
    e1 *= r1;
    e2 *= r2;
    e3 *= r3;
    r0 *= w;
    r1 *= w;
    r2 *= w;
    r3 *= w;
  }
}

/** Adds a Gaussian to re = out[8n + 2j], im = out[8n + 2j + 1], times `scale`, for the steps of a block. */
export function addComplex(
  tone: GaussianTone,
  scale: number,
  grid: Grid,
  from: number,
  to: number,
  out: Float64Array,
): void {
  const { start, h } = grid;
  const reach = Math.sqrt(DEEP / tone.fall);
  const first = Math.max(from, Math.ceil((tone.delay - reach - start) / h));
  const last = Math.min(to, Math.floor((tone.delay + reach - start) / h));
  if (first >= last) return;
  begin(tone, scale, grid, first);
  const shrink = Math.exp(-2 * tone.fall * h * h);
  const c = shrink * Math.cos(2 * tone.chirp * h * h);
  const s = shrink * Math.sin(2 * tone.chirp * h * h);
  // Two nodes at a time keep their numbers in registers.
  for (let pair = 0; pair < NODES; pair += 2) {
    const k = 4 * pair;
    let a = begun[k];
    let b = begun[k + 1];
    let p = begun[k + 2];
    let q = begun[k + 3];
    let d = begun[k + 4];
    let e = begun[k + 5];
    let r = begun[k + 6];
    let t = begun[k + 7];
    for (let i = 2 * (NODES * first + pair); i < 2 * NODES * last; i += 2 * NODES) {
      out[i] += a;
      out[i + 1] += b;
      out[i + 2] += d;
      out[i + 3] += e;
      const a1 = a * p - b * q;
      b = a * q + b * p;
      a = a1;
      const d1 = d * r - e * t;
      e = d * t + e * r;
      d = d1;
      const p1 = p * c - q * s;
      q = p * s + q * c;
      p = p1;
      const r1 = r * c - t * s;
      t = r * s + t * c;
      r = r1;
    }
  }
}

export { sampleDrive } from './sampled.js';
