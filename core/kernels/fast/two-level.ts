import type { CountRequest } from '../count.js';

/** The numbers of a request on two levels, one decay and one drive component. Rates and energies in 1/ps. */
export interface TwoLevel {
  /** Factor of Ω in the coupling. */
  readonly weight: number;
  /** Energy of the upper level in the drive's frame. */
  readonly energy: number;
  readonly decay: number;
  /** Rate at which the coherence decays. */
  readonly coherence: number;
  readonly dephasing: number;
  /** Share of the decays that is collected. */
  readonly collected: number;
}

/** The request as a two-level problem, or null when it has other traits. */
export function asTwoLevel(request: CountRequest): TwoLevel | null {
  const { scheme, dipoles, drive, frame, shift } = request;
  const { levels, transitions, decays } = scheme;
  if (levels.length !== 2 || transitions.length !== 1 || decays.length !== 1) return null;
  if (drive.components !== 1 || scheme.projection !== 'full') return null;
  if (transitions[0].lower !== 0 || transitions[0].upper !== 1) return null;
  if (decays[0].from !== 1 || decays[0].to !== 0 || !(decays[0].rate > 0)) return null;
  if (levels[0].excitons !== 0 || levels[0].offset !== 0 || levels[1].excitons !== 1) return null;
  let collected = 0;
  for (const { re, im } of dipoles) {
    if (re[0] !== 0 || re[2] !== 0 || re[3] !== 0 || im.some((v) => v !== 0)) return null;
    collected += re[1] * re[1];
  }
  const decay = decays[0].rate;
  return {
    weight: transitions[0].weightH,
    energy: levels[1].offset - (frame - shift),
    decay,
    dephasing: scheme.dephasing,
    coherence: 0.5 * (decay + scheme.dephasing),
    collected: Math.min(1, collected / decay),
  };
}
