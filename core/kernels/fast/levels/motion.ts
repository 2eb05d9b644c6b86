import type { CountRequest } from '../../count.js';
import { phaseAt } from '../bloch/frame.js';
import { NODES } from '../bloch/nodes.js';
import type { Span } from '../spans.js';
import type { Ladder } from './ladder.js';
import { edgeOf, LadderStep } from './ladder-step.js';
import { nodeTable, type Source } from './table.js';

/** The unitaries of successive steps over all levels, and the drive between them, in the frame of the state. */
export interface Motion {
  /** Row-major over the ladder's levels, without their common phase; null where other levels move. */
  readonly three: { readonly re: Float64Array; readonly im: Float64Array } | null;
  /** Makes the unitary of step n. */
  advance(n: number): void;
  /** Row-major over all levels. */
  full(): { readonly re: Float64Array; readonly im: Float64Array };
  /** Writes re, im of each drive component at the end of step n, 1/ps. */
  driveAfter(n: number, out: Float64Array): void;
}

/** What a motion moves. */
export interface Course {
  readonly request: CountRequest;
  readonly span: Span;
  readonly h: number;
  readonly count: number;
  /** In the request's frame, 1/ps. */
  readonly energies: readonly number[];
  /** Frequency in the request's frame with which the state's own frame turns; null where it is the source's frame. */
  readonly line: number | null;
}

/** Steps on a ladder; every other level only turns. */
export class LadderMotion implements Motion {
  readonly three = { re: new Float64Array(9), im: new Float64Array(9) };
  private readonly step: LadderStep;
  readonly nodes: Float64Array;
  /** Unitaries of all parts in the source's frame and of all steps in the state's, where they are kept for derivatives. */
  readonly kept: { readonly parts: Unitaries; readonly steps: Unitaries } | null;
  private readonly all: { readonly re: Float64Array; readonly im: Float64Array };
  private last = 0;

  /**
   * @param parts steps of the expansion per step of the motion
   * @param keep whether to keep what derivatives need
   */
  constructor(
    readonly course: Course,
    readonly ladder: Ladder,
    readonly source: Source,
    readonly parts: number,
    keep: boolean,
  ) {
    const { request, span, h, count, energies } = course;
    const part = h / parts;
    this.step = new LadderStep(ladder.lower, ladder.upper);
    const nodes = nodeTable(request.drive, ladder.component, source, span, part, count * parts, 0.5 * part);
    this.nodes = keep ? nodes.slice(0, 2 * NODES * count * parts) : nodes;
    this.kept = keep ? { parts: unitaries(count * parts), steps: unitaries(count) } : null;
    const size = energies.length ** 2;
    this.all = { re: new Float64Array(size), im: new Float64Array(size) };
  }

  advance(n: number): void {
    const { course, step, parts, nodes, three, kept } = this;
    this.last = n;
    for (let k = 0; k < parts; k++) {
      const p = n * parts + k;
      const { first, second, slope } = this.falls(p);
      step.set(nodes, 2 * NODES * p, first, second, slope);
      if (kept) keepOne(step, kept.parts, p);
      if (k === 0) {
        // Nine numbers: the built-in copy takes longer.
        for (let i = 0; i < 9; i++) {
          three.re[i] = step.re[i];
          three.im[i] = step.im[i];
        }
      } else multiplyThree(step.re, step.im, three.re, three.im);
    }
    if (course.line !== null) this.toLine(n);
    if (kept) keepOne(three, kept.steps, n);
  }

  /** What LadderStep.set asks of the energies over part p of the span. */
  falls(p: number): { readonly first: number; readonly second: number; readonly slope: number } {
    const { course, ladder, source, parts } = this;
    const { energies, h, span } = course;
    const [a, b, c] = ladder.levels;
    const part = h / parts;
    const { rate, chirp, origin } = source.frame;
    const turn = part * (rate + 2 * chirp * (span.start + (p + 0.5) * part - origin));
    return {
      first: part * (energies[a] - energies[b]) - turn,
      second: part * (energies[b] - energies[c]) - turn,
      slope: 2 * chirp * part * part,
    };
  }

  /** Makes a kept step the last one again. */
  recall(n: number): void {
    const { kept, three } = this;
    if (!kept) throw new Error('no steps were kept');
    this.last = n;
    for (let k = 0; k < 9; k++) {
      three.re[k] = kept.steps.re[9 * n + k];
      three.im[k] = kept.steps.im[9 * n + k];
    }
  }

