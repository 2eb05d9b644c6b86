import type { CountGradient, Sensitivity } from '../../gradient.js';
import { take, takeZeros } from './arena.js';
import { adjointKicks } from './chain-adjoint.js';
import { spatialAdjoint } from './magnus-adjoint.js';
import { BLOCK, NODES, PLACES } from './nodes.js';
import { correctionBound } from './pace.js';
import type { BlochProblem } from './problem.js';
import { type SeededChain, seedAdjoint, seededChains, type Weights } from './seeds.js';
import { addComplex } from './table.js';
import { type Stretch, sampleTimes, type Tape } from './tape.js';
import { addTorque, torques } from './torque.js';

/** Bound of the corrections, which derivatives leave out, up to which that is good enough. */
const LEFT_OUT = 1e-6;
/** Most parts into which steps are cut for that. */
const MOST_PARTS = 8;

/** Steps at which derivatives are exact to LEFT_OUT, or null where that takes too many. */
export function differentiableCounts(problem: BlochProblem, counts: readonly number[]): number[] | null {
  const parts = problem.spans.map(({ span }, i) => {
    if (span.gap) return 1;
    const bound = correctionBound(problem, (span.end - span.start) / counts[i]);
    return Math.max(1, Math.ceil(Math.sqrt(bound / LEFT_OUT)));
  });
  return Math.max(...parts) > MOST_PARTS ? null : counts.map((n, i) => n * parts[i]);
}

/** Everything decays: the last kick (chain.ts). */
const LAST = { fade: 0, loss: 1 };

/**
 * Derivatives of scalars of the figures by one reverse sweep over a recorded run: adjoints of the chains give the
 * derivative by every kick's axis, a running torque those by every rotation, and the reverse of the Magnus expansion those by
 * the samples of the drive. Null where a scalar depends on p_2 or p_3.
 */
export function differentiate(
  problem: BlochProblem,
  { stretches }: Tape,
  seeds: readonly Weights[],
): Omit<CountGradient, 'result'> | null {
  const seeded = seededChains(problem, stretches, seeds);
  if (!seeded) return null;
  const total = stretches.reduce((sum, s) => sum + s.steps, 0);
  // One piece of memory for all that is handed out.
  const length = NODES * total;
  const buffer = new ArrayBuffer(length * (8 + 16 * seeds.length + 4));
  const times = new Float64Array(buffer, 0, length);
  const drives = seeds.map((_, s) => new Float64Array(buffer, 8 * length * (1 + 2 * s), 2 * length));
  const segments = new Int32Array(buffer, 8 * length * (1 + 2 * seeds.length), length);
  const shifts = seeds.map(() => 0);
  const torque = seeds.map(() => takeZeros(3));
  const adjoints = seeded.map(({ weights }) => weights.map((w) => seedAdjoint(w)));
  finalKick(stretches[stretches.length - 1], seeded, adjoints, torque);
  let at = total;
  for (let k = stretches.length - 1; k >= 0; k--) {
    const stretch = stretches[k];
    at -= stretch.steps;
    const slopes = sweepChains(stretch, k, seeded, adjoints);
    sampleTimes(stretch, times, NODES * at);
    if (stretch.steps === 0) passGap(stretch, slopes, torque, shifts);
    else sweepSteps(stretch, slopes, torque, shifts, drives, 2 * NODES * at);
  }
  return {
    times,
    segments: placeInSegments(problem, times, segments),
    sensitivities: seeds.map(
      (_, s): Sensitivity => ({ drive: drives[s], shift: shifts[s], kappa: 0, center: 0 }),
    ),
  };
}

type Adjoints = readonly (readonly Float64Array[])[];

function finalKick(
  last: Stretch,
  seeded: readonly SeededChain[],
  adjoints: Adjoints,
  torque: readonly Float64Array[],
): void {
  const axis = last.axes.subarray(3 * last.steps, 3 * last.steps + 3);
  torque.forEach((sum, s) => {
    const slope = takeZeros(3);
    seeded.forEach(({ chain }, c) => {
      adjointKicks(chain, LAST, axis, chain.state, 0, 1, adjoints[c][s], slope);
    });
    addTorque(sum, slope, axis, 0);
  });
}

