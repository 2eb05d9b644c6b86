import type { TwoLevel } from '../two-level.js';
import { remainders } from './contacts.js';

/** A filter as the emitter sees it. */
export interface Filter {
  /** FWHM of the intensity transmission, 1/ps. */
  readonly kappa: number;
  /** Centre minus the emitter's line, 1/ps. */
  readonly offset: number;
}

/** Numbers of one uniform step; all but the first four and the last depend on the filter. */
export interface StepNumbers {
  readonly h: number;
  /** Factor of the coherence and of the excited state over a step without drive. */
  readonly fade: number;
  readonly keep: number;
  /** Factor of one open leg over a step. */
  readonly damp: number;
  /** Strength of an event on coordinates that feed the trace, and on those that feed the coherence. */
  readonly intoTrace: number;
  readonly intoCoherence: number;
  /** Coincident pairs, of b = X_xx: what the sum over steps leaves out at equal times. */
  readonly pair: number;
  /** The same of second order in the drive, per |Ω|². */
  readonly pairDriven: number;
  /** Two events on one side, and an event and a decay, within a step: factors of iΩ. */
  readonly twice: number;
  readonly decaying: number;
  /** Trace into the coherence, per Ω: dephasing and decay within a step. */
  readonly dephasing: number;
  /** An event and dephasing within a step: factors of what opens and closes legs into the trace. */
  readonly opened: number;
  readonly closed: number;
  /** Phase that an event on the left gives to the trace (rad, small); on the right the opposite. */
  readonly turn: number;
  /** The same for one event on either side. */
  readonly both: number;
  /** Scale of the drive that cancels the error of decay and dephasing among themselves. */
  readonly drive: number;
}

/**
 * Between grid points stands the exact motion by drive and damping, at each grid point decay over one step (exact) and one
 * event per side of ρ. To first order in events and decay a sum over grid points is spectrally accurate, because the drive
 * fades at both ends. To second order it errs where two of them coincide (Euler–Maclaurin), by
 *   events on both sides:  (κ/4)h·2Re β₀ cXc† into n + 1, and −(κ/4)h·2Re β₂ ċXċ†,
 *   two on the left:       −(κ/4)hβ₁ cċ X = −(κ/4)hβ₁(iγΩ/2) σX,
 *   one and a decay:       −√(κ/4)hβ₁[c, ċ]Xc† = −√(κ/4)hβ₁ iγ^{3/2}Ω σXσ†,
 *   one and dephasing:     √(κ/4)h·β₀γ*·½σX(1 − 2n), −β₀* where the event closes a leg (less what a factor and a phase of
 *                          every leg would do: that drops out of the figures),
 *   two decays:            (h²/24)[[D, V], D],
 * which are added here; the rest is of fourth order in h. (c = √γσ, ċ = i[H, c], β of contacts.ts, D decay, V drive.)
 */
export function stepNumbers(model: TwoLevel, { kappa, offset }: Filter, h: number): StepNumbers {
  const { decay, dephasing, coherence } = model;
  const collected = model.collected * decay;
  const { b0, b1, b2 } = remainders({ re: 0.5 * kappa, im: offset }, h);
  const event = 0.5 * Math.sqrt(0.25 * kappa * collected) * h;
  const light = 0.25 * kappa * collected * h;
  const difference = decay - coherence;
  return {
    h,
    fade: Math.exp(-coherence * h),
    keep: Math.exp(-decay * h),
    damp: Math.exp(-0.5 * kappa * h),
    // Events stand in the middle of the decay that the state has already seen in full.
    intoTrace: event * middle(0.5 * coherence * h) * Math.exp(0.5 * coherence * h),
    intoCoherence: event * middle(0.5 * difference * h) * Math.exp(0.5 * difference * h),
    pair: light * b0.re * Math.exp(0.5 * decay * h),
    pairDriven: -0.5 * light * b2.re,
    twice: -0.5 * b1.re * Math.sqrt(0.25 * kappa * collected),
    decaying: -b1.re * decay,
    dephasing: (-(h ** 3) * decay * dephasing) / 24,
    opened: 1 + dephasing * b0.re,
    closed: 1 - dephasing * b0.re,
    turn: dephasing * b0.im,
    both: 1 - 0.25 * h * dephasing,
    drive: 1 - (h * difference) ** 2 / 24,
  };
}

/** Factor by which a sum over the middles of steps falls short of an exponential's integral, √(sinh 2x/2x). */
function middle(x: number): number {
  return 1 + (x * x) / 3;
}

/**
 * What depends on the filter, in the order of `sweep` (propagate.as): the logarithm of both strengths of events, then `pair`,
 * `pairDriven`, `twice`, `decaying`, `opened`, `closed`, `turn` and the logarithm of `damp`.
 */
export const FILTER_NUMBERS = 9;

/** Derivatives of those numbers, by κ and by the offset. */
export function numberSlopes(
  model: TwoLevel,
  filter: Filter,
  numbers: StepNumbers,
): { readonly kappa: readonly number[]; readonly offset: readonly number[] } {
  const { decay, dephasing } = model;
  const { h, pair, pairDriven, twice } = numbers;
  const { kappa } = filter;
  const { b1, b2, b3 } = remainders({ re: 0.5 * kappa, im: filter.offset }, h);
  const light = 0.25 * kappa * model.collected * decay * h;
  const single = Math.sqrt(0.25 * kappa * model.collected * decay);
  const middled = light * Math.exp(0.5 * decay * h);
  // ∂β_j/∂ν = −(j + 1)β_{j+1}, ν = κ/2 + i·offset.
  return {
    kappa: [
      0.5 / kappa,
      pair / kappa - 0.5 * middled * b1.re,
      pairDriven / kappa + 0.75 * light * b3.re,
      (0.5 * twice) / kappa + 0.5 * single * b2.re,
      decay * b2.re,
      -0.5 * dephasing * b1.re,
      0.5 * dephasing * b1.re,
      -0.5 * dephasing * b1.im,
      -0.5 * h,
    ],
    offset: [
      0,
      middled * b1.im,
      -1.5 * light * b3.im,
      -single * b2.im,
      -2 * decay * b2.im,
      dephasing * b1.im,
      -dephasing * b1.im,
      -dephasing * b1.re,
      0,
    ],
  };
}
