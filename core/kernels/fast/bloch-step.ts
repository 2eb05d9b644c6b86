import type { Drive } from '../../pulse/drive.js';
import type { TwoLevel } from './two-level.js';

/** Nodes of three-point Gauss–Legendre quadrature on a step of length 1, from its middle. */
const NODE = Math.sqrt(15) / 10;
const ALPHA2 = Math.sqrt(15) / 3;
/** Largest squared half angle for which the power series of sine and cosine are exact to rounding. */
const SERIES = 2.5;

/**
 * Rotation of the Bloch vector (Re ρ_gx, Im ρ_gx, (ρ_gg − ρ_xx)/2) over one step, by the Magnus expansion of order 6
 * on Gauss nodes (Blanes, Casas, Oteo & Ros, Phys. Rep. 470, 151 (2009), section 5). The step is taken in a frame that
 * follows the drive's phase across it, so that a chirp costs no steps.
 */
export class BlochStep {
  /** Row-major 3×3 rotation of the last step. */
  readonly matrix = new Float64Array(9);
  private readonly sample = new Float64Array(2);

  private readonly coupling: number;
  private readonly quartic: number;
  private readonly axial: number;

  /**
   * Besides the drive the step carries what the kicks' second-order error has in common for all counting operators: with
   * δ the dephasing over the decay, −(h²γ²/96)(1 + δ²) − (h⁴γ²Ω²/5760)(1 + 4δ²) of the transverse drive and
   * −(h⁴γ²Ω²/5760)(1 + δ²) of the detuning.
   * @param h length of every step, ps
   * @param follow whether to follow the phase of the drive step by step
   */
  constructor(
    private readonly drive: Drive,
    model: TwoLevel,
    private readonly h: number,
    private readonly follow: boolean,
  ) {
    const ratio = model.decay > 0 ? (model.dephasing / model.decay) ** 2 : 0;
    const small = (h * model.decay) ** 2;
    this.coupling = model.weight * h * (1 - (small / 96) * (1 + ratio));
    this.quartic = (small / 5760) * (1 + 4 * ratio);
    this.axial = (small / 5760) * (1 + ratio);
    this.energy = model.energy;
  }

  private readonly energy: number;

  /** Rotation over the step about t (ps); `left`, `middle`, `right` are the segments of its nodes. */
  advance(t: number, left: number, middle: number, right: number): void {
    const { sample, drive, h, coupling, quartic } = this;
    drive.sample(t - NODE * h, left, sample);
    let a1 = sample[0] * coupling;
    let b1 = sample[1] * coupling;
    drive.sample(t, middle, sample);
    let a2 = sample[0] * coupling;
    let b2 = sample[1] * coupling;
    drive.sample(t + NODE * h, right, sample);
    let a3 = sample[0] * coupling;
    let b3 = sample[1] * coupling;
    const square = a2 * a2 + b2 * b2;
    const s1 = 1 - quartic * (a1 * a1 + b1 * b1);
    const s2 = 1 - quartic * square;
    const s3 = 1 - quartic * (a3 * a3 + b3 * b3);
    a1 *= s1;
    b1 *= s1;
    a2 *= s2;
    b2 *= s2;
    a3 *= s3;
    b3 *= s3;
    let turn = 0;
    if (this.follow) {
      const re = a3 * a1 + b3 * b1;
      const im = b3 * a1 - a3 * b1;
      const modulus = Math.sqrt(re * re + im * im);
      if (modulus > 0 && im !== 0) {
        turn = Math.atan2(im, re);
        const c = Math.cos(0.5 * turn);
        const s = Math.sin(0.5 * turn);
        const a = a1 * c - b1 * s;
        b1 = a1 * s + b1 * c;
        a1 = a;
        const d = a3 * c + b3 * s;
        b3 = b3 * c - a3 * s;
        a3 = d;
      }
    }
    // Phase gained over the whole step at the rate seen between the outer nodes.
    const gained = turn / (2 * NODE);
    this.exponentiate(a1, b1, a2, b2, a3, b3, (this.energy * h + gained) * (1 - this.axial * square), gained);
  }

