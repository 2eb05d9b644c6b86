import type { Count } from '../collection/moments.js';
import type { CountRequest } from '../kernels/count.js';
import type { CountGradient, CountWithGradient } from '../kernels/gradient.js';
import type { Formula, Scalar } from './formula.js';
import { type Functional, functionalOf } from './functional.js';

/** What a set of counted values means to formulas. */
export interface Reading {
  readonly value: (scalar: Scalar) => number | null;
  readonly signal: Count | null;
  readonly leakage: number;
  readonly eta: number;
  /** Factorial moments behind the filter; null without one. */
  readonly order: number | null;
}

/** Some formulas differentiated by one request. */
export interface Part {
  readonly gradient: CountGradient;
  readonly functionals: ReadonlyMap<number, Functional>;
  /** Which formula each sensitivity belongs to; those that do not depend on the count have none. */
  readonly seeded: readonly number[];
}

/**
 * Counts with derivatives.
 * @param read null when the values are not good enough to be differentiated; the part then has none
 * @returns null where the kernel gives no derivatives, or a figure does not exist
 */
export function differentiateCount(
  request: CountRequest,
  formulas: ReadonlyMap<number, Formula>,
  read: (values: Readonly<Record<string, number>>) => Reading | null,
  kernel: CountWithGradient,
): Part | null {
  let functionals = new Map<number, Functional>();
  let seeded: number[] = [];
  let missing = false;
  const gradient = kernel(request, (values) => {
    functionals = new Map();
    seeded = [];
    missing = false;
    const reading = read(values);
    if (reading === null) return [];
    for (const [i, formula] of formulas) {
      const terms = formula.terms(reading.value);
      if (terms === null) missing = true;
      else functionals.set(i, functionalOf(terms, reading));
    }
    if (missing) return [];
    for (const [i, { counted }] of functionals) if (Object.keys(counted).length > 0) seeded.push(i);
    return seeded.map((i) => (functionals.get(i) as Functional).counted);
  });
  return gradient === null || missing ? null : { gradient, functionals, seeded };
}
