import type { TwoLevel } from '../two-level.js';
import { add, type Complex, divide, multiply, scale } from './contacts.js';
import type { Legs } from './legs.js';
import type { Filter, StepNumbers } from './step.js';

/**
 * Factorial moments m_1 … m_K: all further steps, without drive, summed up. From there on the emitter can give one more
 * event on either side, so that only a few coordinates matter: X_xx of blocks with no leg or one on either side, X_gx of
 * blocks with one left leg, and traces. The steps keep the same coefficients as under the drive, which makes the sums over all
 * steps those of functions that vanish at both ends.
 */
export function moments(
  legs: Legs,
  y: Float64Array,
  model: TwoLevel,
  filter: Filter,
  numbers: StepNumbers,
): number[] {
  const { intoTrace, intoCoherence, pair, closed, both, turn } = numbers;
  const { alone, damped, coherent } = freeSums(model, filter, numbers);
  const out: number[] = [];
  let factorial = 1;
  for (let n = 1; n <= legs.order; n++) {
    const one = legs.at(1, 0, n - 1);
    const free = alone * y[legs.at(0, 0, n - 1) + 4];
    const change = 2 * intoCoherence * (free + (n > 1 ? damped * y[legs.at(1, 1, n - 2) + 4] : 0));
    const gx = multiply(coherent, { re: y[one] - y[one + 3] + change, im: y[one + 1] + y[one + 2] });
    factorial *= n;
    out.push(
      factorial *
        (y[legs.at(0, 0, n) + 6] +
          intoTrace * closed * (2 * (gx.re + turn * gx.im) + both * change) +
          pair * free),
    );
  }
  return out;
}

/** Sums of λ^k over k ≥ 1 of X_xx without a leg and with one on either side, and of X_gx with one left leg. */
function freeSums(
  model: TwoLevel,
  { kappa, offset }: Filter,
  numbers: StepNumbers,
): { readonly alone: number; readonly damped: number; readonly coherent: Complex } {
  const { h } = numbers;
  const fade = numbers.fade * numbers.damp;
  const step = { re: fade * Math.cos(offset * h), im: -fade * Math.sin(offset * h) };
  const gone = -Math.expm1(-(model.coherence + 0.5 * kappa) * h) + fade * 2 * Math.sin(0.5 * offset * h) ** 2;
  return {
    alone: 1 / Math.expm1(model.decay * h),
    damped: 1 / Math.expm1((model.decay + kappa) * h),
    coherent: divide(step, { re: gone, im: -step.im }),
  };
}

/**
 * Derivatives of Σ weight·m: by the blocks at the end (to `lambda`), by the filter's numbers (added to `byNumber`, order of
 * numberSlopes), and what κ and the offset do directly.
 * @param weights of m_1 … m_K
 */
export function momentSlopes(
  legs: Legs,
  y: Float64Array,
  model: TwoLevel,
  filter: Filter,
  numbers: StepNumbers,
  weights: readonly number[],
  lambda: Float64Array,
  byNumber: Float64Array,
): { readonly kappa: number; readonly offset: number } {
  const { h, intoTrace, intoCoherence, pair, closed, both, turn } = numbers;
  const { alone, damped, coherent } = freeSums(model, filter, numbers);
  lambda.fill(0);
  let byDamped = 0;
  let byCoherent = { re: 0, im: 0 };
  let factorial = 1;
  for (let n = 1; n <= legs.order; n++) {
    factorial *= n;
    const weight = factorial * weights[n - 1];
    const one = legs.at(1, 0, n - 1);
    const none = legs.at(0, 0, n - 1);
    const pairOpen = n > 1 ? legs.at(1, 1, n - 2) : 0;
    const free = alone * y[none + 4];
    const excited = free + damped * y[pairOpen + 4];
    const change = 2 * intoCoherence * excited;
    const last = { re: y[one] - y[one + 3] + change, im: y[one + 1] + y[one + 2] };
    const gx = multiply(coherent, last);
    const light = 2 * (gx.re + turn * gx.im) + both * change;
    lambda[legs.at(0, 0, n) + 6] += weight;
    byNumber[0] += weight * intoTrace * closed * light;
    byNumber[1] += weight * free;
    byNumber[6] += weight * intoTrace * light;
    byNumber[7] += weight * intoTrace * closed * 2 * gx.im;
    const into = 2 * weight * intoTrace * closed;
    const byGx = { re: into, im: into * turn };
    const byLast = multiply({ re: coherent.re, im: -coherent.im }, byGx);
    byCoherent = add(byCoherent, multiply({ re: last.re, im: -last.im }, byGx));
    const byChange = 0.5 * into * both + byLast.re;
    lambda[one] += byLast.re;
    lambda[one + 3] -= byLast.re;
    lambda[one + 1] += byLast.im;
    lambda[one + 2] += byLast.im;
    byNumber[0] += byChange * change;
    const byExcited = 2 * intoCoherence * byChange;
    lambda[none + 4] += alone * (byExcited + weight * pair);
    if (pairOpen > 0) {
      lambda[pairOpen + 4] += damped * byExcited;
      byDamped += byExcited * y[pairOpen + 4];
    }
  }
  // ∂/∂ν of λ/(1 − λ) with λ ∝ e^{−νh} is −hλ/(1 − λ)².
  const slope = scale(multiply(coherent, { re: 1 + coherent.re, im: coherent.im }), -h);
  return {
    kappa:
      -h * damped * (1 + damped) * byDamped + 0.5 * (byCoherent.re * slope.re + byCoherent.im * slope.im),
    offset: byCoherent.im * slope.re - byCoherent.re * slope.im,
  };
}
