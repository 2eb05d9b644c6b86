import type { Bath } from './bath.js';
import { correlationFit } from './correlations.js';

/**
 * Transmission of the phonon sideband through a Lorentzian filter,
 * T_sb = (κ/2) Re ∫_0^∞ ⟨B⟩²(e^{φ(t)} − 1) e^{−κt/2 − iω_c t} dt.
 * ⟨B⟩²(e^φ − 1) is the sum of the two correlations of the polaron frame, so their fits give the integral term by term.
 * @param kappa FWHM of the filter, 1/ps
 * @param offset centre of the filter above the line, 1/ps
 */
export function sidebandTransmission(bath: Bath, kappa: number, offset: number): number {
  let sum = 0;
  for (const kind of ['even', 'odd'] as const) {
    for (const pole of correlationFit(bath, kind, SIDEBAND_TERMS).poles) {
      const re = pole.re + kappa / 2;
      const im = pole.im + offset;
      const [a, b] = pole.amplitude;
      sum += (a * re + b * im) / (re * re + im * im);
    }
  }
  return (kappa / 2) * sum;
}

const SIDEBAND_TERMS = 12;
