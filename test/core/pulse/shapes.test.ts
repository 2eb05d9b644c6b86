import { describe, expect, it } from 'vitest';
import { integrate } from '../../../core/numerics/index.js';
import { pulseShape, pulseShapes } from '../../../core/pulse/shapes/registry.js';

const FWHM = 3.7;

describe.each(Object.values(pulseShapes))('shape $name', (shape) => {
  const far = shape.reach(FWHM, 1e-14);
  const breaks = [0, ...shape.edges(FWHM)];
  const over = (f: (t: number) => number) => integrate(f, -far, far, { relative: 1e-12, breaks }).value;

  it('has area 1, and the energy it claims', () => {
    expect(over((t) => shape.envelope(t, FWHM))).toBeCloseTo(1, 11);
    expect(over((t) => shape.envelope(t, FWHM) ** 2) / shape.energy(FWHM)).toBeCloseTo(1, 11);
  });

  it('has its half maximum of intensity at ±fwhm/2 (definition)', () => {
    const ratio = (t: number) => (shape.envelope(t, FWHM) / shape.envelope(0, FWHM)) ** 2;
    if (shape.flat) {
      expect(ratio((FWHM / 2) * (1 - 1e-12))).toBe(1);
      expect(ratio((FWHM / 2) * (1 + 1e-12))).toBe(0);
    } else {
      expect(ratio(FWHM / 2)).toBeCloseTo(0.5, 12);
    }
  });

  it('has the spectrum ∫ env e^{iωt} dt', () => {
    for (const omega of [0, 1e-5, 0.3, 1.1, 2.9]) {
      const exact = over((t) => shape.envelope(t, FWHM) * Math.cos(omega * t));
      expect(shape.spectrum(omega, FWHM)).toBeCloseTo(exact, 11);
    }
  });

  it('has half its spectral intensity at the half of timeBandwidth/fwhm', () => {
    const omega = (Math.PI * shape.timeBandwidth) / FWHM;
    expect(shape.spectrum(omega, FWHM) ** 2).toBeCloseTo(0.5, 12);
  });

  it('keeps below eps beyond its reach, in time and in frequency', () => {
    for (const eps of [1e-2, 1e-9]) {
      const t = shape.reach(FWHM, eps) * (1 + 1e-9);
      expect(shape.envelope(t, FWHM)).toBeLessThan(eps * shape.envelope(0, FWHM));
      const omega = shape.spectralReach(FWHM, eps);
      if (Number.isFinite(omega)) expect(shape.spectrum(omega, FWHM) / eps).toBeCloseTo(1, 8);
    }
  });
});

describe('registry', () => {
  it('knows the widths of the trade: 2√ln2 σ and 2 arccosh(√2) T (textbook, Diels & Rudolph)', () => {
    expect(FWHM / pulseShape('gaussian').timeScale(FWHM)).toBeCloseTo(1.66511, 5);
    expect(FWHM / pulseShape('sech').timeScale(FWHM)).toBeCloseTo(1.76275, 5);
    expect(pulseShape('gaussian').timeBandwidth).toBeCloseTo(0.44127, 5);
    expect(pulseShape('sech').timeBandwidth).toBeCloseTo(0.31483, 5);
    expect(pulseShape('square').timeBandwidth).toBeCloseTo(0.88589, 5);
  });

  it('names the known shapes when asked for another', () => {
    expect(() => pulseShape('lorentzian')).toThrow('got lorentzian; known are gaussian, sech, square');
    expect(() => pulseShape('toString')).toThrow(/known are/);
  });
});
