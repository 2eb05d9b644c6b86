import { faddeeva } from '../../numerics/faddeeva.js';
import type { ClosedEnvelope, EnvelopeSlopes, FilteredEnergy, PulseShape } from './contract.js';

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
    fall: decay,
  };
}

/** With z = σ² − i·GDD: env'/env = −t/z, env″/env = (t²/z − 1)/z, env‴/env = −(t/z)(t²/z − 3)/z; ∂/∂σ² = ½ ∂²/∂t². */
function slopes(fwhm: number, gdd: number): EnvelopeSlopes {
  const sigma = sigmaOf(fwhm);
  const variance = sigma * sigma;
  const modulus = variance * variance + gdd * gdd;
  const ir = variance / modulus;
  const ii = gdd / modulus;
  const byWidth = variance / fwhm;
  return (t, out) => {
    const ar = -t * ir;
    const ai = -t * ii;
    const square = ar * ar - ai * ai;
    const cross = 2 * ar * ai;
    const br = square - ir;
    const bi = cross - ii;
    const cr = square - 3 * ir;
    const ci = cross - 3 * ii;
    out[0] = ar;
    out[1] = ai;
    out[2] = byWidth * br;
    out[3] = byWidth * bi;
    out[4] = 0.5 * bi;
    out[5] = -0.5 * br;
    out[6] = (ar * cr - ai * ci) / 6;
    out[7] = (ar * ci + ai * cr) / 6;
  };
}

/**
 * A Gaussian spectrum behind a Lorentzian is a Voigt profile: (κ/4) Re w(σ(c + iκ/2)) with w of numerics/faddeeva.ts and c
 * the offset (Abramowitz & Stegun 7.4.13).
 */
function filteredEnergy(fwhm: number, kappa: number, offset: number): FilteredEnergy {
  const sigma = sigmaOf(fwhm);
  const half = kappa / 2;
  const w = new Float64Array(4);
  faddeeva(sigma * offset, sigma * half, w);
  return {
    value: (half / 2) * w[0],
    byFwhm: (half / 2) * (w[2] * offset - w[3] * half) * (sigma / fwhm),
    byKappa: 0.25 * (w[0] - half * w[3] * sigma),
    byOffset: (half / 2) * w[2] * sigma,
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
  spectrumSlope(omega, fwhm) {
    const sigma = sigmaOf(fwhm);
    return -sigma * sigma * omega * this.spectrum(omega, fwhm);
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
  slopes,
  filteredEnergy,
  energy: (fwhm) => 1 / (2 * Math.sqrt(Math.PI) * sigmaOf(fwhm)),
};
