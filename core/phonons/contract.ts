import type { CountRequest, CountResult } from '../kernels/count.js';
import type { Bath } from './bath.js';

/** What a method returns beside the count. */
export interface PhononCount extends CountResult {
  /** What is wrong with the figures, as whole phrases; empty for sound ones. */
  readonly flags: readonly string[];
  /** How they were made: method, size, fit, as whole phrases. */
  readonly remarks: readonly string[];
  /** Relative error of the figures that the treatment of the bath leaves (fit, depth), without the method's own nature. */
  readonly error: number;
}

/** One phonon method of the registry. */
export interface PhononMethod {
  readonly name: 'polaron' | 'weak-coupling' | 'exact';
  readonly summary: string;
  /** True for methods that expand to second order: cheap, not completely positive, sideband added apart. */
  readonly secondOrder: boolean;
  /** @param quoted raise terms and depth until every figure settles, instead of one usual size */
  count(request: CountRequest, bath: Bath, quoted: boolean): PhononCount;
}
