import { describe, expect, it } from 'vitest';
import { createDrive, evaluate } from '../../core/index.js';
import { design, tone, twoLevelEmitter } from '../support.js';

const figuresOf = (changes: Parameters<typeof tone>[0]) =>
  evaluate(design(twoLevelEmitter(), [tone(changes)]), 'search').pulse;

describe('pulse', () => {
  // Diels & Rudolph, Ultrashort Laser Pulse Phenomena.
  it.each([
    ['gaussian', 0.44127],
    ['sech', 0.31483],
    ['square', 0.88589],
  ])('time–bandwidth product of a %s: %f', (shape, product) => {
    for (const fwhm of [0.7, 12]) {
      const pulse = figuresOf({ shape, fwhm });
      expect(pulse.duration_ps).toBeCloseTo(fwhm, 8);
      expect((pulse.duration_ps * pulse.bandwidth_ghz) / 1000).toBeCloseTo(product, 5);
    }
  });

  // Diels & Rudolph: Ω(t) = Θ/√(2π)/√(σ² − i·GDD)·exp(−t²/2(σ² − i·GDD)), positive GDD: red first.
  it.each([40, -7])('chirped Gaussian, GDD %f ps²: closed form', (gdd) => {
    const fwhm = 3;
    const area = 2.5;
    const variance = (fwhm / (2 * Math.sqrt(Math.LN2))) ** 2;
    const pulse = { reference: 'exciton' as const, tones: [tone({ fwhm, area, gdd })] };
    const drive = createDrive(pulse, { frame: 0, projection: 'full' });
    const out = new Float64Array(2);
    const modulus = variance ** 2 + gdd ** 2;
    for (const t of [-30, -4, -1, 0, 0.5, 3, 20]) {
      drive.sample(t, 0, out);
      // 1/(σ² − iG) = (σ² + iG)/(σ⁴ + G²)
      const field = (area / Math.sqrt(2 * Math.PI)) * modulus ** -0.25;
      const size = field * Math.exp((-t * t * variance) / (2 * modulus));
      const angle = Math.atan2(gdd, variance) / 2 - (t * t * gdd) / (2 * modulus);
      expect(out[0]).toBeCloseTo(size * Math.cos(angle), 12);
      expect(out[1]).toBeCloseTo(size * Math.sin(angle), 12);
    }
  });

  // Diels & Rudolph: τ grows by √(1 + (4 ln2 GDD/τ²)²); bandwidth and energy stay.
  it.each([2, -9, 60])('chirped Gaussian, GDD %f ps²: duration, bandwidth, energy', (gdd) => {
    const fwhm = 4;
    const plain = figuresOf({ fwhm });
    const chirped = figuresOf({ fwhm, gdd });
    const growth = Math.sqrt(1 + ((4 * Math.LN2 * gdd) / fwhm ** 2) ** 2);
    expect(chirped.duration_ps / fwhm / growth).toBeCloseTo(1, 7);
    expect(chirped.bandwidth_ghz / plain.bandwidth_ghz).toBeCloseTo(1, 7);
    expect(plain.energy_pi_units).toBeCloseTo(1, 9);
    expect(chirped.energy_pi_units).toBeCloseTo(1, 9);
  });
});
