import { phaseAt } from '../bloch/frame.js';
import { take } from './arena.js';
import { addProduct } from './correction.js';
import { GeneralMotion } from './general-motion.js';
import { LadderMotion, type Motion } from './motion.js';
import type { Problem } from './run.js';
import { multiplyThree, type UnitaryTable } from './unitary-table.js';

/** Steps between two corrections of the kicks, at least: a fine sum is not needed of what is small. */
const EVERY = 2;
/** Steps of the expansion per step between kicks where rotations are of order 6. */
const GENERAL_PARTS = 2;
/** Share of the ground state that may be gone before the first kick. */
const UNTOUCHED = 1e-13;
/** Largest ‖hK‖ of one kick. */
const LARGEST_KICK = 4;

/** What stands between two steps besides the kick: none, a correction before or after it. */
export type Correction = 'none' | 'before' | 'after';

/** Steps between corrections: runs on finer steps of one table correct about as often as those on coarser ones. */
export const correctionsEvery = (parts: number): number => EVERY + Math.max(0, 3 - parts);

/** By turns before and after the kick, which is as good as in its middle. */
export function correctionAfter(n: number, every: number): Correction {
  if (n % every !== 0) return 'none';
  return n % (2 * every) === 0 ? 'before' : 'after';
}

/** Factor of a correction: (h²/24)[[K, V], K] per time, over all steps up to the next one. */
export const correctionFactor = (h: number, every: number): number => (every * h ** 3) / 24;

/** What derivatives need of a span. */
export interface Passage {
  readonly index: number;
  readonly count: number;
  readonly h: number;
  /** Steps between corrections. */
  readonly every: number;
  readonly motion: LadderMotion;
  /** States after every step, before the kick, one after another. */
  readonly states: Float64Array;
  /** Re, im of each drive component after every step. */
  readonly edges: Float64Array;
}

/** Rotation gathered before the first kick: one run at a time. */
const lead = { re: new Float64Array(9), im: new Float64Array(9) };

/** The state of all lanes on its way through the drive window. */
export class State {
  y: Float64Array;
  /** Filled where derivatives are wanted. */
  readonly passages: Passage[] = [];
  private spare: Float64Array;
  /** Nothing but the ground state yet. */
  private fresh = true;

  constructor(
    private readonly problem: Problem,
    private readonly tables: readonly (UnitaryTable | null)[],
    private readonly keep: boolean,
  ) {
    const { layout } = problem;
    [this.y, this.spare] = layout.states;
    this.y.fill(0);
    for (const seed of layout.seeds) this.y[seed] = 1;
    for (let k = 0; k < 9; k++) {
      lead.re[k] = k % 4 === 0 ? 1 : 0;
      lead.im[k] = 0;
    }
  }

  /** A gap without drive: free motion and decay commute. */
  rest(length: number): void {
    const { layout } = this.problem;
    turnLevels(this.problem, restAngles(this.problem, length), this.y);
    const chunks = kickChunks(this.problem, length);
    for (let k = 0; k < chunks; k++) layout.kick.once(length / chunks, this.y);
  }

  /** A span on uniform steps, with kicks of half a step at both ends; false where a kick is too large for its series. */
  pass(index: number, count: number): boolean {
    const { problem, keep } = this;
    const { layout, request, energies, used, spans } = problem;
    const table = this.tables[index];
    const span = spans[index];
    const h = (span.end - span.start) / count;
    const { kick } = layout;
    if (!kick.set(h)) return false;
    const course = { request, span, h, count, energies, line: request.filter ? problem.line : null };
    const motion = table
      ? new LadderMotion(course, table, keep)
      : new GeneralMotion(course, used, GENERAL_PARTS);
    const width = 2 * request.drive.components;
    const edge = new Float64Array(width);
    const every = table && !request.filter ? correctionsEvery(table.count / count) : EVERY;
    const factor = correctionFactor(h, every);
    const kept =
      keep && motion instanceof LadderMotion ? this.keepPassage({ index, count, h, every, motion }) : null;
    if (!this.fresh) {
      kick.once(0.5 * h, this.y);
      // Between spans the state of an unfiltered count is kept in the request's frame.
      enter(problem, index, span.start, 1, this.y);
    }
    for (let n = 0; n < count; n++) {
      motion.advance(n);
      if (this.fresh && !kept && motion.three && n + 1 < count && this.waits(motion.three)) continue;
      for (const rotation of problem.layout.rotations) {
        rotation.set(motion);
        rotation.apply(this.y);
      }
      if (kept) {
        for (let i = 0, at = n * layout.length; i < layout.length; i++) kept.states[at + i] = this.y[i];
      }
      if (n + 1 === count) break;
      const due = correctionAfter(n, every);
      if (due !== 'none') {
        motion.driveAfter(n, edge);
        kept?.edges.set(edge, n * width);
      }
      if (due === 'before') this.correct(edge, factor);
      kick.apply(this.y, this.spare);
      this.swap();
      if (due === 'after') this.correct(edge, factor);
    }
    this.fresh = false;
    enter(problem, index, span.end, -1, this.y);
    kick.once(0.5 * h, this.y);
    return true;
  }

