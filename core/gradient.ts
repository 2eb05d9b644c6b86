import type { Design } from './design.js';
import type { Figures } from './figures.js';

/** Figures of a design with exact first derivatives. */
export interface FigureGradient {
  readonly figures: Figures;
  /**
   * One row per figure asked for: its derivative by each parameter, in the figure's unit over the design's internal
   * unit (design.ts). Null where no exact derivative exists for this design (an edge, a phonon method, a quantile, a
   * figure that is null): then differences must do.
   */
  readonly rows: readonly (readonly number[])[] | null;
}

/**
 * Value and derivatives at the accuracy of a search.
 * @param figures paths in the tree of figures, such as `collected.multiphoton`, `pulse.energy_pi_units`
 * @param parameters paths in the design, such as `pulse.tones.0.fwhm`, `collection.filter.center`
 */
export type EvaluateGradient = (
  design: Design,
  figures: readonly string[],
  parameters: readonly string[],
) => FigureGradient;
