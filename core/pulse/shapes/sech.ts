import type { EnvelopeSlopes, PulseShape } from './contract.js';

/** FWHM of sech²(t/T) over T: 2 arccosh √2 = 2 ln(1 + √2). */
const FWHM_PER_T = 2 * Math.acosh(Math.SQRT2);

const timeOf = (fwhm: number) => fwhm / FWHM_PER_T;

/** With x = t/T and u = tanh x: sech'/sech = −u, sech″/sech = 2u² − 1, sech‴/sech = u(5 − 6u²). */
function slopes(fwhm: number, gdd: number): EnvelopeSlopes | null {
  if (gdd !== 0) return null;
  const rate = 1 / timeOf(fwhm);
  return (t, out) => {
    const u = Math.tanh(rate * t);
    out.fill(0);
    out[0] = -rate * u;
    out[2] = (rate * t * u - 1) / fwhm;
    out[5] = -0.5 * rate * rate * (2 * u * u - 1);
    out[6] = (rate * rate * rate * u * (5 - 6 * u * u)) / 6;
  };
}

/** sech(t/T)/(πT), FWHM = 2 arccosh(√2) T; spectrum sech(πTω/2). */
export const sech: PulseShape = {
  name: 'sech',
  summary: 'hyperbolic secant, time–bandwidth product 0.315',
  timeBandwidth: (FWHM_PER_T * FWHM_PER_T) / (Math.PI * Math.PI),
  envelope: (t, fwhm) => 1 / (Math.PI * timeOf(fwhm) * Math.cosh(t / timeOf(fwhm))),
  spectrum: (omega, fwhm) => 1 / Math.cosh(0.5 * Math.PI * timeOf(fwhm) * omega),
  spectrumSlope(omega, fwhm) {
    const rate = 0.5 * Math.PI * timeOf(fwhm);
    return -rate * Math.tanh(rate * omega) * this.spectrum(omega, fwhm);
  },
  timeScale: timeOf,
  spectralBound(omega, fwhm) {
    return this.spectrum(omega, fwhm);
  },
  reach: (fwhm, eps) => timeOf(fwhm) * Math.acosh(1 / eps),
  spectralReach: (fwhm, eps) => Math.acosh(1 / eps) / (0.5 * Math.PI * timeOf(fwhm)),
  flat: false,
  edges: () => [],
  slopes,
  energy: (fwhm) => 2 / (Math.PI * Math.PI * timeOf(fwhm)),
};
