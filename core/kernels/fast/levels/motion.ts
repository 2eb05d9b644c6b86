import type { CountRequest } from '../../count.js';
import { phaseAt } from '../bloch/frame.js';
import { NODES } from '../bloch/nodes.js';
import type { Span } from '../spans.js';
import type { Ladder } from './ladder.js';
import { edgeOf } from './ladder-step.js';
import type { Source } from './table.js';
import { keepOne, type Unitaries, type UnitaryTable, unitaries } from './unitary-table.js';

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
  /** Steps of the table per step of the motion. */
  readonly parts: number;
  /** Unitaries of all steps in the state's frame, where they are kept for derivatives. */
  readonly kept: Unitaries | null;
  private readonly all: { readonly re: Float64Array; readonly im: Float64Array };
  private last = 0;

  /** @param keep whether to keep what derivatives need */
  constructor(
    readonly course: Course,
    readonly table: UnitaryTable,
    keep: boolean,
  ) {
    this.parts = table.count / course.count;
    this.kept = keep ? unitaries(course.count) : null;
    const size = course.energies.length ** 2;
    this.all = { re: new Float64Array(size), im: new Float64Array(size) };
  }

  get source(): Source {
    return this.table.stretch.source;
  }

  get ladder(): Ladder {
    return this.table.stretch.ladder;
  }

  advance(n: number): void {
    const { course, parts, three, kept, table } = this;
    this.last = n;
    table.product(n * parts, parts, three);
    if (course.line !== null) this.toLine(n);
    if (kept) keepOne(three, kept, n);
  }

  /** Makes a kept step the last one again. */
  recall(n: number): void {
    const { kept, three } = this;
    if (!kept) throw new Error('no steps were kept');
    this.last = n;
    for (let k = 0; k < 9; k++) {
      three.re[k] = kept.re[9 * n + k];
      three.im[k] = kept.im[9 * n + k];
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
    const { course, ladder, table, parts } = this;
    const { span, h } = course;
    const at = 2 * ladder.component;
    edgeOf(table.nodes, 2 * NODES * ((n + 1) * parts - 1), out, at);
    const scale = 2 / table.h;
    const phase = this.phase(span.start + (n + 1) * h);
    const x = scale * out[at];
    const y = scale * out[at + 1];
    out[at] = x * Math.cos(phase) - y * Math.sin(phase);
    out[at + 1] = x * Math.sin(phase) + y * Math.cos(phase);
  }
}

function turnBy(re: Float64Array, im: Float64Array, k: number, c: number, s: number): void {
  const x = re[k];
  re[k] = c * x - s * im[k];
  im[k] = s * x + c * im[k];
}
