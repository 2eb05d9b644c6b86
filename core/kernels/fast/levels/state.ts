import { phaseAt } from '../bloch/frame.js';
import { addProduct } from './correction.js';
import { GeneralMotion } from './general-motion.js';
import { type Course, LadderMotion, type Motion, multiplyThree } from './motion.js';
import type { Rotation } from './rotation.js';
import type { Problem } from './run.js';

/** Steps of the expansion per step between kicks. */
const PARTS = 1;
/** Steps between two corrections of the kicks: a fine sum is not needed of what is small. */
const EVERY = 2;
/** Share of the ground state that may be gone before the first kick. */
const UNTOUCHED = 1e-13;
/** Largest ‖hK‖ of one kick. */
const LARGEST_KICK = 4;

/** The state of all lanes on its way through the drive window. */
export class State {
  y: Float64Array;
  private spare: Float64Array;
  private readonly rotations: readonly Rotation[];
  /** Nothing but the ground state yet. */
  private fresh = true;

  constructor(private readonly problem: Problem) {
    const { layout } = problem;
    [this.y, this.spare] = layout.states;
    this.y.fill(0);
    for (const seed of layout.seeds) this.y[seed] = 1;
    this.rotations = problem.rotations;
  }

  /** A gap without drive: free motion and decay commute. */
  rest(length: number): void {
    const { layout, request, energies, line } = this.problem;
    this.turn(request.scheme.levels.map(({ excitons }, i) => (energies[i] - line * excitons) * length));
    const chunks = Math.max(1, Math.ceil((length * layout.kick.norm) / LARGEST_KICK));
    for (let k = 0; k < chunks; k++) layout.kick.once(length / chunks, this.y);
  }

  /** A span on uniform steps, with kicks of half a step at both ends; false where a kick is too large for its series. */
  pass(index: number, count: number): boolean {
    const { layout, request, ladder, energies, used, line, spans, sources } = this.problem;
    const span = spans[index];
    const h = (span.end - span.start) / count;
    const { kick } = layout;
    if (!kick.set(h)) return false;
    const course: Course = { request, span, h, count, energies, line: request.filter ? line : null };
    const motion = ladder
      ? new LadderMotion(course, ladder, sources[index], PARTS)
      : new GeneralMotion(course, used);
    const edge = new Float64Array(2 * request.drive.components);
    if (!this.fresh) kick.once(0.5 * h, this.y);
    // Between spans the state of an unfiltered count is kept in the request's frame.
    this.enter(index, span.start, 1);
    for (let n = 0; n < count; n++) {
      motion.advance(n);
      if (this.fresh && motion.three && n + 1 < count && this.waits(motion.three)) continue;
      this.rotate(motion);
      if (n + 1 === count) break;
      const due = n % EVERY === 0;
      if (due) motion.driveAfter(n, edge);
      // By turns before and after the kick, which is as good as in its middle.
      const before = due && n % (2 * EVERY) === 0;
      if (before) {
        for (let i = 0; i < this.y.length; i++) this.spare[i] = this.y[i];
        this.correct(edge, (EVERY * h ** 3) / 24);
        this.swap();
      }
      kick.apply(this.y, this.spare);
      this.swap();
      if (due && !before) {
        for (let i = 0; i < this.y.length; i++) this.spare[i] = this.y[i];
        this.correct(edge, (EVERY * h ** 3) / 24);
        this.swap();
      }
    }
    this.fresh = false;
    this.enter(index, span.end, -1);
    kick.once(0.5 * h, this.y);
    return true;
  }

  private readonly lead = { re: Float64Array.of(1, 0, 0, 0, 1, 0, 0, 0, 1), im: new Float64Array(9) };

  /** Gathers steps as long as the ground state is whole: decay has nothing to act on. */
  private waits(step: { readonly re: Float64Array; readonly im: Float64Array }): boolean {
    const { re, im } = this.lead;
    multiplyThree(step.re, step.im, re, im);
    if (re[3] * re[3] + im[3] * im[3] + re[6] * re[6] + im[6] * im[6] < UNTOUCHED) return true;
    for (let i = 0; i < 9; i++) {
      step.re[i] = re[i];
      step.im[i] = im[i];
    }
    this.fresh = false;
    return false;
  }

  /** From the request's frame to that of a span (sign 1) or back, at time t. */
  private enter(index: number, t: number, sign: 1 | -1): void {
    const { request, sources, spans } = this.problem;
    if (request.filter || spans.length === 1 || this.fresh || !sources[index]) return;
    const phase = sign * phaseAt(sources[index].frame, t);
    this.turn(request.scheme.levels.map(({ excitons }) => excitons * phase));
  }

  /** Turns every level by an angle: the amplitude of level i gains −angles[i]. */
  private turn(angles: readonly number[]): void {
    const n = angles.length;
    const re = new Float64Array(n * n);
    const im = new Float64Array(n * n);
    angles.forEach((angle, i) => {
      re[i * n + i] = Math.cos(angle);
      im[i * n + i] = -Math.sin(angle);
    });
    const at = this.problem.ladder?.levels.flatMap((i, _, all) => all.map((j) => i * n + j));
    const three = at
      ? { re: Float64Array.from(at, (k) => re[k]), im: Float64Array.from(at, (k) => im[k]) }
      : null;
    this.rotate({ three, full: () => ({ re, im }), advance() {}, driveAfter() {} });
  }

  private rotate(motion: Motion): void {
    for (const rotation of this.rotations) {
      rotation.set(motion);
      rotation.apply(this.y);
    }
  }

  private swap(): void {
    const { y, spare } = this;
    this.y = spare;
    this.spare = y;
  }

  /** Adds to the double what takes out the kicks' second-order error: (h²/24)[[K, V], K] per time. */
  private correct(drive: Float64Array, factor: number): void {
    const { y, spare } = this;
    const { corrections } = this.problem.layout;
    for (let c = 0; c < corrections.length; c++) {
      const pair = corrections[c];
      if (!pair) continue;
      addProduct(pair[0], factor * drive[2 * c], y, spare);
      addProduct(pair[1], factor * drive[2 * c + 1], y, spare);
    }
  }
}
