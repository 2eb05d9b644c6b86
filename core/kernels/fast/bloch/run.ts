import { resonantAxes, turnAbout, turnAxes } from './axes.js';
import { CHAIN_STATE, type Chain, type Correction, type Kick, kicks, kicksOfTwo } from './chain.js';
import { correctedKicks } from './correct.js';
import {
  EXCITED,
  FACTORIAL,
  FIGURES,
  GROUND,
  MEAN,
  MULTIPHOTON,
  P0,
  P1,
  P2,
  P3,
  THINNED,
} from './figures.js';
import { phaseAt } from './frame.js';
import { correctLadder, LADDER_STATE, type Ladder, ladderKicks } from './ladder.js';
import { planarVectors, spatialVectors } from './magnus.js';
import { BLOCK, NODES } from './nodes.js';
import { energyAt, gapPace, paceOf, STRIDE, shrink } from './pace.js';
import type { BlochProblem, BlochSpan } from './problem.js';
import { addComplex, fillReal, sampleDrive } from './table.js';
import type { Block, Tape } from './tape.js';

const samples = new Float64Array(2 * NODES * BLOCK);
const turns = new Float64Array(BLOCK);
const vectors = new Float64Array(3 * BLOCK);
const edges = new Float64Array(2 * BLOCK);
const axes = new Float64Array(3 * (BLOCK + 1));
const pulls = new Float64Array(4 * (BLOCK + 1));
const pulling = { edges, out: pulls };
const quaternions = new Float64Array(4 * BLOCK);
const block: Block = { samples, turns, vectors, quaternions, axes };

/** Everything that carries over from step to step. */
interface State {
  readonly q: Float64Array;
  readonly moments: Chain;
  readonly counted: Chain | null;
  readonly ladder: Ladder | null;
  readonly thinned: Chain | null;
}

function chain(own: number, feed: number, rest: number, state: Float64Array): Chain {
  clear(state);
  state[2] = 0.5;
  state[3] = 1;
  return { own, feed, rest, state };
}

/** Short arrays are set faster by a loop than by the method. */
function clear(array: Float64Array): void {
  for (let i = 0; i < array.length; i++) array[i] = 0;
}

/** States are reused from run to run: new ones would cost as much as some steps. */
const momentState = new Float64Array(CHAIN_STATE);
const countState = new Float64Array(CHAIN_STATE);
const thinnedState = new Float64Array(CHAIN_STATE);
const ladderState = new Float64Array(LADDER_STATE);
const rotation = new Float64Array(4);

/** Chains of the moments, of the emitted count and of the thinned one, at the start. */
export const momentChain = ({ model }: BlochProblem, state: Float64Array): Chain =>
  chain(1, model.collected, 2 * model.collected, state);
export const countChain = ({ model }: BlochProblem, state: Float64Array): Chain =>
  chain(1 - model.collected, model.collected, model.collected, state);
export function thinnedChain({ model, thinning }: BlochProblem, state: Float64Array): Chain {
  const seen = model.collected * (thinning ?? 0);
  return chain(1 - seen, seen, seen, state);
}

function begin(problem: BlochProblem): State {
  const { model, wants } = problem;
  clear(rotation);
  rotation[0] = 1;
  if (wants.ladder) {
    clear(ladderState);
    ladderState[2] = 0.5;
    ladderState[3] = 1;
  }
  return {
    q: rotation,
    moments: momentChain(problem, momentState),
    counted: wants.counted ? countChain(problem, countState) : null,
    ladder: wants.ladder ? { counted: model.collected, state: ladderState } : null,
    thinned: wants.thinned ? thinnedChain(problem, thinnedState) : null,
  };
}

/** Kicks every chain along axes[3·from …] to axes[3·to − 1]. */
function kickAll(state: State, kick: Kick, from: number, to: number): void {
  const { moments, counted, ladder, thinned } = state;
  if (ladder) ladderKicks(ladder, kick, axes, from, to);
  if (counted) kicksOfTwo(counted, moments, kick, axes, from, to);
  else if (thinned) kicksOfTwo(thinned, moments, kick, axes, from, to);
  else kicks(moments, kick, axes, from, to);
  if (counted && thinned) kicks(thinned, kick, axes, from, to);
}

/** The same with corrections in the middle of every second kick. */
function kickCorrected(
  state: State,
  kick: Kick,
  middle: Kick,
  correction: Correction,
  from: number,
  to: number,
): void {
  const { moments, counted, ladder, thinned } = state;
  correctedKicks(moments, kick, middle, correction, axes, pulls, from, to);
  if (counted) correctedKicks(counted, kick, middle, correction, axes, pulls, from, to);
  if (thinned) correctedKicks(thinned, kick, middle, correction, axes, pulls, from, to);
  for (let n = from; ladder && n < to; n += STRIDE) {
    ladderKicks(ladder, middle, axes, n, n + 1);
    correctLadder(ladder, correction, axes, pulls, n);
    ladderKicks(ladder, middle, axes, n, n + 1);
    ladderKicks(ladder, kick, axes, n + 1, Math.min(to, n + STRIDE));
  }
}

