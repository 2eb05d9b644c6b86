import { addProduct, addTransposed, between, type Triples } from './correction.js';
import { MATRIX } from './hermitian.js';
import { DriveDerivatives } from './quadrature.js';
import type { Problem } from './run.js';
import { kickSlope, onceSlope, type Slope } from './slopes.js';
import {
  correctionAfter,
  correctionFactor,
  enter,
  kickChunks,
  type Passage,
  restAngles,
  turnLevels,
} from './state.js';

/** Derivatives of functionals of the final state through one run. */
export interface RunDerivatives {
  /** By the drive, span by span. */
  readonly drives: DriveDerivatives[];
  /** By each number whose slope was given, per functional; without what the functionals themselves change. */
  readonly numbers: readonly Float64Array[];
}

/**
 * Takes functionals of the final state back through one run.
 * @param functionals on the places of the state; used up
 * @param slopes of what stands between the steps; with these the drive must have one span
 */
export function backwards(
  problem: Problem,
  passages: readonly Passage[],
  functionals: readonly Float64Array[],
  slopes: readonly Slope[],
): RunDerivatives {
  const drives: DriveDerivatives[] = [];
  const numbers = slopes.map(() => new Float64Array(functionals.length));
  for (let s = problem.spans.length - 1; s >= 0; s--) {
    const span = problem.spans[s];
    if (span.gap) restBack(problem, span.end - span.start, functionals);
    else {
      const passage = passages.find((p) => p.index === s);
      if (!passage) throw new Error('a span was not kept');
      drives.unshift(new PassageBack(problem, passage, functionals, slopes, numbers).run());
    }
  }
  return { drives, numbers };
}

function restBack(problem: Problem, length: number, functionals: readonly Float64Array[]): void {
  const chunks = kickChunks(problem, length);
  const angles = restAngles(problem, length);
  for (const f of functionals) {
    for (let k = 0; k < chunks; k++) problem.layout.kick.once(length / chunks, f, true);
    turnLevels(problem, angles, f, true);
  }
}

/** The way back through one span. */
class PassageBack {
  private readonly out: DriveDerivatives;
  private readonly torques: readonly Float64Array[];
  private readonly spare: Float64Array;
  private readonly kicked: Float64Array;
  private readonly kickSlopes: readonly (Triples | null)[];

  constructor(
    private readonly problem: Problem,
    private readonly passage: Passage,
    private readonly functionals: readonly Float64Array[],
    private readonly slopes: readonly Slope[],
    private readonly numbers: readonly Float64Array[],
  ) {
    const { length } = problem.layout;
    this.out = new DriveDerivatives(passage.motion, functionals.length);
    this.torques = functionals.map(() => new Float64Array(MATRIX));
    this.spare = new Float64Array(length);
    this.kicked = new Float64Array(length);
    this.kickSlopes = slopes.map((slope) => kickSlope(slope, passage.h));
    problem.layout.kick.set(passage.h);
  }

  run(): DriveDerivatives {
    const { problem, passage, functionals, torques, out, slopes, numbers } = this;
    const { layout, spans } = problem;
    const { rotations } = layout;
    const { index, count, h, motion } = passage;
    const span = spans[index];
    functionals.forEach((f, i) => {
      slopes.forEach((slope, k) => {
        numbers[k][i] += onceSlope(slope, 0.5 * h, f, this.stateAfter(count - 1));
      });
      layout.kick.once(0.5 * h, f, true);
      enter(problem, index, span.end, -1, f, true);
    });
    for (let n = count - 1; n >= 0; n--) {
      if (n + 1 < count) this.kickBack(n);
      motion.recall(n);
      for (const rotation of rotations) rotation.set(motion);
      const y = this.stateAfter(n);
      for (let i = 0; i < torques.length; i++) {
        for (let k = 0; k < MATRIX; k++) torques[i][k] = 0;
        for (const rotation of rotations) {
          rotation.addTorque(y, functionals[i], torques[i]);
          rotation.applyTransposed(functionals[i]);
        }
      }
      out.addStep(n, torques);
    }
    for (const f of functionals) {
      enter(problem, index, span.start, 1, f, true);
      layout.kick.once(0.5 * h, f, true);
    }
    return out;
  }

  /** After step n, before the kick. */
  private stateAfter(n: number): Float64Array {
    const { length } = this.problem.layout;
    return this.passage.states.subarray(n * length, (n + 1) * length);
  }

  /** Back through kick and correction after step n. */
  private kickBack(n: number): void {
    const { problem, functionals, spare, kicked, kickSlopes, numbers } = this;
    const { layout } = problem;
    const due = correctionAfter(n, this.passage.every);
    let y = this.stateAfter(n);
    if (due === 'after') {
      layout.kick.apply(y, kicked);
      functionals.forEach((f, i) => {
        this.correctBack(n, i, f, kicked);
      });
    } else if (due === 'before') {
      kicked.set(y);
      this.correct(n, y, kicked);
      y = kicked;
    }
    for (let i = 0; i < functionals.length; i++) {
      const f = functionals[i];
      for (let k = 0; k < kickSlopes.length; k++) {
        const slope = kickSlopes[k];
        if (slope) numbers[k][i] += between(slope, f, y);
      }
      layout.kick.applyTransposed(f, spare);
      for (let k = 0; k < f.length; k++) f[k] = spare[k];
      if (due === 'before') this.correctBack(n, i, f, this.stateAfter(n));
    }
  }

  private driveAfter(n: number): Float64Array {
    const width = 2 * this.problem.request.drive.components;
    return this.passage.edges.subarray(n * width, (n + 1) * width);
  }

  /** out += the correction of y. */
  private correct(n: number, y: Float64Array, out: Float64Array): void {
    const factor = correctionFactor(this.passage.h, this.passage.every);
    const drive = this.driveAfter(n);
    this.problem.layout.corrections.forEach((pair, c) => {
      if (!pair) return;
      addProduct(pair[0], factor * drive[2 * c], y, out);
      addProduct(pair[1], factor * drive[2 * c + 1], y, out);
    });
  }

  private correctBack(n: number, functional: number, f: Float64Array, y: Float64Array): void {
    const { problem, passage, out, spare, slopes, numbers } = this;
    const factor = correctionFactor(passage.h, passage.every);
    const component = problem.ladder?.component ?? 0;
    const pair = problem.layout.corrections[component];
    if (!pair) return;
    const re = factor * this.driveAfter(n)[2 * component];
    const im = factor * this.driveAfter(n)[2 * component + 1];
    slopes.forEach(({ corrections }, k) => {
      const own = corrections[component];
      if (own) numbers[k][functional] += re * between(own[0], f, y) + im * between(own[1], f, y);
    });
    out.addEdge(n, functional, factor * between(pair[0], f, y), factor * between(pair[1], f, y));
    spare.set(f);
    addTransposed(pair[0], re, spare, f);
    addTransposed(pair[1], im, spare, f);
  }
}
