import { describe, expect, it } from 'vitest';
import { starters } from '../../../cli/commands/starters.js';
import { readStudy } from '../../../cli/study/index.js';
import { evaluate } from '../../../core/index.js';
import { applyParameters } from '../../../optimizers/index.js';

describe('starter study phonons', () => {
  it('ranks resonant and falling-frequency pulses the other way round than without phonons', async () => {
    const starter = (await starters()).find(({ name }) => name === 'phonons');
    const brightness = (gdd: number, area: number, coupling: string): number => {
      const bytes = new TextEncoder().encode(starter?.text);
      const result = readStudy(bytes, 'phonons.yaml', [
        { path: 'pulse.tones.0.gdd', value: `${gdd} ps^2` },
        { path: 'pulse.tones.0.area', value: `${area} pi` },
        { path: 'emitter.phonons.coupling', value: coupling },
      ]);
      if (result.kind !== 'study') throw new Error(JSON.stringify(result.faults));
      return evaluate(applyParameters(result.study, []), 'search').signal.single as number;
    };
    const [resonant, rising, falling] = [
      [0, 1],
      [8, 1.4],
      [-8, 1.4],
    ].map(([gdd, area]) => ({
      without: brightness(gdd, area, '0 ps^2'),
      with: brightness(gdd, area, '0.03 ps^2'),
    }));
    // Without phonons the sign of the chirp cannot matter: the two Hamiltonians are mirror images.
    expect(rising.without).toBeCloseTo(falling.without, 8);
    expect(falling.without).toBeGreaterThan(resonant.without + 0.02);
    expect(falling.with).toBeLessThan(resonant.with - 0.02);
    expect(rising.with).toBeGreaterThan(resonant.with + 0.01);
  });
});
