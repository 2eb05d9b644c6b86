import type { Drive } from '../../pulse/drive.js';
import type { CountRequest, CountResult } from '../count.js';
import { BlochStep } from './bloch-step.js';
import type { FastKernel } from './contract.js';
import { extrapolate } from './extrapolate.js';
import { frameEnergies, type KickedLayout, kickedLayout, lineFrequency } from './kicked-layout.js';
import { smoothSpans } from './spans.js';
import { applyRows } from './sparse.js';
import { coherentRate, phaseIsSteady } from './step-rule.js';
import { SuperRotation } from './superrotation.js';
import { asTwoLevel } from './two-level.js';
import { UnitaryStep } from './unitary-step.js';

/**
 * Any level scheme, emitted or filtered, by exact rotations and exact kicks (kicked-layout.ts) on uniform steps. To first
 * order in the kicks the sum over steps is spectrally accurate, because the kicks act on a function that is constant where
 * the drive has faded; what remains is a series in h² (the splitting is symmetric), which is extrapolated away over a few
 * runs (Hairer, Nørsett & Wanner, Solving Ordinary Differential Equations I, section II.9).
 */
export const kicked: FastKernel = {
  name: 'kicked',
  supports: (request) => request.filter !== null && request.scheme.levels.length === 2,
  count(request, countPart) {
    const spans = smoothSpans(request.drive);
    if (!spans) return null;
    const problem = prepare(request);
    if (!problem) return null;
    const outcome = extrapolate(
      problem.steps,
      request.effort.tolerance * ACCEPT,
      (steps) => (steps > MOST_STEPS ? null : run(problem, steps)),
      request.effort.parts,
    );
    if (!outcome) return null;
    if (!request.filter) return { ...outcome, populations: outcome.populations };
    // Light before the filter does not see it: the cheaper problem has its own steps.
    const emitted = countPart({ ...request, filter: null });
    return {
      values: { ...emitted.values, ...outcome.values },
      populations: emitted.populations,
      steps: outcome.steps + emitted.steps,
      localErrors: Math.max(outcome.localErrors, emitted.localErrors),
    };
  },
};

/** Accepted error in units of the effort's tolerance per step. */
const ACCEPT = 10;
const MOST_STEPS = 60_000;
/** Shares of the emitted kernel's steps: a few more runs of the extrapolation cost less than a fine first one. */
const SMOOTH = 0.9;
const UNEVEN = 0.35;
/** Largest ‖hK‖ of the first run. */
const RESOLVED = 4;
/**
 * First guesses above which the reference, with its larger steps of higher order, was measured to be as fast: two levels
 * filtered, more levels filtered, more levels emitted.
 */
const MOST_FIRST = { two: 4000, filtered: 1500, emitted: 400 };
/** Damping per step above which the series in h² is not worth starting. */
const MOST_DAMPING = 30;

interface Problem {
  readonly request: CountRequest;
  readonly layout: KickedLayout;
  /** Frequency of the collected line in the drive's frame, 1/ps. */
  readonly line: number;
  /** Drive components that ever differ from zero. */
  readonly used: readonly boolean[];
  /** First guess. */
  readonly steps: number;
  readonly follow: boolean;
  readonly start: number;
  readonly end: number;
}

const PROBES = 64;

/** Which real and imaginary parts of the drive ever differ from zero, seen at probes. */
function usedParts(drive: Drive): [boolean, boolean][] {
  const { breakpoints, components } = drive;
  const out = new Float64Array(2 * components);
  const used: [boolean, boolean][] = Array.from({ length: components }, () => [false, false]);
  for (let s = 0; s + 1 < breakpoints.length; s++) {
    for (let k = 0; k < PROBES; k++) {
      const t = breakpoints[s] + ((k + 0.5) / PROBES) * (breakpoints[s + 1] - breakpoints[s]);
      drive.sample(t, s, out);
      for (let c = 0; c < components; c++) {
        if (out[2 * c] !== 0) used[c][0] = true;
        if (out[2 * c + 1] !== 0) used[c][1] = true;
      }
    }
  }
  return used;
}