  /** Phase by which the state's frame turns against the source's. */
  phase(t: number): number {
    const { course, source } = this;
    return course.line === null ? 0 : phaseAt(source.frame, t) + course.line * t;
  }

  private toLine(n: number): void {
    const { re, im } = this.three;
    const { span, h } = this.course;
    const before = this.phase(span.start + n * h);
    const after = this.phase(span.start + (n + 1) * h);
    // Levels −1, 0, 1 about the middle one: the common phase is left out.
    for (let i = 0; i < 3; i++) {
      for (let j = 0; j < 3; j++) {
        const angle = (i - 1) * after - (j - 1) * before;
        if (angle === 0) continue;
        turnBy(re, im, 3 * i + j, Math.cos(angle), Math.sin(angle));
      }
    }
  }

  full(): { readonly re: Float64Array; readonly im: Float64Array } {
    const { all, course, ladder, three, last } = this;
    const { energies, h, request, span } = course;
    const { levels } = request.scheme;
    const n = levels.length;
    const before = span.start + last * h;
    // What each level gains in the state's frame when nothing drives it.
    const frames =
      course.line === null
        ? phaseAt(this.source.frame, before) - phaseAt(this.source.frame, before + h)
        : course.line * h;
    const angles = levels.map(({ excitons }, i) => excitons * frames - energies[i] * h);
    angles.forEach((angle, i) => {
      all.re[i * n + i] = Math.cos(angle);
      all.im[i * n + i] = Math.sin(angle);
    });
    const common = ladder.levels.reduce((sum, i) => sum + angles[i], 0) / 3;
    const c = Math.cos(common);
    const s = Math.sin(common);
    ladder.levels.forEach((i, k) => {
      ladder.levels.forEach((j, l) => {
        const x = three.re[3 * k + l];
        const y = three.im[3 * k + l];
        all.re[i * n + j] = c * x - s * y;
        all.im[i * n + j] = s * x + c * y;
      });
    });
    return all;
  }

  driveAfter(n: number, out: Float64Array): void {
    const { course, ladder, nodes, parts } = this;
    const { span, h } = course;
    const at = 2 * ladder.component;
    edgeOf(nodes, 2 * NODES * ((n + 1) * parts - 1), out, at);
    const scale = (2 * parts) / h;
    const phase = this.phase(span.start + (n + 1) * h);
    const x = scale * out[at];
    const y = scale * out[at + 1];
    out[at] = x * Math.cos(phase) - y * Math.sin(phase);
    out[at + 1] = x * Math.sin(phase) + y * Math.cos(phase);
  }
}

/** Unitaries one after another, nine numbers each. */
export interface Unitaries {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

const unitaries = (count: number): Unitaries => ({
  re: new Float64Array(9 * count),
  im: new Float64Array(9 * count),
});

function keepOne(one: Unitaries, all: Unitaries, at: number): void {
  for (let k = 0; k < 9; k++) {
    all.re[9 * at + k] = one.re[k];
    all.im[9 * at + k] = one.im[k];
  }
}

function turnBy(re: Float64Array, im: Float64Array, k: number, c: number, s: number): void {
  const x = re[k];
  re[k] = c * x - s * im[k];
  im[k] = s * x + c * im[k];
}

/** p ← a·p on 3×3 complex matrices. */
export function multiplyThree(ar: Float64Array, ai: Float64Array, pr: Float64Array, pi: Float64Array): void {
  for (let j = 0; j < 3; j++) {
    const x0 = pr[j];
    const y0 = pi[j];
    const x1 = pr[j + 3];
    const y1 = pi[j + 3];
    const x2 = pr[j + 6];
    const y2 = pi[j + 6];
    for (let i = 0; i < 9; i += 3) {
      const a = ar[i];
      const b = ai[i];
      const c = ar[i + 1];
      const d = ai[i + 1];
      const e = ar[i + 2];
      const f = ai[i + 2];
      pr[i + j] = a * x0 - b * y0 + (c * x1 - d * y1) + (e * x2 - f * y2);
      pi[i + j] = a * y0 + b * x0 + (c * y1 + d * x1) + (e * y2 + f * x2);
    }
  }
}
