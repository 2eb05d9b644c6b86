import type { CountRequest, CountResult } from '../count.js';
import { BlochStep } from './bloch-step.js';
import type { FastKernel } from './contract.js';
import { disagreement } from './estimate.js';
import { type Span, smoothSpans } from './spans.js';
import { chooseSteps, GROWTH, type StepPlan } from './step-rule.js';
import { asTwoLevel, type TwoLevel } from './two-level.js';

/**
 * Emitted light of two levels. Per step the drive is one rotation of the Bloch vectors of all counting operators;
 * between steps stands the exact effect of decay, dephasing and counted jumps over one step (a "kick"). To first order
 * in the rates this is a sum over uniform steps of a smooth function that is constant at both ends, so its error
 * is spectrally small; to second order the error of the symmetric splitting is
 * (h²/24)[K,[K,V]] (Takahashi & Imada, J. Phys. Soc. Jpn. 53, 3765 (1984)), which is taken out in closed form: it
 * scales the drive by 1 − h²Γ²/24 and, with pure dephasing, adds the small terms of `correct`.
 */
export const twoLevelEmitted: FastKernel = {
  name: 'two-level emitted',
  supports: (request) => request.filter === null && asTwoLevel(request) !== null,
  count(request) {
    const model = asTwoLevel(request);
    const spans = smoothSpans(request.drive);
    if (!model || !spans) return null;
    const plan = chooseSteps(request.drive, model, spans);
    for (let round = 0; round < plan.length - 1; round++) {
      const coarse = run(request, model, spans, plan[round], 1);
      const fine = run(request, model, spans, plan[round + 1], 1);
      // Both errors that matter fall at least as h⁴: what is left in the finer run follows from the difference.
      const error = disagreement(coarse.values, fine.values) / (GROWTH ** 4 - 1);
      if (!Number.isFinite(error)) return null;
      if (error > request.effort.tolerance * ACCEPT) continue;
      const { parts } = request.effort;
      const best = parts > 1 ? run(request, model, spans, plan[round + 1], parts) : fine;
      return { ...best, localErrors: error };
    }
    return null;
  },
};

/** Accepted disagreement of two runs, in units of the effort's tolerance per step. */
const ACCEPT = 10;

/** Order of the counting operators in the state: full, n = 0 … 3, n ≥ 2, first and second factorial moment, thinned 0, 1, ≥ 2. */
const LANES = 8;
const THINNED = 3;

interface Sources {
  readonly collected: number;
  /** Collected share times survival. */
  readonly surviving: number;
  readonly lanes: number;
}

export function run(
  request: CountRequest,
  model: TwoLevel,
  spans: readonly Span[],
  plan: StepPlan,
  parts: number,
): CountResult {
  const { drive, thinning } = request;
  const lanes = thinning === null ? LANES : LANES + THINNED;
  const sources = { collected: model.collected, surviving: model.collected * (thinning ?? 0), lanes };
  // Per lane: Re ρ_gx, Im ρ_gx, (ρ_gg − ρ_xx)/2, trace.
  const y = new Float64Array(4 * lanes);
  for (const lane of thinning === null ? [0, 1] : [0, 1, LANES]) {
    y[4 * lane + 2] = 0.5;
    y[4 * lane + 3] = 1;
  }
  let steps = 0;
  const { breakpoints } = drive;
  const extra = model.dephasing * model.decay;
  spans.forEach((span, index) => {
    const length = span.end - span.start;
    if (span.gap) {
      turn(y, lanes, model.energy * length);
      kick(y, sources, Math.exp(-model.coherence * length), -Math.expm1(-model.decay * length));
      return;
    }
    const count = plan.counts[index] * parts;
    const h = length / count;
    const scale = 1 - (h * h * model.coherence * model.coherence) / 24;
    const step = new BlochStep(drive, model.weight * scale, model.energy, plan.follow);
    const fade = Math.exp(-model.coherence * h);
    const loss = -Math.expm1(-model.decay * h);
    const halfFade = Math.exp(-0.5 * model.coherence * h);
    const halfLoss = -Math.expm1(-0.5 * model.decay * h);
    const correction = (-h * h * extra) / 48;
    kick(y, sources, halfFade, halfLoss);
    let segment = span.first;
    for (let n = 0; n < count; n++) {
      const t = span.start + (n + 0.5) * h;
      let right = segment;
      let middle = segment;
      if (segment < span.last) {
        while (segment < span.last && t - 0.4 * h >= breakpoints[segment + 1]) segment++;
        middle = segment;
        while (middle < span.last && t >= breakpoints[middle + 1]) middle++;
        right = middle;
        while (right < span.last && t + 0.4 * h >= breakpoints[right + 1]) right++;
      }
      step.advance(t, h, segment, middle, right);
      if (extra > 0) correct(y, sources, correction, step.pulse);
      rotate(y, lanes, step.matrix);
      if (extra > 0) correct(y, sources, correction, step.pulse);
      if (n + 1 < count) kick(y, sources, fade, loss);
    }
    kick(y, sources, halfFade, halfLoss);
    steps += count;
  });
  const populations = [0.5 * y[3] + y[2], 0.5 * y[3] - y[2]];
  kick(y, sources, 0, 1);
  return { values: named(y, thinning !== null), populations, steps, localErrors: 0 };
}

