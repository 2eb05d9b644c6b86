import { edgeOf, NODES } from './nodes.js';
import { STRIDE } from './pace.js';

/*
 * Products of rotations as unit quaternions, and what kicks need of them. In the picture that rotates with the drive a kick
 * acts along v, the place to which the inversion's axis has been turned back: the third row of the rotation so far.
 */

/** Quaternion (w, x, y, z) of the rotation so far, of vectors: R = 1 at the start. */
export type Quaternion = Float64Array;

/** Transverse drive seen from the rotating picture, and its strength, of corrections (chain.ts). */
export interface Pulls {
  /** Drive at the ends of steps, a + ib at edges[2n], times the step. */
  readonly edges: Float64Array;
  /** Per step end: vector and square of the drive. */
  readonly out: Float64Array;
}

/**
 * Applies the rotations of steps from … to − 1 one after another to `q` and writes the axis v after step n to
 * axes[3(n + 1) …], so that axes[0 …] is what holds before step 0.
 * @param turns angle gained by each step's own frame, or null
 * @param record receives the rotation after each step, or null
 */
export function turnAxes(
  vectors: Float64Array,
  turns: Float64Array | null,
  from: number,
  to: number,
  q: Quaternion,
  axes: Float64Array,
  pulls: Pulls | null,
  record: Float64Array | null = null,
): void {
  let qw = q[0];
  let qx = q[1];
  let qy = q[2];
  let qz = q[3];
  for (let n = from, k = 3 * from; n < to; n++, k += 3) {
    const px = vectors[k];
    const py = vectors[k + 1];
    const pz = vectors[k + 2];
    let u = 0.25 * (px * px + py * py + pz * pz);
    let w: number;
    let s: number;
    const large = u > 1;
    if (large) u *= 1 / 16;
    if (u <= 1) {
      // Chebyshev interpolants on [0, 1] of cos √u and sin √u/(2√u), exact to 2e-16; cosine exactly 1 at 0.
      const u2 = u * u;
      const u4 = u2 * u2;
      w =
        1 -
        0.49999999999999983 * u +
        (0.0416666666666628 - 0.0013888888888579183 * u) * u2 +
        (2.4801587179865645e-5 -
          2.7557293238470703e-7 * u +
          (2.087368217362566e-9 - 1.128104316059591e-11 * u) * u2) *
          u4;
      s =
        0.5 -
        0.08333333333332882 * u +
        (0.0041666666665944 - 9.920634877258376e-5 * u) * u2 +
        (1.3778647210317656e-6 - 1.2524233053905736e-8 * u + 7.89673695596647e-11 * u2) * u4;
      if (large) {
        // A quarter of the angle, doubled twice.
        s *= w;
        w = 2 * w * w - 1;
        s *= w;
        w = 2 * w * w - 1;
      }
    } else {
      const half = 4 * Math.sqrt(u);
      w = Math.cos(half);
      s = (0.5 * Math.sin(half)) / half;
    }
    const x = s * px;
    const y = s * py;
    let z = s * pz;
    if (turns && turns[n] !== 0) {
      // Out of the step's own frame: half the turn back before and after, which leaves the transverse part as it is.
      const c = Math.cos(0.5 * turns[n]);
      const l = -Math.sin(0.5 * turns[n]);
      const w1 = w * c - z * l;
      z = z * c + w * l;
      w = w1;
    }
    const aw = w * qw - x * qx - y * qy - z * qz;
    const ax = w * qx + x * qw + y * qz - z * qy;
    const ay = w * qy - x * qz + y * qw + z * qx;
    const az = w * qz + x * qy - y * qx + z * qw;
    qw = aw;
    qx = ax;
    qy = ay;
    qz = az;
    axes[k + 3] = 2 * (qx * qz - qw * qy);
    axes[k + 4] = 2 * (qy * qz + qw * qx);
    axes[k + 5] = 1 - 2 * (qx * qx + qy * qy);
    if (pulls && n % STRIDE === 0) pull(pulls, n, qw, qx, qy, qz);
    if (record) {
      record[4 * n] = qw;
      record[4 * n + 1] = qx;
      record[4 * n + 2] = qy;
      record[4 * n + 3] = qz;
    }
  }
  q[0] = qw;
  q[1] = qx;
  q[2] = qy;
  q[3] = qz;
}

