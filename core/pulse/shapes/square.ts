import type { PulseShape } from './contract.js';

/** Root of sinc²(x) = ½ (from memory; the test recomputes it). */
const HALF_POWER = 1.3915573782515103;

/** 1/T on |t| ≤ T/2; spectrum sin(ωT/2)/(ωT/2). */
export const square: PulseShape = {
  name: 'square',
  summary: 'rectangular with sharp edges, time–bandwidth product 0.886',
  timeBandwidth: (2 * HALF_POWER) / Math.PI,
  envelope: (t, fwhm) => (Math.abs(t) <= 0.5 * fwhm ? 1 / fwhm : 0),
  spectrum(omega, fwhm) {
    const x = 0.5 * omega * fwhm;
    return Math.abs(x) < 1e-4 ? 1 - (x * x) / 6 : Math.sin(x) / x;
  },
  spectrumSlope(omega, fwhm) {
    const x = 0.5 * omega * fwhm;
    const slope =
      Math.abs(x) < 1e-2 ? -x / 3 + x ** 3 / 30 - x ** 5 / 840 : (Math.cos(x) - Math.sin(x) / x) / x;
    return 0.5 * fwhm * slope;
  },
  timeScale: (fwhm) => fwhm,
  spectralBound: (omega, fwhm) => Math.min(1, 2 / (omega * fwhm)),
  reach: (fwhm) => 0.5 * fwhm,
  spectralReach: () => Number.POSITIVE_INFINITY,
  flat: true,
  edges: (fwhm) => [-0.5 * fwhm, 0.5 * fwhm],
  slopes: () => null,
  energy: (fwhm) => 1 / fwhm,
};
