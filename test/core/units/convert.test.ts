import { describe, expect, it } from 'vitest';
import { gigahertzOf, millielectronvoltsOf, photonEnergy, wavelengthAt } from '../../../core/index.js';

describe('energy, frequency and wavelength', () => {
  it('1 meV is 241.7989242 GHz (CODATA 2018/2022: e/h = 2.417 989 242…e14 Hz/eV)', () => {
    expect(gigahertzOf(1)).toBeCloseTo(241.7989242, 6);
    expect(millielectronvoltsOf(241.7989242)).toBeCloseTo(1, 9);
    expect(millielectronvoltsOf(gigahertzOf(-3.7))).toBeCloseTo(-3.7, 14);
  });

  it('hc is 1239.841984 eV·nm (CODATA 2018/2022), so 930 nm is 1.333163 eV', () => {
    expect(photonEnergy(1.239841984)).toBeCloseTo(1000, 9);
    expect(photonEnergy(0.93)).toBeCloseTo(1333.163424, 5);
  });

  it('light of more energy has the shorter wavelength: Δλ = −λ²/hc·ΔE to first order', () => {
    expect(wavelengthAt(0.93, 0)).toBeCloseTo(0.93, 15);
    const slope = (wavelengthAt(0.93, 1e-4) - 0.93) / 1e-4;
    expect(slope / (-(0.93 ** 2) / 1239.841984)).toBeCloseTo(1, 5);
  });
});
