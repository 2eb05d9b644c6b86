import { describe, expect, it } from 'vitest';
import {
  createDrive,
  type Pulse,
  pulseFigures,
  pulseShape,
  stream,
  type Tone,
  transmittedEnergy,
} from '../../../core/index.js';
import { energyDerivatives } from '../../../core/pulse/derivatives/energy.js';
import { pulseFigureDerivatives } from '../../../core/pulse/derivatives/figures.js';
import { emptyDerivatives, TONE_KEYS, TONE_SLOTS } from '../../../core/pulse/derivatives/layout.js';
import { ownIntegral } from '../../../core/pulse/energy.js';
import { tone } from '../../support.js';

// Every check: against central differences of the values (common practice, no source).

const PULSES: Record<string, readonly Tone[]> = {
  gaussian: [tone({ detuning: 0.3, delay: 1.2, phase: 0.4, polarization: 0.3 })],
  'chirped gaussian': [tone({ fwhm: 2, gdd: 6, detuning: -0.4, delay: -0.7, phase: 1, polarization: 1 })],
  sech: [tone({ shape: 'sech', detuning: 0.2, delay: 0.3, phase: -0.5, polarization: 0.8 })],
  'spectral gaussian': [
    tone({ fwhm: 2, gdd: -3, tod: 8, detuning: 0.2, delay: 0.4, phase: 0.3, polarization: 0.2 }),
  ],
  'spectral sech': [
    tone({ shape: 'sech', fwhm: 2, gdd: 5, delay: 0.2, detuning: 0.1, phase: 2, polarization: -0.4 }),
  ],
  'two colours': [
    tone({ fwhm: 3, area: 8, detuning: -1.1, polarization: 0.2, phase: 0.3 }),
    tone({ fwhm: 5, area: 6, detuning: -2, delay: 1.5, gdd: 4, polarization: 0.7 }),
  ],
};

function moved(tones: readonly Tone[], k: number, slot: number, by: number): Tone[] {
  const key = TONE_KEYS[slot];
  return tones.map((t, i) => (i === k ? { ...t, [key]: t[key] + by } : t));
}

/** Central difference of fourth order. */
function difference(f: (x: number) => number, h: number): number {
  return (8 * (f(h) - f(-h)) - (f(2 * h) - f(-2 * h))) / (12 * h);
}

const pulseOf = (tones: readonly Tone[]): Pulse => ({ reference: 'exciton', tones });

describe.each(Object.entries(PULSES))('derivatives of %s', (_, tones) => {
  const random = stream(7, 1);
  const projection = 'linear' as const;
  const options = { frame: 0.9, projection };
  const drive = createDrive(pulseOf(tones), options);
  const times = Array.from({ length: 40 }, () => -9 + 18 * random.next());
  const segments = times.map((t) => {
    let s = 0;
    while (s + 2 < drive.breakpoints.length && t >= drive.breakpoints[s + 1]) s++;
    return s;
  });
  const weights = Float64Array.from({ length: 4 * times.length }, () => random.next() - 0.5);

  it('by the samples of the drive', () => {
    const out = emptyDerivatives(tones.length);
    expect(drive.differentiate({ times, segments, scalars: [weights] }, [out])).toBe(true);
    for (let k = 0; k < tones.length; k++) {
      for (let slot = 0; slot < TONE_SLOTS; slot++) {
        const scalar = (by: number) => {
          const changed = createDrive(pulseOf(moved(tones, k, slot, by)), options);
          const sample = new Float64Array(4);
          return times.reduce((sum, t, i) => {
            let s = 0;
            while (s + 2 < changed.breakpoints.length && t >= changed.breakpoints[s + 1]) s++;
            changed.sample(t, s, sample);
            return sum + sample.reduce((part, x, c) => part + x * weights[4 * i + c], 0);
          }, 0);
        };
        expect(out[TONE_SLOTS * k + slot], TONE_KEYS[slot]).toBeCloseTo(difference(scalar, 1e-3), 7);
      }
    }
  });

  it.each([
    { filter: null, axis: null },
    { filter: { kappa: 0.7, center: 0.5 }, axis: null },
    { filter: { kappa: 0.2, center: -1 }, axis: 'first' as const },
  ])('of its energy behind $filter and an analyser at $axis', ({ filter, axis }) => {
    const weights = { axis, parallel: 0.3, perpendicular: 1 };
    const out = energyDerivatives(pulseOf(tones), filter, weights)!;
    const energy = (changed: readonly Tone[], f: typeof filter) => {
      const at = axis === 'first' ? changed[0].polarization : axis;
      const { parallel, perpendicular } = transmittedEnergy(pulseOf(changed), f, { axis: at });
      return 0.3 * parallel + perpendicular;
    };
    for (let k = 0; k < tones.length; k++) {
      for (let slot = 0; slot < TONE_SLOTS; slot++) {
        const slope = difference((by) => energy(moved(tones, k, slot, by), filter), 1e-3);
        expect(out[TONE_SLOTS * k + slot], TONE_KEYS[slot]).toBeCloseTo(slope, 7);
      }
    }
    if (filter === null) return;
    const { kappa, center } = filter;
    const byKappa = difference((by) => energy(tones, { kappa: kappa + by, center }), 1e-4);
    expect(out[TONE_SLOTS * tones.length]).toBeCloseTo(byKappa, 7);
    const byCenter = difference((by) => energy(tones, { kappa, center: center + by }), 1e-4);
    expect(out[TONE_SLOTS * tones.length + 1]).toBeCloseTo(byCenter, 7);
  });

  it.each(['energy_pi_units', 'energy_fj', 'duration_ps', 'bandwidth_ghz', 'peak_rabi_per_ps'] as const)(
    'of %s',
    (figure) => {
      const piPulse = { energy: 12, fwhm: 5 };
      const out = pulseFigureDerivatives(figure, { pulse: pulseOf(tones), drive, piPulse })!;
      const value = (changed: readonly Tone[]) => pulseFigures(pulseOf(changed), null, piPulse)[figure]!;
      const size = Math.abs(value(tones));
      for (let k = 0; k < tones.length; k++) {
        for (let slot = 0; slot < TONE_SLOTS; slot++) {
          const slope = difference((by) => value(moved(tones, k, slot, by)), 1e-2);
          expect(Math.abs(out[TONE_SLOTS * k + slot] - slope) / size, TONE_KEYS[slot]).toBeLessThan(1e-6);
        }
      }
    },
  );
});

it('has none for a tone with edges', () => {
  const tones = [tone({ shape: 'square' })];
  const drive = createDrive(pulseOf(tones), { frame: 0, projection: 'full' });
  const out = emptyDerivatives(1);
  expect(drive.differentiate({ times: [0], segments: [0], scalars: [[1, 0]] }, [out])).toBe(false);
  expect(out.every((x) => x === 0)).toBe(true);
});

// The Voigt profile against quadrature of the same integral.
it.each([
  [5, 0.02, 0],
  [5, 0.13, 0.7],
  [1, 0.006, 38],
  [0.5, 3, -4],
  [150, 0.13, 0.05],
  [150, 0.03, -20],
])('energy of a %s ps Gaussian behind a filter of %s 1/ps, %s 1/ps off', (fwhm, kappa, center) => {
  const one = tone({ fwhm, area: 1 });
  const { value } = pulseShape('gaussian').filteredEnergy!(fwhm, kappa, center);
  expect(Math.abs(value / ownIntegral(one, { kappa, center }).value - 1)).toBeLessThan(1e-9);
});
