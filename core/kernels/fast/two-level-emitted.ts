import type { Drive } from '../../pulse/drive.js';
import type { CountRequest, CountResult } from '../count.js';
import { BlochStep } from './bloch-step.js';
import type { FastKernel } from './contract.js';
import { refine } from './refine.js';
import { type Span, smoothSpans } from './spans.js';
import { firstSteps, type StepPlan } from './step-rule.js';
import { asTwoLevel, type TwoLevel } from './two-level.js';

/**
 * Emitted light of two levels. Per step the drive is one rotation of the Bloch vectors of all counting operators;
 * between steps stands the exact effect of decay, dephasing and counted jumps over one step (a "kick"). To first order
 * in the rates this is a sum over uniform steps of a smooth function that is constant at both ends, so its error
 * is spectrally small. To second order the sum has an Euler–Maclaurin series, whose h² and h⁴ terms are closed (the
 * first is the double commutator of Takahashi & Imada, J. Phys. Soc. Jpn. 53, 3765 (1984)) and are taken out.
 */
export const twoLevelEmitted: FastKernel = {
  name: 'two-level emitted',
  supports: (request) => request.filter === null && asTwoLevel(request) !== null,
  count(request) {
    const model = asTwoLevel(request);
    const spans = smoothSpans(request.drive);
    if (!model || !spans) return null;
    const { parts } = request.effort;
    return refine(
      firstSteps(request.drive, model, spans),
      request.effort.tolerance * ACCEPT,
      (plan) => run(request, model, spans, plan, 1),
      (plan) => run(request, model, spans, plan, parts),
      parts,
    );
  },
};

/** Accepted error of a run, in units of the effort's tolerance per step. */
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
  spans.forEach((span, index) => {
    const length = span.end - span.start;
    if (span.gap) {
      turn(y, lanes, model.energy * length);
      kick(y, sources, Math.exp(-model.coherence * length), -Math.expm1(-model.decay * length));
      return;
    }
    const count = plan.counts[index] * parts;
    const h = length / count;
    const step = new BlochStep(drive, model, h, plan.follow);
    const fade = Math.exp(-model.coherence * h);
    const loss = -Math.expm1(-model.decay * h);
    const halfFade = Math.exp(-0.5 * model.coherence * h);
    const halfLoss = -Math.expm1(-0.5 * model.decay * h);
    const correction = new LaneCorrection(model, sources, h);
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
      step.advance(t, segment, middle, right);
      rotate(y, lanes, step.matrix);
      if (n + 1 === count) break;
      correction.apply(y, drive, t + 0.5 * h, right);
      kick(y, sources, fade, loss);
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
 * Second-order errors of the splitting that differ from lane to lane. With Z the feeding of lanes by jumps
 * (dρ_gg/dt = γZρ_xx), δ = (γ*)/γ, P = (1 + Z)/2, M = Z − 1, e the inversion's axis and b = B × e the transverse drive,
 * the kicks' error per unit time is cancelled by
 *   (b∧e)[(h²γ²/48)δZ − (h⁴γ²Ω²/5760)(3Z² − 8δZ)] on the Bloch vectors,
 *   b·[−(h²γγ*·1/48)P + (h⁴γ²Ω²/1920)(Z − δ)P] from the traces to them, and
 *   bᵀ·[−(h²γγ*·1/24)M + (h⁴γ²Ω²/960)M(Z − δ)] back:
 * (h²/24)[[K,V],K] − (h⁴/1440)[[K,V], [[K,V],V] + [K,V̇]] of the Euler–Maclaurin series of the double sum over kicks,
 * without the parts common to all lanes, which scale the rotation.
 */
class LaneCorrection {
  private readonly first: Float64Array;
  private readonly second: Float64Array;
  private readonly pull: Float64Array;
  private readonly sample = new Float64Array(2);
  private readonly quartic: number;
  private readonly quadratic: number;
  private readonly delta: number;

  constructor(
    private readonly model: TwoLevel,
    private readonly sources: Sources,
    private readonly h: number,
  ) {
    const { decay, dephasing } = model;
    this.first = new Float64Array(3 * sources.lanes);
    this.second = new Float64Array(3 * sources.lanes);
    this.pull = new Float64Array(3 * sources.lanes);
    this.quadratic = (-h * h * decay * dephasing) / 48;
    this.quartic = (h ** 4 * decay * decay) / 1920;
    this.delta = dephasing / decay;
  }

  /** Applies the correction of one step at a grid point. */
  apply(y: Float64Array, drive: Drive, t: number, segment: number): void {
    const { first, second, pull, sources, h, sample, model } = this;
    const { lanes } = sources;
    drive.sample(t, segment, sample);
    const br = model.weight * h * sample[1];
    const bm = model.weight * h * sample[0];
    const beta = this.quartic * model.weight ** 2 * (sample[0] * sample[0] + sample[1] * sample[1]);
    const base = this.quadratic - beta * this.delta;
    const linear = -this.quadratic + (8 / 3) * beta * this.delta;
    for (let i = 0, k = 0; i < 4 * lanes; i += 4, k += 3) {
      pull[k] = y[i + 2];
      pull[k + 1] = y[i + 3];
      pull[k + 2] = br * y[i] + bm * y[i + 1];
    }
    feed(pull, first, sources);
    feed(first, second, sources);
    for (let l = 0, i = 0, k = 0; l < lanes; l++, i += 4, k += 3) {
      const q = pull[k + 2];
      const into =
        linear * first[k] -
        beta * second[k] +
        0.5 * (base * y[i + 3] + (base + beta) * first[k + 1] + beta * second[k + 1]);
      y[i] += br * into;
      y[i + 1] += bm * into;
      y[i + 2] -= linear * first[k + 2] - beta * second[k + 2];
      y[i + 3] += 2 * (-base * q + (base - beta) * first[k + 2] + beta * second[k + 2]);
    }
  }
}

/** out = Z x on three numbers per lane: what each lane gains for one jump everywhere. */
function feed(x: Float64Array, out: Float64Array, sources: Sources): void {
  const { collected: q, surviving: e, lanes } = sources;
  const uncounted = 1 - q;
  for (let c = 0; c < 3; c++) {
    out[c] = x[c];
    out[3 + c] = uncounted * x[3 + c];
    out[6 + c] = uncounted * x[6 + c] + q * x[3 + c];
    out[9 + c] = uncounted * x[9 + c] + q * x[6 + c];
    out[12 + c] = uncounted * x[12 + c] + q * x[9 + c];
    out[15 + c] = x[15 + c] + q * x[6 + c];
    out[18 + c] = x[18 + c] + q * x[c];
    out[21 + c] = x[21 + c] + 2 * q * x[18 + c];
  }
  if (lanes === LANES) return;
  for (let c = 24; c < 27; c++) {
    out[c] = (1 - e) * x[c];
    out[3 + c] = (1 - e) * x[3 + c] + e * x[c];
    out[6 + c] = x[6 + c] + e * x[3 + c];
  }
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
