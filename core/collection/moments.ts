/** Photon-number probabilities from factorial moments m_k = ⟨n(n−1)…(n−k+1)⟩, and what losses do to them. */

export interface CountFromMoments {
  readonly p0: number;
  readonly p1: number;
  /** P(n≥2). */
  readonly multiphoton: number;
  /** Last term included in P(n≥2): the partial sums bracket the truth, so it bounds the error. */
  readonly bound: number;
  /** The first term left out, estimated by m_{K+1} ≈ m_K²/m_{K−1}: moments of few photons fall at least that fast. */
  readonly next: number;
}

/**
 * Sieve (Bonferroni) sums p_0 = Σ(−1)^k m_k/k!, p_1 = Σ(−1)^{k−1} m_k/(k−1)!, P(n≥2) = Σ_{k≥2} (−1)^k (k−1)/k! m_k;
 * losses with survival η turn m_k into η^k m_k.
 * @param moments m_1 … m_K
 */
export function countFromMoments(moments: readonly number[], eta: number): CountFromMoments {
  let p0 = 1;
  let p1 = 0;
  let multiphoton = 0;
  let bound = Number.POSITIVE_INFINITY;
  let factorial = 1;
  let power = 1;
  moments.forEach((m, index) => {
    const k = index + 1;
    factorial *= k;
    power *= eta;
    const term = (m * power) / factorial;
    const sign = k % 2 === 0 ? 1 : -1;
    p0 += sign * term;
    p1 -= sign * k * term;
    if (k >= 2) {
      multiphoton += sign * (k - 1) * term;
      bound = Math.abs((k - 1) * term);
    }
  });
  return { p0, p1, multiphoton, bound, next: nextTerm(moments, eta, factorial) };
}

function nextTerm(moments: readonly number[], eta: number, factorial: number): number {
  const order = moments.length;
  const last = moments[order - 1];
  if (last === 0) return 0;
  const following = (last * last) / moments[order - 2];
  return Math.abs((order * following * eta ** (order + 1)) / (factorial * (order + 1)));
}

/** Relative accuracy promised for P(n≥2), down to this value. */
export const MULTIPHOTON_ACCURACY = 1e-6;
export const MULTIPHOTON_FLOOR = 1e-7;

/** What judges the length of a moment series: the rigorous bound, or the estimate of what is left out. */
export type SeriesRule = 'bound' | 'estimate';

/** True when the moment series is long enough for the promised accuracy of P(n≥2). */
export function seriesHolds(count: CountFromMoments, rule: SeriesRule): boolean {
  return seriesError(count, rule) <= MULTIPHOTON_ACCURACY;
}

/** Relative error that the length of the series may leave in P(n≥2). */
export function seriesError(count: CountFromMoments, rule: SeriesRule): number {
  const error = rule === 'bound' ? count.bound : count.next;
  return error / Math.max(count.multiphoton, MULTIPHOTON_FLOOR);
}

/** A count distribution as far as figures need it; null where the moment series was too short. */
export interface Count {
  readonly mean: number;
  readonly factorial2: number;
  readonly p0: number | null;
  readonly single: number | null;
  readonly multiphoton: number | null;
}

/** Adds an independent Poisson count of mean `extra` (leaked laser light, dark counts); free of cancellation. */
export function addPoisson(count: Count, extra: number): Count {
  const { p0, single, multiphoton } = count;
  const mean = count.mean + extra;
  const factorial2 = count.factorial2 + 2 * count.mean * extra + extra * extra;
  if (p0 === null || single === null || multiphoton === null) {
    return { mean, factorial2, p0: null, single: null, multiphoton: null };
  }
  const dark = Math.exp(-extra);
  const atLeastOne = -Math.expm1(-extra);
  return {
    mean,
    factorial2,
    p0: p0 * dark,
    single: (single + p0 * extra) * dark,
    multiphoton: multiphoton + single * atLeastOne + p0 * poissonAtLeastTwo(extra),
  };
}

/** 1 − e^{−x}(1 + x), without cancellation for small x. */
function poissonAtLeastTwo(x: number): number {
  if (x > 0.1) return -Math.expm1(-x) - x * Math.exp(-x);
  let term = (x * x) / 2;
  let sum = 0;
  for (let k = 2; k < 20; k++) {
    sum += term;
    term *= x / (k + 1);
  }
  return sum * Math.exp(-x);
}

/** What a number of a count distribution is, as weights of others. */
export type CountWeights = Readonly<Partial<Record<keyof Count, number>>>;

/**
 * Weights of m_1 … m_K in p_0, p_1 and P(n≥2) after losses with survival η: `countFromMoments` is their sum (p_0 has 1 besides).
 */
export function momentWeights(order: number, eta: number): Record<'p0' | 'p1' | 'multiphoton', number[]> {
  const p0: number[] = [];
  let term = 1;
  for (let k = 1; k <= order; k++) {
    term *= -eta / k;
    p0.push(term);
  }
  return {
    p0,
    p1: p0.map((t, i) => -(i + 1) * t),
    multiphoton: p0.map((t, i) => i * t),
  };
}

/** Derivatives of one number of `addPoisson(count, extra)` by the numbers of the count and by `extra`. */
export function poissonWeights(
  key: keyof Count,
  count: Count,
  extra: number,
): { readonly count: CountWeights; readonly extra: number } {
  const dark = Math.exp(-extra);
  const p0 = count.p0 ?? Number.NaN;
  const single = count.single ?? Number.NaN;
  switch (key) {
    case 'mean':
      return { count: { mean: 1 }, extra: 1 };
    case 'factorial2':
      return { count: { factorial2: 1, mean: 2 * extra }, extra: 2 * (count.mean + extra) };
    case 'p0':
      return { count: { p0: dark }, extra: -p0 * dark };
    case 'single':
      return { count: { single: dark, p0: extra * dark }, extra: (p0 * (1 - extra) - single) * dark };
    case 'multiphoton':
      return {
        count: { multiphoton: 1, single: -Math.expm1(-extra), p0: poissonAtLeastTwo(extra) },
        extra: (single + p0 * extra) * dark,
      };
  }
}
