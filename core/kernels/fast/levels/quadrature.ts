import { phaseAt } from '../bloch/frame.js';
import { NODES } from '../bloch/nodes.js';
import { take } from './arena.js';
import { MATRIX, turned } from './hermitian.js';
import { LadderStep } from './ladder-step.js';
import type { LadderMotion } from './motion.js';

/** Gauss–Lobatto quadrature on a step from 0 to 1: both ends and two places inside, order 6. */
const INSIDE = 0.5 - Math.sqrt(5) / 10;
const WEIGHTS = { end: 1 / 12, inside: 5 / 12 };
/** Samples that a part of a step adds: two inside and its end. */
const PER_PART = 3;

/**
 * Derivatives of functionals by the drive, one set of samples for all of them. A change dΩ changes the value by
 * ∫ Tr(Q δH) dt with Q the torque (rotation.ts), which turns with the levels between kicks and jumps at them: so the
 * integral is taken step by step, with the turning exact to a high order inside.
 */
export class DriveDerivatives {
  /** Times of the samples, ps. */
  readonly times: Float64Array;
  /** Per functional re, im: what multiplies Re dΩ and Im dΩ of the ladder's component. */
  readonly scalars: readonly Float64Array[];
  private readonly short: LadderStep;
  private readonly inner = new Float64Array(MATRIX);
  private readonly phases: Float64Array;

  constructor(
    private readonly motion: LadderMotion,
    functionals: number,
  ) {
    const { course, ladder, parts } = motion;
    const count = course.count * parts;
    const part = course.h / parts;
    this.short = new LadderStep(ladder.lower, ladder.upper);
    this.times = take(PER_PART * count + 1);
    for (let p = 0; p < count; p++) {
      const start = course.span.start + p * part;
      this.times[PER_PART * p] = start;
      this.times[PER_PART * p + 1] = start + INSIDE * part;
      this.times[PER_PART * p + 2] = start + (1 - INSIDE) * part;
    }
    this.times[PER_PART * count] = course.span.end;
    this.scalars = Array.from({ length: functionals }, () => take(2 * this.times.length));
    this.phases = take(2 * this.times.length);
    this.times.forEach((t, i) => {
      const phase = -phaseAt(motion.source.frame, t);
      this.phases[2 * i] = Math.cos(phase);
      this.phases[2 * i + 1] = Math.sin(phase);
    });
  }

  /**
   * Adds what step n gives.
   * @param torques of every functional at the end of the step in the state's frame; used up
   */
  addStep(n: number, torques: readonly Float64Array[]): void {
    const { motion, short, inner } = this;
    const { course, parts, table } = motion;
    const { nodes, all } = table;
    if (course.line !== null) {
      const phase = motion.phase(course.span.start + (n + 1) * course.h);
      for (const q of torques) toSource(q, phase);
    }
    for (let p = (n + 1) * parts - 1; p >= n * parts; p--) {
      const { first, second, slope } = table.falls(p);
      short.setShort(nodes, 2 * NODES * p, first, second, slope, 0.5 - INSIDE, 0.5);
      for (let f = 0; f < torques.length; f++) {
        const q = torques[f];
        this.put(f, PER_PART * (p + 1), WEIGHTS.end, q);
        turned(short.re, short.im, 0, q, true, inner);
        this.put(f, PER_PART * p + 2, WEIGHTS.inside, inner);
        turned(all.re, all.im, 9 * p, q, true, q);
      }
      short.setShort(nodes, 2 * NODES * p, first, second, slope, -0.5, INSIDE - 0.5);
      for (let f = 0; f < torques.length; f++) {
        turned(short.re, short.im, 0, torques[f], false, inner);
        this.put(f, PER_PART * p + 1, WEIGHTS.inside, inner);
        this.put(f, PER_PART * p, WEIGHTS.end, torques[f]);
      }
    }
  }

  /** Adds the derivatives x, y by the drive's Re and Im after step n in the state's frame. */
  addEdge(n: number, functional: number, x: number, y: number): void {
    const { motion, times } = this;
    const sample = PER_PART * motion.parts * (n + 1);
    const t = times[sample];
    // The state's frame sees Ω·e^{iφ}.
    const phase = motion.phase(t) - phaseAt(motion.source.frame, t);
    const c = Math.cos(phase);
    const s = Math.sin(phase);
    const out = this.scalars[functional];
    out[2 * sample] += x * c + y * s;
    out[2 * sample + 1] += y * c - x * s;
  }

  /** With L = ½(lower|1⟩⟨0| + upper|2⟩⟨1|): Tr(Q(ΔΩ L + h.c.)) = 2 Re(ΔΩ Tr(QL)). */
  private put(functional: number, sample: number, weight: number, q: Float64Array): void {
    const { motion, phases } = this;
    const { lower, upper } = motion.ladder;
    const scale = (weight * motion.course.h) / motion.parts;
    const x = scale * (lower * q[2] + upper * q[4]);
    const y = scale * (lower * q[3] + upper * q[5]);
    const c = phases[2 * sample];
    const s = phases[2 * sample + 1];
    const out = this.scalars[functional];
    out[2 * sample] += x * c - y * s;
    out[2 * sample + 1] -= x * s + y * c;
  }
}

/** From the frame of the line to that of the source: elements 01 and 12 gain e^{iφ}, 02 e^{2iφ}. */
function toSource(q: Float64Array, phase: number): void {
  const c = Math.cos(phase);
  const s = Math.sin(phase);
  turnPair(q, 2, c, s);
  turnPair(q, 4, c, s);
  turnPair(q, 6, c * c - s * s, 2 * c * s);
}

function turnPair(q: Float64Array, k: number, c: number, s: number): void {
  const x = q[k];
  q[k] = c * x - s * q[k + 1];
  q[k + 1] = s * x + c * q[k + 1];
}
