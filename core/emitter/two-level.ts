import type { EmitterSpec } from '../design.js';
import type { EmitterModel, Scheme } from './contract.js';

/** Ground state and exciton, H/ħ = −Δ|x⟩⟨x| + ½(Ω|x⟩⟨g| + h.c.), decay |g⟩⟨x| at 1/lifetime. */
export const twoLevel: EmitterModel = {
  name: 'two-level',
  summary: 'ground state and exciton; the dipole is unpolarised or circular',
  lines: ['exciton'],
  polarizations: ['all', 'crossed'],
  hasBiexciton: false,
  scheme(spec: EmitterSpec): Scheme {
    return {
      levels: [
        { name: 'g', excitons: 0, offset: 0 },
        { name: 'x', excitons: 1, offset: 0 },
      ],
      transitions: [{ lower: 0, upper: 1, weightH: 1, weightV: 0 }],
      decays: [{ from: 1, to: 0, rate: 1 / spec.lifetime, line: 'exciton', polarization: 'any' }],
      dephasing: spec.dephasing,
      projection: 'full',
      lines: { exciton: 0 },
      twoPhoton: null,
    };
  },
};