  private keepPassage(of: Omit<Passage, 'states' | 'edges'>): Passage {
    const { layout, request } = this.problem;
    const states = take(layout.length * of.count);
    const edges = take(2 * request.drive.components * of.count);
    const passage = { ...of, states, edges };
    this.passages.push(passage);
    return passage;
  }

  /** Gathers steps as long as the ground state is whole: decay has nothing to act on. */
  private waits(step: { readonly re: Float64Array; readonly im: Float64Array }): boolean {
    const { re, im } = lead;
    multiplyThree(step.re, step.im, 0, re, im);
    if (re[3] * re[3] + im[3] * im[3] + re[6] * re[6] + im[6] * im[6] < UNTOUCHED) return true;
    for (let i = 0; i < 9; i++) {
      step.re[i] = re[i];
      step.im[i] = im[i];
    }
    this.fresh = false;
    return false;
  }

  private swap(): void {
    const { y, spare } = this;
    this.y = spare;
    this.spare = y;
  }

  /** Takes out the kicks' second-order error. */
  private correct(drive: Float64Array, factor: number): void {
    const { y, spare } = this;
    const { corrections } = this.problem.layout;
    for (let i = 0; i < y.length; i++) spare[i] = y[i];
    for (let c = 0; c < corrections.length; c++) {
      const pair = corrections[c];
      if (!pair) continue;
      addProduct(pair[0], factor * drive[2 * c], y, spare);
      addProduct(pair[1], factor * drive[2 * c + 1], y, spare);
    }
    this.swap();
  }
}

export const kickChunks = ({ layout }: Problem, length: number): number =>
  Math.max(1, Math.ceil((length * layout.kick.norm) / LARGEST_KICK));

/** Angles by which the levels turn over a gap. */
export function restAngles({ request, energies, line }: Problem, length: number): number[] {
  return request.scheme.levels.map(({ excitons }, i) => (energies[i] - line * excitons) * length);
}

/** From the request's frame to that of a span (sign 1) or back, at time t. */
export function enter(
  problem: Problem,
  index: number,
  t: number,
  sign: 1 | -1,
  y: Float64Array,
  transposed = false,
): void {
  const { request, sources, spans } = problem;
  if (request.filter || spans.length === 1 || !sources[index]) return;
  const phase = sign * phaseAt(sources[index].frame, t);
  turnLevels(
    problem,
    request.scheme.levels.map(({ excitons }) => excitons * phase),
    y,
    transposed,
  );
}

/** Turns every level by an angle, amplitude i by e^{−i·angle}, or applies the transpose of that. */
export function turnLevels(
  problem: Problem,
  angles: readonly number[],
  y: Float64Array,
  transposed = false,
): void {
  const n = angles.length;
  const re = new Float64Array(n * n);
  const im = new Float64Array(n * n);
  angles.forEach((angle, i) => {
    re[i * n + i] = Math.cos(angle);
    im[i * n + i] = -Math.sin(angle);
  });
  const at = problem.ladder?.levels.flatMap((i, _, all) => all.map((j) => i * n + j));
  const three = at
    ? { re: Float64Array.from(at, (k: number) => re[k]), im: Float64Array.from(at, (k: number) => im[k]) }
    : null;
  const motion: Motion = { three, full: () => ({ re, im }), advance() {}, driveAfter() {} };
  for (const rotation of problem.layout.rotations) {
    rotation.set(motion);
    if (transposed) rotation.applyTransposed(y);
    else rotation.apply(y);
  }
}
