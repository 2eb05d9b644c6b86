import { describe, expect, it } from 'vitest';
import { createDrive } from '../../../core/pulse/drive.js';
import { pulseFigures } from '../../../core/pulse/figures.js';
import { GHZ_PER_MEV } from '../../../core/units/constants.js';
import { pulse } from './tone.js';

describe('figures of a pulse', () => {
  it.each([
    ['gaussian', 0.44127],
    ['sech', 0.31483],
    ['square', 0.88589],
  ])('%s: duration times bandwidth is %f (textbook, Diels & Rudolph)', (shape, product) => {
    const single = pulseFigures(pulse({ shape, fwhm: 7, detuning: 1, delay: 30 }));
    expect(single.duration_ps).toBe(7);
    expect((single.duration_ps * single.bandwidth_ghz) / 1000).toBeCloseTo(product, 5);
  });

  it.each(['gaussian', 'sech', 'square'])(
    '%s: the scan finds what the single tone is known to have',
    (shape) => {
      // Two equal tones on top of each other are one tone of twice the area, but take the general path.
      const tone = { shape, fwhm: 4, detuning: -0.8, delay: 11 };
      const single = pulseFigures(pulse(tone));
      const scanned = pulseFigures(pulse(tone, tone));
      expect(scanned.duration_ps / single.duration_ps).toBeCloseTo(1, 9);
      expect(scanned.bandwidth_ghz / single.bandwidth_ghz).toBeCloseTo(1, 9);
      expect(scanned.energy_pi_units / single.energy_pi_units).toBeCloseTo(4, 10);
    },
  );

  it('a resonant Gaussian π pulse is the unit of energy; 2π of half the width takes 8', () => {
    expect(pulseFigures(pulse({ fwhm: 9 })).energy_pi_units).toBeCloseTo(1, 13);
    const two = pulse({ fwhm: 9, area: 0 }, { fwhm: 4.5, area: 2 * Math.PI });
    expect(pulseFigures(two).energy_pi_units).toBeCloseTo(8, 12);
  });

  it('chirp stretches the duration by √(1 + (4 ln2 GDD/τ²)²) and leaves the rest (Diels & Rudolph)', () => {
    const plain = pulseFigures(pulse({ fwhm: 3 }));
    const chirped = pulseFigures(pulse({ fwhm: 3, gdd: -25 }));
    const stretch = Math.hypot(1, (4 * Math.LN2 * 25) / 9);
    expect(chirped.duration_ps / plain.duration_ps).toBeCloseTo(stretch, 12);
    expect(chirped.bandwidth_ghz).toBe(plain.bandwidth_ghz);
    expect(chirped.energy_pi_units).toBe(plain.energy_pi_units);
  });

  it('TOD → 0 leaves the duration, strong TOD rings it out', () => {
    expect(pulseFigures(pulse({ fwhm: 3, tod: 1e-7 })).duration_ps).toBeCloseTo(3, 7);
    expect(pulseFigures(pulse({ fwhm: 3, tod: 300 })).duration_ps).toBeGreaterThan(6);
  });

  it('two separate pulses: from the first rise to the last fall', () => {
    const apart = pulseFigures(pulse({ delay: -500 }, { delay: 500, fwhm: 5 }));
    expect(apart.duration_ps).toBeCloseTo(1005, 8);
    // Equal spectra with fringes of 1 GHz: the outermost fringe above half the maximum.
    expect(apart.bandwidth_ghz).toBeGreaterThan(441.27 / 5 - 2.1);
    expect(apart.bandwidth_ghz).toBeLessThan(441.27 / 5);
  });

  it('two colours: the distance of the lines plus half of each width; beating inside', () => {
    const two = pulseFigures(pulse({ fwhm: 10, detuning: -8 }, { fwhm: 10, detuning: 8 }));
    expect(two.bandwidth_ghz).toBeCloseTo(16 * GHZ_PER_MEV + 44.127, 1);
    // Crests of cos²(8 meV t/ħ) under the Gaussian: the last one above half the maximum.
    expect(two.duration_ps).toBeGreaterThan(9.7);
    expect(two.duration_ps).toBeLessThan(10);
  });

  it('crossed polarisations do not beat', () => {
    const crossed = pulse({ fwhm: 10, detuning: -8 }, { fwhm: 10, detuning: 8, polarization: Math.PI / 2 });
    expect(pulseFigures(crossed).duration_ps).toBeCloseTo(10, 8);
  });

  it('takes a drive that is there already, and only where it shows the polarisations', () => {
    const chirped = pulse({ tod: 40 });
    const drive = createDrive(chirped, { frame: 0.3, projection: 'full' });
    expect(pulseFigures(chirped, drive).duration_ps / pulseFigures(chirped).duration_ps).toBeCloseTo(1, 9);
    const crossed = pulse({ fwhm: 10, detuning: -2 }, { fwhm: 10, detuning: 2, polarization: Math.PI / 2 });
    const full = createDrive(crossed, { frame: 0, projection: 'full' });
    expect(pulseFigures(crossed, full).duration_ps).toBeCloseTo(10, 8);
  });

  it('no area at all', () => {
    const none = pulseFigures(pulse({ area: 0 }, { area: 0 }));
    expect(none).toEqual({
      energy_pi_units: 0,
      duration_ps: 0,
      bandwidth_ghz: 0,
      energy_fj: null,
      peak_rabi_per_ps: 0,
    });
    expect(pulseFigures(pulse({ area: 0 })).duration_ps).toBe(5);
  });

  // Ω₀ = A/(√(2π)σ) with FWHM = 2√(ln 2)σ, A/(πT) with FWHM = 2 arccosh(√2)T, A/T: the definitions of the shapes.
  it.each([
    ['gaussian', (2 * Math.sqrt(Math.LN2)) / Math.sqrt(2 * Math.PI)],
    ['sech', (2 * Math.acosh(Math.SQRT2)) / Math.PI],
    ['square', 1],
  ])(
    '%s: the largest Rabi frequency is the area times %f over the width, also where it is scanned',
    (shape, k) => {
      const tone = { shape, fwhm: 4, area: 3, detuning: -0.8, delay: 11 };
      expect(pulseFigures(pulse(tone)).peak_rabi_per_ps).toBeCloseTo((3 * k) / 4, 12);
      const half = { ...tone, area: 1.5 };
      expect(pulseFigures(pulse(half, half)).peak_rabi_per_ps).toBeCloseTo((3 * k) / 4, 8);
    },
  );

  it('dispersion lowers the largest Rabi frequency by the root of the stretch (Diels & Rudolph)', () => {
    const stretch = Math.hypot(1, (4 * Math.LN2 * 25) / 9);
    const [plain, chirped] = [0, 25].map((gdd) => pulseFigures(pulse({ fwhm: 3, gdd })).peak_rabi_per_ps);
    expect(plain / chirped).toBeCloseTo(Math.sqrt(stretch), 12);
    const table = pulseFigures(pulse({ fwhm: 3, gdd: 25, tod: 1e-7 })).peak_rabi_per_ps;
    expect(table / chirped).toBeCloseTo(1, 6);
  });

  it('gives the energy in fJ by the measured π pulse: half the width takes twice the energy', () => {
    const measured = { energy: 12, fwhm: 5 };
    const energy = (tone: Parameters<typeof pulse>[0]) => pulseFigures(pulse(tone), null, measured).energy_fj;
    expect(energy({ fwhm: 5 })).toBeCloseTo(12, 12);
    expect(energy({ fwhm: 2.5 })).toBeCloseTo(24, 12);
    expect(energy({ fwhm: 5, area: 2 * Math.PI })).toBeCloseTo(48, 12);
    expect(pulseFigures(pulse({ fwhm: 5 })).energy_fj).toBeNull();
  });
});