function rotate(y: Float64Array, lanes: number, m: Float64Array): void {
  const m0 = m[0];
  const m1 = m[1];
  const m2 = m[2];
  const m3 = m[3];
  const m4 = m[4];
  const m5 = m[5];
  const m6 = m[6];
  const m7 = m[7];
  const m8 = m[8];
  for (let i = 0; i < 4 * lanes; i += 4) {
    const a = y[i];
    const b = y[i + 1];
    const c = y[i + 2];
    y[i] = m0 * a + m1 * b + m2 * c;
    y[i + 1] = m3 * a + m4 * b + m5 * c;
    y[i + 2] = m6 * a + m7 * b + m8 * c;
  }
}

/** Free precession of the coherences by an angle. */
function turn(y: Float64Array, lanes: number, angle: number): void {
  const c = Math.cos(angle);
  const s = Math.sin(angle);
  for (let i = 0; i < 4 * lanes; i += 4) {
    const a = y[i];
    y[i] = c * a - s * y[i + 1];
    y[i + 1] = s * a + c * y[i + 1];
  }
}

/** Decay, dephasing and jumps over one step: coherences times `fade`, a share `loss` of the upper level decays. */
function kick(y: Float64Array, sources: Sources, fade: number, loss: number): void {
  const { collected: q, surviving: e, lanes } = sources;
  const d0 = loss * (0.5 * y[3] - y[2]);
  const d1 = loss * (0.5 * y[7] - y[6]);
  const d2 = loss * (0.5 * y[11] - y[10]);
  const d3 = loss * (0.5 * y[15] - y[14]);
  const d4 = loss * (0.5 * y[19] - y[18]);
  const d5 = loss * (0.5 * y[23] - y[22]);
  const d6 = loss * (0.5 * y[27] - y[26]);
  const d7 = loss * (0.5 * y[31] - y[30]);
  for (let i = 0; i < 4 * lanes; i += 4) {
    y[i] *= fade;
    y[i + 1] *= fade;
  }
  const uncounted = 1 - q;
  y[2] += d0;
  move(y, 6, d1, uncounted * d1);
  move(y, 10, d2, uncounted * d2 + q * d1);
  move(y, 14, d3, uncounted * d3 + q * d2);
  move(y, 18, d4, uncounted * d4 + q * d3);
  move(y, 22, d5, d5 + q * d2);
  move(y, 26, d6, d6 + q * d0);
  move(y, 30, d7, d7 + 2 * q * d6);
  if (lanes === LANES) return;
  const t0 = loss * (0.5 * y[35] - y[34]);
  const t1 = loss * (0.5 * y[39] - y[38]);
  const t2 = loss * (0.5 * y[43] - y[42]);
  move(y, 34, t0, (1 - e) * t0);
  move(y, 38, t1, (1 - e) * t1 + e * t0);
  move(y, 42, t2, t2 + e * t1);
}

/** The upper level loses `out`, the lower one gains `into`; at = index of the inversion. */
function move(y: Float64Array, at: number, out: number, into: number): void {
  y[at] += 0.5 * (out + into);
  y[at + 1] += into - out;
}

/**
 * What remains of the double commutator with pure dephasing: strength·[½iΩ̄*·(Z + 1)ρ_xx on the coherence,
 * and the drive's pull on the populations with (−Z, 1) in place of (1, −1)], Z the feeding of lanes by counted jumps.
 */
function correct(y: Float64Array, sources: Sources, strength: number, pulse: Float64Array): void {
  const { collected: q, surviving: e, lanes } = sources;
  const a = strength * pulse[0];
  const b = strength * pulse[1];
  for (let lane = lanes - 1; lane >= 0; lane--) {
    // Lanes feed later ones only, so going down the list every source is still unchanged.
    const self =
      lane === 0 || lane === 5 || lane === 6 || lane === 7 || lane === 10 ? 1 : lane < LANES ? 1 - q : 1 - e;
    const from = FEEDS[lane];
    const share = from < 0 ? 0 : lane === 7 ? 2 * q : lane < LANES ? q : e;
    const i = 4 * lane;
    const j = 4 * Math.max(0, from);
    const fed = self * upper(y, i) + share * upper(y, j) + upper(y, i);
    const pull = -(b * y[i] + a * y[i + 1]);
    const pulled = self * pull - share * (b * y[j] + a * y[j + 1]);
    y[i] += 0.5 * b * fed;
    y[i + 1] += 0.5 * a * fed;
    move(y, i + 2, -pull, -pulled);
  }
}

/** Lane that feeds each lane by a counted jump, besides itself. */
const FEEDS = [-1, -1, 1, 2, 3, 2, 0, 6, -1, 8, 9];

function upper(y: Float64Array, i: number): number {
  return 0.5 * y[i + 3] - y[i + 2];
}

function named(y: Float64Array, thinned: boolean): Record<string, number> {
  const values: Record<string, number> = {
    p0: y[7],
    p1: y[11],
    p2: y[15],
    p3: y[19],
    multiphoton: y[23],
    mean: y[27],
    factorial2: y[31],
  };
  if (thinned) {
    values['thinned0'] = y[35];
    values['thinned1'] = y[39];
    values['thinnedMultiphoton'] = y[43];
  }
  return values;
}
