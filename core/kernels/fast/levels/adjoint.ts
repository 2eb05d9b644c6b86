import { addTransposed, between } from './correction.js';
import { MATRIX } from './hermitian.js';
import { DriveDerivatives } from './quadrature.js';
import type { Problem } from './run.js';
import {
  correctionAfter,
  correctionFactor,
  enter,
  kickChunks,
  type Passage,
  restAngles,
  turnLevels,
} from './state.js';

/**
 * Takes functionals of the final state back through one run.
 * @param functionals on the places of the state; used up
 * @returns derivatives by the drive, span by span
 */
export function backwards(
  problem: Problem,
  passages: readonly Passage[],
  functionals: readonly Float64Array[],
): DriveDerivatives[] {
  const out: DriveDerivatives[] = [];
  for (let s = problem.spans.length - 1; s >= 0; s--) {
    const span = problem.spans[s];
    if (span.gap) restBack(problem, span.end - span.start, functionals);
    else {
      const passage = passages.find((p) => p.index === s);
      if (!passage) throw new Error('a span was not kept');
      out.unshift(passBack(problem, passage, functionals));
    }
  }
  return out;
}

function restBack(problem: Problem, length: number, functionals: readonly Float64Array[]): void {
  const chunks = kickChunks(problem, length);
  const angles = restAngles(problem, length);
  for (const f of functionals) {
    for (let k = 0; k < chunks; k++) problem.layout.kick.once(length / chunks, f, true);
    turnLevels(problem, angles, f, true);
  }
}

function passBack(
  problem: Problem,
  passage: Passage,
  functionals: readonly Float64Array[],
): DriveDerivatives {
  const { layout, rotations, spans } = problem;
  const { index, count, h, motion, states } = passage;
  const span = spans[index];
  const { kick } = layout;
  kick.set(h);
  const out = new DriveDerivatives(motion, functionals.length);
  const torques = functionals.map(() => new Float64Array(MATRIX));
  const spare = new Float64Array(layout.length);
  for (const f of functionals) {
    kick.once(0.5 * h, f, true);
    enter(problem, index, span.end, -1, f, true);
  }
  for (let n = count - 1; n >= 0; n--) {
    motion.recall(n);
    for (const rotation of rotations) rotation.set(motion);
    const y = states.subarray(n * layout.length, (n + 1) * layout.length);
    if (n + 1 < count) kickBack(problem, passage, n, functionals, out, spare);
    torques.forEach((q, i) => {
      q.fill(0);
      for (const rotation of rotations) {
        rotation.applyTransposed(functionals[i]);
        rotation.addTorque(y, functionals[i], q);
      }
    });
    out.addStep(n, torques);
  }
  for (const f of functionals) {
    enter(problem, index, span.start, 1, f, true);
    kick.once(0.5 * h, f, true);
  }
  return out;
}

/** Back through kick and correction after step n, whose rotation is the last one set. */
function kickBack(
  problem: Problem,
  passage: Passage,
  n: number,
  functionals: readonly Float64Array[],
  out: DriveDerivatives,
  spare: Float64Array,
): void {
  const { layout, request } = problem;
  const { edges, h, states } = passage;
  const width = 2 * request.drive.components;
  const drive = edges.subarray(n * width, (n + 1) * width);
  const due = correctionAfter(n);
  const from = (due === 'after' ? n + 1 : n) * layout.length;
  const y = states.slice(from, from + layout.length);
  if (due === 'before') for (const rotation of problem.rotations) rotation.apply(y);
  functionals.forEach((f, i) => {
    if (due === 'after') correctBack(problem, out, { n, i, f, y, drive, h }, spare);
    layout.kick.applyTransposed(f, spare);
    f.set(spare);
    if (due === 'before') correctBack(problem, out, { n, i, f, y, drive, h }, spare);
  });
}

interface Place {
  readonly n: number;
  /** Number of the functional. */
  readonly i: number;
  readonly f: Float64Array;
  readonly y: Float64Array;
  readonly drive: Float64Array;
  readonly h: number;
}

function correctBack(
  { layout, ladder }: Problem,
  out: DriveDerivatives,
  { n, i, f, y, drive, h }: Place,
  spare: Float64Array,
): void {
  const factor = correctionFactor(h);
  const component = ladder?.component ?? 0;
  const pair = layout.corrections[component];
  if (!pair) return;
  out.addEdge(n, i, factor * between(pair[0], f, y), factor * between(pair[1], f, y));
  spare.set(f);
  addTransposed(pair[0], factor * drive[2 * component], spare, f);
  addTransposed(pair[1], factor * drive[2 * component + 1], spare, f);
}
