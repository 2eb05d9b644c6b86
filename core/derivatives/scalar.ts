import type { Sample } from '../sample.js';
import type { Scalar } from './formula.js';

/** The value of a scalar in a sample; null where there is none. */
export function scalarOf(sample: Sample, scalar: Scalar): number | null {
  let node: unknown = sample;
  for (const key of scalar.split('.')) {
    if (node === null || typeof node !== 'object') return null;
    node = (node as Record<string, unknown>)[key];
  }
  return typeof node === 'number' ? node : null;
}
