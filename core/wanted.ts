import type { PulseFigures } from './figures.js';

/** What has to be found of a design; everything else may come out as NaN. */
export interface Wanted {
  /** Targets of the emitted count; null for all. */
  readonly emitted: readonly string[] | null;
  /** Behind a filter: probabilities, which need a series of moments, and not only ⟨n⟩ and ⟨n(n−1)⟩. */
  readonly series: boolean;
  readonly leakage: boolean;
  /** Figures of the pulse; null for all. */
  readonly pulse: ReadonlySet<keyof PulseFigures> | null;
}

export const EVERYTHING: Wanted = { emitted: null, series: true, leakage: true, pulse: null };
