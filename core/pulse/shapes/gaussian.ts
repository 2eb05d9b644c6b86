import type { ClosedEnvelope, PulseShape } from './contract.js';

/** FWHM of |Ω|² over the field σ: 2√ln 2. */
const FWHM_PER_SIGMA = 2 * Math.sqrt(Math.LN2);

const sigmaOf = (fwhm: number) => fwhm / FWHM_PER_SIGMA;

/**
 * env(t) = 1/√(2π) / √(σ² − i·GDD) · exp(−t²/(2(σ² − i·GDD))).
 * Source: Diels & Rudolph, *Ultrashort Laser Pulse Phenomena*, chapter 1 (sign of GDD: positive delays high frequencies).
 */
function dispersed(fwhm: number, gdd: number): ClosedEnvelope {
  const sigma = sigmaOf(fwhm);
  const variance = sigma * sigma;
  const modulus = Math.hypot(variance, gdd);
  const stretched = modulus / sigma;
  const peak = 1 / Math.sqrt(2 * Math.PI * modulus);
  const decay = 0.5 / (stretched * stretched);
  return {
    magnitude: (t) => peak * Math.exp(-decay * t * t),
    phase: 0.5 * Math.atan2(gdd, variance),
    chirp: (-0.5 * gdd) / (modulus * modulus),
    peak,
    fwhm: FWHM_PER_SIGMA * stretched,
    absoluteArea: Math.sqrt(stretched / sigma),
    timeScale: stretched,
    reach: (eps) => stretched * Math.sqrt(-2 * Math.log(eps)),
  };
}

/** exp(−t²/2σ²)/(√(2π) σ), FWHM = 2√(ln 2) σ. */
export const gaussian: PulseShape = {
  name: 'gaussian',
  summary: 'Gaussian, time–bandwidth product 0.441',
  timeBandwidth: (2 * Math.LN2) / Math.PI,
  envelope(t, fwhm) {
    const x = t / sigmaOf(fwhm);
    return Math.exp(-0.5 * x * x) / (Math.sqrt(2 * Math.PI) * sigmaOf(fwhm));
  },
  spectrum(omega, fwhm) {
    const x = omega * sigmaOf(fwhm);
    return Math.exp(-0.5 * x * x);
  },
  timeScale: sigmaOf,
  spectralBound(omega, fwhm) {
    return this.spectrum(omega, fwhm);
  },
  reach: (fwhm, eps) => sigmaOf(fwhm) * Math.sqrt(-2 * Math.log(eps)),
  spectralReach: (fwhm, eps) => Math.sqrt(-2 * Math.log(eps)) / sigmaOf(fwhm),
  flat: false,
  edges: () => [],
  dispersed,
  energy: (fwhm) => 1 / (2 * Math.sqrt(Math.PI) * sigmaOf(fwhm)),
};