export function prepare(request: CountRequest): Problem | null {
  const { drive, scheme } = request;
  const { breakpoints, scales } = drive;
  const start = breakpoints[0];
  const end = breakpoints[breakpoints.length - 1];
  const energies = frameEnergies(request);
  const line = request.filter ? lineFrequency(request, energies) : 0;
  const used = usedParts(drive);
  const layout = kickedLayout(request, used, line);
  const { norm } = layout.kicks;
  const follow = scales.frequency > 0 && breakpoints.length === 2 && scheme.levels.length === 2;
  const steady = follow && phaseIsSteady(drive, [{ start, end, first: 0, last: 0, gap: false }]);
  const strength = Math.max(...scheme.transitions.map((t) => Math.hypot(t.weightH, t.weightV)));
  const rabi = scales.peakRabi * strength;
  const two = scheme.levels.length === 2;
  const smooth = two && (steady || scales.frequency === 0);
  const energy = Math.max(...energies.map(Math.abs));
  const rate = two
    ? (smooth ? SMOOTH : UNEVEN) * coherentRate(drive, rabi, energies[1] - energies[0], smooth)
    : 1.4 / scales.time + 0.6 * rabi + 0.6 * Math.hypot(rabi, energy + scales.frequency);
  if (norm > MOST_DAMPING * rate) return null;
  const steps = Math.ceil((end - start) * Math.max(rate, norm / RESOLVED));
  if (steps > (two ? MOST_FIRST.two : request.filter ? MOST_FIRST.filtered : MOST_FIRST.emitted)) return null;
  return { request, layout, line, used: used.map(([re, im]) => re || im), steps, follow: steady, start, end };
}

/** Advances the rotations of all components over one step. */
type Advance = (t: number, left: number, middle: number, right: number) => void;

function rotations(problem: Problem, h: number): { advance: Advance; maps: readonly SuperRotation[] } {
  const { request, layout } = problem;
  const { levels } = layout;
  const maps = layout.components.map((c) => new SuperRotation(levels, c));
  const model = asTwoLevel(request);
  if (model) {
    const step = new BlochStep(request.drive, { ...model, decay: 0, dephasing: 0 }, h, problem.follow);
    return {
      maps,
      advance: (t, left, middle, right) => {
        step.advance(t, left, middle, right);
        for (const map of maps) map.setBloch(step.matrix);
      },
    };
  }
  const step = new UnitaryStep(request.scheme, frameEnergies(request), request.drive, h, problem.used);
  return {
    maps,
    advance: (t, left, middle, right) => {
      step.advance(t, left, middle, right);
      for (const map of maps) map.set(step.re, step.im);
    },
  };
}

export function run(problem: Problem, count: number): CountResult | null {
  const { layout, request } = problem;
  const { breakpoints } = request.drive;
  const h = (problem.end - problem.start) / count;
  const kick = layout.kicks.at(h);
  if (!kick) return null;
  const { advance, maps } = rotations(problem, h);
  let y = new Float64Array(layout.places.length);
  let spare = new Float64Array(layout.places.length);
  for (const seed of layout.seeds) y[seed] = 1;
  const scratch = new Float64Array(layout.levels ** 2);
  const turn = turner(layout, problem.line, h);
  const last = breakpoints.length - 2;
  let segment = 0;
  // The first half kick does nothing to the ground state.
  for (let n = 0; n < count; n++) {
    const t = problem.start + (n + 0.5) * h;
    while (segment < last && t - 0.4 * h >= breakpoints[segment + 1]) segment++;
    let middle = segment;
    while (middle < last && t >= breakpoints[middle + 1]) middle++;
    let right = middle;
    while (right < last && t + 0.4 * h >= breakpoints[right + 1]) right++;
    advance(t, segment, middle, right);
    for (const map of maps) map.apply(y, scratch);
    turn?.(y);
    if (n + 1 === count) break;
    applyRows(kick, y, spare);
    [y, spare] = [spare, y];
  }
  // Without drive the figures do not change in time. Where the free motion is nothing but the charge that every figure
  // conserves (two levels), that holds for the last half kick by itself; it is left out when only figures are asked for.
  if (!request.filter || request.scheme.levels.length > 2) layout.kicks.apply(h / 2, y);
  const values: Record<string, number> = {};
  for (const { name, row } of layout.effects) {
    let sum = 0;
    for (let i = 0; i < row.length; i++) sum += row[i] * y[i];
    values[name] = sum;
  }
  const populations = request.scheme.levels.map((_, i) => {
    const at = layout.places.indexOf(i);
    return at < 0 ? 0 : y[at];
  });
  return { values, populations, steps: count, localErrors: 0 };
}

/** Turns every complex block by −(j − k)·line·h. */
function turner(layout: KickedLayout, line: number, h: number): ((y: Float64Array) => void) | null {
  const { pairs } = layout;
  if (pairs.length === 0) return null;
  const xs = Int32Array.from(pairs, (p) => p.x);
  const ys = Int32Array.from(pairs, (p) => p.y);
  const cos = Float64Array.from(pairs, (p) => Math.cos(p.quanta * line * h));
  const sin = Float64Array.from(pairs, (p) => Math.sin(p.quanta * line * h));
  return (state) => {
    for (let k = 0; k < xs.length; k++) {
      const x = state[xs[k]];
      const y = state[ys[k]];
      state[xs[k]] = cos[k] * x + sin[k] * y;
      state[ys[k]] = cos[k] * y - sin[k] * x;
    }
  };
}
