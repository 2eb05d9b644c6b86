import { INNER, OUTER } from '../bloch/nodes.js';
import { commute, MATRIX } from './hermitian.js';

/** 1/(j(j−1)), 1/(j(j−1)(j−2)) and 1/(j+1) for the series of the exponential. */
const TERMS = 80;
const SECOND = Float64Array.from({ length: TERMS }, (_, j) => (j < 2 ? 0 : 1 / (j * (j - 1))));
const THIRD = Float64Array.from({ length: TERMS }, (_, j) => (j < 3 ? 0 : 1 / (j * (j - 1) * (j - 2))));
const NEXT = Float64Array.from({ length: TERMS }, (_, j) => 1 / (j + 1));

const HALF_INNER = 0.5 / INNER;
const HALF_OUTER = 0.5 / OUTER;
const SQUARE = INNER * INNER;
const SPREAD = 1 / (OUTER * OUTER - INNER * INNER);

/** Places of the matrices of a step in its work space: α₁ … α₄, then sums and commutators. */
const [A1, A2, A3, A4, LEFT, RIGHT, S1, R1, S2, R2, S3, INNERMOST] = Array.from(
  { length: 12 },
  (_, k) => k * MATRIX,
);

/**
 * Unitary of a ladder of three levels over one step, one drive on both rungs, level energies linear in time: Magnus
 * expansion of order 8 with six commutators on four Gauss nodes (Blanes, Casas & Ros, BIT 42, 262 (2002); Blanes, Casas,
 * Oteo & Ros, Phys. Rep. 470, 151 (2009), section 5; the formula stands in bloch/magnus.ts), and the exponential of a
 * Hermitian 3×3 matrix A as f₀ + f₁A + f₂A² (Cayley–Hamilton), whose coefficients are power series in the two
 * invariants of A.
 */
export class LadderStep {
  /** The unitary of the last step without the phase common to all levels, row-major. */
  readonly re = new Float64Array(9);
  readonly im = new Float64Array(9);
  /** Only elements that a ladder has are ever written to the first matrices. */
  private readonly work = new Float64Array(12 * MATRIX);

  /**
   * @param lower weight of Ω on the lower rung, `upper` on the upper one: H ∋ ½ weight·Ω |up⟩⟨low| + h.c.
   */
  constructor(
    private readonly lower: number,
    private readonly upper: number,
  ) {}

  /**
   * Sets the unitary.
   * @param nodes re, im of ½hΩ at the four nodes, from index i
   * @param first energy of level 0 minus that of level 1 in the middle of the step, times the step; `second` of 1 minus 2
   * @param slope by how much both fall across the step
   */
  set(nodes: Float64Array, i: number, first: number, second: number, slope: number): void {
    const { work: w } = this;
    this.expand(nodes, i, first, second, slope);
    for (let k = 0; k < MATRIX; k++) {
      w[LEFT + k] = w[A1 + k] + w[A3 + k] * (1 / 28);
      w[RIGHT + k] = w[A2 + k] + w[A4 + k] * (3 / 28);
    }
    commute(w, LEFT, RIGHT, S1);
    for (let k = 0; k < MATRIX; k++) {
      w[S1 + k] *= -1 / 28;
      w[INNERMOST + k] = (w[S1 + k] - w[A3 + k] * (1 / 14)) * (1 / 3);
    }
    commute(w, A1, INNERMOST, R1);
    for (let k = 0; k < MATRIX; k++) {
      w[LEFT + k] += w[S1 + k];
      w[RIGHT + k] += w[R1 + k];
    }
    commute(w, LEFT, RIGHT, S2);
    commute(w, A2, S1, INNERMOST);
    for (let k = 0; k < MATRIX; k++) {
      w[LEFT + k] = w[A1 + k] + 1.25 * w[S1 + k];
      w[RIGHT + k] = 2 * w[A3 + k] + w[S2 + k] + 0.5 * w[INNERMOST + k];
    }
    commute(w, LEFT, RIGHT, R2);
    for (let k = 0; k < MATRIX; k++) {
      const sum = w[A1 + k] + w[A3 + k] * (1 / 12);
      w[LEFT + k] = sum - (7 / 3) * w[S1 + k] - w[S2 + k] * (1 / 6);
      w[RIGHT + k] = 63 * w[R1 + k] + w[R2 + k] - 9 * w[A2 + k] - 2.25 * w[A4 + k];
      w[INNERMOST + k] = sum - (7 / 120) * w[S2 + k];
    }
    commute(w, LEFT, RIGHT, S3);
    for (let k = 0; k < MATRIX; k++) w[S3 + k] = w[INNERMOST + k] + w[S3 + k] * (1 / 360);
    this.finish();
  }

