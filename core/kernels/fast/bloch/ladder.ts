import type { Correction, Kick } from './chain.js';

/** Lanes ρ_0 … ρ_3 of the emitted count, as in `Chain` but with every probability up to p_3 by itself. */
export interface Ladder {
  /** Share of the decays that is counted. */
  readonly counted: number;
  /** Per lane Bloch vector and trace; last the trace of two and more. */
  readonly state: Float64Array;
}

const LANES = 4;
export const LADDER_STATE = 4 * LANES + 1;

const pulled = new Float64Array(3 * LANES);
const once = new Float64Array(3 * LANES);
const twice = new Float64Array(3 * LANES);

/** What each lane gains for one jump everywhere, for three numbers per lane. */
function feed(x: Float64Array, counted: number, out: Float64Array): void {
  for (let i = 0; i < 3 * LANES; i++) out[i] = (1 - counted) * x[i] + (i < 3 ? 0 : counted * x[i - 3]);
}

/** `kicks` (chain.ts) for a ladder. */
export function ladderKicks(
  { counted, state }: Ladder,
  { fade, loss }: Kick,
  axes: Float64Array,
  from: number,
  to: number,
): void {
  for (let n = from; n < to; n++) {
    const a = axes[3 * n];
    const b = axes[3 * n + 1];
    const c = axes[3 * n + 2];
    let above = 0;
    for (let i = 0; i < 4 * LANES; i += 4) {
      const p = a * state[i] + b * state[i + 1] + c * state[i + 2];
      const e = loss * (0.5 * state[i + 3] - p);
      const into = (1 - counted) * e + above;
      const d = (1 - fade) * p + 0.5 * (e + into);
      state[i] = fade * state[i] + a * d;
      state[i + 1] = fade * state[i + 1] + b * d;
      state[i + 2] = fade * state[i + 2] + c * d;
      state[i + 3] += into - e;
      above = counted * e;
      if (i === 4) state[4 * LANES] += above;
    }
  }
}

/** `correct` (correct.ts) for a ladder. */
export function correctLadder(
  { counted, state }: Ladder,
  { quadratic, quartic, ratio }: Correction,
  axes: Float64Array,
  pulls: Float64Array,
  n: number,
): void {
  const [a, b, c] = [axes[3 * n], axes[3 * n + 1], axes[3 * n + 2]];
  const [u, v, w] = [pulls[4 * n], pulls[4 * n + 1], pulls[4 * n + 2]];
  const beta = quartic * pulls[4 * n + 3];
  const base = quadratic - beta * ratio;
  const linear = -quadratic + (8 / 3) * beta * ratio;
  for (let l = 0, i = 0; l < LANES; l++, i += 4) {
    pulled[3 * l] = a * state[i] + b * state[i + 1] + c * state[i + 2];
    pulled[3 * l + 1] = state[i + 3];
    pulled[3 * l + 2] = u * state[i] + v * state[i + 1] + w * state[i + 2];
  }
  feed(pulled, counted, once);
  feed(once, counted, twice);
  for (let i = 0, k = 0; k < 3 * LANES; i += 4, k += 3) {
    const into =
      linear * once[k] -
      beta * twice[k] +
      0.5 * (base * pulled[k + 1] + (base + beta) * once[k + 1] + beta * twice[k + 1]);
    const back = beta * twice[k + 2] - linear * once[k + 2];
    state[i] += u * into + a * back;
    state[i + 1] += v * into + b * back;
    state[i + 2] += w * into + c * back;
    state[i + 3] += 2 * (-base * pulled[k + 2] + (base - beta) * once[k + 2] + beta * twice[k + 2]);
  }
  state[4 * LANES] += 2 * counted * (base * pulled[5] + beta * once[5]);
}