/**
 * Propagates a problem with so many steps per span and writes its figures (figures.ts).
 * @param tape records the run for a reverse sweep
 */
export function runBloch(
  problem: BlochProblem,
  counts: readonly number[],
  out: Float64Array,
  tape: Tape | null = null,
): void {
  const { model, spans } = problem;
  const state = begin(problem);
  tape?.rewind();
  axisOf(state.q, axes);
  for (let index = 0; index < spans.length; index++) {
    const part = spans[index];
    const { span, frame } = part;
    if (span.gap) {
      turnAbout(state.q, model.energy * (span.end - span.start));
      axisOf(state.q, axes);
      const pace = gapPace(problem, part);
      tape?.begin(part, 0, pace, STILL, false, axes);
      kickAll(state, pace.half, 0, 1);
      continue;
    }
    if (index > 0) turnAbout(state.q, phaseAt(frame, span.start));
    axisOf(state.q, axes);
    propagate(problem, state, part, counts[index], tape);
    if (index + 1 < spans.length) turnAbout(state.q, -phaseAt(frame, span.end));
  }
  finish(state, out);
}

const STILL = { first: 0, slope: 0, axial: 0 };

/** The axis of kicks under a rotation, to the first three numbers of `out`. */
export function axisOf(q: Float64Array, out: Float64Array): void {
  // Destructuring a typed array goes through its iterator, which costs as much as ten steps.
  const w = q[0];
  const x = q[1];
  const y = q[2];
  const z = q[3];
  out[0] = 2 * (x * z - w * y);
  out[1] = 2 * (y * z + w * x);
  out[2] = 1 - 2 * (x * x + y * y);
}

function propagate(
  problem: BlochProblem,
  state: State,
  part: BlochSpan,
  count: number,
  tape: Tape | null,
): void {
  const { drive, model } = problem;
  const { span, frame, source } = part;
  const pace = paceOf(problem, part, count);
  const { h, scale, quartic, axial, half, full, correction } = pace;
  const slope = 2 * frame.chirp * h * h;
  const first = energyAt(model.energy, frame, h, span.start + 0.5 * h);
  const resonant = source.kind === 'real' && slope === 0 && Math.abs(first) * count < 1e-13;
  const own = source.kind === 'sampled' && source.follow ? turns : null;
  const pull = correction ? pulling : null;
  const record = tape ? quaternions : null;
  const width = source.kind === 'real' ? 1 : 2;
  tape?.begin(part, count, pace, { first, slope, axial }, own !== null, axes);
  kickAll(state, half, 0, 1);
  for (let done = 0; done < count; done += BLOCK) {
    const steps = Math.min(BLOCK, count - done);
    const grid = { start: span.start + done * h, h };
    const energies = { first: first + done * slope, slope, axial };
    if (source.kind === 'real') {
      fillReal(source.tones[0], scale, grid, 0, steps, samples);
      if (quartic > 0) shrink(samples, quartic, 1, steps);
    } else {
      if (source.kind === 'sampled') {
        sampleDrive(drive, frame, scale, grid, 0, steps, span, own, samples);
      } else {
        samples.fill(0, 0, 2 * NODES * steps);
        for (const tone of source.tones) addComplex(tone, scale, grid, 0, steps, samples);
      }
      if (quartic > 0) shrink(samples, quartic, 2, steps);
    }
    if (resonant) {
      resonantAxes(samples, 0, steps, state.q, axes, pull, tape ? block : null);
    } else {
      if (source.kind === 'real') planarVectors(samples, energies, 0, steps, vectors, correction && edges);
      else spatialVectors(samples, energies, own, 0, steps, vectors, correction && edges);
      turnAxes(vectors, own, 0, steps, state.q, axes, pull, record);
    }
    tape?.keep(block, done, steps, width);
    const last = done + steps === count;
    const end = last ? steps : steps + 1;
    if (correction) kickCorrected(state, full, half, correction, 1, end);
    else kickAll(state, full, 1, end);
    if (last) kickAll(state, half, steps, steps + 1);
  }
}

/** Everything decays: the traces are the figures. */
function finish(state: State, out: Float64Array): void {
  axisOf(state.q, axes);
  const { moments, counted, ladder, thinned } = state;
  const rho = moments.state;
  const inversion = axes[0] * rho[0] + axes[1] * rho[1] + axes[2] * rho[2];
  const half = 0.5 * rho[3];
  kickAll(state, { fade: 0, loss: 1 }, 0, 1);
  for (let i = 0; i < FIGURES; i++) out[i] = Number.NaN;
  out[GROUND] = half + inversion;
  out[EXCITED] = half - inversion;
  out[MEAN] = moments.state[7];
  out[FACTORIAL] = moments.state[8];
  const first = ladder ?? counted;
  if (first) {
    out[P0] = first.state[3];
    out[P1] = first.state[7];
    out[MULTIPHOTON] = first.state[ladder ? 16 : 8];
  }
  if (ladder) {
    out[P2] = ladder.state[11];
    out[P3] = ladder.state[15];
  }
  if (thinned) {
    out[THINNED] = thinned.state[3];
    out[THINNED + 1] = thinned.state[7];
    out[THINNED + 2] = thinned.state[8];
  }
}
