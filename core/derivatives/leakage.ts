import { type PulseFilter, photonsPerEnergy } from '../collection/leakage.js';
import type { Design } from '../design.js';
import { energyDerivatives } from '../pulse/derivatives/energy.js';

/** Derivatives (pulse/derivatives/layout.ts) of the leaked photons; null where there are none: a tone with edges. */
export function leakageDerivatives(design: Design, filter: PulseFilter | null): Float64Array | null {
  const { collection, laser, pulse } = design;
  const crossed = collection.polarization === 'crossed';
  const weights = {
    axis: crossed ? ('first' as const) : null,
    parallel: laser?.rejection ?? 0,
    perpendicular: 1,
  };
  const factor = photonsPerEnergy(design);
  return energyDerivatives(pulse, filter, weights)?.map((x) => factor * x) ?? null;
}
