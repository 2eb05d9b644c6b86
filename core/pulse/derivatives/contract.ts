/** Derivatives of scalars by samples of the drive. */
export interface SampleDerivatives {
  /** ps. */
  readonly times: ArrayLike<number>;
  /** Segment of the drive meant at each time. */
  readonly segments: ArrayLike<number>;
  /** Per scalar, laid out like the samples: re, im of each component, for each time. */
  readonly scalars: readonly ArrayLike<number>[];
}

/** One tone's part in the samples. */
export interface ToneSamples {
  readonly times: ArrayLike<number>;
  /** Whether the tone acts at each time. */
  readonly acts: (i: number) => boolean;
  readonly components: 1 | 2;
  /** Weight of the tone in each component. */
  readonly weights: readonly [number, number];
}

/**
 * Finds derivatives of a scalar by the parameters of one tone from those by the samples of the drive: a change dΩ of its
 * field changes the scalar by Σ over samples of Re(ḡ dΩ), g the derivative by the sample.
 */
export interface ToneAdjoint {
  /** Adds the derivatives to a vector laid out as in layout.ts, from the tone's first slot. */
  add(scalar: ArrayLike<number>, into: Float64Array, slot: number): void;
}