  private exponentiate(
    a1: number,
    b1: number,
    a2: number,
    b2: number,
    a3: number,
    b3: number,
    z: number,
    gained: number,
  ): void {
    // Rotation vectors (−Re Ω, Im Ω, energy)·h; commutators are cross products.
    const x1 = -a2;
    const y1 = b2;
    const x2 = -ALPHA2 * (a3 - a1);
    const y2 = ALPHA2 * (b3 - b1);
    const x3 = (-10 / 3) * (a3 - 2 * a2 + a1);
    const y3 = (10 / 3) * (b3 - 2 * b2 + b1);
    // C1 = [α1, α2] with α2z = α3z = 0.
    const c1x = -z * y2;
    const c1y = z * x2;
    const c1z = x1 * y2 - y1 * x2;
    // C2 = −[α1, 2α3 + C1]/60.
    const ex = 2 * x3 + c1x;
    const ey = 2 * y3 + c1y;
    const c2x = -(y1 * c1z - z * ey) / 60;
    const c2y = -(z * ex - x1 * c1z) / 60;
    const c2z = -(x1 * ey - y1 * ex) / 60;
    // [−20α1 − α3 + C1, α2 + C2]/240.
    const fx = -20 * x1 - x3 + c1x;
    const fy = -20 * y1 - y3 + c1y;
    const fz = -20 * z + c1z;
    const gx = x2 + c2x;
    const gy = y2 + c2y;
    const px = x1 + x3 / 12 + (fy * c2z - fz * gy) / 240;
    const py = y1 + y3 / 12 + (fz * gx - fx * c2z) / 240;
    const pz = z + (fx * gy - fy * gx) / 240;
    const u = 0.25 * (px * px + py * py + pz * pz);
    let c: number;
    let s: number;
    if (u < SERIES) {
      c =
        1 -
        (u / 2) *
          (1 -
            (u / 12) *
              (1 -
                (u / 30) *
                  (1 -
                    (u / 56) *
                      (1 -
                        (u / 90) *
                          (1 -
                            (u / 132) *
                              (1 - (u / 182) * (1 - (u / 240) * (1 - (u / 306) * (1 - u / 380)))))))));
      s =
        0.5 *
        (1 -
          (u / 6) *
            (1 -
              (u / 20) *
                (1 -
                  (u / 42) *
                    (1 -
                      (u / 72) *
                        (1 -
                          (u / 110) *
                            (1 -
                              (u / 156) *
                                (1 - (u / 210) * (1 - (u / 272) * (1 - (u / 342) * (1 - u / 420))))))))));
    } else {
      const half = Math.sqrt(u);
      c = Math.cos(half);
      s = (0.5 * Math.sin(half)) / half;
    }
    let q0 = c;
    const q1 = s * px;
    const q2 = s * py;
    let q3 = s * pz;
    if (gained !== 0) {
      // Back to the drive's frame: a turn by −gained/2 about the third axis before and after.
      const k = Math.cos(-0.25 * gained);
      const l = Math.sin(-0.25 * gained);
      const cc = k * k - l * l;
      const cs = 2 * k * l;
      const w0 = q0 * cc - q3 * cs;
      q3 = q3 * cc + q0 * cs;
      q0 = w0;
      // Equal turns on both sides leave the transverse part as it is.
    }
    const m = this.matrix;
    const yy = q2 * q2;
    const zz = q3 * q3;
    const xx = q1 * q1;
    const xy = q1 * q2;
    const wz = q0 * q3;
    const xz = q1 * q3;
    const wy = q0 * q2;
    const yz = q2 * q3;
    const wx = q0 * q1;
    m[0] = 1 - 2 * (yy + zz);
    m[1] = 2 * (xy - wz);
    m[2] = 2 * (xz + wy);
    m[3] = 2 * (xy + wz);
    m[4] = 1 - 2 * (xx + zz);
    m[5] = 2 * (yz - wx);
    m[6] = 2 * (xz - wy);
    m[7] = 2 * (yz + wx);
    m[8] = 1 - 2 * (xx + yy);
  }
}
