import type { TwoLevel } from '../two-level.js';
import { divide, multiply } from './contacts.js';
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
  { kappa, offset }: Filter,
  numbers: StepNumbers,
): number[] {
  const { h, intoTrace, intoCoherence, pair, closed, both, turn } = numbers;
  // Sums of λ^k over k ≥ 1.
  const alone = 1 / Math.expm1(model.decay * h);
  const damped = 1 / Math.expm1((model.decay + kappa) * h);
  const fade = numbers.fade * numbers.damp;
  const step = { re: fade * Math.cos(offset * h), im: -fade * Math.sin(offset * h) };
  const gone = -Math.expm1(-(model.coherence + 0.5 * kappa) * h) + fade * 2 * Math.sin(0.5 * offset * h) ** 2;
  const coherent = divide(step, { re: gone, im: -step.im });
  const excited = (o: number): number => y[o + 4];
  const out: number[] = [];
  let factorial = 1;
  for (let n = 1; n <= legs.order; n++) {
    const one = legs.at(1, 0, n - 1);
    const free = alone * excited(legs.at(0, 0, n - 1));
    const change = 2 * intoCoherence * (free + (n > 1 ? damped * excited(legs.at(1, 1, n - 2)) : 0));
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
