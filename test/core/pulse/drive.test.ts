import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { createDrive } from '../../../core/pulse/drive.js';
import { HBAR } from '../../../core/units/constants.js';
import { pulse } from './tone.js';

describe('drive', () => {
  it.each(['gaussian', 'sech', 'square'])('%s integrates to its area', (shape) => {
    const drive = createDrive(pulse({ shape, area: 3, phase: 0.4, delay: 20 }), {
      frame: 0,
      projection: 'full',
    });
    const out = new Float64Array(2);
    const [start, end] = drive.breakpoints;
    const n = 4000;
    let re = 0;
    let im = 0;
    for (let i = 0; i <= n; i++) {
      drive.sample(start + ((end - start) * i) / n, 0, out);
      const w = ((i === 0 || i === n ? 0.5 : 1) * (end - start)) / n;
      re += w * out[0];
      im += w * out[1];
    }
    expect(re).toBeCloseTo(3 * Math.cos(0.4), 10);
    expect(im).toBeCloseTo(3 * Math.sin(0.4), 10);
  });

  it('turns with the laser minus the frame', () => {
    const detuning = 2;
    const drive = createDrive(pulse({ detuning, delay: 1 }), { frame: 0.7, projection: 'linear' });
    const out = new Float64Array(4);
    drive.sample(2.5, 0, out);
    const angle = -(detuning / HBAR - 0.7) * 2.5;
    expect(Math.atan2(out[1], out[0])).toBeCloseTo(Math.atan2(Math.sin(angle), Math.cos(angle)), 12);
    expect(out[2]).toBeCloseTo(0, 15);
  });

  it('has one-sided values at the edges of a square, also where rounding moves them', () => {
    const drive = createDrive(
      pulse({ shape: 'square', fwhm: 17.442947722083677, delay: 7.086046603978834 }, {}),
      {
        frame: 0,
        projection: 'full',
      },
    );
    const out = new Float64Array(2);
    const level = Math.PI / 17.442947722083677;
    const edges = [7.086046603978834 - 17.442947722083677 / 2, 7.086046603978834 + 17.442947722083677 / 2];
    for (const [edge, jump] of [
      [edges[0], level],
      [edges[1], -level],
    ]) {
      const segment = drive.breakpoints.indexOf(edge);
      drive.sample(edge, segment - 1, out);
      const before = out[0];
      drive.sample(edge, segment, out);
      expect(out[0] - before).toBeCloseTo(jump, 12);
    }
  });

  it('far apart tones leave a gap without any drive', () => {
    const { breakpoints, sample, cells } = createDrive(pulse({ delay: -1000 }, { delay: 1000, fwhm: 1 }), {
      frame: 0,
      projection: 'full',
    });
    expect(breakpoints.length).toBe(4);
    const out = new Float64Array(2);
    sample(0, 1, out);
    expect([...out]).toEqual([0, 0]);
    expect(cells.filter((cell) => cell.segment === 1).map((cell) => cell.bound)).toEqual([0]);
  });

  it('cuts its window where the rest turns the emitter by less than 1e-11 (Gaussian: Abramowitz & Stegun 7.1.13)', () => {
    for (const [area, gdd] of [
      [Math.PI, 0],
      [40 * Math.PI, 0],
      [40 * Math.PI, 500],
    ]) {
      const drive = createDrive(pulse({ fwhm: 2, area, gdd }), { frame: 0, projection: 'full' });
      const sigma = drive.scales.time;
      const n = drive.breakpoints[1] / sigma;
      const tail = (drive.scales.peakRabi * sigma * Math.exp((-n * n) / 2)) / n;
      expect(tail).toBeLessThan(1e-11);
      expect(n).toBeLessThan(8.6);
    }
  });

  const tones = fc.record({
    shape: fc.constantFrom('gaussian', 'sech', 'square'),
    fwhm: fc.double({ min: 0.5, max: 200, noNaN: true }),
    area: fc.double({ min: 1e-6, max: 40 * Math.PI, noNaN: true }),
    detuning: fc.double({ min: -25, max: 25, noNaN: true }),
    delay: fc.double({ min: -1000, max: 1000, noNaN: true }),
    polarization: fc.double({ min: 0, max: 3, noNaN: true }),
  });

  it('never exceeds its bounds, and its size does not depend on the frame', () => {
    fc.assert(
      fc.property(tones, tones, fc.double({ min: -40, max: 40, noNaN: true }), (a, b, frame) => {
        const p = pulse(a, { ...b, gdd: b.shape === 'gaussian' ? 7 : 0 });
        const [still, turning] = [0, frame].map((f) => createDrive(p, { frame: f, projection: 'linear' }));
        const [one, two] = [new Float64Array(4), new Float64Array(4)];
        for (const { from, to, segment, bound } of still.cells) {
          const t = 0.3 * from + 0.7 * to;
          still.sample(t, segment, one);
          turning.sample(t, segment, two);
          const magnitude = Math.hypot(...one);
          if (magnitude > bound * (1 + 1e-12)) expect.fail(`|Ω| = ${magnitude} above ${bound} at ${t}`);
          if (bound > still.scales.peakRabi) expect.fail(`${bound} above ${still.scales.peakRabi}`);
          const [c, s] = [Math.cos(frame * t), Math.sin(frame * t)];
          const turned = [one[0] * c - one[1] * s, one[0] * s + one[1] * c];
          if (Math.hypot(two[0] - turned[0], two[1] - turned[1]) > 1e-10 * still.scales.peakRabi) {
            expect.fail(`frame ${frame} at ${t}: ${two} instead of ${turned}`);
          }
        }
      }),
      { seed: 9, numRuns: 60 },
    );
  });

  it('keeps the bounds of a dispersed tone too', () => {
    for (const part of [
      { tod: 300, gdd: -20 },
      { shape: 'square', gdd: 3 },
    ]) {
      const drive = createDrive(pulse({ fwhm: 4, ...part }), { frame: 0, projection: 'full' });
      const out = new Float64Array(2);
      let largest = 0;
      for (const { from, to, segment, bound } of drive.cells) {
        for (let i = 0; i <= 40; i++) {
          drive.sample(from + ((to - from) * i) / 40, segment, out);
          const magnitude = Math.hypot(out[0], out[1]);
          largest = Math.max(largest, magnitude);
          if (magnitude > bound) expect.fail(`${magnitude} above ${bound}`);
        }
      }
      expect(drive.scales.peakRabi / largest).toBeLessThan(1.02);
    }
  });

  it('works without any area, and refuses a pulse without tones', () => {
    const drive = createDrive(pulse({ area: 0 }, { area: 0, tod: 5 }), { frame: 1, projection: 'linear' });
    const out = new Float64Array(4).fill(1);
    drive.sample(0.5, 0, out);
    for (const x of out) expect(Math.abs(x)).toBe(0);
    expect(drive.scales.peakRabi).toBe(0);
    expect(() => createDrive(pulse(), { frame: 0, projection: 'full' })).toThrow(/at least one tone/);
  });
});