  /** Generator times the step as α₁ + α₂u + α₃u² + α₄u³ about its middle, u = −½ … ½. */
  private expand(nodes: Float64Array, i: number, first: number, second: number, slope: number): void {
    const { work: w, lower, upper } = this;
    const f1 = nodes[i + 2];
    const f2 = nodes[i + 4];
    const even = 0.5 * (f1 + f2);
    const odd = HALF_INNER * (f2 - f1);
    const x3 = SPREAD * (0.5 * (nodes[i] + nodes[i + 6]) - even);
    const x4 = SPREAD * (HALF_OUTER * (nodes[i + 6] - nodes[i]) - odd);
    const g1 = nodes[i + 3];
    const g2 = nodes[i + 5];
    const evenY = 0.5 * (g1 + g2);
    const oddY = HALF_INNER * (g2 - g1);
    const y3 = SPREAD * (0.5 * (nodes[i + 1] + nodes[i + 7]) - evenY);
    const y4 = SPREAD * (HALF_OUTER * (nodes[i + 7] - nodes[i + 1]) - oddY);
    put(w, A1, first, second, even - SQUARE * x3, SQUARE * y3 - evenY, lower, upper);
    put(w, A2, -slope, -slope, odd - SQUARE * x4, SQUARE * y4 - oddY, lower, upper);
    put(w, A3, 0, 0, x3, -y3, lower, upper);
    put(w, A4, 0, 0, x4, -y4, lower, upper);
  }

  /**
   * Sets the unitary of a short part of a step, from u = from to u = to, by the expansion of order 4: for derivatives,
   * which need no more.
   */
  setShort(
    nodes: Float64Array,
    i: number,
    first: number,
    second: number,
    slope: number,
    from: number,
    to: number,
  ): void {
    const { work: w } = this;
    this.expand(nodes, i, first, second, slope);
    const length = to - from;
    const c = 0.5 * (from + to);
    const square = (to * to - from * from) / 2;
    const cube = (to ** 3 - from ** 3) / 3;
    const fourth = (to ** 4 - from ** 4) / 4;
    for (let k = 0; k < MATRIX; k++) {
      w[LEFT + k] = length * (w[A1 + k] + c * (w[A2 + k] + c * (w[A3 + k] + c * w[A4 + k])));
      w[RIGHT + k] = length * length * (w[A2 + k] + c * (2 * w[A3 + k] + 3 * c * w[A4 + k]));
    }
    commute(w, LEFT, RIGHT, S1);
    for (let k = 0; k < MATRIX; k++) {
      w[S3 + k] =
        length * w[A1 + k] + square * w[A2 + k] + cube * w[A3 + k] + fourth * w[A4 + k] - w[S1 + k] / 12;
    }
    this.finish();
  }

  private finish(): void {
    const { work: w } = this;
    const d01 = w[S3];
    const d12 = w[S3 + 1];
    this.exponentiate(
      (2 * d01 + d12) / 3,
      (d12 - d01) / 3,
      -(d01 + 2 * d12) / 3,
      w[S3 + 2],
      w[S3 + 3],
      w[S3 + 4],
      w[S3 + 5],
      w[S3 + 6],
      w[S3 + 7],
    );
  }

