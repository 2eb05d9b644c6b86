import type { CountRequest, CountResult } from '../kernels/count.js';
import type { Bath } from './bath.js';

/** A size of the exact method's hierarchy that was found enough, and what one step more or less changed. */
export interface SettledSize {
  readonly terms: number;
  readonly depth: number;
  /** Relative. */
  readonly error: number;
}

/** What a method returns beside the count. */
export interface PhononCount extends CountResult {
  /** What is wrong with the figures, as whole phrases; empty for sound ones. */
  readonly flags: readonly string[];
  /** How they were made: method, size, fit, as whole phrases. */
  readonly remarks: readonly string[];
  /** Relative error of the figures that the treatment of the bath leaves (fit, depth), without the method's own nature. */
  readonly error: number;
  /** Where the method settled its size: enough for neighbouring designs too. */
  readonly tower?: SettledSize | undefined;
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
