import { axisOf } from './axes.js';
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
import { correctLadder, LADDER_STATE, type Ladder, ladderKicks } from './ladder.js';
import { STRIDE } from './pace.js';
import type { BlochProblem } from './problem.js';

/** Everything that carries over from step to step. */
export interface State {
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

/** The ground state before any kick; overwritten by the next call. */
export function begin(problem: BlochProblem): State {
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
export function kickAll(state: State, kick: Kick, axes: Float64Array, from: number, to: number): void {
  const { moments, counted, ladder, thinned } = state;
  if (ladder) ladderKicks(ladder, kick, axes, from, to);
  if (counted) kicksOfTwo(counted, moments, kick, axes, from, to);
  else if (thinned) kicksOfTwo(thinned, moments, kick, axes, from, to);
  else kicks(moments, kick, axes, from, to);
  if (counted && thinned) kicks(thinned, kick, axes, from, to);
}

/** The same with corrections in the middle of every second kick. */
export function kickCorrected(
  state: State,
  kick: Kick,
  middle: Kick,
  correction: Correction,
  axes: Float64Array,
  pulls: Float64Array,
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

const lastAxis = new Float64Array(3);

/** Everything decays: the traces are the figures (figures.ts). */
export function finish(state: State, out: Float64Array): void {
  const axes = lastAxis;
  axisOf(state.q, axes);
  const { moments, counted, ladder, thinned } = state;
  const rho = moments.state;
  const inversion = axes[0] * rho[0] + axes[1] * rho[1] + axes[2] * rho[2];
  const half = 0.5 * rho[3];
  kickAll(state, { fade: 0, loss: 1 }, axes, 0, 1);
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
