/** A value that the search may choose, in internal units. `path` is that of the study file, such as `pulse.tones.0.fwhm`. */
export type FreeParameter =
  | { readonly kind: 'range'; readonly path: string; readonly from: number; readonly to: number; readonly scale: 'linear' | 'log' }
  | { readonly kind: 'list'; readonly path: string; readonly values: readonly number[] };

export interface Goal {
  /** Minimised: of what is collected per pulse. */
  readonly impurity: 'multiphoton' | 'g2';
  /** Maximised: of the signal per pulse. */
  readonly brightness: 'single' | 'any' | 'mean';
  /** Brightness at which the best design is reported apart; null for none. */
  readonly atLeast: number | null;
  /** Brightness levels of the front; from/to null = the reachable range. */
  readonly front: { readonly from: number | null; readonly to: number | null; readonly points: number };
}
