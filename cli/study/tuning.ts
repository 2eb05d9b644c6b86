import type { Design } from '../../core/index.js';
import type { Study, Tuning } from './contract.js';

/**
 * Bias that gives the first tone its detuning δ while the laser stays where that tone has none at the nominal bias:
 * laser − line(V) = −slope·(V − bias) = δ, mV. Null without tuning.
 */
export function biasOf(study: Pick<Study, 'tuning'>, design: Pick<Design, 'pulse'>): number | null {
  const { tuning } = study;
  // Adding zero turns −0 into 0.
  return tuning && tuning.bias - design.pulse.tones[0].detuning / tuning.slope + 0;
}

/** Detunings of the first tone, meV, that the plateau allows: lowest and highest. */
export function plateauDetunings({ slope, bias, range }: Tuning): { from: number; to: number } {
  const [a, b] = [-slope * (range.from - bias) + 0, -slope * (range.to - bias) + 0];
  return { from: Math.min(a, b), to: Math.max(a, b) };
}
