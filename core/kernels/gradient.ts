import type { CountRequest, CountResult } from './count.js';

/**
 * Weights of the figures (by target name) in every scalar whose derivatives are wanted, chosen once their values are
 * known: for a figure f(m1, m2, …) the weights are ∂f/∂m1, ∂f/∂m2, …
 */
export type Seeds = (values: Readonly<Record<string, number>>) => readonly Readonly<Record<string, number>>[];

/** First derivatives of one scalar, at fixed steps, frame and window. */
export interface Sensitivity {
  /**
   * By the drive's samples: a change dΩ of the drive changes the scalar by Σ over samples and components of
   * re·Re dΩ + im·Im dΩ; laid out like the samples (2·components per time), in ps.
   */
  readonly drive: Float64Array;
  /** By `CountRequest.shift`, ps. */
  readonly shift: number;
  /** By `filter.kappa` and `filter.center`, ps; 0 without a filter. */
  readonly kappa: number;
  readonly center: number;
}

/** Figures with their derivatives by reverse sweeps. */
export interface CountGradient {
  readonly result: CountResult;
  /** Where the drive was sampled, ps, and the segment of the drive meant at each time. */
  readonly times: Float64Array;
  readonly segments: Int32Array;
  /** One for each of the seeds. */
  readonly sensitivities: readonly Sensitivity[];
}

/** Figures and derivatives, or null where the kernel cannot give them to the promised accuracy. */
export type CountWithGradient = (request: CountRequest, seeds: Seeds) => CountGradient | null;
