import { describe, expect, it } from 'vitest';
import type { Scheme } from '../../../core/emitter/contract.js';
import { collectedDipoles } from '../../../core/emitter/generator.js';
import { countPhotons } from '../../../core/kernels/count.js';
import { createDrive } from '../../../core/pulse/drive.js';
import { tone } from '../../support.js';

const GAMMA = 1 / 200;

/**
 * A further emitter is one scheme: a driven, damped three-level ladder with the matrix elements 1 and √2 of a harmonic
 * oscillator. A linearly driven oscillator is in a coherent state (Glauber, Phys. Rev. 131, 2766 (1963)), so its
 * light is Poissonian, g⁽²⁾ = 1, also behind any linear filter; three levels truncate that at relative order ⟨n⟩.
 */
const ladder: Scheme = {
  levels: [
    { name: '0', excitons: 0, offset: 0 },
    { name: '1', excitons: 1, offset: 0 },
    { name: '2', excitons: 2, offset: 0 },
  ],
  transitions: [
    { lower: 0, upper: 1, weightH: 1, weightV: 0 },
    { lower: 1, upper: 2, weightH: Math.SQRT2, weightV: 0 },
  ],
  decays: [
    { from: 1, to: 0, rate: GAMMA, line: 'mode', polarization: 'any' },
    { from: 2, to: 1, rate: 2 * GAMMA, line: 'mode', polarization: 'any' },
  ],
  dephasing: 0,
  projection: 'full',
  lines: { mode: 0 },
  twoPhoton: null,
};

/** The ladder's decays lie on one line, so both fall coherently into one mode: the amplitude damps at γ/2. */
function count(area: number, detuning: number) {
  const drive = createDrive(
    { reference: 'exciton', tones: [tone({ area, fwhm: 4, detuning })] },
    {
      frame: 0,
      projection: 'full',
    },
  );
  return countPhotons({
    scheme: ladder,
    dipoles: collectedDipoles(ladder, 'mode', 'all'),
    drive,
    frame: 0,
    shift: 0,
    thinning: 0.3,
    filter: { kappa: 0.1, center: 0.02, order: 3 },
    effort: { tolerance: 1e-12, parts: 1, nodes: 1, series: 'bound' },
  });
}

describe('a driven three-level ladder as an emitter of its own', () => {
  it('emits the Poissonian light of a weakly driven oscillator', () => {
    const { values } = count(0.02, 0);
    // ⟨n⟩ = γ∫|α|²dt = ¼∬ΩΩ' e^{−γ|t−t'|/2} = (Θ/2)²(1 − γσ/√π + γ²σ²/4 − …) for a Gaussian pulse.
    const x = (GAMMA * 4) / (2 * Math.sqrt(Math.LN2));
    const law = (0.02 / 2) ** 2 * (1 - x / Math.sqrt(Math.PI) + (x * x) / 4);
    expect(values['mean'] / law).toBeCloseTo(1, 4);
    expect(values['factorial2'] / values['mean'] ** 2).toBeCloseTo(1, 3);
    expect(values['multiphoton'] / (values['mean'] ** 2 / 2)).toBeCloseTo(1, 3);
    expect(values['thinnedMultiphoton'] / ((0.3 * values['mean']) ** 2 / 2)).toBeCloseTo(1, 3);
  });

  it('stays Poissonian behind a filter, and off resonance', () => {
    for (const detuning of [0, 0.3]) {
      const { values } = count(0.02, detuning);
      expect(values['m2'] / values['m1'] ** 2).toBeCloseTo(1, 3);
      expect(values['m1']).toBeLessThan(values['mean']);
    }
  });

  it('conserves probability', () => {
    const { values } = count(3, 0.1);
    expect(values['p0'] + values['p1'] + values['multiphoton']).toBeCloseTo(1, 10);
    expect(values['thinned0'] + values['thinned1'] + values['thinnedMultiphoton']).toBeCloseTo(1, 10);
  });
});
