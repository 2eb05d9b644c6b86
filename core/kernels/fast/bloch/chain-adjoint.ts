import type { Chain, Kick } from './chain.js';

/** Numbers recorded of a chain before each kick: all but the trace of the rest, on which nothing depends. */
export const RECORD = 8;

/** `kicks` (chain.ts), writing the state before kick n to record[8n …]. */
export function recordKicks(
  chain: Chain,
  { fade, loss }: Kick,
  axes: Float64Array,
  from: number,
  to: number,
  record: Float64Array,
): void {
  const { own, feed, rest, state } = chain;
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
  for (let n = from, k = 3 * from, i = RECORD * from; n < to; n++, k += 3, i += RECORD) {
    record[i] = x;
    record[i + 1] = y;
    record[i + 2] = z;
    record[i + 3] = trace;
    record[i + 4] = x1;
    record[i + 5] = y1;
    record[i + 6] = z1;
    record[i + 7] = trace1;
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

/**
 * Sweeps the adjoint of a chain, laid out like its state, back through kicks to − 1 … from and adds the derivatives by
 * their axes to slopes[3n …].
 */
export function adjointKicks(
  chain: Chain,
  { fade, loss }: Kick,
  axes: Float64Array,
  record: Float64Array,
  from: number,
  to: number,
  adjoint: Float64Array,
  slopes: Float64Array,
): void {
  const { own, feed, rest } = chain;
  const stay = 0.25 * (1 + own) * loss;
  const mine = 1 - fade - 2 * stay;
  const fall = (1 - own) * loss;
  const handed = feed * loss;
  const half = 0.5 * handed;
  const last = rest * loss * adjoint[8];
  let lx = adjoint[0];
  let ly = adjoint[1];
  let lz = adjoint[2];
  let lt = adjoint[3];
  let lx1 = adjoint[4];
  let ly1 = adjoint[5];
  let lz1 = adjoint[6];
  let lt1 = adjoint[7];
  for (let n = to - 1, k = 3 * n, i = RECORD * n; n >= from; n--, k -= 3, i -= RECORD) {
    const a = axes[k];
    const b = axes[k + 1];
    const c = axes[k + 2];
    const x = record[i];
    const y = record[i + 1];
    const z = record[i + 2];
    const x1 = record[i + 4];
    const y1 = record[i + 5];
    const z1 = record[i + 6];
    const p = a * x + b * y + c * z;
    const p1 = a * x1 + b * y1 + c * z1;
    const e = 0.5 * record[i + 3] - p;
    const d = mine * p + stay * record[i + 3];
    const d1 = mine * p1 + stay * record[i + 7] + half * e;
    const ld = a * lx + b * ly + c * lz;
    const ld1 = a * lx1 + b * ly1 + c * lz1;
    const le = half * ld1 - fall * lt + handed * lt1;
    const le1 = last - fall * lt1;
    const lp = mine * ld - le;
    const lp1 = mine * ld1 - le1;
    slopes[k] += d * lx + d1 * lx1 + lp * x + lp1 * x1;
    slopes[k + 1] += d * ly + d1 * ly1 + lp * y + lp1 * y1;
    slopes[k + 2] += d * lz + d1 * lz1 + lp * z + lp1 * z1;
    lx = fade * lx + a * lp;
    ly = fade * ly + b * lp;
    lz = fade * lz + c * lp;
    lx1 = fade * lx1 + a * lp1;
    ly1 = fade * ly1 + b * lp1;
    lz1 = fade * lz1 + c * lp1;
    lt += stay * ld + 0.5 * le;
    lt1 += stay * ld1 + 0.5 * le1;
  }
  adjoint[0] = lx;
  adjoint[1] = ly;
  adjoint[2] = lz;
  adjoint[3] = lt;
  adjoint[4] = lx1;
  adjoint[5] = ly1;
  adjoint[6] = lz1;
  adjoint[7] = lt1;
}
