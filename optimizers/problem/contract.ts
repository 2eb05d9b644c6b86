import type { Design, Figures } from '../../core/index.js';

/** A value that the search may choose, in internal units. `path` is that of the study file, such as `pulse.tones.0.fwhm`. */
export type FreeParameter =
  | {
      readonly kind: 'range';
      readonly path: string;
      readonly from: number;
      readonly to: number;
      readonly scale: 'linear' | 'log';
    }
  | { readonly kind: 'list'; readonly path: string; readonly values: readonly number[] };

/** `path` always has the value of `sameAs` (both study-file paths). */
export interface Tie {
  readonly path: string;
  readonly sameAs: string;
}

/** Bounds of a figure, by its path in the tree of figures, such as `pulse.energy_pi_units`; null = no bound. */
export interface Limit {
  readonly figure: string;
  readonly atMost: number | null;
  readonly atLeast: number | null;
}

/** Pulse energy (fJ, minimised), leaked laser photons (minimised) or collected mean (maximised). */
export type ThirdAxis = 'energy' | 'leakage' | 'mean';

export interface Goal {
  /** Minimised: of what is collected per pulse. */
  readonly impurity: 'multiphoton' | 'g2';
  /** Maximised: of the signal per pulse. */
  readonly brightness: 'single' | 'any' | 'mean';
  /** Brightness at which the best design is reported apart; null for none. */
  readonly atLeast: number | null;
  /** Brightness levels of the front; from/to null = the reachable range. */
  readonly front: { readonly from: number | null; readonly to: number | null; readonly points: number };
  /** Third objective; the front is then given as that many slices, each a front within a bound. Null for two objectives. */
  readonly third: { readonly axis: ThirdAxis; readonly slices: number } | null;
  /** Every one must be met by each design of the front. Judged, like all figures, on the mean over drift. */
  readonly limits: readonly Limit[];
}

/** The whole search problem as plain data (structured-cloneable, JSON-able): a worker rebuilds everything from it. */
export interface ProblemSpec {
  /** Every fixed value in place; free values hold the start of their range (or the first of their list). */
  readonly design: Design;
  /** In the order of the study file; empty for a fixed design. */
  readonly parameters: readonly FreeParameter[];
  readonly ties: readonly Tie[];
  readonly goal: Goal;
  readonly search: {
    readonly evaluations: number;
    readonly seed: number;
    /** `auto` = the default strategy; else the name of one method of the registries. */
    readonly method: string;
  };
}

/** One evaluated candidate. */
export interface EvaluatedPoint {
  /** Free-parameter values, internal units, order of `ProblemSpec.parameters`. */
  readonly values: readonly number[];
  readonly figures: Figures;
}