/** Derivatives by the axes of a stretch, per scalar. */
function sweepChains(
  { steps, axes, pace }: Stretch,
  index: number,
  seeded: readonly SeededChain[],
  adjoints: Adjoints,
): Float64Array[] {
  const { half, full } = pace;
  return adjoints[0].map((_, s) => {
    const slopes = takeZeros(axes.length);
    seeded.forEach(({ chain, weights, records }, c) => {
      if (weights[s].every((w) => w === 0)) return;
      const adjoint = adjoints[c][s];
      if (steps > 0) {
        adjointKicks(chain, half, axes, records[index], steps, steps + 1, adjoint, slopes);
        adjointKicks(chain, full, axes, records[index], 1, steps, adjoint, slopes);
      }
      adjointKicks(chain, half, axes, records[index], 0, 1, adjoint, slopes);
    });
    return slopes;
  });
}

function passGap(
  { axes, grid }: Stretch,
  slopes: readonly Float64Array[],
  torque: readonly Float64Array[],
  shifts: number[],
): void {
  torque.forEach((sum, s) => {
    addTorque(sum, slopes[s], axes, 0);
    // The gap turns about the inversion's axis, which stands along the kick's.
    shifts[s] += grid.h * (sum[0] * axes[0] + sum[1] * axes[1] + sum[2] * axes[2]);
  });
}

function sweepSteps(
  stretch: Stretch,
  slopes: readonly Float64Array[],
  torque: readonly Float64Array[],
  shifts: number[],
  drives: readonly Float64Array[],
  at: number,
): void {
  const { steps, axes, vectors, quaternions, turns, samples, energies, grid } = stretch;
  const byVector = torque.map((sum, s) => {
    const out = take(3 * steps);
    torques(sum, slopes[s], axes, vectors, quaternions, turns, steps, out);
    addTorque(sum, slopes[s], axes, 0);
    return out;
  });
  const bySample = drives.map((d) => d.subarray(at, at + 2 * NODES * steps));
  const byEnergy = spatialAdjoint(samples, energies, turns, steps, byVector, bySample);
  byEnergy.forEach((value, s) => {
    shifts[s] += grid.h * value;
  });
  toDriveFrame(stretch, bySample);
}

/** From derivatives by samples in the stretch's frame, times its scale, to those by the drive's own samples. */
function toDriveFrame({ part, steps, grid, pace, turns }: Stretch, bySample: readonly Float64Array[]): void {
  const { frame } = part;
  const back = takeZeros(2 * NODES * steps);
  // e^{iθ} of the frame as a tone that never fades.
  const phase = {
    amplitude: 1,
    fall: 0,
    phase: frame.constant,
    rate: -frame.rate,
    chirp: frame.chirp,
    delay: frame.origin,
  };
  for (let from = 0; from < steps; from += BLOCK) {
    addComplex(phase, pace.scale, grid, from, Math.min(steps, from + BLOCK), back);
  }
  if (turns) followBack(turns, back);
  for (const slopes of bySample) {
    for (let i = 0; i < slopes.length; i += 2) {
      const a = slopes[i];
      const b = slopes[i + 1];
      slopes[i] = a * back[i] - b * back[i + 1];
      slopes[i + 1] = a * back[i + 1] + b * back[i];
    }
  }
}

function followBack(turns: Float64Array, back: Float64Array): void {
  for (let n = 0, i = 0; n < turns.length; n++) {
    for (let j = 0; j < NODES; j++, i += 2) {
      const c = Math.cos(turns[n] * PLACES[j]);
      const s = Math.sin(turns[n] * PLACES[j]);
      const a = back[i];
      back[i] = a * c - back[i + 1] * s;
      back[i + 1] = a * s + back[i + 1] * c;
    }
  }
}

function placeInSegments({ drive }: BlochProblem, times: Float64Array, segments: Int32Array): Int32Array {
  const { breakpoints } = drive;
  if (breakpoints.length === 2) return segments;
  let segment = 0;
  for (let i = 0; i < times.length; i++) {
    while (segment + 2 < breakpoints.length && times[i] >= breakpoints[segment + 1]) segment++;
    segments[i] = segment;
  }
  return segments;
}
