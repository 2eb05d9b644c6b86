import type { CountGradient, Sensitivity } from '../../gradient.js';
import { spatialAdjoint } from '../bloch/magnus-adjoint.js';
import { edgeOf, NODES, PLACES } from '../bloch/nodes.js';
import { addComplex } from '../bloch/table.js';
import { torques } from '../bloch/torque.js';
import type { ReversibleMachine } from './machine.js';
import { ROW } from './propagate.js';
import { type FilteredProblem, type FilteredRun, run, stepsOf } from './run.js';
import { FILTER_NUMBERS, numberSlopes, type StepNumbers } from './step.js';
import {
  BLOCK,
  energiesFrom,
  fillTable,
  follows,
  gain,
  type Steps,
  samples,
  turns,
  vectors,
} from './table.js';
import { momentSlopes } from './tail.js';

/** Derivatives that one reverse sweep gathers. */
interface Gathered {
  readonly drive: Float64Array;
  readonly lambda: Float64Array;
  readonly byNumber: Float64Array;
  shift: number;
  kappa: number;
  offset: number;
  center: number;
}

/** A run that keeps its states at the start of every block of steps, and at the end, in place of what `kept` held. */
export function keepingRun(
  problem: FilteredProblem,
  count: number,
  machine: ReversibleMachine,
  kept: Float64Array[],
): FilteredRun {
  kept.length = 0;
  const result = run(problem, count, machine, () => kept.push(machine.y.slice()));
  kept.push(machine.y.slice());
  return result;
}

/**
 * Derivatives of Σ weight·m at fixed steps, one set of weights per scalar, by reverse sweeps over a run whose states were
 * kept at the start of every block and are made again inside it (checkpointing; Griewank & Walther, ACM Trans. Math. Softw.
 * 26, 19 (2000)).
 */
export function differentiate(
  problem: FilteredProblem,
  machine: ReversibleMachine,
  count: number,
  kept: readonly Float64Array[],
  weights: readonly (readonly number[])[],
): Omit<CountGradient, 'result'> {
  if (weights.length === 0) return NOTHING;
  const { model, filter } = problem;
  const { legs, y } = machine;
  const { steps, numbers } = stepsOf(problem, count);
  machine.begin(numbers);
  y.set(kept[kept.length - 1]);
  const all = weights.map((w) => startOf(machine, problem, numbers, count, w));
  for (let block = kept.length - 2; block >= 0; block--) {
    const from = block * BLOCK;
    const to = Math.min(count, from + BLOCK);
    fillTable(steps, from, to, machine.table);
    y.set(kept[block]);
    machine.record(to - from);
    setPhases(steps, from, to - from);
    for (const gathered of all) sweepBlock(machine, steps, from, to, gathered);
  }
  const slopes = numberSlopes(model, filter, numbers);
  const times = timesOf(steps);
  return {
    times,
    segments: segmentsOf(steps, times),
    sensitivities: all.map((g): Sensitivity => {
      const dot = (s: readonly number[]) => s.reduce((sum, v, i) => sum + v * g.byNumber[i], 0);
      const offset = g.offset + dot(slopes.offset);
      return {
        drive: g.drive,
        // The offset is the centre less the line.
        shift: g.shift - offset,
        kappa: g.kappa + dot(slopes.kappa),
        center: g.center + offset,
      };
    }),
  };

  function startOf(
    { lambda }: ReversibleMachine,
    { order }: FilteredProblem,
    step: StepNumbers,
    total: number,
    w: readonly number[],
  ): Gathered {
    const byNumber = new Float64Array(FILTER_NUMBERS);
    const padded = Array.from({ length: order }, (_, k) => w[k] ?? 0);
    const direct = momentSlopes(legs, y, model, filter, step, padded, lambda, byNumber);
    return {
      drive: new Float64Array(2 * NODES * total),
      lambda: lambda.slice(),
      byNumber,
      shift: 0,
      ...direct,
      center: 0,
    };
  }
}

const NOTHING = { times: new Float64Array(0), segments: new Int32Array(0), sensitivities: [] };

const torque = new Float64Array(3);
const still = new Float64Array(6);
const identity = Float64Array.of(1, 0, 0, 0);
const byVector = new Float64Array(3 * BLOCK);
const bySample = new Float64Array(2 * NODES * BLOCK);
const byEdge = new Float64Array(2 * BLOCK);
/** Weights of the nodes in the drive at the end of a step. */
const EDGE = PLACES.map((_, j) =>
  edgeOf(
    Float64Array.from(PLACES, (_p, k) => (k === j ? 1 : 0)),
    0,
  ),
);

/** Per step e^{iψ} at its end (table.ts), and per node what leads from the frame of rotations to the drive's samples. */
const ends = new Float64Array(2 * BLOCK);
const back = new Float64Array(2 * NODES * BLOCK);

