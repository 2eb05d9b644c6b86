/**
 * A chain of counting operators: jumps lead from the first lane to the second and from there to the rest, of which only
 * the trace is followed. Three chains make all figures: no photon, one, more; the same after thinning; the density
 * operator with its first and second factorial moment.
 */
export interface Chain {
  /** Share of the decays that stay in their lane. */
  readonly own: number;
  /** Share that leads from the first lane to the second, and from the second to the rest. */
  readonly feed: number;
  readonly rest: number;
  /** Per lane the Bloch vector (Re ρ_gx, Im ρ_gx, (ρ_gg − ρ_xx)/2) back in the rotating picture and the trace; trace of the rest. */
  readonly state: Float64Array;
}

/** Numbers of a chain's state. */
export const CHAIN_STATE = 9;

/** The effect of some time without drive. */
export interface Kick {
  /** Factor of the coherence. */
  readonly fade: number;
  /** Share of the upper level that decays. */
  readonly loss: number;
}

/** Coefficients of what the kicks' second-order error has different from lane to lane (correct.ts). */
export interface Correction {
  readonly quadratic: number;
  readonly quartic: number;
  /** Dephasing over decay. */
  readonly ratio: number;
}

/** Kicks a chain along axes[3n …] for n = from … to − 1. */
export function kicks(chain: Chain, kick: Kick, axes: Float64Array, from: number, to: number): void {
  const { own, feed, rest, state } = chain;
  const { fade, loss } = kick;
  const stay = 0.25 * (1 + own) * loss;
  const mine = 1 - fade - 2 * stay;
  const fall = (1 - own) * loss;
  const handed = feed * loss;
  const half = 0.5 * handed;
  const last = rest * loss;
  let x = state[0];
  let y = state[1];
  let z = state[2];
  let trace = state[3];
  let x1 = state[4];
  let y1 = state[5];
  let z1 = state[6];
  let trace1 = state[7];
  let more = state[8];
  for (let k = 3 * from; k < 3 * to; k += 3) {
    const a = axes[k];
    const b = axes[k + 1];
    const c = axes[k + 2];
    const p = a * x + b * y + c * z;
    const p1 = a * x1 + b * y1 + c * z1;
    // What the axis gains beyond its fading; in this order the traces do not lengthen the loop's longest chain.
    const d = mine * p + stay * trace;
    const d1 = mine * p1 + (stay * trace1 + half * (0.5 * trace - p));
    const e = 0.5 * trace - p;
    const e1 = 0.5 * trace1 - p1;
    x = fade * x + a * d;
    y = fade * y + b * d;
    z = fade * z + c * d;
    x1 = fade * x1 + a * d1;
    y1 = fade * y1 + b * d1;
    z1 = fade * z1 + c * d1;
    trace -= fall * e;
    trace1 += handed * e - fall * e1;
    more += last * e1;
  }
  state[0] = x;
  state[1] = y;
  state[2] = z;
  state[3] = trace;
  state[4] = x1;
  state[5] = y1;
  state[6] = z1;
  state[7] = trace1;
  state[8] = more;
}

/** The same for two chains at once, the second one that of the moments (own = 1): two latencies for one. */
export function kicksOfTwo(
  chain: Chain,
  moments: Chain,
  kick: Kick,
  axes: Float64Array,
  from: number,
  to: number,
): void {
  const { own, feed, rest, state } = chain;
  const { fade, loss } = kick;
  const stay = 0.25 * (1 + own) * loss;
  const mine = 1 - fade - 2 * stay;
  const fall = (1 - own) * loss;
  const handed = feed * loss;
  const half = 0.5 * handed;
  const last = rest * loss;
  const first = moments.feed * loss;
  const second = moments.rest * loss;
  const whole = 1 - fade - loss;
  const { state: other } = moments;
  let x = state[0];
  let y = state[1];
  let z = state[2];
  let trace = state[3];
  let x1 = state[4];
  let y1 = state[5];
  let z1 = state[6];
  let trace1 = state[7];
  let more = state[8];
  let u = other[0];
  let v = other[1];
  let w = other[2];
  const all = 0.5 * other[3];
  let u1 = other[4];
  let v1 = other[5];
  let w1 = other[6];
  let mean = other[7];
  let factorial = other[8];
  const kept = loss * all;
  for (let k = 3 * from; k < 3 * to; k += 3) {
    const a = axes[k];
    const b = axes[k + 1];
    const c = axes[k + 2];
    const p = a * x + b * y + c * z;
    const p1 = a * x1 + b * y1 + c * z1;
    const d = mine * p + stay * trace;
    const d1 = mine * p1 + (stay * trace1 + half * (0.5 * trace - p));
    const e = 0.5 * trace - p;
    const e1 = 0.5 * trace1 - p1;
    x = fade * x + a * d;
    y = fade * y + b * d;
    z = fade * z + c * d;
    x1 = fade * x1 + a * d1;
    y1 = fade * y1 + b * d1;
    z1 = fade * z1 + c * d1;
    trace -= fall * e;
    trace1 += handed * e - fall * e1;
    more += last * e1;
    const r = a * u + b * v + c * w;
    const r1 = a * u1 + b * v1 + c * w1;
    const g = whole * r + kept;
    const s = first * (all - r);
    const g1 = whole * r1 + 0.5 * (loss * mean + s);
    u = fade * u + a * g;
    v = fade * v + b * g;
    w = fade * w + c * g;
    u1 = fade * u1 + a * g1;
    v1 = fade * v1 + b * g1;
    w1 = fade * w1 + c * g1;
    factorial += second * (0.5 * mean - r1);
    mean += s;
  }
  state[0] = x;
  state[1] = y;
  state[2] = z;
  state[3] = trace;
  state[4] = x1;
  state[5] = y1;
  state[6] = z1;
  state[7] = trace1;
  state[8] = more;
  other[0] = u;
  other[1] = v;
  other[2] = w;
  other[4] = u1;
  other[5] = v1;
  other[6] = w1;
  other[7] = mean;
  other[8] = factorial;
}
