import type { Scheme } from '../emitter/contract.js';

/** One frequency that the propagator has to resolve when the frame rotates at f: weight·|center − quanta·f|, 1/ps. */
export interface Resonance {
  readonly center: number;
  readonly quanta: number;
  readonly weight: number;
}

/** Frequencies of every coherence between levels that the drive can connect, relative to the mean exciton line. */
export function schemeResonances(scheme: Scheme): Resonance[] {
  const out: Resonance[] = [];
  for (const a of scheme.levels) {
    for (const b of scheme.levels) {
      const quanta = a.excitons - b.excitons;
      if (quanta > 0) out.push({ center: a.offset - b.offset, quanta, weight: 1 });
    }
  }
  return out;
}

/**
 * The frame in which the fastest oscillation is slowest: minimises the (convex) maximum over all resonances.
 * @returns angular frequency relative to the mean exciton line, 1/ps
 */
export function slowestFrame(resonances: readonly Resonance[]): number {
  const worst = (f: number): number =>
    resonances.reduce((m, r) => Math.max(m, r.weight * Math.abs(r.center - r.quanta * f)), 0);
  const centers = resonances.map((r) => r.center / r.quanta);
  let low = Math.min(...centers);
  let high = Math.max(...centers);
  if (high - low < 1e-9) return low;
  for (let k = 0; k < 60; k++) {
    const a = low + (high - low) / 3;
    const b = high - (high - low) / 3;
    if (worst(a) <= worst(b)) high = b;
    else low = a;
  }
  return (low + high) / 2;
}
