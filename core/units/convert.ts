import { GHZ_PER_MEV, HC } from './constants.js';

/** Ordinary frequency E/h of an energy: meV → GHz. */
export const gigahertzOf = (energy: number): number => energy * GHZ_PER_MEV;
/** Energy hν of an ordinary frequency: GHz → meV. */
export const millielectronvoltsOf = (frequency: number): number => frequency / GHZ_PER_MEV;
/** Photon energy hc/λ of a vacuum wavelength: µm → meV. */
export const photonEnergy = (wavelength: number): number => HC / wavelength;
/** Vacuum wavelength (µm) of light at `detuning` (meV) above the line at `wavelength` (µm). */
export const wavelengthAt = (wavelength: number, detuning: number): number =>
  HC / (HC / wavelength + detuning);
