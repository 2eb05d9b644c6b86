/**
 * Collects derivatives of some scalars by the parameters of one tone from their derivatives by samples of the drive.
 * A change dΩ of the field of the tone changes a scalar by Σ over samples of Re(ḡ dΩ), g the derivative by the sample.
 */
export interface ToneAdjoint {
  /** Looks at a time, ps; `add` follows for each scalar. */
  prepare(t: number): void;
  /** g of the component along the tone's polarisation and of the one across it, as re, im. */
  add(t: number, scalar: number, along: readonly [number, number], across: readonly [number, number]): void;
  /** Adds the derivatives to a vector laid out as in layout.ts, from the tone's first slot. */
  finish(scalar: number, into: Float64Array, slot: number): void;
}