function setPhases(steps: Steps, from: number, count: number): void {
  const { part, h, scale, model } = steps;
  const { frame, span } = part;
  for (let n = 0; n < count; n++) {
    const angle = gain(steps, span.start + (from + n + 1) * h);
    ends[2 * n] = Math.cos(angle);
    ends[2 * n + 1] = Math.sin(angle);
  }
  // e^{iθ} of the frame as a tone that never fades.
  const { constant, rate, chirp, origin } = frame;
  const phase = { amplitude: 1, fall: 0, phase: constant, rate: -rate, chirp, delay: origin };
  back.fill(0, 0, 2 * NODES * count);
  addComplex(phase, model.weight * h * scale, { start: span.start + from * h, h }, 0, count, back);
  if (!follows(part)) return;
  for (let n = 0, i = 0; n < count; n++) {
    for (let j = 0; j < NODES; j++, i += 2) {
      const c = Math.cos(turns[n] * PLACES[j]);
      const s = Math.sin(turns[n] * PLACES[j]);
      const a = back[i];
      back[i] = a * c - back[i + 1] * s;
      back[i + 1] = a * s + back[i + 1] * c;
    }
  }
}

/** Takes one scalar back over recorded steps. */
function sweepBlock(
  machine: ReversibleMachine,
  steps: Steps,
  from: number,
  to: number,
  gathered: Gathered,
): void {
  const { lambda, byNumber } = machine;
  const count = to - from;
  lambda.set(gathered.lambda);
  byNumber.set(gathered.byNumber);
  machine.reverse(count);
  gathered.lambda.set(lambda);
  gathered.byNumber.set(byNumber);
  gathered.center += byRotations(machine, steps, from, count);
  const own = follows(steps.part) ? turns : null;
  const [byEnergy] = spatialAdjoint(samples, energiesFrom(steps, from), own, count, [byVector], [bySample]);
  gathered.shift += steps.h * byEnergy;
  addEdges(count);
  toDrive(from, count, gathered.drive);
}

/**
 * From derivatives by the rows of a table to those by rotation vectors and by the drive at the ends of steps, both in the
 * frame of rotations.
 * @returns derivative by a common rate of the filter's frame, 1/ps
 */
function byRotations({ table, byRow }: ReversibleMachine, steps: Steps, from: number, count: number): number {
  const { part, h, scale } = steps;
  const own = follows(part);
  const unscaled = 1 / (scale * h);
  let center = 0;
  for (let n = 0, k = 0; n < count; n++, k += ROW) {
    // A turn φ after the step changes the rotation R by φ × R: its derivative is the sum of R × ∂/∂R over columns.
    let tx = 0;
    let ty = 0;
    let tz = 0;
    for (let j = 0; j < 3; j++) {
      const a = table[k + j];
      const b = table[k + 3 + j];
      const c = j === 2 ? 1 - table[k + 8] : table[k + 6 + j];
      const p = byRow[k + j];
      const q = byRow[k + 3 + j];
      const r = byRow[k + 6 + j];
      tx += b * r - c * q;
      ty += c * p - a * r;
      tz += a * q - b * p;
    }
    const re = table[k + 9];
    const im = table[k + 10];
    const lr = byRow[k + 9];
    const li = byRow[k + 10];
    // The frame turns the end of the step back by ψ₁, its beginning forth by ψ₀, and the drive at the end forth by ψ₁.
    const before = table[k + 2] * tx + table[k + 5] * ty + (1 - table[k + 8]) * tz;
    const after = li * re - lr * im - tz;
    center += (from + n) * h * before + (from + n + 1) * h * after;
    const c = ends[2 * n];
    const s = ends[2 * n + 1];
    torque[0] = c * tx - s * ty;
    torque[1] = s * tx + c * ty;
    torque[2] = tz;
    const vector = vectors.subarray(3 * n, 3 * n + 3);
    const turned = own ? turns.subarray(n, n + 1) : null;
    torques(torque, still, still, vector, identity, turned, 1, byVector.subarray(3 * n, 3 * n + 3));
    const ex = unscaled * (lr * c + li * s);
    const ey = unscaled * (li * c - lr * s);
    const cc = own ? Math.cos(0.5 * turns[n]) : 1;
    const ss = own ? Math.sin(0.5 * turns[n]) : 0;
    byEdge[2 * n] = ex * cc + ey * ss;
    byEdge[2 * n + 1] = ey * cc - ex * ss;
  }
  return center;
}

function addEdges(count: number): void {
  for (let n = 0, i = 0; n < count; n++) {
    for (let j = 0; j < NODES; j++, i += 2) {
      bySample[i] += EDGE[j] * byEdge[2 * n];
      bySample[i + 1] += EDGE[j] * byEdge[2 * n + 1];
    }
  }
}

/** From samples in the frame of rotations, times step and scale, to those of the drive. */
function toDrive(from: number, count: number, drive: Float64Array): void {
  for (let i = 0, at = 2 * NODES * from; i < 2 * NODES * count; i += 2, at += 2) {
    drive[at] = bySample[i] * back[i] - bySample[i + 1] * back[i + 1];
    drive[at + 1] = bySample[i] * back[i + 1] + bySample[i + 1] * back[i];
  }
}

function timesOf({ part, h, count }: Steps): Float64Array {
  const times = new Float64Array(NODES * count);
  for (let n = 0, i = 0; n < count; n++) {
    for (let j = 0; j < NODES; j++, i++) times[i] = part.span.start + (n + 0.5 + PLACES[j]) * h;
  }
  return times;
}

function segmentsOf({ drive }: Steps, times: Float64Array): Int32Array {
  const { breakpoints } = drive;
  const segments = new Int32Array(times.length);
  let segment = 0;
  for (let i = 0; i < times.length; i++) {
    while (segment + 2 < breakpoints.length && times[i] >= breakpoints[segment + 1]) segment++;
    segments[i] = segment;
  }
  return segments;
}