/** Gauss–Legendre weights of the inner and outer nodes. */
const INNER_WEIGHT = (18 + Math.sqrt(30)) / 72;
const OUTER_WEIGHT = (18 - Math.sqrt(30)) / 72;

/**
 * What `planarVectors` and `turnAxes` give for a real drive in resonance: all rotations share one axis, so that a step is
 * the area under it.
 */
export function resonantAxes(
  samples: Float64Array,
  from: number,
  to: number,
  q: Quaternion,
  axes: Float64Array,
  pulls: Pulls | null,
  record: { readonly vectors: Float64Array; readonly quaternions: Float64Array } | null,
): void {
  let qw = q[0];
  let qx = q[1];
  for (let n = from, i = NODES * from, k = 3 * from + 3; n < to; n++, i += NODES, k += 3) {
    const half =
      -0.5 *
      (OUTER_WEIGHT * (samples[i] + samples[i + 3]) + INNER_WEIGHT * (samples[i + 1] + samples[i + 2]));
    const u = half * half;
    let w: number;
    let x: number;
    if (u <= 1) {
      const u2 = u * u;
      const u4 = u2 * u2;
      w =
        1 -
        0.49999999999999983 * u +
        (0.0416666666666628 - 0.0013888888888579183 * u) * u2 +
        (2.4801587179865645e-5 -
          2.7557293238470703e-7 * u +
          (2.087368217362566e-9 - 1.128104316059591e-11 * u) * u2) *
          u4;
      x =
        half *
        (1 -
          0.16666666666665764 * u +
          (0.0083333333331888 - 0.0001984126975451675 * u) * u2 +
          (2.7557294420635313e-6 - 2.5048466109781472e-8 * u + 1.579347391293344e-10 * u2) * u4);
    } else {
      w = Math.cos(half);
      x = Math.sin(half);
    }
    const next = w * qw - x * qx;
    qx = w * qx + x * qw;
    qw = next;
    axes[k] = 0;
    axes[k + 1] = 2 * qw * qx;
    axes[k + 2] = 1 - 2 * qx * qx;
    if (pulls && n % STRIDE === 0) {
      pulls.edges[2 * n] = edgeOf(samples, i);
      pulls.edges[2 * n + 1] = 0;
      pull(pulls, n, qw, qx, 0, 0);
    }
    if (record) {
      const { vectors, quaternions } = record;
      vectors[3 * n] = 2 * half;
      vectors[3 * n + 1] = 0;
      vectors[3 * n + 2] = 0;
      quaternions[4 * n] = qw;
      quaternions[4 * n + 1] = qx;
      quaternions[4 * n + 2] = 0;
      quaternions[4 * n + 3] = 0;
    }
  }
  q[0] = qw;
  q[1] = qx;
}

/** b·(first row) + a·(second row) of the rotation: the drive's pull on inversions, back in the rotating picture. */
function pull({ edges, out }: Pulls, n: number, w: number, x: number, y: number, z: number): void {
  const a = edges[2 * n];
  const b = edges[2 * n + 1];
  const k = 4 * (n + 1);
  out[k] = b * (1 - 2 * (y * y + z * z)) + 2 * a * (x * y + w * z);
  out[k + 1] = 2 * b * (x * y - w * z) + a * (1 - 2 * (x * x + z * z));
  out[k + 2] = 2 * (b * (x * z + w * y) + a * (y * z - w * x));
  out[k + 3] = a * a + b * b;
}

/** Free precession by an angle, or a change of the frame about the inversion's axis. */
export function turnAbout(q: Quaternion, angle: number): void {
  const c = Math.cos(0.5 * angle);
  const s = Math.sin(0.5 * angle);
  const w = q[0];
  const x = q[1];
  const y = q[2];
  const z = q[3];
  q[0] = c * w - s * z;
  q[1] = c * x - s * y;
  q[2] = c * y + s * x;
  q[3] = c * z + s * w;
}

/** The axis of kicks under a rotation, to the first three numbers of `out`. */
export function axisOf(q: Float64Array, out: Float64Array): void {
  // Destructuring a typed array goes through its iterator, which costs as much as ten steps.
  const w = q[0];
  const x = q[1];
  const y = q[2];
  const z = q[3];
  out[0] = 2 * (x * z - w * y);
  out[1] = 2 * (y * z + w * x);
  out[2] = 1 - 2 * (x * x + y * y);
}
