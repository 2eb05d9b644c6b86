import { HBAR } from '../units/constants.js';
import type { Tone } from './contract.js';

/** Lorentzian intensity filter T(ω) = (κ/2)²/((ω − center)² + (κ/2)²), relative to the pulse reference. */
export interface SpectralFilter {
  /** Full width at half maximum, 1/ps. */
  readonly kappa: number;
  /** 1/ps. */
  readonly center: number;
}

type Complex = readonly [re: number, im: number];

const times = (a: Complex, b: Complex): Complex => [a[0] * b[0] - a[1] * b[1], a[0] * b[1] + a[1] * b[0]];
const over = (a: Complex, b: Complex): Complex => {
  const norm = b[0] * b[0] + b[1] * b[1];
  return [(a[0] * b[0] + a[1] * b[1]) / norm, (a[1] * b[0] - a[0] * b[1]) / norm];
};
const minus = (a: Complex, b: Complex): Complex => [a[0] - b[0], a[1] - b[1]];
const plus = (a: Complex, b: Complex): Complex => [a[0] + b[0], a[1] + b[1]];
const conjugate = (a: Complex): Complex => [a[0], -a[1]];
const turn = (angle: number): Complex => [Math.cos(angle), Math.sin(angle)];

/** ∫_0^length e^{λt} dt. */
function exponentialIntegral(lambda: Complex, length: number): Complex {
  const x = lambda[0] * length;
  const y = lambda[1] * length;
  if (Math.hypot(x, y) < 1e-3) {
    // 1 + z/2 + z²/6 + z³/24 + z⁴/120
    let sum: Complex = [1, 0];
    for (let k = 5; k >= 2; k--) sum = plus([1, 0], over(times([x, y], sum), [k, 0]));
    return [sum[0] * length, sum[1] * length];
  }
  const half = Math.sin(y / 2);
  const re = Math.expm1(x) - 2 * Math.exp(x) * half * half;
  return over([re, Math.exp(x) * Math.sin(y)], lambda);
}

/** A flat tone as a switched oscillation: amplitude·e^{−iδt} between on and off; δ relative to the frame. */
interface Switched {
  readonly on: number;
  readonly off: number;
  readonly rate: number;
  readonly amplitude: Complex;
}

function switched(tone: Tone, frame: number): Switched {
  const field = tone.area / tone.fwhm;
  return {
    on: tone.delay - tone.fwhm / 2,
    off: tone.delay + tone.fwhm / 2,
    rate: tone.detuning / HBAR - frame,
    amplitude: times([field, 0], turn(tone.phase)),
  };
}

function overlap(a: Tone, b: Tone): number {
  const one = switched(a, 0);
  const two = switched(b, 0);
  const start = Math.max(one.on, two.on);
  const length = Math.min(one.off, two.off) - start;
  if (length <= 0) return 0;
  const beat = one.rate - two.rate;
  const product = times(times(one.amplitude, conjugate(two.amplitude)), turn(-beat * start));
  return times(product, exponentialIntegral([0, -beat], length))[0];
}

/** ∫_0^length of (p e^{−iδt} + q e^{−gt})(p' e^{−iδ't} + q' e^{−gt})*. */
function productIntegral(
  [p, q, rate]: readonly [Complex, Complex, number],
  [p2, q2, rate2]: readonly [Complex, Complex, number],
  decay: number,
  length: number,
): Complex {
  const terms = [
    times(times(p, conjugate(p2)), exponentialIntegral([0, rate2 - rate], length)),
    times(times(p, conjugate(q2)), exponentialIntegral([-decay, -rate], length)),
    times(times(q, conjugate(p2)), exponentialIntegral([-decay, rate2], length)),
    times(times(q, conjugate(q2)), exponentialIntegral([-2 * decay, 0], length)),
  ];
  return terms.reduce(plus);
}

/**
 * Re ∫ Ω_a Ω_b* dt of two flat, undispersed tones behind a filter (null: none), in closed form: each tone drives a
 * single-pole filter da/dt = −(κ/2)a + (κ/2)Ω in the filter's frame, whose |response|² is the Lorentzian. 1/ps.
 */
export function flatPair(a: Tone, b: Tone, filter: SpectralFilter | null): number {
  if (filter === null) return overlap(a, b);
  const decay = filter.kappa / 2;
  const tones = [switched(a, filter.center), switched(b, filter.center)];
  const gains = tones.map((tone) => times(tone.amplitude, over([decay, 0], [decay, -tone.rate])));
  const edges = [...new Set(tones.flatMap((tone) => [tone.on, tone.off]))].sort((x, y) => x - y);
  let state: Complex[] = [
    [0, 0],
    [0, 0],
  ];
  let sum: Complex = [0, 0];
  for (let i = 0; i + 1 < edges.length; i++) {
    const start = edges[i];
    const length = edges[i + 1] - start;
    const parts = tones.map((tone, k) => {
      const acts = tone.on <= start && tone.off > start;
      const driven: Complex = acts ? times(gains[k], turn(-tone.rate * start)) : [0, 0];
      return [driven, minus(state[k], driven), tone.rate] as const;
    });
    sum = plus(sum, productIntegral(parts[0], parts[1], decay, length));
    state = parts.map(([driven, free, rate]) =>
      plus(times(driven, turn(-rate * length)), times(free, [Math.exp(-decay * length), 0])),
    );
  }
  return sum[0] + times(state[0], conjugate(state[1]))[0] / (2 * decay);
}
