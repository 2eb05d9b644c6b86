import { describe, expect, it } from 'vitest';
import { evaluate, HBAR, type Tone } from '../../core/index.js';
import { design, tone, twoLevelEmitter } from '../support.js';
import { countTwoLevel, FOREVER, sweptDrive } from './drives.js';

const SHAPES = ['gaussian', 'sech', 'square'];

/** T of sech(t/T) for an intensity FWHM of 1: 1/(2 arccosh √2). */
const SECH = 1 / (2 * Math.acosh(Math.SQRT2));

function excited(...tones: Tone[]): number {
  const figures = evaluate(design(twoLevelEmitter({ lifetime: FOREVER }), tones), 'quoted');
  return figures.populations['x'];
}

describe('preparation without decay', () => {
  // Allen & Eberly, Optical Resonance and Two-Level Atoms.
  it.each(SHAPES)('resonant %s pulse: P_x = sin²(Θ/2)', (shape) => {
    for (const turns of [0.25, 0.5, 1, 1.7, 2, 3.5, 6, 12]) {
      const area = turns * Math.PI;
      expect(excited(tone({ shape, area }))).toBeCloseTo(Math.sin(area / 2) ** 2, 9);
    }
  });

  // Rosen & Zener, Phys. Rev. 40, 502 (1932).
  it('detuned sech pulse: P_x = sin²(Θ/2) sech²(πΔT/2ħ)', () => {
    const fwhm = 3;
    const width = SECH * fwhm;
    for (const area of [0.5 * Math.PI, Math.PI, 2.6 * Math.PI]) {
      for (const detuning of [-0.5, 0.05, 0.2, 0.8]) {
        const law = (Math.sin(area / 2) / Math.cosh((Math.PI * detuning * width) / (2 * HBAR))) ** 2;
        expect(excited(tone({ shape: 'sech', fwhm, area, detuning }))).toBeCloseTo(law, 9);
      }
    }
  });

  // Hioe, Phys. Rev. A 30, 2100 (1984); sin² of an imaginary argument is −sinh².
  it('sech pulse with a tanh sweep', () => {
    const width = 2;
    for (const [peak, sweep] of [
      [1.2, 0.3],
      [2.5, 1],
      [0.4, 0.9],
      [1, 1.7],
    ]) {
      const drive = sweptDrive({
        start: -36 * width,
        end: 36 * width,
        rabi: (t) => peak / Math.cosh(t / width),
        phase: (t) => sweep * width * Math.log(Math.cosh(t / width)),
        scales: { peakRabi: peak, frequency: sweep, time: width },
      });
      const half = (Math.PI * width) / 2;
      const root = peak ** 2 - sweep ** 2;
      const oscillation =
        root >= 0 ? Math.sin(half * Math.sqrt(root)) ** 2 : -(Math.sinh(half * Math.sqrt(-root)) ** 2);
      const law = Math.tanh(half * sweep) ** 2 + oscillation / Math.cosh(half * sweep) ** 2;
      expect(countTwoLevel(drive, FOREVER).populations[1]).toBeCloseTo(law, 9);
    }
  });

  // Landau; Zener (1932). The drive is switched far from resonance, flat where the line is crossed.
  it('linear sweep through resonance: 1 − exp(−πΩ²/2|dδ/dt|)', () => {
    const rate = 1;
    const width = 30;
    for (const rabi of [0.2, 0.5, 0.9, 1.5]) {
      const drive = sweptDrive({
        start: -1.6 * width,
        end: 1.6 * width,
        rabi: (t) => rabi * Math.exp(-((t / width) ** 8)),
        phase: (t) => (rate * t * t) / 2,
        scales: { peakRabi: rabi, frequency: 1.6 * width * rate, time: width / 8 },
      });
      const law = 1 - Math.exp((-Math.PI * rabi ** 2) / (2 * rate));
      expect(countTwoLevel(drive, FOREVER).populations[1]).toBeCloseTo(law, 5);
    }
  });

  // Bracht et al., PRX Quantum 2, 040354 (2021), parameters from memory; 0.99812 recomputed with an independent ODE code.
  it('two colours below the line swing the emitter up: P_x = 0.99812', () => {
    const sigma = 2 * Math.sqrt(Math.LN2);
    const x = excited(
      tone({ fwhm: 2.4 * sigma, area: 22.65 * Math.PI, detuning: -8 }),
      tone({ fwhm: 3.04 * sigma, area: 19.29 * Math.PI, detuning: -19.163 }),
    );
    expect(Math.abs(x - 0.99812)).toBeLessThan(1e-5);
  });

  // The swing-up needs both colours: either alone leaves the emitter in its ground state (same source).
  it('either colour alone does nothing', () => {
    const sigma = 2 * Math.sqrt(Math.LN2);
    expect(excited(tone({ fwhm: 2.4 * sigma, area: 22.65 * Math.PI, detuning: -8 }))).toBeLessThan(1e-3);
    expect(excited(tone({ fwhm: 3.04 * sigma, area: 19.29 * Math.PI, detuning: -19.163 }))).toBeLessThan(
      1e-3,
    );
  });
});
