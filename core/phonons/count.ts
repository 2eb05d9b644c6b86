import type { PhononSpec } from '../design.js';
import type { CountRequest } from '../kernels/count.js';
import type { Bath } from './bath.js';
import type { PhononCount } from './contract.js';
import { phononMethod } from './registry.js';

/** Highest temperature for which the methods were checked against each other, K. */
export const HOTTEST = 300;

/** A bath outside what the fits and the methods hold; the message says what is allowed. */
export class PhononRangeError extends Error {
  override readonly name = 'PhononRangeError';
}

/**
 * Counts photons of one design with phonons: the targets of `countPhotons`, plus what the reader has to know.
 * @param quoted for `exact`: raise terms and depth until every figure settles
 * @throws PhononRangeError outside 0–300 K
 */
export function countWithPhonons(
  request: CountRequest,
  phonons: PhononSpec,
  method: 'polaron' | 'weak-coupling' | 'exact',
  quoted = false,
): PhononCount {
  const bath: Bath = {
    coupling: phonons.coupling,
    cutoff: phonons.cutoff,
    temperature: phonons.temperature,
  };
  checkRange(bath);
  const count = phononMethod(method).count(request, bath, quoted);
  const strays = unphysical(count.values);
  const cause = method === 'exact' ? 'hierarchy too small' : 'second-order method';
  return {
    ...count,
    flags: [
      ...count.flags,
      ...strays.map(({ name, value }) => `${name} = ${value.toExponential(1)} is unphysical: ${cause}`),
    ],
    // Probabilities count a thousandfold in the error estimate of figures; no search can gain by going below zero.
    error: strays.reduce((m, { excess }) => Math.max(m, 1000 * excess), count.error),
  };
}

function checkRange(bath: Bath): void {
  const problem = phononRangeProblem(bath);
  if (problem !== null) throw new PhononRangeError(problem);
}

/** What is wrong with a bath, got and wanted; null when every method can take it. */
export function phononRangeProblem({ coupling, cutoff, temperature }: Bath): string | null {
  if (!(temperature >= 0 && temperature <= HOTTEST)) {
    return `emitter.phonons.temperature: got ${temperature} K; the bath's correlation is fitted from 0 K to ${HOTTEST} K`;
  }
  if (!(coupling > 0) || !(cutoff > 0)) {
    return `emitter.phonons: got coupling ${coupling} ps^2 and cutoff ${cutoff} 1/ps; both need more than 0`;
  }
  return null;
}

/** Rounding and truncation may leave probabilities below zero by this much. */
const ROUNDING = 1e-9;

/** Probabilities below zero or above one: flagged, never clamped. */
function unphysical(
  values: Readonly<Record<string, number>>,
): { name: string; value: number; excess: number }[] {
  return Object.entries(values)
    .filter(([name]) => /^(p\d|multiphoton|thinned\w+)$/.test(name))
    .map(([name, value]) => ({ name, value, excess: Math.max(-value, value - 1) }))
    .filter(({ excess }) => excess > ROUNDING);
}