  /** e^{−iA} of a traceless A with diagonal d and elements a (01), b (12), c (02). */
  private exponentiate(
    d0: number,
    d1: number,
    d2: number,
    ar: number,
    ai: number,
    br: number,
    bi: number,
    cr: number,
    ci: number,
  ): void {
    const aa = ar * ar + ai * ai;
    const bb = br * br + bi * bi;
    const cc = cr * cr + ci * ci;
    const abr = ar * br - ai * bi;
    const abi = ar * bi + ai * br;
    // A³ = pA + q.
    const p = 0.5 * (d0 * d0 + d1 * d1 + d2 * d2) + aa + bb + cc;
    const q = d0 * d1 * d2 + 2 * (abr * cr + abi * ci) - d0 * bb - d1 * cc - d2 * aa;
    // A^j = u + vA + wA² with w_{j+3} = p w_{j+1} + q w_j; c_j = w_j/j!.
    const last = Math.min(TERMS - 5, 12 + 7 * Math.sqrt(1.34 * p));
    let c0 = 0;
    let c1 = 0;
    let c2 = 0.5;
    let even2 = -0.5;
    let odd2 = 0;
    let odd1 = -1;
    let even1 = 0;
    let odd0 = 1 / 6;
    let even0 = 0;
    for (let j = 3; j < last; j += 4) {
      // (−i)^j for j = 3, 4, 5, 6 modulo 4: i, 1, −i, −1.
      const t3 = p * SECOND[j] * c1 + q * THIRD[j] * c0;
      const t4 = p * SECOND[j + 1] * c2 + q * THIRD[j + 1] * c1;
      const t5 = p * SECOND[j + 2] * t3 + q * THIRD[j + 2] * c2;
      const t6 = p * SECOND[j + 3] * t4 + q * THIRD[j + 3] * t3;
      odd2 += t3 - t5;
      even2 += t4 - t6;
      even1 += (j + 2) * t5 - j * t3;
      odd1 += (j + 1) * t4 - (j + 3) * t6;
      even0 += NEXT[j] * t3 - NEXT[j + 2] * t5;
      odd0 += NEXT[j + 3] * t6 - NEXT[j + 1] * t4;
      c0 = t4;
      c1 = t5;
      c2 = t6;
    }
    this.assemble(
      1 + q * even0,
      q * odd0,
      even1,
      odd1,
      even2,
      odd2,
      d0,
      d1,
      d2,
      ar,
      ai,
      br,
      bi,
      cr,
      ci,
      d0 * d0 + aa + cc,
      d1 * d1 + aa + bb,
      d2 * d2 + bb + cc,
      -d2 * ar + cr * br + ci * bi,
      -d2 * ai + ci * br - cr * bi,
      -d0 * br + ar * cr + ai * ci,
      -d0 * bi + ar * ci - ai * cr,
      -d1 * cr + abr,
      -d1 * ci + abi,
    );
  }

  /** f₀ + f₁A + f₂A². */
  private assemble(
    gr: number,
    gi: number,
    hr: number,
    hi: number,
    kr: number,
    ki: number,
    d0: number,
    d1: number,
    d2: number,
    ar: number,
    ai: number,
    br: number,
    bi: number,
    cr: number,
    ci: number,
    s0: number,
    s1: number,
    s2: number,
    sar: number,
    sai: number,
    sbr: number,
    sbi: number,
    scr: number,
    sci: number,
  ): void {
    const { re, im } = this;
    re[0] = gr + hr * d0 + kr * s0;
    im[0] = gi + hi * d0 + ki * s0;
    re[4] = gr + hr * d1 + kr * s1;
    im[4] = gi + hi * d1 + ki * s1;
    re[8] = gr + hr * d2 + kr * s2;
    im[8] = gi + hi * d2 + ki * s2;
    // Elements above and below the diagonal: f·A and f·A*.
    const a1 = hr * ar + kr * sar;
    const a2 = hi * ai + ki * sai;
    const a3 = hr * ai + kr * sai;
    const a4 = hi * ar + ki * sar;
    re[1] = a1 - a2;
    im[1] = a4 + a3;
    re[3] = a1 + a2;
    im[3] = a4 - a3;
    const b1 = hr * br + kr * sbr;
    const b2 = hi * bi + ki * sbi;
    const b3 = hr * bi + kr * sbi;
    const b4 = hi * br + ki * sbr;
    re[5] = b1 - b2;
    im[5] = b4 + b3;
    re[7] = b1 + b2;
    im[7] = b4 - b3;
    const c1 = hr * cr + kr * scr;
    const c2 = hi * ci + ki * sci;
    const c3 = hr * ci + kr * sci;
    const c4 = hi * cr + ki * scr;
    re[2] = c1 - c2;
    im[2] = c4 + c3;
    re[6] = c1 + c2;
    im[6] = c4 - c3;
  }
}

/** A matrix of the drive x + iy on both rungs with the given differences of diagonal elements. */
function put(
  w: Float64Array,
  at: number,
  first: number,
  second: number,
  x: number,
  y: number,
  lower: number,
  upper: number,
): void {
  w[at] = first;
  w[at + 1] = second;
  w[at + 2] = lower * x;
  w[at + 3] = lower * y;
  w[at + 4] = upper * x;
  w[at + 5] = upper * y;
}

/** The drive at the end of a step from its nodes, to out[at], out[at + 1]. */
export function edgeOf(nodes: Float64Array, i: number, out: Float64Array, at: number): void {
  for (let k = 0; k < 2; k++) {
    const even = 0.5 * (nodes[i + 2 + k] + nodes[i + 4 + k]);
    const odd = HALF_INNER * (nodes[i + 4 + k] - nodes[i + 2 + k]);
    const third = SPREAD * (0.5 * (nodes[i + k] + nodes[i + 6 + k]) - even);
    const fourth = SPREAD * (HALF_OUTER * (nodes[i + 6 + k] - nodes[i + k]) - odd);
    out[at + k] = even - SQUARE * third + 0.5 * (odd - SQUARE * fourth) + 0.25 * third + 0.125 * fourth;
  }
}
