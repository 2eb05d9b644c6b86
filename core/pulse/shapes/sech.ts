import type { PulseShape } from './contract.js';

/** FWHM of sech²(t/T) over T: 2 arccosh √2 = 2 ln(1 + √2). */
const FWHM_PER_T = 2 * Math.acosh(Math.SQRT2);

const timeOf = (fwhm: number) => fwhm / FWHM_PER_T;

/** sech(t/T)/(πT), FWHM = 2 arccosh(√2) T; spectrum sech(πTω/2). */
export const sech: PulseShape = {
  name: 'sech',
  summary: 'hyperbolic secant, time–bandwidth product 0.315',
  timeBandwidth: (FWHM_PER_T * FWHM_PER_T) / (Math.PI * Math.PI),
  envelope: (t, fwhm) => 1 / (Math.PI * timeOf(fwhm) * Math.cosh(t / timeOf(fwhm))),
  spectrum: (omega, fwhm) => 1 / Math.cosh(0.5 * Math.PI * timeOf(fwhm) * omega),
  timeScale: timeOf,
  spectralBound(omega, fwhm) {
    return this.spectrum(omega, fwhm);
  },
  reach: (fwhm, eps) => timeOf(fwhm) * Math.acosh(1 / eps),
  spectralReach: (fwhm, eps) => Math.acosh(1 / eps) / (0.5 * Math.PI * timeOf(fwhm)),
  flat: false,
  edges: () => [],
  energy: (fwhm) => 2 / (Math.PI * Math.PI * timeOf(fwhm)),
};
