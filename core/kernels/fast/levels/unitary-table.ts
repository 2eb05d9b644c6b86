import type { CountRequest } from '../../count.js';
import { NODES } from '../bloch/nodes.js';
import type { Span } from '../spans.js';
import { take } from './arena.js';
import type { Ladder } from './ladder.js';
import { LadderStep } from './ladder-step.js';
import { nodeTable, type Source } from './table.js';

/** Unitaries one after another, nine numbers each. */
export interface Unitaries {
  readonly re: Float64Array;
  readonly im: Float64Array;
}

export const unitaries = (count: number): Unitaries => ({
  re: take(9 * count),
  im: take(9 * count),
});

export function keepOne(one: Unitaries, all: Unitaries, at: number): void {
  for (let k = 0; k < 9; k++) {
    all.re[9 * at + k] = one.re[k];
    all.im[9 * at + k] = one.im[k];
  }
}

/** What a ladder's rotations over a span depend on. */
export interface Stretch {
  readonly request: CountRequest;
  readonly span: Span;
  readonly ladder: Ladder;
  readonly source: Source;
  /** In the request's frame, 1/ps. */
  readonly energies: readonly number[];
}

/** Error of populations over the difference from twice as long steps of order 8, with a margin of 4. */
const FINER = 1 / 64;

/** The unitaries of equal steps of a ladder over a span, in the frame of the source: for runs with any multiple of the step. */
export class UnitaryTable {
  /** Step, ps. */
  readonly h: number;
  readonly nodes: Float64Array;
  readonly all: Unitaries;

  constructor(
    readonly stretch: Stretch,
    readonly count: number,
  ) {
    const { request, span, ladder, source } = stretch;
    this.h = (span.end - span.start) / count;
    this.nodes = nodeTable(request.drive, ladder.component, source, span, this.h, count, 0.5 * this.h);
    this.all = unitaries(count);
    const step = new LadderStep(ladder.lower, ladder.upper);
    const half = this.isEven() ? Math.ceil(count / 2) : count;
    for (let p = 0; p < half; p++) {
      const { first, second, slope } = this.falls(p);
      step.set(this.nodes, 2 * NODES * p, first, second, slope);
      keepOne(step, this.all, p);
    }
    for (let p = half; p < count; p++) this.mirror(count - 1 - p, p);
  }

  /** A real drive that is the same in reverse: then so is the motion, up to a transpose. */
  private isEven(): boolean {
    const { span, source } = this.stretch;
    const { tones, frame } = source;
    if (tones?.length !== 1 || frame.chirp !== 0) return false;
    const [{ delay, phase, rate, chirp }] = tones;
    const off = Math.abs(span.start + span.end - 2 * delay);
    return phase === 0 && rate === 0 && chirp === 0 && off <= 1e-13 * (span.end - span.start);
  }

  private mirror(from: number, to: number): void {
    const { re, im } = this.all;
    for (let i = 0; i < 3; i++) {
      for (let j = 0; j < 3; j++) {
        re[9 * to + 3 * i + j] = re[9 * from + 3 * j + i];
        im[9 * to + 3 * i + j] = im[9 * from + 3 * j + i];
      }
    }
  }

  /** What LadderStep.set asks of the energies over step p. */
  falls(p: number): { readonly first: number; readonly second: number; readonly slope: number } {
    const { ladder, source, span, energies } = this.stretch;
    const [a, b, c] = ladder.levels;
    const { h } = this;
    const { rate, chirp, origin } = source.frame;
    const turn = h * (rate + 2 * chirp * (span.start + (p + 0.5) * h - origin));
    return {
      first: h * (energies[a] - energies[b]) - turn,
      second: h * (energies[b] - energies[c]) - turn,
      slope: 2 * chirp * h * h,
    };
  }

  /** Product of `parts` steps from number `from` on. */
  product(from: number, parts: number, out: Unitaries): void {
    const { re, im } = this.all;
    // Nine numbers: the built-in copy takes longer.
    for (let k = 0; k < 9; k++) {
      out.re[k] = re[9 * from + k];
      out.im[k] = im[9 * from + k];
    }
    for (let p = from + 1; p < from + parts; p++) multiplyThree(re, im, 9 * p, out.re, out.im);
  }

  /**
   * Estimated error of populations after the span, from a table of twice as long steps (the count must be even). What is off
   * in between only matters in so far as light is emitted there.
   */
  error(): number {
    const coarse = new UnitaryTable(this.stretch, this.count / 2);
    const a = identity();
    const b = identity();
    coarse.product(0, coarse.count, a);
    this.product(0, this.count, b);
    let worst = 0;
    for (let k = 0; k < 9; k++) {
      const d = a.re[k] * a.re[k] + a.im[k] * a.im[k] - b.re[k] * b.re[k] - b.im[k] * b.im[k];
      worst = Math.max(worst, Math.abs(d));
    }
    return FINER * worst;
  }
}

const identity = (): Unitaries => ({
  re: Float64Array.of(1, 0, 0, 0, 1, 0, 0, 0, 1),
  im: new Float64Array(9),
});

/** p ← a·p on 3×3 complex matrices, a from index `at` of its numbers. */
export function multiplyThree(
  ar: Float64Array,
  ai: Float64Array,
  at: number,
  pr: Float64Array,
  pi: Float64Array,
): void {
  for (let j = 0; j < 3; j++) {
    const x0 = pr[j];
    const y0 = pi[j];
    const x1 = pr[j + 3];
    const y1 = pi[j + 3];
    const x2 = pr[j + 6];
    const y2 = pi[j + 6];
    for (let i = 0; i < 9; i += 3) {
      const a = ar[at + i];
      const b = ai[at + i];
      const c = ar[at + i + 1];
      const d = ai[at + i + 1];
      const e = ar[at + i + 2];
      const f = ai[at + i + 2];
      pr[i + j] = a * x0 - b * y0 + (c * x1 - d * y1) + (e * x2 - f * y2);
      pi[i + j] = a * y0 + b * x0 + (c * y1 + d * x1) + (e * y2 + f * x2);
    }
  }
}
