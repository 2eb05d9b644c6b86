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
 * The frame in which the fastest oscillation is slowest: minimises the maximum over all resonances. That is convex and
 * piecewise linear, so its minimum lies where a falling and a rising line meet.
 * @returns angular frequency relative to the mean exciton line, 1/ps
 */
export function slowestFrame(resonances: readonly Resonance[]): number {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const { center, quanta } of resonances) {
    low = Math.min(low, center / quanta);
    high = Math.max(high, center / quanta);
  }
  if (high - low < 1e-9) return low;
  let best = low;
  let least = fastest(resonances, low, Number.POSITIVE_INFINITY);
  for (let i = 1; i < resonances.length; i++) {
    const a = resonances[i];
    for (let k = 0; k < i; k++) {
      const b = resonances[k];
      const f = (a.weight * a.center + b.weight * b.center) / (a.weight * a.quanta + b.weight * b.quanta);
      const speed = fastest(resonances, f, least);
      if (speed < least) {
        least = speed;
        best = f;
      }
    }
  }
  return best;
}

/** The fastest oscillation in a frame, 1/ps; not looked at further once it is not below `limit`. */
function fastest(resonances: readonly Resonance[], frame: number, limit: number): number {
  let worst = 0;
  for (const { center, quanta, weight } of resonances) {
    worst = Math.max(worst, weight * Math.abs(center - quanta * frame));
    if (worst >= limit) break;
  }
  return worst;
}
