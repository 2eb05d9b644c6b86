import type { PulseShape } from './shapes/contract.js';
import { type Dispersion, delayRange, dispersionPhase } from './spectrum.js';

/** Part of a spectrum that is kept when a dispersed pulse is sampled: all of |ν| ≤ flat, faded out towards `reach`. */
export interface Band {
  /** 1/ps. */
  readonly flat: number;
  /** 1/ps. */
  readonly reach: number;
  /** What dropping the rest costs, relative to the pulse (see `Drive.error`). */
  readonly error: number;
}

/** Share of the band of a slowly falling spectrum that is kept in full. */
const FLAT_SHARE = 0.7;
/** Spectral phase below which a fade would not be adiabatic, rad, and the one beyond which propagation gets slow. */
const PHASE_RANGE = [150, 20_000] as const;
/** Excited-state admixture that dropped wings may leave. */
const ADMIXTURE = 1e-9;

/** C∞ step from 1 at x ≤ 0 to 0 at x ≥ 1 (the Planck taper: McKechan et al., Class. Quantum Grav. 27, 084020 (2010)). */
function fade(x: number): number {
  if (x <= 0) return 1;
  if (x >= 1) return 0;
  return 1 / (1 + Math.exp(1 / (1 - x) - 1 / x));
}

/** Weight of the band at ν. */
export function bandWeight(band: Band, nu: number): number {
  return fade((Math.abs(nu) - band.flat) / (band.reach - band.flat));
}

function total(dispersion: Dispersion, nu: number): number {
  return dispersionPhase({ gdd: Math.abs(dispersion.gdd), tod: Math.abs(dispersion.tod) }, nu);
}

/** Largest ν at which a growing function stays below the limit, by bisection on a logarithmic scale. */
function crossing(f: (nu: number) => number, limit: number): number {
  let [low, high] = [-12, 12];
  for (let i = 0; i < 60; i++) {
    const middle = 0.5 * (low + high);
    if (f(10 ** middle) < limit) low = middle;
    else high = middle;
  }
  return 10 ** low;
}

/**
 * Bands for a spectrum that falls as 2/(ωT) from its edges. Dispersion spreads its far wings in time at a local
 * detuning ν, where their field A(ν) = Θ·2/(νT)/√(2π|φ''|) (stationary phase) is followed adiabatically and mixes
 * the levels by (A/2ν)². The band is wide enough to make that negligible, as far as the spectral phase allows.
 */
function slowBands(fwhm: number, dispersion: Dispersion, area: number): Band[] {
  const admixture = (nu: number) => {
    const curvature = Math.abs(dispersion.gdd) + Math.abs(dispersion.tod) * nu;
    return (Math.abs(area) / (nu * nu * fwhm)) ** 2 / (2 * Math.PI * curvature);
  };
  const wanted = crossing((nu) => -admixture(FLAT_SHARE * nu), -ADMIXTURE);
  const adiabatic = crossing((nu) => total(dispersion, nu), PHASE_RANGE[0]);
  const slow = crossing((nu) => total(dispersion, nu), PHASE_RANGE[1]);
  const best = Math.max(adiabatic, 50 / fwhm, Math.min(wanted, slow));
  const bands: Band[] = [];
  for (let reach = best; reach > 12 / fwhm; reach /= 1.25) {
    const flat = FLAT_SHARE * reach;
    bands.push({ flat, reach, error: admixture(flat) });
  }
  return bands;
}

/** Bands to try, best first. */
export function bands(shape: PulseShape, fwhm: number, dispersion: Dispersion, area: number): Band[] {
  if (!Number.isFinite(shape.spectralReach(fwhm, 0.5))) return slowBands(fwhm, dispersion, area);
  return [1e-12, 1e-11, 1e-10, 1e-9, 1e-8, 1e-7, 1e-6].map((eps) => {
    const reach = shape.spectralReach(fwhm, eps);
    return { flat: reach, reach, error: eps };
  });
}

/**
 * Times outside of which the dispersed pulse is below eps of its peak, ps: group delays of the band, the reach of the
 * undispersed pulse, and beyond a turning point of the group delay the tail of the Airy function,
 * Ai(x) ~ exp(−⅔x^{3/2}) on the scale (|TOD|/2)^{1/3} (Abramowitz & Stegun 10.4.59).
 */
export function support(
  shape: PulseShape,
  fwhm: number,
  dispersion: Dispersion,
  band: Band,
  eps: number,
): readonly [number, number] {
  const [early, late] = delayRange(dispersion, band.reach);
  const airy = Math.cbrt(Math.abs(dispersion.tod) / 2) * (-1.5 * Math.log(eps)) ** (2 / 3);
  const pad = shape.reach(fwhm, eps) + Math.min(airy, 0.5 * Math.abs(dispersion.tod) * band.reach ** 2);
  return [early - pad, late + pad];
}
