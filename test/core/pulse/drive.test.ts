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
});
