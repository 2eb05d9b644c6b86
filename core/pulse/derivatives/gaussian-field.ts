import type { GaussianTone } from '../gaussians.js';
import type { ToneSamples } from './contract.js';

/** Samples of a recurrence before it begins anew: its rounding grows as the square of that. */
const BLOCK = 32;
/** Kernels sample every step alike: times repeat with one of these periods. */
const PERIODS = [1, 2, 3, 4, 5, 6, 7, 8];
/** Relative difference of steps up to which they are the same. */
const SAME = 1e-11;

/** The field of a Gaussian tone at every time, as re, im, for amplitude 1; 0 where it does not act. */
export function gaussianField(tone: GaussianTone, samples: ToneSamples): Float64Array {
  const { times, acts } = samples;
  const out = new Float64Array(2 * times.length);
  const period = PERIODS.find((p) => uniform(times, p, 0, Math.min(times.length, 4 * p))) ?? 0;
  let i = 0;
  while (i < times.length) {
    const end = Math.min(times.length, i + BLOCK * period);
    if (period > 0 && end - i >= 3 * period && uniform(times, period, i, end)) {
      for (let j = i; j < i + period; j++) recur(tone, times, j, end, period, out);
      i = end;
    } else direct(tone, times[i], out, i++);
  }
  for (let k = 0; k < times.length; k++) if (!acts(k)) out[2 * k] = out[2 * k + 1] = 0;
  return out;
}

function uniform(times: ArrayLike<number>, period: number, from: number, to: number): boolean {
  if (to - from < 2 * period) return false;
  const step = times[from + period] - times[from];
  const room = SAME * Math.max(Math.abs(step), Math.abs(times[from]), Math.abs(times[to - 1]));
  for (let i = from; i + period < to; i++) {
    if (Math.abs(times[i + period] - times[i] - step) > room) return false;
  }
  return step > 0;
}

function direct(
  { fall, phase, rate, chirp, delay }: GaussianTone,
  t: number,
  out: Float64Array,
  i: number,
): void {
  const s = t - delay;
  const field = Math.exp(-fall * s * s);
  const angle = phase - (rate - chirp * s) * s;
  out[2 * i] = field * Math.cos(angle);
  out[2 * i + 1] = field * Math.sin(angle);
}

/** Every `period`-th sample: E(n+1) = E(n)·R(n) with R(n+1) = R(n)·W, since the exponent is quadratic. */
function recur(
  tone: GaussianTone,
  times: ArrayLike<number>,
  from: number,
  to: number,
  period: number,
  out: Float64Array,
): void {
  const { fall, rate, chirp, delay } = tone;
  direct(tone, times[from], out, from);
  const h = times[from + period] - times[from];
  const middle = 2 * (times[from] - delay) + h;
  const shrink = Math.exp(-fall * h * middle);
  const turn = -(rate - chirp * middle) * h;
  const bend = Math.exp(-2 * fall * h * h);
  const wr = bend * Math.cos(2 * chirp * h * h);
  const wi = bend * Math.sin(2 * chirp * h * h);
  let er = out[2 * from];
  let ei = out[2 * from + 1];
  let rr = shrink * Math.cos(turn);
  let ri = shrink * Math.sin(turn);
  for (let i = from + period; i < to; i += period) {
    const e = er * rr - ei * ri;
    ei = er * ri + ei * rr;
    er = e;
    out[2 * i] = er;
    out[2 * i + 1] = ei;
    const r = rr * wr - ri * wi;
    ri = rr * wi + ri * wr;
    rr = r;
  }
}
