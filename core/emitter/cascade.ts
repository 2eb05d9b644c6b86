import type { EmitterSpec } from '../design.js';
import { HBAR } from '../units/constants.js';
import type { EmitterModel, Scheme } from './contract.js';

const G = 0;
const H = 1;
const V = 2;
const B = 3;

/**
 * Biexciton cascade |g⟩, |h⟩, |v⟩, |b⟩. Energies relative to the rotating frame: −Δ ± f/2 for h and v,
 * −2Δ − E_b for b. A linear polarisation at angle α drives g–h and h–b with cos α, g–v and v–b with sin α.
 */
export const cascade: EmitterModel = {
  name: 'cascade',
  summary: 'ground state, two linearly polarised excitons and the biexciton',
  lines: ['exciton', 'biexciton'],
  polarizations: ['all', 'crossed', 'h', 'v'],
  hasBiexciton: true,
  scheme(spec: EmitterSpec): Scheme {
    if (spec.binding === null || spec.biexcitonLifetime === null) {
      throw new Error('emitter model cascade needs a binding energy and a biexciton lifetime');
    }
    const half = spec.splitting / 2 / HBAR;
    const binding = spec.binding / HBAR;
    const exciton = 1 / spec.lifetime;
    const biexciton = 1 / (2 * spec.biexcitonLifetime);
    return {
      levels: [
        { name: 'g', excitons: 0, offset: 0 },
        { name: 'h', excitons: 1, offset: half },
        { name: 'v', excitons: 1, offset: -half },
        { name: 'b', excitons: 2, offset: -binding },
      ],
      transitions: [
        { lower: G, upper: H, weightH: 1, weightV: 0 },
        { lower: H, upper: B, weightH: 1, weightV: 0 },
        { lower: G, upper: V, weightH: 0, weightV: 1 },
        { lower: V, upper: B, weightH: 0, weightV: 1 },
      ],
      decays: [
        { from: H, to: G, rate: exciton, line: 'exciton', polarization: 'h' },
        { from: V, to: G, rate: exciton, line: 'exciton', polarization: 'v' },
        { from: B, to: H, rate: biexciton, line: 'biexciton', polarization: 'h' },
        { from: B, to: V, rate: biexciton, line: 'biexciton', polarization: 'v' },
      ],
      dephasing: spec.dephasing,
      projection: 'linear',
      lines: { exciton: 0, biexciton: -binding },
      twoPhoton: -binding / 2,
    };
  },
};
