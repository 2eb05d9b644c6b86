import type { Design } from '../design.js';
import { transmittedEnergy } from '../pulse/energy.js';
import { FJ_PER_MEV, HC, RAD_PER_PS_PER_GHZ } from '../units/constants.js';

/** Filter centre and width on the pulse's own frequency axis (relative to the pulse reference), 1/ps. */
export interface PulseFilter {
  readonly kappa: number;
  readonly center: number;
}

/**
 * The filter of a design relative to the pulse reference.
 * @param line nominal centre of the collected line, relative to the mean exciton line, 1/ps
 * @param reference the pulse reference, relative to the mean exciton line, 1/ps
 */
export function pulseFilter(design: Design, line: number, reference: number): PulseFilter | null {
  const { filter } = design.collection;
  if (!filter) return null;
  return {
    kappa: filter.fwhm * RAD_PER_PS_PER_GHZ,
    center: line + filter.center * RAD_PER_PS_PER_GHZ - reference,
  };
}

/** ∫|Ω|²dt of a resonant transform-limited Gaussian π pulse of that FWHM (ps), 1/ps. */
export function piPulseEnergy(fwhm: number): number {
  const sigma = fwhm / (2 * Math.sqrt(Math.LN2));
  return Math.PI ** 2 / (2 * Math.sqrt(Math.PI) * sigma);
}

/** Photons per pulse where brightness is quoted, for every unit (1/ps) of ∫|Ω|²dt that passes filter and analyser. */
export function photonsPerEnergy({ laser, collection, emitter }: Design): number {
  if (!laser?.piPulse) return 0;
  const photons = laser.piPulse.energy / (FJ_PER_MEV * (HC / emitter.wavelength));
  return (photons / piPulseEnergy(laser.piPulse.fwhm)) * collection.efficiency;
}

/**
 * Leaked laser photons per pulse where brightness is quoted: N_in · rejection · η · F. Behind an analyser crossed to
 * the first tone, light of the other polarisation passes without rejection.
 */
export function leakedPhotons(design: Design, filter: PulseFilter | null): number {
  const { laser, collection, pulse } = design;
  if (!laser?.piPulse) return 0;
  const axis = collection.polarization === 'crossed' ? pulse.tones[0].polarization : null;
  const energy = transmittedEnergy(pulse, filter, { axis });
  return photonsPerEnergy(design) * (laser.rejection * energy.parallel + energy.perpendicular);
}
