import type { Design, EmitterSpec, FilterSpec, Tone } from '../core/index.js';
import { tone, twoLevelEmitter } from '../test/support.js';

const FIELD = 2 * Math.sqrt(Math.LN2);

const TWO_LEVEL = twoLevelEmitter();

const CASCADE: EmitterSpec = { ...TWO_LEVEL, model: 'cascade', biexcitonLifetime: 250, binding: 2 };

export interface Case {
  readonly name: string;
  readonly design: Design;
}

function make(
  emitter: EmitterSpec,
  reference: 'exciton' | 'two-photon',
  polarization: 'all' | 'h',
  ...tones: Tone[]
): Design {
  return {
    emitter,
    pulse: { reference, tones },
    collection: { line: 'exciton', polarization, efficiency: 1, filter: null },
    laser: null,
    drift: null,
  };
}

const behind = (design: Design, filter: FilterSpec): Design => ({
  ...design,
  collection: { ...design.collection, filter },
});

const D = [
  tone({ fwhm: 2.4 * FIELD, area: 22.65 * Math.PI, detuning: -8 }),
  tone({ fwhm: 3.04 * FIELD, area: 19.29 * Math.PI, detuning: -19.163 }),
];
const E = tone({ fwhm: 10, area: 4.8186 * Math.PI });

const EMITTED: readonly Case[] = [
  { name: 'A: π, 5 ps', design: make(TWO_LEVEL, 'exciton', 'all', tone({})) },
  { name: 'B: 2π, 50 ps', design: make(TWO_LEVEL, 'exciton', 'all', tone({ fwhm: 50, area: 2 * Math.PI })) },
  {
    name: 'C: 5π, 2 ps, GDD 40 ps²',
    design: make(TWO_LEVEL, 'exciton', 'all', tone({ fwhm: 2, area: 5 * Math.PI, gdd: 40 })),
  },
  { name: 'D: two colours', design: make(TWO_LEVEL, 'exciton', 'all', ...D) },
  { name: 'E: cascade, two-photon', design: make(CASCADE, 'two-photon', 'all', E) },
];

/** The emitted cases, and each behind a 20 GHz filter (the cascade's h-polarised exciton line). */
export const CASES: readonly Case[] = [
  ...EMITTED,
  ...EMITTED.slice(0, 4).map(({ name, design }) => ({
    name: `${name}; filtered`,
    design: behind(design, { fwhm: 20, center: 0 }),
  })),
  {
    name: 'E: cascade, h line; filtered',
    design: behind(make(CASCADE, 'two-photon', 'h', E), { fwhm: 20, center: 0 }),
  },
];
